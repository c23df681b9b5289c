//! `fit`: a sensor's curve from calibration points.

use ohmwright::fit::{
    self as fits, Coverage, Curve, FittedTemperature, Fourth, Inverse, Statistics, Subrange, ThermistorForm,
};
use ohmwright::platinum::its90::Deviation;
use ohmwright::sheet::Sheet;
use ohmwright::thermistor::{Law, Thermistor};

use crate::args::{
    Fit, FitIts90, FitPlatinum, FitPoints, FitThermalOutput, FitThermistor, FitTransducer, Gives, Model, TermC,
};
use crate::failure::Failure;
use crate::fit_points::{Role, Table, ratio_exponent};
use crate::fit_report::{Answer, Report, all_digits, bare, list};

pub(crate) fn run(args: &Fit) -> Result<(), Failure> {
    match &args.model {
        Model::Platinum(a) => platinum(a),
        Model::Thermistor(a) => thermistor(a),
        Model::Transducer(a) => transducer(a),
        Model::ThermalOutput(a) => thermal_output(a),
        Model::Its90(a) => its90(a),
    }
}

const FIRST_ORDER: &str = "interval to first order";
const EXACT: &str = "exact interval";
const BAND: &str = "interval of the curve";
const PREDICTION: &str = "interval of a reading";

/// A resistance that an option states.
fn ohms(option: &str, text: Option<&String>) -> Result<Option<f64>, Failure> {
    text.map(|text| Sheet::resistance(text)).transpose().map_err(|e| Failure::error(format!("{option}: {e}")))
}

/// `["-50 degC", "150 degC"]`.
fn range([low, high]: [f64; 2], unit: &str) -> String {
    let gap = if unit.is_empty() { "" } else { " " };
    format!("[\"{}{gap}{unit}\", \"{}{gap}{unit}\"]", all_digits(low), all_digits(high))
}

/// How intervals are wanted; the uncertainty of a reading is one of y.
fn coverage(args: &FitPoints, table: &Table) -> Result<Coverage, Failure> {
    let reading_uncertainty = args.reading_uncertainty.as_ref().map(|text| table.typed(1, text)).transpose()?;
    Ok(Coverage { probability: args.coverage, repeats: args.repeats, reading_uncertainty })
}

fn asked(table: &Table, side: usize, value: f64) -> String {
    let (what, unit) = (if side == 0 { "at" } else { "reading" }, table.unit(side));
    format!("{what} {} {unit}", all_digits(value)).trim_end().into()
}

/// The answer of an inverse reading.
fn inverse(table: &Table, reading: f64, found: &Inverse) -> Answer {
    Answer {
        asked: asked(table, 1, reading),
        value: found.x,
        unit: table.unit(0).into(),
        standard_uncertainty: found.standard_uncertainty,
        coverage_factor: found.coverage_factor,
        intervals: vec![(FIRST_ORDER, found.handbook), (EXACT, found.exact)],
    }
}

/// The answer of a form that gives temperature itself.
fn direct(table: &Table, reading: f64, found: &FittedTemperature) -> Answer {
    Answer {
        asked: asked(table, 1, reading),
        value: found.celsius,
        unit: "degC".into(),
        standard_uncertainty: found.standard_uncertainty,
        coverage_factor: found.coverage_factor,
        intervals: vec![(BAND, found.band), (PREDICTION, found.prediction)],
    }
}

/// The curve and its band at x, for regressions over x and y themselves.
fn at(table: &Table, curve: &Curve, args: &FitPoints) -> Result<Vec<Answer>, Failure> {
    args.at
        .iter()
        .map(|text| {
            let x = table.typed(0, text)?;
            let [low, high] = curve.range();
            if x < low || x > high {
                return Err(Failure::error(format!(
                    "--at {text}: the points reach from {} to {} {}, and nothing is extrapolated",
                    all_digits(low),
                    all_digits(high),
                    table.unit(0)
                )));
            }
            let band = curve.band(x, args.coverage).map_err(|e| Failure::error(e.to_string()))?;
            Ok(Answer {
                asked: asked(table, 0, x),
                value: curve.at(x),
                unit: table.unit(1).into(),
                standard_uncertainty: curve.standard_uncertainty(x),
                coverage_factor: curve.coverage_factor(args.coverage).map_err(|e| Failure::error(e.to_string()))?,
                intervals: vec![(BAND, band)],
            })
        })
        .collect()
}

