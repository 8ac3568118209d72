//! Whether a demand is met.

/// The judgement of a requirement.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Verdict {
    /// The demand holds, beyond the numerical error and beyond what the method leaves open.
    Met,
    /// The demand does not hold.
    NotMet,
    /// The numerical error, or a method used outside its range, does not allow to say.
    NotEstablished,
}

impl Verdict {
    /// The words of the JSON contract.
    pub fn words(self) -> &'static str {
        match self {
            Self::Met => "met",
            Self::NotMet => "not met",
            Self::NotEstablished => "not established",
        }
    }
}

/// Whether at least or at most so much is demanded.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Demand {
    /// At least this much.
    AtLeast(f64),
    /// At most this much.
    AtMost(f64),
}

impl Demand {
    /// The limit demanded.
    pub fn limit(self) -> f64 {
        match self {
            Self::AtLeast(limit) | Self::AtMost(limit) => limit,
        }
    }

    /// Judges a value known to lie between two others, ends included.
    pub fn judge(self, low: f64, high: f64) -> Verdict {
        let (all, none) = match self {
            Self::AtLeast(limit) => (low >= limit, high < limit),
            Self::AtMost(limit) => (high <= limit, low > limit),
        };
        match (all, none) {
            (true, _) => Verdict::Met,
            (_, true) => Verdict::NotMet,
            _ => Verdict::NotEstablished,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn only_a_whole_interval_decides() {
        assert_eq!(Demand::AtLeast(3.8).judge(3.81, 3.82), Verdict::Met);
        assert_eq!(Demand::AtLeast(3.8).judge(3.79, 3.81), Verdict::NotEstablished);
        assert_eq!(Demand::AtLeast(3.8).judge(3.7, 3.79), Verdict::NotMet);
        assert_eq!(Demand::AtMost(1e-4).judge(1e-5, 1e-4), Verdict::Met);
        assert_eq!(Demand::AtMost(1e-4).judge(2e-4, 3e-4), Verdict::NotMet);
        assert_eq!(Demand::AtMost(1e-4).judge(f64::NAN, f64::NAN), Verdict::NotEstablished);
    }
}
