//! Several integrals over the same points at once.

use super::rule::{POINTS, Panel, abscissae};
use super::{Integral, Stop, Tolerance, ascending};

/// The integrals of the components of `f` from the first to the last of `breakpoints`, by the rule of
/// [`between`](super::between), all from the same integrand values: where one component needs a finer panel, all get it.
///
/// Every round bisects the panels that hold more than their share of an error that is still too large, so that the number
/// of rounds is small and the work of one does not depend on the order of the panels. `tolerances` has one tolerance for
/// each component. `None` unless there are at least two breakpoints, finite and strictly ascending; `evaluations` bounds the
/// number of values of `f`, except that every panel between breakpoints is looked at once.
pub fn several_between<const N: usize>(
    mut f: impl FnMut(f64) -> [f64; N],
    breakpoints: &[f64],
    tolerances: &[Tolerance; N],
    evaluations: usize,
) -> Option<[Integral; N]> {
    if !ascending(breakpoints) {
        return None;
    }
    let mut used = 0;
    let mut panels: Vec<[Panel; N]> = Vec::with_capacity(2 * breakpoints.len());
    for pair in breakpoints.windows(2) {
        let &[from, to] = pair else { continue };
        used += POINTS;
        match panel(&mut f, from, to) {
            Some(found) => panels.push(found),
            None => return Some([Integral::not_finite(used); N]),
        }
    }
    loop {
        let totals = totals(&panels);
        let allowed: [f64; N] = std::array::from_fn(|i| tolerances[i].allowed(totals[i].value));
        let shares: [f64; N] = std::array::from_fn(|i| {
            if totals[i].error <= allowed[i] {
                f64::INFINITY
            } else {
                0.5 * allowed[i] / panels.len() as f64
            }
        });
        let too_coarse = |panel: &[Panel; N]| {
            let parts = panel.iter().zip(&shares);
            parts
                .filter_map(|(part, share)| if part.error > *share { part.midpoint() } else { None })
                .next()
        };
        let bad: Vec<(usize, f64)> = panels
            .iter()
            .enumerate()
            .filter_map(|(index, panel)| Some((index, too_coarse(panel)?)))
            .collect();
        let spent = used + 2 * POINTS * bad.len() > evaluations;
        if bad.is_empty() || spent {
            return Some(std::array::from_fn(|i| Integral {
                value: totals[i].value,
                error: totals[i].error,
                evaluations: used,
                stop: match (totals[i].error <= allowed[i], spent) {
                    (true, _) => Stop::Converged,
                    (false, true) => Stop::Evaluations,
                    (false, false) => Stop::Roundoff,
                },
            }));
        }
        for (index, middle) in bad {
            let whole = panels[index];
            let [Panel { from, to, .. }, ..] = whole[..] else {
                continue;
            };
            used += 2 * POINTS;
            let (Some(mut left), Some(mut right)) = (panel(&mut f, from, middle), panel(&mut f, middle, to)) else {
                return Some([Integral::not_finite(used); N]);
            };
            for ((whole, left), right) in whole.iter().zip(&mut left).zip(&mut right) {
                whole.halved(left, right);
            }
            panels[index] = left;
            panels.push(right);
        }
    }
}

fn panel<const N: usize>(f: &mut impl FnMut(f64) -> [f64; N], from: f64, to: f64) -> Option<[Panel; N]> {
    let values = abscissae(from, to).map(f);
    let mut panels = [Panel::EMPTY; N];
    for (component, panel) in panels.iter_mut().enumerate() {
        *panel = Panel::from_values(&values.map(|value| value[component]), from, to)?;
    }
    Some(panels)
}

#[derive(Clone, Copy, Default)]
struct Total {
    value: f64,
    error: f64,
}

fn totals<const N: usize>(panels: &[[Panel; N]]) -> [Total; N] {
    let mut totals = [Total::default(); N];
    for panel in panels {
        for (total, part) in totals.iter_mut().zip(panel) {
            total.value += part.value;
            total.error += part.error;
        }
    }
    totals
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::f64::consts::PI;

    #[test]
    fn components_share_their_points_and_keep_their_tolerances() {
        // A line of width 1e-4 at 1, and its moments.
        let width: f64 = 1e-4;
        let f = |x: f64| {
            let peak = width / PI / ((x - 1.0).powi(2) + width * width);
            [peak, x * peak, x * x * peak]
        };
        let graded = (0..5).flat_map(|k| [1.0 - width * 8f64.powi(k), 1.0 + width * 8f64.powi(k)]);
        let mut breakpoints: Vec<f64> = graded
            .filter(|x| (0.0..2.0).contains(x))
            .chain([0.0, 1.0, 2.0])
            .collect();
        breakpoints.sort_by(f64::total_cmp);
        let found = several_between(f, &breakpoints, &[Tolerance::relative(1e-11); 3], 100_000).unwrap();
        let mass = 2.0 / PI * (1.0 / width).atan();
        let exact = [mass, mass, mass * (1.0 - width * width) + 2.0 * width / PI];
        for (found, exact) in found.iter().zip(exact) {
            assert_eq!(found.stop, Stop::Converged);
            assert!((found.value / exact - 1.0).abs() < 1e-11, "{found:?} against {exact}");
        }
        assert!(found[0].evaluations < 2_000, "{}", found[0].evaluations);
    }

    #[test]
    fn what_is_no_number_and_what_never_converges_is_said() {
        let all = |f: fn(f64) -> f64| several_between(|x| [f(x)], &[0.0, 1.0], &[Tolerance::relative(1e-12)], 1_000);
        assert_eq!(all(|x| (x - 0.5).sqrt()).unwrap()[0].stop, Stop::NotFinite);
        let [rough] = all(|x| (1e4 * x).sin().abs()).unwrap();
        assert_eq!(rough.stop, Stop::Evaluations);
        assert!(rough.evaluations <= 1_000 && rough.error > 1e-9);
        assert!(several_between(|x| [x], &[1.0, 0.0], &[Tolerance::relative(1e-3)], 100).is_none());
    }
}
