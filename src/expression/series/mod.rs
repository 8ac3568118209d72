//! Truncated one-sided series: how a function behaves just right of a point.

mod compose;
mod expansion;
mod operations;
mod taylor;
mod term;
mod unknown;

#[cfg(test)]
mod tests;

pub use term::SeriesTerm;
pub use unknown::Unknown;

use expansion::Expansion;

/// A generalised power series in the distance h from a point, h -> 0+:
///
/// sum of coefficient * h^exponent * (ln h)^logs + O(h^order)
///
/// with any real exponents. Whole exponents alone would not do: exp(-h^1.9) has a finite slope and an infinite
/// curvature at lag zero, and that is what smoothness is read from.
///
/// # Order
///
/// All terms with an exponent below [`order`](Self::order) are known, none from there on (a factor of powers of ln h
/// may stand before the remainder). Operations keep the order as high as their operands allow; a division by h^k and a
/// cancellation of leading terms lower it, as they must. An infinite order means a finite sum without remainder; a
/// function of such a sum is expanded to order 16. At most 128 terms are kept, and the order is lowered to match.
/// [`Series::expand`] finds the order to start with.
///
/// # Rounding
///
/// Each coefficient carries a bound of its rounding error, carried along by running error analysis (Wilkinson 1963,
/// "Rounding errors in algebraic processes"; Higham 2002, "Accuracy and stability of numerical algorithms", section
/// 3.3). A coefficient within 256 times that bound of zero *is* zero from then on: sin² + cos² - 1 has no term left,
/// where 1e-17 at h^1 would wrongly say kink. Exponents that agree within 1e-9 are one exponent, and one that close to a
/// whole number is that number. Just beside a removable singularity (sin(h)/h about 0.01) digits are lost from order to
/// order, as in any arithmetic of series; what is lost altogether counts as zero.
///
/// # One side
///
/// `abs`, `min`, `max` and `step` exactly at their kink give what holds right of the point. At a lag above 0 the
/// coefficients are those of Taylor, so coefficient(n) times n! is the n-th derivative, from the right where there is
/// a kink.
///
/// # Unknown
///
/// What has no such series (exp(1/h), sin(ln h), the logarithm of a negative number) is unknown, with a
/// [reason](Self::reason), and so is all that is computed from it.
#[derive(Clone, Debug, PartialEq)]
pub struct Series(Result<Expansion, Unknown>);

impl Series {
    /// The number `value`, exactly.
    pub fn constant(value: f64) -> Self {
        Self(Expansion::constant(value))
    }

    /// The variable itself, `at` + h, to be computed with up to h^`order`.
    pub fn variable(at: f64, order: f64) -> Self {
        Self::from_terms(vec![SeriesTerm::new(at, 0.0, 0), SeriesTerm::new(1.0, 1.0, 0)], order)
    }

    /// The sum of terms in any order, plus O(h^`order`); no remainder if the order is infinite. Terms of equal powers
    /// add up; terms from the order on are dropped. Coefficients count as rounded to the last bit.
    pub fn from_terms(terms: Vec<SeriesTerm>, order: f64) -> Self {
        Self(Expansion::new(terms, order))
    }

    /// No series, for a reason.
    pub fn unknown(reason: Unknown) -> Self {
        Self(Err(reason))
    }

    /// The series of a function right of `at`, known at least up to O(h^`order`) where that can be had: computes with a
    /// higher order as long as divisions and cancellations eat it up. Compare the [order](Self::order) of the result.
    pub fn expand(at: f64, order: f64, function: impl Fn(&Series) -> Series) -> Series {
        let mut working = order;
        let mut series = function(&Self::variable(at, working));
        for _ in 0..4 {
            let missing = match &series.0 {
                Ok(expansion) => order - expansion.order(),
                Err(reason) if reason.may_vanish_with_order() => order.max(1.0),
                Err(_) => break,
            };
            if missing <= 0.0 || working > 8.0 * order.max(4.0) {
                break;
            }
            working += missing.max(1.0);
            series = function(&Self::variable(at, working));
        }
        series
    }

    /// The terms from the largest to the smallest: growing exponents, falling powers of the logarithm. None has a
    /// zero coefficient. Empty if the series is unknown.
    pub fn terms(&self) -> &[SeriesTerm] {
        self.0.as_ref().map_or(&[], Expansion::terms)
    }

    /// The coefficient of h^exponent without logarithm; `None` if the series is unknown or the exponent is not below
    /// the order. Terms with logarithms of the same exponent, which outgrow it, are among the [terms](Self::terms).
    pub fn coefficient(&self, exponent: f64) -> Option<f64> {
        self.0.as_ref().ok()?.coefficient(exponent)
    }

    /// The exponent from which on nothing is known; infinite for a sum without remainder, minus infinity if the series
    /// is unknown.
    pub fn order(&self) -> f64 {
        self.0.as_ref().map_or(f64::NEG_INFINITY, Expansion::order)
    }

    /// Why it is unknown, if it is.
    pub fn reason(&self) -> Option<&Unknown> {
        self.0.as_ref().err()
    }
}

/// For example `1 - 0.5 h^2 + 3 h^2.5 ln(h) + O(h^5)`.
impl std::fmt::Display for Series {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match &self.0 {
            Ok(expansion) => expansion.fmt(f),
            Err(reason) => write!(f, "unknown: {reason}"),
        }
    }
}
