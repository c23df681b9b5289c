//! From a chain to its plan: once, in twice the working precision, so that every coefficient is correctly rounded.

use super::forward::{Line, Settled, ten};
use super::kernel;
use super::law::{Heating, Law};
use super::live::{Forms, Live, Own};
use super::plan::Plan;
use super::polynomial::{Arms, Warm, derivative, slope_at_zero};
use super::short::Short;
use super::stage::{Covered, Degree, Excess, Fault, Front, Heated, Raw, Shift, Span, Tail, Uses, Warmth};
use super::{Chain, Element, LeadWarmth, Network, Supply, Temperature};
use crate::Error;
use crate::math::{Double, Real, horner, substitute};
use crate::platinum::{Coefficients, Inverse};
use crate::signal::{Arm, Bridge};
use crate::strain::{Gauge, Transducer, Zero};

/// A sensor is believed between these multiples of its resistance (of an arm's resistance at rest, of a thermometer's
/// end resistances); beyond them the circuit is open or shorted.
const BELIEVED: [f64; 2] = [1.0 / 3.0, 3.0];

/// The stages of a plan that depend on the sensor.
struct Stages {
    front: Front,
    shift: Option<Shift>,
    heating: Option<Heating>,
    front_span: Span,
    /// What is let through in place of `front_span` where the chain extrapolates: whatever has a believable resistance.
    wide: Span,
    fault: Fault,
    law: Law,
    tail: Tail,
    span: Span,
    temperature_span: Span,
}

impl Stages {
    /// Stages that pass everything on.
    const PASS: Self = Self {
        front: Front::Moebius { n: [0.0, 1.0], d: [1.0, 0.0] },
        shift: None,
        heating: None,
        front_span: Span::ALL,
        wide: Span::ALL,
        fault: Fault::None,
        law: Law::None,
        tail: Tail::None,
        span: Span::ALL,
        temperature_span: Span::ALL,
    };
}

fn exact(v: f64) -> Double {
    Double::from_f64(v)
}

impl Chain {
    /// Lowers the chain to the plan that runs it.
    ///
    /// # Errors
    /// What is wrong with a constant (`Error::NotFinite`, `Error::OutOfRange`), what is missing (`Error::Missing`), what
    /// does not fit (`Error::Unfit`), or `Error::Blind` for a bridge that cannot see the wanted strain.
    pub fn plan(&self) -> Result<Plan, Error> {
        self.check()?;
        let chain = self.map(|_, v| exact(v));
        let line = Entry::new(&chain)?;
        // filled in place: stages are large, and firmware has little stack
        let mut stages = Stages::PASS;
        match (&chain.element, &chain.network) {
            (Element::Gauge { gauge, zero, limit }, Network::Bridge(bridge)) => {
                chain.lower_gauge(bridge, gauge, zero, *limit, &line, &mut stages)?;
            }
            (Element::Transducer { law, zero, limit }, Network::Bridge(bridge)) => {
                chain.lower_transducer(bridge, law, zero, *limit, &line, &mut stages)?;
            }
            (element, network) if element.is_thermometer() => {
                chain.lower_thermometer(element, network, &line, &mut stages)?;
            }
            (Element::Direct { scale, offset }, _) => {
                // value = scale · y + offset, so y = (value − offset)/scale
                let (one, none) = (exact(1.0), exact(0.0));
                stages.front = line.front(&padded([-*offset / *scale, one / *scale]), &padded([one, none]));
            }
            _ => return Err(Error::Unfit { what: "strain gauges are read through a bridge" }),
        }
        let covered = Covered { front: stages.front_span, result: stages.span, temperature: stages.temperature_span };
        let (front_span, span, temperature_span) = if self.extrapolate {
            (stages.wide, Span::ALL, Span::ALL)
        } else {
            (stages.front_span, stages.span, stages.temperature_span)
        };
        let (low, high) =
            self.converter.as_ref().map_or((f64::NEG_INFINITY, f64::INFINITY), crate::signal::Converter::end_codes);
        let mut plan = Plan {
            raw: Raw::new(
                Span { low, high },
                self.low_limit,
                self.high_limit,
                !matches!(self.network, Network::Direct),
            ),
            divides_by_supply: line.column.is_some(),
            reading_offset: line.reading_offset(),
            front: stages.front,
            shift: stages.shift,
            heating: stages.heating,
            front_span,
            fault: stages.fault,
            law: stages.law,
            tail: stages.tail,
            span,
            temperature_span,
            extrapolate: self.extrapolate,
            uses: Uses {
                temperature: self.needs_temperature() && matches!(self.temperature, Temperature::Column),
                lead: self.needs_lead_temperature(),
                arms: self.needs_arm_temperatures(),
            },
            covered,
            short: Short::NONE,
        };
        plan.short = Short::of(&plan);
        Ok(plan)
    }
}

