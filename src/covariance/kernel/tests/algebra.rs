//! Sums, multiples and products.

use super::*;

#[test]
fn a_product_of_squared_exponentials_is_one() {
    let product = Kernel::product(vec![
        kernel(SquaredExponential::new(3.0)),
        kernel(SquaredExponential::new(4.0)),
    ]);
    let whole = kernel(SquaredExponential::new(2.4));
    for lag in [0.0, 1e-9, 0.5, 2.0, 7.0, -2.0] {
        close(
            product.value(lag).expect("a value"),
            whole.value(lag).expect("a value"),
            1e-14,
            "value",
        );
        close(
            product.loss(lag).expect("a loss"),
            whole.loss(lag).expect("a loss"),
            1e-14,
            "loss",
        );
    }
    for omega in [0.0, 0.2, 1.0] {
        let (found, exact) = (
            product.density(omega).expect("found"),
            whole.density(omega).expect("exact"),
        );
        near(found.value, exact.value, found.error + 1e-14, "density");
        close(found.value, exact.value, 1e-9, "density");
    }
    for (found, exact) in product.moments().lambda.iter().zip(&whole.moments().lambda) {
        close(finite(found), finite(exact), 1e-10, "moment");
    }
    let (found, exact) = (
        product.scale_of_fluctuation().expect("found"),
        whole.scale_of_fluctuation().expect("exact"),
    );
    close(found.value, exact.value, 1e-10, "scale of fluctuation");
    let (found, exact) = (
        product.taylor(1.5, 4).expect("found"),
        whole.taylor(1.5, 4).expect("exact"),
    );
    found
        .iter()
        .zip(exact)
        .for_each(|(found, exact)| close(*found, exact, 1e-13, "Taylor coefficient"));
}

#[test]
fn a_damped_cosine_is_an_exponential_on_a_carrier() {
    let product = Kernel::product(vec![kernel(Exponential::new(4.0)), kernel(Harmonic::new(0.3))]);
    let whole = kernel(DampedCosine::new(4.0, 0.3));
    for omega in [0.0, 0.1, 0.3, 2.0] {
        let (found, exact) = (
            product.density(omega).expect("found"),
            whole.density(omega).expect("exact"),
        );
        close(found.value, exact.value, 1e-14, "density");
    }
    assert_eq!(product.moments().lambda[1], Moment::Infinite);
    let (found, exact) = (
        product.scale_of_fluctuation().expect("found"),
        whole.scale_of_fluctuation().expect("exact"),
    );
    close(found.value, exact.value, 1e-14, "scale of fluctuation");
}

/// lambda_1 of exp(-u^2/2) cos(w tau) is the mean modulus of a normal variable with mean w and deviation 1/l: the
/// folded normal distribution of F. C. Leone, L. S. Nelson and R. B. Nottingham (1961), Technometrics 3.
#[test]
fn the_first_moment_on_a_carrier() {
    for carrier in [0.05, 0.4, 3.0, 2000.0] {
        let length = 3.0;
        let product = Kernel::product(vec![
            kernel(SquaredExponential::new(length)),
            kernel(Harmonic::new(carrier)),
        ]);
        let z = carrier * length;
        let folded = (2.0 / std::f64::consts::PI).sqrt() / length * (-0.5 * z * z).exp()
            + carrier * libm::erf(z / std::f64::consts::SQRT_2);
        close(
            finite(&product.moments().lambda[1]),
            folded,
            1e-10,
            &format!("carrier {carrier}"),
        );
        close(
            finite(&product.moments().lambda[2]),
            1.0 / 9.0 + carrier * carrier,
            1e-13,
            "lambda_2",
        );
    }
}