/// Inverse readings, for regressions over x and y themselves.
fn readings(table: &Table, curve: &Curve, args: &FitPoints) -> Result<Vec<Answer>, Failure> {
    let coverage = coverage(args, table)?;
    args.reading
        .iter()
        .map(|text| {
            let y = table.typed(1, text)?;
            let found = curve.inverse(y, &coverage).map_err(|e| Failure::error(format!("--reading {text}: {e}")))?;
            Ok(inverse(table, y, &found))
        })
        .collect()
}

/// Residuals of a regression over x and y themselves, in the unit of y and in that of x.
fn residuals(report: &mut Report, table: &Table, curve: &Curve, along: &str) {
    let unit =
        |side: usize| if table.unit(side).is_empty() { String::new() } else { format!(" ({})", table.unit(side)) };
    report.heads = vec![
        table.header(0),
        table.header(1),
        format!("fitted{}", unit(1)),
        format!("residual{}", unit(1)),
        format!("residual{along}"),
        "leverage".into(),
    ];
    report.rows = curve
        .residuals()
        .iter()
        .map(|r| vec![r.x, r.y, r.fitted, r.residual, r.residual / curve.slope(r.x), r.leverage])
        .collect();
    report.scatter.1 = table.unit(1).into();
}

fn platinum(args: &FitPlatinum) -> Result<(), Failure> {
    let table = Table::read(&args.common, [Role::Temperature, Role::Resistance])?;
    let fourth = match args.c {
        TermC::Auto => Fourth::Auto,
        TermC::Fit => Fourth::Fit,
        TermC::Zero => Fourth::Zero,
    };
    let r0 = ohms("--r0", args.r0.as_ref())?;
    let fit = fits::platinum(&table.points(), r0, fourth).map_err(|e| table.failure(&e))?;
    let equation = "R = R0 [1 + A t + B t^2 + C (t - 100 degC) t^3], C for t < 0 degC alone; t in degC (ITS-90)";
    let mut report = Report::new("platinum", table.file(), equation, &fit.curve, &args.common);
    if let Some(r0) = r0 {
        report.notes.push(format!("R0 held at {} ohm", all_digits(r0)));
    }
    report.notes.push(fit.note.clone());
    residuals(&mut report, &table, &fit.curve, " (K)");
    report.answers = readings(&table, &fit.curve, &args.common)?;
    report.answers.extend(at(&table, &fit.curve, &args.common)?);
    let k = fit.coefficients;
    report.fragment = Some(format!(
        "platinum = {{ r0 = \"{} ohm\", a = {}, b = {}, c = {}, range = {}{} }}",
        all_digits(k.r0_ohms),
        bare(k.a),
        bare(k.b),
        bare(k.c),
        range(k.range_celsius, "degC"),
        report.covariance_keys(0, 4)
    ));
    report.print(&args.common)
}

/// The resistance of the point nearest to 25 °C.
fn nearest_to_25(table: &Table) -> f64 {
    let distance = |t: &f64| (t - 25.0).abs();
    let points = table.x.iter().zip(&table.y);
    points.min_by(|a, b| distance(a.0).total_cmp(&distance(b.0))).map_or(f64::NAN, |(_, r)| *r)
}

