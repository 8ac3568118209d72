//! The texts that others are made from: the models of the tests, the examples, the pages and the reference.

use super::case::Case;
use super::memory::Memory;
use super::trial::End;
use outcross::language::DECLARATION_KEYWORDS;
use std::collections::HashSet;
use std::fs;
use std::path::Path;

/// Longer texts take too long for too little.
pub const LONGEST: usize = 4096;

/// Of the texts that come up, only shorter ones are kept.
const LONGEST_LEARNED: usize = 1024;

/// Texts that are learned beside those of the tests, of each kind.
const MOST_LEARNED: usize = 3_000;

/// The texts, and the pieces they are made of.
#[derive(Clone, Default)]
pub struct Corpus {
    /// Models of all kinds.
    pub models: Vec<String>,
    /// Models that have results.
    pub sound: Vec<String>,
    /// Parts and tables, by the names that models use.
    pub neighbours: Vec<(String, String)>,
    /// Declarations of all models.
    pub declarations: Vec<String>,
    /// The declarations that fragments of a page use.
    prelude: String,
    seen: HashSet<u64>,
}

impl Corpus {
    /// The texts of this project, in the same order on every machine.
    pub fn of_the_tests() -> Self {
        let root = Path::new(env!("CARGO_MANIFEST_DIR"));
        let mut corpus = Self::default();
        for folder in ["examples", "grammar", "src/diagnostics/pages", "tests"] {
            corpus.folder(&root.join(folder));
        }
        corpus.declarations = corpus.models.iter().flat_map(|model| declarations(model)).collect();
        corpus
    }

    fn folder(&mut self, folder: &Path) {
        let entries = fs::read_dir(folder).expect("the folder can be read");
        let mut paths: Vec<_> = entries.map(|entry| entry.expect("it can be read").path()).collect();
        paths.sort();
        for path in paths {
            if path.is_dir() {
                self.folder(&path);
                continue;
            }
            let extension = path.extension().and_then(|extension| extension.to_str());
            let Some(kind @ ("limit" | "md" | "csv")) = extension else {
                continue;
            };
            // A file that is no text is there for the tests of just that.
            let Ok(text) = fs::read_to_string(&path) else { continue };
            let text = text.replace("\r\n", "\n");
            if kind == "md" {
                self.page(&text);
            } else if folder.ends_with("shared") {
                let name = path.file_name().unwrap_or_default().to_string_lossy();
                self.neighbour(&format!("shared/{name}"), &text);
            }
            if kind == "limit" {
                self.model(&text);
            }
        }
    }

    /// The fenced blocks of a page: ```` ```limit ```` and what follows on the line, which may be the name of a file.
    fn page(&mut self, page: &str) {
        let prelude = page
            .split("```limit prelude\n")
            .nth(1)
            .and_then(|rest| rest.split("```").next());
        self.prelude = prelude.unwrap_or_default().to_owned();
        let mut lines = page.lines();
        while let Some(line) = lines.next() {
            let Some(head) = line.strip_prefix("```") else { continue };
            let text: String = lines
                .by_ref()
                .take_while(|line| *line != "```")
                .map(|line| format!("{line}\n"))
                .collect();
            let name = head.split_whitespace().last().unwrap_or_default().trim_matches('"');
            if name.contains('.') {
                self.neighbour(name, &text);
            }
            match head {
                "limit fragment" => self.model(&format!("{text}{}", self.prelude)),
                _ if head.starts_with("limit") => self.model(&text),
                _ => {}
            }
        }
    }

    fn model(&mut self, text: &str) {
        if text.len() <= LONGEST {
            self.models.push(text.to_owned());
        }
    }

    fn neighbour(&mut self, name: &str, text: &str) {
        if text.len() <= LONGEST && !self.neighbours.iter().any(|(known, _)| known == name) {
            self.neighbours.push((name.to_owned(), text.to_owned()));
        }
    }

    /// The neighbours, to be read.
    pub fn neighbours(&self) -> Memory {
        let mut memory = Memory::default();
        for (name, text) in &self.neighbours {
            memory.insert(name, &**text);
        }
        memory
    }

    /// Keeps a model that ended as none did before.
    pub fn learn(&mut self, case: &Case, end: &End) {
        let kept = if end.has_results {
            &mut self.sound
        } else {
            &mut self.models
        };
        let short = case.neighbour.is_none() && case.model.len() <= LONGEST_LEARNED;
        if short && kept.len() < MOST_LEARNED && self.seen.insert(end.signature) {
            kept.push(case.model.clone());
        }
    }
}

/// A text in pieces, each but the first beginning with a line that begins a declaration.
pub fn declarations(text: &str) -> Vec<String> {
    let mut pieces = vec![String::new()];
    for line in text.split_inclusive('\n') {
        let word = line.split(|c: char| !c.is_alphanumeric()).next().unwrap_or_default();
        if DECLARATION_KEYWORDS.contains(&word) {
            pieces.push(String::new());
        }
        if let Some(last) = pieces.last_mut() {
            last.push_str(line);
        }
    }
    pieces
}
