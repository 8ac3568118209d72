//! Expressions as people read them.

use super::{Arena, Function, Node, NodeId, Operand, Symbol};

/// Where the text is cut: shared parts are written out each time, so a short model can have an endless expression.
const LONGEST: usize = 10_000;

/// How tightly a node holds together.
#[derive(Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
enum Strength {
    Sum,
    Negative,
    Product,
    Power,
    Atom,
}

enum Piece {
    Fixed(&'static str),
    Own(String),
    /// A node, in brackets if it is weaker than that.
    Node(NodeId, Strength),
}

enum Opposite {
    Number(f64),
    Node(NodeId),
}

/// Writes an expression as text in the manner of the language with as few brackets as it takes, and an ellipsis where
/// it is cut for its length.
pub fn show(arena: &Arena, root: NodeId, name: impl Fn(Symbol) -> String) -> String {
    let mut text = String::new();
    let mut stack = vec![Piece::Node(root, Strength::Sum)];
    while let Some(piece) = stack.pop() {
        if text.len() > LONGEST {
            text.push('…');
            break;
        }
        let pieces = match piece {
            Piece::Fixed(fixed) => {
                text.push_str(fixed);
                continue;
            }
            Piece::Node(id, least) if strength(arena, id) < least => {
                vec![Piece::Fixed("("), Piece::Node(id, Strength::Sum), Piece::Fixed(")")]
            }
            Piece::Node(id, _) => match arena.node(id) {
                Node::Number(value) => vec![Piece::Own(number(value))],
                Node::Symbol(symbol) => vec![Piece::Own(name(symbol))],
                Node::Sum(operands) => sum(arena, operands),
                Node::Product(operands) => product(operands),
                Node::Negative(node) => vec![Piece::Fixed("-"), Piece::Node(node, Strength::Product)],
                Node::Power(base, exponent) => vec![
                    Piece::Node(base, Strength::Atom),
                    Piece::Fixed("^"),
                    Piece::Node(exponent, Strength::Atom),
                ],
                Node::Apply(function, arguments) => application(function, arguments),
            },
            Piece::Own(own) => {
                text.push_str(&own);
                continue;
            }
        };
        stack.extend(pieces.into_iter().rev());
    }
    text
}

fn sum(arena: &Arena, operands: &[Operand]) -> Vec<Piece> {
    let mut pieces = vec![Piece::Fixed(if operands.is_empty() { "0" } else { "" })];
    for (place, operand) in operands.iter().enumerate() {
        // a + (-b) is written a - b.
        let opposite = if place > 0 { opposite(arena, operand.node) } else { None };
        pieces.push(Piece::Fixed(match (place, operand.inverse != opposite.is_some()) {
            (0, true) => "-",
            (0, false) => "",
            (_, true) => " - ",
            (_, false) => " + ",
        }));
        let least = if place == 0 && !operand.inverse {
            Strength::Sum
        } else {
            Strength::Product
        };
        pieces.push(match opposite {
            Some(Opposite::Number(value)) => Piece::Own(number(value)),
            Some(Opposite::Node(node)) => Piece::Node(node, least),
            None => Piece::Node(operand.node, least),
        });
    }
    pieces
}

fn product(operands: &[Operand]) -> Vec<Piece> {
    let mut pieces = vec![Piece::Fixed(if operands.is_empty() { "1" } else { "" })];
    for (place, operand) in operands.iter().enumerate() {
        let (sign, least) = match (place, operand.inverse) {
            (0, false) => ("", Strength::Negative),
            (0, true) => ("1 / ", Strength::Power),
            (_, false) => (" * ", Strength::Power),
            (_, true) => (" / ", Strength::Power),
        };
        pieces.extend([Piece::Fixed(sign), Piece::Node(operand.node, least)]);
    }
    pieces
}

fn application(function: Function, arguments: &[NodeId]) -> Vec<Piece> {
    let mut pieces = vec![Piece::Fixed(function.name()), Piece::Fixed("(")];
    for (place, argument) in arguments.iter().enumerate() {
        pieces.push(Piece::Fixed(if place == 0 { "" } else { ", " }));
        pieces.push(Piece::Node(*argument, Strength::Sum));
    }
    pieces.push(Piece::Fixed(")"));
    pieces
}

/// The negative of a node where that is the simpler thing to write.
fn opposite(arena: &Arena, id: NodeId) -> Option<Opposite> {
    match arena.node(id) {
        Node::Number(value) if value < 0.0 => Some(Opposite::Number(-value)),
        Node::Negative(node) => Some(Opposite::Node(node)),
        _ => None,
    }
}

fn strength(arena: &Arena, id: NodeId) -> Strength {
    match arena.node(id) {
        Node::Sum([]) | Node::Product([]) | Node::Symbol(_) | Node::Apply(..) => Strength::Atom,
        Node::Sum(_) => Strength::Sum,
        Node::Product([first, ..]) if !first.inverse && opposite(arena, first.node).is_some() => Strength::Negative,
        Node::Product(_) => Strength::Product,
        Node::Power(..) => Strength::Power,
        Node::Negative(_) => Strength::Negative,
        Node::Number(value) if value < 0.0 => Strength::Negative,
        Node::Number(_) => Strength::Atom,
    }
}

/// A number with all its digits and no more, in words where it is none.
pub(super) fn number(value: f64) -> String {
    let size = value.abs();
    if value.is_nan() {
        "undefined".to_owned()
    } else if value.is_infinite() {
        if value > 0.0 { "infinite" } else { "-infinite" }.to_owned()
    } else if size == 0.0 {
        "0".to_owned()
    } else if (1e-4..1e15).contains(&size) {
        format!("{value}")
    } else {
        format!("{value:e}")
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn name(symbol: Symbol) -> String {
        match symbol {
            Symbol::Lag => "tau".to_owned(),
            Symbol::Argument(place) => format!("p{place}"),
        }
    }

    fn text(build: impl Fn(&mut Arena, NodeId, NodeId) -> NodeId) -> String {
        let mut arena = Arena::new();
        let lag = arena.symbol(Symbol::Lag);
        let argument = arena.symbol(Symbol::Argument(0));
        let root = build(&mut arena, lag, argument);
        show(&arena, root, name)
    }

    #[test]
    fn brackets_stand_only_where_they_change_the_meaning() {
        let (add, less) = (Operand::direct, Operand::inverse);
        assert_eq!(
            text(|arena, x, y| {
                let two = arena.number(2.0);
                let square = arena.power(x, two);
                let half = arena.product(&[add(square), less(two)]);
                let one = arena.number(1.0);
                let sum = arena.sum(&[add(one), add(half), less(y)]);
                arena.product(&[add(one), less(sum)])
            }),
            "1 / (1 + tau^2 / 2 - p0)"
        );
        assert_eq!(
            text(|arena, x, y| {
                let inner = arena.sum(&[add(x), less(y)]);
                arena.sum(&[add(inner), less(inner)])
            }),
            "tau - p0 - (tau - p0)"
        );
        assert_eq!(
            text(|arena, x, y| {
                let minus = arena.negative(x);
                let small = arena.number(-2.5e-7);
                let sum = arena.sum(&[less(y), add(minus), less(small)]);
                let power = arena.power(minus, small);
                arena.product(&[add(minus), add(sum), add(power), less(minus)])
            }),
            "-tau * (-p0 - tau + 2.5e-7) * (-tau)^(-2.5e-7) / (-tau)"
        );
        assert_eq!(
            text(|arena, x, y| {
                let product = arena.product(&[add(x), add(y)]);
                let again = arena.product(&[add(product), less(product)]);
                let least = arena.apply(Function::Min, &[again, y]).expect("two arguments");
                let tower = arena.power(least, x);
                let power = arena.power(tower, x);
                arena.negative(power)
            }),
            "-(min(tau * p0 / (tau * p0), p0)^tau)^tau"
        );
    }

    #[test]
    fn an_endless_expression_is_cut() {
        let mut arena = Arena::new();
        let lag = arena.symbol(Symbol::Lag);
        let root = (0..200).fold(lag, |part, _| {
            arena.sum(&[Operand::direct(part), Operand::direct(part)])
        });
        let text = show(&arena, root, name);
        assert!(text.len() < LONGEST + 20 && text.ends_with('…'));
    }
}
