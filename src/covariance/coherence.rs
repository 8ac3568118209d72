//! Coherence: how sources that are not independent go together, frequency by frequency.
//!
//! Two sources with the densities G and H have the one-sided cross density `gamma sqrt(G H)`, real, so that they are in
//! phase at every frequency. All coherences of a group of sources make a matrix that must have no negative eigenvalue at
//! any frequency, or some weighted sum of the sources had a negative density there (H. Cramér 1940, On the theory of
//! stationary random processes, Ann. Math. 41).

use super::form::SourceId;
use nalgebra::DMatrix;
use std::collections::{BTreeMap, HashMap};

/// The real coherence of two sources as a function of frequency.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Coherence {
    /// The same at all frequencies, between -1 and 1.
    Constant(f64),
    /// `exp(-rate omega)`, the rate in s and not negative, omega in rad/s. With the rate `decay distance / (2 pi speed)` this
    /// is the root coherence of gusts at two points (Davenport 1968, The dependence of wind loads on meteorological
    /// parameters).
    Decaying(f64),
}

impl Coherence {
    /// At omega >= 0, in rad/s.
    pub fn at(self, omega: f64) -> f64 {
        match self {
            Self::Constant(coherence) => coherence,
            Self::Decaying(rate) => (-rate * omega).exp(),
        }
    }
}

/// The coherences of a model; sources without one are independent.
#[derive(Clone, Debug, Default)]
pub struct Coherences {
    pairs: BTreeMap<(SourceId, SourceId), Coherence>,
    /// The group of each source that has coherences, by its least source.
    leaders: HashMap<SourceId, SourceId>,
}

/// A weighted sum of sources with a negative density.
#[derive(Clone, Debug, PartialEq)]
pub struct Violation {
    /// The sources, each scaled to a density of 1.
    pub sources: Vec<SourceId>,
    /// Their weights, as few digits as prove it.
    pub weights: Vec<f64>,
    /// The frequency in rad/s; 0 where it holds for all low frequencies.
    pub frequency: f64,
    /// The density of the weighted sum.
    pub density: f64,
}

/// Eigenvalues below minus this share of the size of the matrix are negative.
const NEGATIVE: f64 = 1e-9;

/// Frequencies looked at for a group whose coherences are not all constant or all decaying.
const FREQUENCIES: i32 = 240;

impl Coherences {
    /// Sets the coherence of two sources; false if they have one already, or are one.
    pub fn insert(&mut self, one: SourceId, other: SourceId, coherence: Coherence) -> bool {
        if one == other || self.between(one, other).is_some() {
            return false;
        }
        self.pairs.insert((one.min(other), one.max(other)), coherence);
        let (a, b) = (self.leader(one), self.leader(other));
        let (low, high) = (a.min(b), a.max(b));
        for source in [one, other] {
            self.leaders.insert(source, low);
        }
        self.leaders
            .values_mut()
            .filter(|leader| **leader == high)
            .for_each(|leader| *leader = low);
        true
    }

    fn leader(&self, source: SourceId) -> SourceId {
        self.leaders.get(&source).copied().unwrap_or(source)
    }

    /// The coherence of two sources; none where they are independent, or one.
    pub fn between(&self, one: SourceId, other: SourceId) -> Option<Coherence> {
        self.pairs.get(&(one.min(other), one.max(other))).copied()
    }

    /// All pairs, each once.
    pub fn pairs(&self) -> impl Iterator<Item = (SourceId, SourceId, Coherence)> {
        self.pairs
            .iter()
            .map(|((one, other), coherence)| (*one, *other, *coherence))
    }

    /// The group a source belongs to; none where it is independent of all others. Sources of different groups are independent.
    pub fn group(&self, source: SourceId) -> Option<SourceId> {
        self.leaders.get(&source).copied()
    }

    /// Whether no source has a coherence.
    pub fn is_empty(&self) -> bool {
        self.pairs.is_empty()
    }