/// How the raw reading enters: y = k r + m, or y = k (r + m/k)/s with a supply column.
struct Entry {
    line: Line<Double>,
    column: Option<i8>,
}

impl Entry {
    fn new(chain: &Chain<Double>) -> Result<Self, Error> {
        let column = match chain.supply {
            Supply::Column { exponent } if chain.needs_supply_column() => Some(exponent),
            _ => None,
        };
        Ok(Self { line: chain.line()?, column })
    }

    fn reading_offset(&self) -> f64 {
        if self.column.is_some() { (self.line.m / self.line.k).value() } else { 0.0 }
    }

    /// y = k · entered + m.
    fn scaled(&self) -> (Double, Double) {
        match self.column {
            Some(exponent) => (self.line.k / ten(exponent), exact(0.0)),
            None => (self.line.k, self.line.m),
        }
    }

    /// N and D of y = N/D become those of the number that enters: N − m D and k D. With a supply column that number is
    /// (r + m/k)/s in the column's unit, and only k is left.
    fn apply<const N: usize>(&self, n: &[Double; N], d: &[Double; N]) -> ([Double; N], [Double; N]) {
        let (k, m) = self.scaled();
        let (mut out_n, mut out_d) = (*n, *d);
        for (n, d) in out_n.iter_mut().zip(&mut out_d) {
            *n = *n - m * *d;
            *d = k * *d;
        }
        (out_n, out_d)
    }

    /// The front of the lowest degree that these polynomials need.
    fn front(&self, n: &[Double; 5], d: &[Double; 5]) -> Front {
        let used = |(_, (n, d)): &(usize, (&Double, &Double))| n.value() != 0.0 || d.value() != 0.0;
        let degree = n.iter().zip(d).enumerate().filter(used).map(|(i, _)| i).max();
        let (n, d) = self.apply(n, d);
        let (n, d) = (n.map(Double::value), d.map(Double::value));
        let branch = sign(slope_at_zero(&n, &d));
        let ([n0, n1, n2, ..], [d0, d1, d2, ..]) = (n, d);
        match degree {
            Some(0 | 1) | None => Front::Moebius { n: [n0, n1], d: [d0, d1] },
            Some(2) => Front::Quadratic { n: [n0, n1, n2], d: [d0, d1, d2], branch },
            Some(_) => Front::Quartic { n, d, branch },
        }
    }
}

impl Chain<Double> {
    /// What the leads of a thermometer add at their temperature, where that comes with every reading: a + b T.
    fn lead_excess(&self) -> Result<Option<Excess>, Error> {
        let (true, Some(warmth)) = (self.needs_lead_temperature(), &self.lead_warmth) else { return Ok(None) };
        let leads = match &self.network {
            Network::Resistance { leads: Some(leads) }
            | Network::Divider { leads: Some(leads), .. }
            | Network::Reference { leads: Some(leads), .. } => leads,
            _ => return Err(Error::Unfit { what: "the leads of a thermometer bridge have one temperature" }),
        };
        // r [1 + α (T − T_ref)]
        let slope = leads.excess_ohms() * warmth.coefficient;
        let start = leads.excess_ohms() - slope * warmth.reference_celsius;
        Ok(Some(Excess { line: [start.value(), slope.value()], warmth: warmth.rounded() }))
    }

