//! The front of the stage: a text in, its tree and its faults out.

use super::build::Builder;
use super::lost;
use super::messages::Fault;
use super::reader::Reader;
use super::recovery;
use super::scan::{DEEPEST, scan};
use super::tree::{Expression, Tree};
use crate::diagnostics::{Code, Diagnostic};
use crate::source::{FileId, Span};
use pest::Parser;
use std::ops::Range;

/// The reader that pest makes of the grammar.
#[derive(pest_derive::Parser)]
#[grammar = "grammar/outcross.pest"]
pub(super) struct Grammar;

/// Reads a file. It never fails: a declaration that cannot be read is reported and left out of the tree. The findings
/// come in the order of the text. Takes time and memory in proportion to the text.
pub fn parse(file: FileId, text: &str) -> (Tree, Vec<Diagnostic>) {
    let scan = scan(text);
    let mut tree = Tree {
        file,
        declarations: Vec::new(),
        lost: Vec::new(),
        comments: Vec::new(),
    };
    let mut reader = Reader::new(file, text, &scan.comments);
    for stretch in &scan.stretches {
        let range = stretch.range.clone();
        if let Some(at) = stretch.too_deep {
            reader.report(at, || too_deep(file, at));
            tree.lost.extend(lost::names(file, text, range));
            continue;
        }
        let (found, readable) = match Grammar::parse(Rule::stretch, reader.slice(range.clone())) {
            Ok(pairs) => {
                let before = reader.diagnostics.len();
                let found = Builder::new(file, range.start, &mut reader.diagnostics).declarations(pairs);
                (found, reader.diagnostics.len() == before)
            }
            Err(_) => (recovery::recover(&mut reader, range.clone()), false),
        };
        tree.declarations.extend(found);
        if !readable {
            tree.lost.extend(lost::names(file, text, range));
        }
    }
    let diagnostics = reader.finish();
    for declaration in &mut tree.declarations {
        declaration.documentation = documentation(text, &scan.comments, declaration.span.start as usize);
    }
    tree.comments = scan
        .comments
        .into_iter()
        .map(|range| Span::new(file, range.start, range.end))
        .collect();
    (tree, diagnostics)
}

/// Reads the text of one value, `36 mm` of `--set rod_diameter=36 mm`.
///
/// # Errors
/// What is wrong with it, at least one finding, if it is no expression.
pub fn parse_expression(file: FileId, text: &str) -> Result<Expression, Vec<Diagnostic>> {
    let scan = scan(text);
    if let Some(at) = scan.stretches.iter().find_map(|stretch| stretch.too_deep) {
        return Err(vec![too_deep(file, at)]);
    }
    let reader = Reader::new(file, text, &scan.comments);
    match Grammar::parse(Rule::sole_value, text) {
        Ok(mut pairs) => {
            let mut diagnostics = Vec::new();
            let sum = pairs.next();
            let expression = sum.and_then(|pair| Builder::new(file, 0, &mut diagnostics).sum(pair));
            expression.ok_or(diagnostics)
        }
        Err(error) => Err(vec![Fault::new(&reader, 0..text.len(), &error).describe()]),
    }
}

fn too_deep(file: FileId, at: usize) -> Diagnostic {
    let message = format!("brackets are nested more than {DEEPEST} deep");
    Diagnostic::new(Code::SyntaxNesting, Span::new(file, at, at + 1), message)
        .here("one bracket too many")
        .help("close a bracket that was left open, or give the inner parts names of their own")
}

/// The comment lines directly above `start`: no blank line between, and nothing but the comment on their lines.
fn documentation(text: &str, comments: &[Range<usize>], start: usize) -> Range<usize> {
    let end = comments.partition_point(|comment| comment.start < start);
    let mut first = end;
    let mut below = start;
    while let Some(comment) = first.checked_sub(1).and_then(|index| comments.get(index)) {
        let between = text.get(comment.end..below).unwrap_or("");
        let before = text.get(..comment.start).unwrap_or("").trim_end_matches([' ', '\t']);
        let alone = before.is_empty() || before.ends_with('\n') || before == "\u{FEFF}";
        if !alone || !one_newline(between) {
            break;
        }
        first -= 1;
        below = comment.start;
    }
    first..end
}

/// Whether a text is one newline among blanks; looks at no more than it must.
fn one_newline(text: &str) -> bool {
    let line = text.trim_end_matches([' ', '\t']);
    line.strip_suffix('\n')
        .is_some_and(|rest| rest.trim_end_matches([' ', '\t', '\r']).is_empty())
}
