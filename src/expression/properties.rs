//! Properties of random expressions.

use proptest::prelude::*;

use super::{Arena, Function, NodeId, Operand, Series, Symbol, Tape};

/// An expression before it is in an arena.
#[derive(Clone, Debug)]
enum Tree {
    Number(f64),
    Lag,
    Sum(Vec<(bool, Tree)>),
    Product(Vec<(bool, Tree)>),
    Negative(Box<Tree>),
    Power(Box<Tree>, Box<Tree>),
    Apply(Function, Vec<Tree>),
}

impl Tree {
    /// Puts it into an arena with a node for the lag.
    fn build(&self, arena: &mut Arena, lag: NodeId) -> NodeId {
        match self {
            Self::Number(value) => arena.number(*value),
            Self::Lag => lag,
            Self::Sum(trees) => {
                let operands = operands(trees, arena, lag);
                arena.sum(&operands)
            }
            Self::Product(trees) => {
                let operands = operands(trees, arena, lag);
                arena.product(&operands)
            }
            Self::Negative(tree) => {
                let node = tree.build(arena, lag);
                arena.negative(node)
            }
            Self::Power(base, exponent) => {
                let (base, exponent) = (base.build(arena, lag), exponent.build(arena, lag));
                arena.power(base, exponent)
            }
            Self::Apply(function, trees) => {
                let arguments: Vec<NodeId> = trees.iter().map(|tree| tree.build(arena, lag)).collect();
                arena
                    .apply(*function, &arguments)
                    .expect("the number of arguments is right")
            }
        }
    }

    fn tape(&self) -> Tape {
        let mut arena = Arena::new();
        let lag = arena.symbol(Symbol::Lag);
        let root = self.build(&mut arena, lag);
        Tape::compile(&arena, root)
    }
}

fn operands(trees: &[(bool, Tree)], arena: &mut Arena, lag: NodeId) -> Vec<Operand> {
    let operand = |(inverse, tree): &(bool, Tree)| Operand {
        inverse: *inverse,
        node: tree.build(arena, lag),
    };
    trees.iter().map(operand).collect()
}

fn apply(function: Function, tree: Tree) -> Tree {
    Tree::Apply(function, vec![tree])
}

fn quarters() -> impl Strategy<Value = Tree> {
    (-12..=12).prop_map(|quarters| Tree::Number(f64::from(quarters) / 4.0))
}

/// Any expression.
fn any_tree() -> impl Strategy<Value = Tree> {
    prop_oneof![quarters(), Just(Tree::Lag)].prop_recursive(4, 24, 3, |inner| {
        let unary = Function::ALL
            .into_iter()
            .filter(|function| function.arity().contains(&1));
        prop_oneof![
            prop::collection::vec((any::<bool>(), inner.clone()), 1..4).prop_map(Tree::Sum),
            prop::collection::vec((any::<bool>(), inner.clone()), 1..4).prop_map(Tree::Product),
            inner.clone().prop_map(|tree| Tree::Negative(Box::new(tree))),
            (inner.clone(), inner.clone()).prop_map(|(base, exponent)| Tree::Power(base.into(), exponent.into())),
            (prop::sample::select(unary.collect::<Vec<_>>()), inner.clone()).prop_map(|(f, tree)| apply(f, tree)),
            (
                prop::sample::select(vec![Function::Min, Function::Max]),
                prop::collection::vec(inner, 2..4)
            )
                .prop_map(|(function, trees)| Tree::Apply(function, trees)),
        ]
    })
}

