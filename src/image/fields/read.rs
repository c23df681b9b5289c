//! From fields to the chain that they say.

use super::*;
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
            extrapolate: self.flag(EXTRAPOLATE)?,
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
            balanced: self.flag(BALANCED)?,
            supply_leads: self.read_pair(SUPPLY_LEADS_KIND, SUPPLY_LEADS_OHMS, SUPPLY_LEADS_RUN)?,
            signal_leads: self.read_pair(SIGNAL_LEADS_KIND, SIGNAL_LEADS_OHMS, SIGNAL_LEADS_RUN)?,
            sensed: self.flag(SENSED)?,
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
                fahrenheit: self.flag(THERMAL_FAHRENHEIT)?,
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
                    gives_output: self.flag(CERTIFICATE_GIVES_OUTPUT)?,
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
