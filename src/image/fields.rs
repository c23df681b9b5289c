//! A chain as numbered values: what an image holds and what a C caller sets.

use crate::chain::{
    Chain, Element, LeadWarmth, Limit, Network, Output, Reading, SelfHeating, Signal, Supply, Temperature, Word,
};
use crate::metal;
use crate::platinum::its90::Deviation;
use crate::platinum::{AlphaDeltaBeta, Coefficients};
use crate::signal::{
    Amplifier, Arm, Around, Bridge, Coding, Conductor, Converter, Difference, Divider, Driven, Each, FullScale, Leads,
    Pair, Place, Reference, Shunt, Side, Wires,
};
use crate::strain::{
    self, Certificate, Expansion, Gauge, ThermalOutput, ThermalPoints, Transducer, Transverse, Zero, ZeroMeaning,
    ZeroReading,
};
use crate::thermistor::{self, Beta, Law, LogarithmOfRatio, ReciprocalOfTemperature, SteinhartHart};
use crate::thermocouple::Thermocouple;

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
    /// What is recorded: 0 V, 1 V/V, 2 Ω, 3 codes, 4 the quantity itself.
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
    /// Network: 0 bridge, 1 resistance, 2 divider, 3 none, 4 ratio to a reference resistor, 5 the sensor's own voltage.
    NETWORK = 17,
    /// Sensor: 0 gauge, 1 rated transducer, 2 transducer by certificate, 3 platinum, 4 platinum by alpha, delta, beta, 5 ITS-90,
    /// 6 nickel, 7 copper, 8 beta, 9 Steinhart-Hart, 10 logarithm of ratio, 11 reciprocal of temperature, 12 points of a
    /// thermistor, 13 thermocouple, 14 none.
    ELEMENT = 18,
    /// Resistances of the arms, Ω: four fields.
    ARM_RESISTANCE = 20,
    /// Arms: 0 fixed, 1 driven along, 2 driven across, 3 dummy: four fields.
    ARM_KIND = 24,
    /// Their strain factors: four fields.
    ARM_FACTOR = 28,
    /// Poisson's ratio.
    POISSON = 32,
    /// 1 where arm 2 was made up with the leads in place.
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
    /// Their resistances, Ω: three fields.
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
    /// Sensor of a divider: 0 low, 1 high.
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
    /// Result: 0 strain, 1 shear strain, 2 °C, 3 K, 4 °F, 5 as read.
    OUTPUT = 89,
    /// Power of ten that a strain is multiplied by.
    OUTPUT_EXPONENT = 90,
    /// 1 where laws are used outside their range.
    EXTRAPOLATE = 91,
    /// Lower limit of the readings; absent = none.
    LOW_LIMIT = 92,
    /// Its word.
    LOW_WORD = 93,
    /// Upper limit.
    HIGH_LIMIT = 94,
    /// Its word.
    HIGH_WORD = 95,
    /// Gauge factor.
    GAUGE_FACTOR = 96,
    /// Its slope, 1/K.
    GAUGE_SLOPE = 97,
    /// Its reference temperature, °C.
    GAUGE_REFERENCE = 98,
    /// Polynomial of thermal output: seven fields; absent = none.
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
    /// Largest believed |strain| or |load|.
    LIMIT = 122,
    /// Rated output, V/V.
    RATED = 123,
    /// Capacity.
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
    /// Coefficients of the law in the order of its equation: eight fields.
    LAW_COEFFICIENT = 138,
    /// Range of the law, °C: two fields.
    LAW_RANGE = 146,
    /// Subrange of ITS-90, 0 hydrogen to 10 silver, in the order of the library.
    SUBRANGE = 148,
    /// Type of a thermocouple: 0 B, 1 E, 2 J, 3 K, 4 N, 5 R, 6 S, 7 T.
    THERMOCOUPLE = 149,
    /// Scale of what is passed on.
    SCALE = 150,
    /// Its offset.
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

    fn flag(&self, field: u16) -> bool {
        self.or(field, 0.0) != 0.0
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

// ---- from a chain ---------------------------------------------------------------------------------------------------

impl From<&Chain> for Fields {
    fn from(chain: &Chain) -> Self {
        let mut f = Self::new();
        f.put(
            SIGNAL,
            match chain.reading.signal {
                Signal::Volts => 0.0,
                Signal::Ratio => 1.0,
                Signal::Ohms => 2.0,
                Signal::Count => 3.0,
                Signal::Quantity => 4.0,
            },
        );
        f.put(READING_EXPONENT, f64::from(chain.reading.exponent));
        f.converter(chain.converter.as_ref());
        f.amplifier(&chain.amplifier);
        match chain.supply {
            Supply::None => f.put(SUPPLY, 0.0),
            Supply::Fixed(v) => f.put_all(SUPPLY, &[1.0, v]),
            Supply::Column { exponent } => {
                f.put(SUPPLY, 2.0);
                f.put(SUPPLY_EXPONENT, f64::from(exponent));
            }
        }
        f.network(&chain.network);
        f.element(&chain.element);
        f.temperature(TEMPERATURE_KIND, TEMPERATURE, chain.temperature);
        for (n, t) in (0..).zip(chain.arm_temperatures) {
            f.temperature(ARM_TEMPERATURE_KIND + n, ARM_TEMPERATURE + n, t);
        }
        if let Some(w) = chain.lead_warmth {
            f.put_all(LEAD_COEFFICIENT, &[w.coefficient, w.reference_celsius]);
            f.temperature(LEAD_TEMPERATURE_KIND, LEAD_TEMPERATURE, w.temperature);
        }
        f.maybe(PARALLEL, chain.around.parallel);
        f.maybe(LEAKAGE, chain.around.leakage);
        f.maybe(SERIES, chain.around.series);
        if let Some(h) = chain.self_heating {
            f.put(SELF_HEATING, h.kelvin_per_watt);
            f.maybe(MEASURING_CURRENT, h.amperes);
        }
        if let Some(t) = chain.transverse {
            f.put_all(TRANSVERSE_SENSITIVITY, &[t.sensitivity, t.strain_ratio]);
        }
        match chain.output {
            Output::Strain { exponent } => f.put_all(OUTPUT, &[0.0, f64::from(exponent)]),
            Output::ShearStrain { exponent } => f.put_all(OUTPUT, &[1.0, f64::from(exponent)]),
            Output::Celsius => f.put(OUTPUT, 2.0),
            Output::Kelvin => f.put(OUTPUT, 3.0),
            Output::Fahrenheit => f.put(OUTPUT, 4.0),
            Output::AsRead => f.put(OUTPUT, 5.0),
        }
        f.put(EXTRAPOLATE, f64::from(u8::from(chain.extrapolate)));
        for (limit, field) in [(chain.low_limit, LOW_LIMIT), (chain.high_limit, HIGH_LIMIT)] {
            if let Some(limit) = limit {
                f.put_all(field, &[limit.at, f64::from(limit.word as u8)]);
            }
        }
        f
    }
}

impl Fields {
    fn converter(&mut self, converter: Option<&Converter>) {
        let Some(c) = converter else { return };
        self.put(CONVERTER_BITS, f64::from(c.bits));
        if let FullScale::Volts(v) = c.full_scale {
            self.put(CONVERTER_FULL_SCALE, v);
        }
        self.put(
            CONVERTER_CODING,
            match c.coding {
                Coding::Signed => 0.0,
                Coding::Offset => 1.0,
                Coding::Unsigned => 2.0,
            },
        );
    }

    fn amplifier(&mut self, amplifier: &Amplifier) {
        match *amplifier {
            Amplifier::None => self.put(AMPLIFIER, 0.0),
            Amplifier::Gain { gain, offset } => self.put_all(AMPLIFIER, &[1.0, gain, offset]),
            Amplifier::Difference { circuit, offset } => {
                self.put(AMPLIFIER, 2.0);
                self.put(AMPLIFIER_OFFSET, offset);
                self.put_all(AMPLIFIER_INPUT, &circuit.input);
                self.put_all(AMPLIFIER_FEEDBACK, &circuit.feedback);
                self.maybe(OPEN_LOOP_GAIN, circuit.open_loop_gain);
                let at = match circuit.reference {
                    Reference::Negative => 0.0,
                    Reference::Centre => 1.0,
                };
                self.put(AMPLIFIER_REFERENCE, at);
            }
        }
    }

    fn temperature(&mut self, kind: u16, value: u16, temperature: Temperature) {
        match temperature {
            Temperature::None => self.put(kind, 0.0),
            Temperature::Fixed(t) => {
                self.put(kind, 1.0);
                self.put(value, t);
            }
            Temperature::Column => self.put(kind, 2.0),
        }
    }

    fn conductor(&mut self, n: u16, conductor: Conductor) {
        match conductor {
            Conductor::Ohms(r) => self.put(LEAD_OHMS + n, r),
            Conductor::Run { metres, square_millimetres, ohm_metres } => {
                self.put(LEAD_LENGTH + n, metres);
                self.put(LEAD_AREA + n, square_millimetres);
                self.put(LEAD_RESISTIVITY + n, ohm_metres);
            }
        }
    }

    fn leads(&mut self, leads: Option<&Leads>) {
        let Some(leads) = leads else { return };
        let wires = match leads.wires {
            Wires::Two => 2.0,
            Wires::Three => 3.0,
            Wires::Four => 4.0,
        };
        self.put(LEAD_WIRES, wires);
        match leads.each {
            Each::Same(c) => {
                self.put(LEAD_KIND, 0.0);
                self.conductor(0, c);
            }
            Each::Own(all) => {
                self.put(LEAD_KIND, 1.0);
                for (n, c) in (0..).zip(all) {
                    self.conductor(n, c);
                }
            }
        }
    }

    fn pair(&mut self, kind: u16, ohms: u16, run: u16, pair: &Pair) {
        match *pair {
            Pair::Same(r) => {
                self.put(kind, 0.0);
                self.put(ohms, r);
            }
            Pair::Own(both) => {
                self.put(kind, 1.0);
                self.put_all(ohms, &both);
            }
            Pair::Run(conductor) => {
                self.put(kind, 2.0);
                match conductor {
                    Conductor::Ohms(r) => self.put(ohms, r),
                    Conductor::Run { metres, square_millimetres, ohm_metres } => {
                        self.put_all(run, &[metres, square_millimetres, ohm_metres]);
                    }
                }
            }
        }
    }

    fn network(&mut self, network: &Network) {
        match network {
            Network::Bridge(b) => {
                self.put(NETWORK, 0.0);
                self.put_all(ARM_RESISTANCE, &b.resistances);
                for (n, arm) in (0..).zip(b.arms) {
                    let (kind, factor) = match arm {
                        Arm::Fixed => (0.0, None),
                        Arm::Active { factor, driven: Driven::Along } => (1.0, Some(factor)),
                        Arm::Active { factor, driven: Driven::Across } => (2.0, Some(factor)),
                        Arm::Dummy => (3.0, None),
                    };
                    self.put(ARM_KIND + n, kind);
                    self.maybe(ARM_FACTOR + n, factor);
                }
                self.put(POISSON, b.poisson);
                self.put(BALANCED, f64::from(u8::from(b.balanced)));
                self.put(SENSED, f64::from(u8::from(b.sensed)));
                self.maybe(INPUT_RESISTANCE, b.input_resistance);
                if let Some(shunt) = b.shunt {
                    let place = match shunt.place {
                        Place::Gauge => 0.0,
                        Place::Instrument => 1.0,
                    };
                    self.put_all(SHUNT_ARM, &[f64::from(shunt.arm), shunt.ohms, place]);
                }
                self.leads(b.leads.as_ref());
                self.pair(SUPPLY_LEADS_KIND, SUPPLY_LEADS_OHMS, SUPPLY_LEADS_RUN, &b.supply_leads);
                self.pair(SIGNAL_LEADS_KIND, SIGNAL_LEADS_OHMS, SIGNAL_LEADS_RUN, &b.signal_leads);
            }
            Network::Resistance { leads } => {
                self.put(NETWORK, 1.0);
                self.leads(leads.as_ref());
            }
            Network::Divider { divider, leads } => {
                self.put(NETWORK, 2.0);
                let side = match divider.sensor {
                    Side::Low => 0.0,
                    Side::High => 1.0,
                };
                self.put_all(DIVIDER, &[divider.fixed, side]);
                self.maybe(INPUT_RESISTANCE, divider.input_resistance);
                self.leads(leads.as_ref());
            }
            Network::Direct => self.put(NETWORK, 3.0),
            Network::Reference { ohms, leads } => {
                self.put(NETWORK, 4.0);
                self.put(REFERENCE_RESISTOR, *ohms);
                self.leads(leads.as_ref());
            }
            Network::Emf => self.put(NETWORK, 5.0),
        }
    }

    fn points(&mut self, points: impl Iterator<Item = (f64, f64)>) {
        let mut count = 0_u16;
        for (n, (celsius, value)) in (0..).zip(points) {
            self.put(POINT_CELSIUS + n, celsius);
            self.put(POINT_VALUE + n, value);
            count = n + 1;
        }
        self.put(POINT_COUNT, f64::from(count));
    }

    fn zero(&mut self, zero: &Zero) {
        match zero.reading {
            None => self.put(ZERO_KIND, 0.0),
            Some(ZeroReading::AsRecorded(r)) => self.put_all(ZERO_KIND, &[1.0, r]),
            Some(ZeroReading::Ratio(y)) => self.put_all(ZERO_KIND, &[2.0, y]),
        }
        let meaning = match zero.meaning {
            ZeroMeaning::Strain => 0.0,
            ZeroMeaning::Resistance => 1.0,
            ZeroMeaning::Completion => 2.0,
        };
        self.put(ZERO_MEANING, meaning);
        self.maybe(ZERO_TEMPERATURE, zero.celsius);
        self.maybe(ZERO_LEAD_TEMPERATURE, zero.lead_celsius);
        for (n, t) in (0..).zip(zero.arm_celsius) {
            self.maybe(ZERO_ARM_TEMPERATURE + n, t);
        }
    }

    fn law(&mut self, element: f64, ohms: Option<f64>, coefficients: &[f64], range: Option<[f64; 2]>) {
        self.put(ELEMENT, element);
        self.maybe(LAW_OHMS, ohms);
        self.put_all(LAW_COEFFICIENT, coefficients);
        if let Some(range) = range {
            self.put_all(LAW_RANGE, &range);
        }
    }

    fn element(&mut self, element: &Element) {
        match element {
            Element::Gauge { gauge, zero, limit } => {
                self.put(ELEMENT, 0.0);
                self.put_all(GAUGE_FACTOR, &[gauge.factor, gauge.slope, gauge.reference_celsius]);
                if let Some(t) = &gauge.thermal_output {
                    self.put_all(THERMAL_COEFFICIENT, &t.coefficients);
                    self.put_all(THERMAL_FAHRENHEIT, &[f64::from(u8::from(t.fahrenheit)), t.gauge_factor]);
                    self.put_all(THERMAL_RANGE, &t.range_celsius);
                }
                if let Some(t) = &gauge.thermal_points {
                    self.put(POINTS_GAUGE_FACTOR, t.gauge_factor);
                    self.points(t.points.points());
                }
                if let Some(e) = &gauge.expansion {
                    self.put_all(EXPANSION_SPECIMEN, &[e.specimen, e.data]);
                }
                self.zero(zero);
                self.put(LIMIT, *limit);
            }
            Element::Transducer { law, zero, limit } => {
                match law {
                    Transducer::Rated { output, capacity } => {
                        self.put(ELEMENT, 1.0);
                        self.put_all(RATED, &[*output, *capacity]);
                    }
                    Transducer::Certificate(k) => {
                        self.put(ELEMENT, 2.0);
                        self.put_all(CERTIFICATE_COEFFICIENT, &k.coefficients);
                        let gives_output = f64::from(u8::from(k.gives_output));
                        let exponent = f64::from(k.output_exponent);
                        self.put_all(CERTIFICATE_GIVES_OUTPUT, &[gives_output, exponent, k.load_scale]);
                        self.put_all(CERTIFICATE_RANGE, &k.range);
                    }
                }
                self.zero(zero);
                self.put(LIMIT, *limit);
            }
            Element::Platinum(k) => self.law(3.0, Some(k.r0_ohms), &[k.a, k.b, k.c], Some(k.range_celsius)),
            Element::AlphaDeltaBeta(k) => {
                self.law(4.0, Some(k.r0_ohms), &[k.alpha, k.delta, k.beta], Some(k.range_celsius));
            }
            Element::Standard { triple_point_ohms, deviation } => {
                let (subrange, k) = match *deviation {
                    Deviation::FromHydrogen { a, b, c: [c1, c2, c3, c4, c5] } => (0, [a, b, c1, c2, c3, c4, c5]),
                    Deviation::FromNeon { a, b, c: [c1, c2, c3] } => (1, [a, b, c1, c2, c3, 0.0, 0.0]),
                    Deviation::FromOxygen { a, b, c1 } => (2, [a, b, c1, 0.0, 0.0, 0.0, 0.0]),
                    Deviation::FromArgon { a, b } => (3, [a, b, 0.0, 0.0, 0.0, 0.0, 0.0]),
                    Deviation::MercuryToGallium { a, b } => (4, [a, b, 0.0, 0.0, 0.0, 0.0, 0.0]),
                    Deviation::ToGallium { a } => (5, [a, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0]),
                    Deviation::ToIndium { a } => (6, [a, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0]),
                    Deviation::ToTin { a, b } => (7, [a, b, 0.0, 0.0, 0.0, 0.0, 0.0]),
                    Deviation::ToZinc { a, b } => (8, [a, b, 0.0, 0.0, 0.0, 0.0, 0.0]),
                    Deviation::ToAluminium { a, b, c } => (9, [a, b, c, 0.0, 0.0, 0.0, 0.0]),
                    Deviation::ToSilver { a, b, c, d, w_aluminium } => (10, [a, b, c, d, w_aluminium, 0.0, 0.0]),
                };
                self.put(SUBRANGE, f64::from(subrange));
                self.law(5.0, Some(*triple_point_ohms), &k, None);
            }
            Element::Metal(metal::Law::Nickel(k)) => {
                self.law(6.0, Some(k.r0_ohms), &[k.a, k.b, k.d, k.f], Some(k.range_celsius));
            }
            Element::Metal(metal::Law::Copper(k)) => {
                self.law(7.0, Some(k.r0_ohms), &[k.a, k.b, k.c], Some(k.range_celsius));
            }
            Element::Thermistor(Law::Beta(k)) => {
                self.law(8.0, Some(k.r25_ohms), &[k.beta_kelvin], Some(k.range_celsius));
            }
            Element::Thermistor(Law::SteinhartHart(k)) => self.law(9.0, None, &[k.a, k.b, k.c], Some(k.range_celsius)),
            Element::Thermistor(Law::LogarithmOfRatio(k)) => {
                self.law(10.0, Some(k.reference_ohms), &[k.a, k.b, k.c, k.d], Some(k.range_celsius));
            }
            Element::Thermistor(Law::ReciprocalOfTemperature(k)) => {
                self.law(11.0, Some(k.reference_ohms), &[k.a, k.b, k.c, k.d], Some(k.range_celsius));
            }
            Element::Thermistor(Law::Points(k)) => {
                self.put(ELEMENT, 12.0);
                self.points(k.points());
            }
            Element::Thermocouple(kind) => self.put_thermocouple(*kind),
            Element::Direct { scale, offset } => {
                self.put(ELEMENT, 14.0);
                self.put_all(SCALE, &[*scale, *offset]);
            }
        }
    }

    fn put_thermocouple(&mut self, kind: Thermocouple) {
        let number = match kind {
            Thermocouple::B => 0.0,
            Thermocouple::E => 1.0,
            Thermocouple::J => 2.0,
            Thermocouple::K => 3.0,
            Thermocouple::N => 4.0,
            Thermocouple::R => 5.0,
            Thermocouple::S => 6.0,
            Thermocouple::T => 7.0,
        };
        self.put(ELEMENT, 13.0);
        self.put(THERMOCOUPLE, number);
    }
}

// ---- to a chain -----------------------------------------------------------------------------------------------------

impl Fields {
    /// Returns the chain that these values say. Nothing is checked but what is present; [`Chain::plan`] checks the rest.
    ///
    /// # Errors
    /// `FieldError::Missing` for a value that is needed, `FieldError::NoChoice` for a number that stands for nothing.
    pub fn chain(&self) -> Result<Chain, FieldError> {
        let signals = [Signal::Volts, Signal::Ratio, Signal::Ohms, Signal::Count, Signal::Quantity];
        let reading =
            Reading { signal: self.choice(SIGNAL, None, &signals)?, exponent: self.small(READING_EXPONENT, 0.0)? };
        let supply = match self.choice(SUPPLY, Some(0.0), &[0, 1, 2])? {
            0 => Supply::None,
            1 => Supply::Fixed(self.need(SUPPLY_VALUE)?),
            _ => Supply::Column { exponent: self.small(SUPPLY_EXPONENT, 0.0)? },
        };
        let mut arm_temperatures = [Temperature::None; 4];
        for (n, slot) in (0..).zip(&mut arm_temperatures) {
            *slot = self.read_temperature(ARM_TEMPERATURE_KIND + n, ARM_TEMPERATURE + n)?;
        }
        let lead_warmth = match self.get(LEAD_COEFFICIENT) {
            None => None,
            Some(coefficient) => Some(LeadWarmth {
                coefficient,
                reference_celsius: self.need(LEAD_REFERENCE)?,
                temperature: self.read_temperature(LEAD_TEMPERATURE_KIND, LEAD_TEMPERATURE)?,
            }),
        };
        let self_heating = self
            .get(SELF_HEATING)
            .map(|kelvin_per_watt| SelfHeating { kelvin_per_watt, amperes: self.get(MEASURING_CURRENT) });
        let transverse = match self.get(TRANSVERSE_SENSITIVITY) {
            None => None,
            Some(sensitivity) => Some(Transverse { sensitivity, strain_ratio: self.need(STRAIN_RATIO)? }),
        };
        let exponent = self.small(OUTPUT_EXPONENT, 0.0)?;
        let outputs = [
            Output::Strain { exponent },
            Output::ShearStrain { exponent },
            Output::Celsius,
            Output::Kelvin,
            Output::Fahrenheit,
            Output::AsRead,
        ];
        Ok(Chain {
            reading,
            converter: self.read_converter()?,
            amplifier: self.read_amplifier()?,
            supply,
            network: self.read_network()?,
            element: self.read_element()?,
            temperature: self.read_temperature(TEMPERATURE_KIND, TEMPERATURE)?,
            arm_temperatures,
            lead_warmth,
            around: Around { parallel: self.get(PARALLEL), leakage: self.get(LEAKAGE), series: self.get(SERIES) },
            self_heating,
            transverse,
            output: self.choice(OUTPUT, None, &outputs)?,
            extrapolate: self.flag(EXTRAPOLATE),
            low_limit: self.read_limit(LOW_LIMIT)?,
            high_limit: self.read_limit(HIGH_LIMIT)?,
        })
    }

    fn read_converter(&self) -> Result<Option<Converter>, FieldError> {
        if !self.has(CONVERTER_BITS) {
            return Ok(None);
        }
        let bits = u8::try_from(self.small(CONVERTER_BITS, 0.0)?).map_err(|_| FieldError::NoChoice(CONVERTER_BITS))?;
        let codings = [Coding::Signed, Coding::Offset, Coding::Unsigned];
        Ok(Some(Converter {
            bits,
            full_scale: self.get(CONVERTER_FULL_SCALE).map_or(FullScale::Supply, FullScale::Volts),
            coding: self.choice(CONVERTER_CODING, Some(0.0), &codings)?,
        }))
    }

    fn read_amplifier(&self) -> Result<Amplifier, FieldError> {
        let offset = self.or(AMPLIFIER_OFFSET, 0.0);
        Ok(match self.choice(AMPLIFIER, Some(0.0), &[0, 1, 2])? {
            0 => Amplifier::None,
            1 => Amplifier::Gain { gain: self.need(GAIN)?, offset },
            _ => Amplifier::Difference {
                circuit: Difference {
                    input: self.all(AMPLIFIER_INPUT)?,
                    feedback: self.all(AMPLIFIER_FEEDBACK)?,
                    open_loop_gain: self.get(OPEN_LOOP_GAIN),
                    reference: self.choice(
                        AMPLIFIER_REFERENCE,
                        Some(0.0),
                        &[Reference::Negative, Reference::Centre],
                    )?,
                },
                offset,
            },
        })
    }

    fn read_temperature(&self, kind: u16, value: u16) -> Result<Temperature, FieldError> {
        Ok(match self.choice(kind, Some(0.0), &[0, 1, 2])? {
            0 => Temperature::None,
            1 => Temperature::Fixed(self.need(value)?),
            _ => Temperature::Column,
        })
    }

    fn read_limit(&self, at: u16) -> Result<Option<Limit>, FieldError> {
        let Some(value) = self.get(at) else { return Ok(None) };
        Ok(Some(Limit { at: value, word: self.choice(at + 1, None, &Word::ALL)? }))
    }

    fn read_conductor(&self, n: u16) -> Result<Conductor, FieldError> {
        match self.get(LEAD_LENGTH + n) {
            None => Ok(Conductor::Ohms(self.need(LEAD_OHMS + n)?)),
            Some(metres) => Ok(Conductor::Run {
                metres,
                square_millimetres: self.need(LEAD_AREA + n)?,
                ohm_metres: self.need(LEAD_RESISTIVITY + n)?,
            }),
        }
    }

    fn read_leads(&self) -> Result<Option<Leads>, FieldError> {
        let wires = match self.get(LEAD_WIRES) {
            None => return Ok(None),
            Some(2.0) => Wires::Two,
            Some(3.0) => Wires::Three,
            Some(4.0) => Wires::Four,
            Some(_) => return Err(FieldError::NoChoice(LEAD_WIRES)),
        };
        let each = match self.choice(LEAD_KIND, Some(0.0), &[0, 1])? {
            0 => Each::Same(self.read_conductor(0)?),
            _ => Each::Own([self.read_conductor(0)?, self.read_conductor(1)?, self.read_conductor(2)?]),
        };
        Ok(Some(Leads { wires, each }))
    }

    fn read_pair(&self, kind: u16, ohms: u16, run: u16) -> Result<Pair, FieldError> {
        Ok(match self.choice(kind, Some(0.0), &[0, 1, 2])? {
            0 => Pair::Same(self.or(ohms, 0.0)),
            1 => Pair::Own(self.all(ohms)?),
            _ => Pair::Run(match self.get(ohms) {
                Some(r) => Conductor::Ohms(r),
                None => {
                    let [metres, square_millimetres, ohm_metres] = self.all(run)?;
                    Conductor::Run { metres, square_millimetres, ohm_metres }
                }
            }),
        })
    }

    fn read_bridge(&self) -> Result<Bridge, FieldError> {
        let mut arms = [Arm::Fixed; 4];
        for (n, arm) in (0..).zip(&mut arms) {
            let factor = |driven| Ok(Arm::Active { factor: self.need(ARM_FACTOR + n)?, driven });
            *arm = match self.choice(ARM_KIND + n, Some(0.0), &[0, 1, 2, 3])? {
                0 => Arm::Fixed,
                1 => factor(Driven::Along)?,
                2 => factor(Driven::Across)?,
                _ => Arm::Dummy,
            };
        }
        let shunt = match self.get(SHUNT_ARM) {
            None => None,
            Some(_) => Some(Shunt {
                arm: self.choice(SHUNT_ARM, None, &[0, 1, 2, 3, 4])?,
                ohms: self.need(SHUNT_OHMS)?,
                place: self.choice(SHUNT_PLACE, Some(0.0), &[Place::Gauge, Place::Instrument])?,
            }),
        };
        Ok(Bridge {
            resistances: self.all(ARM_RESISTANCE)?,
            arms,
            poisson: self.or(POISSON, 0.0),
            leads: self.read_leads()?,
            balanced: self.flag(BALANCED),
            supply_leads: self.read_pair(SUPPLY_LEADS_KIND, SUPPLY_LEADS_OHMS, SUPPLY_LEADS_RUN)?,
            signal_leads: self.read_pair(SIGNAL_LEADS_KIND, SIGNAL_LEADS_OHMS, SIGNAL_LEADS_RUN)?,
            sensed: self.flag(SENSED),
            input_resistance: self.get(INPUT_RESISTANCE),
            shunt,
        })
    }

    fn read_network(&self) -> Result<Network, FieldError> {
        Ok(match self.choice(NETWORK, None, &[0, 1, 2, 3, 4, 5])? {
            0 => Network::Bridge(self.read_bridge()?),
            1 => Network::Resistance { leads: self.read_leads()? },
            2 => Network::Divider {
                divider: Divider {
                    fixed: self.need(DIVIDER)?,
                    sensor: self.choice(DIVIDER_SIDE, None, &[Side::Low, Side::High])?,
                    input_resistance: self.get(INPUT_RESISTANCE),
                },
                leads: self.read_leads()?,
            },
            3 => Network::Direct,
            4 => Network::Reference { ohms: self.need(REFERENCE_RESISTOR)?, leads: self.read_leads()? },
            _ => Network::Emf,
        })
    }

    fn read_points(&self) -> Result<([[f64; 2]; POINTS], usize), FieldError> {
        let count = usize::try_from(self.small(POINT_COUNT, 0.0)?).map_err(|_| FieldError::NoChoice(POINT_COUNT))?;
        if count > POINTS {
            return Err(FieldError::NoChoice(POINT_COUNT));
        }
        let mut points = [[0.0; 2]; POINTS];
        for (n, point) in (0..).zip(&mut points).take(count) {
            *point = [self.need(POINT_CELSIUS + n)?, self.need(POINT_VALUE + n)?];
        }
        Ok((points, count))
    }

    fn read_zero(&self) -> Result<Zero, FieldError> {
        let reading = match self.choice(ZERO_KIND, Some(0.0), &[0, 1, 2])? {
            0 => None,
            1 => Some(ZeroReading::AsRecorded(self.need(ZERO_READING)?)),
            _ => Some(ZeroReading::Ratio(self.need(ZERO_READING)?)),
        };
        let meanings = [ZeroMeaning::Strain, ZeroMeaning::Resistance, ZeroMeaning::Completion];
        let mut arm_celsius = [None; 4];
        for (n, slot) in (0..).zip(&mut arm_celsius) {
            *slot = self.get(ZERO_ARM_TEMPERATURE + n);
        }
        Ok(Zero {
            reading,
            meaning: self.choice(ZERO_MEANING, Some(0.0), &meanings)?,
            celsius: self.get(ZERO_TEMPERATURE),
            lead_celsius: self.get(ZERO_LEAD_TEMPERATURE),
            arm_celsius,
        })
    }

    fn read_gauge(&self) -> Result<Gauge, FieldError> {
        let thermal_output = match self.get(THERMAL_COEFFICIENT) {
            None => None,
            Some(_) => Some(ThermalOutput {
                coefficients: self.all(THERMAL_COEFFICIENT)?,
                fahrenheit: self.flag(THERMAL_FAHRENHEIT),
                gauge_factor: self.need(THERMAL_GAUGE_FACTOR)?,
                range_celsius: self.all(THERMAL_RANGE)?,
            }),
        };
        let thermal_points = match self.get(POINTS_GAUGE_FACTOR) {
            None => None,
            Some(gauge_factor) => {
                let (points, count) = self.read_points()?;
                let points = strain::Points::new(points.get(..count).unwrap_or(&[]));
                Some(ThermalPoints { points: points.map_err(|_| FieldError::NoChoice(POINT_COUNT))?, gauge_factor })
            }
        };
        let expansion = match self.get(EXPANSION_SPECIMEN) {
            None => None,
            Some(specimen) => Some(Expansion { specimen, data: self.need(EXPANSION_DATA)? }),
        };
        Ok(Gauge {
            factor: self.need(GAUGE_FACTOR)?,
            slope: self.or(GAUGE_SLOPE, 0.0),
            reference_celsius: self.or(GAUGE_REFERENCE, 24.0),
            thermal_output,
            thermal_points,
            expansion,
        })
    }

    fn read_element(&self) -> Result<Element, FieldError> {
        let k = |n: u16| self.need(LAW_COEFFICIENT + n);
        let ohms = || self.need(LAW_OHMS);
        let range = || self.all::<2>(LAW_RANGE);
        let number = self.need(ELEMENT)?;
        let kinds = [0_u8, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12, 13, 14];
        Ok(match kinds.into_iter().find(|kind| f64::from(*kind) == number) {
            Some(0) => Element::Gauge { gauge: self.read_gauge()?, zero: self.read_zero()?, limit: self.need(LIMIT)? },
            Some(1) => Element::Transducer {
                law: Transducer::Rated { output: self.need(RATED)?, capacity: self.need(CAPACITY)? },
                zero: self.read_zero()?,
                limit: self.need(LIMIT)?,
            },
            Some(2) => Element::Transducer {
                law: Transducer::Certificate(Certificate {
                    coefficients: self.all(CERTIFICATE_COEFFICIENT)?,
                    gives_output: self.flag(CERTIFICATE_GIVES_OUTPUT),
                    output_exponent: self.small(CERTIFICATE_EXPONENT, -3.0)?,
                    load_scale: self.or(CERTIFICATE_SCALE, 1.0),
                    range: self.all(CERTIFICATE_RANGE)?,
                }),
                zero: self.read_zero()?,
                limit: self.need(LIMIT)?,
            },
            Some(3) => Element::Platinum(Coefficients {
                r0_ohms: ohms()?,
                a: k(0)?,
                b: k(1)?,
                c: k(2)?,
                range_celsius: range()?,
            }),
            Some(4) => Element::AlphaDeltaBeta(AlphaDeltaBeta {
                r0_ohms: ohms()?,
                alpha: k(0)?,
                delta: k(1)?,
                beta: k(2)?,
                range_celsius: range()?,
            }),
            Some(5) => Element::Standard { triple_point_ohms: ohms()?, deviation: self.read_deviation()? },
            Some(6) => Element::Metal(metal::Law::Nickel(metal::Nickel {
                r0_ohms: ohms()?,
                a: k(0)?,
                b: k(1)?,
                d: k(2)?,
                f: k(3)?,
                range_celsius: range()?,
            })),
            Some(7) => Element::Metal(metal::Law::Copper(metal::Copper {
                r0_ohms: ohms()?,
                a: k(0)?,
                b: k(1)?,
                c: k(2)?,
                range_celsius: range()?,
            })),
            Some(8) => {
                Element::Thermistor(Law::Beta(Beta { r25_ohms: ohms()?, beta_kelvin: k(0)?, range_celsius: range()? }))
            }
            Some(9) => Element::Thermistor(Law::SteinhartHart(SteinhartHart {
                a: k(0)?,
                b: k(1)?,
                c: k(2)?,
                range_celsius: range()?,
            })),
            Some(10) => Element::Thermistor(Law::LogarithmOfRatio(LogarithmOfRatio {
                reference_ohms: ohms()?,
                a: k(0)?,
                b: k(1)?,
                c: k(2)?,
                d: k(3)?,
                range_celsius: range()?,
            })),
            Some(11) => Element::Thermistor(Law::ReciprocalOfTemperature(ReciprocalOfTemperature {
                reference_ohms: ohms()?,
                a: k(0)?,
                b: k(1)?,
                c: k(2)?,
                d: k(3)?,
                range_celsius: range()?,
            })),
            Some(12) => {
                let (points, count) = self.read_points()?;
                let points = thermistor::Points::new(points.get(..count).unwrap_or(&[]));
                Element::Thermistor(Law::Points(points.map_err(|_| FieldError::NoChoice(POINT_COUNT))?))
            }
            Some(13) => Element::Thermocouple(self.choice(THERMOCOUPLE, None, &Thermocouple::ALL)?),
            Some(14) => Element::Direct { scale: self.or(SCALE, 1.0), offset: self.or(SCALE_OFFSET, 0.0) },
            _ => return Err(FieldError::NoChoice(ELEMENT)),
        })
    }

    fn read_deviation(&self) -> Result<Deviation, FieldError> {
        let k = |n: u16| self.need(LAW_COEFFICIENT + n);
        Ok(match self.choice(SUBRANGE, None, &[0, 1, 2, 3, 4, 5, 6, 7, 8, 9, 10])? {
            0 => Deviation::FromHydrogen { a: k(0)?, b: k(1)?, c: [k(2)?, k(3)?, k(4)?, k(5)?, k(6)?] },
            1 => Deviation::FromNeon { a: k(0)?, b: k(1)?, c: [k(2)?, k(3)?, k(4)?] },
            2 => Deviation::FromOxygen { a: k(0)?, b: k(1)?, c1: k(2)? },
            3 => Deviation::FromArgon { a: k(0)?, b: k(1)? },
            4 => Deviation::MercuryToGallium { a: k(0)?, b: k(1)? },
            5 => Deviation::ToGallium { a: k(0)? },
            6 => Deviation::ToIndium { a: k(0)? },
            7 => Deviation::ToTin { a: k(0)?, b: k(1)? },
            8 => Deviation::ToZinc { a: k(0)?, b: k(1)? },
            9 => Deviation::ToAluminium { a: k(0)?, b: k(1)?, c: k(2)? },
            _ => Deviation::ToSilver { a: k(0)?, b: k(1)?, c: k(2)?, d: k(3)?, w_aluminium: k(4)? },
        })
    }
}
