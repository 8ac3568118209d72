//! lambda_1 of several terms over one source, which no derivative of the covariance gives.

use super::form::Term;
use super::kernel::Kernel;
use super::moments::Moment;
use crate::numerics::quadrature::{self, Integral, Tolerance};
use std::f64::consts::{FRAC_PI_2, PI};

/// The relative accuracy aimed at.
const RELATIVE: f64 = 1e-10;

/// The relative error above which the moment counts as not reached.
const REACHED: f64 = 1e-6;

/// Integrand values after which an integral is given up.
const EVALUATIONS: usize = 200_000;

/// The integral of omega |A(omega)|² over the spectrum, A being the sum of a (i omega)^n exp(-i omega d) over the terms:
/// each pair of terms gives omega^(1 + n_i + n_j) cos(omega (d_i - d_j) - (n_i - n_j) pi/2).
pub(super) fn of_terms(kernel: &Kernel, terms: &[Term]) -> Moment {
    let scale = kernel.moments().lambda[1].value().map_or(0.0, f64::abs);
    let mut sum = Moment::Finite { value: 0.0, error: 0.0 };
    for (index, one) in terms.iter().enumerate() {
        for (other_index, other) in terms.iter().enumerate().skip(index) {
            let both = if other_index == index { 1.0 } else { 2.0 };
            let pair = Pair {
                power: 1 + one.operator.derivatives + other.operator.derivatives,
                lag: (one.operator.delay - other.operator.delay).abs(),
                phase: phase(one, other),
            };
            let weight = both * one.coefficient() * other.coefficient();
            sum = sum.plus(pair.integral(kernel, scale).times(weight));
        }
    }
    match sum {
        Moment::Finite { value, error } if error > REACHED * value.abs() => Moment::Unreached,
        sum => sum,
    }
}

/// `(n_i - n_j) pi/2`, with the sign of the lag taken into it.
fn phase(one: &Term, other: &Term) -> f64 {
    let quarter_turns = f64::from(one.operator.derivatives) - f64::from(other.operator.derivatives);
    let forward = one.operator.delay >= other.operator.delay;
    FRAC_PI_2 * if forward { quarter_turns } else { -quarter_turns }
}

/// What a pair of terms asks of the spectrum.
struct Pair {
    power: u32,
    lag: f64,
    phase: f64,
}

impl Pair {
    fn weight(&self, omega: f64) -> f64 {
        omega.powi(self.power as i32) * (omega * self.lag - self.phase).cos()
    }

    fn integral(&self, kernel: &Kernel, scale: f64) -> Moment {
        if self.lag == 0.0 && self.power == 1 {
            return Moment::from(&kernel.moments().lambda[1]);
        }
        if self.lag == 0.0 && self.phase.cos().abs() < 0.5 {
            // A quarter turn apart at one instant: the two are uncorrelated at every frequency.
            return Moment::Finite { value: 0.0, error: 0.0 };
        }
        let lines = match kernel.lines() {
            Ok(lines) => lines.iter().map(|line| line.power * self.weight(line.frequency)).sum(),
            Err(_) => return Moment::Unreached,
        };
        let of_lines = Moment::Finite {
            value: lines,
            error: 0.0,
        };
        if kernel.has_density() {
            of_lines.plus(self.of_density(kernel, scale))
        } else {
            of_lines
        }
    }

    fn of_density(&self, kernel: &Kernel, scale: f64) -> Moment {
        let Ok(grid) = kernel.frequency_grid() else {
            return Moment::Unreached;
        };
        let integrand = |omega: f64| match kernel.density(omega) {
            Ok(density) => density.value * self.weight(omega),
            Err(_) => f64::NAN,
        };
        let tolerance = Tolerance {
            absolute: RELATIVE * scale,
            relative: RELATIVE,
        };
        if self.lag == 0.0 {
            return moment(quadrature::to_infinity(integrand, &grid, tolerance, EVALUATIONS));
        }
        // Up to the last scale of the density one by one, then wave by wave.
        let end = grid.last().copied().unwrap_or(0.0);
        let head = moment(quadrature::between(integrand, &grid, tolerance, EVALUATIONS));
        let tail = quadrature::oscillating_tail(integrand, end, PI / self.lag, tolerance, EVALUATIONS);
        head.plus(moment(tail))
    }
}

fn moment(integral: Option<Integral>) -> Moment {
    match integral {
        Some(integral) if integral.error.is_finite() => Moment::Finite {
            value: integral.value,
            error: integral.error,
        },
        _ => Moment::Unreached,
    }
}
