//! Where texts come from: the one door to the file system.

use std::fmt;
use std::io::Read;
use std::path::{Path, PathBuf};

/// The largest file that is read, in bytes.
pub const LARGEST_FILE: u64 = 64 << 20;

/// Gives out the text of a file. Tests put a map behind it, the program a disk.
pub trait Reader {
    /// The text at a path.
    ///
    /// # Errors
    /// What is wrong with the file, in words for the user.
    fn read(&self, path: &Path) -> Result<String, Unreadable>;

    /// One spelling for all paths that lead to the same file.
    fn identity(&self, path: &Path) -> PathBuf;
}

/// Why a file could not be read.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Unreadable {
    /// Nothing is there.
    Missing,
    /// A folder is there.
    Folder,
    /// Something is there that is neither a file nor a folder.
    NotAFile,
    /// It is larger than [`LARGEST_FILE`].
    TooLarge,
    /// Its bytes are not UTF-8 from this offset on.
    NotUtf8(usize),
    /// The system's own words.
    Other(String),
}

impl fmt::Display for Unreadable {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Missing => write!(f, "there is no such file"),
            Self::Folder => write!(f, "it is a folder"),
            Self::NotAFile => write!(f, "it is a device or a pipe, not a file"),
            Self::TooLarge => write!(f, "it is larger than {} MiB", LARGEST_FILE >> 20),
            Self::NotUtf8(offset) => write!(f, "it is not UTF-8 text (byte {offset} is wrong)"),
            Self::Other(words) => write!(f, "{words}"),
        }
    }
}

/// The file system, and standard input as `-`.
#[derive(Clone, Copy, Debug, Default)]
pub struct Disk;

impl Reader for Disk {
    fn read(&self, path: &Path) -> Result<String, Unreadable> {
        if path == Path::new("-") {
            return text(std::io::stdin().lock());
        }
        let about = std::fs::metadata(path).map_err(|error| words(&error))?;
        if about.is_dir() {
            return Err(Unreadable::Folder);
        }
        if !about.is_file() {
            return Err(Unreadable::NotAFile);
        }
        text(std::fs::File::open(path).map_err(|error| words(&error))?)
    }

    fn identity(&self, path: &Path) -> PathBuf {
        std::fs::canonicalize(path).unwrap_or_else(|_| path.to_path_buf())
    }
}

fn text(from: impl Read) -> Result<String, Unreadable> {
    let mut bytes = Vec::new();
    from.take(LARGEST_FILE + 1)
        .read_to_end(&mut bytes)
        .map_err(|error| words(&error))?;
    if bytes.len() as u64 > LARGEST_FILE {
        return Err(Unreadable::TooLarge);
    }
    String::from_utf8(bytes).map_err(|error| Unreadable::NotUtf8(error.utf8_error().valid_up_to()))
}

fn words(error: &std::io::Error) -> Unreadable {
    match error.kind() {
        std::io::ErrorKind::NotFound => Unreadable::Missing,
        _ => Unreadable::Other(error.to_string()),
    }
}
