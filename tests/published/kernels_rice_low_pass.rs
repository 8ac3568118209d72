//! S. O. Rice (1944-45), Mathematical Analysis of Random Noise, Bell Syst. Tech. J. 23-24, part III: the ideal low-pass filter (from memory).

use outcross::covariance::kernel::{BandLimited, Correlation};
use std::f64::consts::PI;

#[test]
fn zeros_per_second() {
    let cut_off = 3.0;
    let noise = BandLimited::new(0.0, 2.0 * PI * cut_off).expect("valid");
    let [zeroth, _, second, fourth] = noise.moments();
    let zeros = (second / zeroth).sqrt() / PI;
    assert!((zeros - 2.0 * cut_off / 3.0_f64.sqrt()).abs() < 1e-14 * zeros);
    assert!((zeros / cut_off - 1.155).abs() < 5e-4);
    let cut_off = 2.0 * PI * cut_off;
    assert!((second - cut_off * cut_off / 3.0).abs() < 1e-14 * second);
    assert!((noise.value(0.2) - (0.2 * cut_off).sin() / (0.2 * cut_off)).abs() < 1e-15);
    // D. E. Cartwright and M. S. Longuet-Higgins (1956), Proc. R. Soc. A 237: the width is 2/3.
    let width = (1.0 - second * second / (zeroth * fourth)).sqrt();
    assert!((width - 2.0 / 3.0).abs() < 1e-14);
}
