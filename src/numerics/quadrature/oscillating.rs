//! Integrals to infinity of integrands that oscillate and decay slowly.

use super::{Integral, POINTS, Stop, Tolerance, adapt};

/// The integral of `f` from `from` to infinity, where beyond `from` the integrand is a slowly varying factor times an
/// oscillation of known `half_period`: sin(w x) or cos(w x) have pi/w. The panels are half-periods; their integrals
/// alternate in sign, and Levin's u transformation sums the alternating series, the more quickly the smoother the
/// factor (Levin 1973, "Development of non-linear transformations for improving convergence of sequences", Int. J.
/// Comput. Math. 3; Sidi 1980, "Extrapolation methods for oscillatory infinite integrals", J. Inst. Math. Appl. 26).
/// Panels need not begin at a zero.
///
/// `error` is the larger of the last two changes of the transformed sum, plus the errors of the panels and of
/// rounding, enlarged as the transformation enlarges them. Peaks must lie before `from`: integrate up to there with
/// [`between`](super::between).
///
/// `None` unless `from` is finite and `half_period` finite and positive. `evaluations` bounds the number of integrand
/// values; at least one panel is looked at. Checked against closed forms for decays from x^-1/2 on: relative error
/// 1e-11 in at most 13 half-periods.
pub fn oscillating_tail(
    mut f: impl FnMut(f64) -> f64,
    from: f64,
    half_period: f64,
    tolerance: Tolerance,
    evaluations: usize,
) -> Option<Integral> {
    if !(from.is_finite() && half_period.is_finite() && half_period > 0.0) {
        return None;
    }
    let mut series = Series::default();
    let mut estimates = [0.0; 3];
    let mut used = 0;
    let mut panel_error = 0.0;
    let mut error = f64::INFINITY;
    let mut stop = Stop::Evaluations;
    for panel in 0..MOST_PANELS {
        let (start, end) = (
            from + f64::from(panel) * half_period,
            from + f64::from(panel + 1) * half_period,
        );
        if start >= end {
            stop = Stop::Roundoff;
            break;
        }
        if panel > 0 && used + POINTS > evaluations {
            break;
        }
        let allowed = |value: f64| 0.02 * tolerance.allowed(if panel == 0 { value } else { estimates[2] });
        let (part, _) = adapt(&mut f, &[start, end], allowed, evaluations.saturating_sub(used));
        used += part.evaluations;
        if part.stop == Stop::NotFinite {
            return Some(Integral::not_finite(used));
        }
        panel_error += part.error;
        series.push(part.value);
        let (estimate, amplification) = series.sum();
        estimates = [estimates[1], estimates[2], estimate];
        if panel >= FEWEST_PANELS {
            let change = (estimates[2] - estimates[1])
                .abs()
                .max((estimates[1] - estimates[0]).abs());
            error = change + amplification * (panel_error + f64::EPSILON * series.largest);
            if error <= tolerance.allowed(estimate) {
                stop = Stop::Converged;
                break;
            }
        }
    }
    Some(Integral {
        value: estimates[2],
        error,
        evaluations: used,
        stop,
    })
}

/// Half-periods that are always looked at.
const FEWEST_PANELS: u32 = 4;
/// Half-periods after which more do not help: the weights of the transformation have used up the digits of a double.
const MOST_PANELS: u32 = 60;

/// A series of panels with its partial sums.
#[derive(Default)]
struct Series {
    /// (term, partial sum that ends with it), since the last term that was zero.
    terms: Vec<(f64, f64)>,
    sum: f64,
    /// Largest modulus of a partial sum.
    largest: f64,
}

impl Series {
    fn push(&mut self, term: f64) {
        self.sum += term;
        self.largest = self.largest.max(self.sum.abs());
        if term == 0.0 {
            self.terms.clear(); // A zero remainder estimate has no weight in the transformation: it starts anew.
        } else {
            self.terms.push((term, self.sum));
        }
    }

    /// Levin's u transform of the partial sums, and by how much it enlarges their errors.
    ///
    /// The transform is sum w_j S_j / sum w_j with w_j = (-1)^j C(k, j) (j + 1)^(k - 2) / a_j over j = 0..k; for an
    /// alternating series all w_j have one sign, and nothing is enlarged.
    fn sum(&self) -> (f64, f64) {
        let Some(last) = self.terms.len().checked_sub(1).filter(|last| *last >= 1) else {
            return (self.sum, 1.0);
        };
        let k = last as f64;
        let scale = self
            .terms
            .iter()
            .fold(f64::INFINITY, |least, (term, _)| least.min(term.abs()));
        let (mut binomial, mut numerator, mut denominator, mut moduli) = (1.0, 0.0, 0.0, 0.0);
        for (j, (term, sum)) in self.terms.iter().enumerate() {
            let j = j as f64;
            let weight = binomial * libm::pow((j + 1.0) / (k + 1.0), k - 2.0) * (scale / term);
            numerator += weight * (sum - self.sum);
            denominator += weight;
            moduli += weight.abs();
            binomial *= -(k - j) / (j + 1.0);
        }
        if denominator == 0.0 {
            (self.sum, f64::INFINITY)
        } else {
            (self.sum + numerator / denominator, moduli / denominator.abs())
        }
    }
}