    /// The stages of a thermometer.
    #[inline(never)]
    fn lower_thermometer(
        &self,
        element: &Element<Double>,
        network: &Network<Double>,
        line: &Entry,
        stages: &mut Stages,
    ) -> Result<(), Error> {
        stages.law = Law::of(element);
        let span = stages.law.arguments();
        let (scale, offset) = self.output.scale::<f64>();
        if scale != 1.0 || offset != 0.0 {
            stages.tail = Tail::Affine { scale, offset };
        }
        stages.front_span = span;
        if let Element::Thermocouple(kind) = element {
            let function = kind.function();
            let (mut n, d) = network.moebius(&self.amplifier, exact(1.0))?;
            match self.temperature {
                Temperature::Column => stages.shift = Some(Shift::Junction(function)),
                // E = E(t) − E(t reference)
                _ => n[0] = n[0] - n[1] * function.millivolts_from_celsius(self.junction(None)?),
            }
            stages.front = line.front(&padded(n), &padded(d));
            stages.wide = span;
            return Ok(());
        }
        let excess = self.lead_excess()?;
        // leads that follow a column are taken off behind the front: here they count as none
        let factor = if excess.is_some() { exact(0.0) } else { self.fixed_lead_factor() };
        let (n, d) = network.moebius(&self.amplifier, factor)?;
        if (n[1] * d[0] - n[0] * d[1]).value() == 0.0 {
            return Err(Error::Blind);
        }
        let (p, q) = self.around.moebius();
        // y = (n₀ q + n₁ p)/(d₀ q + d₁ p)
        let through = |c: [Double; 2]| [c[0] * q[0] + c[1] * p[0], c[0] * q[1] + c[1] * p[1]];
        let (n, d) = if excess.is_some() { (n, d) } else { (through(n), through(d)) };
        let wide = Span { low: span.low * BELIEVED[0], high: span.high * BELIEVED[1] };
        stages.heating = self.heat(factor)?.map(|heat| Heating {
            gain: (heat.kelvin_per_watt * heat.a * heat.a).value(),
            line: [heat.b.value(), heat.c.value()],
            by_supply: heat.by_supply,
        });
        stages.front = line.front(&padded(n), &padded(d));
        stages.shift = excess.map(|excess| Shift::Leads { excess, p: p.map(Double::value), q: q.map(Double::value) });
        let silent = matches!(stages.law, Law::Standard { .. } | Law::Thermistor(crate::thermistor::Law::Points(_)));
        stages.wide = if silent { span } else { wide };
        stages.fault = Fault::Sensor { short_below: wide.low, open_above: wide.high };
        Ok(())
    }

    /// Whether the network changes reading by reading.
    fn is_live(&self) -> bool {
        let own = |(arm, t): (&Arm<Double>, &Temperature<Double>)| {
            !matches!(arm, Arm::Fixed) && !matches!(t, Temperature::None)
        };
        let arms = match (&self.network, &self.element) {
            (Network::Bridge(bridge), Element::Gauge { gauge, .. }) => {
                gauge.needs_temperature() && bridge.arms.iter().zip(&self.arm_temperatures).any(own)
            }
            _ => false,
        };
        arms || self.needs_lead_temperature()
    }

    /// The forms of a bridge by the temperature of its leads, and the temperature about which they are expanded: that at
    /// zero, so that what is balanced there stays balanced to the last digit.
    fn lead_forms(&self, bridge: &Bridge<Double>, zero: &Zero<Double>) -> (Forms<Double>, Double) {
        let expand = |factor| bridge.with_leads_times(factor).expand_polynomial(&self.amplifier);
        match self.lead_warmth.as_ref().filter(|_| self.needs_lead_temperature()) {
            Some(warmth) => {
                let about = zero.lead_celsius.unwrap_or(warmth.reference_celsius);
                let at_zero = warmth.factor(about);
                let count = bridge.lead_places() + 1;
                (Forms::through(count, warmth.coefficient, |k| expand(at_zero + exact(k))), about)
            }
            None => (Forms::still(expand(self.fixed_lead_factor())), exact(0.0)),
        }
    }

