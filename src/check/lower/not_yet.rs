//! What the language has and this version does not compute: one clear sentence, and what to write until then.

use super::Lowering;
use crate::diagnostics::{Code, Diagnostic};
use crate::source::Span;

/// A part of the language that is read and not computed.
#[derive(Clone, Copy)]
pub(super) enum Later {
    Variables,
    Correlations,
    Quantities,
    Profiles,
    Time,
    Climates,
    Systems,
    Hazards,
}

impl Later {
    fn what(self) -> &'static str {
        match self {
            Self::Variables => "random variables",
            Self::Correlations => "correlated variables",
            Self::Quantities => "quantities in time and variables",
            Self::Profiles => "profiles of time",
            Self::Time => "quantities that change with the time `t`",
            Self::Climates => "climates",
            Self::Systems => "systems of several conditions",
            Self::Hazards => "annual and point-in-time quantities",
        }
    }

    fn advice(self) -> &'static str {
        match self {
            Self::Variables => {
                "use a `parameter` with a cautious value, such as a 5 % fractile; a process would be drawn anew all the time"
            }
            Self::Correlations => "leave it out",
            Self::Quantities => "use a `constant` or a `parameter`",
            Self::Profiles | Self::Time => "use a `constant` with the least favourable value of the service life",
            Self::Climates => "use a `parameter` for the state, and evaluate the states one by one",
            Self::Systems => {
                "make a limit state of each condition: their failure probabilities add up to an upper bound of `any`"
            }
            Self::Hazards => "use `failure_probability` with its period",
        }
    }
}

impl Lowering<'_, '_, '_> {
    /// Reports something that this version does not compute.
    pub(super) fn not_yet(&mut self, place: Span, later: Later) {
        let message = format!("this version does not compute {} yet", later.what());
        self.report(
            Diagnostic::new(Code::LanguageNotYet, place, message)
                .here("part of the language, but not of this version")
                .help(later.advice()),
        );
    }
}
