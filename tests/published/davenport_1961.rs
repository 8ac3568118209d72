//! A. G. Davenport 1961, "The spectrum of horizontal gustiness near the ground in high winds", Quarterly Journal of the
//! Royal Meteorological Society 87, 194-211: n S/u*² = 4 x²/(1 + x²)^(4/3), x = 1200 n/U(10 m), of area 6 u*². From memory.

use crate::support::{close, results};

/// In the friction speed u* the variance is 6; of unit area the spectrum is 2/3 x²/(1 + x²)^(4/3).
#[test]
fn area() {
    let results = results(
        "spectrum gustiness(f, friction: m/s, speed: m/s) =
             4 * friction^2 * turns(1200 m * f / speed)^2 / f * 1 turn / (1 + turns(1200 m * f / speed)^2)^(4/3)
         process gust  = gaussian(spectrum: gustiness(friction: 1.5 m/s, speed: 20 m/s))
         process shape = gaussian(standard_deviation: 3 m/s, spectrum: davenport(mean_speed: 20 m/s))",
    );
    let variance = |name: &str| results.moments(name).number("standard_deviation").powi(2);
    close(variance("gust"), 6.0 * 1.5 * 1.5, 1e-11, "of the friction speed");
    close(variance("shape"), 9.0, 1e-13, "of unit area");
}
