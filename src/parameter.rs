//! Stable names of everything in a chain that has a value, and so an uncertainty.

use core::fmt;

/// One parameter of a chain. Printed as the key under which a measurement sheet states it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
#[non_exhaustive]
pub enum Parameter {
    /// Supply, V, or current of a current source, A.
    Supply,
    /// Converter full scale, V.
    FullScale,
    /// Amplifier gain.
    Gain,
    /// Amplifier offset referred to its output, V.
    Offset,
    /// Input resistor of a difference amplifier, Ω: 1 inverting, 2 non-inverting side.
    AmplifierInput(u8),
    /// Feedback resistor of a difference amplifier, Ω: 1 inverting, 2 non-inverting side.
    AmplifierFeedback(u8),
    /// Open-loop gain of the operational amplifier.
    OpenLoopGain,
    /// Resistance of arm 1..=4, Ω.
    ArmResistance(u8),
    /// Strain factor of arm 1..=4.
    ArmFactor(u8),
    /// Poisson's ratio of the arms that are driven across.
    Poisson,
    /// Resistance of a conductor, Ω: 0 all alike, 1..=3 each its own.
    Lead(u8),
    /// Length of a conductor, m.
    LeadLength(u8),
    /// Cross-section of a conductor, mm².
    LeadArea(u8),
    /// Resistivity of a conductor, Ω·m.
    LeadResistivity(u8),
    /// Resistance of a supply lead, Ω: 0 both alike, 1 positive, 2 negative.
    SupplyLeads(u8),
    /// Resistance of a signal lead, Ω: 0 both alike, 1 of the node between arms 1 and 2, 2 of the other.
    SignalLeads(u8),
    /// Input resistance of what reads the output, Ω.
    InputResistance,
    /// Shunt resistor, Ω.
    Shunt,
    /// Fixed resistor of a divider, Ω.
    DividerResistor,
    /// Resistor in parallel with a thermometer, Ω.
    Parallel,
    /// Insulation resistance across a thermometer, Ω.
    Leakage,
    /// Resistor in series with a thermometer, Ω.
    Series,
    /// Resistor that a thermometer is compared with, Ω.
    ReferenceResistor,
    /// Self-heating of a thermometer, K/W.
    SelfHeating,
    /// Current through a thermometer where nothing else says it, A.
    MeasuringCurrent,
    /// Gauge factor.
    GaugeFactor,
    /// Relative change of the gauge factor, 1/K.
    GaugeFactorSlope,
    /// Reference temperature of the gauge factor, °C.
    GaugeReference,
    /// Coefficient of the thermal output polynomial, by power.
    ThermalCoefficient(u8),
    /// Gauge factor of the thermal output data.
    ThermalGaugeFactor,
    /// Thermal expansion of the specimen, 1/K.
    ExpansionSpecimen,
    /// Thermal expansion of the material of the data, 1/K.
    ExpansionData,
    /// Reading at zero strain.
    ZeroReading,
    /// Temperature at zero, °C.
    ZeroTemperature,
    /// Temperature of the leads at zero, °C.
    ZeroLeadTemperature,
    /// Temperature of arm 1..=4 at zero, °C.
    ZeroArmTemperature(u8),
    /// Temperature coefficient of the leads' resistance, 1/K.
    LeadCoefficient,
    /// Temperature at which the leads' resistance is stated, °C.
    LeadReference,
    /// Temperature of the leads where it is one value, °C.
    LeadTemperature,
    /// Temperature of arm 1..=4 where it is one value, °C.
    ArmTemperature(u8),
    /// Value of a thermal output table, by point.
    ThermalPoint(u8),
    /// Rated output of a transducer, V/V.
    RatedOutput,
    /// Load at which a transducer gives its rated output.
    Capacity,
    /// Coefficient of a transducer's certificate polynomial, by power.
    TransducerCoefficient(u8),
    /// Transverse sensitivity of the grid.
    TransverseSensitivity,
    /// Strain across the grid over strain along it.
    StrainRatio,
    /// Temperature of the gauge where it is one value, °C.
    Temperature,
    /// Resistance of a platinum thermometer at 0 °C, Ω.
    R0,
    /// Callendar-Van Dusen A, 1/K.
    PlatinumA,
    /// Callendar-Van Dusen B, 1/K².
    PlatinumB,
    /// Callendar-Van Dusen C, 1/K⁴.
    PlatinumC,
    /// Callendar's α, 1/K.
    PlatinumAlpha,
    /// Callendar's δ, K.
    PlatinumDelta,
    /// Van Dusen's β, K.
    PlatinumBeta,
    /// Resistance of a standard platinum thermometer at the triple point of water, Ω.
    TriplePoint,
    /// Coefficient of the deviation function of ITS-90, in the order of the text; the last of the subrange to silver is W at
    /// the freezing point of aluminium.
    Deviation(u8),
    /// Resistance of a nickel or copper thermometer at 0 °C, Ω.
    MetalR0,
    /// Coefficient of the curve of nickel or copper, in the order of its equation.
    MetalCoefficient(u8),
    /// Resistance of a thermistor at 25 °C, Ω.
    R25,
    /// β of a thermistor, K.
    Beta,
    /// Steinhart-Hart a, 1/K.
    SteinhartHartA,
    /// Steinhart-Hart b, 1/K.
    SteinhartHartB,
    /// Steinhart-Hart c, 1/K.
    SteinhartHartC,
    /// Resistance that the four-term forms of a thermistor refer to, Ω.
    ThermistorReference,
    /// Term 1..=4 of a four-term form of a thermistor.
    ThermistorTerm(u8),
    /// Resistance of a table of a thermistor, by point, Ω.
    ThermistorPoint(u8),
    /// Temperature of a thermocouple's reference junction where it is one value, °C.
    ReferenceJunction,
    /// Scale of a value that is passed on.
    Scale,
    /// Offset of a value that is passed on.
    ScaleOffset,
}