    /// The front of a bridge whose network changes reading by reading.
    #[inline(never)]
    fn live(
        &self,
        settled: &Settled<Double>,
        zero: &Zero<Double>,
        gauge: Option<&Gauge<Double>>,
        factor: [Double; 2],
        line: &Entry,
    ) -> Live {
        let (mut forms, about) = self.lead_forms(&settled.bridge, zero);
        let all = forms.numerator.iter().chain(&forms.denominator).flatten();
        let largest = all.fold(0.0_f64, |m, c| m.max(c.value().abs()));
        let (c, on) = settled.bridge.drive();
        let mut degree = 0;
        for (n, d) in forms.numerator.iter_mut().zip(&mut forms.denominator) {
            (*n, *d) = (n.map(|c| without_rounding(c, largest)), d.map(|c| without_rounding(c, largest)));
            for (set, _) in n.iter().zip(&*d).enumerate().filter(|(_, (n, d))| n.value() != 0.0 || d.value() != 0.0) {
                let driven = c.iter().enumerate().filter(|(arm, c)| c.value() != 0.0 && set & (1 << arm) != 0);
                degree = degree.max(driven.count());
            }
            (*n, *d) = line.apply(n, d);
        }
        let arms = Arms {
            numerator: forms.numerator[0],
            denominator: forms.denominator[0],
            c: c.map(|c| c * factor[0]),
            t: [0.0; 4],
        };
        let (n, d) = arms.at(exact(0.0));
        let [low, high] = gauge.map_or([f64::NEG_INFINITY, f64::INFINITY], Gauge::range_celsius);
        let needs = gauge.is_some_and(Gauge::needs_temperature);
        Live {
            forms: forms.rounded(),
            warmth: self.lead_warmth.as_ref().filter(|_| self.needs_lead_temperature()).map(LeadWarmth::rounded),
            about: about.value(),
            slope: c.map(|c| factor.map(|f| (c * f).value())),
            rest: c.map(|c| (c * settled.x0).value()),
            gauges: on.map(|t| t != 0.0),
            tau: gauge.filter(|g| g.has_thermal()).map(|g| g.tau().rounded()),
            tau_at_zero: settled.tau_at_zero.map(Double::value),
            own: self.arm_temperatures.map(|t| match t {
                // where nothing depends on temperature no column is asked for
                Temperature::Column if needs => Own::Column,
                Temperature::Fixed(t) => Own::Fixed(t.value()),
                Temperature::Column | Temperature::None => Own::Gauge,
            }),
            covers: if self.extrapolate { Span::ALL } else { Span { low, high }.both(Span::ALL) },
            believed: BELIEVED,
            branch: sign(slope_at_zero(&n.map(Double::value), &d.map(Double::value))),
            degree: Degree::of(degree),
        }
    }

    /// The network's polynomials at rest, refused where the output does not move with u or the zero is out of reach.
    fn seeing(&self, settled: &Settled<Double>, zero: &Zero<Double>) -> Result<(Arms<Double>, Believed), Error> {
        let (c, t) = settled.bridge.drive();
        // leads that change reading by reading stand as they did at zero
        let factor =
            if self.needs_lead_temperature() { self.lead_factor_at_zero(zero) } else { self.fixed_lead_factor() };
        let arms = Arms::new(settled.bridge.with_leads_times(factor).expand(&self.amplifier), c, t);
        let (n, d) = arms.at(exact(0.0));
        let (up, down) = ((n[1] * d[0]).value(), (n[0] * d[1]).value());
        let sensitivity = (n[1] * d[0] - n[0] * d[1]).value().abs();
        if sensitivity <= 1e-20 * up.abs().max(down.abs()) {
            return Err(Error::Blind);
        }
        let believed = Believed::new(&n, &d, &arms);
        if !believed.span.holds(settled.x0.value()) {
            // the root of the equations is there, but some arm would have no believable resistance
            return Err(Error::Unfit { what: "no strain of this bridge gives the zero reading" });
        }
        Ok((arms, believed))
    }

    #[inline(never)]
    fn lower_transducer(
        &self,
        bridge: &Bridge<Double>,
        law: &Transducer<Double>,
        zero: &Zero<Double>,
        limit: f64,
        line: &Entry,
        stages: &mut Stages,
    ) -> Result<(), Error> {
        let settled = self.settle(bridge, None, zero)?;
        let (arms, believed) = self.seeing(&settled, zero)?;
        // u = f w + x₀, with w the load, or the output in the certificate's unit
        let f = match law {
            Transducer::Rated { output, capacity } => *output / *capacity,
            Transducer::Certificate(k) => ten(k.output_exponent),
        };
        let (n, d) = arms.at(exact(0.0));
        let (n, d) = (substitute(&cleaned(n, &d), settled.x0, f), substitute(&cleaned(d, &n), settled.x0, f));
        let (x0, scale) = (settled.x0.value(), f.value());
        if self.is_live() {
            stages.front = Front::Live(self.live(&settled, zero, None, [f, exact(0.0)], line));
        } else {
            stages.front = line.front(&n, &d);
            stages.front_span = believed.span.through(x0, scale);
            stages.wide = stages.front_span;
            stages.fault = believed.fault.through(x0, scale);
        }
        stages.span = Span { low: -limit, high: limit };
        if let Transducer::Certificate(certificate) = law {
            let plain = certificate.plain();
            let [a, b] = plain.outputs();
            stages.front_span = stages.front_span.both(Span { low: a.min(b), high: a.max(b) });
            stages.law = Law::Certificate(plain);
            let scale = certificate.load_scale;
            if scale != 1.0 {
                stages.tail = Tail::Affine { scale, offset: 0.0 };
            }
        }
        Ok(())
    }

