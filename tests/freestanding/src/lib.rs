//! C entries around a chain and its plan, for the link proof that `.ci/no_panic` makes: with the archive of this crate and
//! no libc, the linker keeps only what the entries can reach, and no panic, allocator or std may be in there.
//!
//! Chains and plans come in by pointer, so that nothing about them is known when this is compiled and every kernel stays
//! reachable. An entry that answers with a status gives 0 when all went well.
//!
//! Printing an error or a parameter is outside this proof: the standard formatting of an `f64` carries checks of its own.
//! [`Word::as_str`] is inside.
#![no_std]

use core::ffi::c_void;
use core::slice;

use ohmwright::Error;
use ohmwright::chain::{
    Chain, Columns, Derivative, Element, Inputs, Network, Parameter, Plan, STRAIN_LIMIT, Sides, Word,
};
use ohmwright::distribution::{student_probability, student_quantile};
use ohmwright::platinum::Platinum;
use ohmwright::signal::{Place, Series, Shunt};
use ohmwright::strain::{Grid, Material, Plane, Rosette, Tee};
use ohmwright::thermistor::Thermistor;
use ohmwright::uncertainty::{
    Contribution, Coverage, Interval, Shape, Uncertainty, combine_correlated, conformity, decimals, of_chain, rounded,
    second_order,
};

mod chains;

#[cfg(all(panic = "abort", not(test)))]
#[panic_handler]
fn panicked(_: &core::panic::PanicInfo<'_>) -> ! {
    unsafe extern "C" {
        /// Defined by the C side; the linker drops it unless a panic can be reached.
        fn panic_was_reached() -> !;
    }
    // SAFETY: takes nothing and does not return.
    unsafe { panic_was_reached() }
}

/// One reading with what comes with it, as C lays it out.
#[repr(C)]
pub struct Beside {
    reading: f64,
    supply: f64,
    celsius: f64,
}

impl Beside {
    /// Leads and arms have the temperature of the gauge.
    fn inputs(&self) -> Inputs {
        let Self { reading, supply, celsius } = *self;
        Inputs { reading, supply, celsius, lead_celsius: celsius, arm_celsius: [celsius; 4] }
    }
}

/// The same for columns.
fn columns<'a>(readings: &'a [f64], supplies: &'a [f64], celsius: &'a [f64]) -> Columns<'a> {
    Columns { readings, supplies, celsius, lead_celsius: celsius, arm_celsius: [celsius; 4] }
}

/// A number of a status: 0 done, otherwise which error.
fn status(result: Result<(), Error>) -> i32 {
    match result {
        Ok(()) => 0,
        Err(Error::NotFinite { .. }) => 1,
        Err(Error::OutOfRange { .. }) => 2,
        Err(Error::LengthMismatch { .. }) => 3,
        Err(Error::Missing { .. }) => 4,
        Err(Error::Blind) => 5,
        Err(Error::Unfit { .. }) => 6,
        Err(Error::Flagged(word)) => 16 + word as i32,
        Err(_) => -1,
    }
}

/// Writes the value, or gives the status of the error.
fn put<T>(out: &mut T, result: Result<T, Error>) -> i32 {
    status(result.map(|v| *out = v))
}

/// Bytes that a caller sets aside for a chain and for a plan: the larger of the two.
#[unsafe(no_mangle)]
pub static PROOF_ROOM: usize =
    if size_of::<Chain>() > size_of::<Plan>() { size_of::<Chain>() } else { size_of::<Plan>() };

// ---- what runs for every reading

/// Converts one reading; gives its word.
///
/// # Safety
/// `plan` was filled by [`proof_plan`]; `value` points at a number.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_one(plan: &Plan, inputs: &Beside, value: &mut f64) -> i32 {
    let outcome = plan.one(inputs.inputs());
    *value = outcome.value;
    outcome.word as i32
}

/// Converts `rows` readings; gives how many have no number, or -1 - status.
///
/// # Safety
/// `plan` was filled by [`proof_plan`]; every other pointer is at `rows` numbers, `words` at `rows` words or null.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_slice(
    plan: &Plan,
    readings: *const f64,
    supplies: *const f64,
    celsius: *const f64,
    rows: usize,
    out: *mut f64,
    words: *mut Word,
) -> i64 {
    // SAFETY: the caller vouches for `rows` numbers behind each pointer, and no two overlap.
    let (readings, supplies, celsius, out) = unsafe {
        (
            slice::from_raw_parts(readings, rows),
            slice::from_raw_parts(supplies, rows),
            slice::from_raw_parts(celsius, rows),
            slice::from_raw_parts_mut(out, rows),
        )
    };
    // SAFETY: null, or `rows` words.
    let words = if words.is_null() { None } else { Some(unsafe { slice::from_raw_parts_mut(words, rows) }) };
    match plan.slice(&columns(readings, supplies, celsius), out, words) {
        Ok(batch) => batch.invalid as i64,
        Err(e) => -1 - i64::from(status(Err(e))),
    }
}

