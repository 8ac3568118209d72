//! Whether the kernel of a process is one: what is said where it is not, and what results rest on where it was only tested.

use super::Lowering;
use crate::check::names::ItemId;
use crate::covariance::kernel::Kernel;
use crate::covariance::validity::{Bounds, Budget, Kind, NegativePower, Trap, Validity, Violation, Witness, examine};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::Word;
use crate::source::Span;
use crate::units::show_number;
use std::collections::HashMap;
use std::f64::consts::{PI, SQRT_2};

/// Digits in which what was found is shown.
const DIGITS: usize = 3;

/// What was found out about kernels: a kernel with the same arguments is tested once, and all tests have one budget.
#[derive(Default)]
pub(super) struct Judgements {
    known: HashMap<String, Vec<(Kernel, Validity)>>,
    budget: Budget,
}

impl Judgements {
    fn of(&mut self, kernel: &Kernel) -> Option<Validity> {
        let kernel = without_factor(kernel);
        let alike = self.known.entry(kernel.to_string()).or_default();
        if let Some((_, known)) = alike.iter().find(|(one, _)| one == kernel) {
            return Some(known.clone());
        }
        let found = examine(kernel, &mut self.budget).ok()?;
        alike.push((kernel.clone(), found.clone()));
        Some(found)
    }
}

/// The kernel without a positive factor, which changes nothing about whether it is one.
fn without_factor(kernel: &Kernel) -> &Kernel {
    match kernel {
        Kernel::Scaled(weight, inner) if *weight > 0.0 => without_factor(inner),
        other => other,
    }
}

impl Lowering<'_, '_, '_> {
    /// Refuses a kernel that no process can have. For one that may be had returns what a reader of results should know.
    pub(super) fn valid_kernel(
        &mut self,
        item: ItemId,
        kernel: &Kernel,
        place: Span,
        name: &Word,
    ) -> Option<Vec<String>> {
        self.at_zero(kernel, place)?;
        let process = self.names.full_name(item);
        match self.judgements.of(kernel)? {
            Validity::ByConstruction => Some(Vec::new()),
            Validity::Tested(bounds) => Some(vec![tested(&process, kernel, bounds)]),
            Validity::Undecided(bounds, power) => {
                let note = tested(&process, kernel, bounds);
                let seen = where_negative(power);
                Some(vec![format!("{note} A {seen} is too little to be told from rounding.")])
            }
            Validity::Untested => Some(vec![format!(
                "Whether the kernel of {process} is that of a process was not tested: what a model's tests may cost was \
                 spent."
            )]),
            Validity::Invalid(violation) => {
                self.report(finding(&violation, place, name));
                None
            }
        }
    }
}

/// The finding about a kernel that is none.
fn finding(violation: &Violation, place: Span, name: &Word) -> Diagnostic {
    let (code, reason, here) = fault(violation);
    let message = match violation.trap.map(trap_in_words) {
        Some(trap) => format!("this kernel is {trap}: {reason}"),
        None if matches!(violation.kind, Kind::NoValue { .. } | Kind::JumpAtZero { .. }) => reason,
        None => format!("no process has this kernel: {reason}"),
    };
    let mut finding = Diagnostic::new(code, place, message).here(here).help(mend(violation));
    if let Some(witness) = &violation.witness {
        finding = finding.label(name.span, witness_in_words(witness, violation.resolution));
    }
    finding
}

/// The code, what is wrong with the kernel, and what is seen there.
fn fault(violation: &Violation) -> (Code, String, String) {
    let seen = violation.power.map(|power| format!("a {}", where_negative(power)));
    match violation.kind {
        Kind::NoValue { lag } => (
            Code::KernelInvalid,
            format!("this kernel has no value at a lag of {} s", show_number(lag, 4)),
            "undefined or infinite there".to_string(),
        ),
        Kind::TooLarge { lag, ratio } => (
            Code::KernelBound,
            format!("at a lag of {} s it is larger than at lag 0", show_number(lag, 4)),
            format!("{} times its value at lag 0", show_number(ratio, 6)),
        ),
        Kind::JumpAtZero { share } => (
            Code::KernelJump,
            "this kernel jumps at lag 0, which is white noise: no process of finite power can follow it".to_string(),
            format!("falls to {} of its value right behind lag 0", show_number(share, 6)),
        ),
        Kind::JumpAtEnd { lag, from, to } => (
            Code::KernelJump,
            format!(
                "it jumps from {} to {} where its table ends, at {} s",
                show_number(from, 6),
                show_number(to, 6),
                show_number(lag, 6)
            ),
            "jumps where the table ends".to_string(),
        ),
        Kind::Flat => (
            Code::KernelNegativeSpectrum,
            "it is flatter than tau² at lag 0, so the process could never move".to_string(),
            seen.unwrap_or_else(|| "falls later, but does not begin to".to_string()),
        ),
        Kind::NegativePower => (
            Code::KernelNegativeSpectrum,
            match violation.power {
                Some(power) => format!("its spectral density is negative at {}", frequency(power.frequency)),
                None => "its spectral density is negative".to_string(),
            },
            seen.unwrap_or_default(),
        ),
    }
}

/// `spectral density of -0.3 of the variance per rad/s at 0.8 rad/s (0.127 Hz)`
fn where_negative(power: NegativePower) -> String {
    format!(
        "spectral density of {} of the variance per rad/s at {}",
        show_number(power.density, DIGITS),
        frequency(power.frequency)
    )
}

fn frequency(omega: f64) -> String {
    format!(
        "{} rad/s ({} Hz)",
        show_number(omega, DIGITS),
        show_number(omega / (2.0 * PI), DIGITS)
    )
}

