//! Spectra against quadrature, against their own rational forms, and written ones against named ones.

use super::*;
use crate::covariance::kernel::{Beyond, Moment};
use crate::expression::{Arena, Function, NodeId, Operand, Symbol, Tape};
use crate::numerics::quadrature::{Tolerance, to_infinity};
use nalgebra::Complex;

fn named() -> Vec<Spectrum> {
    vec![
        White::new(0.3).expect("valid").into(),
        BandLimited::new(0.3, 0.0, 2.0).expect("valid").into(),
        BandLimited::new(0.3, 1.5, 2.0).expect("valid").into(),
        PiersonMoskowitz::new(6.0, 11.0).expect("valid").into(),
        Jonswap::new(6.0, 11.0, 1.0).expect("valid").into(),
        Jonswap::new(6.0, 11.0, 3.3).expect("valid").into(),
        Jonswap::new(0.1, 0.5, 7.0).expect("valid").into(),
        Kaimal::new(180.0, 22.0).expect("valid").into(),
        VonKarman::new(180.0, 22.0).expect("valid").into(),
        Davenport::new(1200.0, 30.0).expect("valid").into(),
        KanaiTajimi::new(0.02, 15.6, 0.6).expect("valid").into(),
        KanaiTajimi::new(0.02, 15.6, 0.001).expect("valid").into(),
        CloughPenzien::new(0.02, 15.0, 0.6, 1.5, 0.6).expect("valid").into(),
        CloughPenzien::new(0.02, 5.0, 0.2, 5.0, 0.2).expect("valid").into(),
    ]
}

fn value(spectrum: &Spectrum, omega: f64) -> f64 {
    SpectralDensity::density(spectrum, omega).expect("a density").value
}

/// By the general rule, which knows nothing of the closed forms but the grid.
fn by_quadrature(spectrum: &Spectrum, order: u32) -> f64 {
    let grid = spectrum.grid().expect("a grid");
    let integrand = |omega: f64| omega.powi(order as i32) * value(spectrum, omega);
    let integral = match spectrum.tail() {
        Tail::Faster => crate::numerics::quadrature::between(integrand, &grid, Tolerance::relative(1e-12), 100_000),
        _ => to_infinity(integrand, &grid, Tolerance::relative(1e-11), 400_000),
    };
    let integral = integral.expect("a grid that rises");
    assert!(integral.error < 2e-8 * integral.value, "{spectrum}: {integral:?}");
    integral.value
}

#[test]
fn moments_are_integrals_and_infinite_where_the_tail_says_so() {
    for spectrum in named() {
        let exponent = spectrum.tail().exponent();
        for order in [0, 1, 2, 3, 4] {
            match spectrum.moment(order) {
                Moment::Infinite => assert!(f64::from(order) + 1.0 >= exponent, "{spectrum}, order {order}"),
                Moment::Finite { value, error } => {
                    assert!(f64::from(order) + 1.0 < exponent, "{spectrum}, order {order}");
                    assert!(error < 1e-12 * value, "{spectrum}, order {order}");
                    let integral = by_quadrature(&spectrum, order);
                    let miss = (value / integral - 1.0).abs();
                    assert!(miss < 1e-8, "{spectrum}, order {order}: {value} against {integral}");
                }
                other => panic!("{spectrum}, order {order}: {other:?}"),
            }
        }
    }
}

#[test]
fn ends_are_powers() {
    for spectrum in named() {
        let slope = |omega: f64| (value(&spectrum, 1.001 * omega) / value(&spectrum, omega)).ln() / 1.001_f64.ln();
        if let Tail::Power(exponent) = spectrum.tail() {
            assert!(
                (slope(1e9) + exponent).abs() < 1e-4,
                "{spectrum}: {} at infinity",
                slope(1e9)
            );
        } else {
            assert_eq!(value(&spectrum, 1e6), 0.0, "{spectrum}");
        }
        if spectrum.head().is_finite() {
            assert!(
                (slope(1e-6) - spectrum.head()).abs() < 1e-4,
                "{spectrum}: {} at 0",
                slope(1e-6)
            );
        } else {
            assert_eq!(value(&spectrum, 1e-6), 0.0, "{spectrum}");
        }
    }
}

#[test]
fn no_frequency_is_without_a_density() {
    for spectrum in named() {
        for omega in [
            0.0,
            1e-300,
            1e-100,
            1e-10,
            1.0,
            1e10,
            1e100,
            1e300,
            f64::MAX,
            f64::INFINITY,
        ] {
            let density = value(&spectrum, omega);
            assert!(
                density >= 0.0 && density.is_finite(),
                "{spectrum} at {omega}: {density}"
            );
        }
    }
}

