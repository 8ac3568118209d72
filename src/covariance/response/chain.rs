//! Systems one behind the other.

use super::System;
use nalgebra::Complex;
use std::cmp::Ordering;
use std::sync::Arc;

/// The systems a process passes through, sorted, since their order does not matter. Without a system it takes no memory
/// of its own.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Chain(Option<Arc<[System]>>);

impl Chain {
    /// No system: what goes in comes out.
    pub const NONE: Self = Self(None);

    /// With one more system.
    #[must_use]
    pub fn with(&self, system: &System) -> Self {
        let place = self
            .systems()
            .partition_point(|one| one.order(system) == Ordering::Less);
        let (before, after) = self.systems().split_at(place);
        Self(Some([before, std::slice::from_ref(system), after].concat().into()))
    }

    /// The systems, in their order.
    pub fn systems(&self) -> &[System] {
        self.0.as_deref().unwrap_or_default()
    }

    /// Whether there is no system.
    pub fn is_empty(&self) -> bool {
        self.0.is_none()
    }

    /// The product of the transfer functions at a finite omega >= 0.
    pub fn transfer(&self, omega: f64) -> Complex<f64> {
        let systems = self.systems().iter();
        systems.fold(Complex::new(1.0, 0.0), |product, system| {
            product * system.transfer(omega)
        })
    }

    pub(in crate::covariance) fn order(&self, other: &Self) -> Ordering {
        let (one, other) = match (&self.0, &other.0) {
            (None, None) => return Ordering::Equal,
            (None, Some(_)) => return Ordering::Less,
            (Some(_), None) => return Ordering::Greater,
            (Some(one), Some(other)) => (one, other),
        };
        let pairs = one.iter().zip(other.iter()).map(|(a, b)| a.order(b));
        let first = pairs.into_iter().find(|order| *order != Ordering::Equal);
        first.unwrap_or_else(|| one.len().cmp(&other.len()))
    }
}
