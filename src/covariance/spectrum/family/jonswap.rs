//! The spectrum of a growing wind sea.

use super::Density;
use super::pierson_moskowitz::{GRID, form, integral};
use crate::covariance::kernel::{Estimate, InvalidParameter, demand, positive};
use crate::covariance::spectral::Tail;
use crate::numerics::quadrature::{self, Tolerance};
use std::f64::consts::TAU;
use std::fmt;

/// The form of Pierson and Moskowitz times gamma^exp(-(w/wp - 1)²/(2 s²)), s = 0.07 below the peak and 0.09 above,
/// scaled exactly to the variance hs²/16: K. Hasselmann et al. (1973), Measurements of wind-wave growth and swell decay
/// during the Joint North Sea Wave Project, Dtsch. Hydrogr. Z. Suppl. A 8, no. 12.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Jonswap {
    hs: f64,
    tp: f64,
    peak_enhancement: f64,
    /// The variance over the integral of the form: what makes the area hs²/16.
    scale: f64,
}

/// The width of the peak below and above it, over the peak's frequency.
const BELOW: f64 = 0.07;
const ABOVE: f64 = 0.09;

/// Beyond so many widths the enhancement adds nothing that a double sees, even by its first power.
const REACH: f64 = 9.0;

impl Jonswap {
    /// From the significant wave height in m, the peak period in s and the peak enhancement, 1 or greater.
    pub fn new(hs: f64, tp: f64, peak_enhancement: f64) -> Result<Self, InvalidParameter> {
        const NAME: &str = "jonswap";
        let allowed = (1.0..=100.0).contains(&peak_enhancement);
        let mut spectrum = Self {
            hs: positive(NAME, "hs", hs)?,
            tp: positive(NAME, "tp", tp)?,
            peak_enhancement: demand(allowed, NAME, "peak_enhancement", peak_enhancement, "between 1 and 100")?,
            scale: 0.0,
        };
        spectrum.scale = hs * hs / 16.0 / spectrum.integral(0).value;
        Ok(spectrum)
    }

    /// gamma^b - 1 over x = w/wp.
    fn enhancement(&self, x: f64) -> f64 {
        let widths = (x - 1.0) / if x < 1.0 { BELOW } else { ABOVE };
        (self.peak_enhancement.ln() * (-0.5 * widths * widths).exp()).exp_m1()
    }

    /// The integral of x^n over the form, n at most 3: that of Pierson and Moskowitz in closed form, and what the
    /// enhancement adds about the peak by quadrature, split at the peak, where the form has a kink.
    fn integral(&self, order: u32) -> Estimate {
        let added = |x: f64| x.powi(order as i32) * form(x) * self.enhancement(x);
        let below = [REACH, 4.5, 2.0].map(|widths| 1.0 - widths * BELOW);
        let above = [2.0, 4.5, REACH].map(|widths| 1.0 + widths * ABOVE);
        let points: Vec<f64> = below.into_iter().chain([1.0]).chain(above).collect();
        let plain = Estimate::closed(integral(order));
        match quadrature::between(added, &points, Tolerance::relative(1e-13), 10_000) {
            Some(found) => plain.plus(Estimate {
                value: found.value,
                error: found.error,
            }),
            None => Estimate {
                error: f64::INFINITY,
                ..plain
            },
        }
    }
}

impl Density for Jonswap {
    fn density(&self, omega: f64) -> f64 {
        let x = omega * (self.tp / TAU);
        let plain = form(x);
        if plain == 0.0 {
            return 0.0;
        }
        let widths = (x - 1.0).abs();
        let plain = self.scale * self.tp / TAU * plain;
        if widths > REACH * ABOVE {
            plain
        } else {
            plain + plain * self.enhancement(x)
        }
    }

    fn moment(&self, order: u32) -> Estimate {
        let variance = self.hs * self.hs / 16.0;
        if order == 0 {
            return Estimate::closed(variance);
        }
        let (whole, integral) = (self.integral(0), self.integral(order));
        let unit = variance * (TAU / self.tp).powi(order as i32) / whole.value;
        let error = integral.error + integral.value * whole.error / whole.value;
        Estimate {
            value: unit * integral.value,
            error: unit * error,
        }
    }

    fn tail(&self) -> Tail {
        Tail::Power(5.0)
    }

    fn head(&self) -> f64 {
        f64::INFINITY
    }

    fn grid(&self) -> Vec<f64> {
        let below = [4.5, 2.0, 0.7].map(|widths| 1.0 - widths * BELOW);
        let above = [0.7, 2.0, 4.5, REACH].map(|widths| 1.0 + widths * ABOVE);
        let all = GRID.into_iter().chain(below).chain(above);
        crate::covariance::spectrum::rising(all.map(|x| x * TAU / self.tp).collect())
    }
}

impl fmt::Display for Jonswap {
    fn fmt(&self, out: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Self { hs, tp, .. } = self;
        let gamma = self.peak_enhancement;
        write!(out, "jonswap(hs: {hs}, tp: {tp} s, peak_enhancement: {gamma})")
    }
}