/// The proof in words that a reader can follow with a pocket calculator.
fn witness_in_words(witness: &Witness, resolution: Option<f64>) -> String {
    let instants = witness.instants();
    let times: Vec<String> = instants
        .iter()
        .map(|time| format!("{} s", show_number(*time, 12)))
        .collect();
    let weights: Vec<String> = witness.weights().iter().map(i64::to_string).collect();
    let against = match resolution {
        Some(resolution) if resolution > 0.0 => format!(
            ", with rounding by {} counted in its favour",
            show_number(resolution, DIGITS)
        ),
        _ => String::new(),
    };
    format!(
        "at the instants {} the weights {} give the weighted sum a variance of {} times that of the process{against}",
        times.join(", "),
        weights.join(", "),
        show_number(witness.share(), DIGITS)
    )
}

/// What a well-known function is that is no kernel.
fn trap_in_words(trap: Trap) -> String {
    let name = match trap {
        Trap::Box { .. } => "a box".to_string(),
        Trap::Clipped { power, .. } if (power - 2.0).abs() < 1e-6 => "a parabola cut off at its zero".to_string(),
        Trap::Clipped { power, .. } => format!("1 - (tau / length)^{} cut off at its zero", show_number(power, DIGITS)),
        Trap::HalfWave { .. } => "a cosine cut off at its zero".to_string(),
        Trap::Line { .. } => "a straight line that goes on past its zero".to_string(),
        Trap::Stretched { power, .. } => format!(
            "exp(-(tau / length)^{}), with a power above 2",
            show_number(power, DIGITS)
        ),
        Trap::SlowDecay { .. } => "a wave that fades too slowly for its share of sine".to_string(),
        Trap::Difference => return "a difference of terms, and no process has this one".to_string(),
    };
    format!("{name}, and no process has one")
}

/// What to write in its place.
fn mend(violation: &Violation) -> String {
    let time = |time: f64| format!("{} s", show_number(time, 4));
    let Some(trap) = violation.trap else {
        return match violation.kind {
            Kind::NoValue { .. } => "write it so that it has a value at every lag".to_string(),
            Kind::TooLarge { .. } if violation.resolution.is_none() => {
                "check the signs and the brackets: a correlation lies between -1 and 1 at every lag".to_string()
            }
            Kind::JumpAtZero { .. } => {
                "leave the jump out, or give that share a kernel with a short length".to_string()
            }
            Kind::JumpAtEnd { .. } => "continue the table down to 0, or write `beyond: refuse` if nothing is known \
                                       there, `beyond: hold` if it stays as it is"
                .to_string(),
            Kind::Flat => {
                "use a kernel that begins to fall like tau² or faster, such as `squared_exponential(...)`".to_string()
            }
            _ if violation.resolution.is_some() => {
                "fit a kernel to the table, or estimate it again: products of the record divided by their own number \
                 at each lag (called unbiased) are mostly no correlation, divided by the number of samples they are"
                    .to_string()
            }
            _ => {
                "use a kernel of the language with that shape, such as `oscillator(...)` for one that swings below zero"
                    .to_string()
            }
        };
    };
    match trap {
        Trap::Box { length } => format!(
            "use `triangular(length: {})`, which is what an average over a moving window of that length has",
            time(length)
        ),
        Trap::Clipped { length, power } if (power - 2.0).abs() < 1e-6 => format!(
            "use `squared_exponential(length: {})`, which begins in the same way, or `triangular(length: {})`, which ends \
             there",
            time(length / SQRT_2),
            time(length)
        ),
        Trap::Clipped { length, .. } | Trap::Line { length } => {
            format!(
                "use `triangular(length: {})`, which stays 0 past its zero",
                time(length)
            )
        }
        Trap::HalfWave { length } => format!(
            "use `triangular(length: {})`, or let the wave go on and fade: `damped_cosine(length: ..., frequency: {} Hz)`",
            time(length),
            show_number(0.25 / length, 4)
        ),
        Trap::Stretched { length, .. } => format!(
            "use a power of 2 or less; with 2 it is `squared_exponential(length: {})`",
            time(length / SQRT_2)
        ),
        Trap::SlowDecay { decay, frequency, sine } => format!(
            "let it fade by {} /s or more, as {} times the frequency asks for (it fades by {} /s), or use `oscillator(...)`",
            show_number(sine.abs() * frequency, 4),
            show_number(sine.abs(), 4),
            show_number(decay, 4)
        ),
        Trap::Difference => "use sums and products of kernels, which are kernels; for one that swings below zero \
                             `oscillator(...)` or `damped_cosine(...)`"
            .to_string(),
    }
}

/// What results rest on where a kernel was tested and not proven.
fn tested(process: &str, kernel: &Kernel, bounds: Bounds) -> String {
    let start =
        format!("That the kernel of {process} is that of a process was tested, not proven: it shows no negative power");
    let highest = show_number(bounds.highest() / (2.0 * PI), DIGITS);
    match kernel.rows() {
        Some((_, resolution)) if resolution > 0.0 => format!(
            "{start} up to {highest} Hz, its table taken at its rows and to {}, half of its last digit.",
            show_number(resolution, DIGITS)
        ),
        Some(_) => format!("{start} up to {highest} Hz, its table taken at its rows."),
        None => format!(
            "{start} up to {highest} Hz, in bands of {} % of their frequency and no narrower than {} Hz.",
            show_number(100.0 * bounds.share, 2),
            show_number(bounds.resolution() / (2.0 * PI), DIGITS),
        ),
    }
}
