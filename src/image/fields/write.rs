//! From a chain to its fields.

use super::*;
use crate::chain::{Chain, Element, Network, Output, Signal, Supply, Temperature};
use crate::metal;
use crate::platinum::its90::Deviation;
use crate::signal::{
    Amplifier, Arm, Coding, Conductor, Converter, Driven, Each, FullScale, Leads, Pair, Place, Reference, Side, Wires,
};
use crate::strain::{Transducer, Zero, ZeroMeaning, ZeroReading};
use crate::thermistor::Law;
use crate::thermocouple::Thermocouple;

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