#[test]
fn rational_forms_are_the_density() {
    for spectrum in named() {
        let Some(parts) = spectrum.rational() else { continue };
        for omega in [0.0, 0.1, 1.0, 4.9, 5.0, 15.6, 100.0] {
            let distance = |points: &[Complex<f64>]| -> f64 {
                points
                    .iter()
                    .map(|point| (Complex::new(0.0, omega) - point).norm_sqr())
                    .product()
            };
            let sum: f64 = parts
                .iter()
                .map(|part| part.gain * distance(&part.zeros) / distance(&part.poles))
                .sum();
            let density = value(&spectrum, omega);
            assert!(
                (sum - density).abs() <= 1e-12 * density,
                "{spectrum} at {omega}: {sum} against {density}"
            );
        }
    }
}

#[test]
fn sums_and_multiples() {
    let (one, two) = (
        Spectrum::from(PiersonMoskowitz::new(2.0, 12.0).expect("valid")),
        Spectrum::from(Kaimal::new(80.0, 20.0).expect("valid")),
    );
    let sum = Spectrum::sum(vec![one.clone(), two.clone().scaled(4.0).expect("positive")]);
    assert_eq!(sum.tail(), Tail::Power(5.0 / 3.0));
    assert_eq!(sum.head(), 0.0);
    let at = |spectrum: &Spectrum| value(spectrum, 0.7);
    assert!((at(&sum) - at(&one) - 4.0 * at(&two)).abs() < 1e-15);
    assert!(matches!(sum.moment(0), Moment::Finite { value, .. } if (value - 4.25).abs() < 1e-12));
    assert_eq!(sum.moment(2), Moment::Infinite);
    assert!(one.scaled(-1.0).is_err());
}

/// Expressions in the frequency, by hand.
struct Written {
    arena: Arena,
    omega: NodeId,
}

impl Written {
    fn new() -> Self {
        let mut arena = Arena::new();
        let omega = arena.symbol(Symbol::Lag);
        Self { arena, omega }
    }

    /// coefficient * omega^power
    fn power(&mut self, coefficient: f64, power: f64) -> NodeId {
        let (factor, exponent) = (self.arena.number(coefficient), self.arena.number(power));
        let raised = self.arena.power(self.omega, exponent);
        self.times(factor, raised)
    }

    fn times(&mut self, one: NodeId, two: NodeId) -> NodeId {
        self.arena.product(&[Operand::direct(one), Operand::direct(two)])
    }

    fn over(&mut self, one: NodeId, two: NodeId) -> NodeId {
        self.arena.product(&[Operand::direct(one), Operand::inverse(two)])
    }

    fn plus(&mut self, one: NodeId, two: NodeId) -> NodeId {
        self.arena.sum(&[Operand::direct(one), Operand::direct(two)])
    }

    fn number(&mut self, number: f64) -> NodeId {
        self.arena.number(number)
    }

    fn raised(&mut self, base: NodeId, power: f64) -> NodeId {
        let exponent = self.arena.number(power);
        self.arena.power(base, exponent)
    }

    fn apply(&mut self, function: Function, argument: NodeId) -> NodeId {
        self.arena.apply(function, &[argument]).expect("one argument")
    }

    fn spectrum(&self, root: NodeId) -> Result<Spectrum, InvalidSpectrum> {
        User::new("written", Arc::new(Tape::compile(&self.arena, root)), Vec::new()).map(Spectrum::from)
    }
}

fn assert_same(written: &Spectrum, named: &Spectrum) {
    // Exponents of a third are rounded.
    let (a, b) = (written.tail().exponent(), named.tail().exponent());
    assert!((a - b).abs() < 1e-12, "{named}: {a} against {b}");
    assert_eq!(written.head(), named.head(), "{named}");
    for order in [0, 1, 2, 4] {
        match (written.moment(order), named.moment(order)) {
            (Moment::Finite { value: a, error }, Moment::Finite { value: b, .. }) => {
                assert!((a - b).abs() <= 1e-11 * b, "{named}, order {order}: {a} against {b}");
                assert!(
                    (a - b).abs() <= error + 1e-13 * b,
                    "{named}, order {order}: {a} against {b}, error {error}"
                );
            }
            (a, b) => assert_eq!(a, b, "{named}, order {order}"),
        }
    }
    for omega in [1e-80, 1e-8, 0.01, 0.3, 1.0, 3.0, 15.5, 1e3, 1e8, 1e80] {
        let (a, b) = (value(written, omega), value(named, omega));
        assert!((a - b).abs() <= 2e-12 * b, "{named} at {omega}: {a} against {b}");
    }
}

