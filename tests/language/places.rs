//! Every place a tree names: the text under it is what the node says.

use super::{print, read};
use outcross::language::parse_expression;
use outcross::language::tree::{
    Condition, ConditionKind, Declaration, DeclarationKind, Expression, ExpressionKind, LimitLineKind, Word,
};
use outcross::source::Files;

/// The expressions of a declaration, all of them, outer before inner.
fn expressions(declaration: &Declaration) -> Vec<&Expression> {
    let mut outer: Vec<&Expression> = Vec::new();
    match &declaration.kind {
        DeclarationKind::Use { arguments, .. } => outer.extend(arguments.iter().map(|one| &one.value)),
        DeclarationKind::Parameter { value, .. } => outer.extend(value),
        DeclarationKind::Definition { value, .. }
        | DeclarationKind::Function { value, .. }
        | DeclarationKind::Climate { value, .. }
        | DeclarationKind::Correlate { value, .. } => outer.push(value),
        DeclarationKind::Expect {
            quantity,
            value,
            tolerance,
        } => outer.extend([quantity, value, tolerance]),
        DeclarationKind::LimitState { lines, .. } => {
            for line in lines {
                match &line.kind {
                    LimitLineKind::FailureWhen(condition) => in_condition(condition, &mut outer),
                    LimitLineKind::ReferencePeriod(time) => outer.push(time),
                    LimitLineKind::Require { value, over, .. } => {
                        outer.push(value);
                        outer.extend(over);
                    }
                    LimitLineKind::TabulateAt(times) | LimitLineKind::ExtremesAt(times) => outer.extend(times),
                    LimitLineKind::FirstPassage(_) => {}
                }
            }
        }
        DeclarationKind::Language(_) | DeclarationKind::Title(_) | DeclarationKind::Accept { .. } => {}
    }
    let mut all = Vec::new();
    while let Some(one) = outer.pop() {
        all.push(one);
        match &one.kind {
            ExpressionKind::Sum(terms) => outer.extend(terms.iter().map(|term| &term.value)),
            ExpressionKind::Product(factors) => outer.extend(factors.iter().map(|factor| &factor.value)),
            ExpressionKind::Negative(value) | ExpressionKind::Bracket(value) => outer.push(value),
            ExpressionKind::Power(base, exponent) => outer.extend([&**base, &**exponent]),
            ExpressionKind::Call(call) => outer.extend(call.arguments.iter().map(|one| &one.value)),
            ExpressionKind::Group(arguments) => outer.extend(arguments.iter().map(|one| &one.value)),
            ExpressionKind::Number(_) | ExpressionKind::String(_) | ExpressionKind::Name(_) => {}
        }
    }
    all
}

fn in_condition<'a>(condition: &'a Condition, outer: &mut Vec<&'a Expression>) {
    match &condition.kind {
        ConditionKind::Below(left, right) | ConditionKind::Above(left, right) => outer.extend([left, right]),
        ConditionKind::Outside(value, lower, upper) => outer.extend([value, lower, upper]),
        ConditionKind::Any(parts) | ConditionKind::All(parts) => {
            for part in parts {
                in_condition(part, outer);
            }
        }
        ConditionKind::Named(_) => {}
    }
}

fn check_word(files: &Files, word: &Word) {
    assert_eq!(files.text(word.span), &*word.text);
}

fn check_inside(files: &Files, expression: &Expression) {
    let text = files.text(expression.span);
    match &expression.kind {
        ExpressionKind::Name(path) => {
            assert_eq!(files.text(path.span), text);
            path.words.iter().for_each(|word| check_word(files, word));
        }
        ExpressionKind::Call(call) => {
            let brackets = files.text(call.brackets);
            assert!(brackets.starts_with('(') && brackets.ends_with(')'), "{brackets}");
            assert!(text.starts_with(files.text(call.function.span)) && text.ends_with(brackets));
            call.arguments
                .iter()
                .filter_map(|argument| argument.name.as_ref())
                .for_each(|name| check_word(files, name));
        }
        ExpressionKind::Number(number) => {
            let digits: f64 = files
                .text(number.digits)
                .replace('_', "")
                .parse()
                .expect("digits are a number");
            assert_eq!(digits, number.value);
            if let Some(unit) = &number.unit {
                assert!(text.ends_with(files.text(unit.span)));
                unit.factors.iter().for_each(|factor| check_word(files, &factor.symbol));
            }
        }
        ExpressionKind::Bracket(_) | ExpressionKind::Group(_) => {
            assert!(text.starts_with('(') && text.ends_with(')'), "{text}");
        }
        _ => {}
    }
}

#[test]
fn the_text_under_every_node_is_that_node() {
    insta::glob!("valid/*.limit", |path| {
        let (name, text) = super::content(path);
        // A byte order mark and Windows line ends move every place.
        for text in [text.clone(), format!("\u{FEFF}{}", text.replace('\n', "\r\n"))] {
            let read = read(&name, &text);
            assert!(read.diagnostics.is_empty(), "{name}: {:?}", read.diagnostics);
            for declaration in &read.tree.declarations {
                let whole = read.files.text(declaration.span);
                assert!(whole.starts_with(read.files.text(declaration.keyword)));
                assert_eq!(whole.trim(), whole);
                for expression in expressions(declaration) {
                    let text = read.files.text(expression.span);
                    assert_eq!(text.trim(), text);
                    check_inside(&read.files, expression);
                    let mut alone = Files::new();
                    let file = alone.add("value", text.to_owned());
                    let again = parse_expression(file, text).expect("an expression stands alone");
                    assert_eq!(
                        print::expression(&alone, &again),
                        print::expression(&read.files, expression),
                        "{text}"
                    );
                }
            }
            for comment in &read.tree.comments {
                let comment = read.files.text(*comment);
                assert!(comment.starts_with('#') && !comment.ends_with(['\n', '\r']));
            }
        }
    });
}
