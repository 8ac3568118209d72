//! Functions that are taken for covariance functions again and again, recognised by their values.

use crate::covariance::kernel::Kernel;
use std::f64::consts::FRAC_PI_2;

/// A function that looks like a covariance function and is none. Times in s, frequencies in rad/s.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Trap {
    /// 1 up to a lag, 0 beyond: its transform is sin(x)/x, which is negative at every second turn.
    Box {
        /// The lag.
        length: f64,
    },
    /// max(1 - (tau / length)^power, 0) with a power above 1: a clipped parabola for 2. Where it is cut off it has a kink
    /// that a smooth start forbids (valid for no power above 1: R. Askey 1973, Radial characteristic functions; from
    /// memory).
    Clipped {
        /// The lag of its zero.
        length: f64,
        /// The power.
        power: f64,
    },
    /// A cosine up to its first zero, 0 beyond.
    HalfWave {
        /// The lag of its zero.
        length: f64,
    },
    /// 1 - tau / length, below -1 from twice the length on.
    Line {
        /// The lag of its zero.
        length: f64,
    },
    /// exp(-(tau / length)^power) with a power above 2 (I. J. Schoenberg 1938, Metric spaces and positive definite
    /// functions: valid for powers up to 2 and no others).
    Stretched {
        /// The length.
        length: f64,
        /// The power.
        power: f64,
    },
    /// exp(-decay tau) (cos(w tau) + sine sin(w tau)) with a decay slower than |sine| w. Its spectral density is a
    /// positive multiple of (decay + sine w)(decay² + w²) + (decay - sine w) omega², and so negative at high frequencies
    /// for a sine that is too large, at low ones for one that is too small (by the residues of the transform).
    SlowDecay {
        /// The decay, in 1/s.
        decay: f64,
        /// The frequency w.
        frequency: f64,
        /// The share of the sine.
        sine: f64,
    },
    /// A sum in which a term in the lag is subtracted.
    Difference,
}

/// Values that agree to that are the same.
const SAME: f64 = 1e-7;

/// Shares of a length at which a shape is looked at.
const SHARES: [f64; 6] = [0.11, 0.29, 0.5, 0.63, 0.81, 0.97];

impl Trap {
    /// The trap that a written kernel has fallen into.
    pub(super) fn recognise(kernel: &Kernel, variance: f64, (short, long): (f64, f64)) -> Option<Self> {
        let Kernel::User(user) = kernel else {
            return None;
        };
        let value = |lag: f64| kernel.value(lag).map_or(f64::NAN, |value| value / variance);
        vanishing(&value, long)
            .or_else(|| line(&value, short))
            .or_else(|| stretched(&value, short))
            .or_else(|| slow_decay(&value, short))
            .or_else(|| user.subtracts_terms().then_some(Self::Difference))
    }
}

/// Shapes that are 0 from some lag on.
fn vanishing(value: &impl Fn(f64) -> f64, long: f64) -> Option<Trap> {
    let gone = |lag: f64| value(lag).abs() < 1e-12;
    let (mut present, mut absent) = (0.0, 4.0 * long);
    if !gone(absent) || !gone(2.0 * absent) {
        return None;
    }
    for _ in 0..60 {
        let middle = 0.5 * (present + absent);
        if gone(middle) {
            absent = middle;
        } else {
            present = middle;
        }
    }
    let length = absent;
    let like = |shape: &dyn Fn(f64) -> f64| {
        let close = |share: f64| (value(share * length) - shape(share)).abs() < SAME;
        SHARES.into_iter().all(close)
    };
    let power = (1.0 - value(0.5 * length)).ln() / 0.5_f64.ln();
    if like(&|_| 1.0) {
        Some(Trap::Box { length })
    } else if power > 1.0 + SAME && like(&|share| 1.0 - share.powf(power)) {
        Some(Trap::Clipped { length, power })
    } else if like(&|share| (FRAC_PI_2 * share).cos()) {
        Some(Trap::HalfWave { length })
    } else {
        None
    }
}

fn line(value: &impl Fn(f64) -> f64, short: f64) -> Option<Trap> {
    let length = short / (1.0 - value(short));
    let straight = [0.5, 1.0, 2.0, 3.0].into_iter().all(|times| {
        let there = 1.0 - times;
        (value(times * length) - there).abs() < SAME
    });
    straight.then_some(Trap::Line { length })
}

