//! Moments by integration over frequency.
//!
//! The integrand is a density times |A|², or times the cross term of two responses. It is integrated between breakpoints
//! graded towards the peaks of the density and of every system, all moments from the same values. Beyond the last of
//! them it is a power law, perhaps with waves where instants differ. The part without waves goes to infinity by omega = E
//! u^-m, which turns omega^-p into a power of u, however slowly it falls; each wave goes by half-periods.

use super::super::kernel::Unavailable;
use super::super::moments::Moment;
use super::super::spectral::SpectralDensity;
use super::response::{Response, Smooth, near};
use crate::numerics::quadrature::{self, Integral, Tolerance};
use std::f64::consts::{PI, TAU};

/// The relative accuracy aimed at.
const RELATIVE: f64 = 1e-10;

/// The same where the density is interpolated between integrals of its own.
const RELATIVE_OF_TRANSFORMS: f64 = 1e-8;

/// Integrand values after which an integral is given up.
const EVALUATIONS: usize = 3_000_000;

/// Transfer functions evaluated for one form over one source.
const MOST_TRANSFERS: usize = 100_000_000;

/// Breakpoints of one integral.
const MOST_BREAKPOINTS: usize = 100_000;

/// Waves of a density are followed so many radians far.
const FOLLOWED: f64 = 4_000.0;

/// Neighbouring breakpoints are no further apart than this ratio.
const GRADE: f64 = 8.0;

/// The orders of the moments.
pub(super) const ORDERS: [i32; 4] = [0, 1, 2, 4];

/// Two responses to one source, `lag` apart, and what is known of their integrand.
pub(super) struct Cross<'t> {
    pub(super) one: Side<'t>,
    /// The same as `one` where the integrand is |A|².
    pub(super) other: Option<Side<'t>>,
    /// The second is seen so much later, in s.
    pub(super) lag: f64,
    /// The power p with which the integrand falls, as omega^-p; infinite where it falls faster.
    pub(super) exponent: f64,
}

/// A response, whole and by its delays.
pub(super) struct Side<'t> {
    pub(super) response: Response<'t>,
    pub(super) by_delay: Vec<Smooth<'t>>,
    /// Frequencies at which a transfer function changes, in rad/s.
    pub(super) frequencies: Vec<f64>,
    /// The number of transfer functions in it.
    pub(super) size: usize,
}

/// Pairs of parts that are seen one time apart, which is not negative.
struct Group {
    apart: f64,
    pairs: Vec<Pair>,
}

/// Two parts by their index, the second seen later; `weight` times.
struct Pair {
    earlier: usize,
    later: usize,
    weight: f64,
    /// Whether the earlier is a part of the second response.
    turned: bool,
}

