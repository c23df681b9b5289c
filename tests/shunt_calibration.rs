//! Shunt calibration in real bridges: `Chain::simulated` and `Chain::shunt_for`.
//!
//! Sources: Micro-Measurements TN-514 Eq. 514.43-45 (data/strain/shunt_table.csv, shunt_cases.csv); the circuits with
//! leads are derived on paper in the comments.

#[path = "support/circuit.rs"]
mod circuit;
mod support;

use ohmwright::chain::{Chain, Inputs};
use ohmwright::signal::{Bridge, Conductor, Each, Leads, Pair, Place, Shunt, Wires};
use ohmwright::strain::Gauge;
use support::table::Table;

fn simulated(chain: &Chain, arm: u8, ohms: f64, place: Place) -> f64 {
    chain.simulated(Shunt { arm, ohms, place }, 0.0, &Inputs::default()).expect("a strain")
}

#[test]
fn no_leads_is_the_closed_form() {
    // e = −R/(F (R + R_c)) for the gauge itself: arm 1
    for (r, f, rc) in [(350.0, 2.085, 49_900.0), (120.0, 2.11, 15_000.0), (1000.0, 2.0, 499_000.0)] {
        let chain = Chain::strain(Bridge::one_gauge(r), Gauge::new(f));
        let want = -1e6 * r / (f * (r + rc));
        for place in [Place::Gauge, Place::Instrument] {
            let got = simulated(&chain, 1, rc, place);
            assert!((got - want).abs() < 1e-9, "{got} {want}");
        }
        // across arm 2, fixed: tension e = R/(F R_c) exactly
        let want = 1e6 * r / (f * rc);
        let got = simulated(&chain, 2, rc, Place::Instrument);
        assert!((got - want).abs() < 1e-9, "{got} {want}");
        let back = chain.shunt_for(2, Place::Instrument, want, &Inputs::default()).expect("a resistor");
        assert!((back / rc - 1.0).abs() < 1e-9, "{back}");
        let back = chain.shunt_for(1, Place::Gauge, -2000.0, &Inputs::default()).expect("a resistor");
        assert!((back - (r / (f * 2000e-6) - r)).abs() < 1e-6 * r, "{back}");
        assert!(chain.shunt_for(1, Place::Gauge, 2000.0, &Inputs::default()).is_err());
    }
}

#[test]
fn two_wire_places_differ_as_on_paper() {
    // gauge R = 350, leads l = 3.217 each, balanced: R₂ = R + 2 l = S. F = 2.09, R_c = 59 880.
    // at the gauge: arm 1 = 2 l + R ∥ R_c, that is δ = −R/(R + R_c): the strain −R/(F (R + R_c)), leads or not.
    // at the instrument: arm 1 = S ∥ R_c = S − S²/(S + R_c), so R (1 + F e) + 2 l = S ∥ R_c gives
    // e = −S²/((S + R_c) R F).
    let (r, l, f, rc) = (350.0, 3.217, 2.09, 59_880.0);
    let s = r + 2.0 * l;
    let leads = Leads { wires: Wires::Two, each: Each::Same(Conductor::Ohms(l)) };
    let bridge = Bridge { leads: Some(leads), balanced: true, ..Bridge::one_gauge(r) };
    let chain = Chain::strain(bridge, Gauge::new(f));
    let at_gauge = simulated(&chain, 1, rc, Place::Gauge);
    let want = -1e6 * r / (f * (r + rc));
    assert!((at_gauge - want).abs() < 1e-9, "{at_gauge} {want}");
    let at_instrument = simulated(&chain, 1, rc, Place::Instrument);
    let want = -1e6 * s * s / ((s + rc) * r * f);
    assert!((at_instrument - want).abs() < 1e-9, "{at_instrument} {want}");
    assert!((at_instrument - at_gauge).abs() > 50.0);
}

