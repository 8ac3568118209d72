//! How often a process can be differentiated in mean square.

use super::family::Rough;
use super::{Correlation, Kernel};
use crate::covariance::spectral::Tail;
use crate::expression::{Series, SeriesTerm};

/// How many mean-square derivatives a process has.
///
/// The n-th exists if and only if C has a derivative of order 2 n at lag zero (H. Cramér and M. R. Leadbetter 1967,
/// Stationary and Related Stochastic Processes, sec. 9.3), which the first term of the expansion that is not an even
/// power decides: below tau^2n, and without logarithm at it, there may be none.
#[derive(Clone, Debug, PartialEq)]
pub enum Smoothness {
    /// That many, and no more because of a term at lag zero.
    Exactly {
        /// The number of derivatives.
        derivatives: u32,
        /// The lowest power that is not an even one.
        limiting: Rough,
    },
    /// Any number: C is analytic.
    Unlimited,
    /// At least that many: the expansion, as far as it was followed, has even powers alone.
    AtLeast {
        /// The number of derivatives.
        derivatives: u32,
    },
    /// Not known.
    Unclear {
        /// Why, in words.
        reason: String,
    },
}

/// User kernels are expanded up to here to see how smooth they are.
const FOLLOWED: f64 = 12.0;

impl Smoothness {
    /// What a first rough term leaves.
    fn limited(limiting: Rough) -> Self {
        Self::Exactly {
            derivatives: below(limiting.exponent),
            limiting,
        }
    }

    /// What an expansion at lag zero says.
    fn of_series(series: &Series) -> Self {
        if let Some(reason) = series.reason() {
            return Self::Unclear {
                reason: reason.to_string(),
            };
        }
        let rough = |term: &&SeriesTerm| term.exponent.rem_euclid(2.0) != 0.0 || term.logs > 0;
        match series.terms().iter().find(rough) {
            Some(term) if term.exponent <= 0.0 => Self::Unclear {
                reason: "it is infinite at lag zero".to_owned(),
            },
            Some(term) => Self::limited(Rough {
                exponent: term.exponent,
                log: term.logs,
            }),
            None if series.order() == f64::INFINITY => Self::Unlimited,
            None if series.order() > 0.0 => Self::AtLeast {
                derivatives: below(series.order()),
            },
            None => Self::Unclear {
                reason: "its expansion at lag zero is not known".to_owned(),
            },
        }
    }

    /// What the tail of a spectrum leaves: one that falls as omega^-p is a rough term tau^(p - 1) (M. L. Stein 1999,
    /// Interpolation of Spatial Data, sec. 2.8), with a logarithm where that is an even power.
    pub(in crate::covariance) fn of_tail(tail: Tail) -> Self {
        match tail {
            Tail::Power(p) => Self::limited(Rough {
                exponent: p - 1.0,
                log: u32::from((p - 1.0).rem_euclid(2.0) == 0.0),
            }),
            Tail::AtLeast(p) => Self::AtLeast {
                derivatives: below(p - 1.0),
            },
            Tail::Faster => Self::Unlimited,
        }
    }

    /// Of a sum or a product of two: as smooth as the rougher one. Covariance functions cannot heal each other, as the
    /// spectral tails behind their rough terms are positive.
    fn and(self, other: Self) -> Self {
        match (self, other) {
            (unclear @ Self::Unclear { .. }, _) | (_, unclear @ Self::Unclear { .. }) => unclear,
            (Self::Unlimited, other) | (other, Self::Unlimited) => other,
            (one, two) => {
                if one.rank() <= two.rank() {
                    one
                } else {
                    two
                }
            }
        }
    }

    /// Roughest first: by exponent, a logarithm before none, a known term before an unknown one.
    fn rank(&self) -> (f64, u32) {
        match self {
            Self::Exactly { limiting, .. } => (limiting.exponent, 1 - limiting.log.min(1)),
            Self::AtLeast { derivatives } => (2.0 * f64::from(*derivatives) + 2.0, 2),
            Self::Unlimited | Self::Unclear { .. } => (f64::INFINITY, 2),
        }
    }
}

/// The number of whole n above zero with 2 n below the exponent.
fn below(exponent: f64) -> u32 {
    ((0.5 * exponent).ceil() - 1.0) as u32
}

impl Kernel {
    /// The part that limits how smooth it is: the roughest term or factor, the kernel itself where it has none.
    pub fn roughest_part(&self) -> &Self {
        match self {
            Self::Scaled(_, kernel) => kernel.roughest_part(),
            Self::Sum(parts) | Self::Product(parts) => {
                let (mut roughest, mut least) = (self, (f64::INFINITY, u32::MAX));
                for part in parts.iter() {
                    let rank = part.smoothness().rank();
                    if rank < least {
                        (roughest, least) = (part.roughest_part(), rank);
                    }
                }
                roughest
            }
            Self::Constant | Self::Family(_) | Self::Tabulated(_) | Self::User(_) => self,
        }
    }

    /// How many mean-square derivatives a process with this covariance has.
    pub fn smoothness(&self) -> Smoothness {
        match self {
            Self::Constant => Smoothness::Unlimited,
            Self::Family(family) => family.roughness().map_or(Smoothness::Unlimited, Smoothness::limited),
            Self::Tabulated(table) => table.roughness().map_or(Smoothness::Unlimited, Smoothness::limited),
            Self::User(user) => Smoothness::of_series(&user.expansion(FOLLOWED)),
            Self::Scaled(_, kernel) => kernel.smoothness(),
            Self::Sum(parts) | Self::Product(parts) => parts
                .iter()
                .map(Kernel::smoothness)
                .fold(Smoothness::Unlimited, Smoothness::and),
        }
    }
}
