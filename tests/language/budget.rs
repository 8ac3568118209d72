//! Texts that no one writes: time and memory stay in proportion, and nothing panics.

use super::{read, shown};
use outcross::diagnostics::Code;
use std::time::{Duration, Instant};

/// Ample for the sizes below unless something grows faster than the text.
const PATIENCE: Duration = Duration::from_secs(20);

fn quickly<T>(action: impl FnOnce() -> T) -> T {
    let start = Instant::now();
    let value = action();
    assert!(start.elapsed() < PATIENCE, "took {:?}", start.elapsed());
    value
}

fn codes(text: &str) -> Vec<Code> {
    quickly(|| read("text", text))
        .diagnostics
        .iter()
        .map(|one| one.code)
        .collect()
}

/// A generator of repeatable noise (Marsaglia 2003, Xorshift RNGs, 64-bit triple 13, 7, 17).
fn noise(seed: u64) -> impl FnMut(usize) -> usize {
    let mut state = seed;
    move |below| {
        state ^= state << 13;
        state ^= state >> 7;
        state ^= state << 17;
        (state % below as u64) as usize
    }
}

#[test]
fn brackets_200_deep_are_read_and_201_are_not() {
    let nested = |open: &str, depth: usize, close: &str| {
        format!(
            "constant a = {}1{}\nconstant b = 2",
            open.repeat(depth),
            close.repeat(depth)
        )
    };
    for open in ["(", "f(", "f(a: ", "(a: ", "-(2 * ", "2^("] {
        assert_eq!(codes(&nested(open, 200, ")")), []);
        let read = read("text", &nested(open, 201, ")"));
        assert_eq!(read.diagnostics.len(), 1);
        assert_eq!(read.diagnostics[0].code, Code::SyntaxNesting);
        assert_eq!(read.tree.declarations.len(), 1, "the other declaration is kept");
    }
    let condition = format!(
        "limit state x {{ failure when {}a{} }}",
        "any(".repeat(199),
        ")".repeat(199)
    );
    assert_eq!(codes(&condition), []);
    let unit = format!("constant a = 2 kN*{}m{}", "(s/".repeat(199), ")".repeat(199));
    assert_eq!(codes(&unit), []);
}

#[test]
fn ten_thousand_brackets_are_refused_open_or_closed() {
    for open in ["(", "{", "f(", "(a: ", "2 kN/(m*", "limit state a {", "any("] {
        let text = format!("constant a = {}1{}", open.repeat(10_000), ")".repeat(10_000));
        assert_eq!(codes(&text), [Code::SyntaxNesting]);
        let text = format!("constant a = {}", open.repeat(10_000));
        assert_eq!(codes(&text), [Code::SyntaxNesting]);
    }
}

#[test]
fn shared_beginnings_are_not_read_twice_at_every_depth() {
    for (open, close) in [
        ("(", ""),
        ("f(a: ", ""),
        ("(a: ", "]"),
        ("f(2 kN/(m*(", ""),
        ("any(", "!"),
        ("(2^(", ""),
        ("1 a/(a/(", ""),
    ] {
        for start in ["constant a = ", "limit state x { failure when "] {
            let text = format!("{start}{}{close}", open.repeat(60));
            let start = Instant::now();
            assert!(
                codes(&text).iter().all(|code| *code == Code::SyntaxUnexpected),
                "{text}"
            );
            assert!(
                start.elapsed() < Duration::from_millis(500),
                "{open}: {:?}",
                start.elapsed()
            );
        }
    }
}

#[test]
fn ten_megabytes_of_noise() {
    const SIZE: usize = 10_000_000;
    let mut random = noise(0x5EED_1234_ABCD);
    let printable: String = (0..SIZE).map(|_| char::from(32 + random(95) as u8)).collect();
    assert!(!codes(&printable).is_empty());

    let pieces = [
        "constant a = ",
        "\nconstant b = 3 kN",
        "\nprocess x",
        "(",
        ")",
        "{",
        "}",
        "\"",
        "#",
        "\n",
        " ",
        "=",
        ":",
        "12.5",
        "kN/m^2",
        "name",
        "\nlimit state y {",
        "\nfailure when a < 0",
        "\nfailre when b",
        "\nproces z = 3",
        "µ",
        "\0",
        "²",
        ",",
    ];
    let mut tokens = String::new();
    while tokens.len() < SIZE / 4 {
        tokens.push_str(pieces[random(pieces.len())]);
    }
    let read = quickly(|| super::read("noise", &tokens));
    assert!(read.diagnostics.len() <= 201, "{} messages", read.diagnostics.len());
    let last = read.diagnostics.last().expect("noise has faults");
    assert!(
        last.message.contains("more stretches of this file could not be read"),
        "{}",
        last.message
    );

    let megabyte_line = format!("constant a = {}1", "1 + ".repeat(250_000));
    assert_eq!(codes(&megabyte_line), []);
    let misspelt = "proces x = 3\n".repeat(500_000);
    assert_eq!(codes(&misspelt).len(), 201);
    let block = format!("limit state a {{\n{}}}", "failre when x\n".repeat(500_000));
    assert_eq!(codes(&block).len(), 201);
}

#[test]
fn a_text_cut_anywhere_or_with_a_byte_changed_gives_sound_places() {
    let text = include_str!("valid/00_at_a_glance.limit");
    let mut random = noise(42);
    let odd = [
        "\0", "µ", "\u{2028}", "\u{FEFF}", "\"", "(", ")", "\\", "#", "\n", "}", "=", ":", "^", "1", "🦀", "\r",
    ];
    let cut = (0..text.len())
        .filter(|at| text.is_char_boundary(*at))
        .map(|at| text[..at].to_owned());
    let cuts: Vec<String> = cut.collect();
    let changed = (0..2_000).map(|_| {
        let mut changed = text.to_owned();
        for _ in 0..=random(3) {
            let mut at = random(changed.len());
            while !changed.is_char_boundary(at) {
                at -= 1;
            }
            let until = changed[at..]
                .chars()
                .next()
                .map_or(at, |c| at + c.len_utf8() * random(2));
            changed.replace_range(at..until, odd[random(odd.len())]);
        }
        changed
    });
    for text in cuts.into_iter().chain(changed) {
        let read = read("cut", &text);
        let _ = shown(&read);
        for one in &read.diagnostics {
            let spans = one.labels.iter().map(|label| label.place).chain([one.place]);
            for span in spans {
                let range = span.range();
                assert!(range.end <= text.len() && range.start <= range.end, "{one:?} in {text}");
                assert!(
                    text.is_char_boundary(range.start) && text.is_char_boundary(range.end),
                    "{one:?} in {text}"
                );
            }
        }
    }
}

#[test]
fn small_oddities() {
    for empty in [
        "",
        "\n",
        "\u{FEFF}",
        "# only a comment",
        "\u{FEFF}# a\r\n# b\r\n",
        " \t\r\n",
    ] {
        let read = read("text", empty);
        assert_eq!(shown(&read), "");
        assert!(read.tree.declarations.is_empty());
    }
    assert_eq!(codes("\0"), [Code::SyntaxUnexpected]);
    assert_eq!(codes("constant a = 1\0"), [Code::SyntaxUnexpected]);
    assert_eq!(codes("title \"a \0 in a text\"\n# and \0 in a comment"), []);
    let windows = read("text", "constant a = 5\r\nconstant b = 6 kN # why\r\n");
    assert_eq!(windows.tree.declarations.len(), 2);
    assert_eq!(windows.files.text(windows.tree.comments[0]), "# why");
}
