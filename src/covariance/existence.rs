//! Which moments of a form exist: read off the powers with which densities and responses fall, never watched for in a sum.

use super::form::Term;
use super::frequency;
use super::source::Source;
use super::spectral::Tail;

/// How the density of terms over one source falls at high frequency: that of the source, steeper by twice the roll-off of the
/// systems, flatter by 2 for each derivative. The slowest term decides, unless the leading powers of several cancel, as
/// they do in the absolute acceleration of an oscillator on a moving ground.
pub fn tail(source: &Source, terms: &[Term]) -> Tail {
    source.tail().steeper(2.0 * frequency::fall(terms))
}

/// Whether the derivative of an order of the terms over one source has a variance: lambda_2n must be finite.
pub fn has_derivative(source: &Source, terms: &[Term], order: u32) -> bool {
    tail(source, terms).allows(2 * order)
}
