//! Branch points, kinks, cancellation, what diverges, and what has no series.

use std::time::{Duration, Instant};

use crate::expression::{Number, Series, SeriesTerm, Unknown};

fn h() -> Series {
    Series::variable(0.0, 6.0)
}

fn number(value: f64) -> Series {
    Series::constant(value)
}

fn power(base: &Series, exponent: f64) -> Series {
    base.power(&number(exponent))
}

fn text(series: &Series) -> String {
    series.to_string()
}

#[test]
fn order_follows_the_operations() {
    assert_eq!(
        text(&h().sin()),
        "h - 0.16666666666666666 h^3 + 0.008333333333333333 h^5 + O(h^6)"
    );
    assert_eq!(h().sin().div(&h()).order(), 5.0);
    // The remainder of the cosine of h + O(h^6) is h times smaller than that of h.
    assert_eq!(h().cos().order(), 7.0);
    assert_eq!(power(&h(), 1.9).order(), 6.9);
    assert_eq!(h().div(&h()).sub(&number(1.0)).order(), 5.0);
    assert_eq!(text(&number(2.0).mul(&number(3.0))), "6");
    assert_eq!(number(2.0).exp().order(), f64::INFINITY);
}

#[test]
fn exact_sums_stay_exact_under_multiplication_and_are_expanded_by_functions() {
    let h = Series::from_terms(vec![SeriesTerm::new(1.0, 1.0, 0)], f64::INFINITY);
    let hat = power(&number(1.0).sub(&h), 3.0);
    assert_eq!(text(&hat), "1 - 3 h + 3 h^2 - h^3");
    assert_eq!(h.exp().order(), 16.0);
    assert_eq!(h.exp().coefficient(15.0), Some(1.0 / 1_307_674_368_000.0));
}

#[test]
fn expanding_makes_up_for_lost_order() {
    // (h - sin h)/h^3 = 1/6 - h²/120 + ...
    let series = Series::expand(0.0, 5.0, |h| h.sub(&h.sin()).div(&power(h, 3.0)));
    assert!(series.order() >= 5.0);
    assert!((series.coefficient(4.0).expect("it is below the order") - 1.0 / 5040.0).abs() < 1e-18);
    // The divisor has no term below h^8.
    let series = Series::expand(0.0, 5.0, |h| power(h, 8.0).div(&power(&h.sin(), 8.0)));
    assert_eq!(series.coefficient(0.0), Some(1.0));
    let series = Series::expand(0.0, 5.0, |h| h.div(&h.sub(h)));
    assert_eq!(
        series.reason(),
        Some(&Unknown::Undecided {
            operation: "the inverse"
        })
    );
}

#[test]
fn what_cancels_leaves_no_residue() {
    for at in [0.0, 0.3, 0.7, 2.0, 40.0] {
        let x = Series::variable(at, 6.0);
        let squares = x.sin().mul(&x.sin()).add(&x.cos().mul(&x.cos())).sub(&number(1.0));
        assert_eq!(squares.terms(), [], "at {at}");
        let back = x.exp().mul(&x.neg().exp()).sub(&number(1.0));
        assert_eq!(back.terms(), [], "at {at}");
    }
    // A damped oscillator starts with slope zero: -z w + z/sqrt(1-z²) wd.
    let (z, w) = (0.013, 17.3_f64);
    let wd = w * (1.0 - z * z).sqrt();
    let phase = number(wd).mul(&h());
    let swing = phase.cos().add(&number(z / (1.0 - z * z).sqrt()).mul(&phase.sin()));
    let kernel = number(-z * w).mul(&h()).exp().mul(&swing);
    assert_eq!(kernel.coefficient(1.0), Some(0.0));
    let curvature = kernel.coefficient(2.0).expect("it is below the order");
    assert!((curvature / (-w * w / 2.0) - 1.0).abs() < 1e-14);
}

#[test]
fn small_coefficients_that_did_not_cancel_stay() {
    let tiny = number(1e-30).mul(&h()).add(&number(1.0));
    assert_eq!(tiny.coefficient(1.0), Some(1e-30));
    // Thirty factors that each cancel a little: relative errors add up and do not multiply.
    let factor = number(3.0).sub(&number(2.0)).add(&h());
    let product = (0..30).fold(number(1.0), |product, _| product.mul(&factor));
    assert!((product.coefficient(1.0).expect("it is below the order") - 30.0).abs() < 1e-12);
}

#[test]
fn exponents_out_of_rounded_sums_merge() {
    let product = power(&h(), 0.1).mul(&power(&h(), 0.2)).mul(&power(&h(), 0.7));
    assert_eq!(product.sub(&h()).terms(), []);
    assert_eq!(product.terms().first().map(|term| term.exponent), Some(1.0));
    let terms = vec![
        SeriesTerm::new(1.0, 2.5, 0),
        SeriesTerm::new(2.0, 0.5, 1),
        SeriesTerm::new(3.0, 0.5, 2),
        SeriesTerm::new(0.0, 0.0, 0),
        SeriesTerm::new(4.0, 2.5 + 1e-12, 0),
        SeriesTerm::new(1.0, 3.0, 0),
    ];
    let series = Series::from_terms(terms, 3.0);
    assert_eq!(text(&series), "3 h^0.5 ln(h)^2 + 2 h^0.5 ln(h) + 5 h^2.5 + O(h^3)");
}

