//! Spectral moments of a spectrum.

use super::{Density, Spectrum};
use crate::covariance::kernel::{Estimate, Moment, SpectralMoments, Unavailable};
use crate::covariance::spectral::{SpectralDensity, Tail};

impl Spectrum {
    /// lambda_n: the integral of omega^n G(omega) over omega from 0 to infinity, in the variance's unit times (rad/s)^n.
    /// Infinite unless n + 1 is below the tail's exponent.
    pub fn moment(&self, order: u32) -> Moment {
        match self.estimate(order) {
            Ok(estimate) => Moment::of(estimate),
            Err(why) => Moment::Unknown(why),
        }
    }

    /// lambda_0, lambda_1, lambda_2 and lambda_4.
    pub fn moments(&self) -> SpectralMoments {
        SpectralMoments {
            lambda: [0, 1, 2, 4].map(|order| self.moment(order)),
        }
    }

    /// The moment, infinite where it is; the parts of a sum are each seen for themselves, so that one infinite part
    /// makes the sum infinite.
    fn estimate(&self, order: u32) -> Result<Estimate, Unavailable> {
        match self {
            Self::Scaled(weight, spectrum) => Ok(spectrum.estimate(order)?.times(*weight)),
            Self::Sum(terms) => terms
                .iter()
                .try_fold(Estimate::closed(0.0), |sum, term| Ok(sum.plus(term.estimate(order)?))),
            Self::Family(_) | Self::Tabulated(_) | Self::User(_) if diverges(self.tail(), order) => {
                Ok(Estimate::closed(f64::INFINITY))
            }
            Self::Family(family) => Ok(family.moment(order)),
            Self::Tabulated(table) => Ok(table.moment(order)),
            Self::User(user) => user.moment(order),
        }
    }
}

/// Whether the integral of omega^n over a tail is infinite, which its exponent alone decides.
fn diverges(tail: Tail, order: u32) -> bool {
    match tail {
        Tail::Power(exponent) => f64::from(order) + 1.0 >= exponent,
        // What is known to fall at least so fast says nothing of a higher moment; no spectrum here ends like that.
        Tail::AtLeast(exponent) => f64::from(order) + 1.0 >= exponent,
        Tail::Faster => false,
    }
}
