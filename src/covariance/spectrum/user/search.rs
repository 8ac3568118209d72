//! Where a written density lives: its ends, its peaks, and whether it is negative anywhere.

use super::InvalidSpectrum;
use super::ends::End;

/// Frequencies are looked at from 2^-100 to 2^100 rad/s, so many in an octave.
const OCTAVES: i32 = 100;
const COARSE: i32 = 8;

/// Between the ends, so many in an octave.
const FINE: usize = 64;

/// A flat end begins where the density, weighed by a power of the frequency, is below this share of its largest.
const GONE: f64 = 1e-25;

/// The highest power of the frequency that moments weigh a flat tail with, and one more for its integral.
const WEIGHED: i32 = 5;

/// A density this far below 0, over its largest value, is rounding.
const ROUNDING: f64 = 1e-12;

/// Peaks that are looked at closely.
const MOST_PEAKS: usize = 256;

/// Peaks wider than this share of their frequency need no grading.
const BROAD: f64 = 0.2;

/// Rising frequencies that do justice to the density between its ends, whose reaches are set.
pub(super) fn breakpoints(
    density: impl Fn(f64) -> f64,
    head: &mut End,
    tail: &mut End,
    hints: &[f64],
) -> Result<Vec<f64>, InvalidSpectrum> {
    let coarse: Vec<f64> = (-OCTAVES * COARSE..=OCTAVES * COARSE)
        .map(|step| (f64::from(step) / f64::from(COARSE)).exp2())
        .collect();
    let sampled: Vec<(f64, f64)> = coarse.iter().map(|omega| (*omega, density(*omega))).collect();
    let hinted = hints.iter().map(|omega| density(*omega));
    let mut values = sampled.iter().map(|(_, value)| *value).chain(hinted);
    if !values.any(|value| value != 0.0 && value.is_finite()) {
        return Err(InvalidSpectrum::Zero);
    }
    let from = head_reach(head, &sampled)?;
    let to = tail_reach(tail, &sampled)?;
    // A single power has both series everywhere.
    let (from, to) = if from < to { (from, to) } else { (1.0, 1.0) };
    head.reach = from;
    tail.reach = 1.0 / to;
    let samples = between(from, to, hints)
        .into_iter()
        .map(|omega| (omega, density(omega)))
        .collect::<Vec<_>>();
    positive(&density, &samples)?;
    let mut points = vec![from, to];
    let octaves = (to / from).log2().ceil().max(1.0);
    points.extend((1..octaves as i32).map(|step| from * (f64::from(step) / octaves * (to / from).log2()).exp2()));
    points.extend(hints);
    points.extend(graded_peaks(&density, &samples));
    points.retain(|omega| (from..=to).contains(omega));
    points.sort_by(f64::total_cmp);
    points.dedup();
    Ok(points)
}

/// The frequency below which the series at 0 takes over.
fn head_reach(head: &End, sampled: &[(f64, f64)]) -> Result<f64, InvalidSpectrum> {
    if head.is_flat() {
        let largest = largest(sampled, 1);
        let gone = |(omega, value): &&(f64, f64)| is_gone(omega * value.abs(), largest);
        let last = sampled.iter().take_while(gone).last();
        return Ok(last.or(sampled.first()).map_or(1.0, |(omega, _)| *omega));
    }
    let agrees = |(omega, value): &(f64, f64)| head.agrees(*omega, *value);
    run(sampled.iter().rev(), agrees).ok_or(InvalidSpectrum::Unclear {
        at_infinity: false,
        reason: "its series is of no use at any frequency".to_string(),
    })
}

/// The frequency beyond which the series at infinity takes over.
fn tail_reach(tail: &End, sampled: &[(f64, f64)]) -> Result<f64, InvalidSpectrum> {
    if tail.is_flat() {
        let largest = largest(sampled, WEIGHED);
        let gone = |(omega, value): &&(f64, f64)| is_gone(omega.powi(WEIGHED) * value.abs(), largest);
        let first = sampled.iter().rev().take_while(gone).last();
        return Ok(first.or(sampled.last()).map_or(1.0, |(omega, _)| *omega));
    }
    let agrees = |(omega, value): &(f64, f64)| tail.agrees(1.0 / omega, *value);
    run(sampled.iter(), agrees).ok_or(InvalidSpectrum::Unclear {
        at_infinity: true,
        reason: "its series is of no use at any frequency".to_string(),
    })
}

/// Whether a value is small beside the largest; what is no number where a density is flat has left the range of doubles.
fn is_gone(value: f64, largest: f64) -> bool {
    value.is_nan() || value <= GONE * largest
}

