//! The one door to the file system, and what may pass it.
//!
//! A model may come from a stranger: whoever checks it must not be made to read files beside the project, nor to wait
//! for a pipe. So everything that is read lies inside of a root folder, whatever links lead to it, and is an ordinary
//! file.

use super::reader::{LARGEST_FILE, Reader, Unreadable, plain};
use std::fs::{self, File, Metadata, OpenOptions};
use std::io::{self, Read};
use std::path::{Path, PathBuf};

/// The files inside of a root folder, and standard input as `-`.
#[derive(Clone, Debug)]
pub struct Disk {
    /// Absolute and without links.
    root: PathBuf,
}

impl Disk {
    /// All files inside of a folder.
    ///
    /// # Errors
    /// That there is no such folder.
    pub fn within(root: &Path) -> io::Result<Self> {
        let root = fs::canonicalize(root)?;
        match fs::metadata(&root)?.is_dir() {
            true => Ok(Self { root }),
            false => Err(io::Error::new(io::ErrorKind::NotADirectory, "it is not a folder")),
        }
    }

    /// The files of the project that a model belongs to: those inside of the nearest folder around it that holds
    /// `.git`, or inside of the model's own folder where there is none. Links in the path of the model itself are not
    /// followed to find that folder, or a link among the files of a stranger could choose it.
    pub fn around(model: &Path) -> Self {
        let written = std::path::absolute(model).ok();
        let path = written.and_then(|path| plain(&path)).unwrap_or_default();
        let folder = path.parent().unwrap_or(&path);
        let project = folder.ancestors().find(|folder| folder.join(".git").exists());
        let root = project.unwrap_or(folder);
        Self {
            // A folder that is not there holds nothing that could be read.
            root: fs::canonicalize(root).unwrap_or_else(|_| root.to_path_buf()),
        }
    }

    /// The root folder, absolute and without links.
    pub fn root(&self) -> &Path {
        &self.root
    }

    /// Where a file lies as seen from the root folder; `None` for one that is not there or not inside.
    pub fn from_root(&self, path: &Path) -> Option<PathBuf> {
        let target = self.target(path).ok()?;
        target.strip_prefix(&self.root).ok().map(Path::to_path_buf)
    }

    /// The place of a file without links, which lies inside of the root folder.
    fn target(&self, path: &Path) -> Result<PathBuf, Unreadable> {
        let inside = |target: &Path| target.starts_with(&self.root);
        match fs::canonicalize(path) {
            Ok(target) if inside(&target) => Ok(target),
            // Whether something is missing outside of the root folder is not for a model to know.
            Err(error) if nearest_folder(path).is_none_or(|folder| inside(&folder)) => Err(words(&error)),
            Ok(_) | Err(_) => Err(Unreadable::Outside(self.root.clone())),
        }
    }
}

impl Reader for Disk {
    fn read(&self, path: &Path) -> Result<String, Unreadable> {
        if path == Path::new("-") {
            return text(io::stdin().lock());
        }
        let target = self.target(path)?;
        // Before it is opened, since opening a device can do something; and once it is open, since something else may
        // have taken its place.
        ordinary(&fs::metadata(&target).map_err(|error| words(&error))?)?;
        let file = open(&target).map_err(|error| words(&error))?;
        ordinary(&file.metadata().map_err(|error| words(&error))?)?;
        text(file)
    }

    fn identity(&self, path: &Path) -> PathBuf {
        fs::canonicalize(path).unwrap_or_else(|_| path.to_path_buf())
    }
}

/// The nearest folder around a path that exists, without links.
fn nearest_folder(path: &Path) -> Option<PathBuf> {
    path.ancestors().skip(1).find_map(|folder| {
        let here = Path::new(".");
        fs::canonicalize(if folder.as_os_str().is_empty() { here } else { folder }).ok()
    })
}

fn ordinary(about: &Metadata) -> Result<(), Unreadable> {
    if about.is_dir() {
        return Err(Unreadable::Folder);
    }
    if !about.is_file() {
        return Err(Unreadable::NotAFile);
    }
    Ok(())
}

/// Opens a file without waiting for a pipe's other end, and without following a link that was not there before.
fn open(target: &Path) -> io::Result<File> {
    let mut options = OpenOptions::new();
    options.read(true);
    #[cfg(unix)]
    {
        use std::os::unix::fs::OpenOptionsExt;
        options.custom_flags(libc::O_NONBLOCK | libc::O_NOFOLLOW | libc::O_NOCTTY);
    }
    options.open(target)
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

fn words(error: &io::Error) -> Unreadable {
    match error.kind() {
        io::ErrorKind::NotFound => Unreadable::Missing,
        _ => Unreadable::Other(error.to_string()),
    }
}
