//! Spectral moments of a kernel.

use std::f64::consts::FRAC_2_PI;

use super::{Correlation, Estimate, Kernel, Unavailable, transform};
use crate::expression::{Series, SeriesTerm};
use crate::numerics::quadrature::{self, Tolerance};

/// lambda_n: the integral of omega^n over the one-sided spectrum, omega in rad/s.
#[derive(Clone, Debug, PartialEq)]
pub enum Moment {
    /// Known, within its error.
    Finite {
        /// In the variance's unit times (rad/s)^n.
        value: f64,
        /// Its absolute error.
        error: f64,
    },
    /// Infinite: the spectrum falls too slowly.
    Infinite,
    /// Finite, but not computed to better than six digits.
    Unreached {
        /// What was reached.
        value: f64,
        /// Its absolute error, which may be infinite.
        error: f64,
    },
    /// Not to be had.
    Unknown(Unavailable),
}

/// The moments the theory of crossings needs.
#[derive(Clone, Debug, PartialEq)]
pub struct SpectralMoments {
    /// lambda_0, lambda_1, lambda_2, lambda_4.
    pub lambda: [Moment; 4],
}

/// The relative error above which a moment counts as not reached.
const REACHED: f64 = 1e-6;
/// User kernels are expanded up to here: one beyond tau^4, and some more for the lags near zero.
const ORDER: f64 = 8.0;
/// Relative error of a coefficient of a user kernel's expansion.
const EXPANDED: f64 = 1e-12;

impl Moment {
    pub(in crate::covariance) fn of(Estimate { value, error }: Estimate) -> Self {
        if value == f64::INFINITY {
            Self::Infinite
        } else if error <= REACHED * value.abs() {
            Self::Finite { value, error }
        } else {
            Self::Unreached { value, error }
        }
    }

    fn closed(value: f64) -> Self {
        Self::of(Estimate::closed(value))
    }

    fn of_result(result: Result<Estimate, Unavailable>) -> Self {
        result.map_or_else(Self::Unknown, Self::of)
    }

    /// As an estimate, infinite where it is.
    fn estimate(&self) -> Result<Estimate, Unavailable> {
        match self {
            Self::Finite { value, error } | Self::Unreached { value, error } => Ok(Estimate {
                value: *value,
                error: *error,
            }),
            Self::Infinite => Ok(Estimate::closed(f64::INFINITY)),
            Self::Unknown(why) => Err(why.clone()),
        }
    }

    /// The number, if it is finite and known at all.
    pub fn value(&self) -> Option<f64> {
        match self {
            Self::Finite { value, .. } | Self::Unreached { value, .. } => Some(*value),
            Self::Infinite | Self::Unknown(_) => None,
        }
    }

    fn plus(&self, other: &Self) -> Self {
        Self::of_result(self.estimate().and_then(|one| Ok(one.plus(other.estimate()?))))
    }

    fn times(&self, factor: f64) -> Self {
        Self::of_result(self.estimate().map(|one| one.times(factor)))
    }

    fn product(&self, other: &Self) -> Self {
        let product = |one: Estimate, two: Estimate| {
            if one.value == 0.0 || two.value == 0.0 {
                // Nothing of an infinite moment is nothing.
                return Estimate::closed(0.0);
            }
            if one.value.is_infinite() || two.value.is_infinite() {
                return Estimate::closed(f64::INFINITY);
            }
            Estimate {
                value: one.value * two.value,
                error: one.error * two.value.abs() + one.value.abs() * two.error,
            }
        };
        Self::of_result(self.estimate().and_then(|one| Ok(product(one, other.estimate()?))))
    }
}

impl SpectralMoments {
    fn closed(lambda: [f64; 4]) -> Self {
        Self {
            lambda: lambda.map(Moment::closed),
        }
    }

    fn zip(&self, other: &Self, operation: impl Fn(&Moment, &Moment) -> Moment) -> Self {
        let [a0, a1, a2, a4] = &self.lambda;
        let [b0, b1, b2, b4] = &other.lambda;
        Self {
            lambda: [
                operation(a0, b0),
                operation(a1, b1),
                operation(a2, b2),
                operation(a4, b4),
            ],
        }
    }
}

