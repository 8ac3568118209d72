//! The search for the fewest instants that prove a kernel impossible.
//!
//! A function is a covariance function if no matrix of its values C(t_i - t_j) has a negative eigenvalue. On even steps the
//! matrix of more instants holds that of fewer, so that the least eigenvalue falls with their number: the first number
//! at which it is negative is the smallest. The eigenvector is then rounded to the smallest whole numbers that still prove it.

use super::decimal::Decimal;
use super::scan::NegativePower;
use super::witness::{Witness, coefficients};
use crate::covariance::kernel::Kernel;
use nalgebra::{DMatrix, SymmetricEigen};
use std::f64::consts::PI;

/// Numbers of instants that are tried at every step.
const FEW: std::ops::RangeInclusive<usize> = 2..=9;

/// Numbers that are tried after them, at the steps where negative power was seen.
const MANY: [usize; 10] = [12, 16, 24, 32, 48, 64, 96, 128, 192, 256];

/// Leading digits of steps that are easy to read.
const EASY: [f64; 9] = [1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 5.0, 6.0, 8.0];

/// So many easy steps at most.
const MOST_STEPS: usize = 90;

/// A sum whose variance is as negative as that, with weights of unit length, is plain to see.
const PLAIN: f64 = -0.25;

/// Candidates of one number of instants that are rounded and proven.
const TRIED: usize = 4;

/// The largest weight, in turn, until the rounded weights prove it.
const LARGEST_WEIGHTS: [f64; 26] = [
    1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0, 9.0, 10.0, 12.0, 15.0, 20.0, 30.0, 50.0, 100.0, 200.0, 500.0, 1e3, 1e4,
    1e5, 1e6, 1e7, 1e8, 1e9, 1e11,
];

/// Rounded weights should keep that share of what the exact ones show.
const KEPT: f64 = 0.5;

/// Instants are left out one by one where there are not more than so many.
const MOST_THINNED: usize = 32;

/// An eigenvalue below that, as a share of the largest possible, is negative and not rounding.
const NEGATIVE: f64 = -1e-13;

/// Instants, and weights that make a sum of negative variance.
struct Candidate {
    step: Decimal,
    /// In steps.
    instants: Vec<i128>,
    weights: Vec<f64>,
    /// An upper bound of the variance of the weighted sum for weights of unit length.
    least: f64,
}

/// A kernel with what a search in it needs.
pub(super) struct Search<'k> {
    kernel: &'k Kernel,
    variance: f64,
}

impl<'k> Search<'k> {
    pub fn new(kernel: &'k Kernel, variance: f64) -> Self {
        Self { kernel, variance }
    }

    /// The fewest instants found that prove the kernel impossible.
    pub fn run(&self, times: (f64, f64), negative: &[NegativePower]) -> Option<Witness> {
        let steps = self.steps(times, negative);
        let values: Vec<(Decimal, Vec<(f64, f64)>)> = steps
            .into_iter()
            .map(|step| (step, self.values(step, *FEW.end())))
            .collect();
        for count in FEW {
            let mut candidates: Vec<Candidate> = values
                .iter()
                .filter_map(|(step, values)| candidate(*step, values.get(..count)?))
                .collect();
            // The deepest first, of those that are plain the one of the shortest step.
            candidates.sort_by(|a, b| a.least.max(PLAIN).total_cmp(&b.least.max(PLAIN)));
            let proven = candidates.into_iter().take(TRIED).find_map(|one| self.proven(&one));
            if proven.is_some() {
                return proven;
            }
        }
        self.with_many(negative)
    }

    /// Steps that are easy to read about the times of the kernel, or whole multiples of a table's.
    fn steps(&self, (short, long): (f64, f64), negative: &[NegativePower]) -> Vec<Decimal> {
        if let Some((row, _)) = self.kernel.rows() {
            let row = Decimal::near(row, 12);
            let most = (4.0 * long / row.map_or(long, Decimal::value)) as i128;
            let multiples = (1..=20).chain((2..=30).map(|power| 10 * power * power));
            return multiples
                .filter(|multiple| *multiple <= most.max(1))
                .filter_map(|multiple| Some(row?.times(multiple)))
                .collect();
        }
        let (mut from, to) = (0.1 * short, 4.0 * long);
        if let Some(seen) = negative.first() {
            from = from.max(0.1 * seen.step);
        }
        let decade = from.log10().floor() as i32;
        let easy = (decade..decade.saturating_add(20)).flat_map(|power| EASY.map(|digit| digit * 10.0_f64.powi(power)));
        let mut steps: Vec<Decimal> = easy
            .filter(|step| (from..=to).contains(step))
            .filter_map(|step| Decimal::near(step, 2))
            .take(MOST_STEPS)
            .collect();
        // Half a period of the negative power, and parts of it.
        let half_periods = negative.iter().filter(|seen| seen.frequency > 0.0);
        for half in half_periods.map(|seen| PI / seen.frequency) {
            steps.extend(
                [0.25, 0.5, 0.75, 1.0]
                    .iter()
                    .filter_map(|part| Decimal::near(part * half, 2)),
            );
        }
        steps
    }

