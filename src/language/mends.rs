//! The faults that are seen often enough to have a message of their own.

use super::messages::{Fault, is_invisible, near, quote};
use super::parser::Rule;
use super::scan::is_word_char;
use super::words::{DECLARATION_KEYWORDS, LIMIT_LINE_KEYWORDS, is_reserved};
use crate::diagnostics::{Code, Diagnostic};

/// The message for a fault that is known by its looks; the first that fits.
pub(super) fn special(fault: &Fault<'_>) -> Option<Diagnostic> {
    [
        misspelt,
        broken_string,
        foreign_character,
        equals_in_argument,
        chained_power,
        other_comparison,
        reserved_word,
        unclosed_bracket,
        unopened_bracket,
        foreign_habit,
        missing_colon_or_comma,
        missing_colon,
        unit_in_two,
        text_without_quotes,
        value_without_text,
        missing_operator,
    ]
    .into_iter()
    .find_map(|mend| mend(fault))
}

/// `proces x = ...`
fn misspelt(fault: &Fault<'_>) -> Option<Diagnostic> {
    let declarations = DECLARATION_KEYWORDS
        .into_iter()
        .filter(|_| fault.expects(Rule::declaration));
    let lines = LIMIT_LINE_KEYWORDS
        .into_iter()
        .filter(|_| fault.expects(Rule::limit_line));
    let candidates = declarations
        .chain(lines.map(|(first, _)| first))
        .chain(fault.expected_words());
    let meant = near(fault.found, candidates)?;
    let place = fault.reader.span(fault.at..fault.at + fault.found.len());
    let message = format!("`{}` is no word of the language here", fault.found);
    Some(Diagnostic::new(Code::SyntaxUnexpected, place, message).help(format!("write `{meant}`")))
}

/// `"Drawing S-102`, or an escape that is none.
fn broken_string(fault: &Fault<'_>) -> Option<Diagnostic> {
    let line = fault.found.strip_prefix('"')?;
    let mut characters = line.char_indices();
    while let Some((index, character)) = characters.next() {
        match character {
            '"' => return None,
            '\\' => match characters.next() {
                Some((_, '"' | '\\')) => {}
                Some((_, other)) => {
                    let at = fault.at + 1 + index;
                    let place = fault.reader.span(at..at + 1 + other.len_utf8());
                    let message = format!("`\\{other}` means nothing in a text");
                    let diagnostic = Diagnostic::new(Code::SyntaxUnexpected, place, message);
                    return Some(diagnostic.help("write `\\\\` for a backslash and `\\\"` for a quotation mark"));
                }
                None => break,
            },
            _ => {}
        }
    }
    let place = fault.reader.span(fault.at..fault.at + fault.found.len());
    let diagnostic = Diagnostic::new(Code::SyntaxUnexpected, place, "this text has no closing quotation mark");
    Some(diagnostic.help("close the text with `\"` on the line where it begins"))
}

/// Characters that office programs put in place of others, and those that cannot be seen.
fn foreign_character(fault: &Fault<'_>) -> Option<Diagnostic> {
    let first = fault.found.chars().next()?;
    let help = match first {
        '−' | '–' | '—' | '‐' | '‑' => "write the minus sign of the keyboard, `-`",
        '×' | '·' | '⋅' | '∙' | '∗' => "write `*` to multiply",
        '÷' | '∕' | '⁄' => "write `/` to divide",
        '≤' => "write `<=`",
        '≥' => "write `>=`",
        '“' | '”' | '„' | '‟' | '«' | '»' => "write straight quotation marks, `\"`",
        '‘' | '’' | '\'' | '`' => "write texts in double quotation marks, `\"`",
        '\u{300}'..='\u{36F}' => "type the letter anew, with its accent in one character",
        '⁰' | '¹' | '²' | '³' | '⁴'..='⁹' | '⁻' => "write a power of a value with `^`, as in `x^2`",
        _ if first.is_control() || first.is_whitespace() || is_invisible(first) => {
            let place = fault.reader.span(fault.at..fault.at + first.len_utf8());
            let message = format!("{} cannot stand here", quote(fault.found));
            let diagnostic =
                Diagnostic::new(Code::SyntaxUnexpected, place, message).here("a character that cannot be seen");
            return Some(diagnostic.help("replace it by an ordinary blank, or remove it"));
        }
        _ => return None,
    };
    let place = fault.reader.span(fault.at..fault.at + first.len_utf8());
    let message = format!("`{first}` is no mark of the language");
    Some(Diagnostic::new(Code::SyntaxUnexpected, place, message).help(help))
}

/// `gaussian(mean = 5 kN)`
fn equals_in_argument(fault: &Fault<'_>) -> Option<Diagnostic> {
    if fault.found != "=" || !fault.expects(Rule::colon) || !fault.expects(Rule::close) {
        return None;
    }
    let name = word_before(fault)?;
    let place = fault.reader.span(fault.at..fault.at + 1);
    let diagnostic = Diagnostic::new(Code::SyntaxUnexpected, place, "an argument takes `:`, not `=`");
    Some(diagnostic.help(format!("write `{name}: ...`")))
}

