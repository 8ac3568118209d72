use super::sampled::Sampled;
use super::*;
use crate::covariance::form::{LinearForm, SourceId};
use crate::covariance::kernel::{
    DampedCosine, Estimate, Exponential, Kernel, Line, Matern, Oscillator as OscillatorKernel, SquaredExponential,
};
use crate::covariance::moments::MomentTable;
use crate::covariance::response::{self, Average, FirstOrder, Oscillator};
use crate::covariance::spectral::Rational;
use crate::source::{FileId, Span};
use nalgebra::Complex;
use std::f64::consts::{FRAC_2_PI, PI};
use std::sync::Arc;

/// A rational density by its poles and zeros; `hidden`, it does not say so.
struct Poles {
    rational: Rational,
    hidden: bool,
}

impl Poles {
    fn white(level: f64) -> Self {
        let rational = Rational {
            gain: level,
            zeros: Vec::new(),
            poles: Vec::new(),
        };
        Self {
            rational,
            hidden: false,
        }
    }

    /// level (1 + 4 z² r²)/((1 - r²)² + 4 z² r²), r = omega/w0.
    fn kanai_tajimi(level: f64, frequency: f64, damping: f64) -> Self {
        let ground = Oscillator::new(frequency, damping).unwrap();
        let rational = Rational {
            gain: level * 4.0 * damping * damping * frequency * frequency,
            zeros: vec![Complex::new(-0.5 * frequency / damping, 0.0)],
            poles: System::Oscillator(ground).poles().unwrap(),
        };
        Self {
            rational,
            hidden: false,
        }
    }

    fn hidden(self) -> Self {
        Self { hidden: true, ..self }
    }

    fn moments(&self, form: &LinearForm) -> [f64; 4] {
        moments_over(self, self.tail(), form.terms()).map(known)
    }

    fn covariance(&self, one: &LinearForm, other: &LinearForm, lag: f64) -> f64 {
        known(covariance_over(self, self.tail(), (one.terms(), other.terms()), lag))
    }
}

impl SpectralDensity for Poles {
    fn density(&self, omega: f64) -> Result<Estimate, Unavailable> {
        let product = |roots: &[Complex<f64>]| -> f64 {
            roots
                .iter()
                .map(|root| (Complex::new(0.0, omega) - root).norm_sqr())
                .product()
        };
        let value = self.rational.gain * product(&self.rational.zeros) / product(&self.rational.poles);
        Ok(Estimate { value, error: 0.0 })
    }

    fn is_closed(&self) -> bool {
        true
    }

    fn lines(&self) -> Result<Vec<Line>, Unavailable> {
        Ok(Vec::new())
    }

    fn grid(&self) -> Result<Vec<f64>, Unavailable> {
        let mut grid = vec![0.0];
        for pole in self.rational.poles.iter().filter(|pole| pole.im >= 0.0) {
            let graded = (0..4).map(|k| pole.re * 8f64.powi(k));
            grid.extend(graded.flat_map(|width| [pole.norm() + width, pole.norm() - width]));
        }
        grid.retain(|omega| *omega >= 0.0);
        grid.sort_by(f64::total_cmp);
        Ok(grid)
    }

    fn tail(&self) -> Tail {
        Tail::Power(2.0 * (self.rational.poles.len() as f64 - self.rational.zeros.len() as f64))
    }

    fn head(&self) -> f64 {
        0.0
    }

    fn rational(&self) -> Option<Vec<Rational>> {
        (!self.hidden).then(|| vec![self.rational.clone()])
    }
}

fn known(moment: Moment) -> f64 {
    moment.value().unwrap_or(f64::NAN)
}

fn x() -> LinearForm {
    LinearForm::source(0.0, SourceId(0))
}

fn oscillator(frequency: f64, damping: f64) -> System {
    System::Oscillator(Oscillator::new(frequency, damping).unwrap())
}

