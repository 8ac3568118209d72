//! The operations of numbers on series.

use super::compose::{constant_and_rest, exp, general_power, ln, power, saturated, smooth};
use super::{Expansion, Series, SeriesTerm, Unknown, taylor};
use crate::expression::Number;

type Outcome = Result<Expansion, Unknown>;

impl Series {
    fn map(&self, operation: impl FnOnce(&Expansion) -> Outcome) -> Self {
        Self(self.0.as_ref().map_err(Clone::clone).and_then(operation))
    }

    fn with(&self, other: &Self, operation: impl FnOnce(&Expansion, &Expansion) -> Outcome) -> Self {
        self.map(|one| {
            other
                .0
                .as_ref()
                .map_err(Clone::clone)
                .and_then(|two| operation(one, two))
        })
    }
}

impl Number for Series {
    fn number(value: f64) -> Self {
        Self::constant(value)
    }

    fn undefined() -> Self {
        Self::unknown(Unknown::Undefined)
    }

    fn add(&self, other: &Self) -> Self {
        self.with(other, Expansion::add)
    }

    fn sub(&self, other: &Self) -> Self {
        self.with(other, Expansion::sub)
    }

    fn mul(&self, other: &Self) -> Self {
        self.with(other, Expansion::mul)
    }

    fn div(&self, other: &Self) -> Self {
        self.with(other, divide)
    }

    fn neg(&self) -> Self {
        self.map(|argument| Ok(argument.negated()))
    }

    fn power(&self, exponent: &Self) -> Self {
        self.with(exponent, general_power)
    }

    fn sqrt(&self) -> Self {
        self.map(|argument| power(argument, 0.5, "sqrt"))
    }

    fn exp(&self) -> Self {
        self.map(exp)
    }

    fn ln(&self) -> Self {
        self.map(|argument| ln(argument, "ln"))
    }

    fn log10(&self) -> Self {
        let factor = SeriesTerm::new(std::f64::consts::LOG10_E, 0.0, 0);
        self.map(|argument| ln(argument, "log10")?.scaled(&factor))
    }

    fn sin(&self) -> Self {
        self.map(|argument| smooth(argument, "sin", taylor::sin))
    }

    fn cos(&self) -> Self {
        self.map(|argument| smooth(argument, "cos", taylor::cos))
    }

    /// sin/cos, which is right at the poles too.
    fn tan(&self) -> Self {
        self.map(|argument| {
            divide(
                &smooth(argument, "tan", taylor::sin)?,
                &smooth(argument, "tan", taylor::cos)?,
            )
        })
    }

    fn asin(&self) -> Self {
        self.map(|argument| match place(argument, "asin")? {
            Place::Inside => smooth(argument, "asin", taylor::asin),
            _ => Expansion::constant(std::f64::consts::FRAC_PI_2)?.sub(&acos(argument, "asin")?),
        })
    }

    fn acos(&self) -> Self {
        self.map(|argument| acos(argument, "acos"))
    }

    fn atan(&self) -> Self {
        self.map(|argument| match argument.leading().filter(|term| term.diverges()) {
            // atan x = ±pi/2 - atan(1/x)
            Some(leading) => {
                let limit = if leading.is_negative() { -1.0 } else { 1.0 } * std::f64::consts::FRAC_PI_2;
                let inverse = power(argument, -1.0, "atan")?;
                Expansion::constant(limit)?.sub(&smooth(&inverse, "atan", taylor::atan)?)
            }
            None => smooth(argument, "atan", taylor::atan),
        })
    }

    fn sinh(&self) -> Self {
        self.map(|argument| match argument.leading().filter(|term| term.diverges()) {
            Some(_) => half_of(&exp(argument)?.sub(&exp(&argument.negated())?)?),
            None => smooth(argument, "sinh", taylor::sinh),
        })
    }

    fn cosh(&self) -> Self {
        self.map(|argument| match argument.leading().filter(|term| term.diverges()) {
            Some(_) => half_of(&exp(argument)?.add(&exp(&argument.negated())?)?),
            None => smooth(argument, "cosh", taylor::cosh),
        })
    }

