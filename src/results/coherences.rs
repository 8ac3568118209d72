//! What results take for granted of how processes go together.

use super::Assumption;
use crate::covariance::coherence::{Coherence, Coherences};
use crate::covariance::form::LinearForm;
use crate::covariance::source::Source;
use crate::units::show_number;

/// Digits of coherences in text.
const DIGITS: usize = 5;

/// So many pairs of processes are named.
const MOST_NAMED: usize = 12;

/// One for each pair of a margin's processes that are coherent.
pub(super) fn assumptions(margin: &LinearForm, sources: &[Source], coherences: &Coherences) -> Vec<Assumption> {
    let in_margin = |source| margin.by_source().any(|(one, _)| one == source);
    let pairs: Vec<_> = coherences
        .pairs()
        .filter(|(one, other, _)| in_margin(*one) && in_margin(*other))
        .collect();
    let name = |index: u32| sources.get(index as usize).map_or("", |source| &source.name);
    let mut found: Vec<Assumption> = pairs
        .iter()
        .take(MOST_NAMED)
        .map(|(one, other, coherence)| Assumption {
            code: "coherence",
            text: format!(
                "{} and {} are in phase, {}.",
                name(one.0),
                name(other.0),
                in_words(*coherence)
            ),
        })
        .collect();
    if let Some(more) = pairs.len().checked_sub(MOST_NAMED).filter(|more| *more > 0) {
        found.push(Assumption {
            code: "coherence",
            text: format!("{more} more pairs of its processes are coherent."),
        });
    }
    found
}

fn in_words(coherence: Coherence) -> String {
    match coherence {
        Coherence::Constant(value) => format!("with the coherence {} at every frequency", show_number(value, DIGITS)),
        Coherence::Decaying(rate) => {
            let per_hertz = show_number(rate * std::f64::consts::TAU, DIGITS);
            format!("with a coherence that falls with the frequency f as exp(-f * {per_hertz} s)")
        }
    }
}
