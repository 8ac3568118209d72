//! The search for negative power.
//!
//! A covariance function times another is one again (I. Schur 1911), so that its samples under any window which is a covariance
//! function itself have a cosine transform that is nowhere negative (G. Herglotz 1911, the theorem of S. Bochner for sequences):
//!
//! S(theta) = g_0 C(0) + 2 sum over k > 0 of g_k C(k h) cos(k theta) >= 0.
//!
//! This is a sum of finitely many values, without truncation or quadrature: whatever the function does at long lags, be it a
//! wave that never fades, a valid one gives no negative value beyond rounding. For Fejér's window, g_k = 1 - k / n,
//! S is itself a variance, that of the sum of exp(i k theta) X(k h) over n instants, divided by n. Gaussian windows, which keep
//! apart what is far apart in frequency, are cut off at eight standard deviations, where they are 1e-14.

use super::Bounds;
use crate::covariance::kernel::Kernel;
use rustfft::num_complex::Complex64;
use rustfft::{Fft, FftPlannerScalar};
use std::f64::consts::PI;
use std::sync::Arc;

/// Samples at one step, unless the kernel is costly.
const SAMPLES: usize = 1024;

/// Costly kernels are given so few.
const FEWEST_SAMPLES: usize = 128;

/// The steps grow by that factor.
const STRIDE: f64 = 4.0;

/// So many steps at most; further apart if the times of the kernel are.
const MOST_STEPS: usize = 12;

/// The shortest time of a kernel has so many of the finest steps.
const FINEST: f64 = 32.0;

/// A Gaussian window is cut off at so many standard deviations.
pub(super) const CUT: f64 = 8.0;

/// Arithmetic of the transform and the cut of the window, as a share of the sum of the moduli.
const ARITHMETIC: f64 = 1e-12;

/// A window under which negative power is looked for.
#[derive(Clone, Copy, Debug)]
enum Window {
    /// 1 - k / n
    Fejer(usize),
    /// exp(-k²/(2 s²)), s an eighth of the number of samples.
    Gaussian(usize),
}

impl Window {
    fn samples(self) -> usize {
        match self {
            Self::Fejer(samples) | Self::Gaussian(samples) => samples,
        }
    }

    fn at(self, k: usize) -> f64 {
        match self {
            Self::Fejer(samples) => 1.0 - k as f64 / samples as f64,
            Self::Gaussian(samples) => (-0.5 * (CUT * k as f64 / samples as f64).powi(2)).exp(),
        }
    }

    /// The half width of its transform, in rad per step.
    fn width(self) -> f64 {
        match self {
            Self::Fejer(samples) => 2.0 * PI / samples as f64,
            Self::Gaussian(samples) => CUT / samples as f64,
        }
    }
}

/// Negative power: the value of a smoothed spectral density, with the step of the lags it was seen at.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct NegativePower {
    /// The angular frequency, in rad/s.
    pub frequency: f64,
    /// The one-sided density there, smoothed over `width`, as a share of the variance per rad/s.
    pub density: f64,
    /// The half width of the smoothing, in rad/s.
    pub width: f64,
    /// The step of the lags, in s.
    pub(super) step: f64,
}

/// What a scan has found.
#[derive(Clone, Debug, Default)]
pub(super) struct Scan {
    /// The deepest negative power at each step where there is any, from the finest step on.
    pub negative: Vec<NegativePower>,
    /// The lag and the ratio at which a value is larger than at lag zero.
    pub too_large: Option<(f64, f64)>,
    /// The range that was looked at.
    pub bounds: Bounds,
}

/// The operations that a scan of a kernel may take.
const MOST_OPERATIONS: u64 = 4_000_000;

/// The steps of the lags, in s, and the samples at each.
pub(super) fn plan(kernel: &Kernel, (short, long): (f64, f64)) -> (Vec<f64>, usize) {
    let finest = kernel.rows().map_or(short / FINEST, |(step, _)| step);
    let coarsest = (0.5 * long).max(finest);
    let strides = ((coarsest / finest).ln() / STRIDE.ln()).ceil().max(1.0);
    let count = strides.min(MOST_STEPS as f64);
    let factor = if strides > count {
        (coarsest / finest).powf(1.0 / count)
    } else {
        STRIDE
    };
    let steps: Vec<f64> = (0..=count as i32)
        .map(|power| finest * factor.powi(power))
        .filter(|step| step.is_normal())
        .collect();
    let affordable = MOST_OPERATIONS / kernel.operations().max(1) / steps.len().max(1) as u64;
    let samples = usize::try_from(affordable).unwrap_or(SAMPLES);
    // A power of two.
    let samples = 1 << samples.clamp(FEWEST_SAMPLES, SAMPLES).ilog2();
    (steps, samples)
}

/// Looks for negative power, and for values beyond that at lag zero, at lags of many steps.
pub(super) fn scan(kernel: &Kernel, variance: f64, times: (f64, f64)) -> Scan {
    let (steps, samples) = plan(kernel, times);
    let mut scan = Scan::default();
    let transform = FftPlannerScalar::new().plan_fft_forward(2 * samples);
    for step in steps {
        let values: Vec<(f64, f64)> = (0..samples)
            .map_while(|k| kernel.known(k as f64 * step))
            .map(|(value, doubt)| (value / variance, doubt / variance))
            .take_while(|(value, doubt)| value.is_finite() && doubt.is_finite())
            .collect();
        let too_large = values
            .iter()
            .zip(0..)
            .find(|((value, doubt), _)| value.abs() > 1.0 + LARGEST + doubt);
        if let Some(((value, _), k)) = too_large
            && scan.too_large.is_none()
        {
            scan.too_large = Some((f64::from(k) * step, *value));
        }
        if values.len() < 2 {
            continue;
        }
        scan.bounds.include(step, values.len(), STRIDE);
        scan.negative.extend(deepest(&values, step, &transform));
    }
    scan
}

/// A value beyond that at lag zero by no more is rounding.
const LARGEST: f64 = 1e-9;

/// The deepest negative power at one step.
fn deepest(values: &[(f64, f64)], step: f64, transform: &Arc<dyn Fft<f64>>) -> Option<NegativePower> {
    let length = transform.len();
    let mut most = 0.0;
    let mut deepest = None;
    let all = values.len();
    let windows = [
        Window::Gaussian(all),
        Window::Gaussian(all / 4),
        Window::Gaussian(all / 16),
        Window::Fejer(all),
        Window::Fejer(all / 8),
        Window::Fejer(all / 64),
    ];
    for window in windows.into_iter().filter(|window| window.samples() >= 2) {
        let mut buffer = vec![Complex64::default(); length];
        let (mut size, mut doubts) = (0.0, 0.0);
        for (k, (value, doubt)) in values.iter().take(window.samples()).enumerate() {
            let weight = window.at(k);
            let sides = if k == 0 { 1.0 } else { 2.0 };
            size += sides * weight * value.abs();
            doubts += sides * weight * doubt;
            for place in [k, (length - k) % length] {
                if let Some(slot) = buffer.get_mut(place) {
                    slot.re = weight * value;
                }
            }
        }
        transform.process(&mut buffer);
        let allowed = doubts + ARITHMETIC * size;
        for (bin, power) in buffer.iter().take(length / 2 + 1).enumerate() {
            // Negative power in the band that the window lets through.
            let share = (power.re + allowed) * window.width();
            if share < most {
                most = share;
                deepest = Some(NegativePower {
                    frequency: 2.0 * PI * bin as f64 / (length as f64 * step),
                    density: power.re * step / PI,
                    width: window.width() / step,
                    step,
                });
            }
        }
    }
    deepest
}
