//! The C interface: models in storage of the caller, no heap, no panic, the same bits as in Rust.
//!
//! src/capi/ohmwright.h is made from this file. Every function checks its pointers and the model behind them, and answers with a
//! status: 0 for a result that can be trusted, a word above 0 (the numbers of [`Word`]), or an error below 0. Numbers are
//! only ever added.
#![allow(unsafe_code, reason = "a C interface: raw pointers come in, each checked before it is used")]

use core::ffi::{c_char, c_void};
use core::mem::{MaybeUninit, align_of, size_of};
use core::ptr;
use core::slice;

use crate::Error;
use crate::chain::{Columns, Inputs, Plan, Way, Word};
use crate::image::{FieldError, Fields, Image, ImageError};

/// Version of this interface: a caller compiled against another one must not go on.
pub const OW_ABI: u32 = 1;

/// Most steps of any loop that ends when it has arrived, in every conversion either way, whatever the reading; most kinds of
/// model take none or a fixed few (DEVELOPERS.md lists them).
pub const OW_MOST_STEPS: i32 = 32;
const _: () = assert!(OW_MOST_STEPS as usize == crate::math::MOST_STEPS);

/// A word: nothing was recorded. No number, as with all words but the last two.
pub const OW_WORD_MISSING: i32 = 1;
/// A word: the text of a recording is no number; no function of this interface gives it.
pub const OW_WORD_UNREADABLE: i32 = 2;
/// A word: the converter or amplifier stands at an end of its range.
pub const OW_WORD_SATURATED: i32 = 3;
/// A word: the circuit is broken.
pub const OW_WORD_OPEN: i32 = 4;
/// A word: the circuit is shorted.
pub const OW_WORD_SHORT: i32 = 5;
/// A word: the result lies outside the law or its stated range.
pub const OW_WORD_OUT_OF_RANGE: i32 = 6;
/// A word beside a number: two values explain the reading, and one of them is given.
pub const OW_WORD_AMBIGUOUS: i32 = 7;
/// A word beside a number: the law was used outside its range, because the model asks for it.
pub const OW_WORD_EXTRAPOLATED: i32 = 8;
/// A pointer is null that must not be.
pub const OW_NULL: i32 = -1;
/// A pointer is not aligned as the size functions say.
pub const OW_MISALIGNED: i32 = -2;
/// Storage is smaller than the size functions say.
pub const OW_TOO_SMALL: i32 = -3;
/// The storage holds no model, or no draft.
pub const OW_NO_MODEL: i32 = -4;
/// The image has a version that this build does not know.
pub const OW_VERSION: i32 = -5;
/// The bytes are no image, or are damaged.
pub const OW_CORRUPT: i32 = -6;
/// The image has no chain of this number.
pub const OW_INDEX: i32 = -7;
/// No field has this number, or the value stands for no choice.
pub const OW_FIELD: i32 = -8;
/// Something that the model needs is missing.
pub const OW_MISSING: i32 = -9;
/// A value is outside its range, or not finite.
pub const OW_VALUE: i32 = -10;
/// The stages of the chain do not fit together.
pub const OW_UNFIT: i32 = -11;
/// The bridge cannot see the wanted strain.
pub const OW_BLIND: i32 = -12;
/// The lengths of columns differ, or are too long.
pub const OW_LENGTH: i32 = -13;
/// Something else is wrong.
pub const OW_OTHER: i32 = -99;

/// What comes with one reading.
#[repr(C)]
#[derive(Clone, Copy, Debug)]
pub struct OwInputs {
    /// The reading, in the unit of the model.
    pub reading: f64,
    /// The supply, in the unit of its column.
    pub supply: f64,
    /// Temperature of the gauge, or of a thermocouple's reference junction, °C.
    pub celsius: f64,
    /// Temperature of the leads, °C.
    pub lead_celsius: f64,
    /// Temperatures of arms 1-4, °C.
    pub arm_celsius: [f64; 4],
}

