//! Requirements that cannot fail, that ask for failure, or that belong to another period.

use super::{Finished, Judged};
use crate::check::model::{LimitQuantity, Requirement};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Expression, LimitLine, LimitLineKind, Word};
use crate::numerics::normal;
use crate::reliability::verdict::Demand;
use crate::source::Span;
use crate::units::{show, show_number};

const YEAR: f64 = 31_557_600.0;

/// Target reliability indices for one year and for fifty: EN 1990:2002, Tables B2 (RC1 to RC3) and C2 (serviceability).
const TARGETS: [(f64, f64); 4] = [(4.2, 3.3), (4.7, 3.8), (5.2, 4.3), (2.9, 1.5)];

/// A period this many times too long or too short is another period.
const OTHER_PERIOD: f64 = 5.0;

/// A line with a demand.
struct Line<'a> {
    quantity: &'a Word,
    value: &'a Expression,
    over: Option<&'a Expression>,
    basis: Option<&'a str>,
    period: Option<Span>,
}

impl Finished<'_> {
    pub(super) fn requirements(&self, judged: &Judged<'_>) -> Vec<Diagnostic> {
        let period = judged.lines.iter().find_map(|line| match &line.kind {
            LimitLineKind::ReferencePeriod(time) => Some(time.span),
            _ => None,
        });
        let lines = judged.lines.iter().filter_map(|line| demand_of(line, period));
        let pairs = lines.zip(&judged.state.requirements);
        pairs
            .filter_map(|(line, requirement)| {
                idle(&line, requirement)
                    .or_else(|| self.direction(&line, requirement, judged))
                    .or_else(|| other_period(&line, requirement))
            })
            .collect()
    }

    /// A demand that is met by failing.
    fn direction(&self, line: &Line<'_>, requirement: &Requirement, judged: &Judged<'_>) -> Option<Diagnostic> {
        let more_is_safer = match requirement.quantity {
            LimitQuantity::Survival | LimitQuantity::ReliabilityIndex | LimitQuantity::MeanTimeToFailure => true,
            LimitQuantity::FailureProbability
            | LimitQuantity::UpcrossingRate
            | LimitQuantity::InitialFailureProbability => false,
        };
        let (asked, mended) = match requirement.demand {
            Demand::AtMost(_) if more_is_safer => ("at most", ">="),
            Demand::AtLeast(_) if !more_is_safer => ("at least", "<="),
            Demand::AtMost(_) | Demand::AtLeast(_) => return None,
        };
        let name = &line.quantity.text;
        let message = format!(
            "this requirement of `{}` is met by failing: it asks for {asked} this `{name}`",
            judged.name.text
        );
        let value = self.as_written(line.value.span);
        Some(
            Diagnostic::new(
                Code::RequirementDirection,
                line.quantity.span.to(line.value.span),
                message,
            )
            .here("the safer the model, the sooner this is not met")
            .help(format!("write `{name} {mended} {value}`")),
        )
    }
}

fn demand_of(line: &LimitLine, period: Option<Span>) -> Option<Line<'_>> {
    let LimitLineKind::Require {
        quantity, value, over, ..
    } = &line.kind
    else {
        return None;
    };
    Some(Line {
        quantity,
        value,
        over: over.as_ref(),
        basis: line.basis.as_ref().map(|text| &*text.value),
        period,
    })
}

/// A demand at the end of what the quantity can be.
fn idle(line: &Line<'_>, requirement: &Requirement) -> Option<Diagnostic> {
    let (least, most) = requirement.quantity.range();
    let cannot_fail = match requirement.demand {
        Demand::AtLeast(limit) => limit <= least,
        Demand::AtMost(limit) => limit >= most,
    };
    let name = &line.quantity.text;
    cannot_fail.then(|| {
        let message = format!(
            "nothing can miss this requirement: `{name}` is never {}",
            match requirement.demand {
                Demand::AtLeast(_) => "smaller",
                Demand::AtMost(_) => "larger",
            }
        );
        Diagnostic::new(Code::RequirementIdle, line.quantity.span.to(line.value.span), message)
            .here("reported as met for every model")
            .help("write the value that your code demands, or remove the line")
    })
}

/// The target of one year demanded over many, or the reverse.
fn other_period(line: &Line<'_>, requirement: &Requirement) -> Option<Diagnostic> {
    let cites = |basis: &str| basis.contains("EN 1990") || basis.contains("EN1990");
    if requirement.quantity != LimitQuantity::ReliabilityIndex || !cites(line.basis?) {
        return None;
    }
    let Demand::AtLeast(limit) = requirement.demand else {
        return None;
    };
    let same = |target: f64| (limit - target).abs() < 1e-9;
    let own = |(year, fifty): (f64, f64)| {
        if same(year) {
            Some((1.0, 50.0, fifty))
        } else if same(fifty) {
            Some((50.0, 1.0, year))
        } else {
            None
        }
    };
    let (years, other_years, other) = TARGETS.into_iter().find_map(own)?;
    let found = requirement.over.seconds / YEAR;
    if (years / OTHER_PERIOD..=years * OTHER_PERIOD).contains(&found) {
        return None;
    }
    let (limit_shown, period) = (
        show_number(limit, 4),
        show(requirement.over.seconds, &requirement.over.unit, 5),
    );
    let message =
        format!("in EN 1990 the index {limit_shown} is a target for {years} year, here it is demanded over {period}");
    let effect = match independent(limit, found / years) {
        Some(index) if found > years => {
            format!("stricter than meant: {limit_shown} for {years} year is about {index} over {period}")
        }
        Some(index) => format!("weaker than meant: {limit_shown} for {years} year is about {index} over {period}"),
        None => "another demand than the one cited".to_string(),
    };
    let place = line.over.map_or(line.value.span, |over| over.span);
    let finding = Diagnostic::new(Code::RequirementPeriod, place, message)
        .here(effect)
        .help(format!(
            "write `reliability_index >= {limit_shown} over {years} year`, or `>= {} over {other_years} year`",
            show_number(other, 4)
        ));
    Some(match (line.over, line.period) {
        (None, Some(period)) => finding.label(period, "the period that counts without an `over`"),
        _ => finding,
    })
}

/// The index over `factor` times the period, the periods being independent: `Phi(beta_n) = Phi(beta_1)^n` (EN 1990:2002,
/// Annex C, eq. C.3).
fn independent(index: f64, factor: f64) -> Option<String> {
    let ln_survival = (-normal::upper(index)).ln_1p() * factor;
    let ln_failure = (-ln_survival.exp_m1()).ln();
    let quantile = normal::quantile_of_ln(ln_failure)?;
    Some(show_number(-quantile, 3))
}