fn thermistor(args: &FitThermistor) -> Result<(), Failure> {
    let table = Table::read(&args.common, [Role::Temperature, Role::Resistance])?;
    if args.terms == 3 && args.reference.is_some() {
        return Err(Failure::error(
            "--reference belongs to --terms 4: the forms of three terms refer to no resistance",
        ));
    }
    let stated = ohms("--reference", args.reference.as_ref())?;
    let reference_ohms = stated.unwrap_or_else(|| nearest_to_25(&table));
    let (form, equation) = match (args.terms, args.gives) {
        (3, Gives::Resistance) => return vogel(args, &table),
        (3, _) => (ThermistorForm::SteinhartHart, "1/T = a + b L + c L^3, L = ln(R/ohm), T in K"),
        (_, Gives::Temperature) => (
            ThermistorForm::ReciprocalOfTemperature { reference_ohms },
            "1/T = a + b L + c L^2 + d L^3, L = ln(R/reference), T in K",
        ),
        (_, Gives::Resistance) => {
            (ThermistorForm::LogarithmOfRatio { reference_ohms }, "ln(R/reference) = A + B/T + C/T^2 + D/T^3, T in K")
        }
    };
    let fit = fits::thermistor(&table.points(), form).map_err(|e| table.failure(&e))?;
    let mut report = Report::new("thermistor", table.file(), equation, &fit.curve, &args.common);
    if args.terms == 4 {
        let why = if stated.is_some() { "as stated" } else { "the point nearest to 25 degC" };
        report.notes.push(format!("reference {} ohm, {why}", all_digits(reference_ohms)));
    }
    report.notes.push("compare temperatures, never coefficients: these hang together".into());
    report.scatter = (fit.residual_standard_deviation_kelvin(), "K".into());
    report.heads =
        vec![table.header(0), table.header(1), "fitted (degC)".into(), "residual (K)".into(), "leverage".into()];
    let points = table.x.iter().zip(&table.y).zip(fit.kelvin.iter().zip(fit.curve.residuals()));
    report.rows = points.map(|((t, r), (off, res))| vec![*t, *r, t + off, *off, res.leverage]).collect();

    let coverage = coverage(&args.common, &table)?;
    let answer = |text: &str, r: f64| fit.temperature(r, &coverage).map_err(|e| Failure::error(format!("{text}: {e}")));
    for text in &args.common.reading {
        let r = table.typed(1, text)?;
        report.answers.push(direct(&table, r, &answer(&format!("--reading {text}"), r)?));
    }
    for text in &args.common.at {
        let t = table.typed(0, text)?;
        let law = Thermistor::new(fit.law).map_err(|e| Failure::error(e.to_string()))?;
        let r = law.ohms_from_celsius(t).map_err(|e| Failure::error(format!("--at {text}: {e}")))?;
        let found = answer(&format!("--at {text}"), r)?;
        report.answers.push(Answer {
            asked: format!("{}, where the resistance is {} ohm", asked(&table, 0, t), all_digits(r)),
            intervals: vec![(BAND, found.band)],
            ..direct(&table, r, &found)
        });
    }
    let [low_high, reference] = match fit.law {
        Law::LogarithmOfRatio(k) => [range(k.range_celsius, "degC"), format!("{} ohm", all_digits(k.reference_ohms))],
        Law::ReciprocalOfTemperature(k) => {
            [range(k.range_celsius, "degC"), format!("{} ohm", all_digits(k.reference_ohms))]
        }
        _ => [range(fit.law.range_celsius(), "degC"), String::new()],
    };
    let keys = report.covariance_keys(0, usize::from(args.terms));
    report.fragment = match fit.law {
        Law::SteinhartHart(k) => {
            Some(format!("thermistor = {{ steinhart_hart = {}, range = {low_high}{keys} }}", list([k.a, k.b, k.c])))
        }
        Law::LogarithmOfRatio(k) => Some(format!(
            "thermistor = {{ reference = \"{reference}\", ratio_terms = {}, range = {low_high}{keys} }}",
            list([k.a, k.b, k.c, k.d])
        )),
        Law::ReciprocalOfTemperature(k) => Some(format!(
            "thermistor = {{ reference = \"{reference}\", reciprocal_terms = {}, range = {low_high}{keys} }}",
            list([k.a, k.b, k.c, k.d])
        )),
        _ => None,
    };
    report.print(&args.common)
}

/// Three terms that give the resistance: R = b₁ exp(b₂/(t + b₃)).
fn vogel(args: &FitThermistor, table: &Table) -> Result<(), Failure> {
    let common = &args.common;
    if !common.reading.is_empty() || !common.at.is_empty() {
        return Err(Failure::error("--reading and --at: this form serves to compare; take one that a sheet knows"));
    }
    let points = table.points();
    if points.uncertainty != fits::Uncertainty::None {
        return Err(Failure::error(format!("{}: this form takes no uncertainties of points", table.file())));
    }
    let fit = fits::vogel(&points, None).map_err(|e| table.failure(&e))?.fit;
    let [_, b2, b3] = fit.coefficients;
    let covariance: Vec<Vec<f64>> = fit.covariance.iter().map(|row| row.to_vec()).collect();
    let u = fit.standard_uncertainties;
    let names = [("b1", "ohm"), ("b2", "K"), ("b3", "K")];
    let mut report = Report {
        model: "thermistor",
        file: table.file().into(),
        equation: "R = b1 exp(b2/(t + b3)), t in degC".into(),
        notes: vec!["no sheet takes this form: it serves to compare".into()],
        coefficients: names
            .iter()
            .zip(fit.coefficients.iter().zip(u))
            .map(|((name, unit), (value, u))| fits::Coefficient {
                name: (*name).into(),
                unit: (*unit).into(),
                value: *value,
                standard_uncertainty: u,
            })
            .collect(),
        correlation: covariance
            .iter()
            .zip(u)
            .map(|(row, a)| row.iter().zip(u).map(|(c, b)| c / (a * b)).collect())
            .collect(),
        covariance,
        statistics: Statistics {
            points: table.x.len(),
            degrees_of_freedom: fit.degrees_of_freedom,
            residual_standard_deviation: fit.residual_standard_deviation,
            stated: false,
            condition: fit.condition,
            coverage_degrees_of_freedom: fit.degrees_of_freedom as f64,
        },
        scatter: (fit.residual_standard_deviation, "ohm".into()),
        heads: vec![
            table.header(0),
            table.header(1),
            "fitted (ohm)".into(),
            "residual (ohm)".into(),
            "residual (K)".into(),
        ],
        rows: Vec::new(),
        answers: Vec::new(),
        probability: common.coverage,
        fragment: None,
        on_the_curve: false,
        reading_known: false,
    };
    for ((t, r), residual) in table.x.iter().zip(&table.y).zip(&fit.residuals) {
        let fitted = r - residual;
        // dR/dt = −R b₂/(t + b₃)²
        let slope = -fitted * b2 / ((t + b3) * (t + b3));
        report.rows.push(vec![*t, *r, fitted, *residual, residual / slope]);
    }
    report.print(common)
}