fn average(over: f64) -> System {
    System::Average(Average::new(over).unwrap())
}

fn first_order(time_constant: f64) -> System {
    System::FirstOrder(FirstOrder::new(time_constant).unwrap())
}

fn through(form: &LinearForm, system: &System) -> LinearForm {
    form.through(system, 1.0).unwrap()
}

fn sum(parts: &[(f64, &LinearForm)]) -> LinearForm {
    LinearForm::combination(parts.iter().copied())
}

#[track_caller]
fn close(found: f64, expected: f64, tolerance: f64) {
    let same = found == expected || (found / expected - 1.0).abs() <= tolerance;
    assert!(same, "{found} against {expected}: {:e}", found / expected - 1.0);
}

#[track_caller]
fn all_close(found: [f64; 4], expected: [f64; 4], tolerance: f64) {
    for (found, expected) in found.into_iter().zip(expected) {
        close(found, expected, tolerance);
    }
}

/// White noise of the two-sided density S0 through an oscillator: pi S0/(2 z w0³), pi S0/(2 z w0) (any text on random
/// vibration, such as Nigam 1983) and lambda_1 by Vanmarcke (1972), here of the response with static gain 1.
#[test]
fn white_noise_through_an_oscillator() {
    for damping in [1e-6, 1e-3, 0.01, 0.3, 0.95] {
        for frequency in [1e-3, 1.0, 400.0] {
            let response = through(&x(), &oscillator(frequency, damping));
            let variance = PI * frequency / (2.0 * damping);
            let damped = ((1.0_f64 - damping) * (1.0 + damping)).sqrt();
            let first = FRAC_2_PI * damped.atan2(damping) / damped;
            let exact = [
                variance,
                variance * frequency * first,
                variance * frequency * frequency,
                f64::INFINITY,
            ];
            let white = Poles::white(2.0);
            all_close(white.moments(&response), exact, 1e-12);
            all_close(
                white.hidden().moments(&response),
                exact,
                if damping < 1e-5 { 1e-8 } else { 1e-10 },
            );
        }
    }
}

#[test]
fn critical_and_heavy_damping_have_the_same_variances() {
    for damping in [1.0, 1.0 + 1e-9, 2.5, 40.0] {
        let response = through(&x(), &oscillator(3.0, damping));
        let [zeroth, _, second, fourth] = Poles::white(1.0).moments(&response);
        close(zeroth, PI * 3.0 / (4.0 * damping), 1e-9);
        close(second, PI * 27.0 / (4.0 * damping), 1e-9);
        assert_eq!(fourth, f64::INFINITY);
    }
}

/// Der Kiureghian (1980), "Structural response to stationary excitation", J. Eng. Mech. Div. 106: the correlation of two
/// oscillators under white noise.
#[test]
fn two_oscillators_are_correlated_as_published() {
    let white = Poles::white(1.0);
    for ratio in [0.1, 0.5, 0.9, 0.99, 1.0 - 1e-9, 1.0, 1.3, 7.0] {
        for (one, other) in [(0.05, 0.05), (0.001, 0.02), (0.3, 0.01)] {
            let first = through(&x(), &oscillator(ratio * 2.0, one));
            let second = through(&x(), &oscillator(2.0, other));
            let r: f64 = ratio;
            let denominator = (1.0 - r * r).powi(2)
                + 4.0 * one * other * r * (1.0 + r * r)
                + 4.0 * (one * one + other * other) * r * r;
            let published = 8.0 * (one * other * r).sqrt() * (r * one + other) * r / denominator;
            let deviations = (white.moments(&first)[0] * white.moments(&second)[0]).sqrt();
            let found = white.covariance(&first, &second, 0.0) / deviations;
            close(found, published, 1e-10);
            let hidden = Poles::white(1.0).hidden().covariance(&first, &second, 0.0) / deviations;
            assert!((hidden - published).abs() < 1e-9, "{hidden} against {published}");
        }
    }
}