/// The largest finite omega^power G(omega).
fn largest(sampled: &[(f64, f64)], power: i32) -> f64 {
    let weighed = sampled.iter().map(|(omega, value)| omega.powi(power) * value.abs());
    weighed.filter(|value| value.is_finite()).fold(0.0, f64::max)
}

/// The first of an octave of samples that all agree: no coincidence.
fn run<'s>(samples: impl Iterator<Item = &'s (f64, f64)>, agrees: impl Fn(&(f64, f64)) -> bool) -> Option<f64> {
    let (mut start, mut length) = (None, 0);
    for sample in samples {
        if agrees(sample) {
            start.get_or_insert(sample.0);
            length += 1;
        } else {
            (start, length) = (None, 0);
        }
        if length > COARSE {
            return start;
        }
    }
    None
}

/// Frequencies from one end to the other, closer about the numbers that the expression names.
fn between(from: f64, to: f64, hints: &[f64]) -> Vec<f64> {
    let steps = ((to / from).log2() * FINE as f64).ceil() as usize;
    let ratio = to / from;
    let even = (0..=steps).map(|step| from * ratio.powf(step as f64 / steps.max(1) as f64));
    let beside = hints.iter().flat_map(|hint| {
        let distances = (1..=8).map(move |digit| hint * 10.0_f64.powi(-digit));
        distances.flat_map(move |distance| [hint - distance, *hint, hint + distance])
    });
    let mut all: Vec<f64> = even.chain(beside).filter(|omega| (from..=to).contains(omega)).collect();
    all.sort_by(f64::total_cmp);
    all.dedup();
    all
}

/// Refuses a density that is negative or no number somewhere; dips between samples are followed down.
fn positive(density: &impl Fn(f64) -> f64, samples: &[(f64, f64)]) -> Result<(), InvalidSpectrum> {
    let no_value = samples.iter().find(|(_, value)| !value.is_finite());
    if let Some((frequency, _)) = no_value {
        return Err(InvalidSpectrum::NoValue { frequency: *frequency });
    }
    let dips: Vec<(f64, f64)> = samples
        .windows(3)
        .filter_map(|triple| match triple {
            [a, b, c] if b.1 <= a.1 && b.1 <= c.1 => Some(extreme(&|omega| -density(omega), a.0, c.0)),
            _ => None,
        })
        .take(MOST_PEAKS)
        .map(|(omega, value)| (omega, -value))
        .collect();
    let allowed = -ROUNDING * samples.iter().map(|(_, value)| *value).fold(0.0, f64::max);
    let lowest = samples.iter().chain(&dips).min_by(|a, b| a.1.total_cmp(&b.1));
    match lowest {
        Some((frequency, value)) if *value < allowed => Err(InvalidSpectrum::Negative {
            frequency: *frequency,
            density: *value,
        }),
        _ => Ok(()),
    }
}

/// Frequencies graded towards each narrow peak.
fn graded_peaks(density: &impl Fn(f64) -> f64, samples: &[(f64, f64)]) -> Vec<f64> {
    let tops = samples.windows(3).filter_map(|triple| match triple {
        [a, b, c] if b.1 > a.1 && b.1 > c.1 => Some(extreme(density, a.0, c.0)),
        _ => None,
    });
    let mut points = Vec::new();
    for (peak, top) in tops.take(MOST_PEAKS) {
        let mut width = 1e-9 * peak;
        while width < BROAD * peak && density(peak - width).min(density(peak + width)) > 0.5 * top {
            width *= 2.0;
        }
        points.push(peak);
        while width < BROAD * peak {
            points.extend([peak - width, peak + width]);
            width *= 4.0;
        }
    }
    points
}

/// The largest value between two frequencies, by the golden section.
fn extreme(function: &impl Fn(f64) -> f64, mut from: f64, mut to: f64) -> (f64, f64) {
    const GOLDEN: f64 = 0.618_033_988_749_894_8;
    let mut left = to - GOLDEN * (to - from);
    let mut right = from + GOLDEN * (to - from);
    let (mut at_left, mut at_right) = (function(left), function(right));
    for _ in 0..60 {
        if at_left >= at_right {
            (to, right, at_right) = (right, left, at_left);
            left = to - GOLDEN * (to - from);
            at_left = function(left);
        } else {
            (from, left, at_left) = (left, right, at_right);
            right = from + GOLDEN * (to - from);
            at_right = function(right);
        }
    }
    if at_left >= at_right {
        (left, at_left)
    } else {
        (right, at_right)
    }
}
