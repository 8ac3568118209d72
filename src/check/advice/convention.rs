//! A value whose own name says that it is something else than its place takes: a scale of fluctuation given as a
//! length, a logarithmic decrement given as a damping ratio. Only a bare name is looked at: whoever computes with it has
//! thought of it.

use super::{Finished, sole_name};
use crate::check::names::{ItemId, place};
use crate::check::parts::InstanceId;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Argument, Call, DeclarationKind, Expression, ExpressionKind, LimitLineKind, Path};
use crate::units::{show, show_number};
use std::f64::consts::PI;

/// What a name can say.
struct Convention {
    /// The argument it is given to.
    argument: &'static str,
    /// The words of the name that tell, all of them.
    words: &'static [&'static str],
    /// What the name says it is.
    said: &'static str,
    /// What the argument takes.
    taken: &'static str,
    effect: Effect,
    /// What to write, `{}` standing for the name.
    mend: &'static str,
}

/// What the difference does.
enum Effect {
    /// In words.
    Words(&'static str),
    /// A logarithmic decrement d is the ratio d / sqrt(4 pi² + d²).
    Decrement,
    /// By how much, in the kernel's own scale of fluctuation.
    Fluctuation,
}

const CONVENTIONS: &[Convention] = &[
    Convention {
        argument: "length",
        words: &["fluctuation"],
        said: "a scale of fluctuation",
        taken: "the length in the formula",
        effect: Effect::Fluctuation,
        mend: "give it as `scale_of_fluctuation: {}`",
    },
    Convention {
        argument: "scale_of_fluctuation",
        words: &["integral"],
        said: "an integral scale, which counts lags of one sign",
        taken: "the integral over lags of both signs",
        effect: Effect::Words("the process would change twice as fast, and every crossing rate be twice too high"),
        mend: "write `scale_of_fluctuation: 2 * {}`",
    },
    Convention {
        argument: "damping",
        words: &["decrement"],
        said: "a logarithmic decrement",
        taken: "the ratio to critical damping",
        effect: Effect::Decrement,
        mend: "write `damping: {} / (2 * pi)`",
    },
    Convention {
        argument: "standard_deviation",
        words: &["variance"],
        said: "a variance",
        taken: "its root",
        effect: Effect::Words("the scatter would be that of its square"),
        mend: "write `sqrt({})`",
    },
    Convention {
        argument: "standard_deviation",
        words: &["significant", "height"],
        said: "a significant height",
        taken: "a standard deviation",
        effect: Effect::Words("a significant height is 4 standard deviations: the scatter would be 4 times too large"),
        mend: "write `{} / 4`",
    },
    Convention {
        argument: "mean",
        words: &["characteristic"],
        said: "a characteristic value",
        taken: "a mean",
        effect: Effect::Words(
            "the margin would be off by the distance between the two, often more than one standard deviation",
        ),
        mend: "give the mean that belongs to it, or state the relation where `{}` is declared",
    },
    Convention {
        argument: "mean",
        words: &["fractile"],
        said: "a fractile",
        taken: "a mean",
        effect: Effect::Words(
            "the margin would be off by the distance between the two: 1.645 standard deviations for 5 %",
        ),
        mend: "give the mean that belongs to it, or state the relation where `{}` is declared",
    },
];

impl Finished<'_> {
    pub(super) fn conventions(&self) -> Vec<Diagnostic> {
        let mut found = Vec::new();
        for item in self.names.items() {
            let instance = self.names.item(item).instance;
            match &self.names.declaration(item).kind {
                // What is at fault has been reported.
                DeclarationKind::Definition { .. } if !self.is_sound(item) => {}
                DeclarationKind::LimitState { .. } if !self.lowered.limit_states.contains_key(&item) => {}
                DeclarationKind::Definition { value, .. } | DeclarationKind::Function { value, .. } => {
                    calls(value, &mut |call| {
                        if self.is_built_in(call, instance) {
                            let arguments = call.arguments.iter();
                            found.extend(arguments.filter_map(|argument| self.convention(call, argument, item)));
                        }
                    });
                }
                DeclarationKind::LimitState { lines, .. } => {
                    for line in lines {
                        if let LimitLineKind::ReferencePeriod(time) = &line.kind {
                            found.extend(return_period(time));
                        }
                    }
                }
                _ => {}
            }
        }
        found
    }

    /// Whether what is called is of the language: arguments of the author's own kernels mean what their author says.
    fn is_built_in(&self, call: &Call, instance: InstanceId) -> bool {
        matches!(call.function.words.as_slice(), [word] if self.names.find(instance, &word.text).is_none())
    }

