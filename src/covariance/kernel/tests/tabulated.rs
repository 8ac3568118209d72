//! Tables.

use super::*;

const ROWS: [(f64, f64); 5] = [(0.0, 1.0), (1.0, 0.7), (2.5, 0.2), (3.0, 0.1), (5.0, -0.05)];

fn table(rows: &[(f64, f64)], beyond: Beyond) -> Kernel {
    Tabulated::new("table.csv", rows, beyond).expect("a sound table").into()
}

/// Against SciPy's `interpolate.CubicSpline` with first derivative 0 at the left and second derivative 0 at the right
/// end, and its numerical cosine transform.
#[test]
fn the_spline_is_the_usual_one() {
    let kernel = table(&ROWS, Beyond::Zero);
    let values = [
        (0.5, 0.902_873_389_694_041_9),
        (1.7, 0.431_694_972_266_952_9),
        (2.8, 0.135_832_850_241_545_95),
        (-4.0, -0.008_937_198_067_632_844),
    ];
    for (lag, value) in values {
        close(kernel.value(lag).expect("inside"), value, 1e-13, "value");
    }
    ROWS.iter()
        .for_each(|(lag, value)| near(kernel.value(*lag).expect("inside"), *value, 1e-15, "knot"));
    close(
        kernel.taylor(1.7, 1).expect("inside")[1],
        -0.341_722_490_606_548_5,
        1e-13,
        "slope",
    );
    close(
        2.0 * kernel.taylor(4.0, 2).expect("inside")[2],
        0.067_874_396_135_265_68,
        1e-12,
        "curvature",
    );
    close(
        kernel.scale_of_fluctuation().expect("zero beyond").value,
        3.206_629_092_860_976_6,
        1e-13,
        "scale",
    );
    close(
        finite(&kernel.moments().lambda[2]),
        0.954_025_764_895_330_2,
        1e-13,
        "lambda_2",
    );
    let densities = [
        (0.01, 1.020_629_344_803_596_6),
        (0.7, 0.682_427_300_483_225_1),
        (3.0, 0.011_015_919_004_233_56),
        (40.0, 0.000_689_606_765_701_604_5),
    ];
    for (omega, density) in densities {
        close(
            kernel.density(omega).expect("zero beyond").value,
            density,
            1e-10,
            "density",
        );
    }
}

#[test]
fn the_two_ways_to_transform_a_spline_agree() {
    let rows: Vec<(f64, f64)> = (0..40)
        .map(|n| f64::from(n) * 0.25)
        .map(|lag| (lag, (-0.5 * lag * lag).exp()))
        .collect();
    let kernel = table(&rows, Beyond::Zero);
    // On both sides of the frequency where one takes over from the other, and far out, where the density is small.
    let (below, above) = (
        kernel.density(31.999_999).expect("a density"),
        kernel.density(32.000_001).expect("a density"),
    );
    near(below.value, above.value, 1e-13, "at the change");
    for omega in [0.0_f64, 1.0, 2.0] {
        let gaussian = (2.0 / std::f64::consts::PI).sqrt() * (-0.5 * omega * omega).exp();
        near(
            kernel.density(omega).expect("a density").value,
            gaussian,
            2e-4,
            "of a Gaussian",
        );
    }
}

#[test]
fn beyond_the_table() {
    let [zero, hold, refuse] = [Beyond::Zero, Beyond::Hold, Beyond::Refuse].map(|beyond| table(&ROWS, beyond));
    let last = hold.value(5.0).expect("inside");
    near(last, ROWS[4].1, 1e-15, "last value");
    assert_eq!((zero.value(5.1), hold.value(-7.0)), (Ok(0.0), Ok(last)));
    let refused = Unavailable::BeyondTable { lag: 5.1, last: 5.0 };
    assert_eq!(
        (refuse.value(5.1), refuse.loss(5.1)),
        (Err(refused.clone()), Err(refused))
    );
    assert_eq!(refuse.value(5.0), Ok(last));
    assert!(refuse.taylor(5.0, 1).is_err() && refuse.density(1.0).is_err() && refuse.scale_of_fluctuation().is_err());
    assert_eq!(
        zero.taylor(5.0, 1),
        Err(Unavailable::NotSmooth {
            lag: 5.0,
            derivative: 0
        })
    );
    assert_eq!(
        hold.taylor(5.0, 1),
        Err(Unavailable::NotSmooth {
            lag: 5.0,
            derivative: 1
        })
    );
    assert_eq!(hold.taylor(6.0, 2), Ok(vec![last, 0.0, 0.0]));
    assert_eq!(
        zero.taylor(2.5, 3),
        Err(Unavailable::NotSmooth {
            lag: 2.5,
            derivative: 3
        })
    );
    assert_eq!(
        hold.lines(),
        Ok(vec![Line {
            frequency: 0.0,
            power: last
        }])
    );
    assert_eq!(hold.scale_of_fluctuation().expect("a scale").value, f64::NEG_INFINITY);
    let moments = refuse.moments();
    assert!(matches!(
        moments.lambda[1],
        Moment::Unknown(Unavailable::BeyondTable { .. })
    ));
    assert_eq!(moments.lambda[2], zero.moments().lambda[2]);
    assert_eq!(moments.lambda[3], Moment::Infinite);
}

/// By the general route over lags, which knows nothing of splines.
#[test]
fn the_first_moment() {
    for beyond in [Beyond::Zero, Beyond::Hold] {
        let kernel = table(&ROWS, beyond);
        let over_lags = kernel.first_moment_over_lags().expect("a moment");
        close(finite(&kernel.moments().lambda[1]), over_lags.value, 1e-9, "lambda_1");
    }
}

#[test]
fn tables_that_are_none() {
    let fault = |rows: &[(f64, f64)]| Tabulated::new("", rows, Beyond::Zero).expect_err("not a table");
    assert_eq!(fault(&[(0.0, 1.0)]), InvalidTable::TooShort);
    assert_eq!(
        fault(&[(0.1, 1.0), (1.0, 0.5)]),
        InvalidTable::NotFromZero { first: 0.1 }
    );
    assert_eq!(
        fault(&[(0.0, 1.0), (1.0, 0.5), (1.0, 0.4)]),
        InvalidTable::NotRising { row: 2 }
    );
    assert_eq!(
        fault(&[(0.0, 1.0), (1.0, f64::NAN)]),
        InvalidTable::NotFinite { row: 1 }
    );
    assert_eq!(
        fault(&[(0.0, 0.0), (1.0, 0.5)]),
        InvalidTable::NoVariance { value: 0.0 }
    );
    assert_eq!(
        fault(&[(0.0, 1.0), (1e-320, 0.5), (1.0, 0.4)]),
        InvalidTable::NotRising { row: 1 }
    );
    let flat = table(&[(0.0, 2.0), (1.0, 2.0)], Beyond::Hold);
    assert_eq!(flat.smoothness(), Smoothness::Unlimited);
    close(
        flat.constant_part().expect("few lines").expect("no user kernel"),
        2.0,
        1e-15,
        "the constant",
    );
}
