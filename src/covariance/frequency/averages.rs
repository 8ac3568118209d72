//! Averages of a process described by a kernel, over lags.
//!
//! An average is a difference of two instants of the process's integral, so that the covariance of averaged terms is a sum of
//! repeated integrals of the kernel at lags, as that of differentiated terms is one of its derivatives (E. Vanmarcke 1983,
//! Random Fields, ch. 5):
//!
//! ```text
//! C(tau) = sum over i, j of a_i a_j (-1)^n_i K^(n_i + n_j)(tau + d_i - d_j),   K^(-q)(tau) = integral from 0 to tau of
//!          (tau - v)^(q - 1)/(q - 1)! K(v) dv
//! ```
//!
//! over the instants of all terms. What another choice of the integrals would add cancels, as the weights of every average
//! add up to 0. Nothing is asked of the spectrum, which may oscillate or have no closed form.

use super::super::form::Term;
use super::super::kernel::Kernel;
use super::rational::Closed;
use super::response::{by_delay, near};
use crate::numerics::quadrature::{self, Tolerance};

/// Instants of one form; more are left to the spectrum.
const MOST_INSTANTS: usize = 64;

/// The relative accuracy of integrals, and of values and derivatives.
const RELATIVE: f64 = 1e-13;

/// Kernel values of one integral.
const EVALUATIONS: usize = 20_000;

/// A weight on the process (or its derivative, or its integral) at one instant.
struct Instant {
    weight: f64,
    delay: f64,
    /// Of differentiation; negative of integration.
    power: i32,
}

/// `None` where the terms pass through anything but averages.
fn instants(terms: &[Term]) -> Option<Vec<Instant>> {
    let mut found = Vec::new();
    for smooth in by_delay(terms) {
        for (weight, power, systems) in smooth.parts() {
            if !systems.is_empty() || found.len() == MOST_INSTANTS {
                return None;
            }
            let delay = smooth.delay;
            found.push(Instant { weight, delay, power });
        }
    }
    Some(found)
}

/// (-1)^(n/2) times the n-th derivative at `lag` of the covariance of two forms, for an even n; `None` where it is not to be
/// had.
pub(super) fn covariance(kernel: &Kernel, one: &[Term], other: &[Term], lag: f64, n: i32) -> Option<Closed> {
    let (ones, others) = (instants(one)?, instants(other)?);
    let mut sum = Closed::default();
    for a in &ones {
        for b in &others {
            let apart = if near(lag + a.delay, b.delay) {
                0.0
            } else {
                lag + a.delay - b.delay
            };
            let found = derivative(kernel, a.power + b.power + n, apart)?;
            let sign = if (a.power + n / 2) % 2 == 0 { 1.0 } else { -1.0 };
            sum.value += sign * a.weight * b.weight * found.value;
            sum.error += (a.weight * b.weight).abs() * found.error;
        }
    }
    Some(sum)
}

/// A derivative of the kernel, or a repeated integral, at a lag of either sign.
fn derivative(kernel: &Kernel, order: i32, lag: f64) -> Option<Closed> {
    let closed = |value: f64| {
        value.is_finite().then_some(Closed {
            value,
            error: RELATIVE * value.abs(),
        })
    };
    match usize::try_from(order) {
        Ok(0) => closed(kernel.value(lag).ok()?),
        Ok(order) => {
            let factorial: f64 = (1..=order).map(|k| k as f64).product();
            closed(factorial * kernel.taylor(lag, order).ok()?.last()?)
        }
        Err(_) => {
            let times = order.unsigned_abs();
            let found = integral(kernel, times, lag.abs())?;
            let sign = if lag < 0.0 && times % 2 == 1 { -1.0 } else { 1.0 };
            Some(Closed {
                value: sign * found.value,
                ..found
            })
        }
    }
}

/// The integral of the kernel repeated so many times, from 0 to a lag.
fn integral(kernel: &Kernel, times: u32, lag: f64) -> Option<Closed> {
    if lag == 0.0 {
        return Some(Closed::default());
    }
    let (shortest, longest) = kernel.times().unwrap_or((lag, lag));
    let graded =
        std::iter::successors(Some(shortest), |at| Some(2.0 * at)).take_while(|at| *at < lag.min(64.0 * longest));
    let kinks = kernel.kinks().into_iter().map(|kink| kink.lag);
    let mut breakpoints: Vec<f64> = graded
        .take(2_000)
        .chain(kinks)
        .filter(|at| *at < lag)
        .chain([0.0, lag])
        .collect();
    breakpoints.sort_by(f64::total_cmp);
    breakpoints.dedup();
    let power = times as i32 - 1;
    let factorial: f64 = (1..=power).map(f64::from).product();
    let weighed = |at: f64| {
        kernel
            .value(at)
            .map_or(f64::NAN, |value| value * (lag - at).powi(power) / factorial)
    };
    let found = quadrature::between(weighed, &breakpoints, Tolerance::relative(RELATIVE), EVALUATIONS)?;
    found.error.is_finite().then_some(Closed {
        value: found.value,
        error: found.error + RELATIVE * found.value.abs(),
    })
}