/// The same in single precision.
#[repr(C)]
#[derive(Clone, Copy, Debug)]
pub struct OwInputsF32 {
    /// The reading.
    pub reading: f32,
    /// The supply.
    pub supply: f32,
    /// Temperature of the gauge or reference junction, °C.
    pub celsius: f32,
    /// Temperature of the leads, °C.
    pub lead_celsius: f32,
    /// Temperatures of arms 1-4, °C.
    pub arm_celsius: [f32; 4],
}

/// Columns of readings; those are null that the model does not use.
#[repr(C)]
#[derive(Clone, Copy, Debug)]
pub struct OwColumns {
    /// The readings.
    pub readings: *const f64,
    /// Their supplies.
    pub supplies: *const f64,
    /// Temperatures of the gauge or reference junction, °C.
    pub celsius: *const f64,
    /// Temperatures of the leads, °C.
    pub lead_celsius: *const f64,
    /// Temperatures of arms 1-4, °C.
    pub arm_celsius: [*const f64; 4],
}

/// First word of a model: the way that its readings take, and the version of this interface, both told by one compare.
/// (The numbers lie apart, or a compiler would make a table of them, and the way with the fewest instructions to spare is the lowest.)
const CUBIC: u32 = 0x0f57_4d00 | OW_ABI;
const LINE: u32 = 0x4f57_4e00 | OW_ABI;
const OTHER: u32 = 0x6f57_4f00 | OW_ABI;
/// First word of a draft.
const DRAFT: u32 = 0x4f57_4400 | OW_ABI;

/// What the storage of a model holds.
#[repr(C)]
struct Model {
    word: u32,
    plan: Plan,
}

/// What the storage of a draft holds.
#[repr(C)]
struct Draft {
    word: u32,
    fields: Fields,
}

fn of_error(error: Error) -> i32 {
    match error {
        Error::NotFinite { .. } | Error::OutOfRange { .. } => OW_VALUE,
        Error::LengthMismatch { .. } => OW_LENGTH,
        Error::Missing { .. } => OW_MISSING,
        Error::Blind => OW_BLIND,
        Error::Unfit { .. } => OW_UNFIT,
        Error::Flagged(word) => word as i32,
    }
}

fn of_field(error: FieldError) -> i32 {
    match error {
        FieldError::Missing(_) => OW_MISSING,
        FieldError::Unknown(_) | FieldError::NoChoice(_) => OW_FIELD,
    }
}

fn of_image(error: ImageError) -> i32 {
    match error {
        ImageError::NoImage | ImageError::Corrupt => OW_CORRUPT,
        ImageError::Version(_) => OW_VERSION,
        ImageError::Index => OW_INDEX,
        ImageError::Field(error) => of_field(error),
    }
}

/// A pointer that may be read as `T`.
fn readable<T>(p: *const T) -> Result<(), i32> {
    if p.is_null() {
        Err(OW_NULL)
    } else if !p.addr().is_multiple_of(align_of::<T>()) {
        Err(OW_MISALIGNED)
    } else {
        Ok(())
    }
}

/// Storage of the caller for a `T`.
fn room<T>(p: *mut c_void, size: usize) -> Result<*mut MaybeUninit<T>, i32> {
    let p = p.cast::<MaybeUninit<T>>();
    readable(p)?;
    if size < size_of::<T>() { Err(OW_TOO_SMALL) } else { Ok(p) }
}

/// What the first word of a model says; `None` for storage that holds none.
#[inline(always)]
const fn way(word: u32) -> Option<Way> {
    match word {
        OTHER => Some(Way::Other),
        LINE => Some(Way::Line),
        CUBIC => Some(Way::Cubic),
        _ => None,
    }
}

impl Model {
    /// Writes a model, part by part: as a whole it would stand on the stack once more.
    ///
    /// # Safety
    /// `room` is aligned, and large enough, and the caller's to write.
    #[inline(always)]
    unsafe fn put(room: *mut MaybeUninit<Self>, plan: Plan) {
        let word = match plan.way() {
            Way::Cubic => CUBIC,
            Way::Line => LINE,
            Way::Other => OTHER,
        };
        let model = room.cast::<Self>();
        // SAFETY: by this function's contract; both parts of the model are written
        unsafe {
            ptr::addr_of_mut!((*model).plan).write(plan);
            ptr::addr_of_mut!((*model).word).write(word);
        }
    }
}