#[test]
fn residues_and_quadrature_agree() {
    let ground = || Poles::kanai_tajimi(1.3, 15.0, 0.6);
    let deck = through(&x(), &oscillator(9.0, 0.02));
    let tower = through(&x(), &oscillator(14.0, 0.001));
    let filtered = through(&through(&x(), &first_order(0.3)), &oscillator(5.0, 1.4));
    let forms = [
        sum(&[(1.0, &deck), (-0.7, &tower)]),
        sum(&[(1.0, &deck), (0.05, &deck.derivative())]),
        sum(&[(1.0, &deck), (-1.0, &deck.delayed(0.4)), (0.2, &tower.delayed(-0.1))]),
        sum(&[(1.0, &filtered), (2.0, &through(&deck, &first_order(2.0)))]),
        deck.derivative(),
    ];
    for (index, form) in forms.iter().enumerate() {
        let (one, other) = (ground().moments(form), ground().hidden().moments(form));
        for (a, b) in one.into_iter().zip(other) {
            assert!(
                a == b || (a / b - 1.0).abs() < 1e-9,
                "form {index}: {one:?} against {other:?}"
            );
        }
    }
    for one in &forms {
        for other in &forms {
            for lag in [0.0, 0.3, -0.8, 5.0] {
                let scale = (ground().moments(one)[0] * ground().moments(other)[0]).sqrt();
                let (a, b) = (
                    ground().covariance(one, other, lag),
                    ground().hidden().covariance(one, other, lag),
                );
                assert!((a - b).abs() < 1e-9 * scale, "{a} against {b} at {lag}, scale {scale}");
                let turned = ground().covariance(other, one, -lag);
                assert!(
                    (a - turned).abs() < 1e-11 * scale,
                    "{a} against {turned} the other way round"
                );
            }
        }
    }
}

#[test]
fn poles_that_meet_keep_their_digits() {
    for apart in [0.0, 1e-12, 1e-7, 1e-4] {
        let form = through(
            &through(&x(), &oscillator(3.0, 0.02)),
            &oscillator(3.0 * (1.0 + apart), 0.02),
        );
        let found = Poles::white(1.0).moments(&form);
        let limit = Poles::white(1.0).hidden().moments(&form);
        all_close(found, limit, 2e-9);
    }
}

/// x'' + ground = -(2 z w0 x' + w0² x): the tails of both cancel, and only together are they as smooth as the right side.
#[test]
fn the_absolute_acceleration_is_as_smooth_as_it_is() {
    let ground = || Poles::kanai_tajimi(1.0, 15.0, 0.6);
    let (frequency, damping) = (6.0, 0.05);
    let relative = x()
        .through(&oscillator(frequency, damping), -1.0 / (frequency * frequency))
        .unwrap();
    let absolute = sum(&[(1.0, &relative.derivative().derivative()), (1.0, &x())]);
    let same = sum(&[
        (-2.0 * damping * frequency, &relative.derivative()),
        (-frequency * frequency, &relative),
    ]);
    let (one, other) = (ground().moments(&absolute), ground().moments(&same));
    assert!(one[2].is_finite() && one[3].is_infinite());
    all_close(one, other, 1e-9);
    all_close(ground().hidden().moments(&absolute), other, 1e-8);
}

fn source_of(kernel: impl Into<Kernel>) -> Source {
    let (place, kernel): (Span, Kernel) = (Span::new(FileId(0), 0, 0), kernel.into());
    Source::new(kernel.to_string(), kernel, place, Vec::new())
}

