//! Mean rates of crossings into failure, and the probability of being failed at an instant.

use super::probability::{Probability, ln_complement, ln_sum};
use crate::numerics::normal;
use std::f64::consts::{PI, SQRT_2};

/// A stationary Gaussian margin at an instant.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct GaussianMargin {
    /// Its mean, in the margin's unit.
    pub mean: f64,
    /// Its standard deviation, greater than 0, in the margin's unit.
    pub standard_deviation: f64,
    /// The standard deviation of its derivative, in the margin's unit per second; may be 0.
    pub derivative_standard_deviation: f64,
    /// Its bandwidth, between 0 and 1, where it is known.
    pub bandwidth: Option<f64>,
}

/// Where the margin is failed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum FailureRegion {
    /// Below a barrier.
    Below(f64),
    /// Above a barrier.
    Above(f64),
    /// Below the first or above the second barrier; the first is the smaller.
    Outside(f64, f64),
}

impl GaussianMargin {
    /// A level in standard deviations from the mean.
    fn standardised(&self, level: f64) -> f64 {
        (level - self.mean) / self.standard_deviation
    }

    /// The distance from the mean to the nearest barrier, in standard deviations; negative where the mean is failed.
    pub fn reduced_barrier(&self, region: FailureRegion) -> f64 {
        match region {
            FailureRegion::Below(level) => -self.standardised(level),
            FailureRegion::Above(level) => self.standardised(level),
            FailureRegion::Outside(lower, upper) => (-self.standardised(lower)).min(self.standardised(upper)),
        }
    }

    /// Whether two barriers lie evenly about the mean; one barrier does not.
    pub fn is_centred(&self, region: FailureRegion) -> bool {
        match region {
            FailureRegion::Below(_) | FailureRegion::Above(_) => false,
            FailureRegion::Outside(lower, upper) => lies_midway(self.mean, lower, upper),
        }
    }

    /// The logarithm of the mean rate of entries into failure, per second.
    ///
    /// Each barrier counts `1/(2 pi) sdot/s exp(-r²/2)`, `r` its distance from the mean in standard deviations: Rice
    /// 1944-45, "Mathematical analysis of random noise", Bell Syst. Tech. J. 23 and 24, eq. 3.3-11. The rate at which a
    /// stationary process leaves a region upward equals that at which it comes back, so the side of the mean does not
    /// matter.
    pub fn ln_entry_rate(&self, region: FailureRegion) -> f64 {
        let at = |level: f64| {
            let reduced = self.standardised(level);
            -0.5 * reduced * reduced
        };
        let exponent = match region {
            FailureRegion::Below(level) | FailureRegion::Above(level) => at(level),
            FailureRegion::Outside(lower, upper) => ln_sum(at(lower), at(upper)),
        };
        (self.derivative_standard_deviation / (2.0 * PI * self.standard_deviation)).ln() + exponent
    }

    /// The probability of being failed at an instant.
    pub fn point_in_time(&self, region: FailureRegion) -> Probability {
        match region {
            FailureRegion::Below(level) => {
                let reduced = self.standardised(level);
                Probability::from_logarithms(normal::ln_lower(reduced), normal::ln_upper(reduced))
            }
            FailureRegion::Above(level) => {
                let reduced = self.standardised(level);
                Probability::from_logarithms(normal::ln_upper(reduced), normal::ln_lower(reduced))
            }
            FailureRegion::Outside(lower, upper) => {
                let (lower, upper) = (self.standardised(lower), self.standardised(upper));
                let failed = ln_sum(normal::ln_lower(lower), normal::ln_upper(upper));
                Probability::from_logarithms(failed, ln_between(lower, upper))
            }
        }
    }
}

/// Whether a mean lies midway between two levels, up to what rounding leaves of levels that were computed.
pub fn lies_midway(mean: f64, lower: f64, upper: f64) -> bool {
    let apart = upper - lower;
    ((mean - lower) - (upper - mean)).abs() <= MIDWAY * apart
}

/// A mean that is off the middle by that share of the distance between two barriers lies midway.
const MIDWAY: f64 = 1e-9;

/// `ln(Phi(upper) - Phi(lower))` for `lower <= upper`, from whichever side does not cancel.
fn ln_between(lower: f64, upper: f64) -> f64 {
    if lower > 0.0 {
        let near = normal::ln_upper(lower);
        near + ln_complement(normal::ln_upper(upper) - near)
    } else if upper < 0.0 {
        ln_between(-upper, -lower)
    } else if lower > -1.0 || upper < 1.0 {
        (0.5 * (libm::erf(upper / SQRT_2) - libm::erf(lower / SQRT_2))).ln()
    } else {
        (-(normal::lower(lower) + normal::upper(upper))).ln_1p()
    }
}