impl Cross<'_> {
    fn other(&self) -> &Side<'_> {
        self.other.as_ref().unwrap_or(&self.one)
    }

    /// |A|², or Re[conj(A) B exp(i omega lag)].
    fn at(&self, omega: f64) -> f64 {
        let one = self.one.response.at(omega);
        match &self.other {
            None => one.norm_sqr(),
            Some(other) => {
                let product = one.conj() * other.response.at(omega);
                let (sine, cosine) = (omega * self.lag).sin_cos();
                product.re * cosine - product.im * sine
            }
        }
    }

    /// All pairs of parts by the time between them, rising.
    fn groups(&self) -> Vec<Group> {
        let other = self.other();
        let same = self.other.is_none();
        let mut pairs = Vec::new();
        for (first, a) in self.one.by_delay.iter().enumerate() {
            let from = if same { first } else { 0 };
            for (second, b) in other.by_delay.iter().enumerate().skip(from) {
                let weight = if same && first != second { 2.0 } else { 1.0 };
                let apart = if near(self.lag + a.delay, b.delay) {
                    0.0
                } else {
                    self.lag + a.delay - b.delay
                };
                let (earlier, later, turned) = if apart < 0.0 {
                    (second, first, true)
                } else {
                    (first, second, false)
                };
                pairs.push((
                    apart.abs(),
                    Pair {
                        earlier,
                        later,
                        weight,
                        turned,
                    },
                ));
            }
        }
        pairs.sort_by(|a, b| a.0.total_cmp(&b.0));
        let mut groups: Vec<Group> = Vec::new();
        for (apart, pair) in pairs {
            match groups.last_mut() {
                Some(group) if near(group.apart, apart) => group.pairs.push(pair),
                _ => groups.push(Group {
                    apart,
                    pairs: vec![pair],
                }),
            }
        }
        groups
    }

    /// What the pairs of a group add to the integrand, but for the density.
    fn of_group(&self, group: &Group, omega: f64) -> f64 {
        let (sine, cosine) = (omega * group.apart).sin_cos();
        let (ones, others) = (&self.one.by_delay, &self.other().by_delay);
        let part = |parts: &[Smooth<'_>], index: usize| parts.get(index).map(|part| part.at(omega));
        let of_pair = |pair: &Pair| {
            let (earlier, later) = if pair.turned { (others, ones) } else { (ones, others) };
            let product = part(earlier, pair.earlier)?.conj() * part(later, pair.later)?;
            Some(pair.weight * (product.re * cosine - product.im * sine))
        };
        group.pairs.iter().filter_map(of_pair).sum()
    }
}

/// The integrals of omega^n over the density times the cross term for those n of 0, 1, 2, 4 that are wanted, which must
/// exist, and 0 for the others. `scales` are sizes below which what is found is 0.
pub(super) fn integrals(
    spectrum: &dyn SpectralDensity,
    cross: &Cross<'_>,
    wanted: [bool; 4],
    scales: [f64; 4],
) -> Result<[Moment; 4], Unavailable> {
    let grid = spectrum.grid()?;
    if grid.is_empty() {
        return Ok([ZERO; 4]);
    }
    let groups = cross.groups();
    let waves: Vec<&Group> = groups.iter().filter(|group| group.apart > 0.0).collect();
    let Some(domain) = Domain::new(grid, cross, &waves, (spectrum.head(), spectrum.wave()), wanted) else {
        return Ok([Moment::Unreached; 4]);
    };
    let undelayed = groups.first().filter(|group| group.apart == 0.0);
    let mut failure = None;
    let mut density = |omega: f64| match spectrum.density(omega) {
        Ok(density) => (density.value, density.error),
        Err(why) => {
            failure.get_or_insert(why);
            (f64::NAN, f64::NAN)
        }
    };
    let exponent = cross.exponent;
    let mut integrand = |x: f64| -> [f64; 8] {
        let Place {
            omega,
            slope,
            beyond,
            further,
        } = domain.place(x);
        let (value, error) = density(omega);
        if value == 0.0 && error == 0.0 {
            return [0.0; 8];
        }
        let cross = match undelayed {
            _ if !beyond => cross.at(omega),
            Some(group) => cross.of_group(group, omega),
            None => 0.0,
        };
        let mut values = [0.0; 8];
        for (place, order) in ORDERS.iter().enumerate().filter(|(place, _)| wanted[*place]) {
            let mut weight = cross * omega.powi(*order) * slope;
            if further > 0.0 {
                // The power law from there on; nothing is left where it falls faster than any.
                weight *= (further * (f64::from(*order) + 1.0 - exponent)).exp();
            }
            values[place] = value * weight;
            values[place + 4] = error * weight.abs();
        }
        values
    };
    let cost = (cross.one.size + cross.other.as_ref().map_or(0, |other| other.size)).max(1);
    let closed = spectrum.is_closed();
    let most = EVALUATIONS.min(MOST_TRANSFERS / cost);
    if domain.breakpoints.len() * POINTS > most {
        return Ok([Moment::Unreached; 4]);
    }
    let relative = if closed { RELATIVE } else { RELATIVE_OF_TRANSFORMS };
    let tolerances = scales.map(|scale| Tolerance {
        absolute: relative * scale,
        relative,
    });
    let unasked = Tolerance {
        absolute: f64::INFINITY,
        relative: 0.0,
    };
    let mut found = [ZERO; 4];
    if closed {
        let values = |x: f64| {
            let [a, b, c, d, ..] = integrand(x);
            [a, b, c, d]
        };
        let parts = quadrature::several_between(values, &domain.breakpoints, &tolerances, most);
        for (found, part) in found.iter_mut().zip(parts.into_iter().flatten()) {
            *found = moment(part, CLOSED_FORM * part.value.abs());
        }
    } else {
        let [a, b, c, d] = tolerances;
        let u = unasked;
        let parts = quadrature::several_between(integrand, &domain.breakpoints, &[a, b, c, d, u, u, u, u], most);
        if let Some([a, b, c, d, e, f, g, h]) = parts {
            for (found, (part, error)) in found.iter_mut().zip([(a, e), (b, f), (c, g), (d, h)]) {
                *found = moment(part, error.value.abs());
            }
        } else {
            return Ok([Moment::Unreached; 4]);
        }
    }
    let end = domain.end;
    for group in &waves {
        for (place, order) in ORDERS.iter().enumerate().filter(|(place, _)| wanted[*place]) {
            let size = found[place].value().unwrap_or(0.0).abs().max(scales[place]);
            let tolerance = Tolerance {
                absolute: RELATIVE * size / waves.len() as f64,
                relative: RELATIVE,
            };
            let wave = |omega: f64| density(omega).0 * cross.of_group(group, omega) * omega.powi(*order);
            let tail = quadrature::oscillating_tail(wave, end, PI / group.apart, tolerance, most);
            found[place] = found[place].plus(tail.map_or(Moment::Unreached, |tail| moment(tail, 0.0)));
        }
    }
    match failure {
        Some(why) => Err(why),
        None => Ok(found),
    }
}

