//! Sources: what is random in a model.

use super::kernel::{Kernel, Smoothness};
use super::spectral::SpectralDensity;
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
    /// What was taken for granted to get the kernel, for the reader of results.
    pub notes: Vec<String>,
    smoothness: Smoothness,
}

impl Source {
    /// A source with its kernel.
    pub fn new(name: String, kernel: Kernel, place: Span, notes: Vec<String>) -> Self {
        let smoothness = kernel.smoothness();
        Self {
            name,
            kernel,
            place,
            notes,
            smoothness,
        }
    }

    /// Its covariance function, where it is described by one.
    pub fn kernel(&self) -> Option<&Kernel> {
        Some(&self.kernel)
    }

    /// Its spectrum, for integrals over frequency.
    pub fn spectral(&self) -> &dyn SpectralDensity {
        &self.kernel
    }

    /// Whether it has a mean-square derivative of an order.
    pub fn has_derivative(&self, order: u32) -> bool {
        match self.smoothness {
            Smoothness::Unlimited => true,
            Smoothness::Exactly { derivatives, .. } | Smoothness::AtLeast { derivatives } => order <= derivatives,
            Smoothness::Unclear { .. } => order == 0,
        }
    }

    /// Why it has no more derivatives than it has.
    pub fn roughness_in_words(&self) -> String {
        match &self.smoothness {
            Smoothness::Unlimited => "smooth without limit".to_string(),
            Smoothness::Exactly { derivatives, limiting } => {
                let power = crate::units::show_number(limiting.exponent, 6);
                let logarithm = if limiting.log > 0 { " ln(tau)" } else { "" };
                let term = if power == "1" && logarithm.is_empty() {
                    "tau".to_string()
                } else {
                    format!("tau^{power}{logarithm}")
                };
                match derivatives {
                    0 if limiting.exponent <= 1.0 => {
                        format!("its correlation has a kink at lag 0 (it falls like {term}), so it has no derivative")
                    }
                    0 => format!(
                        "its correlation falls like {term} at lag 0, slower than tau^2, so it has no derivative"
                    ),
                    1 => format!("its correlation has a term {term} at lag 0, so it has one derivative and no more"),
                    several => {
                        format!(
                            "its correlation has a term {term} at lag 0, so it has {several} derivatives and no more"
                        )
                    }
                }
            }
            Smoothness::AtLeast { derivatives } => format!("{derivatives} derivatives are known to exist, no more"),
            Smoothness::Unclear { reason } => reason.clone(),
        }
    }

    /// How smooth it is.
    pub fn smoothness(&self) -> &Smoothness {
        &self.smoothness
    }
}
