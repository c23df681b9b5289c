//! Every published check value that is compiled in, computed again.
//!
//! Each [`Check`] walks one table of data/: all its rows, to half their last printed digit, and the misprints that must
//! not be reproduced. `how` tells what was read in the source, what is from memory and what was constructed.

mod budgets;
mod circuits;
mod fits;
mod plane;
mod strain;
mod table;
mod temperature;
mod thermocouple;
mod thermometer;

use std::format;
use std::string::{String, ToString};
use std::vec::Vec;

use serde::Serialize;

use table::Table;

/// What came of one table of check values.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Check {
    /// What was computed.
    pub what: &'static str,
    /// The table, under data/.
    pub file: &'static str,
    /// Its source.
    pub source: String,
    /// How its values were obtained: read, from memory, constructed, computed.
    pub how: String,
    /// Values that were compared.
    pub values: usize,
    /// Known misprints that were not reproduced.
    pub misprints_refused: usize,
    /// Largest deviation as a share of its tolerance.
    pub worst: f64,
    /// Where it is: line of the table, expected and computed value.
    pub worst_at: String,
    /// What deviates by more than its tolerance.
    pub failures: Vec<String>,
    /// Rows that the laws compiled in do not cover, with the reason.
    pub left_out: Vec<String>,
}

impl Check {
    fn new(what: &'static str, table: &Table) -> Self {
        Self {
            what,
            file: table.file,
            source: table.remark("source"),
            how: table.remark("how"),
            values: 0,
            misprints_refused: 0,
            worst: 0.0,
            worst_at: String::new(),
            failures: Vec::new(),
            left_out: Vec::new(),
        }
    }

    /// Returns whether every value was reproduced.
    #[must_use]
    pub fn passed(&self) -> bool {
        self.failures.is_empty() && self.values > 0
    }

    /// Compares one value; `got` is what the library gives, or why it gives nothing.
    fn compare(&mut self, row: &table::Row<'_>, expected: f64, tolerance: f64, got: Result<f64, crate::Error>) {
        self.values += 1;
        let place = format!("{}:{}", self.file, row.line);
        match got {
            Ok(got) => {
                let share = (got - expected).abs() / tolerance;
                if share.is_nan() || share > 1.0 {
                    self.failures.push(format!("{place}: expected {expected} ± {tolerance}, got {got}"));
                }
                if share > self.worst || self.worst_at.is_empty() {
                    self.worst = share;
                    self.worst_at = format!("line {}: {expected}, computed {got}", row.line);
                }
            }
            Err(error) => self.failures.push(format!("{place}: expected {expected} ± {tolerance}, got none: {error}")),
        }
    }

    /// Compares one printed figure, to half its last digit.
    fn printed(&mut self, row: &table::Row<'_>, column: &str, got: Result<f64, crate::Error>) {
        let Some((expected, half)) = row.printed(column) else {
            self.failures.push(format!("{}:{}: column {column} holds no number", self.file, row.line));
            return;
        };
        // never below what the code itself is allowed, design figure 1e-12 relative
        self.compare(row, expected, half.max(1e-12 * expected.abs()), got);
    }

    /// A misprint must not be reproduced.
    fn misprint(&mut self, row: &table::Row<'_>, wrong: f64, tolerance: f64, got: f64) {
        if (got - wrong).abs() <= tolerance {
            self.failures.push(format!("{}:{}: the misprint {wrong} is reproduced", self.file, row.line));
        } else {
            self.misprints_refused += 1;
        }
    }

    fn leave_out(&mut self, row: &table::Row<'_>, reason: &str) {
        self.left_out.push(format!("line {}: {reason}", row.line));
    }
}

/// Re-computes everything that is compiled in, in a fixed order.
#[must_use]
pub fn run() -> Vec<Check> {
    std::vec![
        temperature::iec_60751_table(),
        temperature::iec_60751_below_ice(),
        thermometer::curves(),
        thermometer::edition_1983(),
        thermometer::classes(),
        thermometer::class_values(),
        thermometer::metals(),
        thermometer::nickel(),
        thermometer::copper(),
        thermometer::fixed_points(),
        thermometer::reference_functions(),
        thermometer::deviations(),
        thermometer::scales(),
        temperature::beta_ratios(),
        thermometer::four_terms(),
        thermometer::circuits(),
        thermocouple::points(),
        thermocouple::type_k(),
        thermocouple::type_t(),
        thermocouple::exercises(),
        thermocouple::coefficients(),
        thermocouple::tolerances(),
        fits::pontius(),
        fits::inverse_reading(),
        fits::mgh10(),
        fits::guide(),
        budgets::multimeter(),
        strain::arrangements(),
        strain::nonlinearity(),
        strain::nonlinearity_worked(),
        strain::lead_factors(),
        strain::shunts(),
        strain::shunt_cases(),
        strain::shunt_transducers(),
        strain::thermal_polynomial(),
        strain::thermal_cases(),
        circuits::operating_points(),
        plane::rosettes(),
        plane::transverse_cases(),
        plane::single_errors(),
        plane::plane_stresses(),
        plane::transformed_stresses(),
    ]
}

/// Returns a report of these checks as text.
#[must_use]
pub fn report(checks: &[Check]) -> String {
    let mut out = String::new();
    for check in checks {
        let verdict = if check.passed() { "reproduced" } else { "FALLS SHORT" };
        out.push_str(&format!("{}: {verdict}\n", check.what));
        out.push_str(&format!("  source    {}\n", check.source));
        out.push_str(&format!("  obtained  {}\n", check.how));
        let misprints = match check.misprints_refused {
            0 => String::new(),
            n => format!(
                ", {n} known misprint{} or mistake{} not reproduced",
                if n == 1 { "" } else { "s" },
                if n == 1 { "" } else { "s" }
            ),
        };
        out.push_str(&format!("  compared  {} values of {}{misprints}\n", check.values, check.file));
        out.push_str(&format!("  worst     {:.3} of its tolerance, {}\n", check.worst, check.worst_at));
        for line in &check.left_out {
            out.push_str(&format!("  left out  {line}\n"));
        }
        for line in &check.failures {
            out.push_str(&format!("  FAILED    {line}\n"));
        }
    }
    let failed = checks.iter().filter(|c| !c.passed()).count();
    let values: usize = checks.iter().map(|c| c.values).sum();
    out.push_str(&match failed {
        0 => format!("all {values} values of {} tables reproduced\n", checks.len()),
        n => format!("{n} of {} tables fall short\n", checks.len()),
    });
    out
}

/// Returns a report of these checks as JSON.
#[must_use]
pub fn report_json(checks: &[Check]) -> String {
    serde_json::to_string_pretty(checks).unwrap_or_else(|e| e.to_string())
}
