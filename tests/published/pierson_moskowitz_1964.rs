//! W. J. Pierson and L. Moskowitz 1964, "A proposed spectral form for fully developed wind seas based on the similarity
//! theory of S. A. Kitaigorodskii", Journal of Geophysical Research 69, 5181-5190, in the form with two parameters. Its
//! moments are gamma functions; the printed ratios are those of DNV-RP-C205, 3.5.5, from memory.

use crate::support::{close, results, within};
use std::f64::consts::PI;

/// Gamma(3/4): Abramowitz and Stegun 1964, table 6.1.
const GAMMA_3_4: f64 = 1.225_416_702_465_177_6;

/// Tz/Tp = (5 pi/4)^(-1/4), T1/Tp = 1/((5/4)^(1/4) Gamma(3/4)), printed 0.710 and 0.772; Hs is four standard deviations.
#[test]
fn ratios_of_periods() {
    for (hs, tp) in [(6.0, 11.0), (0.4, 2.5), (15.0, 17.0)] {
        let results = results(&format!(
            "process sea = gaussian(spectrum: pierson_moskowitz(hs: {hs} m, tp: {tp} s))"
        ));
        let sea = results.moments("sea");
        close(4.0 * sea.number("standard_deviation"), hs, 1e-13, "Hs");
        let zero_crossing = 1.0 / sea.number("zero_upcrossing_rate") / tp;
        close(zero_crossing, (1.25 * PI).powf(-0.25), 1e-13, "Tz/Tp");
        within(zero_crossing, 0.710, 0.5e-3, "Tz/Tp");
        let moments = sea.spectral_moments();
        let mean = 2.0 * PI * moments[0] / moments[1] / tp;
        close(mean, 1.25_f64.powf(-0.25) / GAMMA_3_4, 1e-13, "T1/Tp");
        within(mean, 0.772, 0.5e-3, "T1/Tp");
    }
}

/// The width sqrt(m0 m2/m1² - 1) is 0.425: Longuet-Higgins 1975, J. Geophys. Res. 80, from memory.
#[test]
fn width() {
    let results = results("process sea = gaussian(spectrum: pierson_moskowitz(hs: 6 m, tp: 11 s))");
    let moments = results.moments("sea").spectral_moments();
    let width = (moments[0] * moments[2] / moments[1].powi(2) - 1.0).sqrt();
    within(width, 0.425, 0.5e-3, "width");
    within(width, 0.4247, 0.5e-4, "width");
}

/// The tail w^-5 makes the fourth moment infinite: it grows with the logarithm of the frequency where it is cut.
#[test]
fn there_is_no_rate_of_maxima() {
    for spectrum in ["pierson_moskowitz(hs: 6 m, tp: 11 s)", "jonswap(hs: 6 m, tp: 11 s)"] {
        let results = results(&format!("process sea = gaussian(spectrum: {spectrum})"));
        let sea = results.moments("sea");
        assert_eq!(sea.0["spectral_moments"][3], "infinite", "{spectrum}");
        assert!(sea.0.get("irregularity").is_none(), "{spectrum}");
    }
}
