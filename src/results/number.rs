//! Numbers that may be infinite.

use serde::{Serialize, Serializer};

/// A number, or infinity: JSON has no infinity, so it is written as a word.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Real(f64);

impl Real {
    /// The number; `None` of what is no number.
    pub fn new(value: f64) -> Option<Self> {
        (!value.is_nan()).then_some(Self(value))
    }

    /// As a double, infinities included.
    pub fn value(self) -> f64 {
        self.0
    }
}

impl Serialize for Real {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        if self.0 == f64::INFINITY {
            serializer.serialize_str("infinite")
        } else if self.0 == f64::NEG_INFINITY {
            serializer.serialize_str("-infinite")
        } else {
            serializer.serialize_f64(self.0)
        }
    }
}
