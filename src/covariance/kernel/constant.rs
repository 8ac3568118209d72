//! The constant part of a kernel: the variance of a random constant within the process, a line at frequency zero.

use super::{Kernel, Unavailable};
use std::sync::Arc;

/// A lag of so many longest times is very long.
const VERY_LONG: f64 = 1e4;

impl Kernel {
    /// The constant part, where the kernel is made of named families and tables: C at infinite lag, less what still
    /// swings. `None` where a user kernel takes part, of which only values are known.
    pub fn constant_part(&self) -> Result<Option<f64>, Unavailable> {
        if self.has_user_kernel() {
            return Ok(None);
        }
        let constant = self
            .lines()?
            .first()
            .filter(|line| line.frequency == 0.0)
            .map_or(0.0, |line| line.power);
        Ok(Some(constant))
    }

    /// A very long lag, in s, and the value there.
    pub fn at_long_lag(&self) -> Result<(f64, f64), Unavailable> {
        let lag = VERY_LONG * self.times().map_or(1.0, |(_, long)| long);
        Ok((lag, self.value(lag)?))
    }

    /// The kernel less a constant, which its constant part should be: no covariance function otherwise.
    #[must_use]
    pub fn without_constant(self, constant: f64) -> Self {
        match self {
            _ if constant == 0.0 => self,
            Self::Constant => minus(Self::Constant, constant),
            Self::User(user) => Self::User(Arc::new(user.less(constant))),
            Self::Scaled(weight, kernel) if kernel.has_user_kernel() => Self::Scaled(
                weight,
                Arc::new(Self::clone(&kernel).without_constant(constant / weight)),
            ),
            Self::Sum(terms) => {
                let is_constant = |term: &Kernel| !term.has_density() && term.times().is_none();
                let (constants, mut others): (Vec<Kernel>, Vec<Kernel>) = terms.iter().cloned().partition(is_constant);
                let within: f64 = constants.iter().filter_map(|term| term.value(0.0).ok()).sum();
                let rest = if (within - constant).abs() <= ROUNDING * constant.abs() {
                    0.0
                } else {
                    constant - within
                };
                match others.iter_mut().find(|term| term.has_user_kernel()) {
                    Some(user) => *user = std::mem::replace(user, Self::Constant).without_constant(rest),
                    None if rest != 0.0 => return minus(Self::sum(others), rest),
                    None => {}
                }
                Self::sum(others)
            }
            other => minus(other, constant),
        }
    }

    fn has_user_kernel(&self) -> bool {
        match self {
            Self::User(_) => true,
            Self::Constant | Self::Family(_) | Self::Tabulated(_) => false,
            Self::Scaled(_, kernel) => kernel.has_user_kernel(),
            Self::Sum(parts) | Self::Product(parts) => parts.iter().any(Self::has_user_kernel),
        }
    }

    /// Whether it is a covariance function by construction, being made of named families alone.
    pub fn is_valid_by_construction(&self) -> bool {
        match self {
            Self::User(_) | Self::Tabulated(_) => false,
            Self::Constant | Self::Family(_) => true,
            Self::Scaled(weight, kernel) => *weight > 0.0 && kernel.is_valid_by_construction(),
            Self::Sum(parts) | Self::Product(parts) => parts.iter().all(Self::is_valid_by_construction),
        }
    }
}

/// Constants that differ by less, relatively, are one.
const ROUNDING: f64 = 1e-12;

fn minus(kernel: Kernel, constant: f64) -> Kernel {
    Kernel::sum(vec![kernel, Kernel::Scaled(-constant, Arc::new(Kernel::Constant))])
}