/// Converts with columns whose lengths differ: gives the status of that mistake.
///
/// # Safety
/// As [`proof_slice`], with the lengths of readings and results.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_slice_of_lengths(
    plan: &Plan,
    readings: *const f64,
    lengths: &[usize; 4],
    out: *mut f64,
) -> i32 {
    let [rows, supplies, celsius, results] = *lengths;
    // SAFETY: the caller vouches for the lengths.
    let (r, s, t, out) = unsafe {
        (
            slice::from_raw_parts(readings, rows),
            slice::from_raw_parts(readings, supplies),
            slice::from_raw_parts(readings, celsius),
            slice::from_raw_parts_mut(out, results),
        )
    };
    status(plan.slice(&columns(r, s, t), out, None).map(drop))
}

/// Gives the reading of a quantity.
///
/// # Safety
/// `plan` was filled by [`proof_plan`]; `reading` points at a number.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_forward(plan: &Plan, quantity: f64, inputs: &Beside, reading: &mut f64) -> i32 {
    put(reading, plan.forward(quantity, inputs.inputs()))
}

/// Says which columns a plan uses: 1 supply, 2 temperature.
#[unsafe(no_mangle)]
pub extern "C" fn proof_columns(plan: &Plan) -> i32 {
    i32::from(plan.uses_supply()) + 2 * i32::from(plan.uses_temperature())
}

/// Student's t: the quantile of a probability, and the probability of that quantile; ν = ∞ is the normal distribution.
///
/// # Safety
/// `out` is two numbers.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_student(probability: f64, degrees_of_freedom: f64, out: *mut f64) {
    let quantile = student_quantile(probability, degrees_of_freedom);
    let back = student_probability(quantile, degrees_of_freedom);
    // SAFETY: the caller's promise.
    unsafe {
        out.write(quantile);
        out.add(1).write(back);
    }
}

/// Gives the length of the text of a word; -1 for a number that is no word.
#[unsafe(no_mangle)]
pub extern "C" fn proof_word(number: i32) -> i64 {
    Word::ALL.iter().find(|w| **w as i32 == number).map_or(-1, |w| w.as_str().len() as i64)
}

// ---- what runs once for every chain

/// Fills `chain` with one of the chains of this crate; -1 past the last.
///
/// # Safety
/// `chain` has room for [`PROOF_ROOM`] bytes, aligned for a number.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_chain(kind: u32, chain: *mut c_void) -> i32 {
    match chains::of(kind) {
        Some(made) => {
            // SAFETY: the caller vouches for room and alignment.
            unsafe { chain.cast::<Chain>().write(made) };
            0
        }
        None => -1,
    }
}

/// Lowers a chain to a plan.
///
/// # Safety
/// `chain` was filled by [`proof_chain`]; `plan` has room for [`PROOF_ROOM`] bytes.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_plan(chain: &Chain, plan: *mut c_void) -> i32 {
    status(chain.plan().map(|made| {
        // SAFETY: the caller vouches for room and alignment.
        unsafe { plan.cast::<Plan>().write(made) };
    }))
}

/// Sums the squares of all derivatives at one state; gives how many there are, or -1 - status.
///
/// # Safety
/// `chain` was filled by [`proof_chain`]; `squares` points at a number.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_derivatives(chain: &Chain, quantity: f64, inputs: &Beside, squares: &mut f64) -> i64 {
    let mut count = 0;
    *squares = 0.0;
    match chain.derivatives(quantity, &inputs.inputs(), |_, d| {
        count += 1;
        *squares += d * d;
    }) {
        Ok(()) => count,
        Err(e) => -1 - i64::from(status(Err(e))),
    }
}

/// Gives one derivative: with respect to the reading, or to the gauge factor.
///
/// # Safety
/// As [`proof_derivatives`].
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_derivative(
    chain: &Chain,
    of_reading: bool,
    quantity: f64,
    inputs: &Beside,
    value: &mut f64,
) -> i32 {
    let which = if of_reading { Derivative::Reading } else { Derivative::Parameter(Parameter::GaugeFactor) };
    put(value, chain.derivative(which, quantity, &inputs.inputs()))
}

