//! Where expressions live.

use super::number::{product, sum};
use super::{Function, Number};

/// A node of an [`Arena`]. Means nothing in another arena.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct NodeId(u32);

/// What gets its value at evaluation.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Symbol {
    /// The lag of a kernel, or the frequency of a spectrum: the argument the function is expanded in.
    Lag,
    /// A further argument, by its place from 0.
    Argument(u16),
}

/// One operand of a sum or a product.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct Operand {
    /// Subtracted in a sum, dividing in a product.
    pub inverse: bool,
    /// The operand itself.
    pub node: NodeId,
}

impl Operand {
    /// An operand that is added or multiplies.
    pub fn direct(node: NodeId) -> Self {
        Self { inverse: false, node }
    }

    /// An operand that is subtracted or divides.
    pub fn inverse(node: NodeId) -> Self {
        Self { inverse: true, node }
    }
}

/// A node as it is read.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Node<'a> {
    /// A number.
    Number(f64),
    /// A symbol.
    Symbol(Symbol),
    /// A sum, from left to right.
    Sum(&'a [Operand]),
    /// A product, from left to right.
    Product(&'a [Operand]),
    /// The negative of a node.
    Negative(NodeId),
    /// Base and exponent.
    Power(NodeId, NodeId),
    /// A function and its arguments.
    Apply(Function, &'a [NodeId]),
}

/// A node as it is kept; operands are a stretch of a side list.
#[derive(Clone, Copy, Debug)]
enum Kept {
    Number(f64),
    Symbol(Symbol),
    Sum(Stretch),
    Product(Stretch),
    Negative(NodeId),
    Power(NodeId, NodeId),
    Apply(Function, Stretch),
}

#[derive(Clone, Copy, Debug)]
struct Stretch {
    start: u32,
    end: u32,
}

/// Expressions as nodes. The operands of a node always have smaller ids than the node, so ids in growing order are an
/// order of evaluation. Operations on numbers alone are carried out when they are built, by the same rules as at
/// evaluation; the result may be infinite or NaN, and is for the caller to report.
///
/// # Panics
///
/// All methods may panic on an id of another arena.
#[derive(Clone, Debug, Default)]
pub struct Arena {
    nodes: Vec<Kept>,
    operands: Vec<Operand>,
    arguments: Vec<NodeId>,
}

impl Arena {
    /// An arena without nodes.
    pub fn new() -> Self {
        Self::default()
    }

    /// How many nodes it has.
    pub fn len(&self) -> usize {
        self.nodes.len()
    }

    /// Whether it has none.
    pub fn is_empty(&self) -> bool {
        self.nodes.is_empty()
    }

    /// A number.
    pub fn number(&mut self, value: f64) -> NodeId {
        self.push(Node::Number(value))
    }

    /// A symbol.
    pub fn symbol(&mut self, symbol: Symbol) -> NodeId {
        self.push(Node::Symbol(symbol))
    }

    /// A sum; 0 without operands.
    pub fn sum(&mut self, operands: &[Operand]) -> NodeId {
        if let [Operand { inverse: false, node }] = operands {
            return *node;
        }
        match self.operand_values(operands) {
            Some(values) => self.number(sum(values.iter().map(|(inverse, value)| (*inverse, value)))),
            None => self.push(Node::Sum(operands)),
        }
    }

    /// A product; 1 without operands.
    pub fn product(&mut self, operands: &[Operand]) -> NodeId {
        if let [Operand { inverse: false, node }] = operands {
            return *node;
        }
        match self.operand_values(operands) {
            Some(values) => self.number(product(values.iter().map(|(inverse, value)| (*inverse, value)))),
            None => self.push(Node::Product(operands)),
        }
    }

    /// The negative of a node.
    pub fn negative(&mut self, node: NodeId) -> NodeId {
        match self.value(node) {
            Some(value) => self.number(-value),
            None => self.push(Node::Negative(node)),
        }
    }

    /// A power.
    pub fn power(&mut self, base: NodeId, exponent: NodeId) -> NodeId {
        match (self.value(base), self.value(exponent)) {
            (Some(base), Some(exponent)) => self.number(Number::power(&base, &exponent)),
            _ => self.push(Node::Power(base, exponent)),
        }
    }

    /// A function of arguments; `None` where their number is not one of its [arity](Function::arity).
    pub fn apply(&mut self, function: Function, arguments: &[NodeId]) -> Option<NodeId> {
        if !function.arity().contains(&arguments.len()) {
            return None;
        }
        let values: Option<Vec<f64>> = arguments.iter().map(|argument| self.value(*argument)).collect();
        Some(match values {
            Some(values) => self.number(function.evaluate(&values)),
            None => self.push(Node::Apply(function, arguments)),
        })
    }

    /// The value of a node that is a number.
    pub fn value(&self, id: NodeId) -> Option<f64> {
        match self.node(id) {
            Node::Number(value) => Some(value),
            _ => None,
        }
    }

    /// Reads a node.
    pub fn node(&self, id: NodeId) -> Node<'_> {
        self.read(self.nodes[id.0 as usize])
    }

    /// All nodes in growing order of their ids.
    pub(super) fn nodes(&self) -> impl Iterator<Item = Node<'_>> {
        self.nodes.iter().map(|kept| self.read(*kept))
    }

    /// Adds a node as it is.
    pub(super) fn push(&mut self, node: Node<'_>) -> NodeId {
        let kept = match node {
            Node::Number(value) => Kept::Number(value),
            Node::Symbol(symbol) => Kept::Symbol(symbol),
            Node::Sum(operands) => Kept::Sum(append(&mut self.operands, operands)),
            Node::Product(operands) => Kept::Product(append(&mut self.operands, operands)),
            Node::Negative(node) => Kept::Negative(node),
            Node::Power(base, exponent) => Kept::Power(base, exponent),
            Node::Apply(function, arguments) => Kept::Apply(function, append(&mut self.arguments, arguments)),
        };
        let id = NodeId(position(self.nodes.len()));
        self.nodes.push(kept);
        id
    }

    fn read(&self, kept: Kept) -> Node<'_> {
        match kept {
            Kept::Number(value) => Node::Number(value),
            Kept::Symbol(symbol) => Node::Symbol(symbol),
            Kept::Sum(stretch) => Node::Sum(stretch.of(&self.operands)),
            Kept::Product(stretch) => Node::Product(stretch.of(&self.operands)),
            Kept::Negative(node) => Node::Negative(node),
            Kept::Power(base, exponent) => Node::Power(base, exponent),
            Kept::Apply(function, stretch) => Node::Apply(function, stretch.of(&self.arguments)),
        }
    }

    fn operand_values(&self, operands: &[Operand]) -> Option<Vec<(bool, f64)>> {
        operands
            .iter()
            .map(|operand| self.value(operand.node).map(|value| (operand.inverse, value)))
            .collect()
    }
}

