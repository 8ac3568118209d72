//! Tree to model: names, parts, units, dimensions, kinds and smoothness. Every fault of the text is found here, and a
//! thing at fault absorbs what follows from it, so that one mistake gives one message.

mod acceptance;
mod advice;
mod lower;
mod model;
mod names;
mod order;
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
    let parts = library.parts(path);
    let mut diagnostics = std::mem::take(&mut library.diagnostics);
    let mut model = None;
    if let Some(parts) = parts {
        let names = names::Names::new(&parts, &mut diagnostics);
        lower::unknown_overrides(&names, &settings.overrides, &mut diagnostics);
        let order = order::order(&names, &mut diagnostics);
        let lowering = lower::Lowering::new(&names, &mut library, settings);
        let mut lowered = lowering.run(&order.items, &order.circular);
        diagnostics.append(&mut lowered.diagnostics);
        let mut acceptances = Acceptances::read(&names, &mut diagnostics);
        let finished = advice::Finished::new(&names, library.files(), &lowered);
        diagnostics.extend(finished.advice(!any_error(&diagnostics)));
        let without_basis = finished.without_basis();
        let complete = finished.is_complete() && !any_error(&diagnostics);
        acceptances.apply(&mut diagnostics);
        if complete {
            diagnostics.extend(acceptances.idle(|code| !code.needs_results()));
        }
        let mut found = lowered.model;
        found.acceptances = acceptances;
        found.without_basis = without_basis;
        model = Some(found);
    }
    if let Some(model) = &model
        && settings.require_parameters
        && !any_error(&diagnostics)
    {
        diagnostics.extend(model.unexplained());
    }
    sort(&mut diagnostics);
    if any_error(&diagnostics) {
        model = None;
    }
    (model, diagnostics)
}

/// The names that look like one, in words: `` `a` or `b` ``.
pub fn names_near<'a>(name: &str, known: impl Iterator<Item = &'a str>) -> Option<String> {
    names::choice(&names::near(name, known))
}