/// Gives the reading of a quantity by the chain itself.
///
/// # Safety
/// `chain` was filled by [`proof_chain`]; `reading` points at a number.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_chain_forward(chain: &Chain, quantity: f64, inputs: &Beside, reading: &mut f64) -> i32 {
    let Inputs { supply, celsius, lead_celsius, arm_celsius, .. } = inputs.inputs();
    let sides = Sides {
        supply: Some(supply),
        celsius: Some(celsius),
        lead_celsius: Some(lead_celsius),
        arm_celsius: arm_celsius.map(Some),
    };
    put(reading, chain.forward(quantity, &sides))
}

/// Gives output over supply of a reading.
///
/// # Safety
/// `chain` was filled by [`proof_chain`]; `output` points at a number.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_network_output(chain: &Chain, inputs: &Beside, output: &mut f64) -> i32 {
    put(output, chain.network_output(&inputs.inputs()))
}

/// Converts by the thermometer's own face: ohms to °C when `back`, otherwise °C to ohms.
///
/// # Safety
/// `chain` was filled by [`proof_chain`]; `out` points at a number.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_thermometer(chain: &Chain, back: bool, x: f64, out: &mut f64) -> i32 {
    put(
        out,
        match chain.element {
            Element::Platinum(k) => {
                Platinum::new(k).and_then(|p| if back { p.celsius_from_ohms(x) } else { p.ohms_from_celsius(x) })
            }
            Element::Thermistor(law) => {
                Thermistor::new(law).and_then(|t| if back { t.celsius_from_ohms(x) } else { t.ohms_from_celsius(x) })
            }
            _ => Err(Error::Blind),
        },
    )
}

/// Converts by the typed face of a gauge bridge, there and back: volts or V/V to strain when `back`.
///
/// # Safety
/// `chain` was filled by [`proof_chain`]; `out` points at a number.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_strain(chain: &Chain, back: bool, x: f64, out: &mut f64) -> i32 {
    use ohmwright::Strain;
    use uom::si::{electric_potential::volt, f64::ElectricPotential, f64::Ratio, ratio::ratio};

    let (Network::Bridge(bridge), Element::Gauge { gauge, zero, .. }) = (chain.network, chain.element) else {
        return status(Err(Error::Blind));
    };
    let mut plain = Chain::strain(bridge, gauge).zeroed(zero);
    plain.element = Element::Gauge { gauge, zero, limit: STRAIN_LIMIT };
    put(
        out,
        if back {
            plain.strain_meter().and_then(|m| m.strain_from_ratio(Ratio::new::<ratio>(x))).map(|e| e.strain())
        } else {
            plain
                .volts_at(ElectricPotential::new::<volt>(1.0))
                .strain_meter()
                .and_then(|m| m.output(Strain::from_strain(x)))
                .map(|v| v.get::<volt>())
        },
    )
}

/// Gives what a shunt across arm 1 simulates, and the preferred resistor next to the one that simulates it exactly.
///
/// # Safety
/// `chain` was filled by [`proof_chain`]; `out` points at two numbers.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_shunt(
    chain: &Chain,
    at_gauge: bool,
    ohms: f64,
    inputs: &Beside,
    out: &mut [f64; 2],
) -> i32 {
    let place = if at_gauge { Place::Gauge } else { Place::Instrument };
    let inputs = inputs.inputs();
    put(
        out,
        chain.simulated(Shunt { arm: 1, ohms, place }, 0.0, &inputs).and_then(|quantity| {
            let exact = chain.shunt_for(1, place, quantity, &inputs)?;
            Ok([quantity, Series::E96.nearest(exact)?])
        }),
    )
}

/// Gives the principal strains and equivalent stress of a rosette at three angles, of a tee when there is no third.
#[unsafe(no_mangle)]
pub extern "C" fn proof_rosette(
    degrees: &[f64; 3],
    sensitivity: f64,
    indicated: &[f64; 3],
    tee: bool,
    out: &mut [f64; 3],
) -> i32 {
    let grid = |degrees| Grid { degrees, sensitivity };
    let [first, ..] = *degrees;
    let [one, two, _] = *indicated;
    let state = if tee {
        Tee::new(grid(first), sensitivity).map(|tee| tee.state([one, two]))
    } else {
        Rosette::new(degrees.map(grid)).map(|rosette| rosette.state(*indicated))
    };
    put(
        out,
        state.and_then(|state| {
            let stress = Material::new(210e9, 0.3)?.stress(&state, Plane::Stress);
            let principal = state.principal();
            Ok([principal.larger, principal.degrees.unwrap_or(0.0), stress.von_mises() + stress.tresca()])
        }),
    )
}

