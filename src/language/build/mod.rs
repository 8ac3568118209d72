//! From what the grammar found to the tree.
//!
//! The shape of the pairs is given by the grammar, so every function here takes it for granted and answers `None`
//! where it is not met: a defect of the program, reported rather than panicked over.

mod expressions;
mod limit_state;
mod units;

use super::parser::Rule;
use super::tree::{
    Declaration, DeclarationKind, DefinitionKeyword, FunctionKeyword, FunctionParameter, Number, Path, Text,
    UnitExpression, Word,
};
use crate::diagnostics::{Code, Diagnostic};
use crate::source::{FileId, Span};
use pest::iterators::{Pair, Pairs};

/// The pairs of one rule, with a look at the next.
type Stream<'i> = std::iter::Peekable<Pairs<'i, Rule>>;

/// Makes the tree of one stretch.
pub(super) struct Builder<'a> {
    file: FileId,
    offset: usize,
    diagnostics: &'a mut Vec<Diagnostic>,
}

impl<'a> Builder<'a> {
    /// A builder for a stretch that starts at the byte `offset` of its file.
    pub(super) fn new(file: FileId, offset: usize, diagnostics: &'a mut Vec<Diagnostic>) -> Self {
        Self {
            file,
            offset,
            diagnostics,
        }
    }

