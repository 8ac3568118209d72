//! E. H. Vanmarcke 1983, Random Fields: Analysis and Synthesis, MIT Press, Table 5.1: scales of fluctuation, the integral
//! of the correlation function over all lags. From memory.

use crate::support::{close, correlation};

/// The kernel of the language, its scale of fluctuation for a = b = c = k = 1 s, and its correlation at a lag of 0.7 s.
fn table_5_1() -> Vec<(&'static str, f64, f64)> {
    let lag = 0.7_f64;
    vec![
        ("exponential", 2.0, (-lag).exp()),
        ("squared_exponential", std::f64::consts::PI.sqrt(), (-lag * lag).exp()),
        ("matern", 4.0, (1.0 + lag) * (-lag).exp()),
        ("triangular", 1.0, 1.0 - lag),
        ("damped_cosine", 1.0, (-lag).exp() * lag.cos()),
    ]
}

#[test]
fn scale_of_fluctuation() {
    for (kernel, scale, expected) in table_5_1() {
        let more = match kernel {
            "matern" => "smoothness: 3/2, ",
            "damped_cosine" => "frequency: 1 rad/s, ",
            _ => "",
        };
        let found = correlation(
            &format!(
                "process x = gaussian(
                     standard_deviation: 1, correlation: {kernel}({more}scale_of_fluctuation: {scale} s)
                 )"
            ),
            "0.7 s",
        );
        // The length of the damped cosine is a double root there, so it has half the digits.
        let tolerance = if kernel == "damped_cosine" { 1e-7 } else { 1e-14 };
        close(found, expected, tolerance, kernel);
    }
}
