//! Values, expansions and derivatives of a kernel as a whole.

use super::family::{Correlation, Kink, product};
use super::{Kernel, Unavailable};
use crate::expression::{Number, Series};

impl Kernel {
    /// The covariance at a finite lag of either sign.
    pub fn value(&self, lag: f64) -> Result<f64, Unavailable> {
        let lag = lag.abs();
        match self {
            Self::Constant => Ok(1.0),
            Self::Family(family) => Ok(family.value(lag)),
            Self::Tabulated(table) => table.value(lag),
            Self::User(user) => user.value(lag),
            Self::Scaled(weight, kernel) => Ok(weight * kernel.value(lag)?),
            Self::Sum(terms) => terms.iter().map(|term| term.value(lag)).sum(),
            Self::Product(factors) => factors.iter().map(|factor| factor.value(lag)).product(),
        }
    }

    /// What the covariance has lost since lag zero, C(0) - C(lag), keeping its digits where the lag is small.
    pub fn loss(&self, lag: f64) -> Result<f64, Unavailable> {
        let lag = lag.abs();
        match self {
            Self::Constant => Ok(0.0),
            Self::Family(family) => Ok(family.loss(lag)),
            Self::Tabulated(table) => table.loss(lag),
            Self::User(user) => user.loss(lag),
            Self::Scaled(weight, kernel) => Ok(weight * kernel.loss(lag)?),
            Self::Sum(terms) => terms.iter().map(|term| term.loss(lag)).sum(),
            Self::Product(factors) => {
                // a(0) b(0) - a b = (a(0) - a) b(0) + a (b(0) - b), from factor to factor.
                let (mut value, mut lost) = (1.0, 0.0);
                for factor in factors.iter() {
                    lost = lost * factor.value(0.0)? + value * factor.loss(lag)?;
                    value *= factor.value(lag)?;
                }
                Ok(lost)
            }
        }
    }

    /// The right-sided expansion at lag zero up to O(tau^order), or less where less is known. No order above 64 is
    /// reached.
    pub fn expansion(&self, order: f64) -> Series {
        match self {
            Self::Constant => Series::constant(1.0),
            Self::Family(family) => family.expansion(order),
            Self::Tabulated(table) => table.expansion(order),
            Self::User(user) => user.expansion(order),
            Self::Scaled(weight, kernel) => kernel.expansion(order).mul(&Series::constant(*weight)),
            Self::Sum(terms) => {
                let expansions = terms.iter().map(|term| term.expansion(order));
                expansions.fold(Series::constant(0.0), |sum, term| sum.add(&term))
            }
            Self::Product(factors) => {
                let expansions = factors.iter().map(|factor| factor.expansion(order));
                expansions.fold(Series::constant(1.0), |product, factor| product.mul(&factor))
            }
        }
    }

    /// The coefficients of h^0, ..., h^order in C(lag + h), for a finite lag of either sign: coefficient n times n! is
    /// the n-th derivative. Fails where one of these derivatives does not exist.
    pub fn taylor(&self, lag: f64, order: usize) -> Result<Vec<f64>, Unavailable> {
        if lag == 0.0 {
            return self.taylor_at_zero(order);
        }
        let mut coefficients = self.taylor_right(lag.abs(), order)?;
        if lag < 0.0 {
            for coefficient in coefficients.iter_mut().skip(1).step_by(2) {
                *coefficient = -*coefficient;
            }
        }
        Ok(coefficients)
    }

    /// At lag zero an even function has the derivatives up to its first rough term.
    fn taylor_at_zero(&self, order: usize) -> Result<Vec<f64>, Unavailable> {
        let expansion = self.expansion(order as f64 + 1.0);
        let mut coefficients = vec![0.0; order + 1];
        for term in expansion.terms().iter().filter(|term| term.exponent <= order as f64) {
            let rough = term.exponent.rem_euclid(2.0) != 0.0 || term.logs > 0;
            match coefficients.get_mut(term.exponent as usize) {
                Some(coefficient) if !rough => *coefficient = term.coefficient,
                _ => {
                    return Err(Unavailable::NotSmooth {
                        lag: 0.0,
                        derivative: term.exponent.ceil().max(0.0) as usize,
                    });
                }
            }
        }
        if expansion.order() <= order as f64 {
            let derivative = expansion.order().ceil().max(0.0) as usize;
            return Err(Unavailable::NotSmooth { lag: 0.0, derivative });
        }
        Ok(coefficients)
    }