/// The derivatives of a kernel at lags, and the integrals over frequency.
#[test]
fn kernels_and_spectra_agree() {
    let kernels: Vec<Kernel> = vec![
        SquaredExponential::new(2.0).unwrap().into(),
        Matern::new(2.5, 3.0).unwrap().into(),
        Matern::new(1.8, 0.5).unwrap().into(),
        Exponential::new(2.0).unwrap().into(),
        OscillatorKernel::new(4.0, 0.01).unwrap().into(),
        DampedCosine::new(3.0, 2.0).unwrap().into(),
    ];
    for kernel in kernels {
        let sources = [source_of(kernel)];
        let forms = [
            x(),
            sum(&[(1.0, &x()), (-0.5, &x().delayed(0.7))]),
            sum(&[(2.0, &x()), (1.0, &x().delayed(1.5)), (-1.0, &x().delayed(4.0))]),
            sum(&[(1.0, &x()), (0.3, &x().derivative())]),
        ];
        let table = MomentTable::new(&sources);
        for form in &forms {
            let by_kernel = table.moments(form).lambda.map(known);
            let by_frequency = moments(&sources[0], form.terms()).map(known);
            for (a, b) in by_kernel.into_iter().zip(by_frequency) {
                assert!(
                    a == b || (a / b - 1.0).abs() < 2e-9,
                    "{}: {by_kernel:?} against {by_frequency:?}",
                    sources[0].name
                );
            }
        }
        let (one, other) = (&forms[1], &forms[2]);
        for lag in [0.0, 0.9, -2.0] {
            let (a, b) = (
                known(table.covariance(one, other, lag)),
                known(covariance(&sources[0], one.terms(), other.terms(), lag)),
            );
            assert!((a - b).abs() < 1e-9, "{}: {a} against {b} at {lag}", sources[0].name);
        }
    }
}

/// E. Vanmarcke (1983), Random Fields, ch. 5: variance functions of averages.
#[test]
fn averages_have_the_published_variances() {
    for over in [0.01, 0.3, 1.0, 3.0, 50.0] {
        let averaged = through(&x(), &average(over));
        let variance = |kernel: Kernel| moments(&source_of(kernel), averaged.terms()).map(known);
        let t: f64 = over;
        let exponential = if t < 0.1 {
            // The series, where the closed form cancels.
            (0..12).rev().fold(0.0, |sum, k| 1.0 - t / f64::from(k + 3) * sum)
        } else {
            2.0 * (t - 1.0 + (-t).exp()) / (t * t)
        };
        let found = variance(Exponential::new(1.0).unwrap().into());
        close(found[0], exponential, 1e-9);
        close(found[2], 2.0 * -(-t).exp_m1() / (t * t), 1e-9);
        assert_eq!(found[3], f64::INFINITY);
        let u = t / 2f64.sqrt();
        let bell = (PI.sqrt() * u * (1.0 - libm::erfc(u)) + (-u * u).exp_m1()) / (u * u);
        close(
            variance(SquaredExponential::new(1.0).unwrap().into())[0],
            bell,
            if t < 0.1 { 1e-8 } else { 1e-9 },
        );
    }
}

#[test]
fn a_table_of_an_oscillator_stands_for_it() {
    let (frequency, damping) = (2.0, 0.2);
    let exact = oscillator(frequency, damping);
    let rows: Vec<[f64; 3]> = (0..4000)
        .map(|k| {
            let omega = 0.005 * f64::from(k);
            let (modulus, phase) = exact.transfer(omega).to_polar();
            // Phases as they are often stored: within one turn.
            [omega, modulus, if phase < -2.0 { phase + 2.0 * PI } else { phase }]
        })
        .collect();
    let table = response::FrequencyResponse::new("deck.csv", &rows, Beyond::Zero).unwrap();
    let table = System::Tabulated(Arc::new(table));
    let source = source_of(SquaredExponential::new(0.7).unwrap());
    let by_table = through(&x(), &table);
    let by_formula = through(&x(), &exact);
    let (one, other) = (moments(&source, by_table.terms()), moments(&source, by_formula.terms()));
    for (a, b) in one.into_iter().zip(other) {
        close(known(a), known(b), 1e-4);
    }
    // The phase is that of the oscillator: both nearly cancel.
    let rest = sum(&[(1.0, &by_table), (-1.0, &by_formula)]);
    let left = known(moments(&source, rest.terms())[0]) / known(other[0]);
    assert!(left < 1e-8, "{left}");
}