    fn convention(&self, call: &Call, argument: &Argument, item: ItemId) -> Option<Diagnostic> {
        let instance = self.names.item(item).instance;
        let word = argument.name.as_ref()?;
        let path = sole_name(&argument.value)?;
        let convention = CONVENTIONS
            .iter()
            .find(|one| one.argument == &*word.text && says(path, one.words))?;
        let name = written(path);
        let value = self.plain(&argument.value, instance);
        let effect = match (&convention.effect, value) {
            (Effect::Words(words), _) => (*words).to_string(),
            (Effect::Decrement, Some(value)) => {
                let ratio = value.value / (4.0 * PI * PI + value.value * value.value).sqrt();
                format!(
                    "{} is a ratio of {} %: {} times the damping that is there",
                    show(value.value, &value.unit, 4),
                    show_number(100.0 * ratio, 3),
                    show_number(value.value / ratio, 3)
                )
            }
            (Effect::Decrement, None) => "6.28 times the damping that is there".to_string(),
            (Effect::Fluctuation, value) => {
                let factor = value.and_then(|value| Some(self.fluctuation(call, item)? / value.value));
                match factor {
                    // That of `triangular` is its length.
                    Some(factor) if (factor - 1.0).abs() < 1e-9 => return None,
                    Some(factor) if factor > 1.0 => {
                        let factor = show_number(factor, 3);
                        format!(
                            "the process would keep its memory {factor} times too long, and every crossing rate be \
                             {factor} times too low"
                        )
                    }
                    Some(_) | None => "every crossing rate changes with the ratio of the two".to_string(),
                }
            }
        };
        let message = format!(
            "`{name}` is {} by its name, and `{}` takes {}",
            convention.said, word.text, convention.taken
        );
        let finding = Diagnostic::new(Code::CallConvention, argument.value.span, message)
            .here(effect)
            .help(convention.mend.replace("{}", &name));
        Some(self.with_declaration(finding, path, instance))
    }

    /// The scale of fluctuation of the process that an item is, where `call` is all of its correlation.
    fn fluctuation(&self, call: &Call, item: ItemId) -> Option<f64> {
        let gaussian = self.gaussian(item)?;
        let correlation = gaussian.argument("correlation")?;
        if correlation.span != call.function.span.to(call.brackets) {
            return None;
        }
        let [term] = gaussian.named.form.terms() else {
            return None;
        };
        let source = self.lowered.model.sources.get(term.source.0 as usize)?;
        Some(source.kernel()?.scale_of_fluctuation().ok()?.value)
    }

    fn with_declaration(&self, finding: Diagnostic, path: &Path, instance: InstanceId) -> Diagnostic {
        match self.resolved(path, instance) {
            Some(item) => finding.label(place(self.names.declaration(item)), "declared here"),
            None => finding,
        }
    }
}

/// The return period of a load is not the time that a structure is to survive.
fn return_period(time: &Expression) -> Option<Diagnostic> {
    let path = sole_name(time)?;
    if !says(path, &["return"]) {
        return None;
    }
    let message = format!(
        "`{}` is a return period by its name, and a reference period is the time to be survived",
        written(path)
    );
    Some(
        Diagnostic::new(Code::CallConvention, time.span, message)
            .here("a load that returns once in that time says nothing about how long failure counts")
            .help("write the time over which failure counts, such as `50 year`"),
    )
}

/// Whether a name holds all of some words.
fn says(path: &Path, words: &[&str]) -> bool {
    path.words.last().is_some_and(|last| {
        let holds = |word: &&str| last.text.split('_').any(|part| part.eq_ignore_ascii_case(word));
        words.iter().all(holds)
    })
}

fn written(path: &Path) -> String {
    let words: Vec<&str> = path.words.iter().map(|word| &*word.text).collect();
    words.join(".")
}

/// Visits every call of an expression. The depth of an expression is bounded by the parser.
fn calls<'e>(expression: &'e Expression, visit: &mut dyn FnMut(&'e Call)) {
    match &expression.kind {
        ExpressionKind::Number(_) | ExpressionKind::String(_) | ExpressionKind::Name(_) => {}
        ExpressionKind::Sum(terms) => terms.iter().for_each(|term| calls(&term.value, visit)),
        ExpressionKind::Product(factors) => factors.iter().for_each(|factor| calls(&factor.value, visit)),
        ExpressionKind::Negative(inner) | ExpressionKind::Bracket(inner) => calls(inner, visit),
        ExpressionKind::Power(base, exponent) => {
            calls(base, visit);
            calls(exponent, visit);
        }
        ExpressionKind::Call(call) => {
            visit(call);
            call.arguments.iter().for_each(|argument| calls(&argument.value, visit));
        }
        ExpressionKind::Group(arguments) => arguments.iter().for_each(|argument| calls(&argument.value, visit)),
    }
}