#[test]
fn written_spectra_equal_named_ones() {
    let mut w = Written::new();
    // The form of Pierson and Moskowitz.
    let peak = std::f64::consts::TAU / 11.0;
    let inner = w.power(-1.25 * peak.powi(4), -4.0);
    let fade = w.apply(Function::Exp, inner);
    let start = w.power(0.3125 * 36.0 * peak.powi(4), -5.0);
    let root = w.times(start, fade);
    let sea = PiersonMoskowitz::new(6.0, 11.0).expect("valid").into();
    assert_same(&w.spectrum(root).expect("a spectrum"), &sea);
    // Kaimal's and von Kármán's.
    let time = 180.0 / (std::f64::consts::TAU * 22.0);
    let (one, x) = (w.number(1.0), w.power(6.0 * time, 1.0));
    let sum = w.plus(one, x);
    let (above, below) = (w.number(4.0 * time), w.raised(sum, 5.0 / 3.0));
    let root = w.over(above, below);
    assert_same(
        &w.spectrum(root).expect("a spectrum"),
        &Kaimal::new(180.0, 22.0).expect("valid").into(),
    );
    // Davenport's.
    let time = 1200.0 / (std::f64::consts::TAU * 30.0);
    let (x, square) = (w.power(2.0 / 3.0 * time * time, 1.0), w.power(time * time, 2.0));
    let sum = w.plus(one, square);
    let below = w.raised(sum, 4.0 / 3.0);
    let root = w.over(x, below);
    assert_same(
        &w.spectrum(root).expect("a spectrum"),
        &Davenport::new(1200.0, 30.0).expect("valid").into(),
    );
    // Kanai's and Tajimi's, with a broad and with a very narrow peak.
    for damping in [0.6, 0.001, 1e-6] {
        let (frequency, level) = (15.6_f64, 0.02);
        let width = w.power(4.0 * damping * damping / frequency.powi(2), 2.0);
        let detuning = w.power(-1.0 / frequency.powi(2), 2.0);
        let detuning = w.plus(one, detuning);
        let square = w.raised(detuning, 2.0);
        let (above, below) = (w.plus(one, width), w.plus(square, width));
        let ratio = w.over(above, below);
        let level_node = w.number(level);
        let root = w.times(level_node, ratio);
        let named = KanaiTajimi::new(level, frequency, damping).expect("valid").into();
        let written = w.spectrum(root).expect("a spectrum");
        if damping > 1e-5 {
            assert_same(&written, &named);
        } else if let (Moment::Finite { value: a, .. }, Moment::Finite { value: b, .. }) =
            (written.moment(0), named.moment(0))
        {
            assert!((a / b - 1.0).abs() < 1e-9, "{a} against {b}");
        }
    }
}

#[test]
fn ends_of_written_spectra() {
    let mut w = Written::new();
    // A power alone, and white noise.
    let root = w.power(0.3, -0.5);
    let spectrum = w.spectrum(root).expect("a spectrum");
    assert_eq!((spectrum.head(), spectrum.tail()), (-0.5, Tail::Power(0.5)));
    assert_eq!(spectrum.moment(0), Moment::Infinite);
    let root = w.number(0.3);
    let spectrum = w.spectrum(root).expect("a spectrum");
    assert_eq!((spectrum.head(), spectrum.tail()), (0.0, Tail::Power(0.0)));
    // exp(-omega): lambda_n = n!
    let negative = w.power(-1.0, 1.0);
    let root = w.apply(Function::Exp, negative);
    let spectrum = w.spectrum(root).expect("a spectrum");
    assert_eq!(spectrum.tail(), Tail::Faster);
    for (order, factorial) in [(0, 1.0), (1, 1.0), (2, 2.0), (4, 24.0)] {
        let Moment::Finite { value, .. } = spectrum.moment(order) else {
            panic!("finite")
        };
        assert!((value / factorial - 1.0).abs() < 1e-12, "{order}: {value}");
    }
    // omega^-0.5 exp(-omega): Gamma(n + 1/2).
    let start = w.power(1.0, -0.5);
    let singular = w.times(start, root);
    let spectrum = w.spectrum(singular).expect("a spectrum");
    for (order, gamma) in [(0, 1.772_453_850_905_516), (2, 1.329_340_388_179_137)] {
        let Moment::Finite { value, .. } = spectrum.moment(order) else {
            panic!("finite")
        };
        assert!((value / gamma - 1.0).abs() < 1e-11, "{order}: {value}");
    }
    // A step: flat from 0 to 2 rad/s.
    let (two, minus) = (w.number(2.0), w.power(-1.0, 1.0));
    let difference = w.plus(two, minus);
    let root = w.apply(Function::Step, difference);
    let spectrum = w.spectrum(root).expect("a spectrum");
    let Moment::Finite { value, .. } = spectrum.moment(2) else {
        panic!("finite")
    };
    assert!((value / (8.0 / 3.0) - 1.0).abs() < 1e-12, "{value}");
    // ln(1 + omega)/(omega (1 + omega)^2): a tail with a logarithm; lambda_0 = pi²/6 - 1.
    let (one, omega) = (w.number(1.0), w.power(1.0, 1.0));
    let sum = w.plus(one, omega);
    let (ln, square) = (w.apply(Function::Ln, sum), w.raised(sum, 2.0));
    let below = w.times(omega, square);
    let root = w.over(ln, below);
    let spectrum = w.spectrum(root).expect("a spectrum");
    assert_eq!(spectrum.tail(), Tail::Power(3.0));
    assert_eq!(spectrum.moment(2), Moment::Infinite);
    let Moment::Finite { value, .. } = spectrum.moment(0) else {
        panic!("finite")
    };
    let exact = std::f64::consts::PI.powi(2) / 6.0 - 1.0;
    assert!((value / exact - 1.0).abs() < 1e-11, "{value} against {exact}");
}

