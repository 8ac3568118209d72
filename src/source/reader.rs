//! Where texts come from.

use std::fmt;
use std::path::{Path, PathBuf};

/// The largest file that is read, in bytes.
pub const LARGEST_FILE: u64 = 64 << 20;

/// Gives out the text of a file. Tests put a map behind it, the program a [`Disk`](super::Disk).
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
    /// A model names it by an absolute path.
    Absolute,
    /// It lies outside of this folder, which is all that may be read.
    Outside(PathBuf),
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
            Self::Absolute => write!(f, "a model names files by relative paths only"),
            Self::Outside(root) => write!(f, "it lies outside of the root folder `{}`", root.display()),
            Self::TooLarge => write!(f, "it is larger than {} MiB", LARGEST_FILE >> 20),
            Self::NotUtf8(offset) => write!(f, "it is not UTF-8 text (byte {offset} is wrong)"),
            Self::Other(words) => write!(f, "{words}"),
        }
    }
}

/// The file that `path`, written in the file `from`, names: it is seen from the folder of that file.
///
/// # Errors
/// [`Unreadable::Absolute`] where the path does not start from that folder.
pub fn beside(from: &Path, path: &str) -> Result<PathBuf, Unreadable> {
    let path = Path::new(path);
    // On Windows a path may also start from a drive, or from the root of the drive at hand.
    let starts_elsewhere = |part| matches!(part, std::path::Component::Prefix(_) | std::path::Component::RootDir);
    if path.components().next().is_some_and(starts_elsewhere) {
        return Err(Unreadable::Absolute);
    }
    Ok(match from.parent() {
        Some(folder) if from != Path::new("-") => folder.join(path),
        _ => path.to_path_buf(),
    })
}

/// A path without its `.` and `..`, by its spelling alone; `None` where it leads above where it starts.
pub fn plain(path: &Path) -> Option<PathBuf> {
    use std::path::Component;
    let mut plain = PathBuf::new();
    for component in path.components() {
        match component {
            Component::CurDir => {}
            Component::ParentDir => {
                // The root of a file system has no name, and is its own parent.
                if !plain.pop() && !plain.has_root() {
                    return None;
                }
            }
            other => plain.push(other),
        }
    }
    Some(plain)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_path_is_seen_from_the_folder_of_the_file_that_names_it() {
        let target = |from: &str, path: &str| beside(Path::new(from), path);
        assert_eq!(target("a/b.limit", "c.limit"), Ok(PathBuf::from("a/c.limit")));
        assert_eq!(target("a/b.limit", "../c.limit"), Ok(PathBuf::from("a/../c.limit")));
        assert_eq!(target("b.limit", "c.limit"), Ok(PathBuf::from("c.limit")));
        assert_eq!(target("-", "c.limit"), Ok(PathBuf::from("c.limit")));
        assert_eq!(target("a/b.limit", "/c.limit"), Err(Unreadable::Absolute));
        assert_eq!(target("-", "//c.limit"), Err(Unreadable::Absolute));
    }

    #[test]
    fn a_plain_path_does_not_lead_above_its_start() {
        let plain = |path: &str| plain(Path::new(path)).map(|path| path.display().to_string());
        assert_eq!(plain("a/./b/../c").as_deref(), Some("a/c"));
        assert_eq!(plain("a/..").as_deref(), Some(""));
        assert_eq!(plain("a/../../b"), None);
        assert_eq!(plain("..").as_deref(), None);
        assert_eq!(plain("/../a").as_deref(), Some("/a"));
    }
}
