//! The named correlation functions against their defining formulas in many digits (`kernels.py` beside this file, mpmath).

use outcross::covariance::kernel::{
    BandLimited, Correlation, DampedCosine, Exponential, Family, Harmonic, Kernel, Matern, Oscillator,
    RationalQuadratic, SquaredExponential, Triangular,
};
use serde::Deserialize;

const TABLE: &str = include_str!("kernels.csv");

#[derive(Deserialize)]
struct Row {
    family: String,
    first: f64,
    second: f64,
    quantity: String,
    place: f64,
    order: usize,
    value: f64,
}

impl Row {
    fn family(&self) -> Family {
        let (a, b) = (self.first, self.second);
        let family: Result<Family, _> = match self.family.as_str() {
            "squared_exponential" => SquaredExponential::new(a).map(Family::from),
            "exponential" => Exponential::new(a).map(Family::from),
            "matern" => Matern::new(a, b).map(Family::from),
            "rational_quadratic" => RationalQuadratic::new(a, b).map(Family::from),
            "oscillator" => Oscillator::new(a, b).map(Family::from),
            "damped_cosine" => DampedCosine::new(a, b).map(Family::from),
            "harmonic" => Harmonic::new(a).map(Family::from),
            "band_limited" => BandLimited::new(a, b).map(Family::from),
            "triangular" => Triangular::new(a).map(Family::from),
            other => panic!("no family {other}"),
        };
        family.expect("a valid case")
    }

    fn computed(&self) -> f64 {
        let family = self.family();
        match self.quantity.as_str() {
            "value" => family.value(self.place),
            "loss" => family.loss(self.place),
            "derivative" => {
                let coefficients = Kernel::from(family)
                    .taylor(self.place, self.order)
                    .expect("smooth there");
                coefficients[self.order] * (1..=self.order).map(|n| n as f64).product::<f64>()
            }
            "density" => family.density(self.place).expect("a density"),
            "moment" => family.moments()[[0, 1, 2, 3, 3][self.order]],
            "scale" => family.scale_of_fluctuation(),
            other => panic!("no quantity {other}"),
        }
    }

    /// The size below which an error counts absolutely: what swings has zeros, and loses digits about them.
    fn floor(&self) -> f64 {
        let swings = ["oscillator", "damped_cosine", "harmonic", "band_limited"].contains(&self.family.as_str());
        let shortest = self.family().times().0;
        match self.quantity.as_str() {
            "value" if swings => 1e-2,
            "derivative" if swings => 1e-2 / shortest.powi(self.order as i32),
            // Derivatives change sign too.
            "derivative" => 1e-4 / shortest.powi(self.order as i32) * self.family().value(self.place),
            _ => 0.0,
        }
    }

    fn error(&self) -> f64 {
        let miss = (self.computed() - self.value).abs();
        if miss <= f64::MIN_POSITIVE {
            0.0
        } else {
            miss / self.value.abs().max(self.floor())
        }
    }
}

/// The greatest relative error of a quantity of a family, and where.
fn greatest(family: &str, quantity: &str) -> (f64, String) {
    let rows = csv::Reader::from_reader(TABLE.as_bytes())
        .into_deserialize()
        .map(|row| row.expect("a row of the table"));
    let rows: Vec<Row> = rows
        .filter(|row: &Row| row.family == family && row.quantity == quantity)
        .collect();
    rows.iter().fold((0.0, String::new()), |(greatest, place), row| {
        let error = row.error();
        // Not `error > greatest`, which a NaN would pass.
        if error <= greatest {
            return (greatest, place);
        }
        let (a, b, at, n) = (row.first, row.second, row.place, row.order);
        (
            error,
            format!(
                "{family}({a}, {b}) {quantity} {n} at {at}: {}, exact {}",
                row.computed(),
                row.value
            ),
        )
    })
}

fn holds(family: &str, bounds: [(&str, f64); 6]) {
    for (quantity, bound) in bounds {
        let (error, place) = greatest(family, quantity);
        assert!(error <= bound, "{error:e} > {bound:e} in {place}");
    }
}

macro_rules! families {
    ($($family:ident: $($quantity:ident $bound:expr),*;)*) => {
        $(#[test]
        fn $family() {
            holds(stringify!($family), [$((stringify!($quantity), $bound)),*]);
        })*
    };
}

// Some ten times what was measured. At lags of ten thousand radians, which `oscillator` and `band_limited` have, and next to a
// resonance of width 1e-4, the rounding of the phase and of the frequency alone is some 1e-12.
families! {
    squared_exponential: value 1e-15, loss 1e-15, derivative 3e-14, density 3e-14, moment 1e-15, scale 1e-15;
    exponential: value 1e-15, loss 1e-15, derivative 1e-15, density 1e-15, moment 1e-15, scale 1e-15;
    matern: value 2e-14, loss 1e-14, derivative 5e-13, density 5e-14, moment 5e-15, scale 5e-15;
    rational_quadratic: value 3e-14, loss 2e-15, derivative 3e-13, density 1e-13, moment 5e-15, scale 2e-15;
    oscillator: value 5e-12, loss 5e-13, derivative 5e-12, density 5e-12, moment 5e-15, scale 1e-15;
    damped_cosine: value 5e-15, loss 5e-15, derivative 3e-14, density 3e-15, moment 1e-15, scale 1e-15;
    harmonic: value 5e-15, loss 1e-14, derivative 5e-15, density 1e-15, moment 1e-15, scale 1e-15;
    band_limited: value 1e-11, loss 1e-11, derivative 1e-11, density 1e-15, moment 1e-15, scale 1e-15;
    triangular: value 1e-15, loss 1e-15, derivative 1e-15, density 2e-15, moment 1e-15, scale 1e-15;
}