#[test]
fn a_table_that_refuses_says_nothing_beyond() {
    let rows = [[0.0, 1.0, 0.0], [3.0, 0.5, -1.0]];
    let table = response::FrequencyResponse::new("deck.csv", &rows, Beyond::Refuse).unwrap();
    let form = through(&x(), &System::Tabulated(Arc::new(table)));
    let source = source_of(Matern::new(2.5, 3.0).unwrap());
    assert_eq!(moments(&source, form.terms()), [Moment::Unknown; 4]);
    assert_eq!(beyond_table(&source, form.terms()).unwrap().name(), "deck.csv");
    let band = source_of(crate::covariance::kernel::BandLimited::new(1.0, 2.0).unwrap());
    assert!(beyond_table(&band, form.terms()).is_none());
    assert!(known(moments(&band, form.terms())[0]) > 0.0);
}

#[test]
fn a_long_sum_of_modes_is_one_expansion() {
    let modes: Vec<LinearForm> = (0..200)
        .map(|k| through(&x(), &oscillator(3.0 + 0.37 * f64::from(k), 0.01 + 1e-4 * f64::from(k))))
        .collect();
    let parts: Vec<(f64, &LinearForm)> = modes
        .iter()
        .enumerate()
        .map(|(k, mode)| (1.0 / (1.0 + k as f64), mode))
        .collect();
    let form = sum(&parts);
    let ground = Poles::kanai_tajimi(1.0, 15.0, 0.6);
    let found = ground.moments(&form);
    let quadrature = ground.hidden().moments(&form);
    all_close(found, quadrature, 1e-9);
}

/// A written kernel, whose density is an integral for every frequency, against the same kernel by name.
#[test]
fn a_density_without_closed_form_is_interpolated() {
    struct Slow(Kernel);
    impl SpectralDensity for Slow {
        fn density(&self, omega: f64) -> Result<Estimate, Unavailable> {
            self.0.density(omega)
        }
        fn is_closed(&self) -> bool {
            false
        }
        fn lines(&self) -> Result<Vec<Line>, Unavailable> {
            SpectralDensity::lines(&self.0)
        }
        fn grid(&self) -> Result<Vec<f64>, Unavailable> {
            SpectralDensity::grid(&self.0)
        }
        fn tail(&self) -> Tail {
            SpectralDensity::tail(&self.0)
        }
        fn head(&self) -> f64 {
            SpectralDensity::head(&self.0)
        }
        fn rational(&self) -> Option<Vec<Rational>> {
            None
        }
    }
    let kernels: [Kernel; 3] = [
        SquaredExponential::new(2.0).unwrap().into(),
        Matern::new(2.5, 3.0).unwrap().into(),
        OscillatorKernel::new(4.0, 0.05).unwrap().into(),
    ];
    let forms = [
        through(&x(), &oscillator(1.3, 0.01)),
        sum(&[(1.0, &x()), (-1.0, &through(&x(), &average(3.0)))]),
    ];
    for kernel in kernels {
        let slow = Slow(kernel.clone());
        let sampled = Sampled::new(&slow).unwrap();
        for form in &forms {
            let found = moments_over(&sampled, SpectralDensity::tail(&kernel), form.terms());
            let exact = moments_over(&kernel, SpectralDensity::tail(&kernel), form.terms());
            // lambda_4 of the second lives where the density is too small to be known.
            for (found, exact) in found.into_iter().zip(exact).take(3) {
                let (found, exact) = (known(found), known(exact));
                assert!((found / exact - 1.0).abs() < 1e-7, "{kernel}: {found} against {exact}");
            }
        }
    }
}
