//! Functions of a series: Taylor's formula about its constant term, and what takes its place at branch points.

use super::expansion::{Expansion, MOST_TERMS, ORDER_OF_FLAT};
use super::{SeriesTerm, Unknown, taylor};
use crate::expression::Number;

/// Functions of a sum without remainder are expanded up to here.
const ORDER_OF_EXACT: f64 = 16.0;

/// Whole powers up to that are carried out by multiplication, which keeps exact sums exact.
const MOST_MULTIPLIED: f64 = 64.0;

type Outcome = Result<Expansion, Unknown>;

/// An entire function, or one that is smooth about the constant term of its argument.
pub(super) fn smooth(
    argument: &Expansion,
    operation: &'static str,
    coefficients: impl Fn(f64, usize) -> Vec<f64>,
) -> Outcome {
    let (constant, rest) = constant_and_rest(argument, operation)?;
    about(&rest, constant.error, |n| coefficients(constant.coefficient, n))
}

/// The constant term (perhaps 0), and what vanishes at h = 0.
pub(super) fn constant_and_rest(
    argument: &Expansion,
    operation: &'static str,
) -> Result<(SeriesTerm, Expansion), Unknown> {
    match argument.leading() {
        Some(leading) if leading.diverges() => Err(Unknown::Diverging {
            operation,
            argument: *leading,
        }),
        _ if argument.order() <= 0.0 => Err(Unknown::Undecided { operation }),
        Some(leading) if leading.exponent == 0.0 => {
            let rest = argument.terms().iter().skip(1).copied().collect();
            Ok((*leading, Expansion::new(rest, argument.order())?))
        }
        _ => Ok((SeriesTerm::new(0.0, 0.0, 0), argument.clone())),
    }
}

/// sum of f_k s^k for s -> 0. The point of expansion has an error, in machine epsilons, that moves f_k by (k + 1) f_(k+1)
/// as much. `coefficients(n)` gives f_0 ... f_n.
fn about(s: &Expansion, error: f64, coefficients: impl Fn(usize) -> Vec<f64>) -> Outcome {
    let exact = s.order() == f64::INFINITY;
    let step = s.valuation();
    let goal = if exact {
        ORDER_OF_EXACT * step.max(1.0)
    } else {
        s.order()
    };
    let count = if s.is_zero() {
        0
    } else {
        ((goal / step).ceil() as usize + 1).min(MOST_TERMS)
    };
    let values = coefficients(count + 1);
    let mut coefficients = values.windows(2).enumerate().map(|(k, pair)| SeriesTerm {
        error: pair[0].abs() + (k + 1) as f64 * pair[1].abs() * error,
        ..SeriesTerm::new(pair[0], 0.0, 0)
    });
    let mut terms: Vec<SeriesTerm> = coefficients.next().into_iter().collect();
    if s.is_zero() {
        return Expansion::new(terms, f64::INFINITY);
    }
    // The remainder of s enters through f_1 s, or where that is missing, as in cos(h), through f_2 s² and later.
    let highest = if exact { goal } else { goal + step };
    let mut order = highest.min((count + 1) as f64 * step);
    let mut power = s.with_order_at_most(order)?;
    for coefficient in coefficients {
        if coefficient.coefficient != 0.0 {
            order = order.min(power.order());
            terms.extend(power.terms().iter().map(|one| one.times(&coefficient)));
        }
        if power.valuation() + step >= order {
            break;
        }
        power = power.mul_below(s, order)?;
    }
    Expansion::new(terms, order)
}

/// The leading term a h^e of an argument, and r in a h^e (1 + r).
fn leading_and_ratio(argument: &Expansion, operation: &'static str) -> Result<(SeriesTerm, Expansion), Unknown> {
    let Some(leading) = argument.leading().copied() else {
        return Err(if argument.is_zero() {
            Unknown::Outside {
                operation,
                argument: "zero",
            }
        } else {
            Unknown::Undecided { operation }
        });
    };
    if leading.logs > 0 {
        return Err(Unknown::Logarithmic {
            operation,
            argument: leading,
        });
    }
    let a = leading.coefficient;
    let inverse = SeriesTerm {
        error: (1.0 + leading.error / a.abs()) / a.abs(),
        ..SeriesTerm::new(1.0 / a, -leading.exponent, 0)
    };
    let rest = argument.terms().iter().skip(1).copied().collect();
    Ok((leading, Expansion::new(rest, argument.order())?.scaled(&inverse)?))
}

