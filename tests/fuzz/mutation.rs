//! New models from known ones, by changes that know the language.

use super::case::Case;
use super::corpus::{Corpus, LONGEST, declarations};
use super::random::Random;

/// Numbers at which arithmetic goes wrong first.
const NUMBERS: [&str; 22] = [
    "0", "1", "2", "-1", "0.5", "3", "10", "100", "1e-3", "1e3", "1e-9", "1e9", "1e16", "1e-16", "1e100", "1e-100",
    "1e308", "1e-308", "4.9e-324", "1e999", "0.999999", "1.000001",
];

const UNITS: [&str; 20] = [
    "m", "mm", "s", "kN", "N", "MPa", "Hz", "rad/s", "rad", "deg", "1/s", "/s", "%", "year", "h", "kN/m^2", "m^2",
    "s^2", "m/s", "kg",
];

const KERNELS: [&str; 14] = [
    "squared_exponential(length: 2 s)",
    "exponential(length: 2 s)",
    "matern(smoothness: 5/2, length: 3 s)",
    "matern(smoothness: 1.2, length: 3 s)",
    "matern(smoothness: 40, scale_of_fluctuation: 3 s)",
    "rational_quadratic(length: 2 s, mixture: 0.7)",
    "rational_quadratic(scale_of_fluctuation: 2 s, mixture: 3)",
    "oscillator(frequency: 1 Hz, damping: 2 %)",
    "damped_cosine(length: 9 s, frequency: 0.2 Hz)",
    "harmonic(frequency: 0.3 Hz)",
    "band_limited(lower: 0.1 Hz, upper: 2 Hz)",
    "triangular(length: 4 s)",
    "tabulated(\"gusts.csv\", beyond: zero)",
    "(0.4 * exponential(length: 1 s) + 0.6 * harmonic(frequency: 2 Hz))",
];

const FOREIGN: [&str; 26] = [
    "(",
    ")",
    "{",
    "}",
    "\"",
    "#",
    ",",
    ":",
    "=",
    "+",
    "-",
    "*",
    "/",
    "^",
    "<",
    ">",
    ".",
    "²",
    "\n",
    "\r\n",
    "\t",
    "橋",
    "e\u{301}",
    "\u{feff}",
    "gaussian(",
    " and ",
];

/// Ways to wrap an expression, with its place.
const WRAPPINGS: [(&str, &str); 14] = [
    ("delay(", ", by: 1 s)"),
    ("derivative(", ")"),
    ("-(", ")"),
    ("2 * (", ")"),
    ("(", ") / 3"),
    ("(", ")^2"),
    ("sqrt(", ")"),
    ("exp(", ")"),
    ("abs(", ")"),
    ("max(0, ", ")"),
    ("mean(", ")"),
    ("cos(", ")"),
    ("radians(", ")"),
    ("(", " - 1)"),
];

/// A new case from any text of the corpus, with up to four changes.
pub fn any(corpus: &Corpus, random: &mut Random) -> Case {
    let mut model = pick(&corpus.models, random).cloned().unwrap_or_default();
    for _ in 0..=random.below(4) {
        model = changed(&model, corpus, random);
    }
    beside_others(model, corpus, random)
}

/// A new case that is likely to have results: a model that has some, changed mostly in its numbers. Now and then it is
/// any case.
pub fn sound(corpus: &Corpus, random: &mut Random) -> Case {
    let Some(model) = pick(&corpus.sound, random).filter(|_| random.below(8) > 0) else {
        return any(corpus, random);
    };
    let mut model = model.clone();
    for _ in 0..=random.below(2) {
        model = match random.below(8) {
            0 => changed(&model, corpus, random),
            1 => kernel(&model, random),
            2 => wrapped(&model, random),
            3 => spliced(&model, corpus, random),
            _ => number(&model, random),
        };
    }
    beside_others(model, corpus, random)
}

