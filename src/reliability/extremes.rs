//! The distribution of the largest or least value of a margin over a time.

use super::crossings::{FailureRegion, GaussianMargin};
use super::first_passage::{FirstPassage, Method};
use super::probability::Probability;
use crate::numerics::quadrature::{self, Tolerance};
use crate::numerics::root;

/// The extreme of a stationary margin over a time, on the side on which it fails: `P(extreme beyond b)` is the probability
/// of failure over the time with the barrier at `b`.
///
/// Levels are looked for from far out towards the mean. By `poisson` survival need not fall on and on as the barrier comes
/// nearer: beyond the mean on the other side entries become rare again. There the least survival of all levels further
/// out is kept, which is never less than the truth.
#[derive(Clone, Copy, Debug)]
pub struct Extreme {
    margin: GaussianMargin,
    side: Side,
    method: Method,
    /// In s.
    time: f64,
}

/// Which extreme.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Side {
    /// The largest value.
    Largest,
    /// The least value.
    Least,
    /// The largest modulus.
    Modulus,
}

/// The step in standard deviations in which levels are looked through.
const STEP: f64 = 0.125;

/// Levels further out than so many standard deviations are not looked at: the probability is below 1e-2000 there.
const FARTHEST: f64 = 128.0;

/// Levels further in than so many standard deviations are not looked at.
const NEAREST: f64 = -40.0;

/// What the mean leaves out of the distribution on either side.
const LEFT_OUT: f64 = 1e-18;

impl Extreme {
    /// Of a margin that fails in a region. `None` where the region is two barriers that are not at `-a` and `a`: its
    /// extreme is no single number.
    pub fn new(margin: &GaussianMargin, region: FailureRegion, method: Method, time: f64) -> Option<Self> {
        let side = match region {
            FailureRegion::Below(_) => Side::Least,
            FailureRegion::Above(_) => Side::Largest,
            FailureRegion::Outside(lower, upper) if lower == -upper => Side::Modulus,
            FailureRegion::Outside(..) => return None,
        };
        let margin = *margin;
        Some(Self {
            margin,
            side,
            method,
            time,
        })
    }

    /// The level at so many standard deviations outward from the mean (from its modulus).
    fn level(&self, outward: f64) -> f64 {
        let (mean, distance) = (self.margin.mean, outward * self.margin.standard_deviation);
        match self.side {
            Side::Largest => mean + distance,
            Side::Least => mean - distance,
            Side::Modulus => (mean.abs() + distance).max(0.0),
        }
    }

    /// The probability that the extreme lies beyond the level at so many standard deviations outward.
    fn beyond(&self, outward: f64) -> Probability {
        let level = self.level(outward);
        let region = match self.side {
            Side::Largest => FailureRegion::Above(level),
            Side::Least => FailureRegion::Below(level),
            Side::Modulus => FailureRegion::Outside(-level, level),
        };
        // No barrier is far enough inside for `vanmarcke`: entries are then without number.
        if self.side == Side::Modulus && level == 0.0 || self.method == Method::Vanmarcke && outward <= 0.0 {
            return Probability::from_logarithms(0.0, f64::NEG_INFINITY);
        }
        FirstPassage::new(&self.margin, region, self.method).within(self.time)
    }

    /// How much more probable it is to be beyond a level than a probability says, as a logarithm of whichever of failure and
    /// survival is the smaller: positive near the mean, negative far out.
    fn excess(&self, outward: f64, probability: Probability) -> f64 {
        let beyond = self.beyond(outward);
        if probability.ln_failure() < probability.ln_survival() {
            beyond.ln_failure() - probability.ln_failure()
        } else {
            probability.ln_survival() - beyond.ln_survival()
        }
    }

    /// The level in the margin's unit that the extreme lies beyond with a probability, the outermost where there are several.
    /// `None` where there is none, as for a probability of 0 or 1.
    pub fn level_beyond(&self, probability: Probability) -> Option<f64> {
        self.outward(probability).map(|outward| self.level(outward))
    }

