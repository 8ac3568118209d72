//! Roots of a function between two points where its signs differ.

/// A root and how well it is known.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Root {
    /// The point where the function is nearest to 0.
    pub at: f64,
    /// The other end of the last bracket: the root lies between the two.
    pub other: f64,
    /// The number of values of the function used.
    pub evaluations: usize,
}

/// Values of the function after which the bracket is taken as it is; bisection alone needs about 1,080 at worst.
const MOST_EVALUATIONS: usize = 1_200;

/// The root of `f` between `from` and `to`, by inverse quadratic interpolation where it is safe and bisection elsewhere
/// (Chandrupatla 1997, "A new hybrid quadratic/bisection algorithm for finding the zero of a nonlinear function without
/// using derivatives", Advances in Engineering Software 28). The bracket is closed to `tolerance` times the modulus of the
/// root and a few units in its last place.
///
/// `None` unless both ends are finite and the values there are numbers of different sign (0 counts as both). An infinite
/// value has its sign. A value that is no number within the bracket ends the search with `None`.
pub fn between(mut f: impl FnMut(f64) -> f64, from: f64, to: f64, tolerance: f64) -> Option<Root> {
    // `b` is the newest point, `a` the one on the other side of the root, `c` the one before.
    let (mut a, mut b) = (from, to);
    let (mut fa, mut fb) = (f(a), f(b));
    let mut evaluations = 2;
    if !(a.is_finite() && b.is_finite()) || fa.is_nan() || fb.is_nan() || fa * fb.signum() > 0.0 {
        return None;
    }
    let mut share: f64 = 0.5;
    loop {
        let nearest = if fa.abs() < fb.abs() { (a, b, fa) } else { (b, a, fb) };
        let room = 2.0 * f64::EPSILON * nearest.0.abs() + tolerance * nearest.0.abs() + f64::MIN_POSITIVE;
        let width = (b - a).abs();
        if nearest.2 == 0.0 || width <= room || evaluations >= MOST_EVALUATIONS {
            let (at, other, _) = nearest;
            return Some(Root { at, other, evaluations });
        }
        let least = 0.5 * room / width;
        let middle = a + share.clamp(least, 1.0 - least) * (b - a);
        let value = f(middle);
        evaluations += 1;
        if value.is_nan() {
            return None;
        }
        let (c, fc);
        if (value > 0.0) == (fa > 0.0) && value != 0.0 {
            (c, fc) = (a, fa);
        } else {
            (c, fc) = (b, fb);
            (b, fb) = (a, fa);
        }
        (a, fa) = (middle, value);
        // Inverse quadratic interpolation is safe where its parabola turns in neither direction within the bracket.
        let xi = (a - b) / (c - b);
        let phi = (fa - fb) / (fc - fb);
        share = if (1.0 - (1.0 - xi).sqrt()) < phi && phi < xi.sqrt() {
            let one = fa / (fb - fa) * (fc / (fb - fc));
            let other = (c - a) / (b - a) * (fa / (fc - fa)) * (fb / (fc - fb));
            let found = one + other;
            if found.is_finite() { found } else { 0.5 }
        } else {
            0.5
        };
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn close(root: Option<Root>, expected: f64) {
        let root = root.expect("a root");
        let room = 4.0 * f64::EPSILON * expected.abs();
        assert!((root.at - expected).abs() <= room, "{root:?} against {expected}");
        assert!(root.evaluations < 60, "{root:?}");
    }

    #[test]
    fn roots_known_in_closed_form() {
        close(between(|x| x * x - 2.0, 0.0, 2.0, 0.0), std::f64::consts::SQRT_2);
        close(between(|x| x.cos(), 1.0, 2.0, 0.0), std::f64::consts::FRAC_PI_2);
        close(between(|x| (x - 3.0).powi(3), 0.0, 7.0, 1e-16), 3.0);
        close(between(|x| x.exp() - 1e-12, -700.0, 700.0, 0.0), 1e-12_f64.ln());
        close(between(|x| 1.0 - 1.0 / x, 1e-9, 1e9, 0.0), 1.0);
        close(between(|x| x.ln() - 5.0, 1e-3, 1e6, 0.0), 5.0_f64.exp());
    }

    #[test]
    fn the_root_lies_between_the_ends_of_the_last_bracket() {
        let root = between(|x| x.tanh() - 0.25, -9.0, 40.0, 1e-6).expect("a root");
        let exact = 0.25_f64.atanh();
        assert!((root.at - exact) * (root.other - exact) <= 0.0, "{root:?}");
        assert!((root.at - root.other).abs() <= 2e-6 * exact, "{root:?}");
    }

    #[test]
    fn infinite_values_have_signs_and_ends_may_be_roots() {
        close(
            between(|x| if x < 2.5 { f64::NEG_INFINITY } else { x - 2.0 }, 0.0, 5.0, 0.0),
            2.5,
        );
        assert_eq!(between(|x| x, 0.0, 1.0, 0.0).map(|root| root.at), Some(0.0));
    }

    #[test]
    fn no_bracket_no_root() {
        assert_eq!(between(|x| x * x + 1.0, -1.0, 1.0, 0.0), None);
        assert_eq!(between(|_| f64::NAN, -1.0, 1.0, 0.0), None);
        assert_eq!(between(|x| x, f64::NEG_INFINITY, 1.0, 0.0), None);
        assert_eq!(
            between(|x| if x > 0.4 { f64::NAN } else { x - 0.3 }, 0.0, 0.41, 0.0),
            None
        );
    }
}
