//! T. Burton, D. Sharpe, N. Jenkins and E. Bossanyi 2001, Wind Energy Handbook, eq. 2.24 (von Kármán) and 2.30 (Kaimal, as
//! IEC 61400-1 has it). Seen.

use crate::support::{close, results, run};

/// "70.8" is rounded: as printed the area of von Kármán's spectrum is 0.99986, the closed form
/// 4/sqrt(70.8) sqrt(pi)/2 Gamma(1/3)/Gamma(5/6). The program's own is scaled to 1.
#[test]
fn areas() {
    let results = results(
        "spectrum printed(f, length: m, speed: m/s) =
             (1 m/s)^2 * 4 * length / speed / (1 + 70.8 * turns(f * length / speed)^2)^(5/6)
         process printed_gust = gaussian(spectrum: printed(length: 180 m, speed: 22 m/s))
         process gust  = gaussian(standard_deviation: 1 m/s, spectrum: von_karman(length: 180 m, mean_speed: 22 m/s))
         process gust2 = gaussian(standard_deviation: 1 m/s, spectrum: kaimal(length: 180 m, mean_speed: 22 m/s))",
    );
    let variance = |name: &str| results.moments(name).number("standard_deviation").powi(2);
    close(variance("printed_gust"), 0.999_859_648_581_652_4, 1e-11, "as printed");
    close(variance("gust"), 1.0, 1e-13, "von Kármán");
    close(variance("gust2"), 1.0, 1e-13, "Kaimal");
}

/// Scales of length for which the two fall alike at high frequency: (70.8/36)^(5/4) = 2.329. Behind a quick system that
/// looks at high frequency alone, both leave the same variance.
#[test]
fn lengths_of_equal_tails() {
    let results = results(
        "process one = gaussian(standard_deviation: 1 m/s, spectrum: von_karman(length: 100 m, mean_speed: 20 m/s))
         process two = gaussian(standard_deviation: 1 m/s, spectrum: kaimal(length: 232.9 m, mean_speed: 20 m/s))
         process slow_one = respond(one, through: oscillator(frequency: 200 Hz, damping: 0.1 %, gain: 1))
         process slow_two = respond(two, through: oscillator(frequency: 200 Hz, damping: 0.1 %, gain: 1))
         margin swift_one = slow_one - one
         margin swift_two = slow_two - two",
    );
    let deviation = |name: &str| results.moments(name).number("standard_deviation");
    close(deviation("swift_one"), deviation("swift_two"), 2e-3, "tails");
}

/// Their second moments grow without bound: no rate of crossings, and the program says so.
#[test]
fn crossings_of_gusts_are_refused() {
    for spectrum in ["kaimal", "von_karman", "davenport"] {
        let outcome = run(&format!(
            "process gust = gaussian(standard_deviation: 3 m/s, spectrum: {spectrum}(length: 180 m, mean_speed: 22 m/s))
             limit state strong {{ failure when gust > 12 m/s  reference period 10 min }}"
        ));
        assert_eq!(outcome.errors(), ["process/not-differentiable"], "{spectrum}");
        let results = results(&format!(
            "process gust = gaussian(standard_deviation: 3 m/s, spectrum: {spectrum}(length: 180 m, mean_speed: 22 m/s))"
        ));
        assert_eq!(
            results.moments("gust").0["derivative_standard_deviation"],
            "infinite",
            "{spectrum}"
        );
    }
}