/// `output = a0 + a1 load + a2 load^2`.
fn polynomial(gives: &str, of: &str, from: usize, to: usize) -> String {
    let terms: Vec<String> = (from..=to)
        .map(|k| match k {
            0 => "a0".into(),
            1 => format!("a1 {of}"),
            k => format!("a{k} {of}^{k}"),
        })
        .collect();
    format!("{gives} = {}", terms.join(" + "))
}

fn transducer(args: &FitTransducer) -> Result<(), Failure> {
    let table = Table::read(&args.common, [Role::Load, Role::Output])?;
    let degree = usize::from(args.degree);
    let fit = fits::transducer(&table.points(), degree, args.through_zero).map_err(|e| table.failure(&e))?;
    let [load, output] = &table.units;
    let equation = polynomial("output", "load", usize::from(args.through_zero), degree);
    let mut report = Report::new("transducer", table.file(), &equation, &fit.curve, &args.common);
    for c in &mut report.coefficients {
        let power = c.name.trim_start_matches('a');
        c.unit = match power {
            "0" => output.clone(),
            "1" => format!("{output}/{load}"),
            _ => format!("{output}/{load}^{power}"),
        };
        if load.is_empty() || output.is_empty() {
            c.unit.clear();
        }
    }
    let along = if load.is_empty() { " (load)".to_string() } else { format!(" ({load})") };
    residuals(&mut report, &table, &fit.curve, &along);
    report.answers = readings(&table, &fit.curve, &args.common)?;
    report.answers.extend(at(&table, &fit.curve, &args.common)?);
    if !args.through_zero {
        report.notes.push(
            "a0 is the output without load: a channel with this polynomial takes no zero beside it; for one that does, take the \
             output without load off the points and fit --through-zero"
                .into(),
        );
    }
    if ratio_exponent(output).is_some() && !load.is_empty() {
        let coefficients = fit.coefficients.into_iter().take(degree + 1);
        report.fragment = Some(format!(
            "transducer = {{ polynomial = {}, in = \"{load}\", gives = \"{output}\", range = {}{} }}",
            list(coefficients),
            range(fit.range, load),
            report.covariance_keys(usize::from(args.through_zero), degree + 1)
        ));
    } else {
        report.notes.push(format!(
            "a sheet takes an output in V/V, mV/V or uV/V of a load with a unit, not '{output}' of '{load}'"
        ));
    }
    report.print(&args.common)
}

fn thermal_output(args: &FitThermalOutput) -> Result<(), Failure> {
    let table = Table::read(&args.common, [Role::Temperature, Role::Strain])?;
    if !args.common.reading.is_empty() {
        return Err(Failure::error("--reading: thermal output is not read backwards; --at gives it at a temperature"));
    }
    let fit = fits::thermal_output(&table.points(), args.degree.map(usize::from), args.gauge_factor)
        .map_err(|e| table.failure(&e))?;
    let equation = format!("{}, T in degC", polynomial("thermal output", "T", 0, fit.degree));
    let mut report = Report::new("thermal output", table.file(), &equation, &fit.curve, &args.common);
    report.notes.push(fit.note.clone());
    residuals(&mut report, &table, &fit.curve, " (K)");
    // a thermal output is level somewhere: along the temperature nothing can be said
    report.heads.remove(4);
    for row in &mut report.rows {
        row.remove(4);
    }
    report.answers = at(&table, &fit.curve, &args.common)?;
    let k = fit.thermal_output;
    report.fragment = Some(format!(
        "thermal_output = {{ coefficients = {}, in = \"degC\", gauge_factor = {}, range = {}{} }}",
        list(k.coefficients.into_iter().take(fit.degree + 1)),
        bare(k.gauge_factor),
        range(k.range_celsius, "degC"),
        report.covariance_keys(0, fit.degree + 1)
    ));
    report.print(&args.common)
}

