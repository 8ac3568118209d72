//! What the terms of a form over one source do to each frequency.

use super::super::form::Term;
use super::super::response::System;
use nalgebra::Complex;

/// A(omega), the sum of `a (i omega)^n exp(-i omega d) H(omega)` over terms.
pub(super) struct Response<'t> {
    terms: &'t [Term],
}

impl<'t> Response<'t> {
    pub(super) fn new(terms: &'t [Term]) -> Self {
        Self { terms }
    }

    /// At a finite omega >= 0.
    pub(super) fn at(&self, omega: f64) -> Complex<f64> {
        self.terms.iter().fold(Complex::new(0.0, 0.0), |sum, term| {
            let operator = &term.operator;
            let size = term.coefficient() * omega.powi(operator.derivatives as i32);
            let turned = quarter_turns(operator.systems.transfer(omega), operator.derivatives as i32);
            sum + if operator.delay == 0.0 {
                turned * size
            } else {
                turned * Complex::from_polar(size, -omega * operator.delay)
            }
        })
    }
}

/// Times i^n.
fn quarter_turns(value: Complex<f64>, n: i32) -> Complex<f64> {
    match n.rem_euclid(4) {
        0 => value,
        1 => Complex::new(-value.im, value.re),
        2 => -value,
        _ => Complex::new(value.im, -value.re),
    }
}

/// The part of A that comes after one delay, without that delay: a function of omega that does not oscillate beyond the
/// frequencies of its systems. Averages are taken apart for it: (1 - exp(-i omega T))/(i omega T) is an integral of two
/// instants.
pub(super) struct Smooth<'t> {
    /// The delay in s.
    pub(super) delay: f64,
    parts: Vec<Part<'t>>,
}

struct Part<'t> {
    coefficient: f64,
    /// Of i omega; negative where averages integrate more than the term is differentiated.
    power: i32,
    systems: Vec<&'t System>,
}

/// The terms by delay, rising.
pub(super) fn by_delay(terms: &[Term]) -> Vec<Smooth<'_>> {
    let mut parts: Vec<(f64, Part<'_>)> = Vec::with_capacity(terms.len());
    for term in terms {
        let operator = &term.operator;
        let is_average = |system: &&System| matches!(system, System::Average(_));
        let (averages, systems): (Vec<&System>, Vec<&System>) = operator.systems.systems().iter().partition(is_average);
        let mut instants = vec![(operator.delay, term.coefficient())];
        for average in &averages {
            let System::Average(average) = average else { continue };
            let share = 1.0 / average.over();
            let split =
                |(delay, weight): (f64, f64)| [(delay, weight * share), (delay + average.over(), -weight * share)];
            instants = instants.into_iter().flat_map(split).collect();
        }
        let power = operator.derivatives as i32 - averages.len() as i32;
        parts.extend(instants.into_iter().map(|(delay, coefficient)| {
            let systems = systems.clone();
            (
                delay,
                Part {
                    coefficient,
                    power,
                    systems,
                },
            )
        }));
    }
    parts.sort_by(|one, other| one.0.total_cmp(&other.0));
    let mut found: Vec<Smooth<'_>> = Vec::new();
    for (delay, part) in parts {
        match found.last_mut() {
            Some(last) if near(last.delay, delay) => last.parts.push(part),
            _ => found.push(Smooth {
                delay,
                parts: vec![part],
            }),
        }
    }
    found
}

/// Whether two instants are one but for rounding.
pub(super) fn near(one: f64, other: f64) -> bool {
    (one - other).abs() <= 8.0 * f64::EPSILON * one.abs().max(other.abs())
}

impl Smooth<'_> {
    /// At a finite omega > 0.
    pub(super) fn at(&self, omega: f64) -> Complex<f64> {
        self.parts.iter().fold(Complex::new(0.0, 0.0), |sum, part| {
            let size = part.coefficient * omega.powi(part.power);
            let systems = part.systems.iter();
            let transfer = systems.fold(Complex::new(size, 0.0), |product, system| {
                product * system.transfer(omega)
            });
            sum + quarter_turns(transfer, part.power)
        })
    }

    /// The coefficient, the power of i omega and the systems of each part.
    pub(super) fn parts(&self) -> impl Iterator<Item = (f64, i32, &[&System])> {
        self.parts
            .iter()
            .map(|part| (part.coefficient, part.power, part.systems.as_slice()))
    }

    /// The power r with which its modulus falls at high frequency, as omega^-r: the first power of 1/omega whose
    /// coefficients do not cancel.
    pub(super) fn fall(&self) -> f64 {
        let expansions: Vec<Expansion> = self.parts.iter().filter_map(Part::expansion).collect();
        let Some(first) = expansions.iter().map(|expansion| expansion.order).min() else {
            return f64::INFINITY;
        };
        for ahead in 0..FOLLOWED as i32 {
            let coefficients = expansions.iter().filter_map(|expansion| {
                expansion
                    .coefficients
                    .get(usize::try_from(first + ahead - expansion.order).ok()?)
            });
            let (sum, size) = coefficients.fold((Complex::new(0.0, 0.0), 0.0), |(sum, size), coefficient| {
                (sum + coefficient, size + coefficient.norm())
            });
            let cancelled = sum.norm() <= CANCELLED * size;
            if !cancelled {
                return f64::from(first + ahead);
            }
        }
        f64::from(first + FOLLOWED as i32)
    }
}

/// Powers of 1/omega that are followed.
const FOLLOWED: usize = 8;

/// A sum of coefficients so much smaller than their sizes is 0 but for rounding.
const CANCELLED: f64 = 1e-12;

/// A(s) = sum of c_k s^-(order + k) for large s.
struct Expansion {
    order: i32,
    coefficients: [Complex<f64>; FOLLOWED],
}

impl Part<'_> {
    /// `None` where the part is 0 beyond some frequency.
    fn expansion(&self) -> Option<Expansion> {
        let mut order = -self.power;
        let mut coefficients = [Complex::new(0.0, 0.0); FOLLOWED];
        coefficients[0] = Complex::new(self.coefficient, 0.0);
        for system in &self.systems {
            match (system.poles(), *system) {
                // -p/(s - p) = -(p/s) (1 + p/s + p²/s² + ...)
                (Some(poles), _) => {
                    for pole in poles {
                        order += 1;
                        let mut before = Complex::new(0.0, 0.0);
                        for coefficient in &mut coefficients {
                            before = *coefficient + before * pole;
                            *coefficient = before * -pole;
                        }
                    }
                }
                (None, system) if system.roll_off() == f64::INFINITY => return None,
                (None, System::Tabulated(table)) => {
                    let held = system.transfer(2.0 * table.range().1);
                    coefficients.iter_mut().for_each(|coefficient| *coefficient *= held);
                }
                (None, _) => {}
            }
        }
        Some(Expansion { order, coefficients })
    }
}