    fn taylor_right(&self, lag: f64, order: usize) -> Result<Vec<f64>, Unavailable> {
        match self {
            Self::Constant => Ok(unit(order)),
            Self::Family(family) => match family
                .kinks()
                .iter()
                .find(|kink| kink.lag == lag && kink.derivative <= order)
            {
                Some(kink) => Err(Unavailable::NotSmooth {
                    lag,
                    derivative: kink.derivative,
                }),
                None => Ok(family.taylor(lag, order)),
            },
            Self::Tabulated(table) => table.taylor(lag, order),
            Self::User(user) => user.taylor(lag, order),
            Self::Scaled(weight, kernel) => {
                let mut coefficients = kernel.taylor_right(lag, order)?;
                coefficients.iter_mut().for_each(|coefficient| *coefficient *= weight);
                Ok(coefficients)
            }
            Self::Sum(terms) => {
                let mut sum = vec![0.0; order + 1];
                for term in terms.iter() {
                    let coefficients = term.taylor_right(lag, order)?;
                    sum.iter_mut()
                        .zip(coefficients)
                        .for_each(|(sum, coefficient)| *sum += coefficient);
                }
                Ok(sum)
            }
            Self::Product(factors) => {
                let mut whole = unit(order);
                for factor in factors.iter() {
                    whole = product(&whole, &factor.taylor_right(lag, order)?);
                }
                Ok(whole)
            }
        }
    }

    /// The lags above zero where a derivative is known to jump, rising. Those of user kernels are not known.
    pub fn kinks(&self) -> Vec<Kink> {
        let mut kinks = match self {
            Self::Constant | Self::User(_) => Vec::new(),
            Self::Family(family) => family.kinks(),
            Self::Tabulated(table) => table.kinks(),
            Self::Scaled(_, kernel) => kernel.kinks(),
            Self::Sum(parts) | Self::Product(parts) => parts.iter().flat_map(Kernel::kinks).collect(),
        };
        kinks.sort_by(|a, b| a.lag.total_cmp(&b.lag).then(a.derivative.cmp(&b.derivative)));
        kinks.dedup_by_key(|kink| kink.lag);
        kinks
    }

    /// The shortest and the longest time over which it changes, in s; none if it is constant. The scales of numerical
    /// work on it.
    pub fn times(&self) -> Option<(f64, f64)> {
        match self {
            Self::Constant => None,
            Self::Family(family) => Some(family.times()),
            Self::Tabulated(table) => Some(table.times()),
            Self::User(user) => user.times(),
            Self::Scaled(_, kernel) => kernel.times(),
            Self::Sum(parts) => parts
                .iter()
                .filter_map(Kernel::times)
                .reduce(|a, b| (a.0.min(b.0), a.1.max(b.1))),
            // A product is gone as soon as a factor is gone for good.
            Self::Product(parts) => {
                let fading = parts.iter().filter(|part| part.fades()).filter_map(Kernel::times);
                let longest = fading.map(|(_, long)| long).reduce(f64::min);
                let all = parts
                    .iter()
                    .filter_map(Kernel::times)
                    .reduce(|a, b| (a.0.min(b.0), a.1.max(b.1)));
                all.map(|(short, long)| (short, longest.unwrap_or(long).max(short)))
            }
        }
    }

    /// Whether it is known to vanish, to any accuracy, within some tens of its longest time.
    fn fades(&self) -> bool {
        match self {
            Self::Constant | Self::User(_) => false,
            Self::Family(family) => family.fades(),
            Self::Tabulated(table) => table.lines().is_empty(),
            Self::Scaled(_, kernel) => kernel.fades(),
            Self::Sum(parts) => parts.iter().all(Kernel::fades),
            Self::Product(parts) => parts.iter().any(Kernel::fades),
        }
    }
}

/// The coefficients of the constant 1.
fn unit(order: usize) -> Vec<f64> {
    let mut coefficients = vec![0.0; order + 1];
    if let Some(first) = coefficients.first_mut() {
        *first = 1.0;
    }
    coefficients
}
