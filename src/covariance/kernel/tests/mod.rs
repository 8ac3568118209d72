//! What the parts of a kernel must agree on among themselves. Values from outside are in `tests/reference` and `tests/published`.

mod algebra;
mod properties;
mod second_routes;
mod tabulated;
mod user;

use super::*;

/// The kernel of one of the named families.
fn kernel<F: Into<Family>>(family: Result<F, InvalidParameter>) -> Kernel {
    Kernel::from(family.expect("valid parameters"))
}

fn scaled(weight: f64, kernel: &Kernel) -> Kernel {
    kernel.clone().scaled(weight).expect("a valid weight")
}

/// All families, of several degrees of smoothness.
fn families() -> Vec<Kernel> {
    let mut kernels = vec![
        kernel(SquaredExponential::new(3.0)),
        kernel(Exponential::new(0.7)),
        kernel(Triangular::new(2.5)),
        kernel(DampedCosine::new(4.0, 0.3)),
        kernel(DampedCosine::new(4.0, 5.0)),
        kernel(BandLimited::new(0.0, 2.0)),
        kernel(BandLimited::new(1.9, 2.0)),
    ];
    kernels.extend([0.3, 0.5, 1.0, 1.3, 2.0, 2.5, 7.0].map(|smoothness| kernel(Matern::new(smoothness, 2.0))));
    kernels.extend([0.7, 1.0, 10.0].map(|mixture| kernel(RationalQuadratic::new(1.5, mixture))));
    kernels.extend([0.001, 0.05, 0.7, 0.999].map(|damping| kernel(Oscillator::new(2.5, damping))));
    kernels
}

#[track_caller]
fn close(found: f64, expected: f64, relative: f64, what: &str) {
    let miss = (found - expected).abs();
    assert!(
        miss <= relative * expected.abs(),
        "{what}: {found}, expected {expected}, off by {miss:e}"
    );
}

#[track_caller]
fn near(found: f64, expected: f64, absolute: f64, what: &str) {
    let miss = (found - expected).abs();
    assert!(
        miss <= absolute,
        "{what}: {found}, expected {expected}, off by {miss:e}"
    );
}

fn finite(moment: &Moment) -> f64 {
    match moment {
        Moment::Finite { value, .. } => *value,
        other => panic!("{other:?} is not finite"),
    }
}
