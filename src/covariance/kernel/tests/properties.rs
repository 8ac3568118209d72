//! What holds for every kernel that can be built.

use super::*;
use proptest::prelude::*;

fn any_family() -> impl Strategy<Value = Kernel> {
    let size = || (-8.0..8.0_f64).prop_map(|power| 10.0_f64.powf(power));
    let shape = || (-2.5..2.2_f64).prop_map(|power| 10.0_f64.powf(power));
    prop_oneof![
        size().prop_map(|length| kernel(SquaredExponential::new(length))),
        size().prop_map(|length| kernel(Exponential::new(length))),
        (shape(), size()).prop_map(|(smoothness, length)| kernel(Matern::new(smoothness, length))),
        (size(), shape()).prop_map(|(length, mixture)| kernel(RationalQuadratic::new(length, mixture))),
        (size(), 1e-6..0.999_999).prop_map(|(frequency, damping)| kernel(Oscillator::new(frequency, damping))),
        (size(), size()).prop_map(|(length, frequency)| kernel(DampedCosine::new(length, frequency))),
        size().prop_map(|frequency| kernel(Harmonic::new(frequency))),
        (size(), size()).prop_map(|(lower, width)| kernel(BandLimited::new(lower, lower + width + 1e-9 * lower))),
        size().prop_map(|length| kernel(Triangular::new(length))),
    ]
}

fn any_kernel() -> impl Strategy<Value = Kernel> {
    any_family().prop_recursive(3, 12, 3, |inner| {
        prop_oneof![
            prop::collection::vec(inner.clone(), 0..4).prop_map(Kernel::sum),
            prop::collection::vec(inner.clone(), 0..4).prop_map(Kernel::product),
            (inner, 0.0..10.0).prop_map(|(inner, weight)| scaled(weight, &inner)),
        ]
    })
}

proptest! {
    #![proptest_config(ProptestConfig { failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn values_are_numbers_and_largest_at_zero(kernel in any_kernel(), power in -30.0..30.0_f64) {
        let lag = 10.0_f64.powf(power);
        let variance = kernel.value(0.0).expect("no table");
        let (value, loss) = (kernel.value(lag).expect("no table"), kernel.loss(lag).expect("no table"));
        prop_assert!(value.abs() <= variance * (1.0 + 1e-12), "{value} > {variance}");
        prop_assert!(loss >= 0.0 && (variance - value - loss).abs() <= 1e-12 * variance, "loss {loss}, value {value}");
        prop_assert_eq!(kernel.value(-lag), kernel.value(lag));
        for coefficient in kernel.taylor(lag, 2).unwrap_or_default() {
            prop_assert!(!coefficient.is_nan());
        }
    }

    #[test]
    fn families_have_densities_that_are_not_negative(kernel in any_family(), power in -30.0..30.0_f64) {
        for omega in [0.0, 10.0_f64.powf(power)] {
            let density = kernel.density(omega).expect("no table").value;
            prop_assert!(density >= 0.0, "{density}");
        }
        prop_assert!(kernel.scale_of_fluctuation().expect("no table").value >= 0.0);
    }

    #[test]
    fn moments_are_ordered(kernel in any_family()) {
        // lambda_1^2 <= lambda_0 lambda_2 and lambda_2^2 <= lambda_0 lambda_4, by the inequality of Cauchy and Schwarz.
        let lambda = kernel.moments().lambda.map(|moment| moment.value().unwrap_or(f64::INFINITY));
        prop_assert!(lambda[1] * lambda[1] <= lambda[0] * lambda[2] * (1.0 + 1e-9), "{lambda:?}");
        prop_assert!(lambda[2] * lambda[2] <= lambda[0] * lambda[3] * (1.0 + 1e-9), "{lambda:?}");
    }

    #[test]
    fn smoothness_and_expansion_agree(kernel in any_family()) {
        let expansion = kernel.expansion(8.0);
        let rough = expansion.terms().iter().find(|term| term.exponent.rem_euclid(2.0) != 0.0 || term.logs > 0);
        match (kernel.smoothness(), rough) {
            (Smoothness::Exactly { limiting, .. }, Some(term)) => {
                prop_assert!((limiting.exponent - term.exponent).abs() < 1e-9 && limiting.log == term.logs);
            }
            (Smoothness::Exactly { limiting, .. }, None) => prop_assert!(limiting.exponent >= 8.0 - 1e-9),
            (_, rough) => prop_assert_eq!(rough, None),
        }
    }
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 48, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn spectra_of_trees_are_numbers(kernel in any_kernel(), power in -10.0..10.0_f64) {
        for moment in kernel.moments().lambda {
            if let Moment::Finite { value, error } | Moment::Unreached { value, error } = moment {
                prop_assert!(value >= 0.0 && error >= 0.0, "{value} within {error}");
            }
        }
        for omega in [0.0, 10.0_f64.powf(power)] {
            let density = kernel.density(omega).expect("few lines");
            // Rounding of the values that are transformed.
            let rounding = 1e-10 * kernel.value(0.0).expect("no table") * kernel.times().map_or(1.0, |(_, long)| long);
            prop_assert!(density.error >= 0.0 && density.value >= -density.error - rounding, "{density:?} at {omega}");
        }
    }
}
