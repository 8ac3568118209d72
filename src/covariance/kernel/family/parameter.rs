//! What a parameter of a correlation function may be.

use std::fmt;

use crate::numerics::matern::GREATEST_SMOOTHNESS;

/// Lengths and frequencies lie between the reciprocal of this and this, in SI units: beyond it the higher powers in
/// moments and expansions leave the range of a double.
const EXTREME: f64 = 1e30;

/// A parameter of a correlation function that no such function can have.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct InvalidParameter {
    /// The family, as the language spells it.
    pub family: &'static str,
    /// The parameter, as the language spells it.
    pub parameter: &'static str,
    /// What it was, in SI units.
    pub value: f64,
    /// What it has to be, to follow "must be".
    pub demand: &'static str,
}

impl fmt::Display for InvalidParameter {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(
            out,
            "{} of {} must be {}, not {}",
            self.parameter, self.family, self.demand, self.value
        )
    }
}

impl std::error::Error for InvalidParameter {}

/// Accepts `value` if `allowed`; what it says otherwise names the parameter.
pub(in crate::covariance) fn demand(
    allowed: bool,
    family: &'static str,
    parameter: &'static str,
    value: f64,
    demand: &'static str,
) -> Result<f64, InvalidParameter> {
    if allowed {
        Ok(value)
    } else {
        Err(InvalidParameter {
            family,
            parameter,
            value,
            demand,
        })
    }
}

/// Accepts a length or a frequency: positive, and within the range whose higher powers are numbers.
pub(in crate::covariance) fn positive(
    family: &'static str,
    parameter: &'static str,
    value: f64,
) -> Result<f64, InvalidParameter> {
    let allowed = (1.0 / EXTREME..=EXTREME).contains(&value);
    demand(
        allowed,
        family,
        parameter,
        value,
        "positive, between 1e-30 and 1e30 in SI units",
    )
}

/// Accepts a shape: within the range for which the Matérn function is served.
pub(super) fn shape(family: &'static str, parameter: &'static str, value: f64) -> Result<f64, InvalidParameter> {
    demand(
        (1e-3..=GREATEST_SMOOTHNESS).contains(&value),
        family,
        parameter,
        value,
        "between 0.001 and 200",
    )
}

/// The phase of a wave, in rad. Its cosine is a number however far the lag.
pub(super) fn phase(frequency: f64, lag: f64) -> f64 {
    (frequency * lag).min(f64::MAX)
}