fn stretched(value: &impl Fn(f64) -> f64, short: f64) -> Option<Trap> {
    let exponent = |lag: f64| -value(lag).ln();
    let power = (exponent(2.0 * short) / exponent(short)).log2();
    let length = 2.0 * short / exponent(2.0 * short).powf(1.0 / power);
    let close = |times: f64| {
        let lag = times * length;
        (value(lag) - (-times.powf(power)).exp()).abs() < SAME
    };
    let found = power > 2.0 + SAME && length.is_finite() && [0.5, 0.8, 1.0, 1.2, 1.5].into_iter().all(close);
    found.then_some(Trap::Stretched { length, power })
}

/// Even samples of a damped wave obey f(k + 2) = p f(k + 1) + q f(k).
fn slow_decay(value: &impl Fn(f64) -> f64, short: f64) -> Option<Trap> {
    let step = short;
    let samples: Vec<f64> = (0..12).map(|k| value(f64::from(k) * step)).collect();
    let &[f0, f1, f2, f3, ..] = samples.as_slice() else {
        return None;
    };
    let determinant = f1 * f1 - f0 * f2;
    let p = (f1 * f2 - f0 * f3) / determinant;
    let q = (f1 * f3 - f2 * f2) / determinant;
    let obeys = samples.windows(3).all(|three| match three {
        [a, b, c] => (p * b + q * a - c).abs() < SAME,
        _ => false,
    });
    let radius = (-q).sqrt();
    let cosine = p / (2.0 * radius);
    if !obeys || cosine.is_nan() || cosine.abs() >= 1.0 {
        return None;
    }
    let decay = -radius.ln() / step;
    let angle = cosine.acos();
    let frequency = angle / step;
    let sine = (f1 / radius - cosine) / angle.sin();
    let slow = decay * step > SAME && sine.abs() * frequency > decay + SAME * frequency;
    slow.then_some(Trap::SlowDecay { decay, frequency, sine })
}

#[cfg(test)]
mod tests {
    use super::*;

    fn found(value: impl Fn(f64) -> f64) -> Option<Trap> {
        let value = |lag: f64| if lag < 0.0 { f64::NAN } else { value(lag) };
        vanishing(&value, 3.0)
            .or_else(|| line(&value, 0.3))
            .or_else(|| stretched(&value, 0.3))
            .or_else(|| slow_decay(&value, 0.3))
    }

    #[test]
    fn traps_are_known_by_their_values() {
        let near = |a: f64, b: f64| (a - b).abs() < 1e-6;
        let step = |lag: f64| if lag <= 2.5 { 1.0 } else { 0.0 };
        assert!(matches!(found(step), Some(Trap::Box { length }) if near(length, 2.5)));
        let parabola = |lag: f64| (1.0 - lag * lag / 4.0).max(0.0);
        assert!(
            matches!(found(parabola), Some(Trap::Clipped { length, power }) if near(length, 2.0) && near(power, 2.0))
        );
        let wave = |lag: f64| if lag < 2.0 { (FRAC_PI_2 * lag / 2.0).cos() } else { 0.0 };
        assert!(matches!(found(wave), Some(Trap::HalfWave { length }) if near(length, 2.0)));
        let line = |lag: f64| 1.0 - lag / 5.0;
        assert!(matches!(found(line), Some(Trap::Line { length }) if near(length, 5.0)));
        let flat = |lag: f64| (-(lag / 1.5_f64).powf(2.4)).exp();
        assert!(
            matches!(found(flat), Some(Trap::Stretched { length, power }) if near(length, 1.5) && near(power, 2.4))
        );
        let slow = |lag: f64| (-0.2 * lag).exp() * ((2.0 * lag).cos() - 0.4 * (2.0 * lag).sin());
        assert!(matches!(
            found(slow),
            Some(Trap::SlowDecay { decay, frequency, sine }) if near(decay, 0.2) && near(frequency, 2.0) && near(sine, -0.4)
        ));
    }

    #[test]
    fn what_is_valid_is_no_trap() {
        assert_eq!(found(|lag| (1.0 - lag / 2.0).max(0.0)), None);
        assert_eq!(found(|lag| (-lag * lag).exp()), None);
        assert_eq!(
            found(|lag| (-0.4 * lag).exp() * ((2.0 * lag).cos() + 0.2 * (2.0 * lag).sin())),
            None
        );
        assert_eq!(found(|lag| (2.0 * lag).cos()), None);
        assert_eq!(found(|lag| 1.0 / (1.0 + lag * lag)), None);
    }
}
