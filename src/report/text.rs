//! Results as plain text, in the units of the model.

use super::columns::{Side, paragraph, write as columns};
use crate::check::{Kind, LimitState, Model, Named};
use crate::reliability::crossings::FailureRegion;
use crate::results::{LimitStateResult, Moments, Real, Results};
use crate::units::{Unit, show, show_number, time_in_words};
use std::io::{self, Write};

/// Significant digits of values.
const DIGITS: usize = 5;

/// At most so many names of what has no basis are listed.
const MOST_LISTED: usize = 40;

const CAUTION: &str = "\
These results rest on the model and on the assumptions named above. They do not replace the code of practice that \
applies, the judgement of a licensed engineer, or an independent check.";

/// Writes everything found out about a model.
///
/// # Errors
/// Whatever writing to `out` returns.
pub fn write(out: &mut dyn Write, model: &Model, results: &Results) -> io::Result<()> {
    head(out, results)?;
    parameters(out, model)?;
    moments(out, model, Kind::Process, &results.processes)?;
    moments(out, model, Kind::Margin, &results.margins)?;
    // Results come in the order of the model, those that were not asked for left out.
    let mut limit_states = model.limit_states.iter();
    for result in &results.limit_states {
        if let Some(limit_state) = limit_states.find(|one| one.name == result.name) {
            limit_state_section(out, limit_state, result)?;
        }
    }
    expectations(out, results)?;
    accepted(out, results)?;
    without_basis(out, model)?;
    outcome(out, results)?;
    if !results.limit_states.is_empty() {
        writeln!(out)?;
        paragraph(out, "", CAUTION)?;
    }
    Ok(())
}

fn head(out: &mut dyn Write, results: &Results) -> io::Result<()> {
    if let Some(title) = &results.model.title {
        writeln!(out, "{title}")?;
    }
    let digest: String = results.model.sha256.chars().take(12).collect();
    let tool = &results.tool;
    writeln!(
        out,
        "{} (SHA-256 {digest}...), {} {}",
        results.model.file, tool.name, tool.version
    )
}

fn heading(out: &mut dyn Write, text: &str) -> io::Result<()> {
    writeln!(out, "\n{text}")
}

fn parameters(out: &mut dyn Write, model: &Model) -> io::Result<()> {
    if model.parameters.is_empty() {
        return Ok(());
    }
    heading(out, "Parameters")?;
    let rows: Vec<Vec<String>> = model
        .parameters
        .iter()
        .map(|parameter| {
            let value = show(parameter.value, &parameter.unit, DIGITS + 1);
            vec![
                parameter.name.clone(),
                value,
                parameter.basis.clone().unwrap_or_default(),
            ]
        })
        .collect();
    columns(out, 2, &[Side::Left, Side::Right, Side::Left], &rows)
}

fn moments(out: &mut dyn Write, model: &Model, kind: Kind, results: &[Moments]) -> io::Result<()> {
    if results.is_empty() {
        return Ok(());
    }
    heading(out, if kind == Kind::Process { "Processes" } else { "Margins" })?;
    let title = [
        "",
        "mean",
        "st. dev.",
        "st. dev. of derivative",
        "mean upcrossed",
        "bandwidth",
    ];
    let mut rows = vec![title.map(str::to_string).to_vec()];
    let named = model.varying.iter().filter(|named| named.kind == kind);
    rows.extend(named.zip(results).map(|(named, result)| moments_row(named, result)));
    let sides = [
        Side::Left,
        Side::Right,
        Side::Right,
        Side::Right,
        Side::Right,
        Side::Right,
    ];
    columns(out, 2, &sides, &rows)
}

fn moments_row(named: &Named, result: &Moments) -> Vec<String> {
    let unit = &named.unit;
    let rate = Unit::named("s").and_then(|second| unit.over(&second));
    let derivative = result.derivative_standard_deviation.map(|value| match &rate {
        Some(rate) if value.value().is_finite() => show(value.value(), rate, DIGITS),
        _ => show_number(value.value(), DIGITS),
    });
    let bandwidth = match result.bandwidth {
        Some(bandwidth) => show_number(bandwidth.value(), 3),
        None if result.unreached => "not reached".to_string(),
        None => String::new(),
    };
    vec![
        result.name.clone(),
        known(result.mean, |mean| show(mean, unit, DIGITS)),
        known(result.standard_deviation, |deviation| {
            if deviation.is_finite() {
                show(deviation, unit, DIGITS)
            } else {
                show_number(deviation, DIGITS)
            }
        }),
        derivative.unwrap_or_default(),
        result.zero_upcrossing_rate.map(per_second).unwrap_or_default(),
        bandwidth,
    ]
}