    #[inline(never)]
    fn lower_gauge(
        &self,
        bridge: &Bridge<Double>,
        gauge: &Gauge<Double>,
        zero: &Zero<Double>,
        limit: f64,
        line: &Entry,
        stages: &mut Stages,
    ) -> Result<(), Error> {
        let (tau, thermal) = (gauge.tau(), gauge.has_thermal());
        let settled = self.settle(bridge, thermal.then_some(&tau), zero)?;
        let (arms, believed) = self.seeing(&settled, zero)?;
        let x0 = settled.x0;
        let (scale, _) = self.scale();
        let [f0, f1] = gauge.factor_line();
        let factor = |c: Double| [c * f0 / scale, c * f1 / scale];
        let (n, d) = arms.at(exact(0.0));
        let [low, high] = gauge.range_celsius();
        let largest = limit * self.output.scale::<f64>().0;
        stages.front = line.front(&cleaned(n, &d), &cleaned(d, &n));
        stages.front_span = believed.span;
        stages.wide = believed.span;
        stages.fault = believed.fault;
        stages.span = Span { low: -largest, high: largest };
        stages.temperature_span = Span { low, high }.both(Span::ALL);
        let mine = bridge
            .arms
            .iter()
            .zip(&self.arm_temperatures)
            .any(|(arm, own)| !matches!(arm, Arm::Fixed) && matches!(own, Temperature::None));
        let temperature = match (gauge.needs_temperature() && mine, self.temperature) {
            (false, _) => Some(exact(0.0)),
            (true, Temperature::Fixed(t)) => Some(t),
            (true, Temperature::Column) => None,
            (true, Temperature::None) => return Err(Error::Missing { what: "the temperature of the gauge" }),
        };
        let in_range = crate::Range::new("temperature of the gauge", "°C", low, high);
        if !self.extrapolate && gauge.needs_temperature() {
            let fixed = bridge.arms.iter().zip(&self.arm_temperatures).filter_map(|(arm, t)| match (arm, t) {
                (Arm::Active { .. } | Arm::Dummy, Temperature::Fixed(t)) => Some(t.value()),
                _ => None,
            });
            for t in fixed.chain(temperature.filter(|_| mine).map(Double::value)) {
                in_range.check(t)?;
            }
        }

        if self.is_live() {
            let [f0, f1] = factor(exact(1.0));
            // one temperature of the gauge that is no column stands in its own place
            let mut chain = *self;
            if let (true, Temperature::Fixed(t)) = (mine, self.temperature) {
                for own in &mut chain.arm_temperatures {
                    if matches!(own, Temperature::None) {
                        *own = Temperature::Fixed(t);
                    }
                }
            }
            stages.front = Front::Live(chain.live(&settled, zero, Some(gauge), [f0, f1], line));
            (stages.front_span, stages.wide, stages.fault) = (Span::ALL, Span::ALL, Fault::None);
            return Ok(());
        }
        if let Some(temperature) = temperature {
            // one temperature: all folds into polynomials of the result itself, u = F(T) q/scale + x₀
            let f = (f0 + f1 * temperature) / scale;
            let at = if thermal { tau.at(temperature) - settled.common_tau_at_zero(bridge) } else { exact(0.0) };
            let (n, d) = arms.at(at);
            let (n, d) = (substitute(&cleaned(n, &d), x0, f), substitute(&cleaned(d, &n), x0, f));
            let (x0, f) = (x0.value(), f.value());
            stages.front = line.front(&n, &d);
            stages.front_span = believed.span.through(x0, f);
            stages.wide = stages.front_span;
            stages.fault = believed.fault.through(x0, f);
            stages.temperature_span = Span::ALL;
            return Ok(());
        }
        let tau0 = settled.common_tau_at_zero(bridge);
        let tail = |p: [f64; 7], f: [Double; 2], points: bool| {
            let f = f.map(Double::value);
            match tau.rounded().points.filter(|_| points) {
                Some((points, scale)) => Tail::ThermalPoints { p, f, points, scale },
                None => Tail::Thermal { p, f },
            }
        };
        if let Some((index, c)) = single_arm(bridge).filter(|_| thermal) {
            // one gauge: its δ comes first, then e = (δ − c x₀ − τ)/(c F(T))
            let (n, d) = arms.along(index);
            let mut p = tau.polynomial;
            p[0] = x0 * c - tau0;
            let [low, high] = BELIEVED.map(|m| m - 1.0);
            stages.front = line.front(&padded(n), &padded(d));
            stages.front_span = Span { low, high };
            stages.wide = stages.front_span;
            stages.fault = Fault::Sensor { short_below: low, open_above: high };
            stages.tail = tail(p.map(Double::value), factor(c), true);
            return Ok(());
        }
        // e = (u − x₀)/F(T)
        let mut p = [0.0; 7];
        p[0] = x0.value();
        stages.tail = tail(p, factor(exact(1.0)), false);
        if !thermal {
            return Ok(());
        }
        // several arms feel the temperature, each in its own way: their polynomials change reading by reading
        let (mut n, mut d) = arms.by_powers();
        let largest = n.iter().chain(&d).flatten().fold(0.0_f64, |m, c| m.max(c.value().abs()));
        let mut degree = 0;
        for (power, (n, d)) in n.iter_mut().zip(&mut d).enumerate() {
            (*n, *d) = (n.map(|c| without_rounding(c, largest)), d.map(|c| without_rounding(c, largest)));
            if n.iter().chain(&*d).any(|c| c.value() != 0.0) {
                degree = power;
            }
            (*n, *d) = line.apply(n, d);
        }
        let (n, d) = (n.map(|c| c.map(Double::value)), d.map(|c| c.map(Double::value)));
        let cold = |p: &[[f64; 5]; 5]| p.map(|[c, ..]| c);
        stages.front = Front::Arms(Heated {
            n: Warm::new(&n),
            d: Warm::new(&d),
            tau: tau.rounded(),
            tau_at_zero: tau0.value(),
            branch: sign(slope_at_zero(&cold(&n), &cold(&d))),
            degree: Degree::of(degree),
        });
        Ok(())
    }
}

