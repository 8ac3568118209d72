//! Files to instances: every `use` makes a fresh copy of another file's declarations.

use crate::diagnostics::{Code, Diagnostic};
use crate::language::parse;
use crate::language::tree::{Argument, Declaration, DeclarationKind, Text, Tree, Word};
use crate::source::{FileId, Files, LARGEST_FILE, Reader, Span, Unreadable, beside};
use std::collections::HashMap;
use std::path::{Path, PathBuf};
use std::rc::Rc;

/// More parts than this in one model are refused: files that use others twice grow as powers of two.
const MOST_PARTS: usize = 10_000;

/// Parts within parts deeper than this are refused.
const DEEPEST_PART: usize = 32;

/// More declarations than this, counted over all parts, are refused.
const MOST_DECLARATIONS: usize = 4_000_000;

/// An instance of a file, as an index into [`Parts::instances`].
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct InstanceId(pub u32);

/// One copy of a file's declarations.
pub struct Instance {
    /// What was written.
    pub tree: Rc<Tree>,
    /// What stands before its names in results: empty, or `site.`.
    pub prefix: String,
    /// The `use` it comes from, for all but the file itself.
    pub origin: Option<Origin>,
}

/// The `use` an instance comes from.
#[derive(Clone, Copy)]
pub struct Origin {
    /// The instance that holds the `use`.
    pub user: InstanceId,
    /// Which of its declarations.
    pub declaration: usize,
}

/// All instances of a model; the file itself is the first.
pub struct Parts {
    /// The instances, users before the used.
    pub instances: Vec<Instance>,
    /// The instance each `use` made, where it could be read.
    pub made: HashMap<(InstanceId, usize), InstanceId>,
}

impl Parts {
    /// The instance of an id that these parts gave out.
    pub fn get(&self, id: InstanceId) -> &Instance {
        &self.instances[id.0 as usize]
    }

    /// A declaration of an instance.
    pub fn declaration(&self, instance: InstanceId, declaration: usize) -> &Declaration {
        &self.get(instance).tree.declarations[declaration]
    }

    /// The arguments of the `use` an instance comes from, with the place of that `use`.
    pub fn arguments(&self, instance: InstanceId) -> Option<(Origin, &Word, &[Argument])> {
        let origin = self.get(instance).origin?;
        match &self.declaration(origin.user, origin.declaration).kind {
            DeclarationKind::Use { name, arguments, .. } => Some((origin, name, arguments)),
            _ => None,
        }
    }
}

/// Reads files and parses each once.
pub struct Library<'a> {
    files: &'a mut Files,
    reader: &'a dyn Reader,
    trees: HashMap<PathBuf, Result<Rc<Tree>, Unreadable>>,
    /// What is wrong with the files read so far.
    pub diagnostics: Vec<Diagnostic>,
}

impl<'a> Library<'a> {
    /// A library that has read nothing yet.
    pub fn new(files: &'a mut Files, reader: &'a dyn Reader) -> Self {
        Self {
            files,
            reader,
            trees: HashMap::new(),
            diagnostics: Vec::new(),
        }
    }

    /// The texts read so far.
    pub fn files(&self) -> &Files {
        self.files
    }

