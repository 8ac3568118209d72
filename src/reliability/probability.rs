//! A probability and its complement, each with full relative precision.

use crate::numerics::normal;
use std::cmp::Ordering;
use std::f64::consts::LN_2;

/// A probability of failure, kept as the logarithms of itself and of survival.
///
/// Neither is computed from the other where that would cancel: the smaller of the two is always the one that was
/// computed first.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Probability {
    ln_failure: f64,
    ln_survival: f64,
}

impl Probability {
    /// From both logarithms, each right where it is the smaller; the larger follows from it, so that the two add up to 1.
    /// Where either is no number, both are none.
    pub fn from_logarithms(ln_failure: f64, ln_survival: f64) -> Self {
        // Rounding may have led a little above certainty.
        match ln_failure.partial_cmp(&ln_survival) {
            Some(Ordering::Less) => {
                let ln_failure = ln_failure.min(0.0);
                Self {
                    ln_failure,
                    ln_survival: ln_complement(ln_failure),
                }
            }
            Some(Ordering::Equal | Ordering::Greater) => {
                let ln_survival = ln_survival.min(0.0);
                Self {
                    ln_failure: ln_complement(ln_survival),
                    ln_survival,
                }
            }
            None => Self {
                ln_failure: f64::NAN,
                ln_survival: f64::NAN,
            },
        }
    }

    /// The probability of failure; 0 below the smallest double.
    pub fn failure(self) -> f64 {
        self.ln_failure.exp()
    }

    /// The probability of survival; 0 below the smallest double.
    pub fn survival(self) -> f64 {
        self.ln_survival.exp()
    }

    /// The logarithm of the probability of failure.
    pub fn ln_failure(self) -> f64 {
        self.ln_failure
    }

    /// The logarithm of the probability of survival.
    pub fn ln_survival(self) -> f64 {
        self.ln_survival
    }

    /// The reliability index, `-Phi^-1(Pf)` (Hasofer and Lind 1974; EN 1990:2002, Annex C, eq. C.1), from the smaller
    /// of the two probabilities. Finite far beyond the range in which the probability itself is a double; infinite where one
    /// of the two is exactly 0.
    pub fn reliability_index(self) -> f64 {
        if self.ln_failure.is_nan() {
            f64::NAN
        } else if self.ln_failure <= -LN_2 {
            normal::quantile_of_ln(self.ln_failure).map_or(f64::INFINITY, |quantile| -quantile)
        } else {
            normal::quantile_of_ln(self.ln_survival).unwrap_or(f64::NEG_INFINITY)
        }
    }
}

/// `ln(e^a + e^b)` without leaving the range of doubles.
pub fn ln_sum(a: f64, b: f64) -> f64 {
    let (small, large) = if a < b { (a, b) } else { (b, a) };
    if large == f64::NEG_INFINITY || small == f64::NEG_INFINITY {
        return large;
    }
    large + (small - large).exp().ln_1p()
}

/// `ln(1 - e^a)` for `a <= 0` (Mächler 2012, "Accurately computing log(1 - exp(-|a|))").
pub fn ln_complement(a: f64) -> f64 {
    if a > -LN_2 {
        (-a.exp_m1()).ln()
    } else {
        (-a.exp()).ln_1p()
    }
}

/// `ln(1 - e^(-x))` for `x = e^ln_x`, however small `x` is.
pub fn ln_chance_of_event(ln_x: f64) -> f64 {
    if ln_x < -37.0 {
        // 1 - e^-x = x (1 - x/2 + ...): the correction is below half a unit in the last place.
        return ln_x;
    }
    ln_complement(-ln_x.exp())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_two_add_up_to_one() {
        let near_certainty = Probability::from_logarithms(-2e-16, -80.0);
        assert_eq!((near_certainty.failure(), near_certainty.ln_survival()), (1.0, -80.0));
        let rare = Probability::from_logarithms(-80.0, 1e-16);
        assert_eq!((rare.survival(), rare.ln_failure()), (1.0, -80.0));
        let certain = Probability::from_logarithms(0.0, f64::NEG_INFINITY);
        assert_eq!((certain.failure(), certain.survival()), (1.0, 0.0));
        assert_eq!(certain.reliability_index(), f64::NEG_INFINITY);
    }

    #[test]
    fn of_no_number_comes_no_number() {
        for (one, two) in [(f64::NAN, -1.0), (-1.0, f64::NAN), (f64::NAN, f64::NAN)] {
            let unknown = Probability::from_logarithms(one, two);
            assert!(unknown.failure().is_nan() && unknown.survival().is_nan() && unknown.reliability_index().is_nan());
        }
    }

    #[test]
    fn sums_and_complements_keep_their_digits() {
        assert!((ln_sum(-1000.0, -1000.0) - (-1000.0 + LN_2)).abs() < 1e-12);
        assert_eq!(ln_sum(f64::NEG_INFINITY, -3.0), -3.0);
        assert_eq!(ln_sum(f64::NEG_INFINITY, f64::NEG_INFINITY), f64::NEG_INFINITY);
        assert!((ln_complement(-1e-20) - 1e-20_f64.ln()).abs() < 1e-13);
        assert!((ln_complement(-50.0) + (-50.0f64).exp()).abs() < 1e-36);
        let x = 1e-16_f64;
        assert!((ln_chance_of_event(x.ln()) - x.ln()).abs() < 1e-15);
        assert!((ln_chance_of_event(1e-3_f64.ln()) - (-(-1e-3f64).exp_m1()).ln()).abs() < 1e-14);
        assert_eq!(ln_chance_of_event(f64::INFINITY), 0.0);
    }
}