    fn outward(&self, probability: Probability) -> Option<f64> {
        if !(probability.ln_failure().is_finite() && probability.ln_survival().is_finite()) {
            return None;
        }
        let mut outer = 1.0;
        while self.excess(outer, probability) >= 0.0 {
            outer *= 2.0;
            if outer > FARTHEST {
                return None;
            }
        }
        let mut inner = outer;
        while self.excess(inner, probability) < 0.0 {
            inner -= STEP;
            if inner < NEAREST {
                return None;
            }
        }
        root::between(|at| self.excess(at, probability), inner, inner + STEP, f64::EPSILON).map(|root| root.at)
    }

    /// The mean of the extreme in the margin's unit, with the absolute error of the integration: from the median outward the
    /// integral of `P(beyond)`, less the integral of `P(not beyond)` inward.
    pub fn mean(&self) -> Option<(f64, f64)> {
        let of_failure = |p: f64| self.outward(Probability::from_logarithms(p.ln(), (-p).ln_1p()));
        let of_survival = |p: f64| self.outward(Probability::from_logarithms((-p).ln_1p(), p.ln()));
        let median = of_failure(0.5)?;
        let turn = self.turn();
        let kept = self.beyond(turn).survival();
        let survival = |outward: f64| {
            let here = self.beyond(outward).survival();
            if outward < turn { here.min(kept) } else { here }
        };
        let outer = GRADES.iter().filter_map(|p| of_failure(*p));
        let inner = GRADES.iter().filter_map(|p| of_survival(*p)).chain([turn]);
        let outer = integral(|at| self.beyond(at).failure(), outer.filter(|at| *at > median), median)?;
        let inner = integral(survival, inner.filter(|at| *at < median), median)?;
        let mean = self.level(median + outer.0 - inner.0);
        Some((mean, self.margin.standard_deviation * (outer.1 + inner.1)))
    }

    /// Where survival, from far out, begins to rise again; the innermost level looked at where it never does.
    fn turn(&self) -> f64 {
        let ln_survival = |outward: f64| self.beyond(outward).ln_survival();
        let (mut at, mut here) = (0.0, ln_survival(0.0));
        while at > NEAREST {
            let next = ln_survival(at - STEP);
            if next > here || next == f64::NEG_INFINITY {
                break;
            }
            (at, here) = (at - STEP, next);
        }
        at
    }
}

/// Probabilities that mark the way from the median to either end of a distribution.
const GRADES: [f64; 8] = [0.25, 1e-1, 1e-2, 1e-4, 1e-6, 1e-9, 1e-12, LEFT_OUT];

/// The integral between the least and the largest of some points, and its error; 0 where `median` is the only one.
fn integral(f: impl FnMut(f64) -> f64, points: impl Iterator<Item = f64>, median: f64) -> Option<(f64, f64)> {
    let mut points: Vec<f64> = points.chain([median]).collect();
    points.sort_by(f64::total_cmp);
    points.dedup();
    if points.len() < 2 {
        return Some((0.0, 0.0));
    }
    let tolerance = Tolerance {
        absolute: 1e-12,
        relative: 1e-12,
    };
    let integral = quadrature::between(f, &points, tolerance, EVALUATIONS)?;
    Some((integral.value, integral.error))
}

/// Values of a distribution after which an integral is given up; it then says how far it is off.
const EVALUATIONS: usize = 20_000;

#[cfg(test)]
mod tests {
    use super::*;
    use crate::numerics::normal;
    use std::f64::consts::PI;

    /// A margin of standard deviation 2 about 10, with `cycles` upcrossings of its mean in the time.
    fn extreme(region: FailureRegion, method: Method, cycles: f64) -> Extreme {
        let margin = GaussianMargin {
            mean: 10.0,
            standard_deviation: 2.0,
            derivative_standard_deviation: 4.0 * PI,
            bandwidth: Some(0.5),
        };
        Extreme::new(&margin, region, method, cycles).expect("a region with an extreme")
    }

    fn close(found: f64, expected: f64, room: f64) {
        assert!((found - expected).abs() <= room, "{found} against {expected}");
    }

