//! What an expression is once it has been looked at.

use crate::covariance::form::LinearForm;
use crate::covariance::kernel::Kernel;
use crate::covariance::spectrum::Spectrum;
use crate::expression::NodeId;
use crate::units::{Dimension, Unit};
use std::rc::Rc;

/// The value of an expression.
#[derive(Clone, Debug)]
pub enum Value {
    /// Nothing, because of a fault that has been reported: absorbs whatever follows from it.
    Fault,
    /// A deterministic quantity.
    Scalar(Scalar),
    /// Something that varies: a linear form over sources.
    Form(Varying),
    /// A kernel, as an argument of a process.
    Kernel(Covariance),
    /// A spectrum, as an argument of a process.
    Spectrum(Density),
}

/// A deterministic quantity.
#[derive(Clone, Debug)]
pub struct Scalar {
    /// Its value in coherent SI units.
    pub value: Number,
    /// Its dimension.
    pub dimension: Dimension,
    /// The unit people see it in.
    pub unit: Option<Rc<Unit>>,
    /// Whether it is a bare `0`, which fits every unit.
    pub bare_zero: bool,
}

/// The value of a deterministic quantity.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Number {
    /// A finite number.
    Known(f64),
    /// An expression in the lag or in the arguments of a kernel.
    Open(NodeId),
    /// A parameter that has not been set, or what is made from one: only its dimension is known.
    Unset,
}

impl Scalar {
    /// A number of a dimension, without a unit to show it in.
    pub fn new(value: Number, dimension: Dimension) -> Self {
        Self {
            value,
            dimension,
            unit: None,
            bare_zero: false,
        }
    }

    /// The same quantity, shown in a unit.
    #[must_use]
    pub fn shown_in(mut self, unit: Option<Rc<Unit>>) -> Self {
        self.unit = unit;
        self
    }
}

/// Something that varies.
#[derive(Clone, Debug)]
pub struct Varying {
    /// What it is made from.
    pub form: Rc<LinearForm>,
    /// Its dimension.
    pub dimension: Dimension,
    /// The unit people see it in.
    pub unit: Option<Rc<Unit>>,
}

/// A kernel with its dimension: plain for a correlation, unit² for a covariance.
#[derive(Clone, Debug)]
pub struct Covariance {
    /// The kernel in coherent SI units.
    pub kernel: Kernel,
    /// Its dimension.
    pub dimension: Dimension,
}

/// A spectrum with its dimension: unit² times time over angle for a density, time over angle for a shape.
#[derive(Clone, Debug)]
pub struct Density {
    /// The spectrum in coherent SI units, per rad/s.
    pub spectrum: Spectrum,
    /// Its dimension.
    pub dimension: Dimension,
    /// What is known of its area before it is computed.
    pub area: Area,
}

/// What a spectrum says about its own area.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Area {
    /// Nothing: it follows from the levels.
    Open,
    /// 1, by definition: a shape.
    Unit,
    /// The variance, from a significant height: hs²/16.
    Height,
}

impl Value {
    /// What it is, for a message.
    pub fn kind(&self) -> &'static str {
        match self {
            Self::Fault => "nothing",
            Self::Scalar(_) => "a number",
            Self::Form(_) => "a process",
            Self::Kernel(_) => "a kernel",
            Self::Spectrum(_) => "a spectrum",
        }
    }
}