/// Gives standard and expanded uncertainty of a result whose reading is known to a half-width, its two digits, the
/// probability that it is below the result plus U, and a correlated and a second-order sum.
///
/// # Safety
/// `chain` was filled by [`proof_chain`]; `out` points at six numbers.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_uncertainty(
    chain: &Chain,
    quantity: f64,
    inputs: &Beside,
    half_width: f64,
    out: &mut [f64; 6],
) -> i32 {
    let combined = of_chain(chain, quantity, &inputs.inputs(), |which| match which {
        Derivative::Reading => Some(Uncertainty::Rectangular { half_width }),
        Derivative::Parameter(Parameter::OpenLoopGain) => Some(Uncertainty::Standard { standard: half_width }),
        _ => None,
    });
    put(
        out,
        combined.and_then(|combined| {
            let u = combined.standard;
            let wide = combined.expanded(Coverage::Probability(0.95))?.expanded;
            let limits = Interval { low: f64::NEG_INFINITY, high: quantity + wide };
            let met = conformity(quantity, &combined, limits, wide)?.conforming;
            let part = |cause| Contribution {
                sensitivity: 1.0,
                standard: u,
                degrees_of_freedom: 9.0,
                shape: Shape::Normal,
                cause,
                pool: 0,
            };
            let both = combine_correlated(&[part(0), part(1)], |_, _| 0.5);
            let few = both.expanded(Coverage::Factor(2.0))?.probability;
            let bend = |_: usize, by: f64, slot: &mut [f64]| {
                slot.fill(1.0 + by);
                Ok(())
            };
            let order = second_order(bend, [&mut [0.0; 2], &mut [0.0; 2], &mut [0.0; 2]])?;
            let digits = decimals(wide).map_or(0.0, |places| rounded(wide, places));
            Ok([u, wide, digits, met, both.standard + few, order.standard()])
        }),
    )
}

/// The parts of a table in all its kinds of numbers, as C lays them out.
#[repr(C)]
pub struct Table {
    doubles: [f64; 9],
    singles: [f32; 9],
    integers: [i32; 9],
    shifts: [u8; 2],
    degree: usize,
}

/// Runs a table of two pieces in doubles, single precision and integers: three knots and then coefficients, with one edge on
/// either side; gives the words, one a decimal digit.
///
/// # Safety
/// `table` is a table; `out` points at three numbers.
#[unsafe(no_mangle)]
pub unsafe extern "C" fn proof_curve(table: &Table, reading: f64, out: &mut [f64; 3]) -> i32 {
    use ohmwright::curve::eval::{Double, Fixed, Single};
    let Table { degree, .. } = *table;
    let (Some((knots, coefficients)), Some((single_knots, singles)), Some((integer_knots, integers))) =
        (table.doubles.split_at_checked(3), table.singles.split_at_checked(3), table.integers.split_at_checked(3))
    else {
        return -1;
    };
    let double = Double {
        knots,
        coefficients,
        degree,
        below: &[(-1.0, Word::Short), (-9.0, Word::Saturated)],
        above: &[(3.0, Word::Open)],
    };
    let single = Single { knots: single_knots, coefficients: singles, degree, below: &[], above: &[(3.0, Word::Open)] };
    let fixed = Fixed {
        knots: integer_knots,
        coefficients: integers,
        shifts: &table.shifts,
        degree,
        below: &[(-1, Word::Short), (-9, Word::Saturated)],
        above: &[],
    };
    let results = [
        double.value(reading),
        single.value(reading as f32).map(f64::from),
        fixed.value(reading as i32).map(f64::from),
    ];
    let mut words = 0;
    for (slot, result) in out.iter_mut().zip(results) {
        words = 10 * words + result.map_or_else(|word| word as i32, |_| 0);
        *slot = result.unwrap_or(f64::NAN);
    }
    words
}

/// The positive control: an index that nobody checks.
#[cfg(feature = "bad")]
#[unsafe(no_mangle)]
pub extern "C" fn proof_bad(index: usize) -> f64 {
    static TABLE: [f64; 4] = [1.0, 2.0, 3.0, 4.0];
    TABLE[index]
}