/// Expressions in which nothing diverges, so that nothing is smaller than all powers of h and still not zero, and
/// without kinks, which may lie just beside the point.
fn smooth_tree() -> impl Strategy<Value = Tree> {
    use Function::{Acos, Asin, Atan, Cos, Cosh, Erf, Exp, Ln, Sin, Sinh, Sqrt, Tanh};
    let power = |exponent| Tree::Power(Tree::Lag.into(), Tree::Number(exponent).into());
    let fractional = prop::sample::select(vec![0.5, 1.5, 1.9, 2.2]).prop_map(power);
    let logarithmic = prop::sample::select(vec![1.0, 2.0, 2.5])
        .prop_map(move |exponent| Tree::Product(vec![(false, power(exponent)), (false, apply(Ln, Tree::Lag))]));
    let leaf = prop_oneof![3 => quarters(), 4 => Just(Tree::Lag), 1 => fractional, 1 => logarithmic];
    leaf.prop_recursive(4, 16, 2, |inner| {
        let smooth = vec![Exp, Sin, Cos, Atan, Sinh, Cosh, Tanh, Erf, Sqrt, Asin, Acos];
        let square = |tree: Tree| Tree::Power(tree.into(), Tree::Number(2.0).into());
        let two_and = move |tree| Tree::Sum(vec![(false, Tree::Number(2.0)), (false, square(tree))]);
        prop_oneof![
            prop::collection::vec((any::<bool>(), inner.clone()), 2).prop_map(Tree::Sum),
            (inner.clone(), inner.clone()).prop_map(|(one, two)| Tree::Product(vec![(false, one), (false, two)])),
            (inner.clone(), inner.clone())
                .prop_map(move |(one, two)| Tree::Product(vec![(false, one), (true, two_and(two))])),
            (prop::sample::select(smooth), inner.clone()).prop_map(|(f, tree)| apply(f, tree)),
            inner.clone().prop_map(move |tree| apply(Ln, two_and(tree))),
            (inner, prop::sample::select(vec![-1.3, 0.5, 1.7, 3.0]))
                .prop_map(move |(tree, exponent)| Tree::Power(two_and(tree).into(), Tree::Number(exponent).into())),
        ]
    })
}

/// The sizes of the terms at h that `keep` keeps, and their sum with signs.
fn sums(series: &Series, h: f64, keep: impl Fn(f64) -> bool) -> (f64, f64) {
    let terms = series.terms().iter().filter(|term| keep(term.exponent));
    let values = terms.map(|term| term.coefficient * h.powf(term.exponent) * h.ln().powi(term.logs as i32));
    values.fold((0.0, 0.0), |(size, sum), value| (size + value.abs(), sum + value))
}

/// Whether the series and the tape agree to O(h^6) at some h at which the series to O(h^12) has settled; `None` if
/// there is no such h.
fn agrees(tape: &Tape, at: f64) -> Option<bool> {
    let series = Series::expand(at, 6.0, |x| tape.evaluate(x, &[]));
    let long = Series::expand(at, 12.0, |x| tape.evaluate(x, &[]));
    if series.order() < 6.0 || long.order() < 12.0 {
        return None;
    }
    let mut seen = None;
    for h in [0.1, 0.03, 0.01] {
        let (size, _) = sums(&long, h, |_| true);
        let (remainder, _) = sums(&long, h, |exponent| exponent >= 6.0);
        let (last, _) = sums(&long, h, |exponent| (9.0..12.0).contains(&exponent));
        if last > 1e-9 * (1.0 + size) {
            continue;
        }
        let (_, value) = sums(&series, h, |exponent| exponent < 6.0);
        let difference = (tape.evaluate(&(at + h), &[]) - value).abs();
        if difference <= 2.0 * remainder + 1e-8 * (1.0 + size) {
            return Some(true);
        }
        seen = Some(false);
    }
    seen
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(1000))]

    #[test]
    fn folding_is_evaluation(tree in any_tree(), at in -3.0..3.0f64) {
        let mut arena = Arena::new();
        let lag = arena.number(at);
        let root = tree.build(&mut arena, lag);
        let folded = arena.value(root).expect("everything in it is a number");
        let value = tree.tape().evaluate(&at, &[]);
        prop_assert!(folded.to_bits() == value.to_bits() || (folded.is_nan() && value.is_nan()), "{folded} {value}");
    }

    #[test]
    fn the_tape_near_a_point_follows_the_series(tree in smooth_tree(), at in prop::sample::select(vec![0.0, 0.4, 1.3])) {
        prop_assert!(agrees(&tree.tape(), at) != Some(false), "{}", Series::expand(at, 6.0, |x| tree.tape().evaluate(x, &[])));
    }

    /// A higher order only adds terms.
    #[test]
    fn the_order_is_honest(tree in any_tree(), at in prop::sample::select(vec![0.0, 0.4, 1.3])) {
        let tape = tree.tape();
        let [short, long] = [4.0, 7.0].map(|order| tape.evaluate(&Series::variable(at, order), &[]));
        if short.reason().is_some() {
            return Ok(());
        }
        prop_assert!(long.reason().is_none() && long.order() >= short.order(), "{short}\n{long}");
        let difference = super::Number::sub(&short, &long);
        prop_assert!(difference.terms().is_empty(), "{short}\n{long}");
    }
}