/// `a^b^c`
fn chained_power(fault: &Fault<'_>) -> Option<Diagnostic> {
    if fault.found != "^" || !fault.expects(Rule::multiplicative) || fault.expects(Rule::caret) {
        return None;
    }
    let place = fault.reader.span(fault.at..fault.at + 1);
    let diagnostic = Diagnostic::new(Code::SyntaxUnexpected, place, "a power of a power needs brackets");
    Some(
        diagnostic
            .here("a second `^`")
            .help("write `(a^b)^c` or `a^(b^c)`, whichever is meant"),
    )
}

/// `failure when rod <= 0`, `require survival > 0.99`, `failure when 0 < rod < 1`
fn other_comparison(fault: &Fault<'_>) -> Option<Diagnostic> {
    let place = fault.reader.span(fault.at..fault.at + fault.found.len());
    let say = |message: &str, help: &str| {
        let diagnostic = Diagnostic::new(Code::SyntaxUnexpected, place, message);
        Some(diagnostic.help(help))
    };
    match fault.found {
        "<=" | ">=" if fault.expects(Rule::below) => {
            let mark = if fault.found == "<=" { "<" } else { ">" };
            let help = format!(
                "write `{mark}`: a Gaussian margin is equal to a value with probability zero, so `{mark}` says the same"
            );
            say(&format!("a condition of failure has no `{}`", fault.found), &help)
        }
        "=" | "==" | "!=" if fault.expects(Rule::below) => say(
            "a condition of failure compares with `<`, `>` or `outside`",
            "write `<` or `>`",
        ),
        "<" | ">" | "=" | "==" if fault.expects(Rule::at_least) => {
            let mark = if fault.found == "<" { "<=" } else { ">=" };
            say("a requirement compares with `>=` or `<=`", &format!("write `{mark}`"))
        }
        "<" | ">" | "<=" | ">=" if fault.expects(Rule::multiplicative) => say(
            &format!("`{}` has no place here", fault.found),
            "make one comparison in each condition; join conditions by `any(...)` or `all(...)`",
        ),
        _ => None,
    }
}

/// `2 * (a + b`
fn unclosed_bracket(fault: &Fault<'_>) -> Option<Diagnostic> {
    let word = is_reserved(fault.found) && next(fault) != Some(':');
    let ends = fault.missing || word || matches!(fault.found, "}" | "{" | "=");
    if !ends || !fault.expects(Rule::close) {
        return None;
    }
    let open = fault.open?;
    let place = fault.reader.span(fault.last_end..fault.last_end);
    let label = fault.reader.span(open..open + 1);
    let diagnostic = Diagnostic::new(Code::SyntaxUnexpected, place, "this bracket is not closed");
    Some(diagnostic.here("`)` is missing here").label(label, "opened here"))
}

/// `constant margin = 3`
fn reserved_word(fault: &Fault<'_>) -> Option<Diagnostic> {
    let declares = fault.expects(Rule::name) && is_reserved(fault.found);
    let uses = fault.expects_value() && DECLARATION_KEYWORDS.contains(&fault.found);
    if fault.missing || !(declares || uses) {
        return None;
    }
    let place = fault.reader.span(fault.at..fault.at + fault.found.len());
    let message = format!("`{}` is a word of the language and cannot be a name", fault.found);
    Some(Diagnostic::new(Code::NameReserved, place, message).help("choose another name"))
}

/// `a + b)`
fn unopened_bracket(fault: &Fault<'_>) -> Option<Diagnostic> {
    if !matches!(fault.found, ")" | "}") || fault.open.is_some() || fault.at >= fault.end {
        return None;
    }
    let place = fault.reader.span(fault.at..fault.at + 1);
    let message = format!("`{}` closes nothing", fault.found);
    Some(
        Diagnostic::new(Code::SyntaxUnexpected, place, message)
            .help("remove it, or open the bracket that it should close"),
    )
}

