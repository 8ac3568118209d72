//! Why there is no series.

use std::fmt;

use super::SeriesTerm;

/// Why a function has no series of the kind kept here, or none that was found. Displayed as half a sentence, in which h
/// is the distance from the point.
#[derive(Clone, Debug, PartialEq)]
pub enum Unknown {
    /// A symbol without a value, or a number that is none.
    Undefined,
    /// A coefficient, or a power of the logarithm, too large to be kept.
    Overflow,
    /// The argument lies outside the domain.
    Outside {
        /// The operation.
        operation: &'static str,
        /// What the argument is.
        argument: &'static str,
    },
    /// The argument grows without bound.
    Diverging {
        /// The operation.
        operation: &'static str,
        /// What the argument behaves like.
        argument: SeriesTerm,
    },
    /// The argument starts with a power of the logarithm.
    Logarithmic {
        /// The operation.
        operation: &'static str,
        /// What the argument behaves like.
        argument: SeriesTerm,
    },
    /// No term of the argument is known that would decide.
    Undecided {
        /// The operation.
        operation: &'static str,
    },
}

impl Unknown {
    /// Whether a higher order could give the series.
    pub(super) fn may_vanish_with_order(&self) -> bool {
        matches!(self, Self::Undecided { .. })
    }
}

impl fmt::Display for Unknown {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Undefined => f.write_str("something in it has no value"),
            Self::Overflow => f.write_str("its coefficients are too large for the computer"),
            Self::Outside { operation, argument } => write!(f, "{operation} of {argument} has no value"),
            Self::Diverging { operation, argument } => {
                write!(
                    f,
                    "{operation} of something that grows like {argument} has no series in powers of h"
                )
            }
            Self::Logarithmic { operation, argument } => {
                write!(
                    f,
                    "{operation} of something that behaves like {argument} has no series in powers of h"
                )
            }
            Self::Undecided { operation } => {
                write!(
                    f,
                    "{operation} of something that vanishes here as far as it was followed"
                )
            }
        }
    }
}
