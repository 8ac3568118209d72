//! Kernels written by the user: the families once more, as expressions, and what goes wrong.

use super::*;
use crate::expression::{Arena, Function, NodeId, Operand, Symbol, Tape};

/// Builds expressions in a lag and one argument.
struct Pen(Arena);

impl Pen {
    fn lag(&mut self) -> NodeId {
        self.0.symbol(Symbol::Lag)
    }

    fn times(&mut self, factor: f64, node: NodeId) -> NodeId {
        let factor = self.0.number(factor);
        self.product(&[factor, node])
    }

    fn sum(&mut self, nodes: &[NodeId]) -> NodeId {
        let operands: Vec<Operand> = nodes.iter().map(|node| Operand::direct(*node)).collect();
        self.0.sum(&operands)
    }

    fn product(&mut self, nodes: &[NodeId]) -> NodeId {
        let operands: Vec<Operand> = nodes.iter().map(|node| Operand::direct(*node)).collect();
        self.0.product(&operands)
    }

    fn power(&mut self, base: NodeId, exponent: f64) -> NodeId {
        let exponent = self.0.number(exponent);
        self.0.power(base, exponent)
    }

    fn apply(&mut self, function: Function, node: NodeId) -> NodeId {
        self.0.apply(function, &[node]).expect("one argument")
    }
}

fn user(write: impl FnOnce(&mut Pen) -> NodeId) -> Kernel {
    let mut pen = Pen(Arena::new());
    let root = write(&mut pen);
    User::new("mine", Arc::new(Tape::compile(&pen.0, root)), Vec::new()).into()
}

/// exp(-(tau/scale)^exponent)
fn stretched(scale: f64, exponent: f64) -> Kernel {
    user(|pen| {
        let lag = pen.lag();
        let u = pen.times(1.0 / scale, lag);
        let power = pen.power(u, exponent);
        let negative = pen.times(-1.0, power);
        pen.apply(Function::Exp, negative)
    })
}

/// (1 + x + x^2/3) exp(-x), x = rate tau
fn matern_five_halves(rate: f64) -> Kernel {
    user(|pen| {
        let lag = pen.lag();
        let x = pen.times(rate, lag);
        let one = pen.0.number(1.0);
        let square = pen.power(x, 2.0);
        let third = pen.times(1.0 / 3.0, square);
        let polynomial = pen.sum(&[one, x, third]);
        let negative = pen.times(-1.0, x);
        let decay = pen.apply(Function::Exp, negative);
        pen.product(&[polynomial, decay])
    })
}

/// exp(-z w tau) (cos(d tau) + z w / d sin(d tau)), d = w sqrt(1 - z^2)
fn oscillator(frequency: f64, damping: f64) -> Kernel {
    user(|pen| {
        let damped = frequency * (1.0 - damping * damping).sqrt();
        let lag = pen.lag();
        let phase = pen.times(damped, lag);
        let cosine = pen.apply(Function::Cos, phase);
        let sine = pen.apply(Function::Sin, phase);
        let sine = pen.times(damping * frequency / damped, sine);
        let wave = pen.sum(&[cosine, sine]);
        let exponent = pen.times(-damping * frequency, lag);
        let decay = pen.apply(Function::Exp, exponent);
        pen.product(&[decay, wave])
    })
}

#[test]
fn expressions_answer_as_families_do() {
    let length = 2.0;
    let pairs = [
        (
            stretched(length * 2.0_f64.sqrt(), 2.0),
            kernel(SquaredExponential::new(length)),
        ),
        (stretched(length, 1.0), kernel(Exponential::new(length))),
        (
            matern_five_halves(5.0_f64.sqrt() / length),
            kernel(Matern::new(2.5, length)),
        ),
        (oscillator(2.5, 0.05), kernel(Oscillator::new(2.5, 0.05))),
        (oscillator(2.5, 0.7), kernel(Oscillator::new(2.5, 0.7))),
    ];
    for (written, named) in pairs {
        for lag in [0.0, 0.01, 1.3, -4.0] {
            near(
                written.value(lag).expect("a value"),
                named.value(lag).expect("a value"),
                1e-14,
                &named.to_string(),
            );
        }
        let (found, exact) = (
            written.taylor(1.3, 4).expect("smooth"),
            named.taylor(1.3, 4).expect("smooth"),
        );
        found
            .iter()
            .zip(&exact)
            .for_each(|(found, exact)| near(*found, *exact, 1e-11, &named.to_string()));
        for omega in [0.0, 0.7, 2.6, 8.0] {
            let (found, exact) = (
                written.density(omega).expect("a density"),
                named.density(omega).expect("exact"),
            );
            near(
                found.value,
                exact.value,
                found.error + 1e-13,
                &format!("density of {named} at {omega}"),
            );
            assert!(found.error < 1e-8, "{named} at {omega}: {found:?}");
        }
        let scale = written.scale_of_fluctuation().expect("a scale");
        close(
            scale.value,
            named.scale_of_fluctuation().expect("a scale").value,
            1e-9,
            &named.to_string(),
        );
        for (found, exact) in written.moments().lambda.iter().zip(&named.moments().lambda) {
            match exact {
                Moment::Finite { value, .. } => close(finite(found), *value, 1e-9, &named.to_string()),
                other => assert_eq!(found, other, "{named}"),
            }
        }
        let derivatives = |kernel: &Kernel| match kernel.smoothness() {
            Smoothness::Exactly { derivatives, limiting } => Some((derivatives, limiting)),
            Smoothness::Unlimited | Smoothness::AtLeast { .. } => None,
            Smoothness::Unclear { reason } => panic!("{reason}"),
        };
        assert_eq!(derivatives(&written), derivatives(&named), "{named}");
    }
}

