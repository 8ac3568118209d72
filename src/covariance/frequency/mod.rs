//! Moments and covariances over frequency: what a source does not say by the derivatives of a kernel.
//!
//! Over one source a form is the response A(omega), the sum of `a (i omega)^n exp(-i omega d) H(omega)` over its terms, and its
//! one-sided density is |A|² G. Two forms have the cross density conj(A) B G (N. C. Nigam 1983, Introduction to Random
//! Vibrations, ch. 6, from memory). Where G and every H are rational there is a closed form by residues; whatever it does not
//! reach, or not accurately, is integrated; averages of a kernel are also had over lags, and the better number counts.

mod averages;
pub(super) mod coherent;
mod quadrature;
mod rational;
mod response;
pub(super) mod sampled;

use super::form::Term;
use super::kernel::{Beyond, Unavailable};
use super::moments::Moment;
use super::response::{FrequencyResponse, System};
use super::source::Source;
use super::spectral::{SpectralDensity, Tail};
use quadrature::{Cross, ORDERS, Side};
use rational::Closed;
use response::{Response, Smooth, by_delay};

/// The relative error above which a closed form is left for the quadrature.
const CLOSE: f64 = 1e-9;

/// The relative error above which a number counts as not reached.
const REACHED: f64 = 1e-6;

/// The power r with which the slowest response falls at high frequency, as omega^-r.
pub(super) fn fall(terms: &[Term]) -> f64 {
    if terms.iter().all(|term| term.operator.systems.is_empty()) {
        let derivatives = terms.iter().map(|term| term.operator.derivatives).max();
        return -f64::from(derivatives.unwrap_or(0));
    }
    let parts = by_delay(terms);
    parts.iter().map(Smooth::fall).fold(f64::INFINITY, f64::min)
}

/// A table of a frequency response that says nothing at a frequency where the source has something.
pub fn beyond_table<'t>(source: &Source, terms: &'t [Term]) -> Option<&'t FrequencyResponse> {
    let systems = terms.iter().flat_map(|term| term.operator.systems.systems());
    let refusing = systems.filter_map(|system| match system {
        System::Tabulated(table) if table.beyond() == Beyond::Refuse => Some(&**table),
        _ => None,
    });
    refusing
        .into_iter()
        .find(|table| has_content_outside(source.spectral(), table.range()))
}

fn has_content_outside(spectrum: &dyn SpectralDensity, (first, last): (f64, f64)) -> bool {
    let outside = |omega: f64| omega < first || omega > last;
    let (Ok(lines), Ok(grid)) = (spectrum.lines(), spectrum.grid()) else {
        return true;
    };
    if lines.iter().any(|line| outside(line.frequency)) {
        return true;
    }
    if grid.is_empty() {
        return false;
    }
    let just_outside = [first * (1.0 - 1e-9), last * (1.0 + 1e-9)];
    let looked_at = grid.iter().copied().chain(just_outside).filter(|omega| outside(*omega));
    let nothing = |omega: f64| spectrum.density(omega).is_ok_and(|density| density.value == 0.0);
    spectrum.tail() != Tail::Faster || !looked_at.into_iter().all(nothing)
}

/// lambda_0, lambda_1, lambda_2 and lambda_4 of terms over one source.
pub(super) fn moments(source: &Source, terms: &[Term]) -> [Moment; 4] {
    if beyond_table(source, terms).is_some() {
        return [Moment::Unknown; 4];
    }
    let spectrum = source.spectral();
    let over_frequencies = || {
        if spectrum.is_closed() {
            return moments_over(spectrum, source.tail(), terms);
        }
        match source.sampled() {
            Ok(sampled) => moments_over(&*sampled, source.tail(), terms),
            Err(why) => [unavailable(&why); 4],
        }
    };
    let mut found = over_frequencies();
    for (found, order) in found.iter_mut().zip(ORDERS) {
        if order != 1 && *found != Moment::Infinite {
            let over_lags = source
                .kernel()
                .and_then(|kernel| averages::covariance(kernel, terms, terms, 0.0, order));
            *found = better(
                over_lags.map_or(Moment::Unreached, |found| reached(found.into())),
                *found,
            );
        }
    }
    found
}

/// The same over a spectrum and its tail.
fn moments_over(spectrum: &dyn SpectralDensity, of_source: Tail, terms: &[Term]) -> [Moment; 4] {
    let tail = of_source.steeper(2.0 * fall(terms));
    let wanted = [0, 1, 2, 4].map(|order| tail.allows(order));
    let found = by_parts(spectrum, terms, tail, wanted).and_then(|found| {
        let mut found = found;
        let response = Response::new(terms);
        for line in spectrum.lines()? {
            let power = line.power * response.at(line.frequency).norm_sqr();
            for (found, order) in found.iter_mut().zip(ORDERS) {
                *found = found.plus(exactly(power * line.frequency.powi(order)));
            }
        }
        Ok(found)
    });
    match found {
        Ok(found) => std::array::from_fn(|place| {
            if wanted[place] {
                reached(found[place])
            } else {
                Moment::Infinite
            }
        }),
        Err(why) => [unavailable(&why); 4],
    }
}

/// Of the continuous part.
fn by_parts(
    spectrum: &dyn SpectralDensity,
    terms: &[Term],
    tail: Tail,
    wanted: [bool; 4],
) -> Result<[Moment; 4], Unavailable> {
    let side = side(terms);
    let closed = spectrum
        .rational()
        .and_then(|density| rational::moments(&density, &side.by_delay));
    let closed = closed.map(|closed| closed.map(Moment::from));
    let left: [bool; 4] =
        std::array::from_fn(|place| wanted[place] && !closed.is_some_and(|closed| is_close(closed[place])));
    let mut found = closed.unwrap_or([Moment::Unreached; 4]);
    if left.contains(&true) {
        let cross = Cross {
            one: side,
            other: None,
            lag: 0.0,
            exponent: tail.exponent(),
        };
        let integrals = quadrature::integrals(spectrum, &cross, left, [0.0; 4])?;
        for (place, integral) in integrals.into_iter().enumerate().filter(|(place, _)| left[*place]) {
            found[place] = better(found[place], integral);
        }
    }
    Ok(found)
}

