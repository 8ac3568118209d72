//! The order in which items are looked at: what an item is made from comes first. Circles are found here.

use super::names::{ItemId, Names, Resolved, declared};
use super::parts::InstanceId;
use crate::diagnostics::{Code, Diagnostic};
use crate::language::tree::{
    Condition, ConditionKind, DeclarationKind, Expression, ExpressionKind, LimitLineKind, Path,
};

/// The items in an order in which each comes after those it is made from; items on a circle are left out.
pub struct Order {
    /// In order.
    pub items: Vec<ItemId>,
    /// On a circle: reported, never looked at.
    pub circular: Vec<ItemId>,
}

#[derive(Clone, Copy, PartialEq)]
enum Mark {
    New,
    Open,
    Done,
}

/// Finds the order by a depth-first walk with its own stack: a chain of declarations may be as long as the file.
pub fn order(names: &Names<'_>, diagnostics: &mut Vec<Diagnostic>) -> Order {
    let total = names.items().count();
    let mut marks = vec![Mark::New; total];
    let mut on_circle = vec![false; total];
    let mut finished = Vec::with_capacity(total);
    for root in names.items() {
        if marks[root.index()] != Mark::New {
            continue;
        }
        marks[root.index()] = Mark::Open;
        let mut stack = vec![(root, made_from(names, root).into_iter())];
        while let Some((item, needs)) = stack.last_mut() {
            let item = *item;
            match needs.next() {
                Some(need) => match marks[need.index()] {
                    Mark::New => {
                        marks[need.index()] = Mark::Open;
                        stack.push((need, made_from(names, need).into_iter()));
                    }
                    Mark::Open => {
                        let open = stack.iter().rev().map(|(open, _)| *open);
                        if let Some(circle) = close(open, need, &mut on_circle) {
                            diagnostics.push(circular(names, &circle));
                        }
                    }
                    Mark::Done => {}
                },
                None => {
                    marks[item.index()] = Mark::Done;
                    finished.push(item);
                    stack.pop();
                }
            }
        }
    }
    let (circular, items) = finished.into_iter().partition(|item| on_circle[item.index()]);
    Order { items, circular }
}

/// Marks the open items back to `need`. A circle that runs into one already marked is part of a larger knot that has
/// been reported: `None`.
fn close(open: impl Iterator<Item = ItemId>, need: ItemId, on_circle: &mut [bool]) -> Option<Vec<ItemId>> {
    let mut circle = Vec::new();
    for item in open {
        if std::mem::replace(&mut on_circle[item.index()], true) {
            return None;
        }
        circle.push(item);
        if item == need {
            break;
        }
    }
    circle.reverse();
    Some(circle)
}

fn circular(names: &Names<'_>, circle: &[ItemId]) -> Diagnostic {
    let word = |item: &ItemId| declared(names.declaration(*item));
    let first = circle.first().copied().unwrap_or(ItemId(0));
    // A circle within one file is the same fault wherever the file is used.
    let instance = names.item(first).instance;
    let within_one = circle.iter().all(|item| names.item(*item).instance == instance);
    let name_of = |item: &ItemId| match word(item) {
        Some(word) if within_one => word.text.to_string(),
        _ => names.full_name(*item),
    };
    let name = name_of(&first);
    let place = super::names::place(names.declaration(first));
    let message = match circle.len() {
        1 => format!("`{name}` is defined by itself"),
        _ => {
            let chain: Vec<String> = circle
                .iter()
                .take(8)
                .map(|item| format!("`{}`", name_of(item)))
                .collect();
            format!("these are defined by each other: {} -> `{name}`", chain.join(" -> "))
        }
    };
    let mut finding = Diagnostic::new(Code::NameCycle, place, message)
        .here("needs itself")
        .help(match circle.len() {
            1 => "solve the equation for it by hand, or give it a value of its own",
            _ => "define one of them without the others; an equation is solved by hand",
        });
    for other in circle.iter().skip(1).take(8).filter_map(word) {
        finding = finding.label(other.span, "which is needed here");
    }
    finding
}

