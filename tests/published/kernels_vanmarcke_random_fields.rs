//! E. Vanmarcke (1983), Random Fields: Analysis and Synthesis, ch. 5: scales of fluctuation (from memory).

use outcross::covariance::kernel::{
    Correlation, DampedCosine, Exponential, Family, Matern, SquaredExponential, Triangular,
};

#[test]
fn scales_of_fluctuation() {
    let b = 1.7_f64;
    let cases: [(Family, f64); 5] = [
        (Exponential::new(b).expect("valid").into(), 2.0 * b),
        // exp(-(t/b)^2)
        (
            SquaredExponential::new(b / 2.0_f64.sqrt()).expect("valid").into(),
            std::f64::consts::PI.sqrt() * b,
        ),
        // (1 + t/c) exp(-t/c)
        (Matern::new(1.5, 3.0_f64.sqrt() * b).expect("valid").into(), 4.0 * b),
        (Triangular::new(b).expect("valid").into(), b),
        // exp(-t/k) cos(t/k)
        (DampedCosine::new(b, 1.0 / b).expect("valid").into(), b),
    ];
    for (family, scale) in cases {
        let found = family.scale_of_fluctuation();
        assert!(
            (found - scale).abs() <= 1e-14 * scale,
            "{family}: {found}, published {scale}"
        );
    }
}
