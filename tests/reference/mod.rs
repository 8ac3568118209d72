//! Special functions against tables computed with mpmath (`tables.py` beside this file) and the errors their
//! documentation states.

mod first_moment;
mod kernels;
mod responses;
mod spectra;

use outcross::numerics::{bessel, gamma, matern, normal};
use serde::Deserialize;

const NORMAL: &str = include_str!("normal.csv");
const GAMMA: &str = include_str!("gamma.csv");
const BESSEL: &str = include_str!("bessel.csv");

#[derive(Deserialize)]
struct Row {
    function: String,
    /// Order or smoothness, where the function has one.
    order: Option<f64>,
    argument: f64,
    value: f64,
}

/// The rows of one function.
fn rows(table: &str, function: &str) -> Vec<Row> {
    let rows: Vec<Row> = csv::Reader::from_reader(table.as_bytes())
        .deserialize()
        .map(|row| row.expect("a row of the table"))
        .filter(|row: &Row| row.function == function)
        .collect();
    assert!(rows.len() > 40, "{function}: {} rows", rows.len());
    rows
}

/// Error relative to the value or to `floor`, whichever is larger. One unit of the smallest double is forgiven.
fn relative_error(found: f64, exact: f64, floor: f64) -> f64 {
    let miss = (found - exact).abs();
    if miss <= f64::from_bits(1) {
        0.0
    } else {
        miss / exact.abs().max(floor)
    }
}

/// Greatest error of a function over its rows, and where.
fn greatest(rows: &[Row], floor: f64, f: impl Fn(&Row) -> f64) -> (f64, String) {
    rows.iter().fold((0.0, String::new()), |(greatest, place), row| {
        let found = f(row);
        let error = relative_error(found, row.value, floor);
        // Not `error > greatest`, which a NaN would pass.
        if error <= greatest {
            (greatest, place)
        } else {
            (
                error,
                format!(
                    "order {:?}, argument {:e}: {found:e}, exact {:e}",
                    row.order, row.argument, row.value
                ),
            )
        }
    })
}

fn assert_within(bound: f64, function: &str, (error, place): (f64, String)) {
    assert!(
        error <= bound,
        "{function}: relative error {error:e} above {bound:e} at {place}"
    );
}

#[test]
fn normal_functions() {
    type Function = fn(f64) -> f64;
    let functions: [(&str, f64, Function); 5] = [
        ("pdf", 5e-16, normal::pdf),
        ("ln_pdf", 3e-16, normal::ln_pdf),
        ("upper", 6e-16, normal::upper),
        ("ln_upper", 6e-16, normal::ln_upper),
        ("erfcx", 6e-16, normal::erfcx),
    ];
    for (name, bound, function) in functions {
        assert_within(
            bound,
            name,
            greatest(&rows(NORMAL, name), 0.0, |row| function(row.argument)),
        );
    }
    let mirrored = rows(NORMAL, "upper");
    assert_within(
        6e-16,
        "lower",
        greatest(&mirrored, 0.0, |row| normal::lower(-row.argument)),
    );
    let mirrored = rows(NORMAL, "ln_upper");
    assert_within(
        6e-16,
        "ln_lower",
        greatest(&mirrored, 0.0, |row| normal::ln_lower(-row.argument)),
    );
}

#[test]
fn normal_quantiles() {
    let quantile = |p| normal::quantile(p).unwrap_or(f64::NAN);
    assert_within(
        6e-16,
        "quantile",
        greatest(&rows(NORMAL, "quantile"), 0.0, |row| quantile(row.argument)),
    );
    let quantile_of_ln = |ln_p| normal::quantile_of_ln(ln_p).unwrap_or(f64::NAN);
    let table = rows(NORMAL, "quantile_of_ln");
    assert_within(
        6e-16,
        "quantile_of_ln",
        greatest(&table, 0.0, |row| quantile_of_ln(row.argument)),
    );
}

