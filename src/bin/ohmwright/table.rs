//! `table`: shunts, lead wires and nonlinearity at a channel's values.

use ohmwright::chain::{Chain, Derivative, Inputs, Network};
use ohmwright::recording::{CsvWriter, Digits, Output};
use ohmwright::sheet::Sheet;
use ohmwright::signal::{Conductor, Each, Leads, Pair, Place, Series, Shunt, Wires};

use crate::args::{Subject, Table};
use crate::failure::Failure;
use crate::files;
use crate::side::{Alone, channel};

/// Most lines of a table.
const MOST: usize = 100_000;

pub(crate) fn run(args: &Table) -> Result<(), Failure> {
    let sheet = files::sheet(&args.sheet)?;
    let index = channel(&sheet, &args.channel)?;
    let alone = Alone::new(&sheet, index, &args.with)?;
    alone.tell_notes();
    if !matches!(&alone.chain.network, Network::Bridge(_)) {
        return Err(Failure::error(format!("channel '{}' has no bridge, which these tables are about", args.channel)));
    }
    let unit = sheet.measurement.channels.get(alone.read).map_or_else(String::new, |c| c.unit.clone());
    let mut out = CsvWriter::new(Output::stdout());
    match args.subject {
        Subject::Shunts => shunts(args, &sheet, &alone, &unit, &mut out)?,
        Subject::Leads => leads(args, &alone.chain, &alone.inputs, &mut out)?,
        Subject::Nonlinearity => nonlinearity(args, &sheet, &alone, &unit, &mut out)?,
    }
    out.finish()?;
    Ok(())
}

/// The lines from `--from` to `--to`; each is a whole number of steps from the first.
fn lines(from: f64, to: f64, step: f64) -> Result<Vec<f64>, Failure> {
    if !(from.is_finite() && to.is_finite() && step.is_finite()) || step == 0.0 || (to - from) / step < 0.0 {
        return Err(Failure::error("--from, --to and --step do not make a row of values"));
    }
    let count = ((to - from) / step + 1e-9).floor();
    if count >= MOST as f64 {
        return Err(Failure::error(format!("--step is too small: more than {MOST} lines")));
    }
    Ok((0..=count as usize).map(|i| from + step * i as f64).collect())
}

/// Values of the channel to tabulate.
fn values(args: &Table, sheet: &Sheet, read: usize, default: [f64; 3]) -> Result<Vec<f64>, Failure> {
    let mut ends = default;
    for (slot, typed) in ends.iter_mut().zip([&args.from, &args.to, &args.step]) {
        if let Some(text) = typed {
            *slot = sheet.result(read, text).map_err(Failure::error)?;
        }
    }
    let [from, to, step] = ends;
    lines(from, to, step)
}

/// A thousand and five thousand microstrain in the unit of the channel, as it stands in its unit.
fn in_unit(microstrain: f64, alone: &Alone) -> f64 {
    // the span of a channel that is no strain is not known: a tenth of what it believes
    match alone.chain.output {
        ohmwright::chain::Output::Strain { exponent } => microstrain * power(exponent) / 1e6,
        ohmwright::chain::Output::ShearStrain { exponent } => 2.0 * microstrain * power(exponent) / 1e6,
        _ => match alone.chain.element {
            ohmwright::chain::Element::Transducer { limit, .. } => limit / 1.5 * microstrain / 5e3,
            _ => microstrain,
        },
    }
}

fn power(exponent: i8) -> f64 {
    format!("1e{exponent}").parse().unwrap_or(f64::NAN)
}

fn shunts(args: &Table, sheet: &Sheet, alone: &Alone, unit: &str, out: &mut CsvWriter<'_>) -> Result<(), Failure> {
    let (here, there) =
        if args.at_instrument { (Place::Instrument, Place::Gauge) } else { (Place::Gauge, Place::Instrument) };
    let word = |p: Place| if p == Place::Gauge { "gauge" } else { "instrument" };
    let simulated =
        |ohms: f64, place: Place| alone.chain.simulated(Shunt { arm: args.arm, ohms, place }, 0.0, &alone.inputs);
    if let Some(text) = &args.resistor {
        let ohms = Sheet::resistance(text).map_err(Failure::error)?;
        for name in
            ["resistor (ohm)".to_string(), format!("at the gauge ({unit})"), format!("at the instrument ({unit})")]
        {
            out.text(&name);
        }
        out.end_row()?;
        out.number(ohms, Digits::Shortest);
        for place in [Place::Gauge, Place::Instrument] {
            let value = simulated(ohms, place).map_err(|e| Failure::error(format!("--resistor {text}: {e}")))?;
            out.number(value, Digits::Fixed(3));
        }
        out.end_row()?;
        return Ok(());
    }
    // tension or compression: whichever this arm simulates
    let sign = if simulated(1e6, here).is_ok_and(|v| v < 0.0) { -1.0 } else { 1.0 };
    let default = [500.0, 5000.0, 500.0].map(|v| sign * in_unit(v, alone));
    for name in [
        format!("simulated ({unit})"),
        "resistor (ohm)".into(),
        "nearest E96 (ohm)".into(),
        format!("E96 simulates ({unit})"),
        "nearest E192 (ohm)".into(),
        format!("E192 simulates ({unit})"),
        format!("same resistor at the {} ({unit})", word(there)),
    ] {
        out.text(&name);
    }
    out.end_row()?;
    for value in values(args, sheet, alone.read, default)? {
        let exact = alone
            .chain
            .shunt_for(args.arm, here, value, &alone.inputs)
            .map_err(|e| Failure::error(format!("{value} {unit}: {e}")))?;
        out.number(value, Digits::Shortest).number(exact, Digits::Fixed(2));
        for series in [Series::E96, Series::E192] {
            let near = series.nearest(exact).map_err(|e| Failure::error(e.to_string()))?;
            out.number(near, Digits::Shortest);
            match simulated(near, here) {
                Ok(v) => out.number(v, Digits::Fixed(3)),
                Err(_) => out.blank(),
            };
        }
        match simulated(exact, there) {
            Ok(v) => out.number(v, Digits::Fixed(3)),
            Err(_) => out.blank(),
        };
        out.end_row()?;
    }
    Ok(())
}

