//! One expression, ready to be evaluated many times.

use std::collections::{BTreeSet, HashMap};

use super::number::{product, sum};
use super::{Arena, Node, NodeId, Number, Operand, Symbol};

/// The nodes one root needs, in order of evaluation; the last is the root.
#[derive(Clone, Debug)]
pub struct Tape {
    nodes: Arena,
}

impl Tape {
    /// Takes from the arena what `root` needs. Time grows with the number of nodes taken, not with the arena.
    pub fn compile(arena: &Arena, root: NodeId) -> Self {
        let mut places: HashMap<NodeId, NodeId> = HashMap::new();
        let mut nodes = Arena::new();
        for id in reachable(arena, root) {
            let place = |id: &NodeId| places.get(id).copied().unwrap_or(*id);
            let moved = |operands: &[Operand]| -> Vec<Operand> {
                let moved = operands.iter().map(|operand| Operand {
                    inverse: operand.inverse,
                    node: place(&operand.node),
                });
                moved.collect()
            };
            let new = match arena.node(id) {
                leaf @ (Node::Number(_) | Node::Symbol(_)) => nodes.push(leaf),
                Node::Sum(operands) => nodes.push(Node::Sum(&moved(operands))),
                Node::Product(operands) => nodes.push(Node::Product(&moved(operands))),
                Node::Negative(node) => nodes.push(Node::Negative(place(&node))),
                Node::Power(base, exponent) => nodes.push(Node::Power(place(&base), place(&exponent))),
                Node::Apply(function, arguments) => {
                    let moved: Vec<NodeId> = arguments.iter().map(place).collect();
                    nodes.push(Node::Apply(function, &moved))
                }
            };
            places.insert(id, new);
        }
        Self { nodes }
    }

    /// The value at a lag, with the further arguments in their order. An argument that is not given is undefined.
    pub fn evaluate<N: Number>(&self, lag: &N, arguments: &[N]) -> N {
        self.evaluate_in(&mut Vec::with_capacity(self.nodes.len()), |symbol| match symbol {
            Symbol::Lag => lag.clone(),
            Symbol::Argument(place) => arguments.get(usize::from(place)).cloned().unwrap_or_else(N::undefined),
        })
    }

    /// The value for any symbols, in memory that can be used again from call to call; what it holds does not matter.
    pub fn evaluate_in<N: Number>(&self, values: &mut Vec<N>, symbol: impl Fn(Symbol) -> N) -> N {
        values.clear();
        for node in self.nodes.nodes() {
            let at = |id: NodeId| &values[id.index()];
            let pair = |operand: &Operand| (operand.inverse, at(operand.node));
            let value = match node {
                Node::Number(value) => N::number(value),
                Node::Symbol(name) => symbol(name),
                Node::Sum(operands) => sum(operands.iter().map(pair)),
                Node::Product(operands) => product(operands.iter().map(pair)),
                Node::Negative(node) => at(node).neg(),
                Node::Power(base, exponent) => at(base).power(at(exponent)),
                Node::Apply(function, arguments) => function.evaluate(arguments.iter().map(|id| at(*id))),
            };
            values.push(value);
        }
        values.last().cloned().unwrap_or_else(N::undefined)
    }

    /// How many operations, numbers and symbols it has.
    pub fn size(&self) -> usize {
        self.nodes.len()
    }

    /// The numbers it contains, in order of evaluation.
    pub fn numbers(&self) -> impl Iterator<Item = f64> {
        self.nodes.nodes().filter_map(|node| match node {
            Node::Number(value) => Some(value),
            _ => None,
        })
    }

