//! Texts and places in them: files, spans and the line index.
//!
//! This is the only place of the program that knows lines and columns. Everything else speaks of half-open byte
//! ranges in a file.

mod disk;
mod line_index;
mod reader;

pub use disk::Disk;
pub use line_index::{LineColumn, LineIndex, after_mark};
pub use reader::{LARGEST_FILE, Reader, Unreadable, beside, plain};

use std::path::PathBuf;

/// A file of the project, as an index into [`Files`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct FileId(pub u32);

/// A half-open range of bytes, `start..end`, in one file.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Span {
    /// The file the range lies in.
    pub file: FileId,
    /// The first byte.
    pub start: u32,
    /// One past the last byte.
    pub end: u32,
}

impl Span {
    /// The range `start..end` of `file`.
    pub fn new(file: FileId, start: usize, end: usize) -> Self {
        let clamp = |offset: usize| u32::try_from(offset).unwrap_or(u32::MAX);
        Self {
            file,
            start: clamp(start),
            end: clamp(end.max(start)),
        }
    }

    /// The smallest span that covers both; `self` where they lie in different files.
    #[must_use]
    pub fn to(self, other: Self) -> Self {
        if self.file != other.file {
            return self;
        }
        Self {
            file: self.file,
            start: self.start.min(other.start),
            end: self.end.max(other.end),
        }
    }

    /// The empty span at the end of this one.
    #[must_use]
    pub fn after(self) -> Self {
        Self {
            start: self.end,
            ..self
        }
    }

    /// The range as `usize`, for slicing.
    pub fn range(self) -> std::ops::Range<usize> {
        self.start as usize..self.end as usize
    }
}

/// One text: where it came from and what it says.
#[derive(Debug)]
pub struct SourceFile {
    /// The path as the user gave it, or as a `use` reached it; `-` for standard input.
    pub path: PathBuf,
    /// The text.
    pub text: String,
    lines: LineIndex,
}

impl SourceFile {
    /// The path as shown to people.
    pub fn name(&self) -> String {
        self.path.display().to_string()
    }

    /// The line index of the text.
    pub fn lines(&self) -> &LineIndex {
        &self.lines
    }
}

/// All texts of one run.
#[derive(Debug, Default)]
pub struct Files {
    files: Vec<SourceFile>,
}

impl Files {
    /// An empty set.
    pub fn new() -> Self {
        Self::default()
    }

    /// Adds a text and returns its id.
    pub fn add(&mut self, path: impl Into<PathBuf>, text: String) -> FileId {
        let id = FileId(u32::try_from(self.files.len()).unwrap_or(u32::MAX));
        let lines = LineIndex::new(&text);
        self.files.push(SourceFile {
            path: path.into(),
            text,
            lines,
        });
        id
    }

    /// The file of an id that this set gave out.
    ///
    /// # Panics
    /// If the id comes from another set: a defect of the program, never of a model.
    pub fn get(&self, id: FileId) -> &SourceFile {
        &self.files[id.0 as usize]
    }

    /// The text under a span, with both ends moved to character boundaries inside the file.
    pub fn text(&self, span: Span) -> &str {
        let text = &self.get(span.file).text;
        let start = floor_boundary(text, span.start as usize);
        let end = floor_boundary(text, span.end as usize);
        text.get(start..end.max(start)).unwrap_or("")
    }

    /// Line and column of the first byte of a span, both from 1; columns count Unicode scalar values.
    pub fn place(&self, span: Span) -> LineColumn {
        let file = self.get(span.file);
        file.lines.line_column(&file.text, span.start as usize)
    }

    /// The files with their ids, in the order they were added.
    pub fn iter(&self) -> impl Iterator<Item = (FileId, &SourceFile)> {
        (0u32..).map(FileId).zip(&self.files)
    }
}

/// The largest character boundary of `text` that is at most `offset`.
pub fn floor_boundary(text: &str, offset: usize) -> usize {
    let mut offset = offset.min(text.len());
    while !text.is_char_boundary(offset) {
        offset -= 1;
    }
    offset
}
