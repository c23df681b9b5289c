//! Shunts, lead wires and nonlinearity at a channel's values.

use ohmwright::chain::{Chain, Derivative, Element, Inputs, Network, Output as Unit};
use ohmwright::sheet::Sheet;
use ohmwright::signal::{Arm, Bridge, Conductor, Each, Leads, Pair, Place, Series, Shunt, Wires};
use ohmwright::strain::Transducer;

use super::{Cell, header, lines, rounded, six, typed};
use crate::args::Table;
use crate::failure::Failure;
use crate::side::Alone;

/// What a table is made from.
struct Of<'a> {
    args: &'a Table,
    sheet: Sheet,
    /// The channel whose values are tabulated: the one that reads, or a stress or load of it.
    index: usize,
    alone: Alone,
    /// Unit of its values.
    unit: String,
}

/// What a table of a bridge is about.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Subject {
    Shunts,
    Leads,
    Nonlinearity,
}

pub(super) fn rows(
    args: &Table,
    subject: Subject,
    (sheet, index, alone): (Sheet, usize, Alone),
) -> Result<Vec<Vec<Cell>>, Failure> {
    let name = args.channel.as_deref().unwrap_or_default();
    let (Network::Bridge(bridge), Element::Gauge { .. } | Element::Transducer { .. }) =
        (alone.chain.network, alone.chain.element)
    else {
        return Err(Failure::error(format!(
            "channel '{name}' is no bridge of gauges and no transducer, which this table is about"
        )));
    };
    alone.tell_notes();
    let unit = sheet.measurement.channels.get(index).map_or_else(String::new, |c| c.unit.clone());
    let of = Of { args, sheet, index, alone, unit };
    match subject {
        Subject::Shunts => of.shunts(),
        Subject::Leads => of.leads(&bridge),
        Subject::Nonlinearity => of.nonlinearity(),
    }
}

fn power(exponent: i8) -> f64 {
    format!("1e{exponent}").parse().unwrap_or(f64::NAN)
}