    /// The kernel and its doubt at multiples of a step, as shares of the variance, as far as it is known.
    fn values(&self, step: Decimal, count: usize) -> Vec<(f64, f64)> {
        (0..count as i128)
            .map_while(|k| self.kernel.known(step.times(k).value()))
            .map(|(value, doubt)| (value / self.variance, doubt / self.variance))
            .take_while(|(value, doubt)| value.is_finite() && doubt.is_finite())
            .collect()
    }

    /// Whether the rows of a table, even or every second or third of them, make a matrix with a negative eigenvalue: what a
    /// short table shows more plainly than any window.
    pub fn rows_contradict(&self) -> bool {
        /// Rows of which the matrix is made.
        const ROWS: usize = 96;
        let step = self.kernel.rows().and_then(|(row, _)| Decimal::near(row, 12));
        step.is_some_and(|step| {
            [1, 2, 3, 4, 6, 8].into_iter().any(|multiple| {
                let step = step.times(multiple);
                candidate(step, &self.values(step, ROWS)).is_some()
            })
        })
    }

    /// With more instants, at the steps where negative power was seen, or the rows of a table.
    fn with_many(&self, negative: &[NegativePower]) -> Option<Witness> {
        let most = MANY.last().copied().unwrap_or(0);
        let seen = negative.iter().map(|seen| seen.step);
        let steps: Vec<Decimal> = match self.kernel.rows().and_then(|(row, _)| Decimal::near(row, 12)) {
            Some(row) => [1, 2, 3, 4, 6, 8].map(|multiple| row.times(multiple)).to_vec(),
            None => seen.filter_map(|step| Decimal::near(step, 2)).collect(),
        };
        let values: Vec<(Decimal, Vec<(f64, f64)>)> =
            steps.into_iter().map(|step| (step, self.values(step, most))).collect();
        let mut before = *FEW.end();
        for count in MANY {
            for (step, values) in &values {
                // A short table has no more than it has.
                let count = count.min(values.len());
                let found = values
                    .get(..count)
                    .filter(|values| values.len() > before)
                    .and_then(|values| candidate(*step, values))
                    .and_then(|one| self.proven(&one));
                if let Some(found) = found {
                    return Some(self.fewer(*step, values, before, count).unwrap_or(found));
                }
            }
            before = count;
        }
        None
    }

    /// The smallest number of instants between one that proves nothing and one that does.
    fn fewer(&self, step: Decimal, values: &[(f64, f64)], mut none: usize, mut some: usize) -> Option<Witness> {
        let mut best = None;
        while some - none > 1 {
            let middle = none.midpoint(some);
            let found = values
                .get(..middle)
                .and_then(|values| candidate(step, values))
                .and_then(|one| self.proven(&one));
            if found.is_some() {
                (best, some) = (found, middle);
            } else {
                none = middle;
            }
        }
        best
    }

    /// Thinned, rounded and proven.
    fn proven(&self, candidate: &Candidate) -> Option<Witness> {
        let thin = self.thinned(candidate);
        thin.as_ref()
            .and_then(|thin| self.rounded(thin))
            .or_else(|| self.rounded(candidate))
    }

    /// Fewer instants, at uneven distances: the one is left out without which the sum stays the most negative.
    fn thinned(&self, candidate: &Candidate) -> Option<Candidate> {
        let count = candidate.instants.len();
        if count <= 3 || count > MOST_THINNED {
            return None;
        }
        let values = self.values(candidate.step, count);
        let mut instants = candidate.instants.clone();
        let mut best = None;
        while instants.len() > 3 {
            let thinner = (0..instants.len()).filter_map(|out| {
                let mut rest = instants.clone();
                rest.remove(out);
                of_instants(candidate.step, rest, &values)
            });
            let Some(deepest) = thinner.min_by(|a, b| a.least.total_cmp(&b.least)) else {
                break;
            };
            // What is hardly negative would need long numbers.
            if deepest.least > 0.02 * candidate.least {
                break;
            }
            instants.clone_from(&deepest.instants);
            best = Some(deepest);
        }
        best
    }