    fn groups(&self) -> Vec<Vec<SourceId>> {
        let mut groups: BTreeMap<SourceId, Vec<SourceId>> = BTreeMap::new();
        for (source, leader) in &self.leaders {
            groups.entry(*leader).or_default().push(*source);
        }
        let mut groups: Vec<Vec<SourceId>> = groups.into_values().collect();
        groups.iter_mut().for_each(|group| group.sort());
        groups
    }

    /// The coherence matrix of a group at omega.
    fn matrix(&self, group: &[SourceId], omega: f64) -> DMatrix<f64> {
        DMatrix::from_fn(group.len(), group.len(), |row, column| {
            if row == column {
                return 1.0;
            }
            self.between(group[row], group[column])
                .map_or(0.0, |coherence| coherence.at(omega))
        })
    }

    /// Groups that no sources can be, with a proof each.
    pub fn violations(&self) -> Vec<Violation> {
        self.groups().iter().filter_map(|group| self.violation(group)).collect()
    }

    fn violation(&self, group: &[SourceId]) -> Option<Violation> {
        let frequencies = self.frequencies(group);
        let worst = frequencies
            .into_iter()
            .map(|omega| (omega, least_eigenvector(&self.matrix(group, omega))))
            .min_by(|(_, (one, _)), (_, (other, _))| one.total_cmp(other));
        let (frequency, (eigenvalue, vector)) = worst?;
        if eigenvalue >= -NEGATIVE * group.len() as f64 {
            return None;
        }
        let matrix = self.matrix(group, frequency);
        let weights = rounded(&matrix, &vector);
        let kept: Vec<usize> = (0..group.len()).filter(|index| weights[*index] != 0.0).collect();
        Some(Violation {
            sources: kept.iter().map(|index| group[*index]).collect(),
            weights: kept.iter().map(|index| weights[*index]).collect(),
            frequency,
            density: quadratic(&matrix, &weights),
        })
    }

    /// The frequencies at which a group is looked at: one where nothing decays; else from where the fastest decay has hardly begun
    /// to where the slowest is over.
    fn frequencies(&self, group: &[SourceId]) -> Vec<f64> {
        let rates = group.iter().enumerate().flat_map(|(index, one)| {
            let others = group[index + 1..].iter();
            others.filter_map(|other| match self.between(*one, *other) {
                Some(Coherence::Decaying(rate)) if rate > 0.0 => Some(rate),
                _ => None,
            })
        });
        let (least, most) = rates.fold((f64::INFINITY, 0.0_f64), |(least, most), rate| {
            (least.min(rate), most.max(rate))
        });
        if most == 0.0 {
            return vec![0.0];
        }
        // For small omega the least eigenvalue of what is impossible is about omega times that of the rates.
        let (from, to) = (1e-3 / most, 40.0 / least);
        let step = (to / from).ln() / f64::from(FREQUENCIES);
        let between = (0..=FREQUENCIES).map(|index| from * (step * f64::from(index)).exp());
        [0.0].into_iter().chain(between).collect()
    }
}

fn least_eigenvector(matrix: &DMatrix<f64>) -> (f64, Vec<f64>) {
    let eigen = matrix.clone().symmetric_eigen();
    let least = (0..eigen.eigenvalues.len()).min_by(|a, b| eigen.eigenvalues[*a].total_cmp(&eigen.eigenvalues[*b]));
    match least {
        Some(index) => (
            eigen.eigenvalues[index],
            eigen.eigenvectors.column(index).iter().copied().collect(),
        ),
        None => (1.0, Vec::new()),
    }
}

fn quadratic(matrix: &DMatrix<f64>, weights: &[f64]) -> f64 {
    (0..weights.len())
        .flat_map(|row| (0..weights.len()).map(move |column| (row, column)))
        .map(|(row, column)| weights[row] * weights[column] * matrix[(row, column)])
        .sum()
}

