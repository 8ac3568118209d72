//! One model, with a neighbour that differs from those of the corpus.

use std::hash::{DefaultHasher, Hash, Hasher};
use std::path::{Path, PathBuf};
use std::{env, fs};

/// What stands before the name of the neighbour in a saved case.
const NEIGHBOUR: &str = "#### neighbour ";

/// What is tried.
#[derive(Clone)]
pub struct Case {
    /// The model.
    pub model: String,
    /// A file beside it, by name and text, in place of that of the corpus.
    pub neighbour: Option<(String, String)>,
}

impl Case {
    /// The case of a saved text.
    pub fn from_text(text: &str) -> Self {
        let neighbour = text.split_once(NEIGHBOUR).and_then(|(_, rest)| rest.split_once('\n'));
        Self {
            model: text.split(NEIGHBOUR).next().unwrap_or_default().to_owned(),
            neighbour: neighbour.map(|(name, text)| (name.to_owned(), text.to_owned())),
        }
    }

    /// Saves the case with words about it, and returns where.
    pub fn save(&self, words: &str) -> PathBuf {
        let mut hasher = DefaultHasher::new();
        (&self.model, &self.neighbour).hash(&mut hasher);
        let target = env::var_os("CARGO_TARGET_DIR").map_or_else(|| PathBuf::from("target"), PathBuf::from);
        let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join(target).join("fuzz");
        fs::create_dir_all(&folder).expect("a folder can be made");
        let path = folder.join(format!("{:016x}", hasher.finish()));
        let mut text = self.model.clone();
        if let Some((name, neighbour)) = &self.neighbour {
            text += &format!("\n{NEIGHBOUR}{name}\n{neighbour}");
        }
        fs::write(path.with_extension("limit"), text).expect("a file can be written");
        fs::write(path.with_extension("txt"), words).expect("a file can be written");
        path.with_extension("limit")
    }
}
