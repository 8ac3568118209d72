//! What an integral over frequency needs to know of a source, however the source is described.

use super::kernel::{Correlation, Estimate, Family, Kernel, Line, Smoothness, Unavailable};
use nalgebra::Complex;

/// A one-sided spectrum over omega in rad/s: C(tau) = integral over omega from 0 to infinity of G(omega) cos(omega tau),
/// with lines besides. Densities are in the square of the source's unit per rad/s.
pub trait SpectralDensity {
    /// The density of the continuous part at omega >= 0, in rad/s.
    fn density(&self, omega: f64) -> Result<Estimate, Unavailable>;

    /// Whether [`SpectralDensity::density`] is a closed form: quick, and right to about 1e-13.
    fn is_closed(&self) -> bool;

    /// The lines, by rising frequency.
    fn lines(&self) -> Result<Vec<Line>, Unavailable>;

    /// Rising frequencies from 0, in rad/s, graded towards each peak and edge of the density: what an integral begins
    /// with. Beyond the last of them the density only falls. Empty where there is no continuous part.
    fn grid(&self) -> Result<Vec<f64>, Unavailable>;

    /// How the density falls at high frequency.
    fn tail(&self) -> Tail;

    /// The power q of omega with which the density begins at frequency 0: 0 where it is finite there and not 0, negative
    /// where it is infinite, infinity where it begins flatter than any power or is 0 up to some frequency.
    fn head(&self) -> f64;

    /// The longest lag whose wave the density has at high frequency, in s: that of a kink of the kernel. 0 where it falls
    /// without waves.
    fn wave(&self) -> f64 {
        0.0
    }

    /// The density as a sum of rational functions, where it is one.
    fn rational(&self) -> Option<Vec<Rational>>;
}

/// How a density falls at high frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Tail {
    /// As omega^-exponent, perhaps with logarithms; lambda_n is infinite unless n + 1 < exponent. White noise has 0.
    Power(f64),
    /// At least as fast as omega^-exponent: more is not known.
    AtLeast(f64),
    /// Faster than any power, or not there beyond some frequency.
    Faster,
}

impl Tail {
    /// The exponent that is certain; infinite where the density falls faster than any power.
    pub fn exponent(self) -> f64 {
        match self {
            Self::Power(exponent) | Self::AtLeast(exponent) => exponent,
            Self::Faster => f64::INFINITY,
        }
    }

    /// Whether the moment of an order is finite.
    pub fn allows(self, order: u32) -> bool {
        f64::from(order) + 1.0 < self.exponent()
    }

    /// With a power of omega more in the denominator.
    #[must_use]
    pub fn steeper(self, by: f64) -> Self {
        match self {
            _ if by == f64::INFINITY => Self::Faster,
            Self::Power(exponent) => Self::Power(exponent + by),
            Self::AtLeast(exponent) => Self::AtLeast(exponent + by),
            Self::Faster => Self::Faster,
        }
    }

    /// The slower of two.
    #[must_use]
    pub fn or(self, other: Self) -> Self {
        if other.exponent() < self.exponent() {
            other
        } else {
            self
        }
    }
}

/// With n derivatives a density falls faster than omega^-(2 n + 1), by nobody knows how much.
const LEAST_MARGIN: f64 = 1e-9;

impl From<&Smoothness> for Tail {
    /// A first rough term tau^e at lag 0 is a density that falls as omega^-(e + 1) (Stein 1999, Interpolation of Spatial
    /// Data, sec. 2.8).
    fn from(smoothness: &Smoothness) -> Self {
        match smoothness {
            Smoothness::Unlimited => Self::Faster,
            Smoothness::Exactly { limiting, .. } => Self::Power(limiting.exponent + 1.0),
            Smoothness::AtLeast { derivatives } => Self::AtLeast(2.0 * f64::from(*derivatives) + 1.0 + LEAST_MARGIN),
            Smoothness::Unclear { .. } => Self::AtLeast(1.0 + LEAST_MARGIN),
        }
    }
}

/// G(omega) = gain * |product of (i omega - z)|² / |product of (i omega - p)|² over the zeros z and the poles p. Complex ones
/// come in conjugate pairs, every pole lies left of the imaginary axis.
#[derive(Clone, Debug, PartialEq)]
pub struct Rational {
    /// Not negative.
    pub gain: f64,
    /// In rad/s.
    pub zeros: Vec<Complex<f64>>,
    /// In rad/s; more than there are zeros, unless the density is white at high frequency.
    pub poles: Vec<Complex<f64>>,
}

impl SpectralDensity for Kernel {
    fn density(&self, omega: f64) -> Result<Estimate, Unavailable> {
        Kernel::density(self, omega)
    }

    fn is_closed(&self) -> bool {
        self.density_is_closed()
    }

    fn lines(&self) -> Result<Vec<Line>, Unavailable> {
        Kernel::lines(self)
    }

    fn grid(&self) -> Result<Vec<f64>, Unavailable> {
        if self.has_density() {
            self.frequency_grid()
        } else {
            Ok(Vec::new())
        }
    }

    fn tail(&self) -> Tail {
        Tail::from(&self.smoothness())
    }

    fn wave(&self) -> f64 {
        self.kinks().last().map_or(0.0, |kink| kink.lag)
    }

    /// Kernels are finite at frequency 0 but for those that fade too slowly, whose singularity is integrable.
    fn head(&self) -> f64 {
        match self {
            Self::Family(Family::RationalQuadratic(kernel)) if kernel.scale_of_fluctuation().is_infinite() => -1.0,
            Self::Scaled(_, kernel) => SpectralDensity::head(&**kernel),
            Self::Sum(terms) => terms.iter().map(SpectralDensity::head).fold(f64::INFINITY, f64::min),
            Self::Product(factors) => factors.iter().map(SpectralDensity::head).fold(0.0, f64::min),
            _ => 0.0,
        }
    }

    fn rational(&self) -> Option<Vec<Rational>> {
        match self {
            Self::Constant => Some(Vec::new()),
            Self::Scaled(weight, kernel) => {
                let mut parts = kernel.rational()?;
                parts.iter_mut().for_each(|part| part.gain *= weight);
                Some(parts)
            }
            Self::Sum(terms) => {
                let parts: Option<Vec<Vec<Rational>>> = terms.iter().map(SpectralDensity::rational).collect();
                Some(parts?.concat())
            }
            Self::Family(family) => family.rational(),
            _ => None,
        }
    }
}
