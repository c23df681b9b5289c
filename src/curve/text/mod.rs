//! Tables as text: CSV, C99 and Rust.
//!
//! What is written is self-contained: constant arrays and one function, with no call of any library. The arithmetic is that of
//! [`eval`](super::eval), so that all three give the same bits.

use core::fmt::Write;
use std::string::String;
use std::vec::Vec;

use super::table::{Curve, Data};

use crate::chain::Word;

mod c;
mod csv;
mod rust;

pub use c::c;
pub use csv::csv;
pub use rust::rust;

/// What a table is called and what is said of it.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Page<'a> {
    /// Name of the function: letters, digits and underscores, no digit first; see [`is_name`].
    pub name: &'a str,
    /// Title of the sheet.
    pub title: &'a str,
    /// Name of the channel.
    pub channel: &'a str,
    /// Unit of the readings.
    pub reading_unit: &'a str,
    /// Unit of the results.
    pub unit: &'a str,
    /// The chain in words, and what was fixed or assumed beside it.
    pub lines: &'a [String],
}

/// Steps of a search through so many pieces, without a loop: from the lower end each is taken where the reading is beyond that
/// knot. No step leads beyond the last piece.
fn steps(pieces: usize) -> Vec<usize> {
    let (mut left, mut out) = (pieces, Vec::new());
    while left > 1 {
        let half = left / 2;
        out.push(half);
        left -= half;
    }
    out
}

/// Words of C99, C11 and Rust that no function can have as its name, and names of C's own headers that are used.
const TAKEN: &str = "INT32_MAX INT32_MIN INT64_C NAN Self _ _Alignas _Alignof _Atomic _Bool _Complex _Generic _Imaginary \
    _Noreturn _Static_assert _Thread_local abstract as asm async auto await become bool box break case char \
    const continue crate default do double dyn else enum extern false final float fn for gen goto if impl in \
    inline int int32_t int64_t let long loop macro main match mod move mut override priv pub ref register \
    restrict return self short signed sizeof static struct super switch trait true try type typedef typeof \
    uint32_t uint8_t union unsafe unsigned unsized use virtual void volatile where while yield";

/// Functions of the C99 library (ISO/IEC 9899:1999, 7; from memory), whose names belong to it with a final f or l as well, and
/// names that compilers and C++ give away.
const LIBRARY: &str = "abort abs acos acosh asctime asin asinh atan atan2 atanh atexit atof atoi atol atoll bsearch cabs cacos cacosh \
    calloc carg casin casinh catan catanh cbrt ccos ccosh ceil cexp cimag clearerr clock clog conj copysign cos \
    cosh cpow cproj creal csin csinh csqrt ctan ctanh ctime difftime div erf erfc errno exit exp exp2 expm1 fabs \
    fclose fdim feclearexcept fegetenv fegetexceptflag fegetround feholdexcept feof feraiseexcept ferror fesetenv \
    fesetexceptflag fesetround fetestexcept feupdateenv fflush fgetc fgetpos fgets fgetwc fgetws floor fma fmax \
    fmin fmod fopen fprintf fputc fputs fputwc fputws fread free freopen frexp fscanf fseek fsetpos ftell fwide \
    fwprintf fwrite fwscanf getc getchar getenv gets getwc getwchar gmtime hypot ilogb imaxabs imaxdiv labs ldexp \
    ldiv lgamma llabs lldiv llrint llround localeconv localtime log log10 log1p log2 logb longjmp lrint lround \
    malloc mblen mbrlen mbrtowc mbsinit mbsrtowcs mbstowcs mbtowc mktime modf nan nearbyint nextafter nexttoward \
    perror pow printf putc putchar puts putwc putwchar qsort raise rand realloc remainder remove remquo rename \
    rewind rint round scalbln scalbn scanf setbuf setjmp setlocale setvbuf signal sin sinh snprintf sprintf sqrt \
    srand sscanf swprintf swscanf system tan tanh tgamma time tmpfile tmpnam trunc ungetc ungetwc va_arg va_copy \
    va_end va_start vfprintf vfscanf vfwprintf vfwscanf vprintf vscanf vsnprintf vsprintf vsscanf vswprintf \
    vswscanf vwprintf vwscanf wctob wctomb wctrans wctype wprintf wscanf \
    NULL linux std unix assert delete namespace new operator private protected public template this throw using";

/// Whether the C library may have this name: one of its functions, or one that it keeps for itself (7.26).
fn is_of_the_library(name: &str) -> bool {
    let bare = name.strip_suffix(['f', 'l']).unwrap_or(name);
    let listed = LIBRARY.split(' ').any(|taken| taken == name || (taken == bare && taken.len() > 2));
    let kept = ["str", "mem", "wcs", "is", "to", "ow_"].iter().any(|start| {
        name.strip_prefix(start)
            .is_some_and(|rest| *start == "ow_" || rest.starts_with(|c: char| c.is_ascii_lowercase()))
    });
    listed || kept
}

/// Returns whether C and Rust take this as the name of a function, and the C library has none of it.
#[must_use]
pub fn is_name(name: &str) -> bool {
    let mut letters = name.chars();
    letters.next().is_some_and(|c| c.is_ascii_alphabetic())
        && letters.all(|c| c.is_ascii_alphanumeric() || c == '_')
        && name.len() <= 63
        && !name.contains("__")
        && !TAKEN.split(' ').any(|taken| taken == name)
        && !is_of_the_library(name)
}

