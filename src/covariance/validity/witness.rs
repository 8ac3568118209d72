//! Proofs that a function is no covariance function.

use super::decimal::Decimal;
use crate::covariance::kernel::Kernel;
use crate::expression::{Interval, Number};
use std::collections::BTreeMap;

/// Instants t and weights w for which the variance of w_1 X(t_1) + w_2 X(t_2) + ..., which is the sum of
/// w_i w_j C(t_i - t_j), is negative: no process has the covariance function C (S. Bochner 1932, Vorlesungen über Fouriersche
/// Integrale, §20: covariance functions are those for which no such sum is negative).
///
/// There is none that has not been proven: the values of the kernel are enclosed in intervals, and the upper bound of
/// the sum is negative.
#[derive(Clone, Debug, PartialEq)]
pub struct Witness {
    /// The instants in units of a power of ten of s, rising from 0.
    instants: Vec<i128>,
    exponent: i32,
    weights: Vec<i64>,
    share: f64,
}

impl Witness {
    /// Instants in units of a power of ten of s, and weights, if they prove it.
    pub(super) fn new(kernel: &Kernel, exponent: i32, instants: Vec<i128>, weights: Vec<i64>) -> Option<Self> {
        let lags = coefficients(&instants, &weights)?;
        let mut form = Interval::point(0.0);
        for (lag, coefficient) in lags {
            let lag = Decimal { digits: lag, exponent }.enclosure();
            form = form.add(&whole(coefficient).mul(&kernel.enclosure(lag)));
        }
        let variance = kernel.enclosure(Interval::point(0.0));
        let share = form.div(&variance).high;
        (variance.low > 0.0 && form.high < 0.0 && share < 0.0).then_some(Self {
            instants,
            exponent,
            weights,
            share,
        })
    }

    /// The instants, in s.
    pub fn instants(&self) -> Vec<f64> {
        let time = |digits: &i128| {
            Decimal {
                digits: *digits,
                exponent: self.exponent,
            }
            .value()
        };
        self.instants.iter().map(time).collect()
    }

    /// The weights, whole numbers.
    pub fn weights(&self) -> &[i64] {
        &self.weights
    }

    /// An upper bound of the variance of the weighted sum, as a share of the process's variance: negative.
    pub fn share(&self) -> f64 {
        self.share
    }
}

/// A whole number as an interval.
fn whole(number: i128) -> Interval {
    const EXACT: u128 = 1 << 53;
    let value = number as f64;
    if number.unsigned_abs() <= EXACT {
        Interval::point(value)
    } else {
        Interval::rounded(value)
    }
}

/// The weighted sum's variance as a sum over lags: each with the sum of w_i w_j over the pairs it lies between.
pub(super) fn coefficients(instants: &[i128], weights: &[i64]) -> Option<BTreeMap<i128, i128>> {
    let mut lags: BTreeMap<i128, i128> = BTreeMap::new();
    for (one, weight) in instants.iter().zip(weights) {
        for (two, other) in instants.iter().zip(weights) {
            let product = i128::from(*weight) * i128::from(*other);
            let lag = one.checked_sub(*two)?.checked_abs()?;
            let sum = lags.entry(lag).or_insert(0);
            *sum = sum.checked_add(product)?;
        }
    }
    Some(lags)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::covariance::kernel::{Beyond, Family, SquaredExponential, Tabulated};

    #[test]
    fn a_box_is_refuted_by_hand() {
        let rows = [(0.0, 1.0), (2.0, 1.0), (4.0, 0.0), (6.0, 0.0)];
        let table: Kernel = Tabulated::new("box", &rows, Beyond::Zero).expect("a table").into();
        let witness = Witness::new(&table, 0, vec![0, 2, 4], vec![2, -3, 2]).expect("negative");
        // 4 + 9 + 4 - 24 + 0, and half a digit, 0.05, for each product of weights at a lag beyond zero.
        assert!((witness.share() - (17.0 - 24.0 + 0.05 * 32.0)).abs() < 1e-9);
        assert_eq!(witness.instants(), [0.0, 2.0, 4.0]);
    }

    #[test]
    fn what_is_a_covariance_function_is_never_refuted() {
        let smooth: Kernel = Family::from(SquaredExponential::new(3.0).expect("a length")).into();
        for weights in [vec![1, -2, 1], vec![1, -3, 3, -1], vec![1, -4, 6, -4, 1]] {
            let instants = (0..weights.len() as i128).collect();
            assert_eq!(Witness::new(&smooth, -3, instants, weights), None);
        }
    }
}
