//! Published uncertainty budgets.

use once_cell::sync::Lazy;
use std::vec::Vec;

use super::Check;
use super::table::Table;
use crate::Error;
use crate::uncertainty::{Contribution, Coverage, Uncertainty, combine};

static MULTIMETER: Lazy<Table> = Lazy::new(|| {
    Table::new("data/statistics/budget_ea_s9.csv", include_str!("../../data/statistics/budget_ea_s9.csv"))
});

/// A multimeter whose display decides.
pub(super) fn multimeter() -> Check {
    let mut check = Check::new("EA-4/02 S9, budget of a multimeter at 100 V", &MULTIMETER);
    let inputs: Vec<Uncertainty> = MULTIMETER
        .rows()
        .filter_map(|row| {
            let size = row.number("size")?;
            Some(match row.text("name") {
                "V_S" => Uncertainty::Expanded { expanded: size, coverage_factor: 2.0 },
                "dV_iX" => Uncertainty::of_resolution(size),
                _ => Uncertainty::Rectangular { half_width: size },
            })
        })
        .collect();
    let parts: Vec<Contribution> = inputs
        .iter()
        .zip(0..)
        .map(|(input, cause)| Contribution {
            sensitivity: 1.0,
            standard: input.standard(),
            degrees_of_freedom: input.degrees_of_freedom(),
            shape: input.shape(),
            cause,
            pool: 0,
        })
        .collect();
    let sum = combine(&parts);
    let wide = sum.expanded(Coverage::Probability(0.95));
    for (place, row) in MULTIMETER.rows().enumerate() {
        let got = match row.text("name") {
            "u" => Ok(sum.standard),
            "k" => wide.map(|wide| wide.factor),
            "U" => wide.map(|wide| wide.expanded),
            _ => inputs.get(place).map(Uncertainty::standard).ok_or(Error::Unfit { what: "an unknown row" }),
        };
        check.printed(&row, "published", got);
    }
    check
}