/// Sensitivity of the output at the zero of the channel.
fn sensitivity(chain: &Chain, inputs: &Inputs) -> Result<f64, Failure> {
    let slope = chain.derivative(Derivative::Reading, 0.0, inputs).map_err(|e| Failure::error(e.to_string()))?;
    Ok(1.0 / slope)
}

fn leads(args: &Table, chain: &Chain, inputs: &Inputs, out: &mut CsvWriter<'_>) -> Result<(), Failure> {
    let read = |text: &Option<String>, default: f64| match text {
        Some(text) => Sheet::resistance(text).map_err(Failure::error),
        None => Ok(default),
    };
    let (from, to, step) = (read(&args.from, 0.0)?, read(&args.to, 10.0)?, read(&args.step, 1.0)?);
    let Network::Bridge(bridge) = &chain.network else { return Ok(()) };
    let full =
        bridge.leads.is_none() && bridge.arms.iter().skip(2).any(|a| !matches!(a, ohmwright::signal::Arm::Fixed));
    let with = |wires: Option<Wires>, ohms: f64| {
        let mut chain = *chain;
        if let Network::Bridge(b) = &mut chain.network {
            match wires {
                Some(wires) => {
                    b.leads = Some(Leads { wires, each: Each::Same(Conductor::Ohms(ohms)) });
                    b.balanced = wires == Wires::Two;
                }
                None => b.supply_leads = Pair::Same(ohms),
            }
        }
        chain
    };
    let kinds: &[(&str, Option<Wires>)] = if full {
        &[("supply leads: sensitivity remaining", None)]
    } else {
        &[
            ("two wires: sensitivity remaining", Some(Wires::Two)),
            ("three wires: sensitivity remaining", Some(Wires::Three)),
        ]
    };
    out.text("each conductor (ohm)");
    for (name, _) in kinds {
        out.text(name);
    }
    out.end_row()?;
    for ohms in lines(from, to, step)? {
        out.number(ohms, Digits::Shortest);
        for (_, wires) in kinds {
            // a chain whose circuit takes no such leads has an empty cell
            match (sensitivity(&with(*wires, ohms), inputs), sensitivity(&with(*wires, 0.0), inputs)) {
                (Ok(a), Ok(b)) => out.number(a / b, Digits::Fixed(6)),
                _ => out.blank(),
            };
        }
        out.end_row()?;
    }
    Ok(())
}

fn nonlinearity(
    args: &Table,
    sheet: &Sheet,
    alone: &Alone,
    unit: &str,
    out: &mut CsvWriter<'_>,
) -> Result<(), Failure> {
    let signal = sheet.reading_unit(alone.read).unwrap_or_default();
    let default = [-5000.0, 5000.0, 1000.0].map(|v| in_unit(v, alone));
    let at_zero = alone.plan.forward(0.0, alone.inputs).map_err(|e| Failure::error(e.to_string()))?;
    let slope = sensitivity(&alone.chain, &alone.inputs)?;
    for name in [
        format!("true ({unit})"),
        format!("signal ({signal})"),
        format!("first order ({unit})"),
        format!("error ({unit})"),
        "error (%)".into(),
    ] {
        out.text(&name);
    }
    out.end_row()?;
    for value in values(args, sheet, alone.read, default)? {
        let reading = alone
            .plan
            .forward(value, alone.inputs)
            .map_err(|_| alone.beyond(&format!("{value} {unit}"), value / alone.factor))?;
        let linear = (reading - at_zero) / slope;
        let error = linear - value;
        out.number(value, Digits::Shortest).number(reading, Digits::Shortest);
        out.number(linear, Digits::Fixed(4)).number(error, Digits::Fixed(4));
        if value == 0.0 {
            out.blank();
        } else {
            out.number(100.0 * error / value, Digits::Fixed(4));
        }
        out.end_row()?;
    }
    Ok(())
}