const ZERO: Moment = Moment::Finite { value: 0.0, error: 0.0 };

/// The relative error of closed densities and of transfer functions.
const CLOSED_FORM: f64 = 1e-13;

/// Points of the rule between two breakpoints.
const POINTS: usize = 21;

fn moment(integral: Integral, besides: f64) -> Moment {
    let error = integral.error + besides;
    if error.is_finite() {
        Moment::Finite {
            value: integral.value,
            error,
        }
    } else {
        Moment::Unreached
    }
}

/// The axis of integration: from 0 to `end` it is omega, but for a first stretch that straightens a density that begins with
/// an odd power; from `end` to twice `end` all that is beyond.
struct Domain {
    breakpoints: Vec<f64>,
    /// The first breakpoint above 0.
    first: f64,
    /// omega/first is x^start in the first stretch.
    start: i32,
    end: f64,
    /// omega/end is u^-fall beyond the end.
    fall: f64,
}

struct Place {
    omega: f64,
    /// d omega / d x.
    slope: f64,
    beyond: bool,
    /// ln of the frequency meant over `omega`, where it lies so far out that the power law alone is left.
    further: f64,
}

/// ln of the ratio to the end beyond which the integrand is its power law to all digits.
const FAR: f64 = 25.0;

impl Domain {
    /// `None` where it would take too many breakpoints.
    fn new(
        grid: Vec<f64>,
        cross: &Cross<'_>,
        waves: &[&Group],
        (head, wave): (f64, f64),
        wanted: [bool; 4],
    ) -> Option<Self> {
        let sides = [Some(&cross.one), cross.other.as_ref()];
        let mut points = grid;
        points.extend(
            sides
                .into_iter()
                .flatten()
                .flat_map(|side| side.frequencies.iter().copied()),
        );
        points.retain(|omega| *omega > 0.0 && omega.is_finite());
        points.sort_by(f64::total_cmp);
        points.dedup_by(|later, earlier| *later - *earlier <= 1e-12 * *later);
        let mut end = points.last().copied().unwrap_or(1.0);
        if points.is_empty() {
            points.push(end);
        }
        let mut longest = waves.last().map_or(0.0, |wave| wave.apart);
        // Waves shorter than a radian have not begun to differ from what does not oscillate: the digits would cancel.
        let of_shortest = waves.first().map_or(0.0, |wave| 2.0 / wave.apart);
        if of_shortest > end && of_shortest * longest / TAU < MOST_BREAKPOINTS as f64 {
            end = of_shortest;
            points.push(end);
        }
        // Waves of the density itself are followed until little is left of them; those of a long table are small from
        // the start.
        if wave > 0.0 && end * wave < FOLLOWED {
            end = FOLLOWED / wave;
            longest += wave;
            points.push(end);
        }
        let first = points.first().copied()?;
        let mut breakpoints = vec![0.0];
        for pair in std::iter::once([0.0, first]).chain(points.windows(2).filter_map(|pair| pair.try_into().ok())) {
            let [from, to] = pair;
            graded(&mut breakpoints, from, to, TAU / longest)?;
        }
        breakpoints.extend([1.5 * end, 2.0 * end]);
        let start = if head == 0.0 || head == f64::INFINITY || (head > 0.0 && head.fract() == 0.0) {
            1
        } else {
            4
        };
        Some(Self {
            breakpoints,
            first,
            start,
            end,
            fall: fall(cross.exponent, wanted),
        })
    }

