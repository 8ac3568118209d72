//! Sources: what is random in a model.

use super::kernel::{Kernel, Smoothness};
use crate::source::Span;

/// One independent, zero-mean, stationary Gaussian process.
#[derive(Clone, Debug)]
pub struct Source {
    /// The full name of the process that made it.
    pub name: String,
    /// Its covariance function, in the square of the process's SI unit.
    pub kernel: Kernel,
    /// Where its name stands.
    pub place: Span,
    smoothness: Smoothness,
}

impl Source {
    /// A source with its kernel.
    pub fn new(name: String, kernel: Kernel, place: Span) -> Self {
        let smoothness = kernel.smoothness();
        Self {
            name,
            kernel,
            place,
            smoothness,
        }
    }

    /// Whether it has a mean-square derivative of an order.
    pub fn has_derivative(&self, order: u32) -> bool {
        match self.smoothness {
            Smoothness::Unlimited => true,
            Smoothness::Exactly { derivatives, .. } | Smoothness::AtLeast { derivatives } => order <= derivatives,
            Smoothness::Unclear { .. } => order == 0,
        }
    }

    /// How smooth it is.
    pub fn smoothness(&self) -> &Smoothness {
        &self.smoothness
    }
}