/// The items that an item's value is made from. Names that lead nowhere are left to those who look at the value.
pub(super) fn made_from(names: &Names<'_>, item: ItemId) -> Vec<ItemId> {
    let at = names.item(item);
    let mut found = Vec::new();
    let look = |path: &Path, from: InstanceId, found: &mut Vec<ItemId>| {
        if let Ok(Resolved::Item(need)) = names.resolve(path, from) {
            found.push(need);
        }
    };
    let here = at.instance;
    let mut expression = |value: &Expression, from: InstanceId| walk(value, &mut |path| look(path, from, &mut found));
    match &names.declaration(item).kind {
        DeclarationKind::Parameter { name, value, .. } => {
            if let Some((origin, _, arguments)) = names.parts().arguments(here) {
                let set = arguments
                    .iter()
                    .find(|one| one.name.as_ref().is_some_and(|word| word.text == name.text));
                if let Some(argument) = set {
                    expression(&argument.value, origin.user);
                    return found;
                }
            }
            if let Some(value) = value {
                expression(value, here);
            }
        }
        kind => each_expression(kind, &mut |value| expression(value, here)),
    }
    if let DeclarationKind::Correlate { names: paths, .. } = &names.declaration(item).kind {
        paths.iter().for_each(|path| look(path, here, &mut found));
    }
    found
}

/// Visits every expression of a declaration, in the order of the text.
pub(super) fn each_expression(kind: &DeclarationKind, visit: &mut dyn FnMut(&Expression)) {
    match kind {
        DeclarationKind::Parameter { value, .. } => value.iter().for_each(visit),
        DeclarationKind::Definition { value, .. }
        | DeclarationKind::Function { value, .. }
        | DeclarationKind::Climate { value, .. }
        | DeclarationKind::Correlate { value, .. } => visit(value),
        DeclarationKind::LimitState { lines, .. } => lines.iter().for_each(|line| match &line.kind {
            LimitLineKind::FailureWhen(condition) => conditions(condition, visit),
            LimitLineKind::ReferencePeriod(value) => visit(value),
            LimitLineKind::Require { value, over, .. } => {
                visit(value);
                over.iter().for_each(&mut *visit);
            }
            LimitLineKind::TabulateAt(times) | LimitLineKind::ExtremesAt(times) => {
                times.iter().for_each(&mut *visit);
            }
            LimitLineKind::FirstPassage(_) => {}
        }),
        DeclarationKind::Expect {
            quantity,
            value,
            tolerance,
        } => [quantity, value, tolerance].into_iter().for_each(visit),
        DeclarationKind::Use { arguments, .. } => arguments.iter().for_each(|argument| visit(&argument.value)),
        DeclarationKind::Language(_) | DeclarationKind::Title(_) | DeclarationKind::Accept { .. } => {}
    }
}

pub(super) fn conditions(condition: &Condition, visit: &mut dyn FnMut(&Expression)) {
    match &condition.kind {
        ConditionKind::Below(a, b) | ConditionKind::Above(a, b) => [a, b].into_iter().for_each(visit),
        ConditionKind::Outside(a, b, c) => [a, b, c].into_iter().for_each(visit),
        ConditionKind::Any(several) | ConditionKind::All(several) => {
            for one in several {
                conditions(one, visit);
            }
        }
        ConditionKind::Named(_) => {}
    }
}

/// Visits every path of an expression. The depth of an expression is bounded by the parser.
pub(super) fn walk(expression: &Expression, visit: &mut dyn FnMut(&Path)) {
    match &expression.kind {
        ExpressionKind::Number(_) | ExpressionKind::String(_) => {}
        ExpressionKind::Name(path) => visit(path),
        ExpressionKind::Sum(terms) => terms.iter().for_each(|term| walk(&term.value, visit)),
        ExpressionKind::Product(factors) => factors.iter().for_each(|factor| walk(&factor.value, visit)),
        ExpressionKind::Negative(inner) | ExpressionKind::Bracket(inner) => walk(inner, visit),
        ExpressionKind::Power(base, exponent) => {
            walk(base, visit);
            walk(exponent, visit);
        }
        ExpressionKind::Call(call) => {
            visit(&call.function);
            call.arguments.iter().for_each(|argument| walk(&argument.value, visit));
        }
        ExpressionKind::Group(arguments) => arguments.iter().for_each(|argument| walk(&argument.value, visit)),
    }
}
