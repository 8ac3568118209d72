//! C. E. Rasmussen and C. K. I. Williams (2006), Gaussian Processes for Machine Learning, ch. 4: kernels, their curvature at zero
//! and their spectra. The half-integer Matérn forms were seen on a page that cites it, the rest is from memory; the values are
//! those of scikit-learn 1.9.1.

use outcross::covariance::kernel::{
    Correlation, DampedCosine, Exponential, Family, Matern, Oscillator, RationalQuadratic, SquaredExponential,
    Triangular,
};

fn matern(smoothness: f64, length: f64) -> Family {
    Matern::new(smoothness, length).expect("valid").into()
}

fn rational_quadratic(length: f64, mixture: f64) -> Family {
    RationalQuadratic::new(length, mixture).expect("valid").into()
}

fn squared_exponential(length: f64) -> Family {
    SquaredExponential::new(length).expect("valid").into()
}

#[track_caller]
fn close(found: f64, expected: f64, relative: f64) {
    assert!(
        (found - expected).abs() <= relative * expected.abs(),
        "{found}, expected {expected}"
    );
}

#[test]
fn values_at_lag_one() {
    close(matern(1.5, 1.0).value(1.0), 0.483_357_724_596_507_7, 1e-15);
    close(matern(2.5, 1.0).value(1.0), 0.523_994_108_831_820_3, 1e-15);
    close(rational_quadratic(1.0, 2.0).value(1.0), 0.64, 1e-15);
    close(squared_exponential(1.0).value(1.0), 0.606_530_659_712_633_4, 1e-15);
    // At scale 2, eight digits.
    close(matern(1.5, 2.0).value(1.0), 0.784_887_65, 1e-8);
    close(matern(2.5, 2.0).value(1.0), 0.828_649_14, 1e-8);
    close(rational_quadratic(2.0, 0.5).value(1.0), 0.894_427_19, 1e-8);
}

#[test]
fn curvatures_at_zero() {
    let curvature = |family: Family| family.moments()[2];
    close(curvature(matern(1.5, 1.0)), 3.0, 1e-14);
    close(curvature(matern(2.5, 1.0)), 5.0 / 3.0, 1e-14);
    close(curvature(matern(3.7, 1.0)), 3.7 / 2.7, 1e-14);
    close(curvature(squared_exponential(1.0)), 1.0, 1e-15);
    for mixture in [0.3, 0.5, 2.0, 50.0] {
        close(curvature(rational_quadratic(1.0, mixture)), 1.0, 1e-15);
    }
    // exp(-a t)(cos b t + a/b sin b t), a = 0.1, b = 2: an oscillator with w0^2 = a^2 + b^2.
    let frequency = 4.01_f64.sqrt();
    let oscillator = Oscillator::new(frequency, 0.1 / frequency).expect("valid");
    close(oscillator.moments()[2], 4.01, 1e-15);
    close(
        oscillator.value(1.5),
        (-0.15_f64).exp() * (3.0_f64.cos() + 0.05 * 3.0_f64.sin()),
        1e-14,
    );
    let rough: [Family; 3] = [
        Exponential::new(1.0).expect("valid").into(),
        Triangular::new(1.0).expect("valid").into(),
        DampedCosine::new(10.0, 2.0).expect("valid").into(),
    ];
    rough
        .into_iter()
        .for_each(|family| assert_eq!(curvature(family), f64::INFINITY));
}

/// The published densities are two-sided: half of ours.
#[test]
fn two_sided_spectra() {
    use std::f64::consts::PI;
    for omega in [0.0, 0.5, 1.0, 4.0_f64] {
        let two_sided = |family: Family| 0.5 * family.density(omega).expect("a density");
        let rate = 3.0_f64.sqrt();
        close(
            two_sided(matern(1.5, 1.0)),
            2.0 * rate.powi(3) / (PI * (3.0 + omega * omega).powi(2)),
            1e-14,
        );
        let rate = 5.0_f64.sqrt();
        close(
            two_sided(matern(2.5, 1.0)),
            8.0 * rate.powi(5) / (3.0 * PI * (5.0 + omega * omega).powi(3)),
            1e-14,
        );
        close(
            two_sided(squared_exponential(1.0)),
            (-0.5 * omega * omega).exp() / (2.0 * PI).sqrt(),
            1e-14,
        );
    }
}