    /// The declarations among the pairs of a stretch.
    pub(super) fn declarations<'i>(&mut self, pairs: impl Iterator<Item = Pair<'i, Rule>>) -> Vec<Declaration> {
        pairs
            .filter(|pair| pair.as_rule() == Rule::declaration)
            .filter_map(|pair| {
                let span = self.span(&pair);
                let reported = self.diagnostics.len();
                let declaration = self.declaration(pair);
                if declaration.is_none() && self.diagnostics.len() == reported {
                    let message = "this declaration could not be read";
                    self.diagnostics
                        .push(Diagnostic::new(Code::SyntaxUnexpected, span, message));
                }
                declaration
            })
            .collect()
    }

    fn declaration(&mut self, pair: Pair<'_, Rule>) -> Option<Declaration> {
        let span = self.trimmed_span(&pair);
        let mut parts = pair.into_inner().peekable();
        let body = parts.next()?;
        let rule = body.as_rule();
        let mut stream = body.into_inner().peekable();
        let keyword_pair = stream.next()?;
        let keyword = self.span(&keyword_pair);
        let kind = match rule {
            Rule::definition => {
                let keyword = match keyword_pair.as_str() {
                    "constant" => DefinitionKeyword::Constant,
                    "quantity" => DefinitionKeyword::Quantity,
                    "variable" => DefinitionKeyword::Variable,
                    "process" => DefinitionKeyword::Process,
                    _ => DefinitionKeyword::Margin,
                };
                DeclarationKind::Definition {
                    keyword,
                    name: self.word(stream.next()?),
                    unit: self.unit_note(&mut stream)?,
                    value: self.next_sum(&mut stream)?,
                }
            }
            Rule::parameter => DeclarationKind::Parameter {
                name: self.word(stream.next()?),
                unit: self.unit_note(&mut stream)?,
                value: match take(&mut stream, Rule::assign) {
                    Some(_) => Some(self.next_sum(&mut stream)?),
                    None => None,
                },
            },
            Rule::function => {
                let keyword = match keyword_pair.as_str() {
                    "profile" => FunctionKeyword::Profile,
                    "kernel" => FunctionKeyword::Kernel,
                    _ => FunctionKeyword::Spectrum,
                };
                DeclarationKind::Function {
                    keyword,
                    name: self.word(stream.next()?),
                    parameters: self.head(stream.next()?)?,
                    unit: self.unit_note(&mut stream)?,
                    value: self.next_sum(&mut stream)?,
                }
            }
            Rule::climate => DeclarationKind::Climate {
                name: self.word(stream.next()?),
                unit: self.unit_note(&mut stream)?,
                value: self.next_sum(&mut stream)?,
            },
            Rule::limit_state => {
                let name = self.word(stream.next()?);
                let (lines, close) = self.limit_state(&mut stream)?;
                DeclarationKind::LimitState { name, lines, close }
            }
            Rule::expect => DeclarationKind::Expect {
                quantity: self.quantity(stream.next()?)?,
                value: self.next_sum(&mut stream)?,
                tolerance: self.next_sum(&mut stream)?,
            },
            Rule::part => {
                let path = self.text(&stream.next()?);
                take(&mut stream, Rule::as_word);
                DeclarationKind::Use {
                    path,
                    name: self.word(stream.next()?),
                    arguments: match stream.next() {
                        Some(arguments) => self.arguments(arguments)?,
                        None => Vec::new(),
                    },
                }
            }
            Rule::correlate => {
                let mut names = Vec::new();
                while let Some(pair) = stream.next_if(|pair| matches!(pair.as_rule(), Rule::path | Rule::comma)) {
                    if pair.as_rule() == Rule::path {
                        names.push(self.path(&pair));
                    }
                }
                DeclarationKind::Correlate {
                    names,
                    value: self.next_sum(&mut stream)?,
                }
            }
            Rule::accept => {
                let code = self.word(stream.next()?);
                let at = match take(&mut stream, Rule::at) {
                    Some(_) => Some(self.path(&stream.next()?)),
                    None => None,
                };
                take(&mut stream, Rule::because);
                DeclarationKind::Accept {
                    code,
                    at,
                    reason: self.text(&stream.next()?),
                }
            }
            Rule::title => DeclarationKind::Title(self.text(&stream.next()?)),
            Rule::language => {
                let digits = stream.next()?;
                DeclarationKind::Language(Number {
                    value: expressions::value(digits.as_str())?,
                    digits: self.span(&digits),
                    unit: None,
                })
            }
            _ => return None,
        };
        Some(Declaration {
            span,
            keyword,
            kind,
            basis: self.basis(&mut parts)?,
            documentation: 0..0,
        })
    }

    /// `(t)`, `(tau, size: m)`.
    fn head(&mut self, pair: Pair<'_, Rule>) -> Option<Vec<FunctionParameter>> {
        let mut stream = pair.into_inner().peekable();
        let mut parameters = Vec::new();
        while let Some(pair) = stream.next() {
            if pair.as_rule() == Rule::name {
                parameters.push(FunctionParameter {
                    name: self.word(pair),
                    unit: self.unit_note(&mut stream)?,
                });
            }
        }
        Some(parameters)
    }

    /// `: kN`, if it follows.
    fn unit_note(&mut self, stream: &mut Stream<'_>) -> Option<Option<UnitExpression>> {
        match take(stream, Rule::colon) {
            Some(_) => Some(Some(self.unit(&stream.next()?)?)),
            None => Some(None),
        }
    }

    /// `basis "..."`, if it follows.
    fn basis(&mut self, stream: &mut Stream<'_>) -> Option<Option<Text>> {
        match take(stream, Rule::basis) {
            Some(basis) => Some(Some(self.text(&basis.into_inner().nth(1)?))),
            None => Some(None),
        }
    }

    fn word(&self, pair: Pair<'_, Rule>) -> Word {
        Word {
            text: pair.as_str().into(),
            span: self.span(&pair),
        }
    }

    fn text(&self, pair: &Pair<'_, Rule>) -> Text {
        let quoted = pair.as_str();
        let inside = quoted.get(1..quoted.len().saturating_sub(1)).unwrap_or("");
        let value = if inside.contains('\\') {
            let mut value = String::with_capacity(inside.len());
            let mut characters = inside.chars();
            while let Some(character) = characters.next() {
                value.extend(if character == '\\' {
                    characters.next()
                } else {
                    Some(character)
                });
            }
            value.into()
        } else {
            inside.into()
        };
        Text {
            value,
            span: self.span(pair),
        }
    }

    fn path(&self, pair: &Pair<'_, Rule>) -> Path {
        let span = self.span(pair);
        let mut start = self.offset + pair.as_span().start();
        let words = pair
            .as_str()
            .split('.')
            .map(|word| {
                let word_start = start;
                start += word.len() + 1;
                Word {
                    text: word.into(),
                    span: Span::new(self.file, word_start, word_start + word.len()),
                }
            })
            .collect();
        Path { words, span }
    }

    fn span(&self, pair: &Pair<'_, Rule>) -> Span {
        let span = pair.as_span();
        Span::new(self.file, self.offset + span.start(), self.offset + span.end())
    }

    /// The span to the last token: pest counts the gap before an optional part that is not there.
    fn trimmed_span(&self, pair: &Pair<'_, Rule>) -> Span {
        let start = self.offset + pair.as_span().start();
        Span::new(self.file, start, self.offset + last_end(pair.clone()))
    }
}

/// The end of the last token of a pair.
pub(super) fn last_end(mut pair: Pair<'_, Rule>) -> usize {
    loop {
        let end = pair.as_span().end();
        match pair.into_inner().next_back() {
            Some(last) => pair = last,
            None => return end,
        }
    }
}

/// The next pair, if it is of this rule.
fn take<'i>(stream: &mut Stream<'i>, rule: Rule) -> Option<Pair<'i, Rule>> {
    stream.next_if(|pair| pair.as_rule() == rule)
}