/// What other languages write and this one does not.
fn foreign_habit(fault: &Fault<'_>) -> Option<Diagnostic> {
    let before = fault.reader.slice(fault.start..fault.last_end);
    let digit_follows = next(fault).is_some_and(|c| c.is_ascii_digit());
    let operator = fault.expects(Rule::multiplicative);
    let help = match fault.found {
        ";" => "leave `;` out: a declaration needs no end mark",
        "[" | "]" => "write a unit without brackets, `5 kN`, and a list of arguments in round ones",
        "*" if before.ends_with('*') => "write `^` for a power",
        "/" if before.ends_with('/') => "write `#` before a comment",
        "/" | "*" | "^" if !operator && fault.expects(Rule::assign) => "write a unit without blanks, `kN/m`",
        "," if digit_follows && fault.open.is_none() => "write a decimal point, `1.5`",
        "." if digit_follows && fault.expects_value() => "write the zero before the point, `0.5`",
        "." if operator && before.rsplit(' ').next().is_some_and(|token| token.contains('^')) => {
            "write whole powers in a unit; a value takes any power in brackets, `x^(5/2)`"
        }
        "." if operator && before.ends_with(|c: char| c.is_ascii_digit()) => {
            "write a number with one point and digits after it, `1.5`"
        }
        "(" if operator && !fault.missing => "write `*` to multiply",
        "=" if fault.expects(Rule::head) => {
            "name what it depends on, `profile NAME(t)`, `kernel NAME(tau)` or `spectrum NAME(f)`"
        }
        "=" if before.starts_with("expect") && fault.expects(Rule::arguments) => {
            "name the quantity that is checked, `expect standard_deviation(NAME) = ...`"
        }
        "&&" | "||" | "&" | "|" => "join conditions by `all(...)` or `any(...)`",
        _ => return None,
    };
    let mut diagnostic = fault.plain();
    diagnostic.place = fault.reader.span(fault.at..fault.at + fault.found.len());
    Some(diagnostic.help(help))
}

/// `matern(smoothness 5/2 length: 90 s)`
fn missing_colon_or_comma(fault: &Fault<'_>) -> Option<Diagnostic> {
    let begins = fault.found.starts_with(|c: char| is_word_char(c) || c == '"');
    if fault.missing || !begins || !fault.expects(Rule::comma) {
        return None;
    }
    let names = next(fault) == Some(':');
    if is_reserved(fault.found) && !names {
        return None;
    }
    let help = match word_before(fault).filter(|_| fault.expects(Rule::colon) && !names) {
        Some(name) => format!("write `{name}: {}` if `{name}` names an argument", fault.found),
        None => "separate what stands on one line by commas".to_owned(),
    };
    Some(fault.plain().help(help))
}

/// `process crowd kN = ...`
fn missing_colon(fault: &Fault<'_>) -> Option<Diagnostic> {
    let begins = fault.found.starts_with(is_word_char);
    if fault.missing || !begins || !fault.expects(Rule::colon) || !fault.expects(Rule::assign) {
        return None;
    }
    let help = if fault.found.starts_with(|c: char| c.is_ascii_digit()) {
        "write `=` before the value".to_owned()
    } else {
        format!("write `: {}` if that is the unit; a name is one word", fault.found)
    };
    Some(fault.plain().help(help))
}

/// `5 kN m`
fn unit_in_two(fault: &Fault<'_>) -> Option<Diagnostic> {
    let first = word_before(fault)?;
    let before = fault.reader.text.get(fault.start..fault.last_end - first.len())?;
    let follows_number = before.trim_end_matches(' ').ends_with(|c: char| c.is_ascii_digit());
    let fits = follows_number && fault.found.starts_with(char::is_alphabetic) && !is_reserved(fault.found);
    if fault.missing || !fits || !fault.expects(Rule::multiplicative) || first.starts_with(|c: char| c.is_ascii_digit())
    {
        return None;
    }
    let help = format!("write `{first}*{}` if both belong to the unit", fault.found);
    Some(fault.plain().help(help))
}

/// `basis drawing`
fn text_without_quotes(fault: &Fault<'_>) -> Option<Diagnostic> {
    let begins = fault.found.starts_with(is_word_char);
    if fault.missing || !begins || !fault.expects(Rule::string) || fault.expects_value() {
        return None;
    }
    let before = word_before(fault).map_or(String::new(), |word| format!("{word} "));
    let help = format!("write `{before}\"{} ...\"`", fault.found);
    Some(fault.plain().help(help))
}

/// `constant width =`
fn value_without_text(fault: &Fault<'_>) -> Option<Diagnostic> {
    let before = fault.reader.slice(fault.start..fault.last_end);
    if !fault.missing || !fault.expects_value() || !before.ends_with('=') {
        return None;
    }
    Some(fault.plain().help("write the value, or remove the declaration"))
}

/// `force lever`
fn missing_operator(fault: &Fault<'_>) -> Option<Diagnostic> {
    let first = word_before(fault)?;
    let both_names = [first, fault.found]
        .into_iter()
        .all(|word| word.starts_with(|c: char| c.is_alphabetic() || c == '_') && !is_reserved(word));
    if fault.missing || !both_names || !fault.expects(Rule::multiplicative) {
        return None;
    }
    let help = format!("write `{first} * {}` to multiply", fault.found);
    Some(fault.plain().help(help))
}

/// The character directly after the found token.
fn next(fault: &Fault<'_>) -> Option<char> {
    let after = fault.at + fault.found.len();
    fault.reader.slice(after..fault.reader.text.len()).chars().next()
}

/// The word that ends directly before the fault.
fn word_before<'a>(fault: &Fault<'a>) -> Option<&'a str> {
    let text = fault.reader.text.get(fault.start..fault.last_end)?;
    let start = text.trim_end_matches(is_word_char).len();
    text.get(start..).filter(|word| !word.is_empty())
}
