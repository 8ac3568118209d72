//! Files that stand in memory, and a run over them.

use outcross::check::{self, Model, Settings};
use outcross::diagnostics::{Diagnostic, any_error, sort, terminal};
use outcross::language;
use outcross::language::tree::{DeclarationKind, DefinitionKeyword};
use outcross::results;
use outcross::source::{Files, Reader, Unreadable, plain};
use std::collections::HashMap;
use std::path::{Path, PathBuf};

/// Texts by path.
#[derive(Clone, Default)]
pub struct Memory(HashMap<PathBuf, String>);

impl Memory {
    /// A single file.
    pub fn of(name: &str, text: &str) -> Self {
        Self::default().with(name, text)
    }

    /// One file more, in place of another of the same name.
    pub fn with(mut self, name: &str, text: &str) -> Self {
        self.insert(name, text);
        self
    }

    /// Adds a file, in place of another of the same name, whose text it returns.
    pub fn insert(&mut self, name: impl Into<PathBuf>, text: impl Into<String>) -> Option<String> {
        self.0.insert(name.into(), text.into())
    }

    /// Checks a file, with values demanded of all parameters or not.
    pub fn run(&self, name: &str, require_parameters: bool) -> Run {
        run(self, Path::new(name), require_parameters)
    }
}

/// All texts lie in one root folder.
impl Reader for Memory {
    fn read(&self, path: &Path) -> Result<String, Unreadable> {
        let path = plain(path).ok_or_else(|| Unreadable::Outside(PathBuf::from("models")))?;
        self.0.get(&path).cloned().ok_or(Unreadable::Missing)
    }

    fn identity(&self, path: &Path) -> PathBuf {
        plain(path).unwrap_or_else(|| path.to_path_buf())
    }
}

/// What came of a check.
pub struct Run {
    pub files: Files,
    pub model: Option<Model>,
    pub diagnostics: Vec<Diagnostic>,
}

/// Checks a file. Whatever it holds, there is a model where nothing is an error, every finding has words, and every
/// place lies in its file on character boundaries.
pub fn run(reader: &dyn Reader, path: &Path, require_parameters: bool) -> Run {
    let mut files = Files::new();
    let settings = Settings {
        require_parameters,
        ..Settings::default()
    };
    let (model, diagnostics) = check::check(&mut files, reader, path, &settings);
    assert_eq!(model.is_none(), any_error(&diagnostics));
    if let Some(model) = model.as_ref().filter(|_| require_parameters) {
        nothing_is_dropped(&files, model);
    }
    for one in &diagnostics {
        assert!(!one.message.is_empty(), "{one:?}");
        let places = one.labels.iter().map(|label| label.place);
        for place in std::iter::once(one.place).chain(places) {
            let text = &files.get(place.file).text;
            assert!(text.get(place.range()).is_some(), "{one:?} lies outside of its file");
        }
    }
    Run {
        files,
        model,
        diagnostics,
    }
}

/// Everything the file declares stands in the model.
fn nothing_is_dropped(files: &Files, model: &Model) {
    let (tree, _) = language::parse(model.file, &files.get(model.file).text);
    let count = |wanted: fn(&DeclarationKind) -> bool| tree.declarations.iter().filter(|one| wanted(&one.kind)).count();
    let varying = count(|kind| {
        use DefinitionKeyword::{Margin, Process};
        matches!(
            kind,
            DeclarationKind::Definition {
                keyword: Process | Margin,
                ..
            }
        )
    });
    let in_file = model.varying.iter().filter(|one| !one.name.contains('.')).count();
    assert_eq!(in_file, varying);
    let in_file = model.limit_states.iter().filter(|one| !one.name.contains('.')).count();
    assert_eq!(
        in_file,
        count(|kind| matches!(kind, DeclarationKind::LimitState { .. }))
    );
    let expectations = count(|kind| matches!(kind, DeclarationKind::Expect { .. }));
    assert!(model.expectations.len() >= expectations);
}

impl Run {
    /// With what only the results show, as `evaluate` has it.
    pub fn with_results(mut self) -> Self {
        if let Some(model) = &self.model {
            let results = results::evaluate(&self.files, model, &self.diagnostics, &[]);
            self.diagnostics.extend(results.findings);
            sort(&mut self.diagnostics);
        }
        self
    }

    /// The findings that nobody has accepted.
    pub fn open(&self) -> impl Iterator<Item = &Diagnostic> {
        self.diagnostics.iter().filter(|one| one.is_open())
    }

    /// What a user reads at the terminal.
    pub fn shown(&self) -> String {
        let mut out = Vec::new();
        terminal::write(&mut out, &self.files, &self.diagnostics, false).expect("a vector takes everything");
        let text = String::from_utf8(out).expect("the terminal is written in UTF-8");
        text.lines().map(|line| line.trim_end().to_owned() + "\n").collect()
    }

    /// The codes of the findings, in the order of the text.
    pub fn codes(&self) -> Vec<&'static str> {
        self.diagnostics.iter().map(|one| one.code.name()).collect()
    }
}
