//! Forms over sources that are coherent with each other.
//!
//! Over a group of sources a form has the density `sum over s, t of gamma_st sqrt(G_s G_t) Re[conj(A_s) A_t]`, `gamma_ss`
//! being 1. Where nothing is delayed against anything else this is one integral. Else the waves of each pair of sources
//! are integrated by themselves.

use super::super::coherence::{Coherence, Coherences};
use super::super::form::{SourceId, Term};
use super::super::kernel::{Estimate, Line, Unavailable};
use super::super::moments::Moment;
use super::super::source::Source;
use super::super::spectral::{Rational, SpectralDensity, Tail};
use super::quadrature::{self, Cross, ORDERS};
use super::response::{Response, by_delay};
use super::sampled::Sampled;
use super::{Side, fall, moments_over, side};
use crate::covariance::form::LinearForm;
use std::rc::Rc;

/// Pairs of sources of one form whose waves are integrated one by one.
const MOST_PAIRS: usize = 2_000;

/// A source of a group with the terms of a form over it.
pub(in crate::covariance) struct Member<'t> {
    pub(in crate::covariance) id: SourceId,
    pub(in crate::covariance) source: &'t Source,
    pub(in crate::covariance) terms: &'t [Term],
}

/// The spectrum of a member, looked at once where each value is an integral.
enum Known<'t> {
    Closed(&'t dyn SpectralDensity),
    Sampled(Rc<Sampled>),
}

impl<'t> Known<'t> {
    fn new(member: &Member<'t>) -> Result<Self, Unavailable> {
        let spectrum = member.source.spectral();
        if spectrum.is_closed() {
            return Ok(Self::Closed(spectrum));
        }
        Ok(Self::Sampled(member.source.sampled()?))
    }

    fn spectral(&self) -> &dyn SpectralDensity {
        match self {
            Self::Closed(spectrum) => *spectrum,
            Self::Sampled(sampled) => &**sampled,
        }
    }
}

