//! Quadrature against integrals known in closed form.

use super::*;
use std::f64::consts::{FRAC_PI_2, PI};

const TIGHT: Tolerance = Tolerance::relative(1e-12);
const PLENTY: usize = 100_000;

/// Converged, honest, and as near as asked.
fn assert_integral(name: &str, found: Option<Integral>, exact: f64, relative: f64) {
    let integral = found.expect("the arguments are valid");
    let miss = (integral.value - exact).abs();
    assert_eq!(integral.stop, Stop::Converged, "{name}: {integral:?}, exact {exact}");
    assert!(
        miss <= integral.error + 2e-16 * exact.abs(),
        "{name}: {integral:?}, exact {exact}"
    );
    assert!(miss <= relative * exact.abs(), "{name}: {integral:?}, exact {exact}");
}

/// Breakpoints peak ± width * 8^k, as far as the interval goes, with its ends.
fn graded(from: f64, to: f64, peak: f64, width: f64) -> Vec<f64> {
    let steps: Vec<f64> = (0..30).map(|k| width * 8f64.powi(k)).collect();
    let below = steps.iter().rev().map(|step| peak - step).filter(|x| *x > from);
    let above = steps.iter().map(|step| peak + step).filter(|x| *x < to);
    [from]
        .into_iter()
        .chain(below)
        .chain([peak])
        .chain(above)
        .chain([to])
        .collect()
}

#[test]
fn smooth_and_singular_integrands() {
    assert_integral(
        "exp",
        between(f64::exp, &[0.0, 1.0], TIGHT, PLENTY),
        1f64.exp_m1(),
        1e-15,
    );
    assert_integral("sqrt", between(f64::sqrt, &[0.0, 1.0], TIGHT, PLENTY), 2.0 / 3.0, 1e-12);
    assert_integral(
        "1/sqrt",
        between(|x: f64| 1.0 / x.sqrt(), &[0.0, 1.0], Tolerance::relative(1e-10), PLENTY),
        2.0,
        1e-10,
    );
    assert_integral("log", between(|x: f64| x.ln(), &[0.0, 1.0], TIGHT, PLENTY), -1.0, 1e-12);
    assert_integral(
        "kink",
        between(|x: f64| (x - 0.3).abs(), &[0.0, 0.3, 1.0], TIGHT, PLENTY),
        0.29,
        1e-15,
    );
}

#[test]
fn peaks_that_the_breakpoints_know() {
    for width in [1e-2, 1e-4, 1e-6, 1e-8] {
        let (peak, ends) = (0.4321, (0.0, 1.0));
        let points = graded(ends.0, ends.1, peak, width);
        let gaussian = |x: f64| (-0.5 * ((x - peak) / width).powi(2)).exp();
        // The rounding of x - peak bounds what can be had, and the error says so.
        let relative = 1e-12_f64.max(3e-15 / width);
        let tolerance = Tolerance::relative(relative);
        assert_integral(
            "gaussian",
            between(gaussian, &points, tolerance, 2_000),
            width * (2.0 * PI).sqrt(),
            relative,
        );
        let lorentzian = |x: f64| width / ((x - peak).powi(2) + width * width);
        let exact = ((ends.1 - peak) / width).atan() + (peak / width).atan();
        assert_integral(
            "lorentzian",
            between(lorentzian, &points, tolerance, 3_000),
            exact,
            relative,
        );
        let strict = between(lorentzian, &points, Tolerance::relative(1e-16), 30_000).expect("valid");
        assert_eq!(strict.stop, Stop::Roundoff, "{strict:?}");
        assert!(
            (strict.value - exact).abs() <= strict.error && strict.error < relative * exact,
            "{strict:?}"
        );
    }
}

#[test]
fn a_bound_noise_and_poles_are_reported() {
    let jagged = |x: f64| (1.0 / x).sin();
    let bounded = between(jagged, &[0.0, 1.0], TIGHT, 1_000).expect("valid");
    assert_eq!(bounded.stop, Stop::Evaluations);
    assert!(bounded.evaluations <= 1_000);
    // sin(1) - Ci(1): mpmath.
    assert!(
        (bounded.value - 0.504_067_061_906_928_4).abs() <= bounded.error,
        "{bounded:?}"
    );

    let noisy = |x: f64| x.exp() + 1e-6 * (1e13 * x).sin();
    let noise = between(noisy, &[0.0, 1.0], TIGHT, PLENTY).expect("valid");
    assert_eq!(noise.stop, Stop::Roundoff, "{noise:?}");
    assert!(
        (noise.value - 1f64.exp_m1()).abs() <= noise.error && noise.error < 1e-5,
        "{noise:?}"
    );

    let pole = between(|x: f64| 1.0 / (x - 0.5), &[0.0, 1.0], TIGHT, PLENTY).expect("valid");
    assert_eq!(
        (pole.stop, pole.error, pole.evaluations),
        (Stop::NotFinite, f64::INFINITY, POINTS)
    );
    let zero = between(|_| 0.0, &[0.0, 1.0], TIGHT, PLENTY).expect("valid");
    assert_eq!((zero.stop, zero.value, zero.error), (Stop::Converged, 0.0, 0.0));
}

