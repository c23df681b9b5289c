//! Thermistors against printed curves and measured data.
//!
//! - Amphenol Thermometrics, Sensor Temperature Resistance Curves - Reference Guide, Rev. C (2014), p. 5, material type
//!   1: ratio R/R₂₅ and %/K (data/temperature/thermistor_material1_table.csv), β per range
//!   (data/temperature/thermistor_material1_beta.csv).
//! - NIST/ITL Statistical Reference Datasets, MGH10: resistances of one thermistor and the certified least-squares fit
//!   (data/temperature/thermistor_mgh10_data.csv, thermistor_mgh10_certified.csv).
//!
//! The library's laws have two and three constants, the guide's curve four: the three-constant law goes through three
//! rows of the table, and the others must follow within the rounding of the print plus the error of the form, which is
//! stated beside the check.

mod support;

use ohmwright::chain::{Chain, Derivative, Element, Inputs, Network};
use ohmwright::thermistor::{Beta, Law, SteinhartHart, Thermistor};
use support::report::Report;
use support::table::{Row, Table};

const ICE: f64 = 273.15;

fn beta_law(r25_ohms: f64, beta_kelvin: f64, range_celsius: [f64; 2]) -> Thermistor {
    Thermistor::new(Law::Beta(Beta { r25_ohms, beta_kelvin, range_celsius })).unwrap()
}

fn inverse_kelvin(celsius: f64) -> f64 {
    1.0 / (celsius + ICE)
}

/// a, b, c of 1/T = a + b L + c L³ through three points (L, 1/T).
fn through(points: [(f64, f64); 3]) -> [f64; 3] {
    let [(l1, y1), (l2, y2), (l3, y3)] = points;
    // divided differences: of L³ over (L₁, L₂) it is L₁² + L₁ L₂ + L₂², of that over L₃ − L₂ it is L₁ + L₂ + L₃
    let (g2, g3) = ((y2 - y1) / (l2 - l1), (y3 - y1) / (l3 - l1));
    let c = (g3 - g2) / (l3 - l2) / (l1 + l2 + l3);
    let b = g2 - c * (l1 * l1 + l1 * l2 + l2 * l2);
    [y1 - l1 * (b + l1 * l1 * c), b, c]
}

/// A measured or printed point: °C, Ω, and the half digit of the print as 1/K of 1/T.
#[derive(Clone, Copy)]
struct Point {
    celsius: f64,
    ohms: f64,
    half: f64,
}

impl Point {
    fn log(&self) -> f64 {
        libm::log(self.ohms)
    }
}

struct Fit {
    law: SteinhartHart,
    points: [Point; 3],
}

impl Fit {
    fn new(points: [Point; 3], range_celsius: [f64; 2]) -> Self {
        let [a, b, c] = through(points.map(|p| (p.log(), inverse_kelvin(p.celsius))));
        Self { law: SteinhartHart { a, b, c, range_celsius }, points }
    }

    /// What the rounding of a printed point and of the three points of the fit is worth there, K.
    fn rounding(&self, at: &Point) -> f64 {
        let l = at.log();
        let mut sum = at.half;
        for (i, p) in self.points.iter().enumerate() {
            // the law is linear in the three 1/T: weight of this one
            let unit = [0, 1, 2].map(|j| (self.points[j].log(), f64::from(i == j)));
            let [a, b, c] = through(unit);
            sum += (a + l * (b + l * l * c)).abs() * p.half;
        }
        let kelvin = at.celsius + ICE;
        kelvin * kelvin * sum
    }

    /// What the rounding of the three points is worth in the slope there, as a share of it: 1/T = a + b L + c L³ has the
    /// slope b + 3 c L², and dT/dL is −T² times that.
    fn slope_rounding(&self, at: &Point) -> f64 {
        let l = at.log();
        let mut sum = 0.0;
        for (i, p) in self.points.iter().enumerate() {
            let unit = [0, 1, 2].map(|j| (self.points[j].log(), f64::from(i == j)));
            let [_, b, c] = through(unit);
            sum += (b + 3.0 * l * l * c).abs() * p.half;
        }
        sum / (self.law.b + 3.0 * l * l * self.law.c) + 2.0 * self.rounding(at) / (at.celsius + ICE)
    }
}

/// Half a digit of a resistance as 1/K of 1/T, where the resistance falls by `percent` %/K: ΔT/T².
fn half_as_inverse_kelvin(celsius: f64, half: f64, ohms: f64, percent: f64) -> f64 {
    let kelvin = celsius + ICE;
    half / ohms / (percent.abs() / 100.0) / (kelvin * kelvin)
}

