//! Every derivative of every kind of chain, in everything that goes into it, against differences in 60-digit arithmetic.
//!
//! The arithmetic (tests/support/big.rs) shares nothing with the library's: a general-purpose package of arbitrary precision. The
//! equations are those of the forward chain, which tests/accuracy.rs, tests/accuracy_sides.rs and tests/thermometer_circuits.rs
//! prove against other programs and laws written out again. Where an equation is solved inside (a zero, an inverse law,
//! self-heating), one step in this type leaves 1e-24 or less, so that a step of 1e-10 of the parameter gives differences that are
//! exact to more digits than a double has.

mod support;

use ohmwright::chain::{Chain, Derivative, Element, Parameter, Real, Sides, Temperature};
use support::big::Big;
use support::chains;
use support::report::Report;

/// 1e-9 relative, or what 5e-16 V/V (1e-12 K for thermometers) are worth (README, How exact).
const SLOPE: f64 = 1e-9;

#[test]
fn every_derivative() {
    let mut report = Report::new("derivatives against 60 digits");
    for case in chains::all() {
        let (chain, inputs) = (case.chain, case.inputs);
        let q = case.span[0] + 0.43 * (case.span[1] - case.span[0]);
        let sides = || Sides {
            supply: Some(Big::new(inputs.supply)),
            celsius: Some(Big::new(inputs.celsius)),
            lead_celsius: Some(Big::new(inputs.lead_celsius)),
            arm_celsius: inputs.arm_celsius.map(|t| Some(Big::new(t))),
        };
        let forward = |chain: &Chain<Big>, q: Big, sides: &Sides<Big>| {
            chain.forward(q, sides).unwrap_or_else(|e| panic!("{}: {e:?}", case.name))
        };
        // (f(v + h) − f(v − h))/2h
        let central = |v: f64, f: &dyn Fn(Big) -> Big| {
            Big::double(|| {
                let h = Big::new(if v == 0.0 { 1e-12 } else { 1e-10 * v.abs() });
                let v = Big::new(v);
                (f(v + h) - f(v - h)) / (h + h)
            })
        };
        // without a temperature the gauge counts as standing at its reference temperature
        let mut stated = chain;
        let unstated = chain.temperature == Temperature::None;
        if let (Element::Gauge { gauge, .. }, true) = (chain.element, unstated) {
            stated.temperature = Temperature::Fixed(gauge.reference_celsius);
        }
        let still = || stated.map(|_, v| Big::new(v));
        let slope = central(q, &|q| forward(&still(), q, &sides()));
        let reading = Big::double(|| forward(&still(), Big::new(q), &sides()));
        let floor = chains::floor_of(&chain, slope, reading);
        let mut values = Vec::new();
        chain.map(|_, v| {
            values.push(v);
            v
        });
        let mut place = 0;
        let beside = |v: f64, with: &dyn Fn(Sides<Big>, Option<Big>) -> Sides<Big>| {
            (v, -central(v, &|moved| forward(&still(), Big::new(q), &with(sides(), Some(moved)))) / slope)
        };
        chain
            .derivatives(q, &inputs, |which, got| {
                let (value, want) = match which {
                    Derivative::Reading => (reading, 1.0 / slope),
                    Derivative::Supply => beside(inputs.supply, &|sides, supply| Sides { supply, ..sides }),
                    Derivative::Temperature => beside(inputs.celsius, &|sides, celsius| Sides { celsius, ..sides }),
                    Derivative::LeadTemperature => {
                        beside(inputs.lead_celsius, &|sides, lead_celsius| Sides { lead_celsius, ..sides })
                    }
                    Derivative::ArmTemperature(arm) => {
                        let arm = usize::from(arm) - 1;
                        beside(inputs.arm_celsius[arm], &|mut sides, t| {
                            sides.arm_celsius[arm] = t;
                            sides
                        })
                    }
                    _ => {
                        let here = place;
                        place += 1;
                        let moved = |p: Big| {
                            let mut n = 0;
                            let chain = stated.map(|name, v| {
                                if name == Parameter::Temperature && unstated {
                                    return Big::new(v);
                                }
                                n += 1;
                                if n - 1 == here { p } else { Big::new(v) }
                            });
                            forward(&chain, Big::new(q), &sides())
                        };
                        (values[here], -central(values[here], &moved) / slope)
                    }
                };
                // the floor is the effect of a relative change of the parameter; of 1 where the parameter is 0
                let unit = if value == 0.0 { 1.0 } else { value.abs() };
                let allowed = (SLOPE * want.abs()).max(floor / unit);
                let input = format!("{q} ({value:e})");
                report.check(case.name, format_args!("{which:?}"), input, want, got, allowed);
            })
            .expect("derivatives");
        assert_eq!(place, values.len(), "{}: every parameter is handed out once", case.name);
    }
    report.finish();
}

/// The arithmetic itself: e = 2.718 281 828 459 045 235 360 287 471 352 66… (from memory) is 1.445 646 891 729 250 158…e-16 more
/// than its double, 2.718 281 828 459 045 090 795 598 298 427 648 8….
#[test]
fn sixty_digits() {
    let rest = Big::double(|| Big::new(1.0).exp() - Big::new(std::f64::consts::E));
    assert!((rest - 1.445_646_891_729_250_2e-16).abs() < 1e-31, "{rest:e}");
    let one = Big::double(|| Big::new(3.0).ln().exp() / Big::new(3.0) - Big::new(1.0));
    assert!(one.abs() < 1e-60, "{one}");
    let root = Big::double(|| Big::new(2.0).sqrt() * Big::new(2.0).sqrt() - Big::new(2.0));
    assert!(root.abs() < 1e-60, "{root}");
    for v in [1.0, -0.1, 1e300, 1e-300, 12_345.678_9, f64::MIN_POSITIVE] {
        assert_eq!(Big::new(v).value(), v);
    }
}
