//! A chain as numbered values: what an image holds and what a C caller sets.

mod read;
mod write;

/// How many points a table holds at most.
pub const POINTS: usize = 24;

macro_rules! fields {
    ($($(#[$doc:meta])* $name:ident = $code:literal,)+) => {
        $($(#[$doc])* pub const $name: u16 = $code;)+
        /// Every field by its number, with its name.
        pub const NAMES: &[(u16, &str)] = &[$(($code, stringify!($name)),)+];
    };
}

fields! {
    /// What is recorded: 0 V, 1 V/V, 2 Ω, 3 codes, 4 the quantity itself. Needed.
    SIGNAL = 0,
    /// Power of ten of the unit of the readings.
    READING_EXPONENT = 1,
    /// Bits of the converter; absent = none.
    CONVERTER_BITS = 2,
    /// Full scale, V; absent with a converter = the supply (ratiometric).
    CONVERTER_FULL_SCALE = 3,
    /// Coding: 0 signed, 1 offset, 2 unsigned.
    CONVERTER_CODING = 4,
    /// Amplifier: 0 none, 1 gain, 2 difference.
    AMPLIFIER = 5,
    /// Gain.
    GAIN = 6,
    /// Offset referred to the output, V.
    AMPLIFIER_OFFSET = 7,
    /// Input resistors, Ω, inverting side first: two fields.
    AMPLIFIER_INPUT = 8,
    /// Feedback resistors, Ω: two fields.
    AMPLIFIER_FEEDBACK = 10,
    /// Open-loop gain; absent = ideal.
    OPEN_LOOP_GAIN = 12,
    /// Where the resistors return to: 0 negative supply, 1 centre.
    AMPLIFIER_REFERENCE = 13,
    /// Supply: 0 none, 1 one value, 2 with every reading.
    SUPPLY = 14,
    /// Its value, V or A.
    SUPPLY_VALUE = 15,
    /// Power of ten of the unit of its column.
    SUPPLY_EXPONENT = 16,
    /// Network: 0 bridge, 1 resistance, 2 divider, 3 none, 4 ratio to a reference resistor, 5 the sensor's own voltage. Needed.
    NETWORK = 17,
    /// Sensor: 0 gauge, 1 rated transducer, 2 transducer by certificate, 3 platinum, 4 platinum by alpha, delta, beta, 5 ITS-90,
    /// 6 nickel, 7 copper, 8 beta, 9 Steinhart-Hart, 10 logarithm of ratio, 11 reciprocal of temperature, 12 points of a
    /// thermistor, 13 thermocouple, 14 none. Needed.
    ELEMENT = 18,
    /// Resistances of the arms, Ω: four fields, all needed by a bridge. Arms 1 and 3 make the output greater, 2 and 4 less.
    ARM_RESISTANCE = 20,
    /// Arms: 0 fixed, 1 driven along, 2 driven across, 3 dummy: four fields.
    ARM_KIND = 24,
    /// Their strain factors: four fields.
    ARM_FACTOR = 28,
    /// Poisson's ratio.
    POISSON = 32,
    /// 1 where arm 2 was made up to zero with the leads in place, as it is in most loggers; absent = 0, it was not.
    BALANCED = 33,
    /// 1 where the supply is measured at the bridge.
    SENSED = 34,
    /// Input resistance, Ω; absent = no load.
    INPUT_RESISTANCE = 35,
    /// Arm of a shunt, 1 to 4; absent = none.
    SHUNT_ARM = 36,
    /// Its resistance, Ω.
    SHUNT_OHMS = 37,
    /// Its place: 0 gauge, 1 instrument.
    SHUNT_PLACE = 38,
    /// Wires of the sensor: 2, 3, 4; absent = negligible.
    LEAD_WIRES = 39,
    /// Conductors: 0 alike, 1 each its own.
    LEAD_KIND = 40,
    /// Their resistances, Ω: three fields; one where they are alike, needed also of four wires, where it takes no part.
    LEAD_OHMS = 41,
    /// Their lengths, m; where present, they are stated by their run: three fields.
    LEAD_LENGTH = 44,
    /// Their cross-sections, mm²: three fields.
    LEAD_AREA = 47,
    /// Their resistivities, Ω·m: three fields.
    LEAD_RESISTIVITY = 50,
    /// Supply leads: 0 alike, 1 each its own, 2 by their run.
    SUPPLY_LEADS_KIND = 53,
    /// Their resistances, Ω: two fields.
    SUPPLY_LEADS_OHMS = 54,
    /// Length, m, cross-section, mm², and resistivity, Ω·m: three fields; a resistance alone stands in the field above.
    SUPPLY_LEADS_RUN = 56,
    /// Signal leads, the same.
    SIGNAL_LEADS_KIND = 59,
    /// Their resistances.
    SIGNAL_LEADS_OHMS = 60,
    /// Their run.
    SIGNAL_LEADS_RUN = 62,
    /// Temperature coefficient of the leads, 1/K; absent = they do not change.
    LEAD_COEFFICIENT = 65,
    /// Temperature at which their resistance is stated, °C.
    LEAD_REFERENCE = 66,
    /// Their temperature: 0 none, 1 one value, 2 with every reading.
    LEAD_TEMPERATURE_KIND = 67,
    /// The value, °C.
    LEAD_TEMPERATURE = 68,
    /// Temperature of the gauge or reference junction: 0 none, 1 one value, 2 with every reading.
    TEMPERATURE_KIND = 69,
    /// The value, °C.
    TEMPERATURE = 70,
    /// Temperatures of arms: four fields.
    ARM_TEMPERATURE_KIND = 71,
    /// The values, °C: four fields.
    ARM_TEMPERATURE = 75,
    /// Reference resistor, Ω.
    REFERENCE_RESISTOR = 79,
    /// Fixed resistor of a divider, Ω.
    DIVIDER = 80,
    /// Sensor of a divider: 0 between node and ground, 1 between supply and node; needed by a divider.
    DIVIDER_SIDE = 81,
    /// Resistor in parallel with a thermometer, Ω; absent = none.
    PARALLEL = 82,
    /// Insulation resistance across it, Ω; absent = none.
    LEAKAGE = 83,
    /// Resistor in series with it, Ω; absent = none.
    SERIES = 84,
    /// Self-heating, K/W; absent = none.
    SELF_HEATING = 85,
    /// The current that does it, A; absent = that of the circuit.
    MEASURING_CURRENT = 86,
    /// Transverse sensitivity; absent = none.
    TRANSVERSE_SENSITIVITY = 87,
    /// Strain across over strain along.
    STRAIN_RATIO = 88,
    /// Result: 0 strain, 1 shear strain, 2 °C, 3 K, 4 °F, 5 as read (sensors 1, 2, 14). Needed.
    OUTPUT = 89,
    /// Power of ten that a strain is multiplied by.
    OUTPUT_EXPONENT = 90,
    /// 1 where laws are used outside their range.
    EXTRAPOLATE = 91,
    /// Lower limit of the readings; absent = none.
    LOW_LIMIT = 92,
    /// Its word, OW_WORD_….
    LOW_WORD = 93,
    /// Upper limit.
    HIGH_LIMIT = 94,
    /// Its word.
    HIGH_WORD = 95,
    /// Gauge factor.
    GAUGE_FACTOR = 96,
    /// Its slope, 1/K.
    GAUGE_SLOPE = 97,
    /// Its reference temperature, °C; absent = 24.
    GAUGE_REFERENCE = 98,
    /// Polynomial of thermal output, microstrain, by powers of the temperature: all seven fields, or none. The zero then
    /// needs its temperature.
    THERMAL_COEFFICIENT = 99,
    /// 1 where it is in °F.
    THERMAL_FAHRENHEIT = 106,
    /// Its gauge factor.
    THERMAL_GAUGE_FACTOR = 107,
    /// Its range, °C: two fields.
    THERMAL_RANGE = 108,
    /// Gauge factor of points of thermal output; absent = none.
    POINTS_GAUGE_FACTOR = 110,
    /// Expansion of the specimen, 1/K; absent = as the data.
    EXPANSION_SPECIMEN = 111,
    /// Expansion of the material of the data, 1/K.
    EXPANSION_DATA = 112,
    /// Zero: 0 none, 1 as recorded, 2 as output over supply.
    ZERO_KIND = 113,
    /// Its reading.
    ZERO_READING = 114,
    /// Its meaning: 0 strain, 1 resistance, 2 completion.
    ZERO_MEANING = 115,
    /// Temperature at zero, °C; absent = not stated.
    ZERO_TEMPERATURE = 116,
    /// Temperature of the leads at zero, °C.
    ZERO_LEAD_TEMPERATURE = 117,
    /// Temperatures of arms at zero, °C: four fields.
    ZERO_ARM_TEMPERATURE = 118,
    /// Largest believed |strain|, as a ratio (0.05 is 50 000 microstrain), or |load|: needed by sensors 0 to 2.
    LIMIT = 122,
    /// Rated output, V/V (sensor 1; its bridge has four driven arms with factors 1, -1, 1, -1).
    RATED = 123,
    /// The load that gives it, in the unit of the result.
    CAPACITY = 124,
    /// Polynomial of a certificate: seven fields.
    CERTIFICATE_COEFFICIENT = 125,
    /// 1 where it gives the output of a load.
    CERTIFICATE_GIVES_OUTPUT = 132,
    /// Power of ten of the unit of its output.
    CERTIFICATE_EXPONENT = 133,
    /// What its loads are multiplied by.
    CERTIFICATE_SCALE = 134,
    /// Its range: two fields.
    CERTIFICATE_RANGE = 135,
    /// Resistance of the law: R0, R25, at the triple point, of the ratio, Ω.
    LAW_OHMS = 137,
    /// Coefficients of the law: eight fields. Platinum A, B, C, or alpha, delta, beta; beta of a thermistor in K; Steinhart-Hart
    /// a, b, c; four terms a, b, c, d; ITS-90 a, b, c, … of its deviation; nickel and copper in the order of their equations.
    LAW_COEFFICIENT = 138,
    /// Range of the law, °C: two fields.
    LAW_RANGE = 146,
    /// Subrange of ITS-90: from 0 hydrogen, 1 neon, 2 oxygen, 3 argon to the triple point of water, 4 mercury to gallium, and up
    /// to 5 gallium, 6 indium, 7 tin, 8 zinc, 9 aluminium, 10 silver.
    SUBRANGE = 148,
    /// Type of a thermocouple: 0 B, 1 E, 2 J, 3 K, 4 N, 5 R, 6 S, 7 T.
    THERMOCOUPLE = 149,
    /// What a reading that is passed on is multiplied by (sensor 14); absent = 1.
    SCALE = 150,
    /// What is added then; absent = 0.
    SCALE_OFFSET = 151,
    /// Number of points of a table.
    POINT_COUNT = 152,
    /// Their temperatures, °C: 24 fields.
    POINT_CELSIUS = 153,
    /// Their values, microstrain or Ω: 24 fields.
    POINT_VALUE = 177,
}

/// One more than the highest field.
pub const COUNT: usize = 201;

/// Why values make no chain.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
#[non_exhaustive]
pub enum FieldError {
    /// No field has this number.
    Unknown(u16),
    /// A field is needed and absent.
    Missing(u16),
    /// A field stands for a choice that has no such number.
    NoChoice(u16),
}

/// Numbered values, each present or absent.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Fields {
    values: [f64; COUNT],
    present: [bool; COUNT],
}

impl Default for Fields {
    fn default() -> Self {
        Self::new()
    }
}

impl Fields {
    /// Returns no value at all.
    #[must_use]
    pub const fn new() -> Self {
        Self { values: [0.0; COUNT], present: [false; COUNT] }
    }

    /// Sets a field.
    ///
    /// # Errors
    /// `FieldError::Unknown` for a number that no field has.
    pub fn set(&mut self, field: u16, value: f64) -> Result<(), FieldError> {
        if !NAMES.iter().any(|(first, _)| (*first..*first + width(*first)).contains(&field)) {
            return Err(FieldError::Unknown(field));
        }
        self.put(field, value);
        Ok(())
    }

    fn put(&mut self, field: u16, value: f64) {
        let at = usize::from(field);
        if let (Some(slot), Some(present)) = (self.values.get_mut(at), self.present.get_mut(at)) {
            (*slot, *present) = (value, true);
        }
    }

    fn put_all(&mut self, first: u16, values: &[f64]) {
        for (field, value) in (first..).zip(values) {
            self.put(field, *value);
        }
    }

    fn maybe(&mut self, field: u16, value: Option<f64>) {
        if let Some(value) = value {
            self.put(field, value);
        }
    }

    /// Visits what is present, in the order of the numbers.
    pub fn iter(&self) -> impl Iterator<Item = (u16, f64)> + '_ {
        (0..)
            .zip(self.values.iter().zip(&self.present))
            .filter(|(_, (_, present))| **present)
            .map(|(n, (v, _))| (n, *v))
    }

    fn has(&self, field: u16) -> bool {
        self.present.get(usize::from(field)).copied().unwrap_or(false)
    }

    fn get(&self, field: u16) -> Option<f64> {
        self.values.get(usize::from(field)).copied().filter(|_| self.has(field))
    }

    fn need(&self, field: u16) -> Result<f64, FieldError> {
        self.get(field).ok_or(FieldError::Missing(field))
    }

    fn or(&self, field: u16, default: f64) -> f64 {
        self.get(field).unwrap_or(default)
    }

    fn flag(&self, field: u16) -> Result<bool, FieldError> {
        self.choice(field, Some(0.0), &[false, true])
    }

    fn all<const N: usize>(&self, first: u16) -> Result<[f64; N], FieldError> {
        let mut out = [0.0; N];
        for (slot, field) in out.iter_mut().zip(first..) {
            *slot = self.need(field)?;
        }
        Ok(out)
    }

    fn small(&self, field: u16, default: f64) -> Result<i8, FieldError> {
        let value = self.or(field, default);
        if (-128.0..=127.0).contains(&value) && value == f64::from(value as i8) {
            Ok(value as i8)
        } else {
            Err(FieldError::NoChoice(field))
        }
    }

    /// One of a few choices by its number.
    fn choice<T: Copy>(&self, field: u16, default: Option<f64>, choices: &[T]) -> Result<T, FieldError> {
        let value = match (self.get(field), default) {
            (Some(value), _) | (None, Some(value)) => value,
            (None, None) => return Err(FieldError::Missing(field)),
        };
        let found = choices.iter().enumerate().find(|(n, _)| *n as f64 == value);
        found.map(|(_, choice)| *choice).ok_or(FieldError::NoChoice(field))
    }
}

/// How many fields follow one another under a name.
const fn width(first: u16) -> u16 {
    match first {
        AMPLIFIER_INPUT | AMPLIFIER_FEEDBACK | SUPPLY_LEADS_OHMS | SIGNAL_LEADS_OHMS | THERMAL_RANGE
        | CERTIFICATE_RANGE | LAW_RANGE => 2,
        LEAD_OHMS | LEAD_LENGTH | LEAD_AREA | LEAD_RESISTIVITY | SUPPLY_LEADS_RUN | SIGNAL_LEADS_RUN => 3,
        ARM_RESISTANCE | ARM_KIND | ARM_FACTOR | ARM_TEMPERATURE_KIND | ARM_TEMPERATURE | ZERO_ARM_TEMPERATURE => 4,
        THERMAL_COEFFICIENT | CERTIFICATE_COEFFICIENT => 7,
        LAW_COEFFICIENT => 8,
        POINT_CELSIUS | POINT_VALUE => POINTS as u16,
        _ => 1,
    }
}

#[cfg(test)]
mod tests {
    extern crate std;
    use std::vec::Vec;

    use super::*;
    use crate::chain::{
        Chain, Element, LeadWarmth, Limit, Network, Output, Reading, SelfHeating, Signal, Supply, Temperature, Word,
    };
    use crate::metal::{self, COPPER_GOST_6651_2009, NICKEL_DIN_43760};
    use crate::platinum::its90::Deviation;
    use crate::platinum::{AlphaDeltaBeta, IEC_60751};
    use crate::signal::{
        Amplifier, Arm, Bridge, Coding, Conductor, Converter, Difference, Divider, Driven, Each, FullScale, Leads,
        Pair, Place, Reference, Shunt, Side, Wires,
    };
    use crate::strain::{Certificate, Gauge, Transducer, Zero, ZeroMeaning, ZeroReading};
    use crate::thermistor::{Beta, Law, LogarithmOfRatio, Points, ReciprocalOfTemperature, SteinhartHart};
    use crate::thermocouple::Thermocouple;

    /// Every variant of an enum: one that is missing here does not compile.
    macro_rules! every {
        ($type:ty: $($pattern:pat => $value:expr),+ $(,)?) => {{
            let known = |variant: &$type| match variant { $($pattern => {})+ };
            let all: Vec<$type> = std::vec![$($value),+];
            all.iter().for_each(known);
            all
        }};
    }

    /// Sets what the chain says as a C caller does, by numbers alone, and reads the chain again.
    fn comes_back(chain: &Chain) {
        let mut fields = Fields::new();
        for (number, value) in Fields::from(chain).iter() {
            fields.set(number, value).expect("a number of the list");
        }
        assert_eq!(fields.chain().as_ref(), Ok(chain));
    }

    fn plain() -> Chain {
        Chain::strain(Bridge::one_gauge(350.0), Gauge::new(2.0))
    }

    fn bridge(change: impl FnOnce(&mut Bridge)) -> Chain {
        let mut bridge = Bridge::one_gauge(350.0);
        change(&mut bridge);
        Chain { network: Network::Bridge(bridge), ..plain() }
    }

    #[test]
    fn every_variant_of_what_is_read() {
        for signal in every!(Signal: Signal::Volts => Signal::Volts, Signal::Ratio => Signal::Ratio,
            Signal::Ohms => Signal::Ohms, Signal::Count => Signal::Count, Signal::Quantity => Signal::Quantity)
        {
            comes_back(&Chain { reading: Reading { signal, exponent: -3 }, ..plain() });
        }
        let codings = every!(Coding: Coding::Signed => Coding::Signed, Coding::Offset => Coding::Offset,
            Coding::Unsigned => Coding::Unsigned);
        let scales =
            every!(FullScale: FullScale::Volts(_) => FullScale::Volts(2.5), FullScale::Supply => FullScale::Supply);
        for coding in codings {
            for full_scale in &scales {
                comes_back(&Chain {
                    converter: Some(Converter { bits: 24, full_scale: *full_scale, coding }),
                    ..plain()
                });
            }
        }
        let references =
            every!(Reference: Reference::Negative => Reference::Negative, Reference::Centre => Reference::Centre);
        for reference in references {
            for open_loop_gain in [None, Some(1e5)] {
                let circuit = Difference { input: [1.0, 2.0], feedback: [3.0, 4.0], open_loop_gain, reference };
                for amplifier in every!(Amplifier: Amplifier::None => Amplifier::None,
                    Amplifier::Gain { .. } => Amplifier::Gain { gain: 5.0, offset: 6.0 },
                    Amplifier::Difference { .. } => Amplifier::Difference { circuit, offset: 7.0 })
                {
                    comes_back(&Chain { amplifier, ..plain() });
                }
            }
        }
        for supply in every!(Supply: Supply::None => Supply::None, Supply::Fixed(_) => Supply::Fixed(2.5),
            Supply::Column { .. } => Supply::Column { exponent: -3 })
        {
            comes_back(&Chain { supply, ..plain() });
        }
        for temperature in temperatures() {
            let warmth = LeadWarmth { coefficient: 4e-3, reference_celsius: 20.0, temperature };
            comes_back(&Chain { temperature, arm_temperatures: [temperature; 4], ..plain() });
            comes_back(&Chain { lead_warmth: Some(warmth), ..plain() });
        }
        for output in every!(Output: Output::Strain { .. } => Output::Strain { exponent: 6 },
            Output::ShearStrain { .. } => Output::ShearStrain { exponent: 6 }, Output::Celsius => Output::Celsius,
            Output::Kelvin => Output::Kelvin, Output::Fahrenheit => Output::Fahrenheit, Output::AsRead => Output::AsRead)
        {
            comes_back(&Chain { output, ..plain() });
        }
        for word in Word::ALL {
            let limit = Some(Limit { at: 1.5, word });
            comes_back(&Chain { low_limit: limit, high_limit: limit, extrapolate: true, ..plain() });
        }
    }

    fn temperatures() -> Vec<Temperature> {
        every!(Temperature: Temperature::None => Temperature::None, Temperature::Fixed(_) => Temperature::Fixed(21.5),
            Temperature::Column => Temperature::Column)
    }

    #[test]
    fn every_variant_of_a_network() {
        for driven in every!(Driven: Driven::Along => Driven::Along, Driven::Across => Driven::Across) {
            for arm in every!(Arm: Arm::Fixed => Arm::Fixed, Arm::Active { .. } => Arm::Active { factor: -1.5, driven },
                Arm::Dummy => Arm::Dummy)
            {
                comes_back(&bridge(|b| b.arms = [arm; 4]));
            }
        }
        let conductors = every!(Conductor: Conductor::Ohms(_) => Conductor::Ohms(1.5),
            Conductor::Run { .. } => Conductor::Run { metres: 12.0, square_millimetres: 0.25, ohm_metres: 1.7e-8 });
        for conductor in conductors {
            for pair in every!(Pair: Pair::Same(_) => Pair::Same(0.5), Pair::Own(_) => Pair::Own([0.5, 0.6]),
                Pair::Run(_) => Pair::Run(conductor))
            {
                comes_back(&bridge(|b| (b.supply_leads, b.signal_leads) = (pair, pair)));
            }
            for each in every!(Each: Each::Same(_) => Each::Same(conductor), Each::Own(_) => Each::Own([conductor; 3]))
            {
                for wires in
                    every!(Wires: Wires::Two => Wires::Two, Wires::Three => Wires::Three, Wires::Four => Wires::Four)
                {
                    let leads = Some(Leads { wires, each });
                    comes_back(&bridge(|b| b.leads = leads));
                    comes_back(&Chain { network: Network::Resistance { leads }, ..plain() });
                }
            }
        }
        for place in every!(Place: Place::Gauge => Place::Gauge, Place::Instrument => Place::Instrument) {
            comes_back(&bridge(|b| b.shunt = Some(Shunt { arm: 1, ohms: 1e5, place })));
        }
        for sensor in every!(Side: Side::Low => Side::Low, Side::High => Side::High) {
            let divider = Divider { fixed: 10e3, sensor, input_resistance: Some(1e6) };
            for network in every!(Network: Network::Bridge(_) => Network::Bridge(Bridge::one_gauge(120.0)),
                Network::Resistance { .. } => Network::Resistance { leads: None },
                Network::Divider { .. } => Network::Divider { divider, leads: None }, Network::Direct => Network::Direct,
                Network::Reference { .. } => Network::Reference { ohms: 100.0, leads: None }, Network::Emf => Network::Emf)
            {
                comes_back(&Chain { network, ..plain() });
            }
        }
    }

    #[test]
    fn every_variant_of_a_sensor() {
        let meanings = every!(ZeroMeaning: ZeroMeaning::Strain => ZeroMeaning::Strain,
            ZeroMeaning::Resistance => ZeroMeaning::Resistance, ZeroMeaning::Completion => ZeroMeaning::Completion);
        for meaning in meanings {
            for reading in every!(Option<ZeroReading>: None => None,
                Some(ZeroReading::AsRecorded(_)) => Some(ZeroReading::AsRecorded(0.1)),
                Some(ZeroReading::Ratio(_)) => Some(ZeroReading::Ratio(0.2)))
            {
                let zero = Zero { reading, meaning, ..Zero::default() };
                let element = Element::Gauge { gauge: Gauge::new(2.1), zero, limit: 0.05 };
                comes_back(&Chain { element, ..plain() });
            }
        }
        let range_celsius = [-40.0, 150.0];
        let certificate = Certificate {
            coefficients: [0.1, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7],
            gives_output: true,
            output_exponent: -3,
            load_scale: 2.0,
            range: [0.0, 50.0],
        };
        let (a, b, c, d) = (0.1, 0.2, 0.3, 0.4);
        let laws = every!(Law: Law::Beta(_) => Law::Beta(Beta { r25_ohms: 1e4, beta_kelvin: 3950.0, range_celsius }),
            Law::SteinhartHart(_) => Law::SteinhartHart(SteinhartHart { a, b, c, range_celsius }),
            Law::LogarithmOfRatio(_) =>
                Law::LogarithmOfRatio(LogarithmOfRatio { reference_ohms: 1e4, a, b, c, d, range_celsius }),
            Law::ReciprocalOfTemperature(_) =>
                Law::ReciprocalOfTemperature(ReciprocalOfTemperature { reference_ohms: 1e4, a, b, c, d, range_celsius }),
            Law::Points(_) => Law::Points(Points::new(&[[0.0, 100.0], [10.0, 50.0]]).expect("a table")));
        let metals = every!(metal::Law: metal::Law::Nickel(_) => metal::Law::Nickel(NICKEL_DIN_43760),
            metal::Law::Copper(_) => metal::Law::Copper(COPPER_GOST_6651_2009));
        let transducers = every!(Transducer: Transducer::Rated { .. } => Transducer::Rated { output: 2e-3, capacity: 50.0 },
            Transducer::Certificate(_) => Transducer::Certificate(certificate));
        let deviations = every!(Deviation:
            Deviation::FromHydrogen { .. } => Deviation::FromHydrogen { a, b, c: [1.0, 2.0, 3.0, 4.0, 5.0] },
            Deviation::FromNeon { .. } => Deviation::FromNeon { a, b, c: [1.0, 2.0, 3.0] },
            Deviation::FromOxygen { .. } => Deviation::FromOxygen { a, b, c1: c },
            Deviation::FromArgon { .. } => Deviation::FromArgon { a, b },
            Deviation::MercuryToGallium { .. } => Deviation::MercuryToGallium { a, b },
            Deviation::ToGallium { .. } => Deviation::ToGallium { a }, Deviation::ToIndium { .. } => Deviation::ToIndium { a },
            Deviation::ToTin { .. } => Deviation::ToTin { a, b }, Deviation::ToZinc { .. } => Deviation::ToZinc { a, b },
            Deviation::ToAluminium { .. } => Deviation::ToAluminium { a, b, c },
            Deviation::ToSilver { .. } => Deviation::ToSilver { a, b, c, d, w_aluminium: 3.376 });
        let couples = every!(Thermocouple: Thermocouple::B => Thermocouple::B, Thermocouple::E => Thermocouple::E,
            Thermocouple::J => Thermocouple::J, Thermocouple::K => Thermocouple::K, Thermocouple::N => Thermocouple::N,
            Thermocouple::R => Thermocouple::R, Thermocouple::S => Thermocouple::S, Thermocouple::T => Thermocouple::T);
        let curve = AlphaDeltaBeta { r0_ohms: 100.0, alpha: 3.9e-3, delta: 1.5, beta: 0.1, range_celsius };
        let longest = laws.len().max(deviations.len()).max(couples.len());
        for n in 0..longest {
            for element in every!(Element:
                Element::Gauge { .. } => Element::Gauge { gauge: Gauge::new(2.0), zero: Zero::default(), limit: 0.1 },
                Element::Transducer { .. } =>
                    Element::Transducer { law: transducers[n % 2], zero: Zero::default(), limit: 60.0 },
                Element::Platinum(_) => Element::Platinum(IEC_60751),
                Element::AlphaDeltaBeta(_) => Element::AlphaDeltaBeta(curve),
                Element::Standard { .. } =>
                    Element::Standard { triple_point_ohms: 25.5, deviation: deviations[n % deviations.len()] },
                Element::Metal(_) => Element::Metal(metals[n % 2]),
                Element::Thermistor(_) => Element::Thermistor(laws[n % laws.len()]),
                Element::Thermocouple(_) => Element::Thermocouple(couples[n % couples.len()]),
                Element::Direct { .. } => Element::Direct { scale: 1.5, offset: 0.5 })
            {
                comes_back(&Chain { element, ..plain() });
            }
        }
        for amperes in [None, Some(1e-3)] {
            comes_back(&Chain { self_heating: Some(SelfHeating { kelvin_per_watt: 400.0, amperes }), ..plain() });
        }
    }
}