/// The covariance of the terms `one` with the terms `other`, all over one source, the latter `lag` seconds later.
pub(super) fn covariance(source: &Source, one: &[Term], other: &[Term], lag: f64) -> Moment {
    if beyond_table(source, one).or(beyond_table(source, other)).is_some() {
        return Moment::Unknown;
    }
    let over_lags = source
        .kernel()
        .and_then(|kernel| averages::covariance(kernel, one, other, lag, 0));
    let spectrum = source.spectral();
    let found = if spectrum.is_closed() {
        covariance_over(spectrum, source.tail(), (one, other), lag)
    } else {
        match source.sampled() {
            Ok(sampled) => covariance_over(&*sampled, source.tail(), (one, other), lag),
            Err(why) => unavailable(&why),
        }
    };
    match found {
        Moment::Infinite => found,
        found => better(over_lags.map_or(Moment::Unreached, Moment::from), found),
    }
}

/// The same over a spectrum and its tail.
fn covariance_over(
    spectrum: &dyn SpectralDensity,
    of_source: Tail,
    (one, other): (&[Term], &[Term]),
    lag: f64,
) -> Moment {
    let tails = [one, other].map(|terms| of_source.steeper(2.0 * fall(terms)));
    // The cross density falls as the root of the product of both.
    let exponent = 0.5 * (tails[0].exponent() + tails[1].exponent());
    if exponent <= 1.0 && !tails.iter().all(|tail| tail.allows(0)) {
        return Moment::Infinite;
    }
    let size = |terms: &[Term], tail: Tail| -> f64 {
        if tail.allows(0) {
            moments_over(spectrum, of_source, terms)[0].value().unwrap_or(0.0)
        } else {
            0.0
        }
    };
    let scale = (size(one, tails[0]) * size(other, tails[1])).sqrt();
    let found = covariance_by_parts(spectrum, (one, other), lag, exponent, scale).and_then(|found| {
        let (a, b) = (Response::new(one), Response::new(other));
        let mut found = found;
        for line in spectrum.lines()? {
            let product = a.at(line.frequency).conj() * b.at(line.frequency);
            let (sine, cosine) = (line.frequency * lag).sin_cos();
            found = found.plus(exactly(line.power * (product.re * cosine - product.im * sine)));
        }
        Ok(found)
    });
    match found {
        Ok(Moment::Finite { value, error }) if error > REACHED * value.abs().max(scale) => Moment::Unreached,
        Ok(found) => found,
        Err(why) => unavailable(&why),
    }
}

fn covariance_by_parts(
    spectrum: &dyn SpectralDensity,
    (one, other): (&[Term], &[Term]),
    lag: f64,
    exponent: f64,
    scale: f64,
) -> Result<Moment, Unavailable> {
    let (one, other) = (side(one), side(other));
    let density = spectrum.rational();
    let closed = density.and_then(|density| rational::covariance(&density, &one.by_delay, &other.by_delay, lag));
    let closed = closed.map(Moment::from);
    if let Some(found @ Moment::Finite { value, error }) = closed
        && error <= CLOSE * value.abs().max(scale)
    {
        return Ok(found);
    }
    let cross = Cross {
        one,
        other: Some(other),
        lag,
        exponent,
    };
    let [integral, ..] = quadrature::integrals(spectrum, &cross, [true, false, false, false], [scale, 0.0, 0.0, 0.0])?;
    Ok(better(closed.unwrap_or(Moment::Unreached), integral))
}

fn side(terms: &[Term]) -> Side<'_> {
    let systems = || terms.iter().flat_map(|term| term.operator.systems.systems());
    Side {
        response: Response::new(terms),
        by_delay: by_delay(terms),
        frequencies: systems().flat_map(System::frequencies).collect(),
        size: terms.len() + systems().count(),
    }
}

impl From<Closed> for Moment {
    fn from(closed: Closed) -> Self {
        if closed.value.is_finite() && closed.error.is_finite() {
            Self::Finite {
                value: closed.value,
                error: closed.error,
            }
        } else {
            Self::Unreached
        }
    }
}

fn is_close(moment: Moment) -> bool {
    matches!(moment, Moment::Finite { value, error } if error <= CLOSE * value.abs())
}

/// The one with the smaller error.
fn better(one: Moment, other: Moment) -> Moment {
    match (one, other) {
        (Moment::Finite { error: a, .. }, Moment::Finite { error: b, .. }) => {
            if a < b {
                one
            } else {
                other
            }
        }
        (one @ Moment::Finite { .. }, Moment::Unreached | Moment::Unknown) => one,
        (_, other) => other,
    }
}

fn exactly(value: f64) -> Moment {
    Moment::Finite {
        value,
        error: 1e-13 * value.abs(),
    }
}

/// The moment, unless its error is too large.
fn reached(moment: Moment) -> Moment {
    match moment {
        Moment::Finite { value, error } if error > REACHED * value.abs() || !value.is_finite() => Moment::Unreached,
        moment => moment,
    }
}

fn unavailable(why: &Unavailable) -> Moment {
    match why {
        // The model itself says nothing there.
        Unavailable::BeyondTable { .. } => Moment::Unknown,
        _ => Moment::Unreached,
    }
}

#[cfg(test)]
mod tests;
