//! Adaptive quadrature between required breakpoints, to infinity, and of oscillating tails.
//!
//! A rule sees an integrand at a few points only: a peak that falls between them does not exist for it, however small
//! the error it reports. So no routine here takes a bare interval. The caller, who knows where the integrand lives,
//! hands over breakpoints, at least two, graded towards every peak (`peak ± width * 8^k` serves well), and an
//! integrand sharper than about 1e-9 of its abscissa in a variable counted from the peak.

mod infinite;
mod oscillating;
mod rule;
mod several;

pub use infinite::to_infinity;
pub use oscillating::oscillating_tail;
pub use several::several_between;

use rule::{POINTS, Panel};
use std::cmp::Ordering;
use std::collections::BinaryHeap;

/// How accurate an integral must be: the error may be as large as the larger of the two allows.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Tolerance {
    /// Largest error, in the unit of the integral.
    pub absolute: f64,
    /// Largest error as a fraction of the integral's modulus.
    pub relative: f64,
}

impl Tolerance {
    /// A relative tolerance alone.
    pub const fn relative(relative: f64) -> Self {
        Self {
            absolute: 0.0,
            relative,
        }
    }

    /// The largest error allowed when the integral is `value`.
    pub fn allowed(&self, value: f64) -> f64 {
        self.absolute.max(self.relative * value.abs())
    }
}

/// Why an integration ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Stop {
    /// The error is within the tolerance.
    Converged,
    /// The bound on evaluations was reached first.
    Evaluations,
    /// Rounding, or noise of the integrand, forbids to come nearer.
    Roundoff,
    /// The integrand was not finite somewhere; the error is infinite.
    NotFinite,
}

/// An integral and what is known of it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Integral {
    /// The estimate; always finite, and without meaning if `error` is infinite.
    pub value: f64,
    /// Estimated absolute error, on the safe side for smooth integrands that the breakpoints do justice to; may be
    /// infinite. Noise of the integrand itself, where it is below about 1e-7 of it, is not seen: add what the
    /// integrand's own error amounts to.
    pub error: f64,
    /// Number of integrand values used.
    pub evaluations: usize,
    /// Why the integration ended.
    pub stop: Stop,
}

impl Integral {
    const fn not_finite(evaluations: usize) -> Self {
        Self {
            value: 0.0,
            error: f64::INFINITY,
            evaluations,
            stop: Stop::NotFinite,
        }
    }
}

/// The integral of `f` from the first to the last of `breakpoints`, by the Gauss-Kronrod rule of 21 points and
/// bisection of the worst panel (Piessens, de Doncker-Kapenga, Überhuber and Kahaner 1983, "QUADPACK", QAGP without
/// extrapolation).
///
/// `None` unless there are at least two breakpoints, finite and strictly ascending. `evaluations` bounds the number
/// of integrand values, except that every panel between breakpoints is looked at once. The end points themselves are
/// never evaluated unless rounding leads there. Checked against closed forms: where it says [`Stop::Converged`], the
/// true error is within `error`.
pub fn between(
    mut f: impl FnMut(f64) -> f64,
    breakpoints: &[f64],
    tolerance: Tolerance,
    evaluations: usize,
) -> Option<Integral> {
    ascending(breakpoints).then(|| adapt(&mut f, breakpoints, |value| tolerance.allowed(value), evaluations).0)
}

fn ascending(breakpoints: &[f64]) -> bool {
    breakpoints.len() >= 2 && breakpoints.iter().all(|x| x.is_finite()) && breakpoints.is_sorted_by(|a, b| a < b)
}

/// A panel ordered by its error, for the heap.
struct Worst(Panel);

impl Ord for Worst {
    fn cmp(&self, other: &Self) -> Ordering {
        self.0.error.total_cmp(&other.0.error)
    }
}
impl PartialOrd for Worst {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}
impl PartialEq for Worst {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other).is_eq()
    }
}
impl Eq for Worst {}

/// The adaptive integral and the integral of the modulus; `allowed` is the largest error for a given value.
fn adapt(
    f: &mut impl FnMut(f64) -> f64,
    breakpoints: &[f64],
    allowed: impl Fn(f64) -> f64,
    limit: usize,
) -> (Integral, f64) {
    let mut panels = BinaryHeap::new();
    let mut finished = Vec::new();
    let mut evaluations = 0;
    for pair in breakpoints.windows(2) {
        let &[from, to] = pair else { continue };
        evaluations += POINTS;
        match Panel::new(f, from, to) {
            Some(panel) => panels.push(Worst(panel)),
            None => return (Integral::not_finite(evaluations), f64::INFINITY),
        }
    }
    let mut total = Total::of(&panels, &finished);
    let stop = loop {
        if total.error <= allowed(total.value) {
            // The running sums have gathered rounding errors: what decides is a fresh sum.
            total = Total::of(&panels, &finished);
            if total.error <= allowed(total.value) {
                break Stop::Converged;
            }
        }
        if evaluations + 2 * POINTS > limit {
            break Stop::Evaluations;
        }
        let Some(Worst(panel)) = panels.pop() else {
            break Stop::Roundoff;
        };
        let Some(middle) = panel.midpoint() else {
            finished.push(panel);
            continue;
        };
        evaluations += 2 * POINTS;
        let (Some(mut left), Some(mut right)) = (Panel::new(f, panel.from, middle), Panel::new(f, middle, panel.to))
        else {
            return (Integral::not_finite(evaluations), f64::INFINITY);
        };
        let (value, error) = (left.value + right.value, left.error + right.error);
        panel.halved(&mut left, &mut right);
        total.value += value - panel.value;
        total.error += error - panel.error;
        panels.push(Worst(left));
        panels.push(Worst(right));
    };
    let total = Total::of(&panels, &finished);
    if !(total.value.is_finite() && total.error.is_finite()) {
        return (Integral::not_finite(evaluations), f64::INFINITY);
    }
    (
        Integral {
            value: total.value,
            error: total.error,
            evaluations,
            stop,
        },
        total.magnitude,
    )
}

/// Sums over all panels.
struct Total {
    value: f64,
    error: f64,
    magnitude: f64,
}

impl Total {
    fn of(panels: &BinaryHeap<Worst>, finished: &[Panel]) -> Self {
        let zero = Self {
            value: 0.0,
            error: 0.0,
            magnitude: 0.0,
        };
        panels
            .iter()
            .map(|Worst(panel)| panel)
            .chain(finished)
            .fold(zero, |sum, panel| Self {
                value: sum.value + panel.value,
                error: sum.error + panel.error,
                magnitude: sum.magnitude + panel.magnitude,
            })
    }
}

#[cfg(test)]
mod tests;