#[test]
fn kinks_are_read_from_the_right() {
    assert_eq!(h().abs(), h());
    assert_eq!(h().neg().abs(), h());
    let at_kink = Series::variable(0.3, 6.0).sub(&number(0.1).mul(&number(3.0)));
    assert_eq!(text(&at_kink.neg().abs()), "h + O(h^6)");
    assert_eq!(text(&number(1.0).sub(&h()).max(&number(0.0))), "1 - h + O(h^6)");
    assert_eq!(
        text(&number(1.0).sub(&Series::variable(1.0, 6.0)).max(&number(0.0))),
        "0"
    );
    assert_eq!(text(&h().min(&power(&h(), 2.0))), "h^2 + O(h^7)");
    assert_eq!(text(&h().min(&h())), "h + O(h^6)");
    assert_eq!(text(&h().step()), "1");
    assert_eq!(text(&h().neg().step()), "0");
    assert_eq!(text(&number(0.0).step()), "1");
    // ln h is negative.
    assert_eq!(text(&h().ln().abs()), "-ln(h) + O(h^5)");
    assert_eq!(text(&h().mul(&h().ln()).step()), "0");
}

#[test]
fn logarithms_and_exponentials_undo_each_other() {
    assert_eq!(text(&number(2.5).mul(&h().ln()).exp()), "h^2.5 + O(h^7.5)");
    assert_eq!(text(&power(&h(), -2.0).ln()), "-2 ln(h) + O(h^5)");
    assert_eq!(h().sin().ln().exp().sub(&h().sin()).terms(), []);
    assert_eq!(text(&h().ln().tanh()), "-1 + 2 h^2 - 2 h^4 + 2 h^6 + O(h^7)");
    assert_eq!(text(&h().ln().sinh().div(&number(-0.5))), "h^-1 - h + O(h^4)");
}

#[test]
fn what_saturates_is_flat() {
    let inverse = number(1.0).div(&h());
    let flat = inverse.neg().exp();
    assert_eq!(flat.terms(), []);
    assert_eq!(flat.coefficient(100.0), Some(0.0));
    assert!(flat.order().is_finite(), "no sign may be read from it");
    assert_eq!(flat.step().reason(), Some(&Unknown::Undecided { operation: "step" }));
    assert_eq!(inverse.neg().tanh().coefficient(0.0), Some(-1.0));
    assert_eq!(h().ln().erf().coefficient(0.0), Some(-1.0));
    assert_eq!(inverse.atan().coefficient(0.0), Some(std::f64::consts::FRAC_PI_2));
    assert_eq!(inverse.atan().coefficient(1.0), Some(-1.0));
    assert_eq!(h().ln().mul(&h().ln()).neg().exp().terms(), []);
}

#[test]
fn powers_of_zero() {
    let zero = number(0.0);
    assert_eq!(text(&power(&zero, 0.0)), "1");
    assert_eq!(text(&power(&zero, 1.9)), "0");
    assert_eq!(text(&zero.sqrt()), "0");
    assert_eq!(text(&h().sub(&h()).sqrt()), "O(h^3)");
    assert_eq!(text(&power(&h(), 0.0)), "1");
    assert_eq!(text(&power(&h().neg(), 3.0)), "-h^3 + O(h^8)");
    assert_eq!(text(&power(&number(-2.0), -3.0)), "-0.125");
}

#[test]
fn reasons_are_in_words() {
    let reason = |series: Series| {
        text(&series)
            .strip_prefix("unknown: ")
            .expect("there is no series")
            .to_owned()
    };
    let inverse = number(2.0).div(&h());
    assert_eq!(
        reason(inverse.exp()),
        "exp of something that grows like 2 h^-1 has no series in powers of h"
    );
    assert_eq!(
        reason(h().ln().sin()),
        "sin of something that grows like ln(h) has no series in powers of h"
    );
    assert_eq!(
        reason(number(1.0).div(&h().ln())),
        "the inverse of something that behaves like ln(h) has no series in powers of h"
    );
    assert_eq!(reason(h().neg().ln()), "ln of a negative number has no value");
    assert_eq!(reason(number(0.0).ln()), "ln of zero has no value");
    assert_eq!(
        reason(h().sub(&number(2.0)).sqrt()),
        "sqrt of a negative number has no value"
    );
    assert_eq!(
        reason(number(1.0).add(&h()).acos()),
        "acos of a number beyond 1 in size has no value"
    );
    assert_eq!(
        reason(number(-1.5).asin()),
        "asin of a number beyond 1 in size has no value"
    );
    assert_eq!(
        reason(number(1.0).div(&number(0.0))),
        "the inverse of zero has no value"
    );
    assert_eq!(reason(number(f64::NAN).add(&h())), "something in it has no value");
    assert_eq!(
        reason(number(1e200).mul(&number(1e200))),
        "its coefficients are too large for the computer"
    );
    assert_eq!(Series::undefined().order(), f64::NEG_INFINITY);
    assert_eq!(Series::undefined().coefficient(0.0), None);
}

#[test]
fn what_needs_too_many_terms_loses_order_and_little_time() {
    let start = Instant::now();
    let dense = power(&Series::variable(0.0, 13.0), 0.01).add(&power(&Series::variable(0.0, 13.0), 0.0137));
    let mut series = dense.exp();
    assert!(series.terms().len() <= 128 && series.order() < 1.3);
    for _ in 0..5 {
        series = series.sin().exp().mul(&series);
    }
    let logs = (0..5).fold(number(1.0).add(&h().ln()), |series, _| power(&series, 64.0));
    assert!(logs.reason().is_some() || logs.order() <= 0.0);
    assert!(start.elapsed() < Duration::from_secs(20), "{:?}", start.elapsed());
}
