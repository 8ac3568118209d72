//! E. Vanmarcke (1983), Random Fields: Analysis and Synthesis, ch. 5: variance functions, the variance of the average over T
//! of a process of variance 1 (from memory; the closed forms agree with quadrature).

use super::white::{excitation, moments};
use outcross::covariance::kernel::{Exponential, Kernel, SquaredExponential, Triangular};
use outcross::covariance::response::{Average, System};
use outcross::covariance::source::Source;
use outcross::source::{FileId, Span};
use std::f64::consts::PI;

fn variance(kernel: impl Into<Kernel>, over: f64) -> f64 {
    let source = Source::new("x".into(), kernel.into(), Span::new(FileId(0), 0, 0), Vec::new());
    let average = System::Average(Average::new(over).expect("a time"));
    let averaged = excitation().through(&average, 1.0).expect("an average keeps the mean");
    moments(&[source], &averaged)[0]
}

#[test]
fn variance_functions() {
    for t in [0.5, 1.0, 3.0, 10.0_f64] {
        let exponential = 2.0 * (t - 1.0 + (-t).exp()) / (t * t);
        let found = variance(Exponential::new(1.0).expect("a length"), t);
        assert!(
            (found / exponential - 1.0).abs() < 1e-9,
            "exponential over {t}: {found} against {exponential}"
        );
        // exp(-tau²): a length of 1/sqrt(2).
        let error_function = 1.0 - libm::erfc(t);
        let bell = (PI.sqrt() * t * error_function + (-t * t).exp_m1()) / (t * t);
        let found = variance(SquaredExponential::new(0.5_f64.sqrt()).expect("a length"), t);
        assert!(
            (found / bell - 1.0).abs() < 1e-9,
            "squared exponential over {t}: {found} against {bell}"
        );
        let triangle = if t >= 1.0 {
            (1.0 - 1.0 / (3.0 * t)) / t
        } else {
            1.0 - t / 3.0
        };
        let found = variance(Triangular::new(1.0).expect("a length"), t);
        assert!(
            (found / triangle - 1.0).abs() < 1e-8,
            "triangular over {t}: {found} against {triangle}"
        );
    }
    // Printed to seven digits for T = 3.
    let printed = [
        (variance(Exponential::new(1.0).expect("a length"), 3.0), 0.4555082),
        (
            variance(SquaredExponential::new(0.5_f64.sqrt()).expect("a length"), 3.0),
            0.4797075,
        ),
        (variance(Triangular::new(1.0).expect("a length"), 3.0), 0.2962963),
    ];
    for (found, printed) in printed {
        assert!((found - printed).abs() <= 6e-8, "{found} against {printed}");
    }
}
