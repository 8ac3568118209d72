//! lambda_1 of several terms over one source, which no derivative of the covariance gives.

use super::form::Term;
use super::kernel::{Kernel, Unavailable};
use super::moments::Moment;
use crate::numerics::quadrature::{self, Integral, Tolerance};
use std::f64::consts::{FRAC_2_PI, FRAC_PI_2, PI};

/// The relative accuracy aimed at.
const RELATIVE: f64 = 1e-10;

/// The relative error above which the moment counts as not reached.
const REACHED: f64 = 1e-6;

/// Integrand values after which an integral is given up.
const EVALUATIONS: usize = 200_000;

/// The integral of omega |A(omega)|² over the spectrum, A being the sum of a (i omega)^n exp(-i omega d) over the terms.
/// It must be known to be finite. `first` is lambda_1 of the source, `variance` and `curvature` lambda_0 and lambda_2 of
/// the terms.
pub(super) fn of_terms(kernel: &Kernel, terms: &[Term], first: Moment, variance: Moment, curvature: Moment) -> Moment {
    let by_frequency = kernel
        .density_is_closed()
        .then(|| over_frequencies(kernel, terms, first).map(reached));
    let found = match by_frequency {
        Some(found) if found != Ok(Moment::Unreached) => found,
        // Terms that nearly cancel lose their digits over frequencies, not over lags.
        _ => over_lags(kernel, terms, first, variance, curvature).map(reached),
    };
    match found {
        Ok(moment) => moment,
        // The model itself says nothing there.
        Err(Unavailable::BeyondTable { .. }) => Moment::Unknown,
        Err(_) => Moment::Unreached,
    }
}

/// The moment, unless its error is too large.
fn reached(moment: Moment) -> Moment {
    match moment {
        Moment::Finite { value, error } if error > REACHED * value.abs() => Moment::Unreached,
        moment => moment,
    }
}

/// The pairs of terms that lie one lag apart: each gives omega^(1 + n_i + n_j) cos(omega lag - (n_i - n_j) pi/2).
struct Group {
    lag: f64,
    waves: Vec<Wave>,
}

struct Wave {
    weight: f64,
    power: i32,
    phase: f64,
}

impl Group {
    fn weight(&self, omega: f64) -> f64 {
        let (sine, cosine) = (omega * self.lag).sin_cos();
        self.waves
            .iter()
            .map(|wave| wave.weight * omega.powi(wave.power) * (cosine * wave.phase.cos() + sine * wave.phase.sin()))
            .sum()
    }
}

/// The pairs by their lag, rising, but for an undifferentiated term with itself, whose part is known. Terms of a form are
/// sorted, so one order of terms gives one order of groups.
fn groups(terms: &[Term]) -> Vec<Group> {
    let mut pairs: Vec<(f64, Wave)> = Vec::new();
    for (index, one) in terms.iter().enumerate() {
        for (other_index, other) in terms.iter().enumerate().skip(index) {
            let both = if other_index == index { 1.0 } else { 2.0 };
            let lag = one.operator.delay - other.operator.delay;
            let quarter_turns = f64::from(one.operator.derivatives) - f64::from(other.operator.derivatives);
            let wave = Wave {
                weight: both * one.coefficient() * other.coefficient(),
                power: (1 + one.operator.derivatives + other.operator.derivatives) as i32,
                phase: FRAC_PI_2 * if lag < 0.0 { -quarter_turns } else { quarter_turns },
            };
            // A quarter turn apart at one instant: uncorrelated at every frequency.
            let uncorrelated = lag == 0.0 && quarter_turns % 2.0 != 0.0;
            let known = other_index == index && wave.power == 1;
            if !uncorrelated && !known {
                pairs.push((lag.abs(), wave));
            }
        }
    }
    pairs.sort_by(|a, b| a.0.total_cmp(&b.0));
    let mut groups: Vec<Group> = Vec::new();
    for (lag, wave) in pairs {
        match groups.last_mut() {
            Some(group) if group.lag == lag => group.waves.push(wave),
            _ => groups.push(Group { lag, waves: vec![wave] }),
        }
    }
    groups
}

/// From lines and density. The part of each term with itself is positive and sets the scale for the others, which may
/// cancel.
fn over_frequencies(kernel: &Kernel, terms: &[Term], first: Moment) -> Result<Moment, Unavailable> {
    let lines = kernel.lines()?;
    let has_density = kernel.has_density();
    let grid = if has_density {
        kernel.frequency_grid()?
    } else {
        Vec::new()
    };
    let plain = terms.iter().filter(|term| term.operator.derivatives == 0);
    let squares: f64 = plain.map(|term| term.coefficient() * term.coefficient()).sum();
    let mut sum = if squares > 0.0 {
        first.times(squares)
    } else {
        Moment::Finite { value: 0.0, error: 0.0 }
    };
    for group in groups(terms) {
        let of_lines = lines.iter().map(|line| line.power * group.weight(line.frequency)).sum();
        sum = sum.plus(Moment::Finite {
            value: of_lines,
            error: 0.0,
        });
        if has_density {
            let scale = sum.value().unwrap_or(0.0).abs();
            sum = sum.plus(of_density(kernel, &group, &grid, scale));
        }
    }
    Ok(sum)
}