#[test]
fn breakpoints_must_ascend() {
    for points in [
        &[][..],
        &[0.0],
        &[0.0, 0.0],
        &[1.0, 0.0],
        &[0.0, f64::NAN],
        &[0.0, f64::INFINITY],
    ] {
        assert_eq!(between(|x| x, points, TIGHT, PLENTY), None);
        assert_eq!(to_infinity(|x| x, points, TIGHT, PLENTY), None);
    }
    assert_eq!(oscillating_tail(|x| x, f64::NAN, 1.0, TIGHT, PLENTY), None);
    assert_eq!(oscillating_tail(|x| x, 0.0, 0.0, TIGHT, PLENTY), None);
}

#[test]
fn decaying_tails() {
    assert_integral(
        "exp",
        to_infinity(|x| (-x).exp(), &[0.0, 1.0], TIGHT, PLENTY),
        1.0,
        1e-12,
    );
    assert_integral(
        "far exp",
        to_infinity(|x| (-x).exp(), &[700.0, 701.0], TIGHT, PLENTY),
        (-700f64).exp(),
        1e-12,
    );
    assert_integral(
        "gauss",
        to_infinity(|x| (-x * x).exp(), &[0.0, 0.1], TIGHT, PLENTY),
        0.5 * PI.sqrt(),
        1e-12,
    );
    assert_integral(
        "cauchy",
        to_infinity(|x| 1.0 / (1.0 + x * x), &[0.0, 1.0], TIGHT, PLENTY),
        FRAC_PI_2,
        1e-12,
    );
    let scaled = |x: f64| 1e-6 / (1e-12 + x * x);
    assert_integral(
        "narrow cauchy",
        to_infinity(scaled, &[0.0, 1e-6], TIGHT, PLENTY),
        FRAC_PI_2,
        1e-12,
    );
    let tail = |p: f64| to_infinity(move |x: f64| x.powf(-p), &[1.0, 2.0], Tolerance::relative(1e-8), PLENTY);
    for p in [5.0, 3.0, 2.0, 5.0 / 3.0, 1.2] {
        assert_integral("power", tail(p), 1.0 / (p - 1.0), 1e-8);
    }
    for p in [1.0, 0.5] {
        let infinite = tail(p).expect("valid");
        assert_eq!(
            (infinite.stop, infinite.error),
            (Stop::Evaluations, f64::INFINITY),
            "{infinite:?}"
        );
    }
    // A spectrum x^-5 exp(-5/4 x^-4): area 1/5.
    let spectrum = |x: f64| {
        if x > 0.05 {
            x.powi(-5) * (-1.25 * x.powi(-4)).exp()
        } else {
            0.0
        }
    };
    assert_integral(
        "wave",
        to_infinity(spectrum, &[0.0, 0.5, 1.0, 2.0], TIGHT, PLENTY),
        0.2,
        1e-12,
    );
    let bad = to_infinity(|x| if x > 3.0 { f64::NAN } else { 1.0 }, &[0.0, 1.0], TIGHT, PLENTY).expect("valid");
    assert_eq!((bad.stop, bad.error), (Stop::NotFinite, f64::INFINITY));
}

#[test]
fn oscillating_tails() {
    let tolerance = Tolerance::relative(1e-11);
    let tail = |f: fn(f64) -> f64, from, half| oscillating_tail(f, from, half, tolerance, 13 * POINTS);
    assert_integral("Dirichlet", tail(|x| x.sin() / x, 0.0, PI), FRAC_PI_2, 1e-11);
    // Half of the integral of cos(x) / sqrt(x) from 5: mpmath, quadosc.
    assert_integral(
        "Fresnel",
        tail(|x| 0.5 * x.cos() / x.sqrt(), 5.0, PI),
        0.214_997_737_216_312_55,
        1e-11,
    );
    let laplace = |x: f64| (3.0 * x).cos() / (1.0 + x * x);
    assert_integral(
        "Laplace",
        tail(laplace, 0.0, PI / 3.0),
        FRAC_PI_2 * (-3f64).exp(),
        1e-11,
    );
    assert_integral("decaying", tail(|x| x.cos() * (-x).exp(), 0.0, PI), 0.5, 1e-11);
    // The phase of J0 only tends to that of a cosine.
    assert_integral("Bessel", tail(libm::j0, 0.0, PI), 1.0, 1e-10);
    let short = oscillating_tail(|x: f64| x.sin() / x, 0.0, PI, tolerance, 150).expect("valid");
    assert_eq!(short.stop, Stop::Evaluations);
    assert!(
        short.evaluations <= 150 && (short.value - FRAC_PI_2).abs() <= short.error,
        "{short:?}"
    );
    let ended = tail(|x| if x < 2.0 * PI { x.sin() } else { 0.0 }, 0.0, PI).expect("valid");
    assert!(ended.value.abs() <= ended.error && ended.error < 1e-12, "{ended:?}");
}
