//! A covariance is symmetric and positive semidefinite, whatever the forms are.

use super::models::{Term, source, terms};
use crate::support::results;
use nalgebra::{DMatrix, SymmetricEigen};
use proptest::collection::vec;
use proptest::prelude::*;
use std::fmt::Write;

/// No ratio of two coefficients, so that a difference never vanishes.
const SHARE: f64 = 0.618_033_988_7;

/// A process `f0`, `f1`, ... for each list of terms.
fn forms(forms: &[Vec<Term>]) -> String {
    let mut text = String::new();
    for (index, terms) in forms.iter().enumerate() {
        let terms: Vec<String> = terms.iter().map(Term::text).collect();
        writeln!(text, "process f{index} = {}", terms.join(" + ")).unwrap();
    }
    text
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 48, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn symmetric_and_positive_semidefinite(
        sources in vec(source(), 2),
        lists in vec(terms(2, 1..4), 2..5),
    ) {
        let mut text = String::new();
        for (index, source) in sources.iter().enumerate() {
            writeln!(text, "{}", source.declaration(&format!("x{index}"))).unwrap();
        }
        text += &forms(&lists);
        let count = lists.len();
        for (i, j) in (0..count).flat_map(|i| (0..count).map(move |j| (i, j))) {
            writeln!(text, "margin plus_{i}_{j} = f{i} + f{j}\nmargin minus_{i}_{j} = f{i} - {SHARE} * f{j}").unwrap();
        }
        let results = results(&text);
        let variance = |name: String| results.moments(&name).number("standard_deviation").powi(2);
        // Var(A + B) - Var(A - s B) = 2 (1 + s) Cov(A, B) + (1 - s^2) Var B
        let covariance = DMatrix::from_fn(count, count, |i, j| {
            let both = variance(format!("plus_{i}_{j}")) - variance(format!("minus_{i}_{j}"));
            (both - (1.0 - SHARE * SHARE) * variance(format!("f{j}"))) / (2.0 * (1.0 + SHARE))
        });
        let largest = (0..count).map(|i| covariance[(i, i)]).fold(0.0, f64::max);
        let tiny = 1e-13 * largest;
        for i in 0..count {
            let own = variance(format!("f{i}"));
            prop_assert!((covariance[(i, i)] - own).abs() <= tiny, "variance of f{i}");
            for j in 0..i {
                let miss = (covariance[(i, j)] - covariance[(j, i)]).abs();
                prop_assert!(miss <= tiny, "{i}, {j}: {miss:e} of {largest:e} in\n{text}");
            }
        }
        let least = SymmetricEigen::new(covariance).eigenvalues.min();
        prop_assert!(least >= -tiny * count as f64, "{least:e} of {largest:e} in\n{text}");
    }
}
