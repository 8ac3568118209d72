//! Tree to model: names, parts, units, dimensions, kinds and smoothness. Every fault of the text is found here, and a
//! thing at fault absorbs what follows from it, so that one mistake gives one message.

mod acceptance;
mod advice;
mod lower;
mod model;
mod names;
mod order;
mod origins;
mod parts;
mod value;

pub use acceptance::Acceptances;
pub use model::{
    Expectation, ExtremeQuantity, Kind, LimitQuantity, LimitState, Model, Named, Parameter, ProcessQuantity,
    Requirement, Subject, Time, Tolerance,
};

use crate::diagnostics::{Diagnostic, any_error, sort};
use crate::language::tree::{Expression, Word};
use crate::source::{Files, Reader};
use origins::Found;
use std::path::Path;

/// What a run sets from outside.
#[derive(Default)]
pub struct Settings {
    /// Parameters set on the command line.
    pub overrides: Vec<Overrides>,
    /// Whether a parameter without a value is a fault: it is where something is to be computed, not where a library is
    /// checked.
    pub require_parameters: bool,
}

/// A parameter set on the command line, read from a text of its own.
pub struct Overrides {
    /// Its name.
    pub name: Word,
    /// Its value.
    pub value: Expression,
}

/// Reads and checks a file with everything it uses. There is a model where no finding is an error.
pub fn check(
    files: &mut Files,
    reader: &dyn Reader,
    path: &Path,
    settings: &Settings,
) -> (Option<Model>, Vec<Diagnostic>) {
    let mut library = parts::Library::new(files, reader);
    let Some(parts) = library.parts(path) else {
        return (None, library.diagnostics);
    };
    let mut of_texts = std::mem::take(&mut library.diagnostics);
    let names = names::Names::new(&parts, &mut of_texts);
    lower::unknown_overrides(&names, &settings.overrides, &mut of_texts);
    let order = order::order(&names, &mut of_texts);
    let lowering = lower::Lowering::new(&names, &mut library, settings);
    let mut lowered = lowering.run(&order.items, &order.circular);
    let mut acceptances = Acceptances::read(&names, &mut of_texts);
    let mut found = std::mem::take(&mut lowered.found);
    found.extend(of_texts.into_iter().map(Found::of_text));
    let finished = advice::Finished::new(&names, library.files(), &lowered);
    let sound = !found.iter().any(Found::is_error);
    found.extend(finished.advice(sound));
    let (complete, without_basis) = (finished.is_complete(), finished.without_basis());
    let mut diagnostics = origins::explained(&names, settings, found);
    acceptances.apply(&mut diagnostics);
    if complete && !any_error(&diagnostics) {
        diagnostics.extend(acceptances.idle(|code| !code.needs_results()));
    }
    let mut model = lowered.model;
    model.acceptances = acceptances;
    model.without_basis = without_basis;
    if settings.require_parameters && !any_error(&diagnostics) {
        diagnostics.extend(model.unexplained());
    }
    sort(&mut diagnostics);
    let sound = !any_error(&diagnostics);
    (sound.then_some(model), diagnostics)
}

/// The names that look like one, in words: `` `a` or `b` ``.
pub fn names_near<'a>(name: &str, known: impl Iterator<Item = &'a str>) -> Option<String> {
    names::choice(&names::near(name, known))
}