/// The model behind a pointer.
///
/// # Safety
/// `p` is null, or points at storage of at least the size of a model.
unsafe fn model<'a>(p: *const c_void) -> Result<&'a Model, i32> {
    let p = p.cast::<Model>();
    readable(p)?;
    // SAFETY: not null, aligned, and large enough by the contract; the first word tells whether the rest was written
    if way(unsafe { ptr::addr_of!((*p).word).read() }).is_none() {
        return Err(OW_NO_MODEL);
    }
    // SAFETY: a model was written there, all of it
    Ok(unsafe { &*p })
}

/// The draft behind a pointer.
///
/// # Safety
/// As [`model`], for a draft that nobody else uses meanwhile.
unsafe fn draft<'a>(p: *mut c_void) -> Result<&'a mut Draft, i32> {
    let p = p.cast::<Draft>();
    readable(p)?;
    // SAFETY: as above
    if unsafe { ptr::addr_of!((*p).word).read() } != DRAFT {
        return Err(OW_NO_MODEL);
    }
    // SAFETY: a draft was written there, all of it
    Ok(unsafe { &mut *p })
}

fn status(result: Result<i32, i32>) -> i32 {
    match result {
        Ok(word) | Err(word) => word,
    }
}

impl OwInputs {
    fn inputs(&self) -> Inputs {
        let Self { reading, supply, celsius, lead_celsius, arm_celsius } = *self;
        Inputs { reading, supply, celsius, lead_celsius, arm_celsius }
    }
}

/// Returns the version of this interface; compare it with `OW_ABI` of the header.
#[unsafe(no_mangle)]
pub extern "C" fn ow_abi() -> u32 {
    OW_ABI
}

/// Returns the version of the library as major · 10000 + minor · 100 + patch.
#[unsafe(no_mangle)]
pub extern "C" fn ow_version() -> u32 {
    const fn number(text: &str) -> u32 {
        let mut bytes = text.as_bytes();
        let mut value = 0;
        while let [digit, rest @ ..] = bytes {
            value = value * 10 + (*digit - b'0') as u32;
            bytes = rest;
        }
        value
    }
    const VERSION: u32 = number(env!("CARGO_PKG_VERSION_MAJOR")) * 10_000
        + number(env!("CARGO_PKG_VERSION_MINOR")) * 100
        + number(env!("CARGO_PKG_VERSION_PATCH"));
    VERSION
}

/// Returns the bytes that a model needs.
#[unsafe(no_mangle)]
pub extern "C" fn ow_model_size() -> usize {
    size_of::<Model>()
}

/// Returns the alignment that a model needs, in bytes.
#[unsafe(no_mangle)]
pub extern "C" fn ow_model_align() -> usize {
    align_of::<Model>()
}

/// Returns the bytes that a draft needs.
#[unsafe(no_mangle)]
pub extern "C" fn ow_draft_size() -> usize {
    size_of::<Draft>()
}

/// Returns the alignment that a draft needs, in bytes.
#[unsafe(no_mangle)]
pub extern "C" fn ow_draft_align() -> usize {
    align_of::<Draft>()
}

/// Returns a status in words: static text, never null.
#[unsafe(no_mangle)]
pub extern "C" fn ow_status_str(status: i32) -> *const c_char {
    let text = match status {
        OW_NULL => c"null pointer",
        OW_MISALIGNED => c"pointer not aligned",
        OW_TOO_SMALL => c"storage too small",
        OW_NO_MODEL => c"no model in this storage",
        OW_VERSION => c"unknown version of the image",
        OW_CORRUPT => c"no image, or a damaged one",
        OW_INDEX => c"no chain of this number",
        OW_FIELD => c"unknown field or choice",
        OW_MISSING => c"something is missing",
        OW_VALUE => c"value outside its range",
        OW_UNFIT => c"stages do not fit together",
        OW_BLIND => c"the bridge cannot see the strain",
        OW_LENGTH => c"lengths differ",
        OW_OTHER => c"error",
        0 => c"good",
        1 => c"missing",
        2 => c"unreadable",
        3 => c"saturated",
        4 => c"open",
        5 => c"short",
        6 => c"out-of-range",
        7 => c"ambiguous",
        8 => c"extrapolated",
        _ => c"unknown status",
    };
    text.as_ptr()
}