fn of_density(kernel: &Kernel, group: &Group, grid: &[f64], scale: f64) -> Moment {
    let integrand = |omega: f64| match kernel.density(omega) {
        Ok(density) => density.value * group.weight(omega),
        Err(_) => f64::NAN,
    };
    let tolerance = Tolerance {
        absolute: RELATIVE * scale,
        relative: RELATIVE,
    };
    if group.lag == 0.0 {
        return moment(quadrature::to_infinity(integrand, grid, tolerance, EVALUATIONS));
    }
    // Up to the last scale of the density one by one, then wave by wave.
    let end = grid.last().copied().unwrap_or(0.0);
    let head = moment(quadrature::between(integrand, grid, tolerance, EVALUATIONS));
    let tail = quadrature::oscillating_tail(integrand, end, PI / group.lag, tolerance, EVALUATIONS);
    head.plus(moment(tail))
}

/// Over lags: `2/pi` times the integral of `(C(0) - C(tau))/tau²` over lags above 0, C being the autocovariance of the
/// terms. Its integrand has one sign; it follows from that of `(1 - cos x)/x²`, which is `pi/2`.
///
/// Where `lambda_2` is infinite the part of each term with itself, `first` times the squares of the coefficients, is put
/// aside: what terms have with each other is smooth at lag 0.
fn over_lags(
    kernel: &Kernel,
    terms: &[Term],
    first: Moment,
    variance: Moment,
    curvature: Moment,
) -> Result<Moment, Unavailable> {
    let Some((shortest, longest)) = kernel.times() else {
        return Ok(Moment::Finite { value: 0.0, error: 0.0 });
    };
    let apart = curvature == Moment::Infinite && terms.iter().all(|term| term.operator.derivatives == 0);
    let pairs = Pairs::new(terms, apart);
    let (alone, variance, curvature) = if apart {
        let squares: f64 = terms.iter().map(|term| term.coefficient() * term.coefficient()).sum();
        let (variance, curvature) = (pairs.covariance(kernel, 0.0)?, pairs.curvature(kernel)?);
        (first.times(squares), variance, curvature)
    } else {
        let (Some(variance), Some(curvature)) = (variance.value(), curvature.value()) else {
            return Ok(Moment::Unreached);
        };
        (Moment::Finite { value: 0.0, error: 0.0 }, variance, curvature)
    };
    let mut failure = None;
    let mut lost = |lag: f64| match pairs.loss(kernel, lag, variance) {
        Ok(loss) => loss / (lag * lag),
        Err(why) => {
            failure.get_or_insert(why);
            f64::NAN
        }
    };
    // Close to lag 0 C(0) - C(tau) is lambda_2 tau²/2 but for its digits; what that leaves out is seen at the end.
    let near = NEAR * shortest;
    let start = 0.5 * curvature * near;
    let mismatch = (lost(near) - 0.5 * curvature).abs() * near;
    let lags = pairs.lags(kernel, near, longest);
    // Every pair of terms costs two kernel values at every lag.
    let evaluations = EVALUATIONS.min(MOST_KERNEL_VALUES / pairs.pairs.len().max(1));
    if lags.len() * POINTS > evaluations {
        return Ok(Moment::Unreached);
    }
    let last = lags.last().copied().unwrap_or(near);
    let head = quadrature::between(&mut lost, &lags, Tolerance::relative(RELATIVE), evaluations);
    // What the head has found is the scale of the rest; the head may have used up its evaluations on rounding.
    let tolerance = Tolerance {
        absolute: RELATIVE * head.as_ref().map_or(0.0, |head| head.value.abs()),
        relative: RELATIVE,
    };
    let tail = quadrature::to_infinity(&mut lost, &[last, 2.0 * last], tolerance, evaluations);
    if let Some(why) = failure {
        return Err(why);
    }
    let start = Moment::Finite {
        value: start,
        error: mismatch,
    };
    Ok(start.plus(moment(head)).plus(moment(tail)).times(FRAC_2_PI).plus(alone))
}

/// The stretch of lags, in shortest times, over which the curvature at lag 0 stands for the covariance.
const NEAR: f64 = 1e-5;

