//! (1 + u^2 / (2 alpha))^-alpha: squared exponentials of many lengths, mixed.

use std::f64::consts::{FRAC_2_PI, PI};
use std::fmt;

use super::parameter::{self, InvalidParameter};
use super::polynomial;
use super::{Correlation, Rough};
use crate::expression::Series;
use crate::numerics::{bessel, gamma, matern};

/// The correlation function (1 + u^2 / (2 alpha))^-alpha, u = tau / length, alpha the mixture.
///
/// It is the mean of exp(-s u^2 / 2) over a precision s with a gamma distribution of shape alpha and mean 1
/// (Rasmussen and Williams 2006, eq. 4.20), from which its spectrum and moments follow.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct RationalQuadratic {
    length: f64,
    mixture: f64,
}

impl RationalQuadratic {
    /// From its length in s and its mixture.
    pub fn new(length: f64, mixture: f64) -> Result<Self, InvalidParameter> {
        Ok(Self {
            length: parameter::positive("rational_quadratic", "length", length)?,
            mixture: parameter::shape("rational_quadratic", "mixture", mixture)?,
        })
    }

    /// The length, in s.
    pub fn length(&self) -> f64 {
        self.length
    }

    /// The mixture, alpha: how alike the lengths are that are mixed.
    pub fn mixture(&self) -> f64 {
        self.mixture
    }

    /// The logarithm of the correlation.
    fn logarithm(&self, lag: f64) -> f64 {
        let u = lag / self.length;
        -self.mixture * (u * (u / (2.0 * self.mixture))).ln_1p()
    }

    /// The scale of fluctuation over the length; infinite for mixtures up to 1/2.
    pub(in crate::covariance::kernel) fn scale_over_length(mixture: f64) -> f64 {
        if mixture <= 0.5 {
            return f64::INFINITY;
        }
        (2.0 * PI * mixture).sqrt() / gamma::ratio_half(mixture - 0.5)
    }
}

impl Correlation for RationalQuadratic {
    fn value(&self, lag: f64) -> f64 {
        self.logarithm(lag).exp()
    }

    fn loss(&self, lag: f64) -> f64 {
        -self.logarithm(lag).exp_m1()
    }

    /// The binomial series.
    fn expansion(&self, order: f64) -> Series {
        let scale = 2.0 * self.mixture * self.length * self.length;
        polynomial::series(
            order,
            polynomial::powers(2.0, |k| -(self.mixture + k - 1.0) / (k * scale)),
        )
    }

    fn taylor(&self, lag: f64, order: usize) -> Vec<f64> {
        // In units of the length, the base of the power at tau + h is (1 + u^2 / 2 alpha) times a quadratic in h that
        // begins with 1; the quotients are kept finite for very long lags.
        let u = lag / self.length;
        let base = 1.0 + u * (u / (2.0 * self.mixture));
        let slope = u / self.mixture / base;
        let curvature = 0.5 / self.mixture / base;
        let coefficients = polynomial::power([slope, curvature], -self.mixture, self.value(lag), order);
        polynomial::rescaled(coefficients.into_iter(), 1.0 / self.length).collect()
    }

    /// The gamma mixture of Gaussian densities, an integral of the kind of Abramowitz and Stegun (1964), 9.6.24:
    /// G = 2 l sqrt(2 alpha / pi) / Gamma(alpha) (x/2)^m K_m(x), with m = alpha - 1/2, x = omega l sqrt(2 alpha).
    fn density(&self, omega: f64) -> Option<f64> {
        let order = self.mixture - 0.5;
        let x = omega * self.length * (2.0 * self.mixture).sqrt();
        if x == 0.0 {
            return Some(self.scale_of_fluctuation() / PI);
        }
        let scale = self.length * (2.0 * self.mixture / PI).sqrt();
        // (x/2)^m K_m(x) = Gamma(m)/2 times the Matérn shape of order m, for m > 0; K is even in its order.
        Some(if order > 0.0 {
            scale * matern::correlation(order, x) / gamma::ratio_half(order)
        } else {
            scale * 2.0 * ((0.5 * x).powf(order) * (-x).exp() * bessel::k_pair(-order, x).0)
                / libm::tgamma(self.mixture)
        })
    }

    fn scale_of_fluctuation(&self) -> f64 {
        self.length * Self::scale_over_length(self.mixture)
    }

    /// lambda_n = E[s^(n/2)] lambda_n of the squared exponential.
    fn moments(&self) -> [f64; 4] {
        let rate = 1.0 / self.length;
        let root = gamma::ratio_half(self.mixture) / self.mixture.sqrt();
        [
            1.0,
            FRAC_2_PI.sqrt() * rate * root,
            rate.powi(2),
            3.0 * (1.0 + 1.0 / self.mixture) * rate.powi(4),
        ]
    }

    fn roughness(&self) -> Option<Rough> {
        None
    }

    fn times(&self) -> (f64, f64) {
        // Below a mixture of 1 the singularity nearest to lag zero, at i l sqrt(2 alpha), is nearer than the length.
        (self.length * (2.0 * self.mixture).sqrt().min(1.0), self.length)
    }

    fn fades(&self) -> bool {
        false
    }
}

impl fmt::Display for RationalQuadratic {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            out,
            "rational_quadratic(length: {} s, mixture: {})",
            self.length, self.mixture
        )
    }
}
