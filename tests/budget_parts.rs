//! What each input of a chain contributes to the uncertainty of its strain, against a budget made outside of this project.
//!
//! Source: data/strain/budget_two_wire.csv, constructed (not published), its sensitivities 50-digit central differences.

#![cfg(feature = "files")]

mod support;

use ohmwright::chain::{Derivative, Inputs, Parameter};
use ohmwright::sheet::Sheet;
use support::report::Report;
use support::table::Table;

#[test]
fn one_gauge_on_two_wires() {
    let table = Table::read("data/strain/budget_two_wire.csv");
    let mut report = Report::new("parts of a budget");
    for row in table.rows() {
        let (at, id) = (row.at(), row.text("id"));
        let text = |column: &str| row.text(column);
        // thermal output is straight from 0 at 0 degC to TO at 1 degC, and F its gauge factor
        let sheet = format!(
            "[channel.g]\ncolumn = 1\nreads = \"V\"\noutput = \"microstrain\"\n\
             gauge = {{ resistance = \"{r} ohm\", gauge_factor = {f} }}\n\
             bridge = {{ arms = [\"e\", \"0\", \"0\", \"0\"], supply = \"{vex} V\" }}\n\
             leads = {{ wires = 2, each = \"{lead} ohm\", balanced = true }}\n\
             thermal_output = {{ coefficients = [0, {to}], in = \"degC\", gauge_factor = {f} }}\n\
             temperature = \"1 degC\"\nzero = {{ at = \"0 V\", temperature = \"0 degC\" }}\n",
            r = text("R"),
            f = text("F"),
            vex = text("Vex"),
            lead = text("RL"),
            to = text("TO"),
        );
        let sheet = Sheet::read("budget.toml", &sheet).unwrap();
        let channel = &sheet.measurement.channels[0];
        let segment = &channel.segments().unwrap()[0];
        let inputs = Inputs { reading: row.number("Vo"), ..Inputs::default() };
        let strain = segment.chain.plan().unwrap().one(inputs).value;
        // the strain is written to 10 figures, a part to 6
        report.check("strain", at, id, row.number("strain_ue"), strain, row.half_digit("strain_ue"));

        let mut parts = [("part_Vo", 0.0), ("part_Vex", 0.0), ("part_F", 0.0), ("part_RL", 0.0), ("part_TO", 0.0)];
        let mut part = |i: usize, add: f64| parts[i].1 += add;
        segment
            .chain
            .derivatives(strain, &inputs, |which, slope| match which {
                Derivative::Reading => part(0, slope * row.number("u_Vo")),
                Derivative::Parameter(Parameter::Supply) => part(1, slope * row.number("u_Vex")),
                // one gauge factor, of the gauge and of its data
                Derivative::Parameter(Parameter::GaugeFactor | Parameter::ThermalGaugeFactor) => {
                    part(2, slope * row.number("u_F"));
                }
                Derivative::Parameter(Parameter::Lead(_)) => part(3, slope * row.number("u_RL")),
                Derivative::Parameter(Parameter::ThermalCoefficient(1)) => part(4, slope * row.number("u_TO")),
                _ => {}
            })
            .unwrap();
        for (column, got) in parts {
            report.check(column, at, id, row.number(column), got, row.half_digit(column).min(5e-6));
        }
        let combined = parts.iter().map(|(_, part)| part * part).sum::<f64>().sqrt();
        report.check("combined", at, id, row.number("u_ue"), combined, row.half_digit("u_ue"));
    }
    report.equal("rows", "the table", "rows", 1, table.rows().count());
    report.finish();
}