impl Kernel {
    /// The spectral moments: in closed form for named families, their sums and the even moments of their products;
    /// the even ones of user kernels from the expansion at lag zero; lambda_1 of these and of products by quadrature.
    pub fn moments(&self) -> SpectralMoments {
        match self {
            Self::Constant => SpectralMoments::closed([1.0, 0.0, 0.0, 0.0]),
            Self::Family(family) => SpectralMoments::closed(family.moments()),
            Self::Tabulated(table) => {
                let [zeroth, second, fourth] = table.even_moments().map(Moment::closed);
                SpectralMoments {
                    lambda: [zeroth, Moment::of_result(table.first_moment()), second, fourth],
                }
            }
            Self::User(user) => {
                let expansion = user.expansion(ORDER);
                let even = |n: u32, factor: f64| Moment::of_result(even_moment(&expansion, n, factor, user.name()));
                let zeroth = match self.value(0.0) {
                    Ok(value) => Moment::closed(value),
                    Err(why) => Moment::Unknown(why),
                };
                let first = Moment::of_result(self.first_moment_over_lags());
                SpectralMoments {
                    lambda: [zeroth, first, even(2, -2.0), even(4, 24.0)],
                }
            }
            Self::Scaled(weight, kernel) => SpectralMoments {
                lambda: kernel.moments().lambda.map(|moment| moment.times(*weight)),
            },
            Self::Sum(terms) => terms
                .iter()
                .map(Kernel::moments)
                .fold(SpectralMoments::closed([0.0; 4]), |sum, term| {
                    sum.zip(&term, Moment::plus)
                }),
            Self::Product(factors) => {
                let moments = factors.iter().map(Kernel::moments);
                let mut product = moments.fold(SpectralMoments::closed([1.0, 0.0, 0.0, 0.0]), |a, b| leibniz(&a, &b));
                product.lambda[1] = Moment::of_result(self.first_moment());
                product
            }
        }
    }

    /// lambda_1 of a product, over frequencies where the density is at hand, else over lags.
    fn first_moment(&self) -> Result<Estimate, Unavailable> {
        if self.density_is_closed() {
            self.first_moment_over_frequencies()
        } else {
            self.first_moment_over_lags()
        }
    }

    /// lambda_1 as 2/pi times the integral of (C(0) - C(tau)) / tau^2, whose integrand has one sign: from
    /// 1 - cos x over x^2, the integral of which over x > 0 is pi / 2.
    pub(super) fn first_moment_over_lags(&self) -> Result<Estimate, Unavailable> {
        let variance = self.value(0.0)?;
        let Some(times) = self.times() else {
            return Ok(Estimate::closed(0.0));
        };
        let expansion = self.expansion(ORDER);
        match expansion
            .terms()
            .iter()
            .find(|term| term.exponent != 0.0 || term.logs > 0)
        {
            Some(term) if term.exponent <= 1.0 => return Ok(Estimate::closed(f64::INFINITY)),
            _ if expansion.order() <= 1.0 => return Err(no_expansion(&expansion, &self.to_string())),
            _ => {}
        }
        // Close to zero from the expansion; how far it is wrong at the end of that stretch is seen there.
        let near = NEAR * times.0;
        let series = expansion.terms().iter().filter(|term| term.exponent > 0.0);
        let from_expansion: f64 = series
            .map(|term| expanded_loss(near, term.exponent, term.logs) * term.coefficient)
            .sum();
        let there = series_value(&expansion, near);
        let mismatch = (self.loss(near)? - (variance - there))
            .abs()
            .max(f64::EPSILON * variance);
        let start = Estimate {
            value: from_expansion,
            error: mismatch / near,
        };

        let kinks: Vec<f64> = self.kinks().iter().map(|kink| kink.lag).collect();
        let lags = transform::lags(near, times, &kinks);
        let end = lags.last().copied().unwrap_or(near);
        let middle = transform::over_square(|lag| self.loss(lag), &lags)?;
        let absolute = 1e-12 * (start.value + middle.value).abs();
        let rest = transform::over_square_beyond(|lag| self.value(lag), end, absolute)?;
        let gone = Estimate::closed(variance / end).plus(rest.times(-1.0));
        Ok(start.plus(middle).plus(gone).times(FRAC_2_PI))
    }

