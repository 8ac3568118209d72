//! Limit states: what failure is, over how long, by which method, and what is required.

use super::definition::TIME_INVARIANT;
use super::mismatch::{Wanted, in_brackets, literal};
use super::not_yet::Later;
use super::{Lowering, Scope, unit_or_si};
use crate::check::model::{LimitQuantity, LimitState, Requirement, Time};
use crate::check::names::{self, ItemId, choice};
use crate::check::value::{Number, Value, Varying};
use crate::covariance::existence;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{
    Condition, ConditionKind, Expression, ExpressionKind, LimitLine, LimitLineKind, RequireComparison, Word,
};
use crate::reliability::crossings::FailureRegion;
use crate::reliability::first_passage::Method;
use crate::reliability::verdict::Demand;
use crate::source::Span;
use crate::units::Dimension;

/// The quantities of a limit state by name, with their dimension.
const QUANTITIES: &[(&str, LimitQuantity, Dimension)] = &[
    ("survival", LimitQuantity::Survival, Dimension::PLAIN),
    (
        "failure_probability",
        LimitQuantity::FailureProbability,
        Dimension::PLAIN,
    ),
    ("reliability_index", LimitQuantity::ReliabilityIndex, Dimension::PLAIN),
    ("upcrossing_rate", LimitQuantity::UpcrossingRate, Dimension::RATE),
    (
        "mean_time_to_failure",
        LimitQuantity::MeanTimeToFailure,
        Dimension::TIME,
    ),
    (
        "initial_failure_probability",
        LimitQuantity::InitialFailureProbability,
        Dimension::PLAIN,
    ),
];

/// Quantities of the language that this version does not compute.
const LATER_QUANTITIES: &[&str] = &["annual_hazard", "point_in_time_failure_probability"];

impl LimitQuantity {
    /// The quantity of a name, with its dimension.
    pub(super) fn find(name: &str) -> Option<(Self, Dimension)> {
        let found = QUANTITIES.iter().find(|(known, _, _)| *known == name);
        found.map(|(_, quantity, dimension)| (*quantity, *dimension))
    }

    /// The names of all quantities.
    pub(super) fn names() -> impl Iterator<Item = &'static str> {
        QUANTITIES.iter().map(|(name, _, _)| *name)
    }
}

/// The lines of a limit state, each at most once but for the requirements.
#[derive(Default)]
struct Lines<'t> {
    failure: Option<(&'t LimitLine, &'t Condition)>,
    period: Option<(&'t LimitLine, &'t Expression)>,
    method: Option<(&'t LimitLine, &'t Word)>,
    tabulate: Option<(&'t LimitLine, &'t [Expression])>,
    extremes: Option<(&'t LimitLine, &'t [Expression])>,
    requirements: Vec<&'t LimitLine>,
}

