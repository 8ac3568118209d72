//! Each closed form by a second way: spectrum against values, moments by integration over lags and over frequencies.

use super::*;
use crate::numerics::quadrature::{self, Tolerance};
use std::f64::consts::PI;

/// The cosine transform of the density at a lag above zero.
fn from_density(kernel: &Kernel, lag: f64) -> f64 {
    let grid = kernel.frequency_grid().expect("few lines");
    let integrand = |omega: f64| kernel.density(omega).expect("a density").value * (omega * lag).cos();
    let tolerance = Tolerance {
        absolute: 1e-13,
        relative: 1e-12,
    };
    let head = quadrature::between(integrand, &grid, tolerance, 1_000_000).expect("a grid");
    let end = grid.last().copied().unwrap_or(0.0);
    let tail = quadrature::oscillating_tail(integrand, end, PI / lag, tolerance, 100_000).expect("a half-period");
    head.value + tail.value
}

#[test]
fn the_transform_of_the_density_is_the_value() {
    // The density of the triangle swings itself, which the sum over waves of one period does not allow for.
    let is_triangle = |kernel: &Kernel| matches!(kernel, Kernel::Family(Family::Triangular(_)));
    for kernel in families().into_iter().filter(|kernel| !is_triangle(kernel)) {
        for lag in [0.4, 1.7, 5.0] {
            let value = kernel.value(lag).expect("a value");
            near(from_density(&kernel, lag), value, 1e-9, &format!("{kernel} at {lag}"));
        }
    }
}

#[test]
fn the_transform_of_the_value_is_the_density() {
    for kernel in families()
        .into_iter()
        .filter(|kernel| !matches!(kernel, Kernel::Family(Family::BandLimited(_))))
    {
        for omega in [0.0, 0.3, 2.4, 30.0] {
            let exact = kernel.density(omega).expect("a density").value;
            let found = kernel.transformed(omega, |lag| kernel.value(lag)).expect("a transform");
            let miss = (found.value - exact).abs();
            assert!(
                miss <= found.error + 1e-12,
                "{kernel} at {omega}: {found:?}, exact {exact}"
            );
            // What rings through more waves than are resolved is only bounded.
            let resolved = kernel.times().is_some_and(|(_, long)| omega * long < 1e3);
            assert!(!resolved || found.error < 1e-8, "{kernel} at {omega}: {found:?}");
        }
    }
}

#[test]
fn first_moments_over_lags_and_frequencies() {
    for kernel in families() {
        let closed = kernel.moments().lambda[1].clone();
        let over_lags = kernel.first_moment_over_lags().expect("a moment");
        let Moment::Finite { value, .. } = closed else {
            assert_eq!(over_lags.value, f64::INFINITY, "{kernel}");
            continue;
        };
        let over_frequencies = kernel.first_moment_over_frequencies().expect("a moment");
        near(
            over_lags.value,
            value,
            over_lags.error + 1e-9 * value,
            &format!("{kernel} over lags"),
        );
        near(
            over_frequencies.value,
            value,
            over_frequencies.error + 1e-9 * value,
            &format!("{kernel} over frequencies"),
        );
        assert!(over_frequencies.error <= 1e-9 * value, "{kernel}: {over_frequencies:?}");
    }
}

#[test]
fn even_moments_are_derivatives_at_zero() {
    for kernel in families() {
        let expansion = kernel.expansion(5.0);
        let moments = kernel.moments();
        for (n, moment, factor) in [(2.0, &moments.lambda[2], -2.0), (4.0, &moments.lambda[3], 24.0)] {
            if let Moment::Finite { value, .. } = moment {
                let coefficient = expansion.coefficient(n).expect("known that far");
                close(factor * coefficient, *value, 1e-13, &format!("lambda_{n} of {kernel}"));
            }
        }
    }
}

#[test]
fn the_expansion_is_the_loss() {
    for kernel in families() {
        let (short, _) = kernel.times().expect("it changes");
        let lag = 0.03 * short;
        let value = |term: &crate::expression::SeriesTerm| {
            term.coefficient * lag.powf(term.exponent) * lag.ln().powi(term.logs as i32)
        };
        let sum: f64 = kernel
            .expansion(14.0)
            .terms()
            .iter()
            .filter(|term| term.exponent > 0.0)
            .map(value)
            .sum();
        close(-sum, kernel.loss(lag).expect("a loss"), 1e-12, &kernel.to_string());
    }
}

#[test]
fn taylor_coefficients_move_the_lag() {
    for kernel in families() {
        let (short, _) = kernel.times().expect("it changes");
        for lag in [0.8 * short, 2.1 * short, -1.3 * short] {
            let h = 0.02 * short;
            let coefficients = kernel.taylor(lag, 8).expect("smooth there");
            let moved = coefficients
                .iter()
                .rev()
                .fold(0.0, |sum, coefficient| sum * h + coefficient);
            near(
                moved,
                kernel.value(lag + h).expect("a value"),
                1e-13,
                &format!("{kernel} about {lag}"),
            );
        }
    }
}

#[test]
fn lengths_give_their_scale_back() {
    let of_lengths = [
        LengthOf::SquaredExponential,
        LengthOf::Exponential,
        LengthOf::Matern { smoothness: 1.3 },
        LengthOf::RationalQuadratic { mixture: 0.8 },
        LengthOf::Triangular,
    ];
    for family in of_lengths {
        let Length::Unique(length) = family.length(4.0) else {
            panic!("{family:?} has one length")
        };
        let scale = family
            .kernel(length)
            .expect("valid")
            .scale_of_fluctuation()
            .expect("a scale");
        close(scale.value, 4.0, 1e-14, &format!("{family:?}"));
    }
    let swinging = LengthOf::DampedCosine { frequency: 0.2 };
    let Length::Two { short, long } = swinging.length(4.0) else {
        panic!("two lengths")
    };
    for length in [short, long] {
        let scale = swinging
            .kernel(length)
            .expect("valid")
            .scale_of_fluctuation()
            .expect("a scale");
        close(scale.value, 4.0, 1e-14, &format!("length {length}"));
    }
    assert!(short < long);
    assert_eq!(swinging.length(5.0), Length::Unique(5.0));
    assert_eq!(swinging.length(6.0), Length::None(NoLength::TooLarge { largest: 5.0 }));
    let Length::Two { short, .. } = (LengthOf::DampedCosine { frequency: 1e-9 }).length(4.0) else {
        panic!("two")
    };
    close(short, 2.0, 1e-14, "the exponential's length");
    let heavy = LengthOf::RationalQuadratic { mixture: 0.5 };
    assert_eq!(heavy.length(4.0), Length::None(NoLength::AlwaysInfinite));
    assert_eq!(LengthOf::Exponential.length(-1.0), Length::None(NoLength::NotPositive));
}
