//! A raw autocorrelation E[X(t) X(t+tau)] given as an autocovariance: it ends at the square of the mean, not at 0.

use super::{Finished, Gaussian};
use crate::diagnostics::{Code, Diagnostic};
use crate::units::{Unit, show};

/// How near the constant part is to the square of the mean: measured functions are rounded.
const AGREEMENT: f64 = 0.01;

impl Finished<'_> {
    pub(super) fn raw_moment(&self, gaussian: &Gaussian<'_>) -> Option<Diagnostic> {
        let expression = gaussian.argument("autocovariance")?;
        let [term] = gaussian.named.form.terms() else {
            return None;
        };
        let kernel = self.lowered.model.sources.get(term.source.0 as usize)?.kernel()?;
        let constant = kernel.constant_part().ok()??;
        let square = gaussian.named.form.mean().powi(2);
        if !(square > 0.0 && (constant - square).abs() <= AGREEMENT * square) {
            return None;
        }
        let variance = kernel.value(0.0).ok()?;
        let unit = &gaussian.named.unit;
        let squared = unit.power(2).unwrap_or_else(|| Unit::si(gaussian.named.dimension));
        let message = format!(
            "the autocovariance of `{}` holds a constant of {}, the square of its mean",
            gaussian.name.text,
            show(constant, &squared, 6)
        );
        let (with, without) = (variance.sqrt(), (variance - constant).max(0.0).sqrt());
        let finding = Diagnostic::new(Code::ProcessRawMoment, expression.span, message)
            .here(format!(
                "gives a standard deviation of {}; without the square of the mean it is {}",
                show(with, unit, 4),
                show(without, unit, 4)
            ))
            .help("give it as `autocorrelation`, from which the square of the mean is taken off, or leave the constant out");
        Some(match gaussian.argument("mean") {
            Some(mean) => finding.label(mean.span, "the mean"),
            None => finding,
        })
    }
}
