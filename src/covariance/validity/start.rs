//! What a kernel does at lag zero.

use crate::covariance::kernel::Kernel;

/// A value that differs by more than that share from the one at lag zero is another.
const SAME: f64 = 1e-9;

/// The highest power of the lag with which a covariance function can begin to fall.
const FLATTEST: f64 = 2.0;

/// A start that no mean-square continuous process has.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Start {
    /// It jumps, to that share of the variance.
    Jump(f64),
    /// It is flatter than tau².
    Flat,
}

impl Start {
    /// What is wrong with the start of a kernel. One that jumps is that of white noise beside something else. One that is
    /// flatter than tau² has a derivative of variance 0, so that only a constant can have it (H. Cramér and
    /// M. R. Leadbetter 1967, Stationary and Related Stochastic Processes, sec. 7.4).
    pub fn fault(kernel: &Kernel, variance: f64, lags: impl Iterator<Item = f64>) -> Option<Self> {
        let start = kernel.expansion(FLATTEST + 1.0);
        if start.reason().is_some() {
            return None;
        }
        let varies = |value: f64| (value - variance).abs() > SAME * variance;
        if let Some(limit) = start.coefficient(0.0).filter(|limit| varies(*limit)) {
            return Some(Self::Jump(limit / variance));
        }
        let bend = start.terms().iter().find(|term| term.exponent > 0.0);
        let flat = bend.map_or(start.order() > FLATTEST, |term| term.exponent > FLATTEST);
        let mut values = lags.filter_map(|lag| kernel.value(lag).ok());
        (flat && values.any(varies)).then_some(Self::Flat)
    }
}
