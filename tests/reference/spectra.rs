//! The named spectra against their defining formulas in many digits (`spectra.py` beside this file, mpmath).

use outcross::covariance::kernel::Moment;
use outcross::covariance::spectral::SpectralDensity;
use outcross::covariance::spectrum::{
    BandLimited, CloughPenzien, Davenport, Jonswap, Kaimal, KanaiTajimi, PiersonMoskowitz, Spectrum, VonKarman,
};
use serde::Deserialize;

const TABLE: &str = include_str!("spectra.csv");

#[derive(Deserialize)]
struct Row {
    spectrum: String,
    arguments: String,
    quantity: String,
    place: f64,
    value: f64,
}

impl Row {
    fn spectrum(&self) -> Spectrum {
        let arguments: Vec<f64> = self
            .arguments
            .split(' ')
            .map(|one| one.parse().expect("a number"))
            .collect();
        match (self.spectrum.as_str(), arguments.as_slice()) {
            ("band_limited", &[a, b, c]) => BandLimited::new(a, b, c).map(Spectrum::from),
            ("pierson_moskowitz", &[a, b]) => PiersonMoskowitz::new(a, b).map(Spectrum::from),
            ("jonswap", &[a, b, c]) => Jonswap::new(a, b, c).map(Spectrum::from),
            ("kaimal", &[a, b]) => Kaimal::new(a, b).map(Spectrum::from),
            ("von_karman", &[a, b]) => VonKarman::new(a, b).map(Spectrum::from),
            ("davenport", &[a, b]) => Davenport::new(a, b).map(Spectrum::from),
            ("kanai_tajimi", &[a, b, c]) => KanaiTajimi::new(a, b, c).map(Spectrum::from),
            ("clough_penzien", &[a, b, c, d, e]) => CloughPenzien::new(a, b, c, d, e).map(Spectrum::from),
            other => panic!("no spectrum {other:?}"),
        }
        .expect("a valid case")
    }

    /// The error of the quantity, relative to its value, and the error it is given with.
    fn error(&self) -> (f64, f64) {
        let spectrum = self.spectrum();
        let (found, stated) = match self.quantity.as_str() {
            "density" => {
                let found = spectrum.density(self.place).expect("a density");
                (found.value, found.error)
            }
            _ => match spectrum.moment(self.place as u32) {
                Moment::Finite { value, error } => (value, error),
                other => panic!("{}({}): {other:?}", self.spectrum, self.arguments),
            },
        };
        if self.value == 0.0 {
            return (found, stated);
        }
        ((found / self.value - 1.0).abs(), stated / self.value)
    }
}

#[test]
fn named_spectra() {
    let mut rows = 0;
    for row in csv::Reader::from_reader(TABLE.as_bytes()).deserialize() {
        let row: Row = row.expect("a row of the table");
        let (error, stated) = row.error();
        let place = format!("{}({}), {} at {}", row.spectrum, row.arguments, row.quantity, row.place);
        // The density beside a narrow peak feels the rounding of the frequency: its error is that over the damping.
        let narrow = if row.spectrum.ends_with("i_tajimi") || row.spectrum == "clough_penzien" {
            20.0
        } else {
            1.0
        };
        assert!(error <= narrow * 1e-13, "{place}: relative error {error:e}");
        assert!(
            row.quantity == "density" || error <= stated,
            "{place}: {error:e} beyond {stated:e}"
        );
        rows += 1;
    }
    assert!(rows > 200, "{rows}");
}
