//! Oscillators under white noise, for the checks beside this file.

use outcross::covariance::form::{LinearForm, SourceId};
use outcross::covariance::moments::MomentTable;
use outcross::covariance::response::{Oscillator, System};
use outcross::covariance::source::Source;
use outcross::covariance::spectrum::{Spectrum, White};
use outcross::source::{FileId, Span};

/// A source of a spectrum.
pub fn source(spectrum: impl Into<Spectrum>) -> Source {
    let place = Span::new(FileId(0), 0, 0);
    Source::new("x".into(), spectrum.into(), place, Vec::new())
}

/// White noise of a one-sided density over omega.
pub fn white(level: f64) -> Source {
    source(White::new(level).expect("a level"))
}

/// The source itself.
pub fn excitation() -> LinearForm {
    LinearForm::source(0.0, SourceId(0))
}

/// x'' + 2 z w0 x' + w0² x = source.
pub fn oscillator(frequency: f64, damping: f64) -> LinearForm {
    let system = System::Oscillator(Oscillator::new(frequency, damping).expect("an oscillator"));
    let displacement = excitation().through(&system, frequency.powi(-2));
    displacement.expect("the response at rest is known")
}

/// lambda_0, lambda_1, lambda_2 and lambda_4.
pub fn moments(sources: &[Source], form: &LinearForm) -> [f64; 4] {
    let moments = MomentTable::new(sources).moments(form);
    moments
        .lambda
        .map(|moment| moment.value().expect("the moment is reached"))
}

/// The correlation coefficient of two forms at one instant.
pub fn correlation(sources: &[Source], one: &LinearForm, other: &LinearForm) -> f64 {
    let table = MomentTable::new(sources);
    let covariance = |one, other| {
        let found = table.covariance(one, other, 0.0);
        found.value().expect("the covariance is reached")
    };
    covariance(one, other) / (covariance(one, one) * covariance(other, other)).sqrt()
}
