//! Integrals over all lags.

use std::cell::{Cell, RefCell};
use std::f64::consts::PI;

use super::{Estimate, Unavailable};
use crate::numerics::quadrature::{self, Integral, Tolerance};

/// Numbers of integrand values after which an integral is given up, its error stated.
const EVALUATIONS: usize = 400_000;
/// What decays exponentially is gone after so many of its longest times.
const FADED: f64 = 32.0;
/// So many radians of oscillation are integrated one by one.
const RESOLVED: f64 = 3e4;
/// With so many radians over its shortest time, a wave is much faster than the kernel.
const SLOW: f64 = 8.0;
/// What is left of a kernel that has faded, as a share of its variance.
const NOTHING: f64 = 1e-9;
/// Relative accuracy aimed at.
const RELATIVE: f64 = 1e-11;

/// Kernel values that densities without closed form may cost one model, some ten seconds: a model of a thousand responses of
/// such a process ends all the same.
const MOST_VALUES: u64 = 100_000_000;

thread_local! {
    /// Kernel values spent since [`begin`].
    static SPENT: Cell<u64> = const { Cell::new(0) };
}

/// Forgets what has been spent: another model begins.
pub(in crate::covariance) fn begin() {
    SPENT.set(0);
}

/// A function of the lag that may fail, as an integrand: the first failure is kept.
struct Fallible<F> {
    function: F,
    failure: RefCell<Option<Unavailable>>,
}

impl<F: Fn(f64) -> Result<f64, Unavailable>> Fallible<F> {
    fn new(function: F) -> Self {
        Self {
            function,
            failure: RefCell::new(None),
        }
    }

    fn at(&self, lag: f64) -> f64 {
        SPENT.set(SPENT.get() + 1);
        (self.function)(lag).unwrap_or_else(|failure| {
            self.failure.borrow_mut().get_or_insert(failure);
            f64::NAN
        })
    }

    fn check(self) -> Result<(), Unavailable> {
        self.failure.into_inner().map_or(Ok(()), Err)
    }
}

/// An integral as an estimate; what could not be set up has an infinite error.
fn estimate(integral: Option<Integral>) -> Estimate {
    integral.map_or(
        Estimate {
            value: 0.0,
            error: f64::INFINITY,
        },
        |integral| Estimate {
            value: integral.value,
            error: integral.error,
        },
    )
}

/// Lags from `from` that grow fourfold from an eighth of the shortest time to `FADED` longest times, and the kinks.
pub(super) fn lags(from: f64, (short, long): (f64, f64), kinks: &[f64]) -> Vec<f64> {
    let graded = (0..200)
        .map(|power| 0.125 * short * 4.0_f64.powi(power))
        .take_while(|lag| *lag < FADED * long);
    let mut lags: Vec<f64> = graded
        .chain([FADED * long])
        .chain(kinks.iter().copied())
        .filter(|lag| *lag > from)
        .collect();
    lags.push(from);
    lags.sort_by(f64::total_cmp);
    lags.dedup();
    lags
}

/// The integral of f(tau) cos(omega tau) from 0 to infinity.
pub(super) fn cosine(
    f: impl Fn(f64) -> Result<f64, Unavailable>,
    omega: f64,
    times: (f64, f64),
    kinks: &[f64],
) -> Result<Estimate, Unavailable> {
    if SPENT.get() > MOST_VALUES {
        return Ok(estimate(None));
    }
    let variance = f(0.0)?.abs();
    let absolute = 1e-13 * variance * times.0;
    let tolerance = Tolerance {
        absolute,
        relative: RELATIVE,
    };
    let f = Fallible::new(f);
    let mut lags = lags(0.0, times, kinks);
    let sum = if omega == 0.0 {
        estimate(quadrature::to_infinity(|lag| f.at(lag), &lags, tolerance, EVALUATIONS))
    } else {
        let last_kink = kinks.iter().copied().fold(0.0, f64::max);
        let gone = FADED * times.1.max(last_kink);
        let end = (RESOLVED / omega).max(last_kink).min(gone);
        lags.retain(|lag| *lag < end);
        lags.push(end);
        let wave = |lag: f64| f.at(lag) * (omega * lag).cos();
        let head = estimate(quadrature::between(wave, &lags, tolerance, EVALUATIONS));
        let absolute = absolute.max(RELATIVE * head.value.abs());
        let tolerance = Tolerance {
            absolute,
            relative: RELATIVE,
        };
        let swing = swing_beyond(|lag| f.at(lag), end);
        head.plus(if swing == 0.0 {
            estimate(quadrature::oscillating_tail(
                wave,
                end,
                PI / omega,
                tolerance,
                EVALUATIONS,
            ))
        } else {
            // What still swings is not to be extrapolated, and bounded only: where the wave is much faster, by parts; else
            // by its modulus over the time it takes to fade, if it does.
            let span = if omega * times.0 >= SLOW {
                4.0 / omega
            } else if end < gone || swing < NOTHING * variance {
                times.1
            } else {
                f64::INFINITY
            };
            Estimate {
                value: 0.0,
                error: swing * span,
            }
        })
    };
    f.check()?;
    Ok(sum)
}

/// The largest modulus of what swings beyond a lag; 0 for what falls steadily.
fn swing_beyond(f: impl Fn(f64) -> f64, lag: f64) -> f64 {
    let values: Vec<f64> = (0..=PROBES)
        .map(|step| f(lag * (1.0 + f64::from(step) / f64::from(PROBES))))
        .collect();
    let steady = values
        .windows(2)
        .all(|pair| pair[0] * pair[1] >= 0.0 && pair[1].abs() <= pair[0].abs());
    if steady {
        0.0
    } else {
        values.iter().map(|value| value.abs()).fold(0.0, f64::max)
    }
}

/// Lags that are looked at to see whether a kernel still swings.
const PROBES: i32 = 37;

/// The integral of a positive f(tau) / tau^2 between lags; the first must be positive.
pub(super) fn over_square(f: impl Fn(f64) -> Result<f64, Unavailable>, lags: &[f64]) -> Result<Estimate, Unavailable> {
    let f = Fallible::new(f);
    let sum = estimate(quadrature::between(
        |lag| f.at(lag) / (lag * lag),
        lags,
        Tolerance::relative(RELATIVE),
        EVALUATIONS,
    ));
    f.check()?;
    Ok(sum)
}

/// The integral of f(tau) / tau^2 from a positive lag to infinity, to an absolute error.
pub(super) fn over_square_beyond(
    f: impl Fn(f64) -> Result<f64, Unavailable>,
    from: f64,
    absolute: f64,
) -> Result<Estimate, Unavailable> {
    let f = Fallible::new(f);
    let tolerance = Tolerance {
        absolute,
        relative: RELATIVE,
    };
    let integrand = |lag: f64| f.at(lag) / (lag * lag);
    let sum = estimate(quadrature::to_infinity(
        integrand,
        &[from, 2.0 * from],
        tolerance,
        EVALUATIONS,
    ));
    f.check()?;
    Ok(sum)
}