/// The guide prints ratios; the element of these tests has 10 kΩ at 25 °C.
const R25: f64 = 10_000.0;

fn material1(row: &Row<'_>) -> Point {
    let (celsius, ratio) = (row.number("t_C"), row.number("ratio"));
    let half = half_as_inverse_kelvin(celsius, row.half_digit("ratio"), ratio, row.number("alpha_pct_per_K"));
    Point { celsius, ohms: R25 * ratio, half }
}

/// Error of the form a + b L + c L³ through the exact curve at 0, 50 and 100 °C, K: the first four-term form of the guide
/// (ln(R/R₂₅) = A + B/T + C/T² + D/T³, in the header of the table), 10 kΩ, 50-digit arithmetic. At most 3.5 mK from
/// 0 to 130 °C, and growing outside the three points.
fn form_error(celsius: f64) -> f64 {
    match celsius {
        t if t >= 0.0 => 0.0035,
        t if t >= -10.0 => 0.0077,
        t if t >= -20.0 => 0.0227,
        t if t >= -30.0 => 0.0490,
        _ => 0.0920,
    }
}

#[test]
fn three_constants_through_three_rows() {
    let table = Table::read("data/temperature/thermistor_material1_table.csv");
    let at = |t: f64| material1(&table.rows().find(|r| r.number("t_C") == t).unwrap());
    let fit = Fit::new([at(0.0), at(50.0), at(100.0)], [-41.0, 140.0]);
    let thermistor = Thermistor::new(Law::SteinhartHart(fit.law)).unwrap();
    let chain = Chain::new(Network::Resistance { leads: None }, Element::Thermistor(Law::SteinhartHart(fit.law)));
    let plan = chain.plan().unwrap();
    let mut report = Report::new("Thermometrics guide, material type 1: 1/T = a + b L + c L^3 through 0, 50, 100 degC");
    for row in table.rows() {
        let (t, p) = (row.number("t_C"), material1(&row));
        let allowed = if fit.points.iter().any(|q| q.celsius == t) {
            // the law goes through these: the allowed error of the inverse
            1e-9
        } else {
            fit.rounding(&p) + form_error(t)
        };
        let celsius = thermistor.celsius_from_ohms(p.ohms).unwrap();
        report.check("celsius", row.at(), p.ohms, t, celsius, allowed);
        report.equal("chain, same bits", row.at(), p.ohms, celsius, plan.one(p.ohms).number().unwrap());
        // forwards: that many kelvin, as ohms
        let percent = row.number("alpha_pct_per_K");
        let ohms = thermistor.ohms_from_celsius(t).unwrap();
        // 1 %: the printed %/K is good to 0.2 % and changes by 0.1 % over that tenth of a kelvin
        let worth = p.ohms * percent.abs() / 100.0 * allowed * 1.01;
        report.check("ohms", row.at(), t, p.ohms, ohms, worth);
        // %/K of the law: dR/dT/R, printed to 0.01 (−6.6 stands for −6.60). Below 0 °C the form's own error of slope is
        // 0.006 to 0.036 %/K, from 0 °C 0.0026 at most (as above, 50-digit arithmetic)
        let kelvin_per_ohm = chain.derivative(Derivative::Reading, t, &Inputs::default()).unwrap();
        let ours = 100.0 / kelvin_per_ohm / ohms;
        let form = match t {
            t if t >= 0.0 => 0.0026,
            t if t >= -10.0 => 0.0059,
            t if t >= -20.0 => 0.0116,
            t if t >= -30.0 => 0.0209,
            _ => 0.0357,
        };
        report.check("%/K", row.at(), t, percent, ours, 0.005 + form + fit.slope_rounding(&p) * percent.abs());
    }
    report.equal("rows", "the table", "rows", 18, table.rows().count());
    report.finish();
}