impl fmt::Display for Parameter {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let numbered = |f: &mut fmt::Formatter<'_>, key: &str, n: u8| {
            if n == 0 { f.write_str(key) } else { write!(f, "{key}[{n}]") }
        };
        match *self {
            Self::Supply => f.write_str("bridge.supply"),
            Self::FullScale => f.write_str("converter.full_scale"),
            Self::Gain => f.write_str("amplifier.gain"),
            Self::Offset => f.write_str("amplifier.offset"),
            Self::AmplifierInput(n) => numbered(f, "amplifier.difference.input", n),
            Self::AmplifierFeedback(n) => numbered(f, "amplifier.difference.feedback", n),
            Self::OpenLoopGain => f.write_str("amplifier.difference.open_loop_gain"),
            Self::ArmResistance(n) => numbered(f, "bridge.resistances", n),
            Self::ArmFactor(n) => numbered(f, "bridge.arms", n),
            Self::Poisson => f.write_str("bridge.poisson"),
            Self::Lead(n) => numbered(f, "leads.each", n),
            Self::LeadLength(n) => numbered(f, "leads.length", n),
            Self::LeadArea(n) => numbered(f, "leads.area", n),
            Self::LeadResistivity(n) => numbered(f, "leads.resistivity", n),
            Self::SupplyLeads(n) => numbered(f, "bridge.supply_leads", n),
            Self::SignalLeads(n) => numbered(f, "bridge.signal_leads", n),
            Self::InputResistance => f.write_str("input_resistance"),
            Self::Shunt => f.write_str("shunt.resistor"),
            Self::DividerResistor => f.write_str("circuit.divider"),
            Self::Parallel => f.write_str("circuit.parallel"),
            Self::Leakage => f.write_str("circuit.leakage"),
            Self::Series => f.write_str("circuit.series"),
            Self::ReferenceResistor => f.write_str("circuit.reference"),
            Self::SelfHeating => f.write_str("self_heating"),
            Self::MeasuringCurrent => f.write_str("circuit.current"),
            Self::GaugeFactor => f.write_str("gauge.gauge_factor"),
            Self::GaugeFactorSlope => f.write_str("gauge.slope"),
            Self::GaugeReference => f.write_str("gauge.reference"),
            Self::ThermalCoefficient(n) => write!(f, "thermal_output.coefficients[{n}]"),
            Self::ThermalGaugeFactor => f.write_str("thermal_output.gauge_factor"),
            Self::ExpansionSpecimen => f.write_str("expansion.specimen"),
            Self::ExpansionData => f.write_str("expansion.data"),
            Self::ZeroReading => f.write_str("zero.at"),
            Self::ZeroTemperature => f.write_str("zero.temperature"),
            Self::ZeroLeadTemperature => f.write_str("zero.lead_temperature"),
            Self::ZeroArmTemperature(n) => numbered(f, "zero.temperatures", n),
            Self::LeadCoefficient => f.write_str("leads.coefficient"),
            Self::LeadReference => f.write_str("leads.reference"),
            Self::LeadTemperature => f.write_str("leads.temperature"),
            Self::ArmTemperature(n) => numbered(f, "bridge.temperatures", n),
            Self::ThermalPoint(n) => write!(f, "thermal_output.points[{n}]"),
            Self::RatedOutput => f.write_str("transducer.rated"),
            Self::Capacity => f.write_str("transducer.capacity"),
            Self::TransducerCoefficient(n) => write!(f, "transducer.polynomial[{n}]"),
            Self::TransverseSensitivity => f.write_str("transverse.sensitivity"),
            Self::StrainRatio => f.write_str("transverse.strain_ratio"),
            Self::Temperature => f.write_str("temperature"),
            Self::R0 => f.write_str("platinum.r0"),
            Self::PlatinumA => f.write_str("platinum.a"),
            Self::PlatinumB => f.write_str("platinum.b"),
            Self::PlatinumC => f.write_str("platinum.c"),
            Self::PlatinumAlpha => f.write_str("platinum.alpha"),
            Self::PlatinumDelta => f.write_str("platinum.delta"),
            Self::PlatinumBeta => f.write_str("platinum.beta"),
            Self::TriplePoint => f.write_str("platinum.triple_point"),
            Self::Deviation(n) => write!(f, "platinum.deviation[{n}]"),
            Self::MetalR0 => f.write_str("metal.r0"),
            Self::MetalCoefficient(n) => write!(f, "metal.coefficients[{n}]"),
            Self::R25 => f.write_str("thermistor.r25"),
            Self::Beta => f.write_str("thermistor.beta"),
            Self::SteinhartHartA => f.write_str("thermistor.steinhart_hart[1]"),
            Self::SteinhartHartB => f.write_str("thermistor.steinhart_hart[2]"),
            Self::SteinhartHartC => f.write_str("thermistor.steinhart_hart[3]"),
            Self::ThermistorReference => f.write_str("thermistor.reference"),
            Self::ThermistorTerm(n) => write!(f, "thermistor.terms[{n}]"),
            Self::ThermistorPoint(n) => write!(f, "thermistor.points[{n}]"),
            Self::ReferenceJunction => f.write_str("thermocouple.reference"),
            Self::Scale => f.write_str("scale"),
            Self::ScaleOffset => f.write_str("scale.offset"),
        }
    }
}
