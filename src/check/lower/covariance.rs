//! Covariance functions as arguments of a process: what they must be, and what a few lags already show.

use super::{Lowering, Scope};
use crate::check::value::{Covariance, Number, Scalar, Value};
use crate::covariance::kernel::{Beyond, Kernel, Unavailable};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Expression, Word};
use crate::source::Span;
use crate::units::{Dimension, show_number};

/// A correlation function must be 1 at lag 0 to within this: weights such as `0.3` and `0.7` add up no better.
const ONE: f64 = 1e-9;

/// The highest power of the lag with which a kernel can begin to fall.
const FLATTEST: f64 = 2.0;

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

    /// What a handful of lags can already show: a kernel is never larger than at lag 0, and bends down there. Kernels of
    /// the language pass by construction; this is for those written out or tabulated.
    pub(super) fn sample_for_validity(&mut self, kernel: &Kernel, place: Span) -> Option<()> {
        if kernel.is_valid_by_construction() {
            return Some(());
        }
        let at_zero = self.at_zero(kernel, place)?;
        for lag in probing_lags(kernel) {
            let value = match kernel.value(lag) {
                Ok(value) => value,
                Err(Unavailable::NoValue { .. }) => f64::NAN,
                Err(_) => continue,
            };
            if value.abs() <= at_zero * (1.0 + 1e-9) {
                continue;
            }
            let lag = show_number(lag, 4);
            let (message, here) = if value.is_finite() {
                let ratio = show_number(value / at_zero, 6);
                (
                    format!("no process has this kernel: at a lag of {lag} s it is larger than at lag 0"),
                    format!("{ratio} times its value at lag 0"),
                )
            } else {
                (
                    format!("this kernel has no value at a lag of {lag} s"),
                    "undefined or infinite there".to_string(),
                )
            };
            self.report(
                Diagnostic::new(Code::KernelInvalid, place, message)
                    .here(here)
                    .help("a correlation lies between -1 and 1 at every lag; check the signs and the brackets"),
            );
            return None;
        }
        self.start_for_validity(kernel, at_zero, place)
    }

    /// A kernel that jumps at lag 0 is that of white noise beside something else. One that is flatter there than tau²
    /// has a derivative of variance 0, so that only a constant can have it (H. Cramér and M. R. Leadbetter 1967,
    /// Stationary and Related Stochastic Processes, sec. 7.4).
    fn start_for_validity(&mut self, kernel: &Kernel, at_zero: f64, place: Span) -> Option<()> {
        let start = kernel.expansion(FLATTEST + 1.0);
        if start.reason().is_some() {
            return Some(());
        }
        let varies = |value: f64| (value - at_zero).abs() > ONE * at_zero;
        let limit = start.coefficient(0.0).filter(|limit| varies(*limit));
        let bend = start.terms().iter().find(|term| term.exponent > 0.0);
        let flat = bend.map_or(start.order() > FLATTEST, |term| term.exponent > FLATTEST);
        let (message, here, help) = if let Some(limit) = limit {
            let share = show_number(limit / at_zero, 6);
            (
                "this kernel jumps at lag 0, which is white noise: no process of finite power can follow it",
                format!("falls to {share} of its value right behind lag 0"),
                "leave the jump out, or give that share a kernel with a short length",
            )
        } else if flat
            && probing_lags(kernel)
                .filter_map(|lag| kernel.value(lag).ok())
                .any(varies)
        {
            (
                "no process has this kernel: it is flatter than tau² at lag 0, so the process could never move",
                "falls later, but does not begin to".to_string(),
                "use a kernel that begins to fall like tau² or faster, such as `squared_exponential(...)`",
            )
        } else {
            return Some(());
        };
        self.report(
            Diagnostic::new(Code::KernelInvalid, place, message)
                .here(here)
                .help(help),
        );
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

/// Lags that show the shape of a kernel, from well below its shortest to well beyond its longest time.
fn probing_lags(kernel: &Kernel) -> impl Iterator<Item = f64> {
    const STEPS: i32 = 256;
    let (shortest, longest) = kernel.times().unwrap_or((1.0, 1.0));
    let (from, to) = (0.125 * shortest, 16.0 * longest);
    let ratio = (to / from).powf(1.0 / f64::from(STEPS));
    (0..=STEPS)
        .map(move |step| from * ratio.powi(step))
        .filter(|lag| lag.is_finite())
}
