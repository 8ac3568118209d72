//! Aligned columns: what text tables have in common.

use std::io::{self, Write};

/// On which side of its column a cell stands.
#[derive(Clone, Copy, PartialEq)]
pub(super) enum Side {
    Left,
    Right,
}

/// Writes rows in aligned columns, each line indented; no blanks at the ends of lines. Cells that a row lacks are empty.
pub(super) fn write(out: &mut dyn Write, indent: usize, sides: &[Side], rows: &[Vec<String>]) -> io::Result<()> {
    let mut widths = vec![0; sides.len()];
    for row in rows {
        for (width, cell) in widths.iter_mut().zip(row) {
            *width = cell.chars().count().max(*width);
        }
    }
    let mut line = String::new();
    for row in rows {
        line.clear();
        line.extend(std::iter::repeat_n(' ', indent));
        for (index, ((cell, side), width)) in row.iter().zip(sides).zip(&widths).enumerate() {
            if index > 0 {
                line.push_str("   ");
            }
            let blanks = std::iter::repeat_n(' ', width - cell.chars().count());
            if *side == Side::Right {
                line.extend(blanks.clone());
            }
            line.push_str(cell);
            if *side == Side::Left {
                line.extend(blanks);
            }
        }
        writeln!(out, "{}", line.trim_end())?;
    }
    Ok(())
}

/// Writes a paragraph broken at blanks to lines of at most 100 characters, the first line led by `lead`.
pub(super) fn paragraph(out: &mut dyn Write, lead: &str, text: &str) -> io::Result<()> {
    const WIDTH: usize = 100;
    let indent = " ".repeat(lead.chars().count());
    let mut line = lead.to_string();
    let mut empty = true;
    for word in text.split_whitespace() {
        if !empty && line.chars().count() + 1 + word.chars().count() > WIDTH {
            writeln!(out, "{line}")?;
            line.clone_from(&indent);
            empty = true;
        }
        if !empty {
            line.push(' ');
        }
        line.push_str(word);
        empty = false;
    }
    writeln!(out, "{line}")
}

#[cfg(test)]
mod tests {
    use super::*;

    fn written(write: impl FnOnce(&mut dyn Write) -> io::Result<()>) -> String {
        let mut out = Vec::new();
        write(&mut out).expect("a vector takes all");
        String::from_utf8(out).expect("text goes in and comes out")
    }

    #[test]
    fn columns_align_by_characters() {
        let rows = [
            vec!["µ".into(), "1".into()],
            vec!["long".into(), "10".into()],
            vec!["end".into()],
        ];
        let text = written(|out| super::write(out, 2, &[Side::Left, Side::Right], &rows));
        assert_eq!(text, "  µ       1\n  long   10\n  end\n");
    }

    #[test]
    fn paragraphs_hang() {
        let text = written(|out| paragraph(out, "- ", &"word ".repeat(30)));
        assert!(text.lines().all(|line| line.chars().count() <= 100));
        assert!(text.lines().nth(1).is_some_and(|line| line.starts_with("  word")));
    }
}