impl NodeId {
    /// The place of the node in its arena, from 0.
    pub fn index(self) -> usize {
        self.0 as usize
    }
}

impl Stretch {
    fn of<T>(self, list: &[T]) -> &[T] {
        &list[self.start as usize..self.end as usize]
    }
}

fn append<T: Copy>(list: &mut Vec<T>, more: &[T]) -> Stretch {
    let start = position(list.len());
    list.extend_from_slice(more);
    Stretch {
        start,
        end: position(list.len()),
    }
}

/// Ids have 32 bits. A text of 4 GB would be needed to use them up; files that long are not read, and a model whose
/// files make too many nodes together is refused.
fn position(length: usize) -> u32 {
    u32::try_from(length).unwrap_or(u32::MAX)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn operations_on_numbers_fold() {
        let mut arena = Arena::new();
        let two = arena.number(2.0);
        let three = arena.number(3.0);
        let sum = arena.sum(&[Operand::direct(two), Operand::inverse(three)]);
        assert_eq!(arena.value(sum), Some(-1.0));
        let quotient = arena.product(&[Operand::inverse(two), Operand::direct(three)]);
        assert_eq!(arena.value(quotient), Some(1.5));
        let power = arena.power(two, three);
        assert_eq!(arena.value(power), Some(8.0));
        let minus = arena.negative(two);
        assert_eq!(arena.value(minus), Some(-2.0));
        let root = arena.apply(Function::Sqrt, &[minus]).expect("one argument");
        assert!(arena.value(root).is_some_and(f64::is_nan));
        let zero = arena.sum(&[]);
        let infinite = arena.product(&[Operand::inverse(zero)]);
        assert_eq!(arena.value(infinite), Some(f64::INFINITY));
    }

    #[test]
    fn symbols_do_not_fold() {
        let mut arena = Arena::new();
        let lag = arena.symbol(Symbol::Lag);
        let zero = arena.number(0.0);
        let product = arena.product(&[Operand::direct(zero), Operand::direct(lag)]);
        assert_eq!(arena.value(product), None);
        assert_eq!(
            arena.node(product),
            Node::Product(&[Operand::direct(zero), Operand::direct(lag)])
        );
        assert_eq!(arena.sum(&[Operand::direct(lag)]), lag);
    }

    #[test]
    fn a_wrong_number_of_arguments_makes_no_node() {
        let mut arena = Arena::new();
        let lag = arena.symbol(Symbol::Lag);
        assert_eq!(arena.apply(Function::Min, &[lag]), None);
        assert_eq!(arena.apply(Function::Exp, &[lag, lag]), None);
        assert_eq!(arena.apply(Function::Exp, &[]), None);
        assert!(arena.apply(Function::Max, &[lag, lag, lag]).is_some());
    }
}