    fn tanh(&self) -> Self {
        self.map(|argument| match argument.leading().filter(|term| term.diverges()) {
            // Of a ln h, powers of h remain: tanh x = (exp 2x - 1)/(exp 2x + 1).
            Some(leading) if leading.exponent == 0.0 && leading.logs == 1 => {
                let one = Expansion::constant(1.0)?;
                let square = exp(&argument.add(argument)?)?;
                divide(&square.sub(&one)?, &square.add(&one)?)
            }
            Some(leading) => saturated(leading),
            None => smooth(argument, "tanh", taylor::tanh),
        })
    }

    fn erf(&self) -> Self {
        self.map(|argument| match argument.leading().filter(|term| term.diverges()) {
            Some(leading) => saturated(leading),
            None => smooth(argument, "erf", taylor::erf),
        })
    }

    fn abs(&self) -> Self {
        self.map(|argument| {
            let negative = argument.leading().is_some_and(SeriesTerm::is_negative);
            Ok(if negative { argument.negated() } else { argument.clone() })
        })
    }

    fn min(&self, other: &Self) -> Self {
        self.with(other, |one, two| smaller(one, two, &one.sub(two)?))
    }

    fn max(&self, other: &Self) -> Self {
        self.with(other, |one, two| smaller(one, two, &two.sub(one)?))
    }

    fn step(&self) -> Self {
        self.map(|argument| match argument.leading() {
            Some(leading) => Expansion::constant(if leading.is_negative() { 0.0 } else { 1.0 }),
            None if argument.is_zero() => Expansion::constant(1.0),
            None => Err(Unknown::Undecided { operation: "step" }),
        })
    }
}

fn divide(one: &Expansion, two: &Expansion) -> Outcome {
    one.mul(&power(two, -1.0, "the inverse")?)
}

fn half_of(argument: &Expansion) -> Outcome {
    argument.scaled(&SeriesTerm::new(0.5, 0.0, 0))
}

/// `one` where the difference is negative, `two` where it is positive; where it vanishes as far as it is known, both
/// are one and the same as far as that.
fn smaller(one: &Expansion, two: &Expansion, difference: &Expansion) -> Outcome {
    match difference.leading() {
        Some(leading) if leading.is_negative() => Ok(one.clone()),
        Some(_) => Ok(two.clone()),
        None => one.with_order_at_most(difference.order()),
    }
}

/// Where the constant term of an argument of asin or acos lies.
enum Place {
    Inside,
    AtOne,
    AtMinusOne,
}

fn place(argument: &Expansion, operation: &'static str) -> Result<Place, Unknown> {
    let (constant, _) = constant_and_rest(argument, operation)?;
    let [below, above] = [-1.0, 1.0].map(|limit| SeriesTerm::new(limit, 0.0, 0).plus(&constant));
    if above.is_cancelled() {
        Ok(Place::AtMinusOne)
    } else if below.is_cancelled() {
        Ok(Place::AtOne)
    } else if constant.coefficient.abs() < 1.0 {
        Ok(Place::Inside)
    } else {
        Err(Unknown::Outside {
            operation,
            argument: "a number beyond 1 in size",
        })
    }
}

/// Near 1, acos x = 2 asin(sqrt((1 - x)/2)); near -1, acos x = pi - acos(-x); the first is the half-angle formula.
fn acos(argument: &Expansion, operation: &'static str) -> Outcome {
    match place(argument, operation)? {
        Place::Inside => smooth(argument, operation, taylor::acos),
        Place::AtMinusOne => {
            Expansion::constant(std::f64::consts::PI)?.sub(&acos_at_one(&argument.negated(), operation)?)
        }
        Place::AtOne => acos_at_one(argument, operation),
    }
}

fn acos_at_one(argument: &Expansion, operation: &'static str) -> Outcome {
    let below_one = half_of(&Expansion::constant(1.0)?.sub(argument)?)?;
    if below_one.leading().is_some_and(SeriesTerm::is_negative) {
        return Err(Unknown::Outside {
            operation,
            argument: "a number beyond 1 in size",
        });
    }
    let half = smooth(&power(&below_one, 0.5, operation)?, operation, taylor::asin)?;
    half.add(&half)
}