    /// Whether its value is a sum of terms in the lag of which one or more are subtracted.
    pub fn subtracts_terms(&self) -> bool {
        let mut in_lag: Vec<bool> = Vec::with_capacity(self.nodes.len());
        let mut negative: Vec<bool> = Vec::with_capacity(self.nodes.len());
        let mut subtracts = false;
        for node in self.nodes.nodes() {
            let lag = |id: NodeId| in_lag.get(id.index()).copied().unwrap_or(false);
            let minus = |id: NodeId| negative.get(id.index()).copied().unwrap_or(false);
            let (has_lag, is_negative) = match node {
                Node::Number(value) => (false, value < 0.0),
                Node::Symbol(symbol) => (symbol == Symbol::Lag, false),
                Node::Sum(operands) => {
                    let terms = || operands.iter().filter(|operand| lag(operand.node));
                    subtracts = terms().count() > 1 && terms().any(|term| term.inverse != minus(term.node));
                    (terms().count() > 0, false)
                }
                Node::Product(operands) => (
                    operands.iter().any(|operand| lag(operand.node)),
                    operands.iter().filter(|operand| minus(operand.node)).count() % 2 == 1,
                ),
                Node::Negative(node) => (lag(node), !minus(node)),
                Node::Power(base, exponent) => (lag(base) || lag(exponent), false),
                Node::Apply(_, arguments) => (arguments.iter().any(|argument| lag(*argument)), false),
            };
            if !matches!(node, Node::Sum(_)) {
                subtracts = false;
            }
            in_lag.push(has_lag);
            negative.push(is_negative);
        }
        subtracts
    }

    /// The symbols it contains, each once, sorted.
    pub fn symbols(&self) -> Vec<Symbol> {
        let symbols: BTreeSet<Symbol> = self
            .nodes
            .nodes()
            .filter_map(|node| match node {
                Node::Symbol(symbol) => Some(symbol),
                _ => None,
            })
            .collect();
        symbols.into_iter().collect()
    }
}

/// The nodes that `root` needs, itself included. Operands have smaller ids, so the largest id left is always finished.
fn reachable(arena: &Arena, root: NodeId) -> BTreeSet<NodeId> {
    let mut waiting = BTreeSet::from([root]);
    let mut found = BTreeSet::new();
    while let Some(id) = waiting.pop_last() {
        match arena.node(id) {
            Node::Number(_) | Node::Symbol(_) => {}
            Node::Sum(operands) | Node::Product(operands) => {
                waiting.extend(operands.iter().map(|operand| operand.node));
            }
            Node::Negative(node) => {
                waiting.insert(node);
            }
            Node::Power(base, exponent) => waiting.extend([base, exponent]),
            Node::Apply(_, arguments) => waiting.extend(arguments),
        }
        found.insert(id);
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::expression::{Function, Series};

    /// exp(-tau / p0) * (1 + tau / p0), beside nodes it does not need.
    fn kernel() -> (Arena, NodeId) {
        let mut arena = Arena::new();
        let unused = arena.symbol(Symbol::Argument(7));
        let lag = arena.symbol(Symbol::Lag);
        let length = arena.symbol(Symbol::Argument(0));
        let ratio = arena.product(&[Operand::direct(lag), Operand::inverse(length)]);
        arena.apply(Function::Sin, &[unused]);
        let minus = arena.negative(ratio);
        let decay = arena.apply(Function::Exp, &[minus]).expect("one argument");
        let one = arena.number(1.0);
        let factor = arena.sum(&[Operand::direct(one), Operand::direct(ratio)]);
        let root = arena.product(&[Operand::direct(decay), Operand::direct(factor)]);
        (arena, root)
    }

    #[test]
    fn only_what_the_root_needs_is_evaluated() {
        let (arena, root) = kernel();
        let tape = Tape::compile(&arena, root);
        assert_eq!(tape.symbols(), [Symbol::Lag, Symbol::Argument(0)]);
        let value = tape.evaluate(&3.0, &[2.0]);
        assert!((value - 2.5 * (-1.5f64).exp()).abs() < 1e-15);
        assert!(tape.evaluate(&3.0, &[]).is_nan());
    }

    #[test]
    fn the_same_tape_runs_over_series() {
        let (arena, root) = kernel();
        let tape = Tape::compile(&arena, root);
        let series = tape.evaluate(&Series::variable(0.0, 5.0), &[Series::constant(2.0)]);
        assert_eq!(series.coefficient(0.0), Some(1.0));
        assert_eq!(series.coefficient(1.0), Some(0.0));
        assert_eq!(series.coefficient(2.0), Some(-0.125));
        assert_eq!(series.coefficient(5.0), None);
    }

    #[test]
    fn a_chain_of_a_hundred_thousand_sums_is_no_trouble() {
        let mut arena = Arena::new();
        let lag = arena.symbol(Symbol::Lag);
        let root = (0..100_000).fold(lag, |sum, _| arena.sum(&[Operand::direct(sum), Operand::direct(lag)]));
        assert_eq!(Tape::compile(&arena, root).evaluate(&1.0, &[]), 100_001.0);
    }
}
