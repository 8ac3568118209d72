//! Byte offsets to lines and columns.

/// Where a text starts: behind the byte order mark that some editors put at the head of a file. It is no character of
/// the first line.
pub fn after_mark(text: &str) -> usize {
    match text.strip_prefix('\u{feff}') {
        Some(rest) => text.len() - rest.len(),
        None => 0,
    }
}

/// A line and a column, both from 1. Columns count Unicode scalar values.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub struct LineColumn {
    /// The line, from 1.
    pub line: usize,
    /// The column, from 1, in Unicode scalar values.
    pub column: usize,
}

/// Where the lines of a text start. A line ends with `\n`; a `\r` before it belongs to the line.
#[derive(Debug, Default)]
pub struct LineIndex {
    starts: Vec<u32>,
}

impl LineIndex {
    /// Finds the line starts of `text`.
    pub fn new(text: &str) -> Self {
        let starts = std::iter::once(0)
            .chain(
                text.bytes()
                    .enumerate()
                    .filter(|(_, byte)| *byte == b'\n')
                    .map(|(at, _)| u32::try_from(at + 1).unwrap_or(u32::MAX)),
            )
            .collect();
        Self { starts }
    }

    /// Line and column of a byte offset; an offset past the end is that of the end.
    pub fn line_column(&self, text: &str, offset: usize) -> LineColumn {
        let offset = super::floor_boundary(text, offset);
        let line = self.starts.partition_point(|start| *start as usize <= offset).max(1);
        let start = match line {
            1 => after_mark(text),
            _ => self.starts.get(line - 1).map_or(0, |start| *start as usize),
        };
        let column = text.get(start..offset).map_or(0, |part| part.chars().count()) + 1;
        LineColumn { line, column }
    }

    /// The byte range of a line (from 1) without its end-of-line characters; `None` past the last line.
    pub fn line_range(&self, text: &str, line: usize) -> Option<std::ops::Range<usize>> {
        let start = *self.starts.get(line.checked_sub(1)?)? as usize;
        let end = self.starts.get(line).map_or(text.len(), |next| *next as usize);
        let content = text.get(start..end)?.trim_end_matches(['\n', '\r']);
        Some(start..start + content.len())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_count_characters_and_lines_end_with_a_newline() {
        let text = "a µ²\r\nb\n\nß";
        let index = LineIndex::new(text);
        let at = |needle: &str| {
            let offset = text.find(needle).expect("the needle stands in the text");
            let place = index.line_column(text, offset);
            (place.line, place.column)
        };
        assert_eq!(at("a"), (1, 1));
        assert_eq!(at("²"), (1, 4));
        assert_eq!(at("b"), (2, 1));
        assert_eq!(at("ß"), (4, 1));
        let end = index.line_column(text, text.len() + 10);
        assert_eq!((end.line, end.column), (4, 2));
        assert_eq!(index.line_range(text, 1), Some(0..6));
        assert_eq!(index.line_range(text, 3), Some(10..10));
        assert_eq!(index.line_range(text, 5), None);
    }

    #[test]
    fn a_byte_order_mark_is_no_column() {
        let text = "\u{feff}a\nb";
        let index = LineIndex::new(text);
        for (offset, line, column) in [(0, 1, 1), (3, 1, 1), (4, 1, 2), (5, 2, 1)] {
            assert_eq!(index.line_column(text, offset), LineColumn { line, column });
        }
    }

    #[test]
    fn an_offset_inside_a_character_is_that_character() {
        let text = "µµ";
        assert_eq!(LineIndex::new(text).line_column(text, 3).column, 2);
    }
}