fn per_second(rate: Real) -> String {
    if rate.value().is_finite() {
        format!("{} /s", show_number(rate.value(), DIGITS))
    } else {
        "infinitely often".to_string()
    }
}

fn limit_state_section(out: &mut dyn Write, limit_state: &LimitState, result: &LimitStateResult) -> io::Result<()> {
    heading(
        out,
        &format!("Limit state {}: failure when {}", result.name, result.failure_when),
    )?;
    if let Some(words) = &limit_state.documentation {
        for line in words.lines() {
            writeln!(out, "  {line}")?;
        }
    }
    let period = show(result.reference_period, &limit_state.reference_period.unit, DIGITS);
    let rows = vec![
        vec![
            format!("failure probability over {period}"),
            probability(result.failure_probability),
        ],
        vec![
            format!("reliability index over {period}"),
            number(result.reliability_index),
        ],
        vec![format!("survival over {period}"), survival(result.survival)],
        vec![
            "failed at the start".to_string(),
            probability(result.initial_failure_probability),
        ],
        vec![
            "entries into failure".to_string(),
            known(result.upcrossing_rate, |rate| {
                entries(rate, &limit_state.reference_period.unit)
            }),
        ],
        vec![
            "mean time to failure".to_string(),
            known(result.mean_time_to_failure, long_time),
        ],
        vec!["first passage by".to_string(), result.first_passage.to_string()],
        vec![
            "numerical error, relative".to_string(),
            known(result.relative_error, |error| show_number(error, 1)),
        ],
    ];
    columns(out, 2, &[Side::Left, Side::Left], &rows)?;
    table(out, limit_state, result)?;
    extremes(out, limit_state, result)?;
    if !result.requirements.is_empty() {
        writeln!(out, "  Required")?;
        let rows: Vec<Vec<String>> = result
            .requirements
            .iter()
            .map(|requirement| {
                vec![
                    requirement.verdict.to_string(),
                    requirement.shown.demand.clone(),
                    format!("found {}", requirement.shown.value),
                    requirement.basis.clone().unwrap_or_default(),
                ]
            })
            .collect();
        columns(out, 4, &[Side::Left, Side::Left, Side::Left, Side::Left], &rows)?;
    }
    writeln!(out, "  Rests on")?;
    for assumption in &result.assumptions {
        paragraph(out, "    - ", &assumption.text)?;
    }
    Ok(())
}

/// A rate per unit of the reference period, in which people compare it with the period: `5.7e-7 /year`.
fn entries(rate: f64, period: &Unit) -> String {
    match Unit::one().over(period) {
        Some(unit) => format!("{} {}", small(unit.from_si(rate)), unit.text()),
        None => format!("{} /s", small(rate)),
    }
}

fn table(out: &mut dyn Write, limit_state: &LimitState, result: &LimitStateResult) -> io::Result<()> {
    if result.table.is_empty() {
        return Ok(());
    }
    let title = ["time", "failure probability", "reliability index", "survival"];
    let mut rows = vec![title.map(str::to_string).to_vec()];
    rows.extend(limit_state.tabulate.iter().zip(&result.table).map(|(time, row)| {
        vec![
            show(row.t, &time.unit, DIGITS),
            probability(row.failure_probability),
            number(row.reliability_index),
            survival(row.survival),
        ]
    }));
    columns(out, 4, &[Side::Right, Side::Right, Side::Right, Side::Left], &rows)
}

fn extremes(out: &mut dyn Write, limit_state: &LimitState, result: &LimitStateResult) -> io::Result<()> {
    let Some(extremes) = &result.extremes else {
        return Ok(());
    };
    let which = match limit_state.region {
        FailureRegion::Below(_) => "Least value",
        FailureRegion::Above(_) => "Largest value",
        FailureRegion::Outside(..) => "Largest modulus",
    };
    let period = show(result.reference_period, &limit_state.reference_period.unit, DIGITS);
    writeln!(out, "  {which} of the margin over {period}")?;
    let level = |level: Option<Real>| known(level, |level| show(level, &limit_state.unit, DIGITS));
    let mut rows = vec![vec!["mean".to_string(), level(extremes.mean)]];
    rows.extend(extremes.levels.iter().map(|one| {
        let share = show_number(100.0 * one.fractile, 15);
        vec![format!("fractile {share} %"), level(one.level)]
    }));
    columns(out, 4, &[Side::Left, Side::Left], &rows)
}