impl Law {
    fn of(element: &Element<Double>) -> Self {
        let mut round = |_, v: Double| v.value();
        match element {
            Element::Platinum(k) => Self::Platinum(Inverse::new(k.map(&mut round))),
            Element::AlphaDeltaBeta(k) => Self::Platinum(Inverse::new(Coefficients::from(*k).map(&mut round))),
            Element::Standard { triple_point_ohms, deviation } => {
                Self::Standard { triple_point_ohms: triple_point_ohms.value(), deviation: deviation.map(Double::value) }
            }
            Element::Metal(law) => Self::Metal(law.map(&mut round)),
            Element::Thermistor(law) => Self::Thermistor(law.map(&mut round)),
            Element::Thermocouple(kind) => Self::Thermocouple(*kind),
            Element::Gauge { .. } | Element::Transducer { .. } | Element::Direct { .. } => Self::None,
        }
    }
}

impl Settled<Double> {
    /// τ at zero of the arms that have the gauge's temperature: the same in all of them.
    fn common_tau_at_zero(&self, bridge: &Bridge<Double>) -> Double {
        let gauges = bridge.arms.iter().zip(self.tau_at_zero).filter(|(arm, _)| !matches!(arm, Arm::Fixed));
        gauges.map(|(_, tau)| tau).next().unwrap_or(exact(0.0))
    }
}

