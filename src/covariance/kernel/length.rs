//! The length of a family, from its scale of fluctuation.

use std::fmt;

use super::family::{DampedCosine, Exponential, Matern, RationalQuadratic, SquaredExponential, Triangular};
use super::{InvalidParameter, Kernel};

/// A family with a length, its other parameters set.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum LengthOf {
    /// `squared_exponential`
    SquaredExponential,
    /// `exponential`
    Exponential,
    /// `matern`
    Matern {
        /// nu
        smoothness: f64,
    },
    /// `rational_quadratic`
    RationalQuadratic {
        /// alpha
        mixture: f64,
    },
    /// `damped_cosine`
    DampedCosine {
        /// The angular frequency, in rad/s.
        frequency: f64,
    },
    /// `triangular`
    Triangular,
}

/// The lengths that have a given scale of fluctuation.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Length {
    /// Exactly one, in s.
    Unique(f64),
    /// Two, in s. The short one is the exponential's where the frequency goes to zero.
    Two {
        /// The damping outweighs the swinging.
        short: f64,
        /// The swinging outweighs the damping.
        long: f64,
    },
    /// None.
    None(NoLength),
}

/// Why there is no length.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum NoLength {
    /// A scale of fluctuation has to be positive and finite.
    NotPositive,
    /// The scale of fluctuation of the family is infinite whatever its length.
    AlwaysInfinite,
    /// The scale of fluctuation of the family is never that large.
    TooLarge {
        /// The largest it can be, in s.
        largest: f64,
    },
}

impl fmt::Display for NoLength {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::NotPositive => out.write_str("a scale of fluctuation must be positive"),
            Self::AlwaysInfinite => out.write_str("the scale of fluctuation is infinite for every length"),
            Self::TooLarge { largest } => write!(out, "the scale of fluctuation is at most {largest} s"),
        }
    }
}

impl LengthOf {
    /// The kernel with that length, in s.
    pub fn kernel(&self, length: f64) -> Result<Kernel, InvalidParameter> {
        Ok(match *self {
            Self::SquaredExponential => SquaredExponential::new(length)?.into(),
            Self::Exponential => Exponential::new(length)?.into(),
            Self::Matern { smoothness } => Matern::new(smoothness, length)?.into(),
            Self::RationalQuadratic { mixture } => RationalQuadratic::new(length, mixture)?.into(),
            Self::DampedCosine { frequency } => DampedCosine::new(length, frequency)?.into(),
            Self::Triangular => Triangular::new(length)?.into(),
        })
    }

    /// The length that makes the integral over all lags `scale`, in s.
    pub fn length(&self, scale: f64) -> Length {
        if !(scale.is_finite() && scale > 0.0) {
            return Length::None(NoLength::NotPositive);
        }
        let over_length = match *self {
            Self::SquaredExponential => (2.0 * std::f64::consts::PI).sqrt(),
            Self::Exponential => 2.0,
            Self::Matern { smoothness } => Matern::scale_over_length(smoothness),
            Self::RationalQuadratic { mixture } => RationalQuadratic::scale_over_length(mixture),
            Self::DampedCosine { frequency } => return damped_cosine(scale, frequency),
            Self::Triangular => 1.0,
        };
        if over_length.is_finite() {
            Length::Unique(scale / over_length)
        } else {
            Length::None(NoLength::AlwaysInfinite)
        }
    }
}

/// theta = 2 l / (1 + w^2 l^2) is theta w^2 l^2 - 2 l + theta = 0.
fn damped_cosine(scale: f64, frequency: f64) -> Length {
    let swing = scale * frequency;
    if swing > 1.0 {
        return Length::None(NoLength::TooLarge {
            largest: 1.0 / frequency,
        });
    }
    if swing == 1.0 {
        return Length::Unique(scale);
    }
    let sum = 1.0 + ((1.0 - swing) * (1.0 + swing)).sqrt();
    Length::Two {
        short: scale / sum,
        long: sum / (swing * frequency),
    }
}
