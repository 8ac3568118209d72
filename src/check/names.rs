//! Names to items: who declares what, in which part.

use super::parts::{InstanceId, Parts};
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{Declaration, DeclarationKind, Path, Word};
use crate::source::Span;
use std::cell::Cell;
use std::collections::hash_map::Entry;
use std::collections::{HashMap, HashSet};

/// A declaration of an instance, numbered through all instances.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct ItemId(pub u32);

impl ItemId {
    /// As an index.
    pub fn index(self) -> usize {
        self.0 as usize
    }
}

/// Where an item stands.
#[derive(Clone, Copy)]
pub struct Item {
    /// Its instance.
    pub instance: InstanceId,
    /// Which of the instance's declarations.
    pub declaration: usize,
}

/// What a path leads to.
pub enum Resolved {
    /// A declaration.
    Item(ItemId),
    /// Nothing, because of a fault that has been reported.
    Fault,
}

/// The names of all instances.
pub struct Names<'p> {
    parts: &'p Parts,
    items: Vec<Item>,
    first: Vec<u32>,
    tables: Vec<HashMap<&'p str, ItemId>>,
    lost: Vec<HashSet<&'p str>>,
    /// How many more names may be compared with names that nothing declares.
    comparisons: Cell<usize>,
}

/// So many names are compared in search of what was meant: a file of faults must not cost the square of its size.
const MOST_COMPARISONS: usize = 1_000_000;

/// The names that mean something without being declared.
const BUILT_IN: &[(&str, &str)] = &[
    ("pi", "the ratio of a circle's circumference to its diameter"),
    ("t", "the time since the start of service"),
];

impl<'p> Names<'p> {
    /// Numbers all declarations and notes their names; two of one name, and names with a meaning of their own, are
    /// reported once per file.
    pub fn new(parts: &'p Parts, diagnostics: &mut Vec<Diagnostic>) -> Self {
        let mut names = Self {
            parts,
            items: Vec::new(),
            first: Vec::new(),
            tables: Vec::new(),
            lost: Vec::new(),
            comparisons: Cell::new(MOST_COMPARISONS),
        };
        for (id, instance) in (0u32..).map(InstanceId).zip(&parts.instances) {
            names.first.push(count(names.items.len()));
            let mut table: HashMap<&'p str, ItemId> = HashMap::with_capacity(instance.tree.declarations.len());
            for (index, declaration) in instance.tree.declarations.iter().enumerate() {
                let item = ItemId(count(names.items.len()));
                names.items.push(Item {
                    instance: id,
                    declaration: index,
                });
                let Some(word) = declared(declaration) else { continue };
                let built_in = BUILT_IN.iter().find(|(name, _)| *name == &*word.text);
                if let Some((_, meaning)) = built_in {
                    diagnostics.push(reserved(word, meaning));
                }
                match table.entry(&word.text) {
                    Entry::Occupied(earlier) if built_in.is_none() => {
                        diagnostics.push(names.repeated(word, *earlier.get()));
                    }
                    Entry::Occupied(_) => {}
                    // A reserved word too: where it is used, its declaration is meant.
                    Entry::Vacant(free) => {
                        free.insert(item);
                    }
                }
            }
            names.tables.push(table);
            names
                .lost
                .push(instance.tree.lost.iter().map(|word| &*word.text).collect());
        }
        names
    }

    fn repeated(&self, word: &Word, earlier: ItemId) -> Diagnostic {
        let name = &word.text;
        let finding = Diagnostic::new(Code::NameRepeated, word.span, format!("`{name}` is declared twice"))
            .here("declared again here")
            .help("give one of them another name, or remove it");
        match declared(self.declaration(earlier)) {
            Some(first) => finding.label(first.span, "first declared here"),
            None => finding,
        }
    }

    /// All items in order.
    pub fn items(&self) -> impl Iterator<Item = ItemId> + use<> {
        (0..count(self.items.len())).map(ItemId)
    }

    /// Where an item stands.
    pub fn item(&self, id: ItemId) -> Item {
        self.items[id.index()]
    }

