//! What is valid is not refused, what is not is refused by proof.

use super::*;
use crate::covariance::kernel::{Beyond, Tabulated, User};
use crate::expression::{Arena, Function, NodeId, Operand, Symbol, Tape};
use std::sync::Arc;

/// A kernel of an expression in the lag.
fn written(write: impl FnOnce(&mut Arena, NodeId) -> NodeId) -> Kernel {
    let mut arena = Arena::new();
    let lag = arena.symbol(Symbol::Lag);
    let root = write(&mut arena, lag);
    User::new("mine", Arc::new(Tape::compile(&arena, root)), Vec::new()).into()
}

/// exp(-tau^power)
fn stretched(power: f64) -> Kernel {
    written(|arena, lag| {
        let power = arena.number(power);
        let raised = arena.power(lag, power);
        let minus = arena.negative(raised);
        arena.apply(Function::Exp, &[minus]).expect("one argument")
    })
}

fn judge(kernel: &Kernel) -> Validity {
    examine(kernel, &mut Budget::default()).expect("a variance")
}

#[track_caller]
fn refused(kernel: &Kernel) -> (Violation, Witness) {
    let judged = judge(kernel);
    let Validity::Invalid(violation) = judged else {
        panic!("{judged:?}");
    };
    let witness = violation.witness.clone().expect("a witness");
    (*violation, witness)
}

/// exp(-tau^p) is valid for powers up to 2 and no others (I. J. Schoenberg 1938).
#[test]
fn powers_above_two_are_refused_by_three_instants() {
    for power in [0.5, 1.0, 1.7, 2.0] {
        assert!(matches!(judge(&stretched(power)), Validity::Tested(_)), "{power}");
    }
    for power in [2.02, 2.5, 3.0, 8.0] {
        let (violation, witness) = refused(&stretched(power));
        assert_eq!(violation.kind, Kind::Flat, "{power}");
        assert_eq!(witness.weights().len(), 3, "{power}: {witness:?}");
        assert!(matches!(violation.trap, Some(Trap::Stretched { power: found, .. }) if (found - power).abs() < 1e-5));
    }
}

#[test]
fn a_parabola_and_a_box_have_short_witnesses() {
    let parabola = written(|arena, lag| {
        let two = arena.number(2.0);
        let square = arena.power(lag, two);
        let one = arena.number(1.0);
        let zero = arena.number(0.0);
        let falling = arena.sum(&[Operand::direct(one), Operand::inverse(square)]);
        arena.apply(Function::Max, &[falling, zero]).expect("two arguments")
    });
    let (violation, witness) = refused(&parabola);
    assert_eq!(violation.kind, Kind::NegativePower);
    assert!(matches!(violation.trap, Some(Trap::Clipped { .. })));
    assert!(witness.weights().len() <= 4, "{witness:?}");
    let hat = written(|arena, lag| {
        let minus = arena.negative(lag);
        let two = arena.number(2.0);
        let room = arena.sum(&[Operand::direct(two), Operand::direct(minus)]);
        arena.apply(Function::Step, &[room]).expect("one argument")
    });
    let (violation, witness) = refused(&hat);
    assert!(matches!(violation.trap, Some(Trap::Box { .. })));
    assert_eq!(witness.weights().len(), 3, "{witness:?}");
}

/// The table of the reference page, to two decimals.
#[test]
fn a_rounded_table_is_accepted() {
    let rows = [
        (0.0, 1.0),
        (2.0, 0.93),
        (4.0, 0.75),
        (6.0, 0.52),
        (8.0, 0.31),
        (10.0, 0.16),
        (14.0, 0.03),
        (20.0, 0.0),
    ];
    let table = Tabulated::new("gusts.csv", &rows, Beyond::Zero).expect("a table");
    assert_eq!(table.resolution(), 0.005);
    let judged = judge(&table.into());
    assert!(matches!(judged, Validity::Tested(_)), "{judged:?}");
}

#[test]
fn a_table_that_ends_above_zero_jumps() {
    let rows = [(0.0, 1.0), (1.0, 0.8), (2.0, 0.5), (3.0, 0.3)];
    let table = |beyond| Kernel::from(Tabulated::new("short.csv", &rows, beyond).expect("a table"));
    let (violation, witness) = refused(&table(Beyond::Zero));
    assert!(matches!(violation.kind, Kind::JumpAtEnd { lag: 3.0, to: 0.0, .. }));
    assert_eq!(witness.weights(), [1, -4, 4]);
    assert!(matches!(judge(&table(Beyond::Hold)), Validity::Tested(_)));
    assert!(matches!(judge(&table(Beyond::Refuse)), Validity::Tested(_)));
}

/// A wave that never fades beside one that does.
#[test]
fn lines_are_no_negative_power() {
    let kernel = written(|arena, lag| {
        let (half, minus_half) = (arena.number(0.5), arena.number(-0.5));
        let frequency = arena.number(7.3);
        let angle = arena.product(&[Operand::direct(lag), Operand::direct(frequency)]);
        let wave = arena.apply(Function::Cos, &[angle]).expect("one argument");
        let two = arena.number(2.0);
        let square = arena.power(lag, two);
        let negative = arena.product(&[Operand::direct(minus_half), Operand::direct(square)]);
        let fading = arena.apply(Function::Exp, &[negative]).expect("one argument");
        let first = arena.product(&[Operand::direct(half), Operand::direct(wave)]);
        let second = arena.product(&[Operand::direct(half), Operand::direct(fading)]);
        arena.sum(&[Operand::direct(first), Operand::direct(second)])
    });
    let judged = judge(&kernel);
    assert!(matches!(judged, Validity::Tested(_)), "{judged:?}");
}