impl Fault {
    /// The same where the unknown is `shift + scale q`.
    fn through(self, shift: f64, scale: f64) -> Self {
        let to = |u: f64| (u - shift) / scale;
        match self {
            Self::Sensor { short_below, open_above } if scale > 0.0 => {
                Self::Sensor { short_below: to(short_below), open_above: to(open_above) }
            }
            Self::Sensor { short_below, open_above } => {
                Self::Turned { open_below: to(open_above), short_above: to(short_below) }
            }
            Self::Turned { open_below, short_above } if scale > 0.0 => {
                Self::Turned { open_below: to(open_below), short_above: to(short_above) }
            }
            Self::Turned { open_below, short_above } => {
                Self::Sensor { short_below: to(short_above), open_above: to(open_below) }
            }
            Self::Arms(span) => Self::Arms(span.through(shift, scale)),
            Self::None => Self::None,
        }
    }
}

impl Degree {
    fn of(degree: usize) -> Self {
        match degree {
            0 | 1 => Self::First,
            2 => Self::Second,
            _ => Self::Fourth,
        }
    }
}

impl LeadWarmth<Double> {
    fn rounded(&self) -> Warmth {
        Warmth { coefficient: self.coefficient.value(), reference: self.reference_celsius.value() }
    }
}

fn sign(x: f64) -> f64 {
    if x < 0.0 { -1.0 } else { 1.0 }
}

fn padded([a, b]: [Double; 2]) -> [Double; 5] {
    let none = exact(0.0);
    [a, b, none, none, none]
}

/// Drops what is only the rounding of twice the working precision, so that the degree is the true one.
fn cleaned(p: [Double; 5], other: &[Double; 5]) -> [Double; 5] {
    let largest = p.iter().chain(other).fold(0.0_f64, |m, c| m.max(c.value().abs()));
    p.map(|c| without_rounding(c, largest))
}

fn without_rounding(c: Double, largest: f64) -> Double {
    if c.value().abs() <= 1e-28 * largest { exact(0.0) } else { c }
}

/// The one arm that is no fixed resistor, with its strain factor.
fn single_arm(bridge: &Bridge<Double>) -> Option<(usize, Double)> {
    let (c, _) = bridge.drive();
    let mut moving = bridge.arms.iter().zip(c).enumerate().filter(|(_, (arm, _))| !matches!(arm, Arm::Fixed));
    match (moving.next(), moving.next()) {
        (Some((index, (Arm::Active { .. }, factor))), None) => Some((index, factor)),
        _ => None,
    }
}

/// The stretch of u around 0 on which all arms are believed, the output does not turn back and the inverse arrives.
struct Believed {
    span: Span,
    fault: Fault,
}

impl Believed {
    fn new(n: &[Double; 5], d: &[Double; 5], arms: &Arms<Double>) -> Self {
        let mut span = Span::ALL;
        let (mut driven, mut rises) = (0, true);
        for c in arms.c.map(Double::value) {
            if c == 0.0 {
                continue;
            }
            driven += 1;
            rises = c > 0.0;
            // 1 + c u within the believed multiples
            span = span.both(Span { low: BELIEVED[0], high: BELIEVED[1] }.through(1.0, c));
        }
        let fault = match (driven, rises) {
            (1, true) => Fault::Sensor { short_below: span.low, open_above: span.high },
            (1, false) => Fault::Turned { open_below: span.low, short_above: span.high },
            _ => Fault::Arms(span),
        };
        // y′ ∝ N′ D − N D′ must keep its sign, or two strains explain one reading
        let (n, d) = (n.map(Double::value), d.map(Double::value));
        let (dn, dd) = (derivative(&n), derivative(&d));
        let turn = |u: f64| horner(u, &dn) * horner(u, &d) - horner(u, &n) * horner(u, &dd);
        let home = sign(turn(0.0));
        let branch = sign(slope_at_zero(&n, &d));
        // before a turning point the higher terms may be too large for the steps of the inverse (a bridge that is
        // nearly blind): what cannot be read back is not given out either
        let lost = |u: f64| kernel::quartic(&n, &d, branch, horner(u, &n) / horner(u, &d)).is_nan();
        let reach = |end: f64| {
            let turned = |u: &f64| turn(*u) * home <= 0.0 || lost(*u);
            let Some(mut bad) = (1..=256).map(|step| end * f64::from(step) / 256.0).find(turned) else {
                return end;
            };
            let mut good = bad - end / 256.0;
            for _ in 0..64 {
                let middle = 0.5 * (good + bad);
                *(if turned(&middle) { &mut bad } else { &mut good }) = middle;
            }
            good
        };
        Self { span: Span { low: reach(span.low), high: reach(span.high) }, fault }
    }
}