/// The vector with its largest entry 1 or -1, its first not negative, and the fewest decimals with which its quadratic form is still clearly negative.
fn rounded(matrix: &DMatrix<f64>, vector: &[f64]) -> Vec<f64> {
    let largest = vector.iter().copied().fold(
        0.0,
        |most: f64, entry| if entry.abs() > most.abs() { entry } else { most },
    );
    // What counts for nothing has no sign.
    let first = vector.iter().find(|entry| entry.abs() > 1e-9 * largest.abs());
    let size = largest.abs().copysign(first.copied().unwrap_or(1.0));
    let scaled: Vec<f64> = vector.iter().map(|entry| entry / size).collect();
    let exact = quadratic(matrix, &scaled);
    (0..15)
        .map(|decimals| 10.0_f64.powi(decimals))
        .map(|scale| -> Vec<f64> { scaled.iter().map(|entry| (entry * scale).round() / scale).collect() })
        .find(|weights| quadratic(matrix, weights) < 0.5 * exact)
        .unwrap_or(scaled)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn constant(values: &[(u32, u32, f64)]) -> Coherences {
        let mut coherences = Coherences::default();
        for (one, other, value) in values {
            assert!(coherences.insert(SourceId(*one), SourceId(*other), Coherence::Constant(*value)));
        }
        coherences
    }

    fn decaying(rates: &[(u32, u32, f64)]) -> Coherences {
        let mut coherences = Coherences::default();
        for (one, other, rate) in rates {
            assert!(coherences.insert(SourceId(*one), SourceId(*other), Coherence::Decaying(*rate)));
        }
        coherences
    }

    /// With two correlations fixed the third lies between r s - sqrt((1 - r²)(1 - s²)) and r s + sqrt(...): here from 0.62 to 1.
    #[test]
    fn three_pairwise_coherences() {
        assert_eq!(constant(&[(0, 1, 0.9), (1, 2, 0.9), (0, 2, 0.621)]).violations(), []);
        let violations = constant(&[(0, 1, 0.9), (1, 2, 0.9), (0, 2, 0.619)]).violations();
        let [violation] = violations.as_slice() else {
            panic!("{violations:?}");
        };
        assert!(violation.density < 0.0 && violation.sources.len() == 3);
        let violations = constant(&[(0, 1, 0.9), (1, 2, 0.9), (0, 2, -0.2)]).violations();
        assert_eq!(violations[0].weights, [1.0, -1.0, 1.0]);
        assert!((violations[0].density - (3.0 - 3.6 - 0.4)).abs() < 1e-12);
    }

    /// What is not named is independent, and counts.
    #[test]
    fn a_chain_of_strong_coherences() {
        assert_eq!(constant(&[(3, 4, 0.9), (4, 5, 0.9)]).violations().len(), 1);
        assert_eq!(constant(&[(3, 4, 0.7), (4, 5, 0.7)]).violations(), []);
        assert_eq!(constant(&[(0, 1, 1.0), (2, 3, -1.0)]).violations(), []);
    }

    /// exp(-a |x - y|) is a covariance in space, and so are its powers (Schoenberg 1938, Metric spaces and positive definite
    /// functions): points on a line or in a plane always go together. Distances that break the triangle do not.
    #[test]
    fn points_and_impossible_distances() {
        assert_eq!(decaying(&[(0, 1, 1.0), (1, 2, 2.0), (0, 2, 3.0)]).violations(), []);
        let sloping = 2.0_f64.sqrt();
        let square = [
            (0, 1, 1.0),
            (1, 2, 1.0),
            (2, 3, 1.0),
            (0, 3, 1.0),
            (0, 2, sloping),
            (1, 3, sloping),
        ];
        assert_eq!(decaying(&square).violations(), []);
        let violations = decaying(&[(0, 1, 1.0), (1, 2, 1.0), (0, 2, 5.0)]).violations();
        assert!(violations[0].frequency > 0.0 && violations[0].density < 0.0);
    }

    #[test]
    fn groups_grow_together() {
        let coherences = constant(&[(4, 5, 0.1), (1, 2, 0.1), (2, 5, 0.1)]);
        let group = |source| coherences.group(SourceId(source));
        assert_eq!(group(4), group(1));
        assert_eq!(group(3), None);
        let mut coherences = coherences;
        assert!(!coherences.insert(SourceId(5), SourceId(4), Coherence::Constant(0.2)));
        assert!(!coherences.insert(SourceId(5), SourceId(5), Coherence::Constant(0.2)));
    }
}
