//! Covariance functions as arguments of a process: what they must be.

use super::{Lowering, Scope};
use crate::check::value::{Covariance, Number, Scalar, Value};
use crate::covariance::kernel::{Beyond, Kernel, Unavailable};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Expression, Word};
use crate::source::Span;
use crate::units::{Dimension, show_number};

/// A correlation function must be 1 at lag 0 to within this: weights such as `0.3` and `0.7` add up no better.
const ONE: f64 = 1e-9;

/// A kernel of one process is made of at most so many others.
const MOST_PARTS: usize = 256;

impl Lowering<'_, '_, '_> {
    /// A kernel of a dimension.
    pub(super) fn kernel(
        &mut self,
        expression: &Expression,
        scope: Scope<'_>,
        wanted: Dimension,
        what: &str,
    ) -> Option<Kernel> {
        let covariance = self.covariance(expression, scope, what)?;
        if covariance.dimension != wanted {
            let found = Scalar::new(Number::Unset, covariance.dimension);
            self.mismatch(expression.span, &found, wanted, what, None);
            return None;
        }
        Some(covariance.kernel)
    }

    pub(super) fn covariance(&mut self, expression: &Expression, scope: Scope<'_>, what: &str) -> Option<Covariance> {
        match self.value(expression, scope.in_kernel()) {
            Value::Kernel(covariance) => {
                self.small_enough(&covariance.kernel, expression.span)?;
                Some(covariance)
            }
            Value::Fault => None,
            Value::Scalar(Scalar {
                value: Number::Unset, ..
            }) => None,
            other => {
                let help = format!("{what} is made of kernels, such as `exponential(length: 10 s)`");
                self.wrong_kind(expression.span, other.kind(), "a kernel", &help);
                None
            }
        }
    }

    /// Refuses kernels of so many parts that their integrals would take hours.
    fn small_enough(&mut self, kernel: &Kernel, place: Span) -> Option<()> {
        if parts(kernel) <= MOST_PARTS {
            return Some(());
        }
        let message = format!("this kernel is made of more than {MOST_PARTS} parts");
        self.report(Diagnostic::new(Code::ModelTooLarge, place, message).help("use fewer terms and factors"));
        None
    }

    /// The value at lag 0; its absence is reported.
    pub(super) fn at_zero(&mut self, kernel: &Kernel, place: Span) -> Option<f64> {
        match kernel.value(0.0) {
            Ok(value) => Some(value),
            Err(why) => {
                let message = "this kernel has no value at lag 0";
                self.report(Diagnostic::new(Code::KernelUnclear, place, message).here(why.to_string()));
                None
            }
        }
    }

    /// A constant among the terms of a correlation is a part of the process that never changes.
    pub(super) fn no_constant_term(&mut self, kernel: &Kernel, place: Span) -> Option<()> {
        if !has_constant_term(kernel) {
            return Some(());
        }
        let message = "a correlation function cannot hold a constant: that part of the process would never change";
        self.report(
            Diagnostic::new(Code::KernelInvalid, place, message)
                .here("has a constant term")
                .help("leave it out, or give the function as `autocovariance` if a part is drawn once for all time"),
        );
        None
    }

    pub(super) fn one_at_zero(&mut self, kernel: &Kernel, place: Span) -> Option<()> {
        let at_zero = self.at_zero(kernel, place)?;
        if (at_zero - 1.0).abs() <= ONE {
            return Some(());
        }
        let shown = show_number(at_zero, 6);
        self.report(
            Diagnostic::new(
                Code::KernelNotOne,
                place,
                format!("this correlation function is {shown} at lag 0, where it must be 1"),
            )
            .here(format!("{shown} at lag 0"))
            .help("scale it so that its weights add up to 1, or give it as `autocovariance` with its unit"),
        );
        None
    }

    pub(super) fn positive_variance(&mut self, kernel: &Kernel, place: Span, what: &str) -> Option<()> {
        let variance = self.at_zero(kernel, place)?;
        if variance > 0.0 && variance.is_normal() {
            return Some(());
        }
        let message = format!("the variance, which is the {what} at lag 0, must be greater than 0");
        let shown = show_number(variance, 6);
        self.report(Diagnostic::new(Code::ValueRange, place, message).here(format!("this is {shown} at lag 0")));
        None
    }
}

fn has_constant_term(kernel: &Kernel) -> bool {
    match kernel {
        Kernel::Constant => true,
        Kernel::Scaled(_, inner) => has_constant_term(inner),
        Kernel::Sum(terms) => terms.iter().any(has_constant_term),
        Kernel::Product(factors) => factors.iter().all(has_constant_term),
        Kernel::Family(_) | Kernel::Tabulated(_) | Kernel::User(_) => false,
    }
}

/// How many named, tabulated and written kernels a kernel is made of.
fn parts(kernel: &Kernel) -> usize {
    match kernel {
        Kernel::Scaled(_, inner) => parts(inner),
        Kernel::Sum(several) | Kernel::Product(several) => several.iter().map(parts).sum(),
        Kernel::Constant | Kernel::Family(_) | Kernel::Tabulated(_) | Kernel::User(_) => 1,
    }
}

/// The constant part of a kernel, the words that say where it was found, and what its reader should know.
pub(super) fn constant_of(kernel: &Kernel, name: &Word) -> Result<(f64, String, Vec<String>), Unavailable> {
    if let Some(constant) = kernel.constant_part()? {
        return Ok((constant, "its constant part is".to_string(), Vec::new()));
    }
    let (lag, value) = kernel.at_long_lag()?;
    let lag = show_number(lag, 3);
    let note = format!(
        "The autocorrelation of {} is written out, so its constant part was taken from its value at a lag of {lag} s.",
        name.text
    );
    Ok((
        value,
        format!("its value at the very long lag of {lag} s is"),
        vec![note],
    ))
}

/// What the tables in a kernel take for granted beyond their last row.
pub(super) fn table_notes(kernel: &Kernel, process: &str) -> Vec<String> {
    match kernel {
        Kernel::Tabulated(table) => {
            let end = show_number(table.last_lag(), 6);
            let what = match table.beyond() {
                Beyond::Zero => "is taken as 0",
                Beyond::Hold => "is taken to stay as it is",
                Beyond::Refuse => "is not used",
            };
            vec![format!(
                "The tabulated correlation of {process} {what} beyond its last lag, {end} s."
            )]
        }
        Kernel::Scaled(_, inner) => table_notes(inner, process),
        Kernel::Sum(parts) | Kernel::Product(parts) => {
            parts.iter().flat_map(|part| table_notes(part, process)).collect()
        }
        Kernel::Constant | Kernel::Family(_) | Kernel::User(_) => Vec::new(),
    }
}
