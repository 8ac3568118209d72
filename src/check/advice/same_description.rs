//! Processes of one margin that are described in the same way: independent of each other, or the same one twice?

use super::Finished;
use crate::covariance::form::{Operator, SourceId, Term};
use crate::diagnostics::{Code, Diagnostic};
use crate::source::Span;
use crate::units::show;
use std::collections::HashSet;

/// At most so many of one description are named.
const MOST_NAMED: usize = 4;

impl Finished<'_> {
    pub(super) fn same_descriptions(&self) -> Vec<Diagnostic> {
        let mut told = HashSet::new();
        let mut found = Vec::new();
        for state in &self.lowered.model.limit_states {
            let groups: Vec<(SourceId, &[Term])> = state.margin.by_source().collect();
            if groups.len() > super::MOST_TERMS {
                continue;
            }
            let mut alike: Vec<Vec<(SourceId, &[Term])>> = Vec::new();
            for (id, terms) in groups {
                match alike
                    .iter_mut()
                    .find(|group| group.first().is_some_and(|first| self.is_alike(first.0, id)))
                {
                    Some(group) => group.push((id, terms)),
                    None => alike.push(vec![(id, terms)]),
                }
            }
            for group in alike.iter().filter(|group| group.len() > 1) {
                let ids: Vec<SourceId> = group.iter().map(|(id, _)| *id).collect();
                if told.insert(ids) {
                    found.extend(self.same_description(state, group));
                }
            }
        }
        found
    }

    fn mean_of(&self, id: SourceId) -> Option<f64> {
        let source = self.lowered.model.sources.get(id.0 as usize)?;
        let named = self
            .lowered
            .model
            .varying
            .iter()
            .find(|named| named.place == source.place && named.name == source.name);
        named.map(|named| named.form.mean())
    }

    fn is_alike(&self, one: SourceId, other: SourceId) -> bool {
        let sources = &self.lowered.model.sources;
        if self.lowered.model.coherences.between(one, other).is_some() {
            return false;
        }
        match (sources.get(one.0 as usize), sources.get(other.0 as usize)) {
            (Some(a), Some(b)) => a.law == b.law && self.mean_of(one) == self.mean_of(other),
            _ => false,
        }
    }

    fn same_description(
        &self,
        state: &crate::check::model::LimitState,
        group: &[(SourceId, &[Term])],
    ) -> Option<Diagnostic> {
        let sources: Vec<_> = group
            .iter()
            .filter_map(|(id, _)| self.lowered.model.sources.get(id.0 as usize))
            .collect();
        let (first, others) = sources.split_first()?;
        let last = others.last()?;
        let names: Vec<String> = sources
            .iter()
            .take(MOST_NAMED)
            .map(|source| format!("`{}`", source.name))
            .collect();
        let listed = match sources.len().checked_sub(MOST_NAMED).filter(|more| *more > 0) {
            Some(more) => format!("{} and {more} more", names.join(", ")),
            None => names.join(" and "),
        };
        let message = format!(
            "{listed} have one description, and are independent of each other in `{}`",
            state.name
        );
        let effect = self.if_the_same(state, group);
        let mut places: Vec<Span> = vec![last.place];
        let mut finding = Diagnostic::new(Code::ProcessSameDescription, last.place, message)
            .here(effect.unwrap_or_else(|| "described like the others".to_string()))
            .help(
                "if they are one process, declare it once and name it in each place; if they are not, write \
                 `accept process/same-description because \"...\"`",
            );
        for source in std::iter::once(first).chain(others).take(MOST_NAMED) {
            if !places.contains(&source.place) {
                places.push(source.place);
                finding = finding.label(source.place, "described in the same way");
            }
        }
        Some(finding)
    }

    /// What the standard deviation of the margin would be if all were one.
    fn if_the_same(&self, state: &crate::check::model::LimitState, group: &[(SourceId, &[Term])]) -> Option<String> {
        let independent = self.covariance(&state.margin, 0.0)?;
        let kernel = self.lowered.model.sources.get(group.first()?.0.0 as usize)?.kernel()?;
        let mut shared = 0.0;
        for (index, (_, terms)) in group.iter().enumerate() {
            for (_, others) in &group[index + 1..] {
                for a in *terms {
                    for b in *others {
                        let is_delay = |term: &Term| {
                            term.operator.derivatives == 0 && term.operator.systems == Operator::IDENTITY.systems
                        };
                        if !(is_delay(a) && is_delay(b)) {
                            return None;
                        }
                        let lag = (a.operator.delay - b.operator.delay).abs();
                        shared += 2.0 * a.coefficient() * b.coefficient() * kernel.value(lag).ok()?;
                    }
                }
            }
        }
        let one = (independent + shared).max(0.0).sqrt();
        Some(format!(
            "the margin's standard deviation is {}; if they are the same process it is {}",
            show(independent.sqrt(), &state.unit, 4),
            show(one, &state.unit, 4)
        ))
    }
}