impl Lowering<'_, '_, '_> {
    pub(super) fn limit_state(&mut self, item: ItemId, name: &Word, lines: &[LimitLine], close: Span) {
        let scope = Scope::plain(self.names.item(item).instance);
        let lines = self.lines(lines, name);
        for (missing, line, example) in [
            (lines.failure.is_none(), "failure when", "failure when MARGIN < 0"),
            (lines.period.is_none(), "reference period", "reference period 50 year"),
        ] {
            if missing {
                let message = format!("the limit state `{}` lacks its line `{line}`", name.text);
                self.report(
                    Diagnostic::new(Code::LimitLine, name.span, message)
                        .label(close, "missing before this brace")
                        .help(format!("add `{example}`, with what is yours")),
                );
            }
        }
        let period = lines
            .period
            .and_then(|(_, time)| self.time(time, scope, "the reference period"));
        let method = match lines.method {
            Some((_, word)) => self.method(word).map(|method| (method, word.span)),
            None => Some((Method::Poisson, name.span)),
        };
        let times = lines.tabulate.map_or(Some(Vec::new()), |(_, times)| {
            let found: Vec<Option<Time>> = times
                .iter()
                .map(|time| self.time(time, scope, "each entry of `tabulate at`"))
                .collect();
            found.into_iter().collect()
        });
        let requirements: Vec<Option<Requirement>> = lines
            .requirements
            .iter()
            .map(|line| self.requirement(line, scope, period.as_ref()))
            .collect();
        let condition = lines
            .failure
            .and_then(|(_, condition)| Some((self.condition(condition, scope)?, condition.span)));
        let region = condition.as_ref().map(|((_, region), _)| *region);
        let extremes = lines.extremes.map_or(Some(Vec::new()), |(line, fractiles)| {
            self.fractiles(fractiles, region, line.keyword, scope)
        });
        let Some(((varying, region), place)) = condition else {
            return;
        };
        let applies = method.is_none_or(|method| self.applies(method, &varying, region, place));
        if !self.crossable(&varying, place, name) || !applies {
            return;
        }
        let requirements: Option<Vec<Requirement>> = requirements.into_iter().collect();
        let (Some(period), Some((method, _)), Some(tabulate), Some(requirements), Some(fractiles)) =
            (period, method, times, requirements, extremes)
        else {
            return;
        };
        let index = self.model.limit_states.len();
        self.model.limit_states.push(LimitState {
            name: self.names.full_name(item),
            failure_when: self.as_written(place),
            unit: unit_or_si(varying.unit.as_ref(), varying.dimension),
            margin: varying.form,
            dimension: varying.dimension,
            region,
            reference_period: period,
            method,
            requirements,
            tabulate,
            extremes: lines.extremes.map(|_| fractiles),
            documentation: self.documentation(item),
            place: name.span,
        });
        self.limit_states.insert(item, index);
    }

    /// What was written, in one line.
    pub(super) fn as_written(&self, place: Span) -> String {
        let text = self.library.files().text(place);
        let without_comments = text.lines().map(|line| line.split('#').next().unwrap_or(""));
        let words: Vec<&str> = without_comments.flat_map(str::split_whitespace).collect();
        words.join(" ")
    }

    fn lines<'t>(&mut self, lines: &'t [LimitLine], name: &Word) -> Lines<'t> {
        fn once<'t, T>(slot: &mut Option<(&'t LimitLine, T)>, line: &'t LimitLine, value: T) -> Option<Span> {
            match slot {
                Some((first, _)) => Some(first.keyword),
                None => {
                    *slot = Some((line, value));
                    None
                }
            }
        }
        let mut found = Lines::default();
        for line in lines {
            let earlier = match &line.kind {
                LimitLineKind::FailureWhen(condition) => once(&mut found.failure, line, condition),
                LimitLineKind::ReferencePeriod(time) => once(&mut found.period, line, time),
                LimitLineKind::FirstPassage(word) => once(&mut found.method, line, word),
                LimitLineKind::TabulateAt(times) => once(&mut found.tabulate, line, times.as_slice()),
                LimitLineKind::ExtremesAt(fractiles) => once(&mut found.extremes, line, fractiles.as_slice()),
                LimitLineKind::Require { .. } => {
                    found.requirements.push(line);
                    None
                }
            };
            if let Some(first) = earlier {
                let message = format!("the limit state `{}` has this line twice", name.text);
                self.report(
                    Diagnostic::new(Code::LimitLine, line.keyword, message)
                        .here("again here")
                        .label(first, "first here")
                        .help("remove one of them, or make two limit states"),
                );
            }
        }
        found
    }

    fn requirement(&mut self, line: &LimitLine, scope: Scope<'_>, period: Option<&Time>) -> Option<Requirement> {
        let LimitLineKind::Require {
            quantity,
            comparison,
            value,
            over,
        } = &line.kind
        else {
            return None;
        };
        let found = self.limit_quantity(quantity);
        let over = match over {
            Some(over) => self.time(over, scope, "the period of a requirement"),
            None => period.cloned(),
        };
        let (quantity_found, dimension) = found?;
        let what = format!("the demand on `{}`", quantity.text);
        let demanded = (quantity.span, "demanded of this");
        let given = self.value(value, scope);
        if self.rate_of_a_probability(&given, dimension, quantity, value.span) {
            return None;
        }
        let scalar = self.of_dimension(given, value.span, dimension, &what, Some(demanded))?;
        let Number::Known(limit) = scalar.value else {
            return None;
        };
        self.possible(quantity_found, limit, quantity, value.span)?;
        Some(Requirement {
            text: self.as_written(quantity.span.to(value.span)),
            quantity: quantity_found,
            demand: match comparison {
                RequireComparison::AtLeast => Demand::AtLeast(limit),
                RequireComparison::AtMost => Demand::AtMost(limit),
            },
            unit: unit_or_si(scalar.unit.as_ref(), dimension),
            over: over?,
            basis: line.basis.as_ref().map(|text| text.value.to_string()),
        })
    }

    /// A probability or an index per time: it belongs to a period, which `over` names.
    fn rate_of_a_probability(&mut self, given: &Value, dimension: Dimension, quantity: &Word, place: Span) -> bool {
        let is_rate = matches!(given, Value::Scalar(scalar) if scalar.dimension == Dimension::RATE);
        if !(is_rate && dimension.is_plain()) {
            return false;
        }
        let message = format!("`{}` belongs to a period, and has no rate in time", quantity.text);
        let written = self.as_written(place);
        let help = match literal(&written) {
            Some(digits) => format!("write `{digits}`, and the period behind it: `over 1 year`"),
            None => "write the number for a period, and the period behind it: `over 1 year`".to_string(),
        };
        self.report(
            Diagnostic::new(Code::UnitMismatch, place, message)
                .here("a rate (1/time); over another period the number is another")
                .label(quantity.span, "demanded of this")
                .help(format!("{help}; events per time are demanded by `upcrossing_rate`")),
        );
        true
    }

    /// Refuses a demand that no probability, rate or time can meet or miss.
    fn possible(&mut self, quantity: LimitQuantity, limit: f64, word: &Word, place: Span) -> Option<()> {
        let (least, most) = quantity.range();
        if (least..=most).contains(&limit) {
            return Some(());
        }
        let range = if most == 1.0 { "between 0 and 1" } else { "0 or more" };
        let message = format!("a demand on `{}` must be {range}", word.text);
        let mut finding = Diagnostic::new(Code::ValueRange, place, message);
        if limit > 1.0 && limit <= 100.0 {
            finding.help = Some(format!("write `{} %` if a percentage is meant", self.as_written(place)));
        }
        self.report(finding);
        None
    }

    /// The quantity of a limit state that a word names.
    pub(super) fn limit_quantity(&mut self, word: &Word) -> Option<(LimitQuantity, Dimension)> {
        let found = LimitQuantity::find(&word.text);
        if found.is_none() {
            if LATER_QUANTITIES.contains(&&*word.text) {
                self.not_yet(word.span, Later::Hazards);
            } else {
                let known: Vec<&str> = LimitQuantity::names().collect();
                let message = format!("a limit state has no quantity called `{}`", word.text);
                let mut finding = Diagnostic::new(Code::QuantityUnknown, word.span, message);
                finding.help = match choice(&names::near(&word.text, known.iter().copied())) {
                    Some(near) => Some(format!("did you mean {near}?")),
                    None => choice(&known).map(|all| format!("it has {}", all.replace(" or ", " and "))),
                };
                self.report(finding);
            }
        }
        found
    }

    /// The margin a condition speaks of, and where it is failed.
    fn condition(&mut self, condition: &Condition, scope: Scope<'_>) -> Option<(Varying, FailureRegion)> {
        match &condition.kind {
            ConditionKind::Any(_) | ConditionKind::All(_) | ConditionKind::Named(_) => {
                self.not_yet(condition.span, Later::Systems);
                None
            }
            ConditionKind::Below(margin, level) => {
                if absolute(margin).is_some() {
                    self.report(
                        Diagnostic::new(
                            Code::LimitCondition,
                            condition.span,
                            "failure inside a band about zero cannot be judged",
                        )
                        .help("two-sided failure is `abs(m) > a`"),
                    );
                    return None;
                }
                let varying = self.margin_of(margin, level, ">", scope)?;
                let level = self.level(level, &varying, (margin.span, Some("<")), scope)?;
                Some((varying, FailureRegion::Below(level)))
            }
            ConditionKind::Above(margin, level) => {
                if let Some(inner) = absolute(margin) {
                    let varying = self.margin_of(inner, level, "<", scope)?;
                    let value = self.level(level, &varying, (margin.span, None), scope)?;
                    if value < 0.0 {
                        let message = "a level for `abs(...)` must not be negative: failure would be certain";
                        self.report(Diagnostic::new(Code::ValueRange, level.span, message).help("remove the sign"));
                        return None;
                    }
                    return Some((varying, FailureRegion::Outside(-value, value)));
                }
                let varying = self.margin_of(margin, level, "<", scope)?;
                let level = self.level(level, &varying, (margin.span, Some(">")), scope)?;
                Some((varying, FailureRegion::Above(level)))
            }
            ConditionKind::Outside(margin, lower, upper) => {
                let varying = self.margin_of(margin, lower, "<", scope)?;
                let low = self.level(lower, &varying, (margin.span, None), scope);
                let high = self.level(upper, &varying, (margin.span, None), scope);
                let (low, high) = (low?, high?);
                if low >= high {
                    let message = "the first level of `outside` must be below the second";
                    self.report(
                        Diagnostic::new(Code::ValueRange, upper.span, message)
                            .label(lower.span, "not below the other")
                            .help("write the smaller level first"),
                    );
                    return None;
                }
                Some((varying, FailureRegion::Outside(low, high)))
            }
        }
    }

    /// The margin on the left of a condition. `turned` is the mark that stands between the two if they change places.
    fn margin_of(
        &mut self,
        margin: &Expression,
        level: &Expression,
        turned: &str,
        scope: Scope<'_>,
    ) -> Option<Varying> {
        let value = self.value(margin, scope);
        match value {
            Value::Form(varying) if !varying.form.is_constant() => Some(varying),
            Value::Fault => None,
            Value::Form(_) | Value::Scalar(_) => {
                let swapped = matches!(self.value(level, scope), Value::Form(_));
                let finding = if swapped {
                    let (margin_written, level_written) = (self.as_written(level.span), self.as_written(margin.span));
                    Diagnostic::new(Code::LimitCondition, margin.span, "the margin stands on the wrong side")
                        .here("the level")
                        .label(level.span, "the margin")
                        .help(format!(
                            "write the margin first: `{margin_written} {turned} {level_written}`"
                        ))
                } else {
                    let message = "nothing in this condition varies in time, so there are no crossings to count";
                    Diagnostic::new(Code::MarginNoProcess, margin.span, message)
                        .here(format!("{}, whatever the time", self.shown_number(&value)))
                        .help(TIME_INVARIANT)
                };
                self.report(finding);
                None
            }
            other @ (Value::Kernel(_) | Value::Spectrum(_)) => {
                self.wrong_kind(margin.span, other.kind(), "a margin", "name a margin");
                None
            }
        }
    }

    /// The level of a condition. `mark` is the comparison with 0 that the difference of the two would have.
    fn level(
        &mut self,
        level: &Expression,
        varying: &Varying,
        (margin, mark): (Span, Option<&str>),
        scope: Scope<'_>,
    ) -> Option<f64> {
        let value = self.value(level, scope);
        if let Value::Form(_) = value {
            self.report(
                Diagnostic::new(
                    Code::LimitCondition,
                    level.span,
                    "the level of a condition must be a number",
                )
                .here("this varies in time")
                .label(margin, "and so does this")
                .help(match mark {
                    Some(mark) => format!(
                        "compare their difference with 0: `{} - {} {mark} 0`",
                        self.as_written(margin),
                        in_brackets(&self.as_written(level.span))
                    ),
                    None => "make a limit state of each side, on the difference of the two".to_string(),
                }),
            );
            return None;
        }
        let scalar = self.scalar(value, level.span, "the level of a condition")?;
        if scalar.dimension != varying.dimension && !scalar.bare_zero {
            let why = Some((margin, "compared with this"));
            let wanted = Wanted {
                dimension: varying.dimension,
                unit: varying.unit.as_deref(),
            };
            self.mismatch(level.span, &scalar, wanted, "the level of this condition", why);
            return None;
        }
        match scalar.value {
            Number::Known(value) => Some(value),
            Number::Open(_) | Number::Unset => None,
        }
    }

    /// Whether crossings can be counted: every source must have the derivative that the margin needs.
    fn crossable(&mut self, varying: &Varying, place: Span, name: &Word) -> bool {
        if !self.of_finite_variance(varying, place) {
            return false;
        }
        let rough: Vec<_> = varying
            .form
            .by_source()
            .filter(|(id, terms)| {
                let source = self.model.sources.get(id.0 as usize);
                source.is_some_and(|source| !existence::has_derivative(source, terms, 1))
            })
            .map(|(id, _)| id)
            .collect();
        for source in &rough {
            let consequence = format!("makes crossings in `{}` infinitely frequent", name.text);
            let finding = self.not_differentiable(place, *source, &consequence);
            self.report(finding);
        }
        rough.is_empty()
    }
}

/// The argument of `abs(...)`, brackets aside.
fn absolute(expression: &Expression) -> Option<&Expression> {
    match &expression.kind {
        ExpressionKind::Bracket(inner) => absolute(inner),
        ExpressionKind::Call(call) => match (call.function.words.as_slice(), call.arguments.as_slice()) {
            ([word], [argument]) if &*word.text == "abs" && argument.name.is_none() => Some(&argument.value),
            _ => None,
        },
        _ => None,
    }
}