/// A number that may not exist.
fn known(value: Option<Real>, show: impl Fn(f64) -> String) -> String {
    value.map_or_else(|| "not known".to_string(), |value| show(value.value()))
}

fn number(value: Option<Real>) -> String {
    known(value, |value| show_number(value, DIGITS))
}

fn probability(value: Option<Real>) -> String {
    known(value, small)
}

fn survival(value: Option<Real>) -> String {
    known(value, next_to_one)
}

/// With as many digits as it needs to differ from 1, up to what a double holds.
fn next_to_one(value: f64) -> String {
    if value < 0.1 {
        return small(value);
    }
    let lost = 1.0 - value;
    let digits = if lost > 0.0 && lost < 0.1 {
        (3.0 - lost.log10().floor()) as usize
    } else {
        DIGITS
    };
    show_number(value, digits.clamp(DIGITS, 16))
}

fn long_time(seconds: f64) -> String {
    if seconds.is_finite() {
        time_in_words(seconds, DIGITS)
    } else {
        "beyond 1e308 s".to_string()
    }
}

/// A probability or a rate; one that no double can hold is not zero.
fn small(value: f64) -> String {
    if value == 0.0 {
        "below 1e-307".to_string()
    } else {
        show_number(value, DIGITS)
    }
}

fn expectations(out: &mut dyn Write, results: &Results) -> io::Result<()> {
    if results.expectations.is_empty() {
        return Ok(());
    }
    heading(out, "Expectations of the author")?;
    let rows: Vec<Vec<String>> = results
        .expectations
        .iter()
        .map(|expectation| {
            vec![
                if expectation.holds { "holds" } else { "does not hold" }.to_string(),
                expectation.text.clone(),
                format!("found {}", expectation.shown),
                expectation.basis.clone().unwrap_or_default(),
            ]
        })
        .collect();
    columns(out, 2, &[Side::Left, Side::Left, Side::Left, Side::Left], &rows)
}

/// The warnings that the file accepts, with its reasons.
fn accepted(out: &mut dyn Write, results: &Results) -> io::Result<()> {
    let accepted = || {
        results
            .warnings
            .iter()
            .filter_map(|one| Some((one, one.accepted.as_ref()?)))
    };
    if accepted().next().is_none() {
        return Ok(());
    }
    heading(out, "Accepted warnings")?;
    for (warning, reason) in accepted() {
        let (code, file, line) = (warning.code, &warning.file, warning.line);
        paragraph(
            out,
            "  - ",
            &format!("{} ({code}, {file} line {line})", warning.message),
        )?;
        paragraph(out, "    ", &format!("because: {reason}"))?;
    }
    Ok(())
}

/// What a checker cannot follow to its source.
fn without_basis(out: &mut dyn Write, model: &Model) -> io::Result<()> {
    if model.without_basis.is_empty() {
        return Ok(());
    }
    heading(out, "Numbers without a basis")?;
    let mut listed: Vec<&str> = model
        .without_basis
        .iter()
        .take(MOST_LISTED)
        .map(String::as_str)
        .collect();
    let more = model.without_basis.len() - listed.len();
    let rest = format!("and {more} more");
    if more > 0 {
        listed.push(&rest);
    }
    paragraph(out, "  ", &listed.join(", "))
}

/// One line that says how it ended.
fn outcome(out: &mut dyn Write, results: &Results) -> io::Result<()> {
    let requirements = results.limit_states.iter().flat_map(|one| &one.requirements);
    let verdicts: Vec<&str> = requirements.map(|one| one.verdict).collect();
    let expectations = &results.expectations;
    if verdicts.is_empty() && expectations.is_empty() {
        return Ok(());
    }
    let count = |wanted: &str| verdicts.iter().filter(|verdict| **verdict == wanted).count();
    let mut parts = Vec::new();
    if !verdicts.is_empty() {
        parts.push(format!("requirements: {} met", count("met")));
        for (word, number) in [
            ("not met", count("not met")),
            ("not established", count("not established")),
        ] {
            if number > 0 {
                parts.push(format!("{number} {word}"));
            }
        }
    }
    if !expectations.is_empty() {
        let holding = expectations.iter().filter(|one| one.holds).count();
        parts.push(format!("expectations: {holding} of {} hold", expectations.len()));
    }
    heading(out, &format!("Outcome   {}", parts.join(", ")))
}