/// Begins a draft: a chain without any value.
///
/// - `storage`: of at least `ow_draft_size` bytes, aligned to `ow_draft_align`.
///
/// # Safety
/// `storage` points at `size` bytes that may be written.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_draft_begin(storage: *mut c_void, size: usize) -> i32 {
    status(room::<Draft>(storage, size).map(|p| {
        // SAFETY: aligned and large enough, and the caller's to write
        unsafe { (*p).write(Draft { word: DRAFT, fields: Fields::new() }) };
        0
    }))
}

/// Sets a field of a draft; the numbers are `OW_FIELD_…` of the header.
///
/// # Safety
/// `storage` is null or points at storage of a draft.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_draft_set(storage: *mut c_void, field: u32, value: f64) -> i32 {
    // SAFETY: by this function's contract
    let set = unsafe { draft(storage) }.and_then(|draft| {
        let field = u16::try_from(field).map_err(|_| OW_FIELD)?;
        draft.fields.set(field, value).map_err(of_field)
    });
    status(set.map(|()| 0))
}

/// Says what keeps a draft from being a model: returns what `ow_model_make` would, and writes in `field` the number of the
/// field that is missing or wrong, -1 where none is or where it is no single one.
///
/// # Safety
/// `from` is null or points at storage of a draft, `field` at a number that may be written.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_draft_check(from: *const c_void, field: *mut i32) -> i32 {
    status((|| {
        readable(field)?;
        // SAFETY: by this function's contract
        let draft = unsafe { draft(from.cast_mut()) }?;
        let chain = draft.fields.chain();
        let blamed = match chain {
            Err(FieldError::Missing(n) | FieldError::Unknown(n) | FieldError::NoChoice(n)) => i32::from(n),
            Ok(_) => -1,
        };
        // SAFETY: not null and aligned, and the caller's to write
        unsafe { field.write(blamed) };
        chain.map_err(of_field)?.plan().map_err(of_error)?;
        Ok(0)
    })())
}

/// Makes a model of a draft, which stays as it is and may be used again.
///
/// # Safety
/// `storage` points at `size` bytes that may be written; `from` is null or points at storage of a draft.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_model_make(storage: *mut c_void, size: usize, from: *const c_void) -> i32 {
    status((|| {
        let p = room::<Model>(storage, size)?;
        // SAFETY: by this function's contract
        let draft = unsafe { draft(from.cast_mut()) }?;
        let plan = draft.fields.chain().map_err(of_field)?.plan().map_err(of_error)?;
        // SAFETY: aligned and large enough, and the caller's to write
        unsafe { Model::put(p, plan) };
        Ok(0)
    })())
}

/// Returns how many chains an image holds, or an error below 0.
///
/// # Safety
/// `image` is null or points at `length` bytes that may be read.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_image_count(image: *const u8, length: usize) -> i32 {
    // SAFETY: by this function's contract
    status(unsafe { bytes(image, length) }.and_then(|bytes| {
        let image = Image::new(bytes).map_err(of_image)?;
        i32::try_from(image.len()).map_err(|_| OW_OTHER)
    }))
}

/// Makes a model of a chain of an image.
///
/// # Safety
/// `storage` points at `size` bytes that may be written; `image` is null or points at `length` bytes that may be read.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_model_load(
    storage: *mut c_void,
    size: usize,
    image: *const u8,
    length: usize,
    index: usize,
) -> i32 {
    status((|| {
        let p = room::<Model>(storage, size)?;
        // SAFETY: by this function's contract
        let image = Image::new(unsafe { bytes(image, length) }?).map_err(of_image)?;
        let plan = image.entry(index).map_err(of_image)?.chain.plan().map_err(of_error)?;
        // SAFETY: aligned and large enough, and the caller's to write
        unsafe { Model::put(p, plan) };
        Ok(0)
    })())
}