impl Of<'_> {
    /// The values of the channel to tabulate, in its unit: what was typed, or the default.
    fn values(&self, default: [f64; 3]) -> Result<Vec<f64>, Failure> {
        let Table { from, to, step, .. } = self.args;
        lines(typed([from, to, step], default, |text| self.sheet.result(self.index, text))?)
    }

    /// The lowest and highest value of a usual span: 5000 microstrain either way, the capacity of a transducer, or the range of
    /// its certificate.
    fn span(&self) -> [f64; 2] {
        let alone = &self.alone;
        let own = match (alone.chain.output, alone.chain.element) {
            (Unit::Strain { exponent }, _) => [-5e-3, 5e-3].map(|e| e * power(exponent)),
            // γ = 2 e
            (Unit::ShearStrain { exponent }, _) => [-1e-2, 1e-2].map(|e| e * power(exponent)),
            (_, Element::Transducer { law, limit, .. }) => {
                let ends = match law {
                    Transducer::Rated { capacity, .. } => [-capacity, capacity],
                    Transducer::Certificate(k) => k.range.map(|q| q * k.load_scale),
                    _ => [-1.0, 1.0],
                };
                ends.map(|q| q.clamp(-limit, limit))
            }
            _ => [-1.0, 1.0],
        };
        let [a, b] = own.map(|value| value * alone.factor);
        [a.min(b), a.max(b)]
    }

    /// Whether a resistor across this arm simulates less than there is.
    fn lowers(&self, arm: u8, place: Place) -> bool {
        let shunt = Shunt { arm, ohms: 1e6, place };
        // the sign shows also where the value would not be believed
        let chain = Chain { extrapolate: true, ..self.alone.chain };
        chain.simulated(shunt, 0.0, &self.alone.inputs).is_ok_and(|v| v * self.alone.factor < 0.0)
    }

    /// Says that no resistor across this arm simulates a value, and which arm would do.
    fn other_arm(&self, value: f64, place: Place) -> Failure {
        let (own, unit) = (self.args.arm, &self.unit);
        let what = format!("{value} {unit}: no resistor across arm {own} simulates that");
        Failure::error(match (1..=4).find(|arm| self.lowers(*arm, place) == (value < 0.0)) {
            Some(arm) if arm != own => {
                format!("{what}; one across arm {arm} does: --arm {arm}, or give the other sign")
            }
            _ => what,
        })
    }

    fn simulated(&self, ohms: f64, place: Place) -> Result<f64, ohmwright::Error> {
        let shunt = Shunt { arm: self.args.arm, ohms, place };
        self.alone.chain.simulated(shunt, 0.0, &self.alone.inputs).map(|v| v * self.alone.factor)
    }

    fn simulates(&self, ohms: f64, place: Place) -> Cell {
        self.simulated(ohms, place).map_or(Cell::Blank, six)
    }

    fn shunts(&self) -> Result<Vec<Vec<Cell>>, Failure> {
        let (args, alone, unit) = (self.args, &self.alone, &self.unit);
        if let Some(text) = &args.resistor {
            let ohms = Sheet::resistor(text).map_err(|e| Failure::error(format!("--resistor: {e}")))?;
            let mut row = vec![Cell::Exact(ohms)];
            for place in [Place::Gauge, Place::Instrument] {
                let value =
                    self.simulated(ohms, place).map_err(|e| Failure::error(format!("--resistor {text}: {e}")))?;
                row.push(six(value));
            }
            let names =
                ["resistor (ohm)".to_string(), format!("at the gauge ({unit})"), format!("at the instrument ({unit})")];
            return Ok(vec![header(&names), row]);
        }
        let (here, there, word) = if args.at_instrument {
            (Place::Instrument, Place::Gauge, "gauge")
        } else {
            (Place::Gauge, Place::Instrument, "instrument")
        };
        // tension or compression: whichever this arm simulates
        let [low, high] = self.span();
        let span = if self.lowers(args.arm, here) { low } else { high };
        let typed = args.from.is_some() && args.to.is_some() && args.step.is_some();
        if !typed && (span == 0.0 || (span < 0.0) != self.lowers(args.arm, here)) {
            return Err(Failure::error(format!(
                "a resistor across arm {} drives channel '{}' away from its range, {} to {} {unit}: give another --arm, or --from, --to and --step",
                args.arm,
                args.channel.as_deref().unwrap_or_default(),
                rounded(low),
                rounded(high)
            )));
        }
        let mut rows = vec![header(&[
            format!("simulated ({unit})"),
            "resistor (ohm)".into(),
            "nearest E96 (ohm)".into(),
            format!("E96 simulates ({unit})"),
            "nearest E192 (ohm)".into(),
            format!("E192 simulates ({unit})"),
            format!("same resistor at the {word} ({unit})"),
        ])];
        for value in self.values([0.1, 1.0, 0.1].map(|share| share * span))? {
            if value == 0.0 {
                return Err(Failure::error(format!("0 {unit}: that is no shunt at all; begin beside it")));
            }
            let exact =
                alone.chain.shunt_for(args.arm, here, value / alone.factor, &alone.inputs).map_err(|e| match e {
                    ohmwright::Error::Unfit { .. } => self.other_arm(value, here),
                    e => Failure::error(format!("{value} {unit}: {e}")),
                })?;
            let mut row = vec![Cell::Exact(value), Cell::Fixed(exact, 2)];
            for series in [Series::E96, Series::E192] {
                let near = series.nearest(exact).map_err(|e| Failure::error(format!("{value} {unit}: {e}")))?;
                row.extend([Cell::Exact(near), self.simulates(near, here)]);
            }
            row.push(self.simulates(exact, there));
            rows.push(row);
        }
        Ok(rows)
    }

    fn leads(&self, bridge: &Bridge) -> Result<Vec<Vec<Cell>>, Failure> {
        let Table { from, to, step, .. } = self.args;
        let ohms = lines(typed([from, to, step], [0.0, 10.0, 1.0], Sheet::resistance)?)?;
        if let Some(below) = ohms.iter().find(|r| **r < 0.0) {
            return Err(Failure::error(format!("{below} ohm: a conductor has no resistance below zero")));
        }
        let chain = |wires: Option<Wires>, ohms: f64| {
            let mut bridge = *bridge;
            match wires {
                Some(wires) => {
                    bridge.leads = Some(Leads { wires, each: Each::Same(Conductor::Ohms(ohms)) });
                    bridge.balanced = wires == Wires::Two;
                }
                None => bridge.supply_leads = Pair::Same(ohms),
            }
            Chain { network: Network::Bridge(bridge), ..self.alone.chain }
        };
        // what can be wired: three wires to arms 1 and 2, two to a gauge in arm 1 alone, else the leads of the supply
        let fixed = bridge.arms.map(|arm| matches!(arm, Arm::Fixed));
        let kinds: &[(&str, Option<Wires>)] = match fixed {
            [false, true, true, true] => &[
                ("two wires, balanced: sensitivity remaining", Some(Wires::Two)),
                ("three wires: sensitivity remaining", Some(Wires::Three)),
            ],
            [_, _, true, true] => &[("three wires: sensitivity remaining", Some(Wires::Three))],
            _ => &[("supply leads: sensitivity remaining", None)],
        };
        // warm leads are stated at a reference, and so are these
        let stated = self.alone.chain.lead_warmth.map(|w| format!(" at {} degC", w.reference_celsius));
        let mut names = vec![format!("each conductor{} (ohm)", stated.unwrap_or_default())];
        names.extend(kinds.iter().map(|(name, _)| (*name).to_string()));
        let mut rows = vec![header(&names)];
        for ohms in ohms {
            let mut row = vec![Cell::Exact(ohms)];
            for (_, wires) in kinds {
                let (with, without) = (chain(*wires, ohms), chain(*wires, 0.0));
                let inputs = &self.alone.inputs;
                row.push(Cell::Fixed(sensitivity(&with, inputs)? / sensitivity(&without, inputs)?, 6));
            }
            rows.push(row);
        }
        Ok(rows)
    }

    fn nonlinearity(&self) -> Result<Vec<Vec<Cell>>, Failure> {
        let (alone, unit) = (&self.alone, &self.unit);
        let signal = self.sheet.reading_unit(alone.read).unwrap_or_default();
        let at_zero = alone.plan.forward(0.0, alone.inputs).map_err(|e| Failure::error(e.to_string()))?;
        let slope = sensitivity(&alone.chain, &alone.inputs)?;
        let mut rows = vec![header(&[
            format!("true ({unit})"),
            format!("signal ({signal})"),
            format!("by the slope at zero ({unit})"),
            format!("error ({unit})"),
            "error (%)".into(),
        ])];
        let [low, high] = self.span();
        for value in self.values([low, high, 0.1 * (high - low)])? {
            let reading = alone
                .plan
                .forward(value / alone.factor, alone.inputs)
                .map_err(|_| alone.beyond(&format!("{value} {unit}"), value / alone.factor))?;
            let linear = (reading - at_zero) / slope * alone.factor;
            // what is left of a straight line is rounding
            let error = linear - value;
            let error = if error.abs() < 1e-10 * low.abs().max(high.abs()) { 0.0 } else { error };
            let share = if value == 0.0 { Cell::Blank } else { Cell::Fixed(100.0 * error / value, 4) };
            rows.push(vec![Cell::Exact(value), Cell::Exact(reading), Cell::Exact(rounded(linear)), six(error), share]);
        }
        Ok(rows)
    }
}

/// Sensitivity of the output at the zero of the channel.
fn sensitivity(chain: &Chain, inputs: &Inputs) -> Result<f64, Failure> {
    let slope = chain.derivative(Derivative::Reading, 0.0, inputs).map_err(|e| Failure::error(e.to_string()))?;
    Ok(1.0 / slope)
}