    /// The door to the file system.
    pub fn reader(&self) -> &'a dyn Reader {
        self.reader
    }

    /// A text that is not a model (a data file), kept so that findings can show it.
    ///
    /// # Errors
    /// What is wrong with the file.
    pub fn data(&mut self, path: &Path) -> Result<FileId, Unreadable> {
        let text = self.reader.read(path)?;
        Ok(self.files.add(path, text))
    }

    fn tree(&mut self, path: &Path) -> Result<Rc<Tree>, Unreadable> {
        let identity = self.reader.identity(path);
        if let Some(known) = self.trees.get(&identity) {
            return known.clone();
        }
        let read = self.reader.read(path).map(|text| {
            let file = self.files.add(path, text);
            let (tree, found) = parse(file, &self.files.get(file).text);
            self.diagnostics.extend(found);
            Rc::new(tree)
        });
        self.trees.insert(identity, read.clone());
        read
    }

    /// The file and, part by part, everything it uses. `None` where the file itself cannot be read.
    pub fn parts(&mut self, path: &Path) -> Option<Parts> {
        let tree = match self.tree(path) {
            Ok(tree) => tree,
            Err(why) => {
                let place = Span::new(self.files.add(path, String::new()), 0, 0);
                self.diagnostics.push(unreadable(place, path, &why));
                return None;
            }
        };
        let root = Instance {
            tree: Rc::clone(&tree),
            prefix: String::new(),
            origin: None,
        };
        let mut parts = Parts {
            instances: vec![root],
            made: HashMap::new(),
        };
        let mut declarations = tree.declarations.len();
        let mut next = 0u32;
        while let Some(instance) = parts.instances.get(next as usize) {
            let tree = Rc::clone(&instance.tree);
            for (index, declaration) in tree.declarations.iter().enumerate() {
                if let DeclarationKind::Use { path, name, .. } = &declaration.kind {
                    if parts.instances.len() >= MOST_PARTS || declarations > MOST_DECLARATIONS {
                        self.diagnostics.push(too_many(path.span));
                        return Some(parts);
                    }
                    let origin = Origin {
                        user: InstanceId(next),
                        declaration: index,
                    };
                    declarations += self.part(&mut parts, origin, path, name);
                }
            }
            next += 1;
        }
        Some(parts)
    }

    /// Makes the instance of a `use`, where it can be made, and returns how many declarations it brings.
    fn part(&mut self, parts: &mut Parts, origin: Origin, path: &Text, name: &Word) -> usize {
        let user = parts.get(origin.user);
        let target = beside(&self.files.get(user.tree.file).path, &path.value);
        let named = target.as_deref().unwrap_or(Path::new(&*path.value)).to_path_buf();
        let tree = match target.and_then(|target| self.tree(&target)) {
            Ok(tree) => tree,
            Err(why) => {
                self.diagnostics.push(unreadable(path.span, &named, &why));
                return 0;
            }
        };
        if let Some(cycle) = cycle(parts, origin.user, &tree) {
            self.diagnostics.push(self.cyclic(path, &cycle));
            return 0;
        }
        if user.prefix.matches('.').count() >= DEEPEST_PART {
            self.diagnostics.push(too_deep(path.span));
            return 0;
        }
        let made = InstanceId(u32::try_from(parts.instances.len()).unwrap_or(u32::MAX));
        let prefix = format!("{}{}.", user.prefix, name.text);
        let declarations = tree.declarations.len();
        parts.instances.push(Instance {
            tree,
            prefix,
            origin: Some(origin),
        });
        parts.made.insert((origin.user, origin.declaration), made);
        declarations
    }

    fn cyclic(&self, path: &Text, cycle: &[FileId]) -> Diagnostic {
        let names: Vec<String> = cycle.iter().map(|file| self.files.get(*file).name()).collect();
        Diagnostic::new(
            Code::PartCycle,
            path.span,
            match names.as_slice() {
                [one] => format!("`{one}` uses itself"),
                [first, ..] => format!(
                    "these files use each other without end: {} -> {first}",
                    names.join(" -> ")
                ),
                [] => "files use each other without end".to_string(),
            },
        )
        .here("this `use` closes the circle")
        .help("move what both files need into a third file, and let both use that")
    }
}

/// The files from the first use of `tree` down to `user`, where `tree` is among the users of `user`.
fn cycle(parts: &Parts, user: InstanceId, tree: &Tree) -> Option<Vec<FileId>> {
    let mut files = Vec::new();
    let mut at = Some(user);
    while let Some(id) = at {
        let instance = parts.get(id);
        files.push(instance.tree.file);
        if instance.tree.file == tree.file {
            files.reverse();
            return Some(files);
        }
        at = instance.origin.map(|origin| origin.user);
    }
    None
}

fn too_many(place: Span) -> Diagnostic {
    Diagnostic::new(
        Code::ModelTooLarge,
        place,
        format!("the model has more than {MOST_PARTS} parts or {MOST_DECLARATIONS} declarations"),
    )
    .help("use fewer parts: a file that uses another twice, which uses a third twice, grows as powers of two")
}

fn too_deep(place: Span) -> Diagnostic {
    Diagnostic::new(
        Code::ModelTooLarge,
        place,
        format!("parts are nested more than {DEEPEST_PART} deep here"),
    )
    .help("use the inner file directly where it is needed")
}

/// The finding for a file that cannot be read.
pub fn unreadable(place: Span, path: &Path, why: &Unreadable) -> Diagnostic {
    let code = match why {
        Unreadable::TooLarge => Code::FileTooLarge,
        Unreadable::Absolute | Unreadable::Outside(_) => Code::FileOutside,
        _ => Code::FileUnreadable,
    };
    let finding = Diagnostic::new(code, place, format!("cannot read `{}`: {why}", path.display()));
    match why {
        Unreadable::Missing => finding.help("check the name; a path is relative to the file that names it"),
        Unreadable::Folder => finding.help("name a file in it"),
        Unreadable::NotAFile => finding.help("name an ordinary file"),
        Unreadable::Absolute => finding.help("write the path as seen from the folder of this file"),
        Unreadable::Outside(_) => {
            finding.help("move the file into that folder, or name a folder around all files: `--root FOLDER`")
        }
        Unreadable::TooLarge => finding.help(format!(
            "split it: at most {} MiB are read from one file",
            LARGEST_FILE >> 20
        )),
        Unreadable::NotUtf8(_) => finding.help("save it as UTF-8 text"),
        Unreadable::Other(_) => finding,
    }
}