/// β = ln(R₁/R₂)/(1/T₁ − 1/T₂): the law with the printed β gives the printed ratio.
#[test]
fn two_point_beta() {
    let table = Table::read("data/temperature/thermistor_material1_beta.csv");
    let curve = Table::read("data/temperature/thermistor_material1_table.csv");
    let mut report = Report::new("Thermometrics guide, material type 1: beta");
    for row in table.rows() {
        let (t1, t2) = (row.number("t1_C"), row.number("t2_C"));
        let (ratio, beta) = (row.number("ratio"), row.number("beta_K"));
        let step = inverse_kelvin(t1) - inverse_kelvin(t2);
        let law = beta_law(R25, beta, [-50.0, 150.0]);
        let ohms = |t| law.ohms_from_celsius(t).unwrap();
        // β is printed to 1 K: half of it is ratio · 0.5 K · (1/T₁ − 1/T₂)
        let allowed = row.half_digit("ratio") + ratio * row.half_digit("beta_K") * step;
        let input = format!("{t1}..{t2}");
        report.check("ratio of the resistances", row.at(), &input, ratio, ohms(t1) / ohms(t2), allowed);
        // backwards: from the resistance at t1 divided by the printed ratio to t2, in kelvin
        let kelvin = (t2 + ICE) * (t2 + ICE);
        let t = law.celsius_from_ohms(ohms(t1) / ratio).unwrap();
        report.check("celsius", row.at(), &input, t2, t, kelvin * allowed / ratio / beta * 1.01);
        report.check("R25", row.at(), &input, R25, ohms(25.0), 1e-12 * R25);
        // β from the rows of the curve, where it has both: 1 is its ratio at 25 °C
        let printed = |t: f64| {
            if t == 25.0 {
                return Some((1.0, 0.0));
            }
            let found = curve.rows().find(|r| r.number("t_C") == t)?;
            Some((found.number("ratio"), found.half_digit("ratio") / found.number("ratio")))
        };
        if let (Some((a, da)), Some((b, db))) = (printed(t1), printed(t2)) {
            let law = beta_law(R25, libm::log(a / b) / step, [-50.0, 150.0]);
            let back = law.ohms_from_celsius(t1).unwrap() / law.ohms_from_celsius(t2).unwrap();
            report.check("ratio from the curve", row.at(), &input, ratio, back, {
                row.half_digit("ratio") + ratio * (da + db)
            });
        }
    }
    report.equal("rows", "the table", "rows", 3, table.rows().count());
    // two constants do not make the curve: 25..50 °C and 25..100 °C differ by 55 K of β
    let (first, last) = (beta_law(R25, 3937.0, [-50.0, 150.0]), beta_law(R25, 3992.0, [-50.0, 150.0]));
    let apart = first.celsius_from_ohms(R25 / 14.75).unwrap() - last.celsius_from_ohms(R25 / 14.75).unwrap();
    report.equal("beta depends on its range", "the table", apart, true, apart > 1.0);
    report.finish();
}

struct Mgh10 {
    certified: [f64; 3],
    deviation: [f64; 3],
    freedom: f64,
    data: Vec<(f64, f64)>,
}

fn mgh10() -> Mgh10 {
    let table = Table::read("data/temperature/thermistor_mgh10_certified.csv");
    let cell = |name: &str, column: &str| {
        table.rows().find(|r| r.text("name") == name).map(|r| r.number(column)).unwrap_or_else(|| panic!("{name}"))
    };
    let data = Table::read("data/temperature/thermistor_mgh10_data.csv");
    Mgh10 {
        certified: ["b1", "b2", "b3"].map(|n| cell(n, "certified")),
        deviation: ["b1", "b2", "b3"].map(|n| cell(n, "std_dev")),
        freedom: cell("degrees_of_freedom", "certified"),
        data: data.rows().map(|r| (r.number("x"), r.number("y"))).collect(),
    }
}