#[test]
fn first_moments_of_products_by_both_routes() {
    let carried =
        |smoothness: f64| Kernel::product(vec![kernel(Matern::new(smoothness, 2.0)), kernel(Harmonic::new(1.5))]);
    for product in [carried(1.3), carried(2.5), carried(0.8)] {
        let over_frequencies = product.first_moment_over_frequencies().expect("a moment");
        let over_lags = product.first_moment_over_lags().expect("a moment");
        close(over_lags.value, over_frequencies.value, 1e-8, &product.to_string());
    }
}

#[test]
fn lines_beat() {
    let product = Kernel::product(vec![
        kernel(Harmonic::new(3.0)),
        kernel(Harmonic::new(2.0)),
        kernel(Harmonic::new(1.0)),
    ]);
    let lines = product.lines().expect("few");
    let expected = [(0.0, 0.25), (2.0, 0.25), (4.0, 0.25), (6.0, 0.25)];
    assert_eq!(
        lines
            .iter()
            .map(|line| (line.frequency, line.power))
            .collect::<Vec<_>>(),
        expected
    );
    let moments = product.moments();
    close(finite(&moments.lambda[1]), 3.0, 1e-14, "lambda_1");
    close(finite(&moments.lambda[2]), 14.0, 1e-14, "lambda_2");
    close(
        finite(&moments.lambda[3]),
        (16.0 + 256.0 + 1296.0) / 4.0,
        1e-14,
        "lambda_4",
    );
    assert_eq!(product.scale_of_fluctuation().expect("a scale").value, f64::INFINITY);
    let many = Kernel::product((0..40).map(|n| kernel(Harmonic::new(1.37_f64.powi(n)))).collect());
    assert_eq!(many.lines(), Err(Unavailable::TooManyLines));
    assert!(many.density(1.0).is_err() && matches!(many.moments().lambda[1], Moment::Unknown(_)));
}

/// (a + f)(b + g) with constants a, b: expanded by hand.
#[test]
fn a_product_of_sums_with_constants() {
    let (f, g) = (kernel(SquaredExponential::new(2.0)), kernel(Matern::new(1.5, 3.0)));
    let sum = |weight: f64, kernel: &Kernel| Kernel::sum(vec![scaled(weight, &Kernel::Constant), kernel.clone()]);
    let product = Kernel::product(vec![sum(0.5, &f), sum(2.0, &g)]);
    let by_hand = Kernel::sum(vec![
        Kernel::Constant,
        scaled(2.0, &f),
        scaled(0.5, &g),
        Kernel::product(vec![f.clone(), g.clone()]),
    ]);
    assert_eq!(product.lines(), by_hand.lines());
    for omega in [0.0, 0.4, 2.0] {
        let (found, exact) = (
            product.density(omega).expect("found"),
            by_hand.density(omega).expect("exact"),
        );
        close(found.value, exact.value, 1e-9, "density");
    }
    for (found, exact) in product.moments().lambda.iter().zip(&by_hand.moments().lambda) {
        match exact {
            Moment::Finite { value, .. } => close(finite(found), *value, 1e-9, "moment"),
            other => assert_eq!(found, other),
        }
    }
    assert_eq!(product.constant_part(), Ok(Some(1.0)));
}

#[test]
fn smoothness_is_that_of_the_roughest() {
    let matern = |smoothness: f64| kernel(Matern::new(smoothness, 2.0));
    let derivatives = |kernel: &Kernel| match kernel.smoothness() {
        Smoothness::Exactly { derivatives, limiting } => (derivatives, limiting.exponent, limiting.log),
        other => panic!("{other:?}"),
    };
    for (smoothness, expected) in [(0.5, 0), (1.0, 0), (1.3, 1), (2.0, 1), (2.2, 2), (2.5, 2), (50.0, 49)] {
        let logarithm = u32::from(smoothness % 1.0 == 0.0);
        assert_eq!(
            derivatives(&matern(smoothness)),
            (expected, 2.0 * smoothness, logarithm)
        );
    }
    let smooth = kernel(SquaredExponential::new(1.0));
    assert_eq!(smooth.smoothness(), Smoothness::Unlimited);
    assert_eq!(
        derivatives(&Kernel::sum(vec![smooth.clone(), matern(3.5), matern(2.0)])),
        (1, 4.0, 1)
    );
    assert_eq!(
        derivatives(&Kernel::product(vec![
            smooth.clone(),
            kernel(Oscillator::new(1.0, 0.1))
        ])),
        (1, 3.0, 0)
    );
    assert_eq!(derivatives(&scaled(0.2, &kernel(Triangular::new(1.0)))), (0, 1.0, 0));
}