/// Copies the name (`unit` = 0) or the unit of the result (`unit` = 1) of a chain of an image, with a final zero, cut to
/// `size` bytes; returns its whole length without the zero, or an error below 0.
///
/// # Safety
/// `image` is null or points at `length` bytes that may be read; `text` is null or points at `size` bytes that may be
/// written.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_image_text(
    image: *const u8,
    length: usize,
    index: usize,
    unit: i32,
    text: *mut c_char,
    size: usize,
) -> i32 {
    status((|| {
        // SAFETY: by this function's contract
        let texts = Image::new(unsafe { bytes(image, length) }?).and_then(|i| i.texts(index)).map_err(of_image)?;
        let whole = match unit {
            0 => texts.0.as_bytes(),
            1 => texts.1.as_bytes(),
            _ => return Err(OW_FIELD),
        };
        if size > 0 {
            readable(text)?;
            // SAFETY: not null, and `size` bytes by this function's contract
            let out = unsafe { slice::from_raw_parts_mut(text.cast::<u8>(), size) };
            let cut = whole.len().min(size - 1);
            for (slot, byte) in out.iter_mut().zip(whole.iter().take(cut).chain(&[0])) {
                *slot = *byte;
            }
        }
        i32::try_from(whole.len()).map_err(|_| OW_OTHER)
    })())
}

/// # Safety
/// `p` is null or points at `length` bytes that may be read.
unsafe fn bytes<'a>(p: *const u8, length: usize) -> Result<&'a [u8], i32> {
    readable(p)?;
    if isize::try_from(length).is_err() {
        return Err(OW_LENGTH);
    }
    // SAFETY: not null, of a length that a slice can have, and readable by the contract
    Ok(unsafe { slice::from_raw_parts(p, length) })
}

/// A column of `rows` numbers; empty where it is null.
///
/// # Safety
/// `p` is null or points at `rows` numbers that may be read.
unsafe fn column<'a>(p: *const f64, rows: usize) -> Result<&'a [f64], i32> {
    if p.is_null() {
        return Ok(&[]);
    }
    readable(p)?;
    // SAFETY: not null, aligned, and readable by the contract; the caller has checked the length
    Ok(unsafe { slice::from_raw_parts(p, rows) })
}

fn rows_fit(rows: usize) -> Result<(), i32> {
    match rows.checked_mul(size_of::<f64>()) {
        Some(bytes) if isize::try_from(bytes).is_ok() => Ok(()),
        _ => Err(OW_LENGTH),
    }
}

/// Converts one reading: the result stands in `out`, NaN where a word above 0 says that there is none.
///
/// A status below 0 is an error of the caller: nothing is written then, so that `out` is what it was.
///
/// Each call checks that no pointer is null or misaligned, and that the first word of the storage is that of a model of this
/// version of the interface. The rest of the model was checked when it was made and is trusted: storage that was damaged
/// since is not found out.
///
/// # Safety
/// `storage` is null or points at storage of a model, `inputs` at inputs that may be read, `out` at a number that may be
/// written.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_convert(storage: *const c_void, inputs: *const OwInputs, out: *mut f64) -> i32 {
    let model = storage.cast::<Model>();
    if usable(model, inputs, out)
        // SAFETY: not null and aligned; the first word tells whether the rest was written
        && let Some(way) = way(unsafe { ptr::addr_of!((*model).word).read() })
        // SAFETY: a model was written there, and inputs by this function's contract
        && let Some(value) = unsafe { (*model).plan.short(way, (*inputs).reading, (*inputs).celsius) }
    {
        // SAFETY: not null and aligned, and the caller's to write
        unsafe { out.write(value) };
        return 0;
    }
    // SAFETY: the same contract
    unsafe { convert(storage, inputs, out) }
}