    /// lambda_1 from lines and density.
    pub(super) fn first_moment_over_frequencies(&self) -> Result<Estimate, Unavailable> {
        let lines = self.lines()?;
        let from_lines = lines.iter().map(|line| line.frequency * line.power).sum::<f64>();
        if !self.has_density() {
            return Ok(Estimate::closed(from_lines));
        }
        if matches!(self.smoothness(), super::Smoothness::Exactly { limiting, .. } if limiting.exponent <= 1.0) {
            return Ok(Estimate::closed(f64::INFINITY));
        }
        let integrand = |omega: f64| self.density(omega).map_or(f64::NAN, |density| omega * density.value);
        let frequencies = self.frequency_grid()?;
        let integral = quadrature::to_infinity(integrand, &frequencies, Tolerance::relative(1e-11), 400_000);
        let continuous = integral.map_or(
            Estimate {
                value: 0.0,
                error: f64::INFINITY,
            },
            |integral| Estimate {
                value: integral.value,
                error: integral.error,
            },
        );
        Ok(continuous.plus(Estimate::closed(from_lines)))
    }
}

/// The stretch of lags, in shortest times, that an expansion is trusted over.
const NEAR: f64 = 0.02;

/// What tau^power (ln tau)^logs in C adds to the integral of (C(0) - C(tau)) / tau^2 over (0, near).
fn expanded_loss(near: f64, power: f64, logs: u32) -> f64 {
    // By parts, from I_0 = near^p / p upwards: I_k = near^p (ln near)^k / p - k / p I_(k-1), p = power - 1.
    let p = power - 1.0;
    let mut integral = near.powf(p) / p;
    for k in 1..=logs {
        integral = near.powf(p) * near.ln().powi(k as i32) / p - f64::from(k) / p * integral;
    }
    -integral
}

/// The value of an expansion at a small lag.
fn series_value(expansion: &Series, lag: f64) -> f64 {
    let value = |term: &SeriesTerm| term.coefficient * lag.powf(term.exponent) * lag.ln().powi(term.logs as i32);
    expansion.terms().iter().map(value).sum()
}

/// `factor` times the coefficient of tau^n, unless a term at or below tau^n is not an even power.
fn even_moment(expansion: &Series, n: u32, factor: f64, kernel: &str) -> Result<Estimate, Unavailable> {
    let n = f64::from(n);
    let rough = |term: &SeriesTerm| term.exponent <= n && (term.exponent.rem_euclid(2.0) != 0.0 || term.logs > 0);
    if expansion.terms().iter().any(rough) {
        return Ok(Estimate::closed(f64::INFINITY));
    }
    let coefficient = expansion
        .coefficient(n)
        .ok_or_else(|| no_expansion(expansion, kernel))?;
    let value = factor * coefficient;
    Ok(Estimate {
        value,
        error: EXPANDED * value.abs(),
    })
}

fn no_expansion(expansion: &Series, kernel: &str) -> Unavailable {
    let reason = match expansion.reason() {
        Some(reason) => reason.to_string(),
        None => format!("it is known only below the power {}", expansion.order()),
    };
    Unavailable::NoExpansion {
        kernel: kernel.to_owned(),
        reason,
    }
}

/// The even moments of a product from those of its factors: Leibniz' rule for its second and fourth derivative at zero,
/// where the odd ones vanish or the moment is infinite. The first is left as it was.
fn leibniz(a: &SpectralMoments, b: &SpectralMoments) -> SpectralMoments {
    let [a0, a1, a2, a4] = &a.lambda;
    let [b0, _, b2, b4] = &b.lambda;
    let second = a2.product(b0).plus(&a0.product(b2));
    let fourth = a4.product(b0).plus(&a2.product(b2).times(6.0)).plus(&a0.product(b4));
    SpectralMoments {
        lambda: [a0.product(b0), a1.clone(), second, fourth],
    }
}