/// y = b₁ exp[b₂/(x + b₃)] is the two-constant law with another zero of temperature: at t = x + b₃ − 273.15 it is
/// R₂₅ exp[b₂ (1/T − 1/298.15)] with R₂₅ = b₁ exp(b₂/298.15). At the certified values the sum of squares is least, and
/// its curvature gives the certified standard deviations.
#[test]
fn certified_fit_of_a_thermistor() {
    let Mgh10 { certified: [b1, b2, b3], deviation, freedom, data } = mgh10();
    let law = beta_law(b1 * libm::exp(b2 / 298.15), b2, [100.0, 220.0]);
    let mut report = Report::new("NIST StRD MGH10: thermistor");
    report.equal("points", "the table", "degrees of freedom", freedom, data.len() as f64 - 3.0);
    let mut jacobian = Vec::new();
    let mut residual = Vec::new();
    for &(x, y) in &data {
        let t = x + b3 - ICE;
        let model = law.ohms_from_celsius(t).unwrap();
        report.check("there and back", "law", x, t, law.celsius_from_ohms(model).unwrap(), 1e-9);
        let z = x + b3;
        // derivatives by ln b₁, b₂, b₃
        jacobian.push([model, model / z, -model * b2 / (z * z)]);
        residual.push(y - model);
    }
    let dot = |a: &dyn Fn(usize) -> f64, b: &dyn Fn(usize) -> f64| (0..data.len()).map(|i| a(i) * b(i)).sum::<f64>();
    let r = |i: usize| residual[i];
    let squares = dot(&r, &r);
    for (j, name) in ["b1", "b2", "b3"].into_iter().enumerate() {
        let column = |i: usize| jacobian[i][j];
        // the residual stands square to every column. Eleven certified digits of b₂ and b₃ leave 3e-5 ohm of the model
        // against a residual of 9 ohm
        let cosine = dot(&column, &r) / (squares * dot(&column, &column)).sqrt();
        report.check("least squares", name, "cosine", 0.0, cosine, 1e-5);
    }
    let normal = [0, 1, 2].map(|j| [0, 1, 2].map(|k| dot(&|i| jacobian[i][j], &|i| jacobian[i][k])));
    let [variance1, variance2, variance3] = diagonal_of_inverse(normal).map(|v| v * squares / freedom);
    let ours = [b1 * variance1.sqrt(), variance2.sqrt(), variance3.sqrt()];
    for ((name, certified), ours) in ["b1", "b2", "b3"].into_iter().zip(deviation).zip(ours) {
        // the normal equations lose nine of the sixteen digits
        report.check("standard deviation", name, "certified", certified, ours, 1e-6 * certified);
    }
    report.finish();
}

/// Diagonal of the inverse of a symmetric 3 × 3 matrix, by cofactors.
fn diagonal_of_inverse(m: [[f64; 3]; 3]) -> [f64; 3] {
    let minor = |i: usize, j: usize, k: usize, l: usize| m[i][k] * m[j][l] - m[i][l] * m[j][k];
    let det = m[0][0] * minor(1, 2, 1, 2) - m[0][1] * minor(1, 2, 0, 2) + m[0][2] * minor(1, 2, 0, 1);
    [minor(1, 2, 1, 2) / det, minor(0, 2, 0, 2) / det, minor(0, 1, 0, 1) / det]
}

/// The same measured points by the law that thermometry uses: through 50, 85 and 125 °C, with 273.15.
#[test]
fn measured_points_between_three_of_them() {
    let data = mgh10().data;
    // printed to 10 ohm from 10 kohm up and to 1 ohm below; the slope is that of the certified fit, −b₂/(x + b₃)²
    let Mgh10 { certified: [_, b2, b3], .. } = mgh10();
    let point = |(x, y): (f64, f64)| {
        let percent = 100.0 * b2 / ((x + b3) * (x + b3));
        Point { celsius: x, ohms: y, half: half_as_inverse_kelvin(x, if y > 1e4 { 5.0 } else { 0.5 }, y, percent) }
    };
    let at = |t: f64| point(*data.iter().find(|p| p.0 == t).unwrap());
    let fit = Fit::new([at(50.0), at(85.0), at(125.0)], [49.0, 126.0]);
    let thermistor = Thermistor::new(Law::SteinhartHart(fit.law)).unwrap();
    let mut report = Report::new("NIST StRD MGH10: 1/T = a + b L + c L^3 through 50, 85, 125 degC");
    for p in data.iter().map(|p| point(*p)) {
        // nothing but the rounding of the print
        let allowed = fit.rounding(&p);
        let t = thermistor.celsius_from_ohms(p.ohms).unwrap();
        report.check("celsius", "data/temperature/thermistor_mgh10_data.csv", p.ohms, p.celsius, t, allowed);
    }
    // b₃ is 345 and not 273.15: two constants cannot follow these points, 250 ohm and more off near 70 °C
    let (cold, hot) = (at(50.0), at(125.0));
    let step = inverse_kelvin(50.0) - inverse_kelvin(125.0);
    let beta = libm::log(cold.ohms / hot.ohms) / step;
    let r25 = cold.ohms * libm::exp(beta * (inverse_kelvin(25.0) - inverse_kelvin(50.0)));
    let law = beta_law(r25, beta, [20.0, 130.0]);
    report.check("two constants, end", "125 degC", "ohms", hot.ohms, law.ohms_from_celsius(125.0).unwrap(), 1e-8);
    let off = law.ohms_from_celsius(70.0).unwrap() - at(70.0).ohms;
    report.equal("two constants do not fit", "70 degC", off, true, off < -250.0);
    report.finish();
}