#[test]
fn powers_between_the_whole_ones() {
    for (exponent, derivatives) in [(1.9, 0), (1.0, 0), (0.4, 0)] {
        let kernel = stretched(3.0, exponent);
        let limiting = Rough { exponent, log: 0 };
        assert_eq!(kernel.smoothness(), Smoothness::Exactly { derivatives, limiting });
        assert_eq!(kernel.moments().lambda[2], Moment::Infinite);
    }
    assert!(matches!(
        stretched(3.0, 2.0).smoothness(),
        Smoothness::AtLeast { derivatives: 5.. }
    ));
    // exp(-u^4) is no covariance function: its lambda_2 is 0 (J. Bretagnolle, D. Dacunha-Castelle and J. L. Krivine 1966).
    assert_eq!(stretched(3.0, 4.0).moments().lambda[2].value(), Some(0.0));
}

/// lambda_1 of exp(-u^p), 2/pi times the integral of (1 - exp(-u^p)) / u^2, is 2 / pi Gamma(1 - 1/p) by parts.
#[test]
fn the_first_moment_of_a_stretched_exponential() {
    for exponent in [1.2, 1.5, 1.9] {
        let exact = 2.0 / std::f64::consts::PI * libm::tgamma(1.0 - 1.0 / exponent) / 3.0;
        close(
            finite(&stretched(3.0, exponent).moments().lambda[1]),
            exact,
            1e-9,
            &format!("exponent {exponent}"),
        );
    }
}

#[test]
fn kinks_are_seen_where_they_are_asked_about() {
    // max(1 - tau/2, 0)
    let triangle = user(|pen| {
        let (lag, one, zero) = (pen.lag(), pen.0.number(1.0), pen.0.number(0.0));
        let fall = pen.times(-0.5, lag);
        let line = pen.sum(&[one, fall]);
        pen.0.apply(Function::Max, &[line, zero]).expect("two arguments")
    });
    assert_eq!(
        triangle.taylor(2.0, 1),
        Err(Unavailable::NotSmooth {
            lag: 2.0,
            derivative: 1
        })
    );
    assert_eq!(triangle.taylor(-1.0, 2), Ok(vec![0.5, 0.5, 0.0]));
    assert_eq!(triangle.taylor(3.0, 1), Ok(vec![0.0, 0.0]));
    assert_eq!(triangle.moments().lambda[1], Moment::Infinite);
}

#[test]
fn values_by_continuity_and_none() {
    // sin(2 tau) / (2 tau)
    let low_pass = user(|pen| {
        let lag = pen.lag();
        let phase = pen.times(2.0, lag);
        let sine = pen.apply(Function::Sin, phase);
        pen.0.product(&[Operand::direct(sine), Operand::inverse(phase)])
    });
    close(low_pass.value(0.0).expect("the limit"), 1.0, 1e-15, "at zero");
    close(finite(&low_pass.moments().lambda[2]), 4.0 / 3.0, 1e-11, "lambda_2");
    let logarithm = user(|pen| {
        let lag = pen.lag();
        pen.apply(Function::Ln, lag)
    });
    assert!(matches!(logarithm.value(0.0), Err(Unavailable::NoValue { .. })));
    assert!(matches!(logarithm.smoothness(), Smoothness::Unclear { .. }));
    assert!(matches!(logarithm.moments().lambda[0], Moment::Unknown(_)));
    let root = user(|pen| {
        let lag = pen.lag();
        let negative = pen.times(-1.0, lag);
        pen.apply(Function::Sqrt, negative)
    });
    assert!(matches!(root.value(1.0), Err(Unavailable::NoValue { .. })));
    assert!(root.density(1.0).is_err() && root.taylor(1.0, 1).is_err() && root.scale_of_fluctuation().is_err());
}

#[test]
fn what_does_not_fade_says_so() {
    let wave = user(|pen| {
        let lag = pen.lag();
        pen.apply(Function::Cos, lag)
    });
    let density = wave.density(1.0).expect("an estimate");
    assert!(
        density.error.is_infinite() || density.error > 0.1 * density.value.abs(),
        "{density:?}"
    );
    let squared = stretched(2.0, 2.0);
    let raised = Kernel::sum(vec![squared.clone(), Kernel::Constant]);
    assert_eq!(raised.constant_part(), Ok(None));
    let (_, value) = raised.at_long_lag().expect("a value");
    close(value, 1.0, 1e-15, "at a very long lag");
    assert_eq!(raised.without_constant(value), squared);
}