#[test]
fn derivatives_that_do_not_exist_are_refused() {
    let triangle = kernel(Triangular::new(2.0));
    assert_eq!(
        triangle.taylor(2.0, 1),
        Err(Unavailable::NotSmooth {
            lag: 2.0,
            derivative: 1
        })
    );
    assert_eq!(triangle.taylor(2.0, 0), Ok(vec![0.0]));
    assert_eq!(
        triangle.taylor(0.0, 1),
        Err(Unavailable::NotSmooth {
            lag: 0.0,
            derivative: 1
        })
    );
    assert_eq!(triangle.taylor(-0.5, 2), Ok(vec![0.75, 0.5, 0.0]));
    let rough = kernel(Matern::new(2.2, 1.0));
    assert!(rough.taylor(0.0, 4).is_ok());
    assert_eq!(
        rough.taylor(0.0, 5),
        Err(Unavailable::NotSmooth {
            lag: 0.0,
            derivative: 5
        })
    );
    let logarithmic = kernel(Matern::new(2.0, 1.0));
    assert!(logarithmic.taylor(0.0, 3).is_ok());
    assert_eq!(
        logarithmic.taylor(0.0, 4),
        Err(Unavailable::NotSmooth {
            lag: 0.0,
            derivative: 4
        })
    );
}

#[test]
fn normal_forms_and_words() {
    let (a, b) = (kernel(Exponential::new(2.0)), kernel(Harmonic::new(0.5)));
    let sum = Kernel::sum(vec![a.clone(), Kernel::sum(vec![b.clone(), Kernel::Constant])]);
    let product = Kernel::product(vec![scaled(3.0, &sum), Kernel::Constant, b.clone()]);
    assert_eq!(
        product.to_string(),
        "3 * (exponential(length: 2 s) + harmonic(frequency: 0.5 rad/s) + 1) * harmonic(frequency: 0.5 rad/s)"
    );
    assert_eq!(Kernel::product(vec![a.clone(), Kernel::zero()]), Kernel::zero());
    assert_eq!(Kernel::product(Vec::new()), Kernel::Constant);
    assert_eq!(scaled(0.0, &a), Kernel::zero());
    assert_eq!(scaled(2.0, &scaled(0.5, &a)), scaled(1.0, &a));
    assert_eq!(Kernel::zero().value(1.0), Ok(0.0));
    assert_eq!(Kernel::zero().to_string(), "0");
    assert!(a.clone().scaled(-1.0).is_err() && a.scaled(f64::NAN).is_err());
    let fault = Oscillator::new(1.0, 1.0).expect_err("critical damping");
    assert_eq!(
        fault.to_string(),
        "damping of oscillator must be above 0 (1e-12) and below 1, not 1"
    );
}

#[test]
fn constants_come_off() {
    let family = kernel(Exponential::new(2.0));
    let with = Kernel::sum(vec![family.clone(), scaled(4.0, &Kernel::Constant)]);
    assert_eq!(with.constant_part(), Ok(Some(4.0)));
    assert_eq!(with.clone().without_constant(4.0 * (1.0 + 1e-15)), family);
    let product = Kernel::product(vec![
        with,
        Kernel::sum(vec![kernel(Harmonic::new(1.0)), Kernel::Constant]),
    ]);
    let without = product.without_constant(4.0);
    assert_eq!(without.constant_part(), Ok(Some(0.0)));
    close(without.value(0.0).expect("a value"), 6.0, 1e-15, "variance");
}