#[test]
fn three_wire_at_the_instrument_is_solved_node_by_node() {
    // gauge R with lead l in arm 1, dummy R with lead l in arm 2, third lead l to the output terminal a′; R_c from a′ to
    // the negative supply, half bridge R₃ = R₄. Node j between the two arms: by Kirchhoff, with g = 1/(l + R_c) the
    // path j – third lead – R_c – ground,
    //   v_j = (1/(R + l)) / (1/(R + l) + 1/(R + l) + g);  v_a′ = v_j R_c/(l + R_c);  output = v_a′ − ½.
    let (r, l, f, rc) = (120.0, 2.6, 2.08, 29_880.0);
    let a = 1.0 / (r + l);
    let vj = a / (2.0 * a + 1.0 / (l + rc));
    let y = vj * rc / (l + rc) - 0.5;
    // strain that gives y: arm 1 = R (1 + x) + l with no current in the third lead
    let ratio = (y + 0.5) / (0.5 - y);
    let x = ((r + l) * ratio - l) / r - 1.0;
    let leads = Leads { wires: Wires::Three, each: Each::Same(Conductor::Ohms(l)) };
    let chain = Chain::strain(Bridge { leads: Some(leads), ..Bridge::one_gauge(r) }, Gauge::new(f));
    let got = simulated(&chain, 1, rc, Place::Instrument);
    assert!((got - 1e6 * x / f).abs() < 1e-9, "{got} {}", 1e6 * x / f);
    // and the resistor for that strain is this one
    let back = chain.shunt_for(1, Place::Instrument, got, &Inputs::default()).expect("a resistor");
    assert!((back / rc - 1.0).abs() < 1e-8, "{back}");
}

#[test]
fn full_bridge_with_supply_leads_places() {
    // four equal arms R, supply leads p each, no signal leads. A shunt R_c across arm 1 at the bridge: R₁ = R ∥ R_c.
    // At the instrument: from a to the negative supply terminal, outside the lead. Nodes v_p, v_n, v_a, v_b by hand:
    // solved here by elimination in plain numbers, a different route than the library's determinants.
    let (r, p, rc) = (350.0, 2.4, 87_325.0);
    let solve = |mut m: Vec<Vec<f64>>| -> Vec<f64> {
        let n = m.len();
        for i in 0..n {
            let pivot = (i..n).max_by(|a, b| m[*a][i].abs().total_cmp(&m[*b][i].abs())).unwrap();
            m.swap(i, pivot);
            let row = m[i].clone();
            for (_, other) in m.iter_mut().enumerate().filter(|(k, _)| *k != i) {
                let factor = other[i] / row[i];
                other.iter_mut().zip(&row).for_each(|(x, r)| *x -= factor * r);
            }
        }
        (0..n).map(|i| m[i][n] / m[i][i]).collect()
    };
    // unknowns: p, n, a, b
    let (g, s, h) = (1.0 / r, 1.0 / p, 1.0 / rc);
    let output = |at_bridge: bool| {
        let (to_n, to_ground) = if at_bridge { (h, 0.0) } else { (0.0, h) };
        let v = solve(vec![
            vec![s + 2.0 * g, 0.0, -g, -g, s],
            vec![0.0, s + 2.0 * g + to_n, -g - to_n, -g, 0.0],
            vec![-g, -g - to_n, 2.0 * g + to_n + to_ground, 0.0, 0.0],
            vec![-g, -g, 0.0, 2.0 * g, 0.0],
        ]);
        v[2] - v[3]
    };
    let arms = ["e", "-e", "e", "-e"].map(circuit::arm);
    let bridge = Bridge { supply_leads: Pair::Same(p), ..Bridge::equal(r, arms) };
    let chain = Chain::strain(bridge, Gauge::new(2.0));
    for (place, at_bridge) in [(Place::Gauge, true), (Place::Instrument, false)] {
        let y = output(at_bridge);
        let want = chain.plan().unwrap().one(y).number().unwrap();
        let got = simulated(&chain, 1, rc, place);
        assert!((got - want).abs() < 1e-8, "{place:?}: {got} {want}");
    }
}

#[test]
fn every_row_of_the_shunt_table() {
    let table = Table::read("data/strain/shunt_table.csv");
    for row in table.rows() {
        let (r, f) = (row.number("gauge_ohm"), row.number("gauge_factor"));
        let strain = row.number("simulated_compression_ue");
        let chain = Chain::strain(Bridge::one_gauge(r), Gauge::new(f));
        let ohms = chain.shunt_for(1, Place::Gauge, -strain, &Inputs::default()).expect("a resistor");
        // the catalogue prints whole ohms
        assert!((ohms - row.number("published_Rc_ohm")).abs() <= 0.5, "{ohms}");
        assert!((ohms / row.number("exact_Rc_ohm") - 1.0).abs() < 1e-8, "{ohms}");
        assert!((ohms - row.number("Rc_if_minus_R_term_dropped_ohm")).abs() > 1.0);
    }
}