    fn place(&self, x: f64) -> Place {
        if x <= self.end {
            let (omega, slope) = if x < self.first && self.start > 1 {
                let share = x / self.first;
                let slope = f64::from(self.start) * share.powi(self.start - 1);
                (self.first * share.powi(self.start), slope)
            } else {
                (x, 1.0)
            };
            return Place {
                omega,
                slope,
                beyond: false,
                further: 0.0,
            };
        }
        let u = ((2.0 * self.end - x) / self.end).max(f64::MIN_POSITIVE);
        let grown = -self.fall * u.ln();
        let near = grown.min(FAR);
        let further = grown - near;
        Place {
            omega: self.end * near.exp(),
            // The rest of d omega is in what is further out.
            slope: self.fall * near.exp() / u,
            beyond: true,
            further,
        }
    }
}

/// Adds breakpoints up to `to`, growing by the grade at most and no further apart than `widest`.
fn graded(breakpoints: &mut Vec<f64>, from: f64, to: f64, widest: f64) -> Option<()> {
    let mut before = from;
    loop {
        let graded = before * GRADE;
        let next = if before > 0.0 && graded < to / 2.0 { graded } else { to };
        let pieces = ((next - before) / widest).ceil().max(1.0);
        if breakpoints.len() as f64 + pieces > MOST_BREAKPOINTS as f64 {
            return None;
        }
        for piece in 1..=pieces as usize {
            let at = before + (next - before) * (piece as f64 / pieces);
            if breakpoints.last().is_none_or(|last| at > *last) {
                breakpoints.push(at);
            }
        }
        if next >= to {
            return Some(());
        }
        before = next;
    }
}

/// The power m of omega = E u^-m that makes omega^(n - p) d omega smooth in u for all moments wanted: it becomes
/// u^(m (p - n - 1) - 1) times a function of u^m.
fn fall(exponent: f64, wanted: [bool; 4]) -> f64 {
    let highest = ORDERS
        .iter()
        .zip(wanted)
        .filter(|(_, wanted)| *wanted)
        .map(|(order, _)| *order);
    let slowest = exponent - f64::from(highest.max().unwrap_or(0)) - 1.0;
    if !(slowest.is_finite() && slowest > 0.0) {
        return 1.0;
    }
    let whole = |m: f64| {
        let power = m * slowest;
        power >= 0.999 && (power - power.round()).abs() < 1e-9
    };
    let found = [1.0, 2.0, 3.0, 4.0].into_iter().find(|m| whole(*m));
    found.unwrap_or((3.0 * slowest).ceil() / slowest)
}
