//! Responses of oscillators, the moments alone: `responses.py` sets whole processes beside SciPy.

use divan::{Bencher, black_box};
use outcross::covariance::form::{LinearForm, SourceId};
use outcross::covariance::moments::MomentTable;
use outcross::covariance::response::{Oscillator, System};
use outcross::covariance::source::Source;
use outcross::covariance::spectrum::{Jonswap, KanaiTajimi, Spectrum};
use outcross::source::{FileId, Span};

fn sources(spectrum: impl Into<Spectrum>) -> [Source; 1] {
    [Source::new(
        "x".into(),
        spectrum.into(),
        Span::new(FileId(0), 0, 0),
        Vec::new(),
    )]
}

fn mode(frequency: f64, damping: f64) -> LinearForm {
    let system = System::Oscillator(Oscillator::new(frequency, damping).expect("an oscillator"));
    let source = LinearForm::source(0.0, SourceId(0));
    source.through(&system, 1.0).expect("the response at rest is known")
}

/// A thousand oscillators from half to five times a frequency, damping 0.1 % to 10 %.
fn thousand(frequency: f64) -> Vec<LinearForm> {
    let damping = |k: i32| 0.001 * 100_f64.powf(f64::from(k % 37) / 36.0);
    (0..1000)
        .map(|k| mode(frequency * (0.5 + 0.0045 * f64::from(k)), damping(k)))
        .collect()
}

fn of_all(bencher: Bencher<'_, '_>, sources: &[Source], forms: &[LinearForm]) {
    bencher.bench_local(|| {
        let table = MomentTable::new(black_box(sources));
        forms
            .iter()
            .map(|form| table.moments(form).standard_deviation())
            .sum::<f64>()
    });
}

/// By residues.
#[divan::bench(sample_count = 20, sample_size = 1)]
fn kanai_tajimi_through_1000_oscillators(bencher: Bencher<'_, '_>) {
    let ground = sources(KanaiTajimi::new(0.04, 15.0, 0.6).expect("valid"));
    of_all(bencher, &ground, &thousand(10.0));
}

/// By quadrature.
#[divan::bench(sample_count = 20, sample_size = 1)]
fn jonswap_through_1000_oscillators(bencher: Bencher<'_, '_>) {
    let sea = sources(Jonswap::new(4.0, 10.0, 3.3).expect("valid"));
    of_all(bencher, &sea, &thousand(0.6));
}

/// 20,000 cross terms.
#[divan::bench(args = [true, false], sample_count = 10, sample_size = 1)]
fn form_of_200_modes(bencher: Bencher<'_, '_>, rational: bool) {
    let source = if rational {
        sources(KanaiTajimi::new(0.04, 15.0, 0.6).expect("valid"))
    } else {
        sources(Jonswap::new(4.0, 2.0, 3.3).expect("valid"))
    };
    let modes: Vec<LinearForm> = (0..200).map(|k| mode(3.0 + 0.4 * f64::from(k), 0.01)).collect();
    let parts = modes
        .iter()
        .enumerate()
        .map(|(k, mode)| (1.0 / f64::from(1 + k as u32), mode));
    let form = LinearForm::combination(parts);
    bencher.bench_local(|| MomentTable::new(black_box(&source)).moments(&form));
}
