//! What results take for granted of measured frequency responses.

use super::Assumption;
use crate::covariance::form::LinearForm;
use crate::covariance::kernel::Beyond;
use crate::covariance::response::{FrequencyResponse, System};
use crate::units::show_number;

/// Digits of frequencies in text.
const DIGITS: usize = 5;

/// One for each table that a margin passes through.
pub(super) fn assumptions(margin: &LinearForm) -> Vec<Assumption> {
    let systems = margin.terms().iter().flat_map(|term| term.operator.systems.systems());
    let mut tables: Vec<&FrequencyResponse> = Vec::new();
    for system in systems {
        if let System::Tabulated(table) = system
            && !tables.contains(&&**table)
        {
            tables.push(table);
        }
    }
    let assumption = |table: &FrequencyResponse| Assumption {
        code: "frequency-response",
        text: in_words(table),
    };
    tables.into_iter().map(assumption).collect()
}

fn in_words(table: &FrequencyResponse) -> String {
    let name = table.name();
    let (first, last) = table.range();
    let (first, last) = (show_number(first, DIGITS), show_number(last, DIGITS));
    let outside = match table.beyond() {
        Beyond::Zero => "is taken as 0",
        Beyond::Hold => "is taken to stay as it is at the ends",
        Beyond::Refuse => "is not used",
    };
    format!(
        "The frequency response {name} follows straight lines in modulus and in phase between its rows, the phase unwrapped; \
         outside {first} to {last} rad/s it {outside}."
    )
}