    /// With the smallest whole weights that prove it and keep half of what the exact ones show, or else that prove it.
    fn rounded(&self, candidate: &Candidate) -> Option<Witness> {
        let largest = candidate
            .weights
            .iter()
            .fold(0.0, |most: f64, weight| most.max(weight.abs()));
        let mut best: Option<Witness> = None;
        for size in LARGEST_WEIGHTS {
            let whole = candidate
                .weights
                .iter()
                .map(|weight| (weight / largest * size).round() as i64);
            let (instants, weights): (Vec<i128>, Vec<i64>) = candidate
                .instants
                .iter()
                .copied()
                .zip(whole)
                .filter(|(_, weight)| *weight != 0)
                .unzip();
            let Some(start) = instants.first().copied() else {
                continue;
            };
            let instants: Vec<i128> = instants.iter().map(|instant| instant - start).collect();
            let sign = weights.first().map_or(1, |weight| weight.signum());
            let weights: Vec<i64> = weights.iter().map(|weight| sign * weight).collect();
            let square: f64 = weights.iter().map(|weight| (*weight as f64).powi(2)).sum();
            let Some(share) = self.share(candidate.step, &instants, &weights) else {
                continue;
            };
            let kept = share / square <= KEPT * candidate.least;
            if share >= 0.0 || !kept && best.is_some() {
                continue;
            }
            let times = instants.iter().map(|k| candidate.step.times(*k).digits).collect();
            let found = Witness::new(self.kernel, candidate.step.exponent, times, weights);
            if found.is_some() && kept {
                return found;
            }
            best = best.or(found);
        }
        best
    }

    /// The variance of a weighted sum as a share of the process's, with the doubts of a table but without rounding.
    fn share(&self, step: Decimal, instants: &[i128], weights: &[i64]) -> Option<f64> {
        let mut sum = 0.0;
        for (lag, coefficient) in coefficients(instants, weights)? {
            let (value, doubt) = self.kernel.known(step.times(lag).value())?;
            let coefficient = coefficient as f64;
            sum += (coefficient * value + coefficient.abs() * doubt) / self.variance;
        }
        Some(sum)
    }
}

/// Even instants with the eigenvector of the least eigenvalue, if it is negative whatever the doubts.
fn candidate(step: Decimal, values: &[(f64, f64)]) -> Option<Candidate> {
    of_instants(step, (0..values.len() as i128).collect(), values)
}

/// The same for any instants, in steps.
fn of_instants(step: Decimal, instants: Vec<i128>, values: &[(f64, f64)]) -> Option<Candidate> {
    /// Sweeps of the eigenvalue iteration, per row.
    const SWEEPS: usize = 100;
    let count = instants.len();
    let at = |one: usize, two: usize| {
        let lag = instants.get(one)?.checked_sub(*instants.get(two)?)?.unsigned_abs();
        values.get(usize::try_from(lag).ok()?).copied()
    };
    let matrix = DMatrix::from_fn(count, count, |row, column| {
        at(row, column).map_or(f64::NAN, |(value, _)| value)
    });
    if matrix.iter().any(|value| !value.is_finite()) {
        return None;
    }
    let eigen = SymmetricEigen::try_new(matrix, f64::EPSILON, SWEEPS * count)?;
    let (place, least) = eigen
        .eigenvalues
        .iter()
        .copied()
        .enumerate()
        .min_by(|a, b| a.1.total_cmp(&b.1))?;
    if least >= NEGATIVE * count as f64 {
        return None;
    }
    let weights: Vec<f64> = eigen.eigenvectors.column(place).iter().copied().collect();
    let mut doubts = 0.0;
    for (row, one) in weights.iter().enumerate() {
        for (column, two) in weights.iter().enumerate() {
            doubts += (one * two).abs() * at(row, column).map_or(f64::INFINITY, |(_, doubt)| doubt);
        }
    }
    let least = least + doubts;
    (least < 0.0).then_some(Candidate {
        step,
        instants,
        weights,
        least,
    })
}
