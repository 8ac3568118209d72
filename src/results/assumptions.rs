//! What the results of a limit state rest on, in words, with the numbers that matter.

use super::limit_state::{DIGITS, Judged, LOW_BARRIER};
use super::{Assumption, coherences, responses};
use crate::reliability::first_passage::{FirstPassage, Method, ln_clumping};
use crate::units::show_number;

/// Below this bandwidth entries come in clumps (Vanmarcke 1975, "On the distribution of the first-passage time for
/// normal stationary random processes", J. Appl. Mech. 42; the figure itself is common practice, no source).
const NARROW_BAND: f64 = 0.3;

impl Judged<'_> {
    /// That entries come in clumps, with what that makes of the result where it can be told.
    fn narrow_band(&self, bandwidth: f64) -> Assumption {
        let limit_state = self.limit_state;
        let corrected = FirstPassage::new(&self.margin, limit_state.region, Method::Vanmarcke)
            .within(limit_state.reference_period.seconds)
            .failure();
        let by_vanmarcke = if corrected.is_finite() {
            let corrected = show_number(corrected, 3);
            format!("; by `first passage vanmarcke` it is {corrected} over the reference period")
        } else {
            String::new()
        };
        let bandwidth = show_number(bandwidth, 3);
        Assumption {
            code: "narrow-band",
            text: format!(
                "The margin is narrow-banded (bandwidth {bandwidth}, below 0.3): entries come in clumps, so the failure \
                 probability is likely overstated{by_vanmarcke}."
            ),
        }
    }

    fn of_method(&self) -> Assumption {
        let (code, text) = match self.limit_state.method {
            Method::Poisson => (
                "poisson-crossings",
                "Entries into failure are counted as a Poisson process, whatever the start: right for barriers far from \
                 the mean."
                    .to_string(),
            ),
            Method::PoissonSafeStart => (
                "poisson-crossings",
                "Entries into failure are counted as a Poisson process among those that are safe: right for barriers far \
                 from the mean."
                    .to_string(),
            ),
            Method::Vanmarcke => {
                let factor = self.clumping().map_or("not known".to_string(), |factor| show_number(factor, 3));
                let bandwidth = self.margin.bandwidth.map_or("not known".to_string(), |q| show_number(q, 3));
                (
                    "clumped-crossings",
                    format!(
                        "Entries into failure come in clumps, and some time is spent in failure: their rate is multiplied by \
                         {factor}, which follows from the bandwidth {bandwidth} of the margin (Vanmarcke 1975)."
                    ),
                )
            }
        };
        Assumption { code, text }
    }

    /// What clumping and the time spent in failure make of the rate of entries.
    fn clumping(&self) -> Option<f64> {
        Some(ln_clumping(&self.margin, self.limit_state.region, self.margin.bandwidth?)?.exp())
    }

    pub(super) fn assumptions(&self) -> Vec<Assumption> {
        let mut assumptions = vec![
            Assumption {
                code: "stationary-gaussian",
                text: "The processes are Gaussian, and their statistics stay the same during the whole time.".into(),
            },
            self.of_method(),
        ];
        for (source, _) in self.limit_state.margin.by_source() {
            let notes = self
                .sources
                .get(source.0 as usize)
                .map_or(&[][..], |source| &source.notes);
            assumptions.extend(notes.iter().map(|note| Assumption {
                code: "kernel",
                text: note.clone(),
            }));
        }
        if let Some(other) = self.other_side() {
            assumptions.push(Assumption {
                code: "one-sided",
                text: format!(
                    "Only one side fails. The mean is 0, so the margin is as often beyond {other} on the other side, \
                     which does not count."
                ),
            });
        }
        assumptions.extend(responses::assumptions(&self.limit_state.margin));
        if let Some(known) = self.coherences {
            assumptions.extend(coherences::assumptions(&self.limit_state.margin, self.sources, known));
        }
        let reduced = self.reduced_barrier();
        if reduced < LOW_BARRIER {
            let time = self.limit_state.reference_period.seconds;
            let (least, most) = self.passage.bounds(time);
            let (least, most) = (
                show_number(least.failure(), DIGITS),
                show_number(most.failure(), DIGITS),
            );
            let distance = show_number(reduced.abs(), 3);
            let where_it_is = if reduced > 0.0 {
                format!("The barrier is only {distance} standard deviations from the mean")
            } else {
                format!("The mean itself is failed, {distance} standard deviations beyond the barrier")
            };
            assumptions.push(Assumption {
                code: "low-barrier",
                text: format!(
                    "{where_it_is}, so entries are not rare and the formula is outside its range (2 or more). \
                     Requirements are judged on what holds in any case: the failure probability over the reference \
                     period is at least {least} and at most {most}."
                ),
            });
        }
        if self.margin.bandwidth.is_none() {
            assumptions.push(Assumption {
                code: "bandwidth-unknown",
                text: "The bandwidth of the margin is not known, so it was not checked whether entries come in clumps."
                    .into(),
            });
        }
        let narrow = self.margin.bandwidth.filter(|bandwidth| *bandwidth < NARROW_BAND);
        if let Some(bandwidth) = narrow.filter(|_| self.limit_state.method != Method::Vanmarcke) {
            assumptions.push(self.narrow_band(bandwidth));
        }
        assumptions
    }
}