/// lambda_0, lambda_1, lambda_2 and lambda_4 of a form over a group of sources. `own` are those of each source by itself.
pub(in crate::covariance) fn moments(
    members: &[Member<'_>],
    coherences: &Coherences,
    own: impl Fn(&Member<'_>) -> [Moment; 4],
) -> [Moment; 4] {
    let known: Result<Vec<Known<'_>>, Unavailable> = members.iter().map(Known::new).collect();
    let known = match known {
        Ok(known) => known,
        Err(why) => return [super::unavailable(&why); 4],
    };
    let all: Vec<Term> = members.iter().flat_map(|member| member.terms.iter().cloned()).collect();
    if by_delay(&all).len() == 1 {
        return together(members, &known, coherences);
    }
    let own: Vec<[Moment; 4]> = members.iter().map(own).collect();
    let mut sum = own.iter().fold([ZERO; 4], plus);
    if members.len() * members.len() > 2 * MOST_PAIRS {
        return [Moment::Unreached; 4];
    }
    let all: Vec<((&Member<'_>, &Known<'_>), &[Moment; 4])> = members.iter().zip(&known).zip(&own).collect();
    for (index, (one, own)) in all.iter().enumerate() {
        for (other, its_own) in &all[index + 1..] {
            if let Some(coherence) = coherences.between(one.0.id, other.0.id) {
                let scales = std::array::from_fn(|place| {
                    let size = |moment: &Moment| moment.value().filter(|size| size.is_finite()).unwrap_or(0.0);
                    (size(&own[place]) * size(&its_own[place])).sqrt()
                });
                let pair = cross(*one, *other, coherence, 0.0, scales);
                sum = plus(sum, &pair.map(|moment| moment.times(2.0)));
            }
        }
    }
    sum
}

/// The covariance of terms over one source with terms over another, the latter `lag` seconds later.
pub(in crate::covariance) fn covariance(
    one: &Member<'_>,
    other: &Member<'_>,
    coherence: Coherence,
    lag: f64,
    scale: f64,
) -> Moment {
    match (Known::new(one), Known::new(other)) {
        (Ok(a), Ok(b)) => cross((one, &a), (other, &b), coherence, lag, [scale, 0.0, 0.0, 0.0])[0],
        (Err(why), _) | (_, Err(why)) => super::unavailable(&why),
    }
}

const ZERO: Moment = Moment::Finite { value: 0.0, error: 0.0 };

fn plus(sum: [Moment; 4], part: &[Moment; 4]) -> [Moment; 4] {
    std::array::from_fn(|place| sum[place].plus(part[place]))
}

/// The moments of the cross density of two members; those that do not exist are infinite.
fn cross(
    (one, its): (&Member<'_>, &Known<'_>),
    (other, others): (&Member<'_>, &Known<'_>),
    coherence: Coherence,
    lag: f64,
    scales: [f64; 4],
) -> [Moment; 4] {
    let density = CrossDensity {
        one: its.spectral(),
        other: others.spectral(),
        coherence,
    };
    let tails = [one, other].map(|member| member.source.tail().steeper(2.0 * fall(member.terms)));
    let exponent = match coherence {
        Coherence::Decaying(rate) if rate > 0.0 => f64::INFINITY,
        _ => 0.5 * (tails[0].exponent() + tails[1].exponent()),
    };
    let sign = match coherence {
        Coherence::Constant(value) if value < 0.0 => -1.0,
        _ => 1.0,
    };
    let wanted = ORDERS.map(|order| f64::from(order) + 1.0 < exponent);
    let integrand = Cross {
        one: side(one.terms),
        other: Some(side(other.terms)),
        lag,
        exponent,
    };
    match quadrature::integrals(&density, &integrand, wanted, scales) {
        Ok(found) => std::array::from_fn(|place| {
            if wanted[place] {
                found[place].times(sign)
            } else {
                Moment::Infinite
            }
        }),
        Err(why) => [super::unavailable(&why); 4],
    }
}

/// The modulus of gamma sqrt(G H).
struct CrossDensity<'a> {
    one: &'a dyn SpectralDensity,
    other: &'a dyn SpectralDensity,
    coherence: Coherence,
}

impl SpectralDensity for CrossDensity<'_> {
    fn density(&self, omega: f64) -> Result<Estimate, Unavailable> {
        let (one, other) = (self.one.density(omega)?, self.other.density(omega)?);
        let value = self.coherence.at(omega).abs() * one.value.sqrt() * other.value.sqrt();
        let share = |part: Estimate| {
            if part.value > 0.0 {
                0.5 * part.error / part.value
            } else {
                0.0
            }
        };
        Ok(Estimate {
            value,
            error: value * (share(one) + share(other)),
        })
    }

    fn is_closed(&self) -> bool {
        self.one.is_closed() && self.other.is_closed()
    }

    fn lines(&self) -> Result<Vec<Line>, Unavailable> {
        Ok(Vec::new())
    }

    fn grid(&self) -> Result<Vec<f64>, Unavailable> {
        let grids = [self.one.grid()?, self.other.grid()?].concat();
        Ok(sorted([grids, of_decay(self.coherence)].concat()))
    }

    fn tail(&self) -> Tail {
        Tail::Power(0.5 * (self.one.tail().exponent() + self.other.tail().exponent()))
    }

    fn head(&self) -> f64 {
        0.5 * (self.one.head() + self.other.head())
    }

    fn rational(&self) -> Option<Vec<Rational>> {
        None
    }
}

fn together(members: &[Member<'_>], known: &[Known<'_>], coherences: &Coherences) -> [Moment; 4] {
    let tail = members
        .iter()
        .map(|member| member.source.tail().steeper(2.0 * fall(member.terms)))
        .fold(Tail::Faster, Tail::or);
    let density = Together {
        members: members
            .iter()
            .zip(known)
            .map(|(member, known)| (known.spectral(), Response::new(member.terms), side(member.terms)))
            .collect(),
        pairs: pairs(members, coherences),
        tail,
    };
    let identity = LinearForm::source(0.0, SourceId(0));
    moments_over(&density, tail, identity.terms())
}

