//! The language's own words, and the user's words for every rule of the grammar.

use super::parser::Rule;

/// The words that begin a declaration (`limit` stands for `limit state`).
pub const DECLARATION_KEYWORDS: [&str; 17] = [
    "process",
    "constant",
    "variable",
    "margin",
    "parameter",
    "profile",
    "quantity",
    "kernel",
    "spectrum",
    "climate",
    "limit",
    "expect",
    "use",
    "correlate",
    "accept",
    "title",
    "language",
];

/// The words that begin a line of a limit state; the second is empty where one word names the line.
pub const LIMIT_LINE_KEYWORDS: [(&str, &str); 6] = [
    ("failure", "when"),
    ("reference", "period"),
    ("first", "passage"),
    ("require", ""),
    ("tabulate", "at"),
    ("extremes", "at"),
];

/// Every word that cannot be a name. Before a colon each may still name an argument (`spectrum: ...`).
pub const RESERVED: [&str; 28] = [
    "accept",
    "and",
    "as",
    "at",
    "basis",
    "because",
    "by",
    "climate",
    "constant",
    "correlate",
    "expect",
    "kernel",
    "language",
    "limit",
    "margin",
    "outside",
    "over",
    "parameter",
    "process",
    "profile",
    "quantity",
    "spectrum",
    "title",
    "to",
    "use",
    "variable",
    "with",
    "within",
];

/// Whether `word` cannot be a name.
pub fn is_reserved(word: &str) -> bool {
    RESERVED.contains(&word)
}

/// How a rule is spoken of where it was expected.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Expected {
    /// One of the beginnings of a value: a number, a name, a bracket.
    Value,
    /// One of the operators between values.
    Operator,
    /// One of the comparisons of a condition.
    Comparison,
    /// One of the comparisons of a requirement.
    Demand,
    /// A mark or a word that the user would write, or what goes by that name.
    Plain(&'static str),
    /// The same, but one of many where a value or an operator fits, and then left unsaid.
    Alone(&'static str),
    /// Never the first thing a user would miss.
    Unspoken,
}

/// How each rule is spoken of. Silent rules never occur in an error; they stand here so that the match is total.
pub(super) fn expected(rule: Rule) -> Expected {
    use Expected::{Alone, Comparison, Demand, Operator, Plain, Unspoken, Value};
    match rule {
        Rule::sum | Rule::sign | Rule::bracket => Value,
        Rule::additive | Rule::multiplicative | Rule::caret => Operator,
        Rule::below | Rule::above | Rule::outside => Comparison,
        Rule::at_least | Rule::at_most => Demand,

        Rule::digits => Alone("a number"),
        Rule::string => Alone("a text in quotation marks"),
        Rule::path => Alone("a name"),
        Rule::argument_name => Alone("the name of an argument"),
        Rule::arguments => Alone("`(`"),

        Rule::name => Plain("a name"),
        Rule::code => Plain("the code of a warning"),
        Rule::condition => Plain("a condition"),
        Rule::quantity => Plain("a quantity such as `standard_deviation(NAME)`"),
        Rule::shown_unit => Plain("a unit"),
        Rule::head => Plain("`(`"),
        Rule::colon => Plain("`:`"),
        Rule::assign => Plain("`=`"),
        Rule::comma => Plain("`,`"),
        Rule::close => Plain("`)`"),
        Rule::open_brace => Plain("`{`"),
        Rule::close_brace => Plain("`}`"),
        Rule::basis | Rule::basis_keyword => Plain("`basis`"),
        Rule::within => Plain("`within`"),
        Rule::as_word => Plain("`as`"),
        Rule::with => Plain("`with`"),
        Rule::because => Plain("`because`"),
        Rule::state => Plain("`state`"),
        Rule::when => Plain("`when`"),
        Rule::period => Plain("`period`"),
        Rule::passage => Plain("`passage`"),
        Rule::over => Plain("`over`"),
        Rule::at => Plain("`at`"),
        Rule::to => Plain("`to`"),

        Rule::declaration
        | Rule::definition
        | Rule::definition_keyword
        | Rule::parameter
        | Rule::parameter_keyword
        | Rule::function
        | Rule::function_keyword
        | Rule::climate
        | Rule::climate_keyword
        | Rule::limit_state
        | Rule::limit_keyword
        | Rule::expect
        | Rule::expect_keyword
        | Rule::part
        | Rule::part_keyword
        | Rule::correlate
        | Rule::correlate_keyword
        | Rule::accept
        | Rule::accept_keyword
        | Rule::title
        | Rule::title_keyword
        | Rule::language
        | Rule::language_keyword => Plain("a declaration"),

        Rule::limit_line
        | Rule::failure_line
        | Rule::failure_keyword
        | Rule::reference_line
        | Rule::reference_keyword
        | Rule::passage_line
        | Rule::passage_keyword
        | Rule::require_line
        | Rule::require_keyword
        | Rule::tabulate_line
        | Rule::tabulate_keyword
        | Rule::extremes_line
        | Rule::extremes_keyword => Plain("a line of the limit state"),

        Rule::unit | Rule::reciprocal | Rule::system_word | Rule::system_body | Rule::EOI => Unspoken,

        Rule::WHITESPACE
        | Rule::COMMENT
        | Rule::gap
        | Rule::blank
        | Rule::beyond_ascii
        | Rule::word_start
        | Rule::word_rest
        | Rule::edge
        | Rule::reserved
        | Rule::separator
        | Rule::numerals
        | Rule::number
        | Rule::unit_tail
        | Rule::unit_factor
        | Rule::unit_inner
        | Rule::unit_product
        | Rule::unit_end
        | Rule::unit_word
        | Rule::symbol
        | Rule::symbol_start
        | Rule::unit_power
        | Rule::superscript
        | Rule::unit_note
        | Rule::product
        | Rule::power
        | Rule::exponent
        | Rule::atom
        | Rule::reference
        | Rule::argument
        | Rule::named_argument
        | Rule::head_member
        | Rule::code_word
        | Rule::system
        | Rule::comparison
        | Rule::stretch
        | Rule::leading
        | Rule::lines
        | Rule::sole_value => Unspoken,
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::parse;
    use crate::source::FileId;

    fn can_be_declared(word: &str) -> bool {
        let (tree, diagnostics) = parse(FileId(0), &format!("constant {word} = 1"));
        diagnostics.is_empty() && tree.declarations.len() == 1
    }

    #[test]
    fn reserved_words_and_no_others_are_refused_as_names() {
        assert!(RESERVED.is_sorted());
        for word in RESERVED {
            assert!(!can_be_declared(word), "{word}");
            assert!(can_be_declared(&format!("{word}s")), "{word}s");
            assert!(can_be_declared(&format!("a{word}")), "a{word}");
        }
        for (first, second) in LIMIT_LINE_KEYWORDS {
            assert!(can_be_declared(first), "{first}");
            assert!(
                second.is_empty() || is_reserved(second) || can_be_declared(second),
                "{second}"
            );
        }
    }

    #[test]
    fn every_keyword_of_a_declaration_is_reserved_and_stands_in_the_grammar() {
        let grammar = include_str!("../../grammar/outcross.pest");
        for keyword in DECLARATION_KEYWORDS {
            assert!(is_reserved(keyword), "{keyword}");
            assert!(grammar.contains(&format!("\"{keyword}\"")), "{keyword}");
        }
        for (first, second) in LIMIT_LINE_KEYWORDS {
            assert!(grammar.contains(&format!("\"{first}\"")), "{first}");
            assert!(grammar.contains(&format!("\"{second}\"")), "{second}");
        }
    }
}