/// The case of a model; where it names others, one of them may be changed too.
fn beside_others(model: String, corpus: &Corpus, random: &mut Random) -> Case {
    let mut case = Case { model, neighbour: None };
    let named: Vec<&(String, String)> = corpus
        .neighbours
        .iter()
        .filter(|(name, _)| case.model.contains(&format!("\"{name}\"")))
        .collect();
    if random.below(3) == 0
        && let Some((name, text)) = pick(&named, random)
    {
        case.neighbour = Some((name.clone(), changed(text, corpus, random)));
    }
    case
}

/// Another number in place of one.
fn number(text: &str, random: &mut Random) -> String {
    replaced(text, is_number, random, |random| {
        pick(&NUMBERS, random).map(|number| (*number).to_owned())
    })
}

fn pick<'a, T>(list: &'a [T], random: &mut Random) -> Option<&'a T> {
    list.get(random.below(list.len()))
}

/// Words, numbers, blanks and single marks, in order: joined again they are the text.
fn tokens(text: &str) -> Vec<&str> {
    let mut tokens = Vec::new();
    let mut rest = text;
    while let Some(first) = rest.chars().next() {
        let alike = |c: char| match first {
            _ if first.is_ascii_digit() => c.is_alphanumeric() || c == '_' || c == '.',
            _ if is_word(first) => is_word(c),
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

fn is_word(c: char) -> bool {
    c.is_alphanumeric() || c == '_'
}

fn is_number(token: &str) -> bool {
    token.starts_with(|c: char| c.is_ascii_digit())
}

fn is_name(token: &str) -> bool {
    token.starts_with(is_word) && !is_number(token)
}

/// One change.
fn changed(text: &str, corpus: &Corpus, random: &mut Random) -> String {
    let new = match random.below(16) {
        0..=4 => number(text, random),
        5 => {
            let other = declared(pick(&corpus.models, random).map_or("", |model| model), random);
            replaced(text, is_name, random, |_| other.clone())
        }
        6 => {
            let own = declared(text, random);
            replaced(text, is_name, random, |_| own.clone())
        }
        7 => unit(text, random),
        8 | 9 => wrapped(text, random),
        10 => kernel(text, random),
        11 | 12 => spliced(text, corpus, random),
        13 | 14 => shuffled(text, random),
        _ => cut(text, random),
    };
    if new.len() > 2 * LONGEST { text.to_owned() } else { new }
}

/// Some token of the text, a name.
fn declared(text: &str, random: &mut Random) -> Option<String> {
    let names: Vec<&str> = tokens(text).into_iter().filter(|token| is_name(token)).collect();
    pick(&names, random).map(|name| (*name).to_owned())
}

/// One token of a kind replaced by another.
fn replaced(
    text: &str,
    kind: fn(&str) -> bool,
    random: &mut Random,
    by: impl FnOnce(&mut Random) -> Option<String>,
) -> String {
    let mut tokens = tokens(text);
    let places: Vec<usize> = (0..tokens.len()).filter(|place| kind(tokens[*place])).collect();
    let Some(place) = pick(&places, random).copied() else {
        return text.to_owned();
    };
    let new = by(random);
    if let (Some(token), Some(new)) = (tokens.get_mut(place), &new) {
        *token = new;
    }
    tokens.concat()
}

/// A unit put behind a number, in place of the word that stands there, if any.
fn unit(text: &str, random: &mut Random) -> String {
    let mut tokens = tokens(text);
    let places: Vec<usize> = (0..tokens.len()).filter(|place| is_number(tokens[*place])).collect();
    let Some(place) = pick(&places, random).copied() else {
        return text.to_owned();
    };
    if tokens.get(place + 1) == Some(&" ") && tokens.get(place + 2).is_some_and(|word| is_name(word)) {
        tokens.drain(place + 1..place + 3);
    }
    let new = format!(" {}", pick(&UNITS, random).copied().unwrap_or_default());
    tokens.insert(place + 1, &new);
    tokens.concat()
}

/// A name or a number inside of something.
fn wrapped(text: &str, random: &mut Random) -> String {
    let (before, after) = pick(&WRAPPINGS, random).copied().unwrap_or_default();
    let mut tokens = tokens(text);
    let places: Vec<usize> = (0..tokens.len())
        .filter(|place| tokens[*place].starts_with(is_word))
        .collect();
    if let Some(place) = pick(&places, random).copied() {
        let calls = tokens.get(place + 1) == Some(&"(");
        let closing = tokens.iter().skip(place).position(|token| *token == ")");
        let end = closing
            .filter(|_| calls)
            .map_or(place + 1, |closing| place + closing + 1);
        tokens.insert(end, after);
        tokens.insert(place, before);
    }
    tokens.concat()
}

/// The value of a `correlation:` replaced by another kernel, or another kernel added to it.
fn kernel(text: &str, random: &mut Random) -> String {
    let new = pick(&KERNELS, random).copied().unwrap_or_default();
    let places: Vec<usize> = text
        .match_indices("correlation:")
        .map(|(place, word)| place + word.len())
        .collect();
    let Some(place) = pick(&places, random).copied() else {
        return spliced_text(
            text,
            &format!("process extra : kN = gaussian(standard_deviation: 2 kN, correlation: {new})\n"),
        );
    };
    let (before, value) = text.split_at(place);
    match (random.below(2), end_of_call(value)) {
        (0, Some(end)) => format!("{before} {new}{}", value.get(end..).unwrap_or_default()),
        _ => format!("{before} {new} * {value}"),
    }
}

/// Where the first bracket that opens is closed again.
fn end_of_call(text: &str) -> Option<usize> {
    let mut depth = 0;
    for (place, c) in text.char_indices() {
        match c {
            '(' => depth += 1,
            ')' => {
                depth -= 1;
                if depth == 0 {
                    return Some(place + 1);
                }
                if depth < 0 {
                    return None;
                }
            }
            _ => {}
        }
    }
    None
}

fn spliced_text(text: &str, more: &str) -> String {
    format!("{}\n{more}", text.trim_end())
}

/// A declaration of another text put in, or one taken out, doubled or moved.
fn spliced(text: &str, corpus: &Corpus, random: &mut Random) -> String {
    let mut own = declarations(text);
    let (one, other) = (random.below(own.len()), random.below(own.len()));
    match random.below(5) {
        0 | 1 => own.insert(one, pick(&corpus.declarations, random).cloned().unwrap_or_default()),
        2 => {
            own.remove(one);
        }
        3 => own.insert(one, own[other].clone()),
        _ => own.swap(one, other),
    }
    own.concat()
}

/// Tokens taken out, doubled, exchanged, or put in from anywhere.
fn shuffled(text: &str, random: &mut Random) -> String {
    let mut tokens = tokens(text);
    if tokens.is_empty() {
        return text.to_owned();
    }
    let (one, other) = (random.below(tokens.len()), random.below(tokens.len()));
    match random.below(5) {
        0 => {
            tokens.remove(one);
        }
        1 => tokens.insert(one, tokens[one]),
        2 => tokens.swap(one, other),
        3 => tokens[one] = tokens[other],
        _ => tokens.insert(one, pick(&FOREIGN, random).copied().unwrap_or_default()),
    }
    tokens.concat()
}

/// The text cut off, or a piece of it repeated or left out, at characters anywhere.
fn cut(text: &str, random: &mut Random) -> String {
    let places: Vec<usize> = text
        .char_indices()
        .map(|(place, _)| place)
        .chain([text.len()])
        .collect();
    let one = pick(&places, random).copied().unwrap_or_default();
    let other = pick(&places, random).copied().unwrap_or_default();
    let (low, high) = (one.min(other), one.max(other));
    match random.below(4) {
        0 => text.get(..high).unwrap_or_default().to_owned(),
        1 => text.get(..low).unwrap_or_default().to_owned() + text.get(high..).unwrap_or_default(),
        2 => text.get(..high).unwrap_or_default().to_owned() + text.get(low..).unwrap_or_default(),
        _ => {
            let mut new = text.to_owned();
            new.insert(low, char::from(32 + random.below(95) as u8));
            new
        }
    }
}