    /// The declaration of an item.
    pub fn declaration(&self, id: ItemId) -> &'p Declaration {
        let item = self.item(id);
        self.parts.declaration(item.instance, item.declaration)
    }

    /// The instances.
    pub fn parts(&self) -> &'p Parts {
        self.parts
    }

    /// The full name of an item in results: `site.pull`. Empty where it declares no name.
    pub fn full_name(&self, id: ItemId) -> String {
        let prefix = &self.parts.get(self.item(id).instance).prefix;
        declared(self.declaration(id)).map_or_else(String::new, |word| format!("{prefix}{}", word.text))
    }

    /// The item a name declares in an instance.
    pub fn find(&self, instance: InstanceId, name: &str) -> Option<ItemId> {
        self.tables.get(instance.0 as usize)?.get(name).copied()
    }

    /// The item a path leads to, as seen from an instance.
    ///
    /// # Errors
    /// The word that nothing declares, with the instance in which it was looked for.
    pub fn resolve<'a>(&self, path: &'a Path, from: InstanceId) -> Result<Resolved, Unknown<'a>> {
        let mut instance = from;
        let (last, through) = match path.words.split_last() {
            Some(split) => split,
            None => return Ok(Resolved::Fault),
        };
        for word in through {
            let Some(item) = self.find(instance, &word.text) else {
                return self.unknown(word, instance);
            };
            let at = self.item(item);
            if !matches!(self.declaration(item).kind, DeclarationKind::Use { .. }) {
                return Err(Unknown::Inside { word });
            }
            match self.parts.made.get(&(at.instance, at.declaration)) {
                Some(made) => instance = *made,
                None => return Ok(Resolved::Fault),
            }
        }
        match self.find(instance, &last.text) {
            Some(item) => Ok(Resolved::Item(item)),
            None => self.unknown(last, instance),
        }
    }

    fn unknown<'a>(&self, word: &'a Word, instance: InstanceId) -> Result<Resolved, Unknown<'a>> {
        if self.is_lost(instance, &word.text) {
            Ok(Resolved::Fault)
        } else {
            Err(Unknown::Name { word, instance })
        }
    }

    /// Whether a declaration of that name may stand among the text that could not be read.
    pub fn is_lost(&self, instance: InstanceId, name: &str) -> bool {
        self.lost
            .get(instance.0 as usize)
            .is_some_and(|lost| lost.contains(name))
    }

    /// The names of an instance that look like `name`, nearest first, at most three; none once too many have been
    /// compared.
    pub fn near(&self, name: &str, instance: InstanceId) -> Vec<&'p str> {
        let table = self.tables.get(instance.0 as usize);
        let left = self.comparisons.get().checked_sub(table.map_or(0, HashMap::len));
        self.comparisons.set(left.unwrap_or(0));
        if left.is_none() {
            return Vec::new();
        }
        near(name, table.into_iter().flat_map(|table| table.keys().copied()))
    }
}

/// Why a path leads nowhere.
pub enum Unknown<'a> {
    /// A word that nothing declares.
    Name {
        /// The word.
        word: &'a Word,
        /// Where it was looked for.
        instance: InstanceId,
    },
    /// A word inside of something that is no part.
    Inside {
        /// The word that is no part.
        word: &'a Word,
    },
}

/// The candidates that look like `name`, nearest first, at most three.
pub fn near<'c>(name: &str, candidates: impl Iterator<Item = &'c str>) -> Vec<&'c str> {
    let length = name.chars().count();
    let most = if length < 3 {
        length.saturating_sub(1)
    } else {
        1 + length / 4
    };
    let mut found: Vec<(usize, &str)> = candidates
        .filter(|candidate| candidate.len().abs_diff(name.len()) <= most * 4)
        .map(|candidate| (strsim::osa_distance(name, candidate), candidate))
        .filter(|(distance, candidate)| *distance <= most || candidate.eq_ignore_ascii_case(name))
        .collect();
    found.sort_unstable();
    found.into_iter().take(3).map(|(_, candidate)| candidate).collect()
}

/// `a`, `b` or `c`, each in back quotes; `None` of nothing.
pub fn choice(names: &[impl AsRef<str>]) -> Option<String> {
    let quoted: Vec<String> = names.iter().map(|name| format!("`{}`", name.as_ref())).collect();
    let (last, others) = quoted.split_last()?;
    Some(if others.is_empty() {
        last.clone()
    } else {
        format!("{} or {last}", others.join(", "))
    })
}

/// The word a declaration declares.
pub fn declared(declaration: &Declaration) -> Option<&Word> {
    match &declaration.kind {
        DeclarationKind::Use { name, .. }
        | DeclarationKind::Parameter { name, .. }
        | DeclarationKind::Definition { name, .. }
        | DeclarationKind::Function { name, .. }
        | DeclarationKind::Climate { name, .. }
        | DeclarationKind::LimitState { name, .. } => Some(name),
        DeclarationKind::Language(_)
        | DeclarationKind::Title(_)
        | DeclarationKind::Expect { .. }
        | DeclarationKind::Correlate { .. }
        | DeclarationKind::Accept { .. } => None,
    }
}

/// The place by which a declaration is shown: its name, or its keyword.
pub fn place(declaration: &Declaration) -> Span {
    declared(declaration).map_or(declaration.keyword, |word| word.span)
}

fn reserved(word: &Word, meaning: &str) -> Diagnostic {
    let name = &word.text;
    Diagnostic::new(
        Code::NameReserved,
        word.span,
        format!("`{name}` cannot be declared: it is {meaning}"),
    )
    .help(format!("choose another name, such as `{name}_1`"))
}

fn count(length: usize) -> u32 {
    u32::try_from(length).unwrap_or(u32::MAX)
}
