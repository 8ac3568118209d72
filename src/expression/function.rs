//! The functions of the language.

use std::ops::RangeInclusive;

use super::Number;

/// A function of the language. Angles are in radians.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Function {
    /// Square root.
    Sqrt,
    /// e to the power of the argument.
    Exp,
    /// Natural logarithm.
    Ln,
    /// Logarithm to base 10.
    Log10,
    /// Sine.
    Sin,
    /// Cosine.
    Cos,
    /// Tangent.
    Tan,
    /// Inverse sine, in [-pi/2, pi/2].
    Asin,
    /// Inverse cosine, in [0, pi].
    Acos,
    /// Inverse tangent, in (-pi/2, pi/2).
    Atan,
    /// Hyperbolic sine.
    Sinh,
    /// Hyperbolic cosine.
    Cosh,
    /// Hyperbolic tangent.
    Tanh,
    /// Error function, 2/sqrt(pi) times the integral of exp(-x²) from 0.
    Erf,
    /// Absolute value.
    Abs,
    /// The smallest of the arguments.
    Min,
    /// The largest of the arguments.
    Max,
    /// 0 below 0, else 1.
    Step,
}

impl Function {
    /// All functions, in the order of the language page.
    pub const ALL: [Self; 18] = [
        Self::Sqrt,
        Self::Exp,
        Self::Ln,
        Self::Log10,
        Self::Sin,
        Self::Cos,
        Self::Tan,
        Self::Asin,
        Self::Acos,
        Self::Atan,
        Self::Sinh,
        Self::Cosh,
        Self::Tanh,
        Self::Erf,
        Self::Abs,
        Self::Min,
        Self::Max,
        Self::Step,
    ];

    /// The function of that name, if there is one.
    pub fn find(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|function| function.name() == name)
    }

    /// Its name in the language.
    pub fn name(self) -> &'static str {
        match self {
            Self::Sqrt => "sqrt",
            Self::Exp => "exp",
            Self::Ln => "ln",
            Self::Log10 => "log10",
            Self::Sin => "sin",
            Self::Cos => "cos",
            Self::Tan => "tan",
            Self::Asin => "asin",
            Self::Acos => "acos",
            Self::Atan => "atan",
            Self::Sinh => "sinh",
            Self::Cosh => "cosh",
            Self::Tanh => "tanh",
            Self::Erf => "erf",
            Self::Abs => "abs",
            Self::Min => "min",
            Self::Max => "max",
            Self::Step => "step",
        }
    }

    /// How many arguments it takes: two or more for `min` and `max`, one for all others.
    pub fn arity(self) -> RangeInclusive<usize> {
        match self {
            Self::Min | Self::Max => 2..=usize::MAX,
            _ => 1..=1,
        }
    }

    /// Its value; undefined where the number of arguments is not one of its [arity](Self::arity).
    pub fn evaluate<'a, N: Number + 'a>(self, arguments: impl IntoIterator<Item = &'a N>) -> N {
        let mut arguments = arguments.into_iter();
        let Some(first) = arguments.next() else {
            return N::undefined();
        };
        match self {
            Self::Sqrt => first.sqrt(),
            Self::Exp => first.exp(),
            Self::Ln => first.ln(),
            Self::Log10 => first.log10(),
            Self::Sin => first.sin(),
            Self::Cos => first.cos(),
            Self::Tan => first.tan(),
            Self::Asin => first.asin(),
            Self::Acos => first.acos(),
            Self::Atan => first.atan(),
            Self::Sinh => first.sinh(),
            Self::Cosh => first.cosh(),
            Self::Tanh => first.tanh(),
            Self::Erf => first.erf(),
            Self::Abs => first.abs(),
            Self::Min => arguments.fold(first.clone(), |least, next| Number::min(&least, next)),
            Self::Max => arguments.fold(first.clone(), |most, next| Number::max(&most, next)),
            Self::Step => first.step(),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_function_is_found_by_its_name() {
        for function in Function::ALL {
            assert_eq!(Function::find(function.name()), Some(function));
        }
        assert_eq!(Function::find("log"), None);
    }

    #[test]
    fn least_and_greatest_take_two_or_more() {
        assert!(!Function::Min.arity().contains(&1));
        assert!(Function::Max.arity().contains(&3));
        assert!(!Function::Exp.arity().contains(&2));
        assert_eq!(Function::Min.evaluate(&[3.0, -1.0, 2.0]), -1.0);
        assert_eq!(Function::Max.evaluate(&[3.0, -1.0, 2.0]), 3.0);
        assert!(Function::Sin.evaluate::<f64>([]).is_nan());
    }
}