/// What stands above every table, in one line each.
fn heading(curve: &Curve, page: &Page<'_>) -> Vec<String> {
    let gap = |unit: &str| if unit.is_empty() { String::new() } else { std::format!(" {unit}") };
    let (unit, reading_unit) = (gap(page.unit), gap(page.reading_unit));
    let mut out = Vec::new();
    let mut say = |line: String| out.push(line);
    say(std::format!("Channel {} as a table: {} from readings.", page.channel, page.unit));
    if !page.title.is_empty() {
        say(std::format!("Sheet: {}", page.title));
    }
    say(std::format!("Made by ohmwright {}.", env!("CARGO_PKG_VERSION")));
    let [low, high] = curve.readings;
    say(std::format!("Readings: {low} to {high}{reading_unit}."));
    let [low, high] = curve.results;
    say(std::format!("Results: {low} to {high}{unit}."));
    say(std::format!("Tolerance asked for: {}{unit}.", curve.tolerance));
    say(std::format!(
        "Proven bound of |table - chain|: {}{unit}, over every reading of the table, rounding of the table and of its arithmetic included.",
        curve.bound
    ));
    say(std::format!("Largest error seen over {} readings: {:.3e}{unit}.", curve.looks, curve.seen));
    let kind = match &curve.data {
        Data::Double(_) => "doubles",
        Data::Single(_) => "single precision",
        Data::Fixed(_) => "32-bit integers",
    };
    let pieces = curve.pieces();
    let s = if pieces == 1 { "" } else { "s" };
    say(std::format!("{pieces} piece{s} of degree {} in {kind}, {} bytes.", curve.degree, curve.bytes()));
    if let Data::Fixed(table) = &curve.data {
        let (r, v) = (table.reading_bits, table.result_bits);
        let (Some(first), Some(last)) = (table.knots.first(), table.knots.last()) else { return out };
        if r == 0 {
            say(std::format!("A reading is a whole number, {first} to {last}."));
        } else {
            say(std::format!(
                "A reading is an integer x{}: x / 2^{r}{reading_unit}, {first} to {last}; rounding it to that is the caller's and not in the bound.",
                q(r)
            ));
        }
        say(std::format!(
            "A result is an integer y{}: y / 2^{v}{unit}, {} to {}.",
            q(v),
            curve.results[0],
            curve.results[1]
        ));
    } else if !matches!(&curve.data, Data::Double(_)) && page.reading_unit != "count" {
        say("Rounding a reading to single precision is the caller's and not in the bound.".into());
    }
    out.extend(page.lines.iter().cloned());
    out.push(
        "Not a protective function: alarms, trips and stop limits stay with the responsible engineer. A word is no value."
            .into(),
    );
    out
}

/// Integer and fraction bits beside the sign, where both are bits of 32.
fn q(fraction: i32) -> String {
    if (0..=31).contains(&fraction) { std::format!(", Q{}.{fraction}", 31 - fraction) } else { String::new() }
}

/// Only what may stand in a comment.
fn plain(line: &str) -> String {
    let line: String = line.chars().map(|c| if c.is_control() { ' ' } else { c }).collect();
    line.replace("*/", "* /").replace("/*", "/ *").replace("??", "? ?")
}

/// Lines of at most so many characters.
fn wrapped(line: &str, width: usize) -> Vec<String> {
    let mut out = Vec::new();
    let mut now = String::new();
    for word in plain(line).split_whitespace() {
        if !now.is_empty() && now.chars().count() + 1 + word.chars().count() > width {
            out.push(core::mem::replace(&mut now, String::from("  ")));
        }
        if !now.is_empty() && now != "  " {
            now.push(' ');
        }
        now.push_str(word);
    }
    out.push(now);
    out
}

/// A number of a table in C and Rust.
trait Literal: Copy {
    fn literal(self) -> String;
}

impl Literal for f64 {
    fn literal(self) -> String {
        std::format!("{self:e}")
    }
}

impl Literal for f32 {
    fn literal(self) -> String {
        std::format!("{self:e}")
    }
}

impl Literal for i32 {
    fn literal(self) -> String {
        std::format!("{self}")
    }
}

/// Words that a table can say, with their numbers: those of the C interface.
const SAID: [Word; 9] = Word::ALL;

/// Numbers in rows of a few, each with `suffix`.
fn rows<T: Literal>(numbers: &[T], each: usize, open: &str, close: &str, suffix: &str) -> String {
    let mut out = String::new();
    for row in numbers.chunks(each) {
        let row: Vec<String> = row.iter().map(|n| n.literal() + suffix).collect();
        let _ = writeln!(out, "    {open}{}{close},", row.join(", "));
    }
    out
}

/// How a language writes numbers and conditions.
struct Language<S, L> {
    suffix: &'static str,
    infinity: &'static str,
    said: S,
    line: L,
}

/// Comparisons with the edges, outermost first; the first word is what is left.
fn edges<T: Literal>(
    edges: &[(T, Word)],
    sign: &str,
    language: &Language<impl Fn(Word) -> String, impl Fn(Option<String>, String) -> String>,
) -> String {
    let Language { suffix, infinity, said, line } = language;
    let mut out = String::new();
    for (edge, word) in edges.iter().skip(1).rev() {
        let edge = match edge.literal().as_str() {
            "inf" => (*infinity).into(),
            "-inf" => std::format!("-{infinity}"),
            number => std::format!("{number}{suffix}"),
        };
        out += &line(Some(std::format!("reading {sign} {edge}")), said(*word));
    }
    out + &line(None, said(edges.first().map_or(Word::OutOfRange, |(_, word)| *word)))
}