/// A numeric power. A base of which only the remainder is known gives a remainder, in trust that it is not negative.
pub(super) fn power(base: &Expansion, exponent: f64, operation: &'static str) -> Outcome {
    let whole = exponent.fract() == 0.0;
    if whole && (0.0..=MOST_MULTIPLIED).contains(&exponent) {
        return multiplied(base, exponent as u32);
    }
    if base.terms().is_empty() && exponent > 0.0 {
        return base.remainder_of_power(exponent);
    }
    let (leading, ratio) = leading_and_ratio(base, operation)?;
    let a = leading.coefficient;
    if a < 0.0 && !whole {
        return Err(Unknown::Outside {
            operation,
            argument: "a negative number",
        });
    }
    let value = Number::power(&a, &exponent);
    let factor = SeriesTerm {
        error: value.abs() * (1.0 + exponent.abs() * leading.error / a.abs()),
        ..SeriesTerm::new(value, exponent * leading.exponent, 0)
    };
    about(&ratio, 0.0, |n| taylor::power_of_one_plus(exponent, n))?.scaled(&factor)
}

/// A whole power by repeated squaring.
fn multiplied(base: &Expansion, mut exponent: u32) -> Outcome {
    let mut result = Expansion::constant(1.0)?;
    let mut square = base.clone();
    while exponent > 0 {
        if exponent % 2 == 1 {
            result = result.mul(&square)?;
        }
        exponent /= 2;
        if exponent > 0 {
            square = square.mul(&square)?;
        }
    }
    Ok(result)
}

/// A power with a series for exponent: exp(exponent ln base), unless the exponent is a number.
pub(super) fn general_power(base: &Expansion, exponent: &Expansion) -> Outcome {
    match exponent.exact_number() {
        Some(number) => power(base, number, "a power"),
        None => exp(&exponent.mul(&ln(base, "a variable power")?)?),
    }
}

/// Natural logarithm: ln(a h^e (1 + r)) = ln a + e ln h + ln(1 + r).
pub(super) fn ln(argument: &Expansion, operation: &'static str) -> Outcome {
    let (leading, ratio) = leading_and_ratio(argument, operation)?;
    let a = leading.coefficient;
    if a < 0.0 {
        return Err(Unknown::Outside {
            operation,
            argument: "a negative number",
        });
    }
    let value = libm::log(a);
    let constant = SeriesTerm {
        error: value.abs() + leading.error / a,
        ..SeriesTerm::new(value, 0.0, 0)
    };
    let start = Expansion::new(vec![constant, SeriesTerm::new(leading.exponent, 0.0, 1)], f64::INFINITY)?;
    start.add(&about(&ratio, 0.0, taylor::ln_one_plus)?)
}

/// Exponential function; exp(a ln h) is h^a, and what goes to minus infinity as a power of h goes is flat.
pub(super) fn exp(argument: &Expansion) -> Outcome {
    let operation = "exp";
    let Some(leading) = argument.leading().filter(|term| term.diverges()) else {
        return smooth(argument, operation, taylor::exp);
    };
    if leading.exponent == 0.0 && leading.logs == 1 {
        let rest = argument.terms().iter().skip(1).copied().collect();
        let factor = SeriesTerm::new(1.0, leading.coefficient, 0);
        return smooth(&Expansion::new(rest, argument.order())?, operation, taylor::exp)?.scaled(&factor);
    }
    if leading.is_negative() {
        return Expansion::remainder(ORDER_OF_FLAT);
    }
    Err(Unknown::Diverging {
        operation,
        argument: *leading,
    })
}

/// The limit 1 or -1 of a function that reaches it faster than any power, for an argument that diverges.
pub(super) fn saturated(leading: &SeriesTerm) -> Outcome {
    let limit = if leading.is_negative() { -1.0 } else { 1.0 };
    Expansion::constant(limit)?.with_order_at_most(ORDER_OF_FLAT)
}