/// Whether all three can be used, in as few steps as it takes; which of them cannot is found out afterwards.
#[inline(always)]
fn usable<A, B, C>(a: *const A, b: *const B, c: *const C) -> bool {
    const { assert!(align_of::<A>() <= align_of::<Model>() && align_of::<B>() <= align_of::<Model>()) };
    let odd = (a.addr() | b.addr() | c.addr()) & (align_of::<Model>() - 1);
    odd == 0 && !a.is_null() && !b.is_null() && !c.is_null()
}

/// The whole way, with every check.
///
/// # Safety
/// As [`ow_convert`].
#[cold]
#[inline(never)]
unsafe fn convert(storage: *const c_void, inputs: *const OwInputs, out: *mut f64) -> i32 {
    status((|| {
        // SAFETY: by this function's contract
        let model = unsafe { model(storage) }?;
        readable(inputs)?;
        readable(out)?;
        // SAFETY: checked just now
        let outcome = model.plan.whole(&unsafe { &*inputs }.inputs());
        // SAFETY: checked just now
        unsafe { out.write(outcome.value) };
        Ok(outcome.word as i32)
    })())
}

/// The same in single precision: computed in double precision from the inputs as they are, and rounded once at the end, so
/// that the result is within half a unit in the last place of the single-precision format of what [`ow_convert`] gives.
///
/// # Safety
/// As [`ow_convert`].
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_convert_f32(storage: *const c_void, inputs: *const OwInputsF32, out: *mut f32) -> i32 {
    status((|| {
        // SAFETY: by this function's contract
        let model = unsafe { model(storage) }?;
        readable(inputs)?;
        readable(out)?;
        // SAFETY: checked just now
        let OwInputsF32 { reading, supply, celsius, lead_celsius, arm_celsius } = unsafe { *inputs };
        let outcome = model.plan.one(Inputs {
            reading: f64::from(reading),
            supply: f64::from(supply),
            celsius: f64::from(celsius),
            lead_celsius: f64::from(lead_celsius),
            arm_celsius: arm_celsius.map(f64::from),
        });
        // SAFETY: checked just now
        unsafe { out.write(outcome.value as f32) };
        Ok(outcome.word as i32)
    })())
}

/// Returns the reading that a quantity gives, in `out`: the other way round. A word beside the reading is what converting it
/// gives beside its number; a quantity or a temperature that is no number is an error below 0.
///
/// # Safety
/// As [`ow_convert`].
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_expect(
    storage: *const c_void,
    quantity: f64,
    inputs: *const OwInputs,
    out: *mut f64,
) -> i32 {
    status((|| {
        // SAFETY: by this function's contract
        let model = unsafe { model(storage) }?;
        readable(inputs)?;
        readable(out)?;
        // SAFETY: checked just now
        let inputs = unsafe { &*inputs }.inputs();
        let reading = match model.plan.forward(quantity, inputs) {
            Ok(reading) => reading,
            Err(Error::Flagged(word)) => {
                // SAFETY: checked just now
                unsafe { out.write(f64::NAN) };
                return Ok(word as i32);
            }
            Err(error) => return Err(of_error(error)),
        };
        // SAFETY: checked just now
        unsafe { out.write(reading) };
        // beside a reading stands what converting it would say beside its number
        let word = model.plan.whole(&Inputs { reading, ..inputs }).word;
        Ok(if word.has_number() { word as i32 } else { 0 })
    })())
}