/// The coherences of members by their index, each pair once.
fn pairs(members: &[Member<'_>], coherences: &Coherences) -> Vec<(usize, usize, Coherence)> {
    let mut pairs = Vec::new();
    for (index, one) in members.iter().enumerate() {
        for (later, other) in members.iter().enumerate().skip(index + 1) {
            if let Some(coherence) = coherences.between(one.id, other.id) {
                pairs.push((index, later, coherence));
            }
        }
    }
    pairs
}

/// The density of a form over a group, responses included.
struct Together<'a> {
    members: Vec<(&'a dyn SpectralDensity, Response<'a>, Side<'a>)>,
    pairs: Vec<(usize, usize, Coherence)>,
    tail: Tail,
}

impl SpectralDensity for Together<'_> {
    fn density(&self, omega: f64) -> Result<Estimate, Unavailable> {
        let mut sum = Estimate { value: 0.0, error: 0.0 };
        let mut waves = Vec::with_capacity(self.members.len());
        for (density, response, _) in &self.members {
            let density = density.density(omega)?;
            let response = response.at(omega);
            let size = response.norm_sqr();
            sum.value += density.value * size;
            sum.error += density.error * size;
            waves.push(response * density.value.max(0.0).sqrt());
        }
        for (one, other, coherence) in &self.pairs {
            let (a, b) = (waves[*one], waves[*other]);
            sum.value += 2.0 * coherence.at(omega) * (a.re * b.re + a.im * b.im);
        }
        // Errors of densities that are coherent add up as the waves do, at worst.
        sum.error *= self.members.len() as f64;
        Ok(Estimate {
            value: sum.value.max(0.0),
            ..sum
        })
    }

    fn is_closed(&self) -> bool {
        self.members.iter().all(|(density, ..)| density.is_closed())
    }

    fn lines(&self) -> Result<Vec<Line>, Unavailable> {
        Ok(Vec::new())
    }

    fn grid(&self) -> Result<Vec<f64>, Unavailable> {
        let mut grid = Vec::new();
        for (density, _, side) in &self.members {
            grid.extend(density.grid()?);
            grid.extend(side.frequencies.iter().copied());
        }
        // Decays of points lie close together: the outermost stand for all.
        let of_decays = self.pairs.iter().flat_map(|(_, _, coherence)| of_decay(*coherence));
        let (least, most) = of_decays.fold((f64::INFINITY, 0.0_f64), |(least, most), at| {
            (least.min(at), most.max(at))
        });
        let graded = std::iter::successors(Some(least), |at| Some(at * 4.0)).take_while(|at| *at <= most);
        grid.extend(graded.take(MOST_GRADES));
        Ok(sorted(grid))
    }

    fn tail(&self) -> Tail {
        self.tail
    }

    fn head(&self) -> f64 {
        self.members
            .iter()
            .map(|(density, ..)| density.head())
            .fold(f64::INFINITY, f64::min)
    }

    fn rational(&self) -> Option<Vec<Rational>> {
        None
    }
}

/// Breakpoints between the fastest and the slowest decay.
const MOST_GRADES: usize = 100;

/// Frequencies about which a coherence falls.
fn of_decay(coherence: Coherence) -> Vec<f64> {
    match coherence {
        Coherence::Decaying(rate) if rate > 0.0 => [0.125, 1.0, 8.0, 64.0].map(|share| share / rate).to_vec(),
        _ => Vec::new(),
    }
}

fn sorted(mut frequencies: Vec<f64>) -> Vec<f64> {
    frequencies.retain(|omega| omega.is_finite());
    frequencies.sort_by(f64::total_cmp);
    frequencies.dedup();
    frequencies
}