fn its90(args: &FitIts90) -> Result<(), Failure> {
    let subrange = Subrange::ALL.into_iter().find(|s| s.name() == args.subrange).ok_or_else(|| {
        let names: Vec<&str> = Subrange::ALL.iter().map(|s| s.name()).collect();
        Failure::error(format!("there is no subrange '{}'; there are {}", args.subrange, names.join(", ")))
    })?;
    let table = Table::read(&args.common, [Role::Temperature, Role::Resistance])?;
    let fit = fits::its90(&table.points(), subrange, ohms("--triple-point", args.triple_point.as_ref())?)
        .map_err(|e| table.failure(&e))?;
    let deviation = fit.thermometer.deviation();
    let equation = match deviation {
        Deviation::FromHydrogen { .. } => "W - Wr = a (W - 1) + b (W - 1)^2 + c1 (ln W)^3 + ... + c5 (ln W)^7",
        Deviation::FromNeon { .. } => "W - Wr = a (W - 1) + b (W - 1)^2 + c1 ln W + c2 (ln W)^2 + c3 (ln W)^3",
        Deviation::FromOxygen { .. } => "W - Wr = a (W - 1) + b (W - 1)^2 + c1 (ln W)^2",
        Deviation::FromArgon { .. } => "W - Wr = a (W - 1) + b (W - 1) ln W",
        Deviation::ToGallium { .. } | Deviation::ToIndium { .. } => "W - Wr = a (W - 1)",
        Deviation::ToAluminium { .. } => "W - Wr = a (W - 1) + b (W - 1)^2 + c (W - 1)^3",
        Deviation::ToSilver { .. } => {
            "W - Wr = a (W - 1) + b (W - 1)^2 + c (W - 1)^3, above 660.323 degC + d [W - W(660.323 degC)]^2"
        }
        _ => "W - Wr = a (W - 1) + b (W - 1)^2",
    };
    let equation = format!("{equation}; W = R/R(273.16 K)");
    let mut report = Report::new("its90", table.file(), &equation, &fit.curve, &args.common);
    let [low, high] = deviation.range_celsius();
    report.notes.push(format!("subrange {}: {low} degC to {high} degC", subrange.name()));
    let whence = if args.triple_point.is_some() { "as stated" } else { "mean of the points at 0.01 degC" };
    report.notes.push(format!("triple point of water {} ohm, {whence}", all_digits(fit.triple_point_ohms)));
    report.heads = vec![table.header(0), table.header(1), "fitted (degC)".into(), "residual (K)".into()];
    let points = table.x.iter().zip(&table.y).zip(&fit.kelvin);
    report.rows = points.map(|((t, r), off)| vec![*t, *r, t + off, *off]).collect();
    let coverage = coverage(&args.common, &table)?;
    let answer = |text: &str, r: f64| fit.temperature(r, &coverage).map_err(|e| Failure::error(format!("{text}: {e}")));
    for text in &args.common.reading {
        let r = table.typed(1, text)?;
        report.answers.push(direct(&table, r, &answer(&format!("--reading {text}"), r)?));
    }
    for text in &args.common.at {
        let t = table.typed(0, text)?;
        let r = fit.thermometer.ohms_from_celsius(t).map_err(|e| Failure::error(format!("--at {text}: {e}")))?;
        let found = answer(&format!("--at {text}"), r)?;
        report.answers.push(Answer {
            asked: format!("{}, where the resistance is {} ohm", asked(&table, 0, t), all_digits(r)),
            intervals: vec![(BAND, found.band)],
            ..direct(&table, r, &found)
        });
    }
    let aluminium = fit.w_aluminium.map_or_else(String::new, |w| format!(", aluminium_ratio = {}", bare(w)));
    report.fragment = Some(format!(
        "platinum = {{ triple_point = \"{} ohm\", subrange = \"{}\", deviation = {}{aluminium}{} }}",
        all_digits(fit.triple_point_ohms),
        subrange.name(),
        list(fit.curve.coefficients().iter().map(|c| c.value)),
        report.covariance_keys(1, fit.curve.coefficients().len() + 1)
    ));
    report.print(&args.common)
}
