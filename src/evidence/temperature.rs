//! Tables of thermometers.

use once_cell::sync::Lazy;

use super::Check;
use super::table::Table;
use crate::platinum::{IEC_60751, Platinum};
use crate::thermistor::{Beta, Law, Thermistor};

macro_rules! table {
    ($name:literal) => {
        Table::new(concat!("data/temperature/", $name), include_str!(concat!("../../data/temperature/", $name)))
    };
}

static TABLE_10C: Lazy<Table> = Lazy::new(|| table!("pt100_iec60751_table_10C.csv"));
static TABLE_1C: Lazy<Table> = Lazy::new(|| table!("pt100_iec60751_table_1C_neg.csv"));
static BETA: Lazy<Table> = Lazy::new(|| table!("thermistor_material1_beta.csv"));

/// Both editions' reprints of the table, −200 °C to 850 °C.
pub(super) fn iec_60751_table() -> Check {
    let mut check = Check::new("IEC 60751 platinum, resistance table of a 100 ohm element", &TABLE_10C);
    let ohms = |t: f64| Platinum::new(IEC_60751).and_then(|p| p.ohms_from_celsius(t));
    for row in TABLE_10C.rows() {
        let Some(t) = row.number("t_C") else { continue };
        let got = ohms(t);
        check.printed(&row, "accepted_ohm", got);
        for column in ["src1_ohm", "src2_ohm"] {
            if let (Some((wrong, half)), Some((right, _)), Ok(got)) =
                (row.printed(column), row.printed("accepted_ohm"), got)
                && wrong != right
            {
                check.misprint(&row, wrong, half, got);
            }
        }
    }
    check
}

/// The 1 °C table below 4 °C, both ways.
pub(super) fn iec_60751_below_ice() -> Check {
    let mut check = Check::new("IEC 60751 platinum, 1 °C table below 4 °C, both ways", &TABLE_1C);
    for row in TABLE_1C.rows() {
        let Some(t) = row.number("t_C") else { continue };
        let pt100 = Platinum::new(IEC_60751);
        check.printed(&row, "R_ohm", pt100.and_then(|p| p.ohms_from_celsius(t)));
        // the temperature of the printed ohms: half a digit through dR/dt, which is above 0.39 ohm/K here
        let Some((ohms, half)) = row.printed("R_ohm") else { continue };
        if t > -200.0 {
            check.compare(&row, t, half / 0.39, pt100.and_then(|p| p.celsius_from_ohms(ohms)));
        }
    }
    check
}

/// Ratio of two resistances by the printed β.
pub(super) fn beta_ratios() -> Check {
    let mut check = Check::new("thermistor, ratio of resistances by beta between two temperatures", &BETA);
    for row in BETA.rows() {
        let (Some(t1), Some(t2), Some(beta), Some((ratio, half))) =
            (row.number("t1_C"), row.number("t2_C"), row.number("beta_K"), row.printed("ratio"))
        else {
            continue;
        };
        let law = Law::Beta(Beta { r25_ohms: 1e4, beta_kelvin: beta, range_celsius: [-50.0, 150.0] });
        let got = Thermistor::new(law).and_then(|t| Ok(t.ohms_from_celsius(t1)? / t.ohms_from_celsius(t2)?));
        // half a kelvin of β moves the ratio by ratio · ½ K · (1/T₁ − 1/T₂), beside half a digit of the ratio
        let from_beta = ratio * 0.5 * (1.0 / (t1 + 273.15) - 1.0 / (t2 + 273.15));
        check.compare(&row, ratio, half + from_beta, got);
    }
    check
}
