//! `correlate X, Y with ...`: coherence between processes that would else be independent.

use super::arguments::Arguments;
use super::not_yet::Later;
use super::{Lowering, Scope};
use crate::check::names::{ItemId, Resolved};
use crate::check::value::{Number, Value};
use crate::covariance::coherence::{Coherence, Violation};
use crate::covariance::form::{Operator, SourceId};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Argument, Call, DeclarationKind, DefinitionKeyword, Expression, ExpressionKind, Path};
use crate::source::Span;
use crate::units::{Dimension, show_number};
use std::f64::consts::TAU;

/// The coherence that falls with frequency and distance.
const EXPONENTIAL: &str = "exponential_coherence";

/// So many processes are named at most by one `correlate`: each pair of them is a coherence.
const MOST_NAMES: usize = 300;

/// Digits of numbers in a message.
const DIGITS: usize = 4;

/// A process that is named by `correlate`.
struct Member {
    source: SourceId,
    place: Span,
}

/// A position, each coordinate with its name, in m.
type Position = Vec<(Box<str>, f64)>;

impl Lowering<'_, '_, '_> {
    pub(super) fn correlate(&mut self, item: ItemId, names: &[Path], value: &Expression) {
        let scope = Scope::plain(self.names.item(item).instance);
        let keyword = self.names.declaration(item).keyword;
        if names.len() > MOST_NAMES {
            let message = format!("`correlate` names at most {MOST_NAMES} processes");
            self.report(Diagnostic::new(Code::ModelTooLarge, keyword, message).help("make several groups of them"));
            return;
        }
        let faults = self.diagnostics.len();
        let members: Vec<Option<Member>> = names.iter().map(|path| self.member(path, scope)).collect();
        if names.len() < 2 {
            let message = "a coherence is between two processes or more";
            self.report(
                Diagnostic::new(Code::CoherenceSubject, keyword, message)
                    .help("name the others: `correlate X, Y with ...`"),
            );
        }
        let coherences = match &value.kind {
            ExpressionKind::Call(call) if super::word_text(&call.function) == EXPONENTIAL => {
                self.exponential(call, names.len(), scope)
            }
            _ => self
                .constant(value, scope)
                .map(|coherence| vec![coherence; names.len() * names.len()]),
        };
        let members: Option<Vec<Member>> = members.into_iter().collect();
        let (Some(members), Some(coherences)) = (members, coherences) else {
            return;
        };
        if self.diagnostics.len() > faults {
            return;
        }
        for (index, one) in members.iter().enumerate() {
            for (later, other) in members.iter().enumerate().skip(index + 1) {
                if let Some(coherence) = coherences.get(index * members.len() + later) {
                    self.pair(one, other, *coherence);
                }
            }
        }
    }

    /// The source of a process that is named.
    fn member(&mut self, path: &Path, scope: Scope<'_>) -> Option<Member> {
        let item = match self.names.resolve(path, scope.instance) {
            Ok(Resolved::Item(item)) => item,
            Ok(Resolved::Fault) => return None,
            Err(unknown) => {
                self.unknown_name(path, &unknown, scope);
                return None;
            }
        };
        if let DeclarationKind::Definition {
            keyword: DefinitionKeyword::Variable,
            ..
        } = self.names.declaration(item).kind
        {
            self.not_yet(path.span, Later::Correlations);
            return None;
        }
        let form = match &self.values[item.index()] {
            Some(Value::Form(varying)) => varying.form.clone(),
            Some(Value::Fault) => return None,
            _ => {
                let help = "name processes that are declared with `gaussian(...)`";
                self.wrong_kind(path.span, "something that does not vary", "a process", help);
                return None;
            }
        };
        let source = match form.terms() {
            [term] if term.operator == Operator::IDENTITY && term.coefficient() == 1.0 => term.source,
            _ => {
                let message = "only a process of its own can be made coherent with another";
                self.report(
                    Diagnostic::new(Code::CoherenceSubject, path.span, message)
                        .here("made from other processes")
                        .help("name the processes that it is made from: what is made from them follows"),
                );
                return None;
            }
        };
        let known = self.model.sources.get(source.0 as usize)?;
        let has_lines = !known.spectral().lines().is_ok_and(|lines| lines.is_empty());
        if has_lines {
            let message = format!(
                "`{}` has all its variance, or a part, at single frequencies: it has no coherence",
                known.name
            );
            let finding = Diagnostic::new(Code::CoherenceSubject, path.span, message)
                .here("has spectral lines")
                .help("make a common process with the kernel `harmonic(...)`, and build both from it");
            self.report(finding);
            return None;
        }
        Some(Member {
            source,
            place: path.span,
        })
    }

    fn constant(&mut self, value: &Expression, scope: Scope<'_>) -> Option<Coherence> {
        let scalar = self.number(value, scope, Dimension::PLAIN, "a coherence", None)?;
        let Number::Known(number) = scalar.value else {
            return None;
        };
        if (-1.0..=1.0).contains(&number) {
            return Some(Coherence::Constant(number));
        }
        let message = "a coherence lies between -1 and 1";
        let mut finding = Diagnostic::new(Code::ValueRange, value.span, message)
            .here(format!("this is {}", show_number(number, DIGITS)));
        if (1.0..=100.0).contains(&number) {
            finding.help = Some(format!(
                "write `{} %` if a percentage is meant",
                self.as_written(value.span)
            ));
        }
        self.report(finding);
        None
    }

    /// The coherences of all pairs, row by row.
    fn exponential(&mut self, call: &Call, count: usize, scope: Scope<'_>) -> Option<Vec<Coherence>> {
        let arguments = self.arguments(call, &[], &["decay", "mean_speed", "distance", "at"])?;
        let speed = self.required(&arguments, "mean_speed", "25 m/s");
        let speed = speed.and_then(|speed| self.above_zero(speed, Dimension::SPEED, "the mean speed", scope));
        let decay = self.required(&arguments, "decay", "10");
        let distances = self.distances(call, &arguments, count, decay?, scope);
        let (speed, distances) = (speed?, distances?);
        // exp(-decay f distance / speed), f = omega / (2 pi).
        Some(
            distances
                .into_iter()
                .map(|distance| Coherence::Decaying(distance / (TAU * speed)))
                .collect(),
        )
    }

    fn above_zero(
        &mut self,
        expression: &Expression,
        dimension: Dimension,
        what: &str,
        scope: Scope<'_>,
    ) -> Option<f64> {
        let scalar = self.number(expression, scope, dimension, what, None)?;
        match scalar.value {
            Number::Known(value) if value > 0.0 => Some(value),
            Number::Known(_) => {
                let message = format!("{what} must be greater than 0");
                self.report(Diagnostic::new(Code::ValueRange, expression.span, message));
                None
            }
            Number::Open(_) | Number::Unset => None,
        }
    }

    /// A decay times a distance for each pair, row by row, in m.
    fn distances(
        &mut self,
        call: &Call,
        arguments: &Arguments<'_>,
        count: usize,
        decay: &Expression,
        scope: Scope<'_>,
    ) -> Option<Vec<f64>> {
        match (arguments.get("distance"), arguments.get("at")) {
            (Some(distance), None) => {
                let decay = self.above_zero(decay, Dimension::PLAIN, "a decay", scope);
                let distance = self.above_zero(distance, Dimension::LENGTH, "a distance", scope);
                Some(vec![decay? * distance?; count * count])
            }
            (None, Some(at)) => {
                let positions = self.positions(at, count, scope)?;
                let decays = self.decays(decay, positions.first()?, scope)?;
                let apart = |one: &Position, other: &Position| {
                    let squares = one.iter().zip(other).zip(&decays);
                    squares
                        .map(|(((_, a), (_, b)), decay)| (decay * (a - b)).powi(2))
                        .sum::<f64>()
                        .sqrt()
                };
                Some(
                    positions
                        .iter()
                        .flat_map(|one| positions.iter().map(move |other| apart(one, other)))
                        .collect(),
                )
            }
            (given, _) => {
                let message = if given.is_some() {
                    "the distance is given twice: by itself and by points"
                } else {
                    "nothing says how far apart the processes are"
                };
                self.report(Diagnostic::new(Code::CallArgument, call.brackets, message).help(
                    "give `distance: 20 m` between any two, or `at: points((x: 0 m), (x: 20 m))` with a point for each process",
                ));
                None
            }
        }
    }

    /// The decay of each coordinate: one for all, or one by name.
    fn decays(&mut self, decay: &Expression, first: &Position, scope: Scope<'_>) -> Option<Vec<f64>> {
        let ExpressionKind::Group(given) = &decay.kind else {
            let decay = self.above_zero(decay, Dimension::PLAIN, "a decay", scope)?;
            return Some(vec![decay; first.len()]);
        };
        let named = self.coordinates(given, decay.span, Dimension::PLAIN, "a decay", scope)?;
        if named.len() != first.len() {
            self.other_coordinates(decay.span, first);
            return None;
        }
        let found: Option<Vec<f64>> = first
            .iter()
            .map(|(name, _)| named.iter().find(|(known, _)| known == name).map(|(_, value)| *value))
            .collect();
        match found {
            Some(decays) if decays.iter().all(|decay| *decay >= 0.0) => Some(decays),
            Some(_) => {
                self.report(Diagnostic::new(
                    Code::ValueRange,
                    decay.span,
                    "a decay must not be negative",
                ));
                None
            }
            None => {
                self.other_coordinates(decay.span, first);
                None
            }
        }
    }

    /// The points of `points((x: 0 m), ...)`, one for each process, all with the same coordinates in one order.
    fn positions(&mut self, at: &Expression, count: usize, scope: Scope<'_>) -> Option<Vec<Position>> {
        let call = match &at.kind {
            ExpressionKind::Call(call) if super::word_text(&call.function) == "points" => call,
            _ => {
                let help = "write `at: points((x: 0 m), (x: 20 m))`, with a point for each process";
                self.wrong_kind(at.span, "no list of points", "one", help);
                return None;
            }
        };
        if call.arguments.len() != count {
            let message = format!("{} points are given for {count} processes", call.arguments.len());
            self.report(
                Diagnostic::new(Code::CallArgument, call.brackets, message)
                    .help("give a point for each process, in the order of their names"),
            );
            return None;
        }
        let mut positions: Vec<Position> = Vec::with_capacity(count);
        for point in &call.arguments {
            let (None, ExpressionKind::Group(coordinates)) = (&point.name, &point.value.kind) else {
                self.wrong_kind(
                    point.value.span,
                    "no point",
                    "one",
                    "write `(x: 20 m)` or `(y: 4 m, z: 60 m)`",
                );
                return None;
            };
            let mut position =
                self.coordinates(coordinates, point.value.span, Dimension::LENGTH, "a coordinate", scope)?;
            position.sort_by(|(one, _), (other, _)| one.cmp(other));
            if let Some(first) = positions.first()
                && !first
                    .iter()
                    .map(|(name, _)| name)
                    .eq(position.iter().map(|(name, _)| name))
            {
                let first = first.clone();
                self.other_coordinates(point.value.span, &first);
                return None;
            }
            positions.push(position);
        }
        Some(positions)
    }

    fn other_coordinates(&mut self, place: Span, first: &Position) {
        let names: Vec<String> = first.iter().map(|(name, _)| format!("`{name}`")).collect();
        let message = format!(
            "the coordinates here are not those of the first point: {}",
            names.join(", ")
        );
        self.report(Diagnostic::new(Code::CallArgument, place, message).help("name the same coordinates everywhere"));
    }

    fn coordinates(
        &mut self,
        given: &[Argument],
        place: Span,
        dimension: Dimension,
        what: &str,
        scope: Scope<'_>,
    ) -> Option<Position> {
        let mut position = Position::new();
        for argument in given {
            let name = argument.name.as_ref()?;
            if position.iter().any(|(known, _)| *known == name.text) {
                let message = format!("`{}` is given twice", name.text);
                self.report(Diagnostic::new(Code::CallArgument, name.span, message).help("remove one of them"));
                return None;
            }
            let scalar = self.number(&argument.value, scope, dimension, what, None)?;
            let Number::Known(value) = scalar.value else {
                return None;
            };
            position.push((name.text.clone(), value));
        }
        if position.is_empty() {
            self.report(Diagnostic::new(Code::CallArgument, place, "no coordinate is given"));
            return None;
        }
        Some(position)
    }

    fn pair(&mut self, one: &Member, other: &Member, coherence: Coherence) {
        if self.model.coherences.insert(one.source, other.source, coherence) {
            self.correlated.insert(
                (one.source.min(other.source), one.source.max(other.source)),
                other.place,
            );
            return;
        }
        if one.source == other.source {
            let message = "a process is fully coherent with itself: it is named twice";
            self.report(
                Diagnostic::new(Code::CoherenceSubject, other.place, message)
                    .here("again here")
                    .label(one.place, "first here")
                    .help("name two different processes"),
            );
            return;
        }
        let name = |id: SourceId| self.model.sources.get(id.0 as usize).map_or("", |source| &source.name);
        let message = format!(
            "the coherence of `{}` and `{}` is given twice",
            name(one.source),
            name(other.source)
        );
        let mut finding = Diagnostic::new(Code::CoherenceSubject, other.place, message).here("again here");
        let key = (one.source.min(other.source), one.source.max(other.source));
        if let Some(first) = self.correlated.get(&key) {
            finding = finding.label(*first, "first here");
        }
        self.report(finding.help("keep one of the two"));
    }

    /// Refuses coherences that no processes can have together.
    pub(super) fn impossible_coherences(&mut self) {
        for violation in self.model.coherences.violations() {
            let finding = self.impossible(&violation);
            self.report(finding);
        }
    }

    fn impossible(&self, violation: &Violation) -> Diagnostic {
        let name = |id: &SourceId| self.model.sources.get(id.0 as usize).map_or("", |source| &source.name);
        let shown = violation.sources.iter().take(MOST_SHOWN);
        let names: Vec<String> = shown.map(|id| format!("`{}`", name(id))).collect();
        let more = violation.sources.len().saturating_sub(MOST_SHOWN);
        let listed = match names.split_last() {
            _ if more > 0 => format!("{} and {more} more", names.join(", ")),
            Some((last, others)) if !others.is_empty() => format!("{} and {last}", others.join(", ")),
            _ => names.join(", "),
        };
        let weights: Vec<String> = violation
            .weights
            .iter()
            .take(MOST_SHOWN)
            .map(|weight| show_number(*weight, 12))
            .collect();
        let frequency = violation.frequency / TAU;
        let at = if frequency == 0.0 {
            "at every frequency".to_string()
        } else {
            format!("at {} Hz", show_number(frequency, DIGITS))
        };
        let place = violation
            .sources
            .iter()
            .flat_map(|one| violation.sources.iter().map(move |other| (*one, *other)))
            .filter_map(|pair| self.correlated.get(&pair))
            .max_by_key(|span| (span.file, span.range().start));
        let place = place.copied().unwrap_or_else(|| Span::new(self.model.file, 0, 0));
        let message = format!("no processes have these coherences: {listed}");
        let dots = if more > 0 { ", ..." } else { "" };
        let mut finding = Diagnostic::new(Code::CoherenceImpossible, place, message)
            .here(format!(
                "{at}, each scaled to a density of 1, their sum with the weights {}{dots} has the density {}",
                weights.join(", "),
                show_number(violation.density, DIGITS)
            ))
            .help(
                "two processes that are both coherent with a third are so with each other: raise what is missing or small, or \
                 lower the others; pairs that are not named are independent",
            );
        for id in violation.sources.iter().take(MOST_SHOWN) {
            if let Some(source) = self.model.sources.get(id.0 as usize) {
                finding = finding.label(source.place, "one of them");
            }
        }
        finding
    }
}

/// So many processes of a group are named in a message.
const MOST_SHOWN: usize = 6;
