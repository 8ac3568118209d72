//! Text to tree.
//!
//! [`parse`] reads a file and never fails: what cannot be read is reported and left out. The text is cut into
//! stretches, each beginning with a declaration (`scan`); pest reads each by `grammar/outcross.pest`; `build` makes the
//! tree of what it found; `recovery`, `messages` and `mends` say what is wrong with a stretch that it refused.

mod build;
mod lost;
mod mends;
mod messages;
mod parser;
mod reader;
mod recovery;
mod scan;
pub mod tree;
mod words;

pub use parser::{parse, parse_expression};
pub use words::{DECLARATION_KEYWORDS, LIMIT_LINE_KEYWORDS, RESERVED, is_reserved};
