//! Densities of named families that are rational functions of frequency.

use super::{Correlation, Family, Matern};
use crate::covariance::spectral::Rational;
use nalgebra::Complex;
use std::f64::consts::{FRAC_2_PI, PI};

/// Matérn densities with more poles than that are left to quadrature.
const MOST_POLES: f64 = 10.0;

impl Family {
    /// The density of the continuous part by its poles and zeros, where it has them. The spectral factors are those of the
    /// closed densities in each family's file.
    pub(in crate::covariance) fn rational(&self) -> Option<Vec<Rational>> {
        let real = |rate: f64| Complex::new(-rate, 0.0);
        let pair = |decay: f64, frequency: f64| vec![Complex::new(-decay, frequency), Complex::new(-decay, -frequency)];
        let found = match self {
            Self::Exponential(kernel) => {
                let rate = 1.0 / kernel.length();
                Rational {
                    gain: FRAC_2_PI * rate,
                    zeros: Vec::new(),
                    poles: vec![real(rate)],
                }
            }
            Self::Matern(kernel) => return matern(kernel).map(|found| vec![found]),
            Self::Oscillator(kernel) => {
                let (frequency, damping) = (kernel.frequency(), kernel.damping());
                let damped = frequency * ((1.0 - damping) * (1.0 + damping)).sqrt();
                Rational {
                    gain: 4.0 * damping * frequency.powi(3) / PI,
                    zeros: Vec::new(),
                    poles: pair(damping * frequency, damped),
                }
            }
            Self::DampedCosine(kernel) => {
                let rate = 1.0 / kernel.length();
                Rational {
                    gain: FRAC_2_PI * rate,
                    zeros: vec![real(rate.hypot(kernel.frequency()))],
                    poles: pair(rate, kernel.frequency()),
                }
            }
            Self::Harmonic(_) => return Some(Vec::new()),
            Self::SquaredExponential(_) | Self::RationalQuadratic(_) | Self::BandLimited(_) | Self::Triangular(_) => {
                return None;
            }
        };
        Some(vec![found])
    }
}

/// Of half-integer smoothness: a pole at -sqrt(2 nu)/length, nu + 1/2 times.
fn matern(kernel: &Matern) -> Option<Rational> {
    let nu = kernel.smoothness();
    let poles = nu + 0.5;
    if poles.fract() != 0.0 || poles > MOST_POLES {
        return None;
    }
    let rate = (2.0 * nu).sqrt() / kernel.length();
    Some(Rational {
        gain: kernel.scale_of_fluctuation() / PI * rate.powf(2.0 * poles),
        zeros: Vec::new(),
        poles: vec![Complex::new(-rate, 0.0); poles as usize],
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::covariance::kernel::{DampedCosine, Exponential, Oscillator};

    #[test]
    fn poles_and_zeros_say_what_the_density_says() {
        let families: [Family; 5] = [
            Exponential::new(3.0).unwrap().into(),
            Matern::new(1.5, 2.0).unwrap().into(),
            Matern::new(3.5, 0.2).unwrap().into(),
            Oscillator::new(7.0, 0.03).unwrap().into(),
            DampedCosine::new(0.7, 11.0).unwrap().into(),
        ];
        for family in families {
            let rational = family.rational().unwrap();
            for omega in [0.0, 0.3, 1.0, 6.9, 7.2, 40.0] {
                let of_one = |one: &Rational| {
                    let product = |roots: &[Complex<f64>]| -> f64 {
                        roots
                            .iter()
                            .map(|root| (Complex::new(0.0, omega) - root).norm_sqr())
                            .product()
                    };
                    one.gain * product(&one.zeros) / product(&one.poles)
                };
                let found: f64 = rational.iter().map(of_one).sum();
                let density = family.density(omega).unwrap();
                assert!(
                    (found / density - 1.0).abs() < 1e-12,
                    "{family} at {omega}: {found} against {density}"
                );
            }
        }
    }
}