#[test]
fn outside_their_domains_nothing_panics() {
    for p in [f64::NAN, f64::NEG_INFINITY, -1.0, 0.0, -0.0, 1.0, 1.5, f64::INFINITY] {
        assert_eq!(normal::quantile(p), None);
    }
    for ln_p in [f64::NAN, f64::NEG_INFINITY, 0.0, -0.0, 1.0, f64::INFINITY] {
        assert_eq!(normal::quantile_of_ln(ln_p), None);
    }
    for x in [f64::INFINITY, 1e300, 1e10] {
        assert_eq!((normal::pdf(x), normal::upper(x), normal::lower(x)), (0.0, 0.0, 1.0));
        assert_eq!((normal::ln_lower(x), normal::erfcx(-x)), (0.0, f64::INFINITY));
    }
    assert_eq!(
        (normal::ln_upper(f64::INFINITY), normal::erfcx(f64::INFINITY)),
        (f64::NEG_INFINITY, 0.0)
    );
    for f in [
        normal::pdf,
        normal::ln_pdf,
        normal::upper,
        normal::lower,
        normal::ln_lower,
        normal::erfcx,
    ] {
        assert!(f(f64::NAN).is_nan());
    }
    for x in [f64::NAN, -1.0, 0.0, f64::NEG_INFINITY] {
        assert!(gamma::ratio_half(x).is_nan() && gamma::ln_gamma(x).is_nan());
        assert!(bessel::k_pair(1.0, x).0.is_nan());
    }
    for order in [f64::NAN, -1.0, 1e9, f64::INFINITY] {
        assert!(bessel::k_pair(order, 1.0).0.is_nan());
        assert!(matern::correlation(order, 1.0).is_nan() && matern::variogram(order, 1.0).is_nan());
    }
    for smoothness in [1e-300, 1e-3, 0.5, 0.7, 1.0, 1.5, 12.0, 200.0] {
        let at = |x| (matern::correlation(smoothness, x), matern::variogram(smoothness, x));
        assert_eq!(at(0.0), (1.0, 0.0));
        assert_eq!(at(f64::INFINITY), (0.0, 1.0));
        for x in [5e-324, 1e-310, 1e-200, 1.0, 2.0, 1500.0, 1e300] {
            let (correlation, variogram) = at(x);
            assert!((0.0..=1.0).contains(&correlation), "{smoothness} {x}: {correlation}");
            assert!((0.0..=1.0).contains(&variogram), "{smoothness} {x}: {variogram}");
        }
        assert!(at(-1.0).0.is_nan() && at(f64::NAN).0.is_nan());
    }
    for x in [5e-324, 1e-300, 1e300, f64::INFINITY] {
        let (k, next) = bessel::k_pair(1000.0, x);
        assert!(k >= 0.0 && next >= k, "{x}: {k} {next}");
    }
}

/// As long as this holds, the crate's normal distribution function is too coarse to be used in place of ours; when a
/// release makes the test fail, ours may be reconsidered.
#[test]
fn the_distribution_function_of_statrs_misses_the_bound() {
    use statrs::distribution::{ContinuousCDF, Normal};
    let theirs = Normal::standard();
    let (error, _) = greatest(&rows(NORMAL, "upper"), 0.0, |row| theirs.sf(row.argument));
    assert!(error > 1e-12, "{error:e}");
}

#[test]
fn gamma_functions() {
    assert_within(
        4e-16,
        "ln_gamma",
        greatest(&rows(GAMMA, "ln_gamma"), 1.0, |row| gamma::ln_gamma(row.argument)),
    );
    assert_within(
        1e-15,
        "ratio_half",
        greatest(&rows(GAMMA, "ratio_half"), 0.0, |row| gamma::ratio_half(row.argument)),
    );
}

#[test]
fn bessel_functions() {
    let order = |row: &Row| row.order.expect("an order");
    let table = rows(BESSEL, "k");
    assert_within(
        4e-15,
        "k",
        greatest(&table, 0.0, |row| bessel::k_pair(order(row), row.argument).0),
    );
    let following = |row: &&Row| order(row) >= 1.0;
    let shifted: Vec<Row> = rows(BESSEL, "k").into_iter().filter(|row| following(&row)).collect();
    assert_within(
        4e-15,
        "next k",
        greatest(&shifted, 0.0, |row| bessel::k_pair(order(row) - 1.0, row.argument).1),
    );
}

#[test]
fn matern_functions() {
    let order = |row: &Row| row.order.expect("a smoothness");
    let table = rows(BESSEL, "correlation");
    assert_within(
        4e-15,
        "correlation",
        greatest(&table, 0.0, |row| matern::correlation(order(row), row.argument)),
    );
    let table = rows(BESSEL, "variogram");
    assert_within(
        2e-14,
        "variogram",
        greatest(&table, 0.0, |row| matern::variogram(order(row), row.argument)),
    );
}
