//! Texts damaged at random, and texts cut off anywhere: the program must take them all without a panic, with every
//! place of every finding inside its file (which each run asserts).

use super::{content, folder, shared};
use crate::support::random::Random;
use std::fs;
use std::path::PathBuf;

/// Damaged copies that are read of each file.
const COPIES: usize = 4;

/// Cuts that are read of the longest file.
const MOST_CUTS: usize = 1500;

/// Words, numbers, blanks and single marks, in order: joined again they are the text.
fn tokens(text: &str) -> Vec<&str> {
    let mut tokens = Vec::new();
    let mut rest = text;
    while let Some(first) = rest.chars().next() {
        let alike = |c: char| match first {
            _ if first.is_alphanumeric() || first == '_' => c.is_alphanumeric() || c == '_' || c == '.',
            _ if first.is_whitespace() => c.is_whitespace(),
            _ => false,
        };
        let length = rest.find(|c| !alike(c)).unwrap_or(rest.len()).max(first.len_utf8());
        let (token, after) = rest.split_at(length);
        tokens.push(token);
        rest = after;
    }
    tokens
}

/// A few tokens are taken out, doubled, exchanged, or put in from anywhere.
fn damaged(text: &str, random: &mut Random) -> String {
    const FOREIGN: [&str; 12] = [
        "(",
        ")",
        "{",
        "}",
        "\"",
        "#",
        "1e999",
        "gaussian(",
        " kN",
        "²",
        "\n",
        "橋",
    ];
    let mut tokens = tokens(text);
    for _ in 0..=random.below(4) {
        let (one, other) = (random.below(tokens.len()), random.below(tokens.len()));
        match random.below(4) {
            _ if tokens.is_empty() => {}
            0 => {
                tokens.remove(one);
            }
            1 => tokens.insert(one, tokens[one]),
            2 => tokens.swap(one, other),
            _ => tokens.insert(one, FOREIGN[random.below(FOREIGN.len())]),
        }
    }
    tokens.concat()
}

/// The files of a folder by name, so that every machine sees them in one order.
fn models(folder: PathBuf) -> Vec<(String, String)> {
    let entries = fs::read_dir(folder).into_iter().flatten().flatten();
    let paths = entries.map(|entry| entry.path());
    let mut models: Vec<_> = paths
        .filter(|path| path.extension().is_some_and(|extension| extension == "limit"))
        .map(|path| content(&path))
        .collect();
    models.sort();
    models
}

fn all_models() -> Vec<(String, String)> {
    let examples = folder("../../examples");
    [folder("faulty"), folder("several"), folder("shared"), examples]
        .into_iter()
        .flat_map(models)
        .collect()
}

#[test]
fn damaged_texts_are_taken() {
    let shared = shared();
    let mut random = Random(1);
    for (name, text) in all_models() {
        for _ in 0..COPIES {
            let damaged = damaged(&text, &mut random);
            shared.clone().with(&name, &damaged).run(&name, true).shown();
        }
    }
}

#[test]
fn texts_cut_off_anywhere_are_taken() {
    let shared = shared();
    let models = all_models();
    let sizes = models.iter().filter(|(_, text)| text.len() <= MOST_CUTS);
    let (name, text) = sizes.max_by_key(|(_, text)| text.len()).expect("there are models");
    for (end, _) in text.char_indices() {
        shared.clone().with(name, &text[..end]).run(name, true).shown();
    }
}

#[test]
fn tokens_joined_are_the_text() {
    for (name, text) in all_models() {
        assert_eq!(tokens(&text).concat(), text, "{name}");
    }
}
