//! What a case is put through, and what it is held to.

use super::case::Case;
use super::memory::{Memory, Run};
use outcross::diagnostics::json;
use outcross::language;
use outcross::report::text;
use outcross::results::evaluate as results_of;
use outcross::source::Files;
use serde_json::Value;
use std::any::Any;
use std::fmt;
use std::hash::{DefaultHasher, Hash, Hasher};
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::time::Duration;

/// The name of the model among the texts.
const MODEL: &str = "model.limit";

/// What is wrong with the program.
pub enum Fault {
    Panic(String),
    Slow(Duration),
    Written(String),
}

impl fmt::Display for Fault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Panic(words) => write!(f, "panic: {words}"),
            Self::Slow(time) => write!(f, "slow: {time:?}"),
            Self::Written(words) => write!(f, "written: {words}"),
        }
    }
}

/// How a case ended.
pub struct End {
    /// Whether it was computed.
    pub has_results: bool,
    /// The same for cases that ended alike.
    pub signature: u64,
}

pub type Outcome = Result<End, Fault>;

/// A trial whose panics are faults.
pub fn guarded(case: &Case, memory: &mut Memory, trial: fn(&Case, &mut Memory) -> Outcome) -> Outcome {
    let tried = catch_unwind(AssertUnwindSafe(|| trial(case, &mut *memory)));
    tried.unwrap_or_else(|payload| Err(Fault::Panic(words(&*payload))))
}

fn words(payload: &(dyn Any + Send)) -> String {
    let owned = payload.downcast_ref::<String>().cloned();
    let words = owned.or_else(|| payload.downcast_ref::<&str>().map(|words| (*words).to_owned()));
    words.unwrap_or_else(|| "without words".to_owned())
}

/// Reads the text alone.
pub fn parse(case: &Case) -> Outcome {
    let mut files = Files::new();
    let file = files.add(MODEL, case.model.clone());
    let (tree, diagnostics) = language::parse(file, &case.model);
    for one in &diagnostics {
        let places = one.labels.iter().map(|label| label.place);
        for place in std::iter::once(one.place).chain(places) {
            if case.model.get(place.range()).is_none() {
                return Err(Fault::Written(format!("{one:?} lies outside of its file")));
            }
        }
    }
    let mut hasher = DefaultHasher::new();
    for one in &diagnostics {
        (one.code, one.help.is_some(), one.labels.len()).hash(&mut hasher);
    }
    tree.declarations.len().min(8).hash(&mut hasher);
    Ok(End {
        has_results: false,
        signature: hasher.finish(),
    })
}

/// Checks the model, shows what was found, computes it and writes the results in every form.
pub fn evaluate(case: &Case, memory: &mut Memory) -> Outcome {
    memory.insert(MODEL, &*case.model);
    let replaced = case
        .neighbour
        .as_ref()
        .map(|(name, text)| (name, memory.insert(name, &**text)));
    let run = memory.run(MODEL, true);
    if let Some((name, before)) = replaced {
        memory.insert(name, before.unwrap_or_default());
    }
    let document = serde_json::to_value(json::document(&run.files, &run.diagnostics)).expect("findings are JSON");
    numbers_are_numbers(case, &run.shown())?;
    sound(&document)?;
    let computed = computed(case, &run)?;
    let mut hasher = DefaultHasher::new();
    for one in &run.diagnostics {
        (one.code, one.help.is_some(), one.labels.len()).hash(&mut hasher);
    }
    computed.hash(&mut hasher);
    Ok(End {
        has_results: computed > 0,
        signature: hasher.finish(),
    })
}

/// Computes what the model asks for. Returns a number that is the same for results alike, 0 for none.
fn computed(case: &Case, run: &Run) -> Result<u64, Fault> {
    let Some(model) = &run.model else { return Ok(0) };
    let results = results_of(&run.files, model, &run.diagnostics, &[]);
    let mut report = Vec::new();
    text::write(&mut report, model, &results).expect("memory takes all");
    numbers_are_numbers(case, &String::from_utf8_lossy(&report))?;
    let document = serde_json::to_value(&results).expect("results are JSON");
    sound(&document)?;
    let mut hasher = DefaultHasher::new();
    shape(&document, &mut hasher);
    Ok(hasher.finish().max(1))
}

/// Words that are no numbers, in a text for people about a model that does not use them itself.
fn numbers_are_numbers(case: &Case, text: &str) -> Result<(), Fault> {
    let neighbour = case.neighbour.iter().map(|(_, text)| &**text);
    let written: String = std::iter::once(&*case.model)
        .chain(neighbour)
        .collect::<String>()
        .to_lowercase();
    for wrong in ["nan", "inf"] {
        let mut words = text.split(|c: char| !c.is_alphanumeric());
        if words.any(|word| word.eq_ignore_ascii_case(wrong)) && !written.contains(wrong) {
            return Err(Fault::Written(format!("{wrong} in\n{text}")));
        }
    }
    Ok(())
}

/// No `null`, which is how JSON writes what is no number; probabilities are probabilities, ratios are ratios.
fn sound(document: &Value) -> Result<(), Fault> {
    match document {
        Value::Null => Err(Fault::Written("null in the JSON".to_owned())),
        Value::Array(entries) => entries.iter().try_for_each(sound),
        Value::Object(entries) => entries.iter().try_for_each(|(key, value)| {
            let range = match key.as_str() {
                "survival" | "failure_probability" | "initial_failure_probability" => Some(0.0..=1.0),
                "bandwidth" | "irregularity" => Some(0.0..=1.0),
                "standard_deviation" | "upcrossing_rate" | "relative_error" => Some(0.0..=f64::MAX),
                _ => None,
            };
            match (range, value.as_f64()) {
                (Some(range), Some(number)) if !range.contains(&number) => {
                    Err(Fault::Written(format!("{key} is {number:e}")))
                }
                _ => sound(value),
            }
        }),
        Value::Bool(_) | Value::Number(_) | Value::String(_) => Ok(()),
    }
}

/// What kind of thing a document says: its keys, and how large its numbers are, roughly.
fn shape(document: &Value, hasher: &mut DefaultHasher) {
    match document {
        Value::Array(entries) => entries.iter().for_each(|entry| shape(entry, hasher)),
        Value::Object(entries) => {
            for (key, value) in entries {
                key.hash(hasher);
                match key.as_str() {
                    "verdict" | "code" | "first_passage" => value.as_str().hash(hasher),
                    _ => shape(value, hasher),
                }
            }
        }
        Value::Number(number) => {
            let magnitude = number.as_f64().map_or(0.0, |number| number.abs().log10() / 100.0);
            (magnitude.clamp(-9.0, 9.0).round() as i8).hash(hasher);
        }
        Value::Null | Value::Bool(_) | Value::String(_) => {}
    }
}