/// Kernel values spent on one form over one source.
const MOST_KERNEL_VALUES: usize = 20_000_000;

/// Points of the quadrature rule between two lags.
const POINTS: usize = 21;

/// More lags than that are not looked at one by one.
const MOST_LAGS: usize = 2_000;

/// After so many of its longest times a kernel is taken to have faded.
const FADED: f64 = 40.0;

/// The pairs of terms that a covariance is summed over.
struct Pairs {
    pairs: Vec<Pair>,
}

/// `weight` times the derivative of an order of the kernel, at the lag `apart`.
struct Pair {
    weight: f64,
    order: usize,
    apart: f64,
}

impl Pairs {
    /// All pairs, or those of different terms.
    fn new(terms: &[Term], different: bool) -> Self {
        let mut pairs = Vec::new();
        for (index, one) in terms.iter().enumerate() {
            for (other_index, other) in terms.iter().enumerate() {
                if different && index == other_index {
                    continue;
                }
                let parity = if one.operator.derivatives % 2 == 1 { -1.0 } else { 1.0 };
                pairs.push(Pair {
                    weight: parity * one.coefficient() * other.coefficient(),
                    order: (one.operator.derivatives + other.operator.derivatives) as usize,
                    apart: one.operator.delay - other.operator.delay,
                });
            }
        }
        Self { pairs }
    }

    /// Rising lags from `near` on, among them those at which the kernel of a pair passes lag 0 or a kink.
    fn lags(&self, kernel: &Kernel, near: f64, longest: f64) -> Vec<f64> {
        let reach = self.pairs.iter().map(|pair| pair.apart.abs()).fold(0.0, f64::max);
        let graded = std::iter::successors(Some(near), |lag| Some(lag * 4.0))
            .take_while(|lag| *lag < FADED * (longest + reach))
            .take(MOST_LAGS);
        let mut lags: Vec<f64> = graded.collect();
        let kinks: Vec<f64> = kernel.kinks().iter().map(|kink| kink.lag).chain([0.0]).collect();
        let passed = self
            .pairs
            .iter()
            .flat_map(|pair| kinks.iter().flat_map(|kink| [kink + pair.apart, kink - pair.apart]));
        lags.extend(passed.filter(|lag| *lag > near && lag.is_finite()).take(MOST_LAGS));
        lags.sort_by(f64::total_cmp);
        lags.dedup();
        lags
    }

    /// The covariance of the terms with themselves a lag later.
    fn covariance(&self, kernel: &Kernel, lag: f64) -> Result<f64, Unavailable> {
        self.pairs
            .iter()
            .map(|pair| Ok(pair.weight * derivative(kernel, pair.order, lag + pair.apart)?))
            .sum()
    }

    /// Minus its second derivative at lag 0.
    fn curvature(&self, kernel: &Kernel) -> Result<f64, Unavailable> {
        let parts = self.pairs.iter();
        parts
            .map(|pair| Ok(-pair.weight * derivative(kernel, pair.order + 2, pair.apart)?))
            .sum()
    }

    /// What the covariance has lost a lag later. Of an undifferentiated pair it is the difference of what the kernel loses
    /// over two lags, each known to all digits however small, so that terms that nearly cancel keep theirs.
    fn loss(&self, kernel: &Kernel, lag: f64, variance: f64) -> Result<f64, Unavailable> {
        if self.pairs.iter().any(|pair| pair.order > 0) {
            return Ok(variance - self.covariance(kernel, lag)?);
        }
        self.pairs
            .iter()
            .map(|pair| Ok(pair.weight * (kernel.loss(lag + pair.apart)? - kernel.loss(pair.apart)?)))
            .sum()
    }
}

/// A derivative of the kernel at a lag of either sign.
fn derivative(kernel: &Kernel, order: usize, lag: f64) -> Result<f64, Unavailable> {
    if order == 0 {
        return kernel.value(lag);
    }
    let factorial: f64 = (1..=order).map(|n| n as f64).product();
    let coefficients = match kernel.taylor(lag, order) {
        // A written kernel may leave the range of numbers long after it has faded.
        Err(Unavailable::NoValue { .. }) if has_faded(kernel, lag) => return Ok(0.0),
        found => found?,
    };
    let coefficient = coefficients.last().copied().unwrap_or(f64::NAN);
    Ok(coefficient * factorial)
}

fn has_faded(kernel: &Kernel, lag: f64) -> bool {
    kernel.times().is_some_and(|(_, longest)| lag.abs() > FADED * longest)
}

fn moment(integral: Option<Integral>) -> Moment {
    match integral {
        Some(integral) if integral.error.is_finite() => Moment::Finite {
            value: integral.value,
            error: integral.error,
        },
        _ => Moment::Unreached,
    }
}
