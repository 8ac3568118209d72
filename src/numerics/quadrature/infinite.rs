//! Integrals to infinity of integrands that decay.

use super::{Integral, POINTS, Stop, Tolerance, adapt, ascending};

/// The integral of `f` from the first of `breakpoints` to infinity. Up to the last breakpoint as in
/// [`between`](super::between); from there in panels each as long as everything before it, so that an algebraic tail
/// falls by a constant factor from panel to panel and an exponential one faster still.
///
/// The integration ends when the panels still to come no longer matter. What they hold is judged by the last two
/// ratios of successive integrals of |f|, continued as a geometric series, and is part of `error`, not of `value`.
/// For x^-p that is the tail itself; for p below about 1.03, and for tails that do not decay, the error is infinite
/// and the stop [`Stop::Evaluations`]. The integrand's mass must begin before the last breakpoint or soon after it: a
/// peak far out is not seen.
///
/// `None` unless there are at least two breakpoints, finite and strictly ascending. `evaluations` bounds the number
/// of integrand values, except that every panel between breakpoints is looked at once. Checked against closed forms
/// for tails from exp(-x²) to x^-1.2.
pub fn to_infinity(
    mut f: impl FnMut(f64) -> f64,
    breakpoints: &[f64],
    tolerance: Tolerance,
    evaluations: usize,
) -> Option<Integral> {
    let (&[first, ..], &[.., last]) = (breakpoints, breakpoints) else {
        return None;
    };
    if !ascending(breakpoints) {
        return None;
    }
    // A third of the tolerance for the finite part, a third for all the panels beyond it, a third for what is never
    // reached.
    let (mut total, mut magnitude) = adapt(&mut f, breakpoints, |value| tolerance.allowed(value) / 3.0, evaluations);
    let mut from = last;
    let mut ratios = [f64::INFINITY; 2];
    let mut tail = f64::INFINITY;
    for panel in 1..=MOST_PANELS {
        let to = from + (from - first);
        if total.stop == Stop::NotFinite || !to.is_finite() || total.evaluations + POINTS > evaluations {
            break;
        }
        let share = 1.0 / f64::from(3 * panel * (panel + 1));
        let sum = total.value;
        let allowed = |value: f64| share * tolerance.allowed(sum + value);
        let (part, part_magnitude) = adapt(
            &mut f,
            &[from, to],
            allowed,
            evaluations.saturating_sub(total.evaluations),
        );
        total = join(total, part);
        ratios = [
            ratios[1],
            if magnitude > 0.0 {
                part_magnitude / magnitude
            } else {
                f64::INFINITY
            },
        ];
        tail = geometric_tail(part_magnitude, ratios[0].max(ratios[1]));
        if panel >= FEWEST_PANELS && tail <= tolerance.allowed(total.value) / 3.0 {
            break;
        }
        (from, magnitude) = (to, part_magnitude);
    }
    let error = total.error + tail;
    let stop = match total.stop {
        Stop::NotFinite => Stop::NotFinite,
        _ if error <= tolerance.allowed(total.value) => Stop::Converged,
        Stop::Roundoff if tail <= tolerance.allowed(total.value) => Stop::Roundoff,
        _ => Stop::Evaluations,
    };
    Some(Integral { error, stop, ..total })
}

/// Panels that are always looked at, so that one coincidence does not end the search.
const FEWEST_PANELS: u32 = 4;
/// Doublings from the smallest to the largest double.
const MOST_PANELS: u32 = 2100;

/// Sum of ratio + ratio² + ... times the last panel's magnitude.
fn geometric_tail(magnitude: f64, ratio: f64) -> f64 {
    /// Beyond it a panel falls too little to tell a slow decay from none.
    const SLOWEST: f64 = 0.98;
    if magnitude == 0.0 {
        0.0
    } else if ratio < SLOWEST {
        magnitude * ratio / (1.0 - ratio)
    } else {
        f64::INFINITY
    }
}

/// Two adjoining integrals as one; the graver reason to stop remains.
fn join(a: Integral, b: Integral) -> Integral {
    let gravity = |stop| match stop {
        Stop::Converged => 0,
        Stop::Roundoff => 1,
        Stop::Evaluations => 2,
        Stop::NotFinite => 3,
    };
    Integral {
        value: a.value + b.value,
        error: a.error + b.error,
        evaluations: a.evaluations + b.evaluations,
        stop: std::cmp::max_by_key(a.stop, b.stop, |stop| gravity(*stop)),
    }
}