#[test]
fn what_is_no_spectrum_is_refused() {
    let mut w = Written::new();
    let one = w.number(1.0);
    // 1 - 1.001 exp(-(omega - 3)²) and a fading factor: negative about 3.
    let (three, omega) = (w.number(-3.0), w.power(1.0, 1.0));
    let away = w.plus(omega, three);
    let square = w.raised(away, 2.0);
    let narrow = w.number(-1e4);
    let exponent = w.times(narrow, square);
    let dip = w.apply(Function::Exp, exponent);
    let factor = w.number(-1.001);
    let dip = w.times(factor, dip);
    let sum = w.plus(one, dip);
    let fall = w.power(-1.0, 1.0);
    let fading = w.apply(Function::Exp, fall);
    let root = w.times(sum, fading);
    match w.spectrum(root) {
        Err(InvalidSpectrum::Negative { frequency, density }) => {
            assert!(
                (frequency - 3.0).abs() < 1e-2 && density < 0.0,
                "{frequency}, {density}"
            );
        }
        other => panic!("{other:?}"),
    }
    let root = w.power(1.0, -1.0);
    assert_eq!(
        w.spectrum(root),
        Err(InvalidSpectrum::InfiniteAtZero { exponent: -1.0 })
    );
    let root = w.number(0.0);
    assert_eq!(w.spectrum(root), Err(InvalidSpectrum::Zero));
    let wave = w.apply(Function::Cos, omega);
    let root = w.times(wave, fading);
    assert!(matches!(
        w.spectrum(root),
        Err(InvalidSpectrum::Unclear { at_infinity: true, .. })
    ));
    let root = w.apply(Function::Ln, away);
    assert!(w.spectrum(root).is_err());
}

#[test]
fn tables_piece_by_piece() {
    let rows = vec![(1.0, 2.0), (2.0, 4.0), (4.0, 0.0)];
    let table = |beyond, interpolation| Tabulated::new("t".to_string(), rows.clone(), beyond, interpolation);
    let spectrum: Spectrum = table(Beyond::Zero, Interpolation::Linear).expect("a table").into();
    // Integrals of omega^n times 2 omega on (1, 2) and 8 - 2 omega on (2, 4).
    for (order, exact) in [(0, 7.0), (1, 14.0 / 3.0 + 32.0 / 3.0), (2, 7.5 + 88.0 / 3.0)] {
        let Moment::Finite { value, .. } = spectrum.moment(order) else {
            panic!("finite")
        };
        assert!((value / exact - 1.0).abs() < 1e-14, "{order}: {value} against {exact}");
    }
    assert_eq!(value(&spectrum, 0.5), 0.0);
    assert_eq!(value(&spectrum, 1.5), 3.0);
    let held: Spectrum = table(Beyond::Hold, Interpolation::Linear).expect("a table").into();
    assert!(matches!(held.moment(0), Moment::Finite { value, .. } if (value - 9.0).abs() < 1e-13));
    assert_eq!(
        table(Beyond::Refuse, Interpolation::Linear),
        Err(InvalidTable::Open { row: 0 })
    );
    assert_eq!(
        table(Beyond::Zero, Interpolation::Logarithmic),
        Err(InvalidTable::NoLogarithm { row: 2 })
    );
    // 8 omega^-3 from 1 to 4, and flat from there to 8.
    let rows = vec![(1.0, 8.0), (4.0, 0.125), (8.0, 0.125)];
    let table = Tabulated::new("t".to_string(), rows, Beyond::Zero, Interpolation::Logarithmic).expect("a table");
    let spectrum = Spectrum::from(table);
    for (order, exact) in [
        (0, 4.0 * (1.0 - 1.0 / 16.0) + 0.5),
        (1, 8.0 * (1.0 - 0.25) + 0.125 * 24.0),
        (2, 8.0 * 4.0_f64.ln() + 0.125 * 448.0 / 3.0),
    ] {
        let Moment::Finite { value, .. } = spectrum.moment(order) else {
            panic!("finite")
        };
        assert!((value / exact - 1.0).abs() < 1e-14, "{order}: {value} against {exact}");
    }
}