    fn chance(failure: f64) -> Probability {
        Probability::from_logarithms(failure.ln(), (-failure).ln_1p())
    }

    #[test]
    fn a_level_has_the_probability_it_was_looked_for() {
        for method in [Method::Poisson, Method::PoissonSafeStart, Method::Vanmarcke] {
            for region in [FailureRegion::Above(0.0), FailureRegion::Below(0.0)] {
                for failure in [1e-300, 1e-12, 1e-3, 0.3, 0.5, 0.9, 1.0 - 1e-9] {
                    let extreme = extreme(region, method, 1e4);
                    let level = extreme.level_beyond(chance(failure)).expect("a level");
                    let region = match region {
                        FailureRegion::Below(_) => FailureRegion::Below(level),
                        _ => FailureRegion::Above(level),
                    };
                    let found = FirstPassage::new(&extreme.margin, region, method).within(1e4);
                    close(found.failure() / failure, 1.0, 1e-9);
                }
            }
        }
    }

    #[test]
    fn the_least_is_the_mirror_image_of_the_largest() {
        let largest = extreme(FailureRegion::Above(0.0), Method::Poisson, 60.0);
        let least = extreme(FailureRegion::Below(0.0), Method::Poisson, 60.0);
        let (one, other) = (largest.mean().expect("a mean").0, least.mean().expect("a mean").0);
        close(one - 10.0, 10.0 - other, 1e-12);
    }

    /// At an instant the largest value is the margin itself.
    #[test]
    fn over_no_time_the_extreme_is_the_margin() {
        let extreme = extreme(FailureRegion::Above(0.0), Method::Poisson, 1e-12);
        let (mean, error) = extreme.mean().expect("a mean");
        close(mean, 10.0, 1e-9);
        assert!(error < 1e-9);
        let level = extreme.level_beyond(chance(1e-3)).expect("a level");
        close(
            level,
            10.0 - 2.0 * normal::quantile_of_ln(1e-3_f64.ln()).expect("a quantile"),
            1e-9,
        );
        let rare = extreme.level_beyond(chance(0.999)).expect("a level");
        close(rare - 10.0, 10.0 - level, 1e-9);
    }

    /// The mean of the modulus of a normal variable is sqrt(2/pi) standard deviations (Johnson, Kotz and Balakrishnan
    /// 1994, Continuous Univariate Distributions, vol. 1, ch. 13).
    #[test]
    fn the_modulus_of_a_normal_variable() {
        let margin = GaussianMargin {
            mean: 0.0,
            standard_deviation: 3.0,
            derivative_standard_deviation: 1.0,
            bandwidth: None,
        };
        let modulus = Extreme::new(&margin, FailureRegion::Outside(-1.0, 1.0), Method::Poisson, 1e-12);
        let (mean, _) = modulus.expect("an extreme").mean().expect("a mean");
        close(mean, 3.0 * (2.0 / PI).sqrt(), 1e-9);
    }

    #[test]
    fn two_barriers_at_odds_have_no_extreme() {
        let margin = extreme(FailureRegion::Above(0.0), Method::Poisson, 1.0).margin;
        assert!(Extreme::new(&margin, FailureRegion::Outside(-1.0, 2.0), Method::Poisson, 1.0).is_none());
        let extreme = extreme(FailureRegion::Above(0.0), Method::Poisson, 1.0);
        assert_eq!(
            extreme.level_beyond(Probability::from_logarithms(0.0, f64::NEG_INFINITY)),
            None
        );
    }

    /// Few cycles, where survival by `poisson` does not fall all the way as the barrier comes nearer.
    #[test]
    fn the_mean_grows_with_the_time_through_all_of_it() {
        let means: Vec<f64> = (-20..60)
            .map(|power| 1.3_f64.powi(power))
            .map(|cycles| {
                extreme(FailureRegion::Above(0.0), Method::Poisson, cycles)
                    .mean()
                    .expect("a mean")
                    .0
            })
            .collect();
        assert!(means.is_sorted_by(|a, b| a < b), "{means:?}");
    }
}