/// Converts `rows` readings: results in `out`, NaN where there is none, and a word for each in `words` unless that is null;
/// `invalid`, unless null, counts the results that are none. Returns 0, or an error below 0, after which nothing was written.
/// With no rows the other pointers are not looked at.
///
/// # Safety
/// `storage` is null or points at storage of a model, `columns` at columns of `rows` numbers that may be read, `out` at as
/// many numbers and `words` at as many bytes that may be written; none of those that are written overlaps any other.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_convert_slice(
    storage: *const c_void,
    columns: *const OwColumns,
    rows: usize,
    out: *mut f64,
    words: *mut u8,
    invalid: *mut usize,
) -> i32 {
    status((|| {
        // SAFETY: by this function's contract
        let model = unsafe { model(storage) }?;
        if !invalid.is_null() {
            readable(invalid)?;
        }
        if rows == 0 {
            if !invalid.is_null() {
                // SAFETY: not null, aligned, and the caller's to write
                unsafe { invalid.write(0) };
            }
            return Ok(0);
        }
        readable(columns)?;
        rows_fit(rows)?;
        // SAFETY: checked just now
        let c = unsafe { &*columns };
        readable(c.readings)?;
        readable(out)?;
        let [a1, a2, a3, a4] = c.arm_celsius;
        let besides = [c.supplies, c.celsius, c.lead_celsius, a1, a2, a3, a4];
        if uses(&model.plan).zip(besides).any(|(used, column)| used && column.is_null()) {
            return Err(OW_NULL);
        }
        // SAFETY: by this function's contract
        let columns = unsafe {
            Columns {
                readings: column(c.readings, rows)?,
                supplies: column(c.supplies, rows)?,
                celsius: column(c.celsius, rows)?,
                lead_celsius: column(c.lead_celsius, rows)?,
                arm_celsius: [column(a1, rows)?, column(a2, rows)?, column(a3, rows)?, column(a4, rows)?],
            }
        };
        // SAFETY: not null, aligned, `rows` numbers by the contract
        let out = unsafe { slice::from_raw_parts_mut(out, rows) };
        let words = if words.is_null() {
            None
        } else {
            // SAFETY: `rows` bytes by the contract, and every byte is room for a word; those that are there are not read
            let bytes = unsafe { slice::from_raw_parts_mut(words, rows) };
            bytes.fill(Word::Good as u8);
            // SAFETY: a word is one byte, and each now holds one
            Some(unsafe { slice::from_raw_parts_mut(bytes.as_mut_ptr().cast::<Word>(), rows) })
        };
        let batch = model.plan.slice(&columns, out, words).map_err(of_error)?;
        if !invalid.is_null() {
            // SAFETY: checked above
            unsafe { invalid.write(batch.invalid) };
        }
        Ok(0)
    })())
}

/// Returns which columns a model uses: 1 supplies, 2 temperature of the gauge or reference junction, 4 temperature of the
/// leads, 8, 16, 32, 64 temperatures of arms 1-4, added; or an error below 0.
///
/// # Safety
/// `storage` is null or points at storage of a model.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn ow_model_uses(storage: *const c_void) -> i32 {
    // SAFETY: by this function's contract
    status(
        unsafe { model(storage) }
            .map(|model| uses(&model.plan).enumerate().map(|(n, used)| i32::from(used) << n).sum()),
    )
}

/// Whether a plan uses supplies, temperatures, temperatures of the leads, and of arms 1-4.
fn uses(plan: &Plan) -> impl Iterator<Item = bool> {
    let first = [plan.uses_supply(), plan.uses_temperature(), plan.uses_lead_temperature()];
    first.into_iter().chain(plan.uses_arm_temperatures())
}

/// What the positive control of the link proof must find: an index that nobody checks.
#[cfg(control)]
#[unsafe(no_mangle)]
#[allow(clippy::indexing_slicing, reason = "the one function that may panic, in no build but the control's")]
pub extern "C" fn ow_control(index: usize) -> u8 {
    static TABLE: [u8; 3] = [1, 2, 3];
    TABLE[index]
}

/// A library without std needs somebody to call when it panics; nothing here can, which the link proof shows: what this calls
/// is defined by nobody, and a program in which it could be reached does not link.
#[cfg(all(freestanding, not(feature = "std"), not(test)))]
#[panic_handler]
fn panicked(_: &core::panic::PanicInfo<'_>) -> ! {
    unsafe extern "C" {
        fn ow_panic_was_reached() -> !;
    }
    // SAFETY: takes nothing and does not return
    unsafe { ow_panic_was_reached() }
}
