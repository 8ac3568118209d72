//! Whether a kernel is a covariance function.
//!
//! One that is made of named families by sums, products and positive factors is by construction. One that was written
//! out or tabulated is tested by Bochner's theorem (S. Bochner 1932, Vorlesungen über Fouriersche Integrale, §20): the value at
//! lag zero bounds all others, and the spectral density is nowhere negative. It is tested numerically, to a resolution that
//! is stated, and **not** proven; but what is refused is refused by proof: a [`Witness`], which a reader can check by
//! hand. Where negative power is seen and no witness is found, the kernel is not refused, and what was seen is stated.
//!
//! A table is judged as data: at its own rows, to half their last digit, which is what rounding leaves open. It is refused
//! if no covariance function whatever could have been rounded to it. Between its rows its spline is one guess of many.

mod decimal;
mod scan;
mod search;
mod shape;
mod start;
mod witness;

#[cfg(test)]
mod tests;

pub use scan::NegativePower;
pub use shape::Trap;
pub use witness::Witness;

use super::kernel::{Kernel, Unavailable};
use decimal::Decimal;
use search::Search;
use start::Start;

/// What is known of a kernel.
#[derive(Clone, Debug, PartialEq)]
pub enum Validity {
    /// It is a covariance function by construction.
    ByConstruction,
    /// Nothing speaks against it.
    Tested(Bounds),
    /// Negative power was seen, but by so little that it could not be proven.
    Undecided(Bounds, NegativePower),
    /// There was no time left to test it.
    Untested,
    /// It is none.
    Invalid(Box<Violation>),
}

/// The range of lags and frequencies that a test looked at.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Bounds {
    /// The shortest step between lags, in s.
    pub finest: f64,
    /// The longest lag, in s.
    pub longest: f64,
    /// The half width of the bands of frequency that were kept apart, as a share of the frequency.
    pub share: f64,
}

/// Why a kernel is no covariance function.
#[derive(Clone, Debug, PartialEq)]
pub struct Violation {
    /// What is wrong.
    pub kind: Kind,
    /// The proof. There is none for a jump at lag zero, which is the limit of covariance functions.
    pub witness: Option<Witness>,
    /// The negative power, where it was seen.
    pub power: Option<NegativePower>,
    /// What it is, where that is well known.
    pub trap: Option<Trap>,
    /// Half of the last digit of its tables, where there are any.
    pub resolution: Option<f64>,
}

/// What is wrong with a kernel.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Kind {
    /// It has no value.
    NoValue {
        /// The lag, in s.
        lag: f64,
    },
    /// It is larger than at lag zero.
    TooLarge {
        /// The lag, in s.
        lag: f64,
        /// How many times as large, with its sign.
        ratio: f64,
    },
    /// It jumps at lag zero.
    JumpAtZero {
        /// To which share of the variance.
        share: f64,
    },
    /// It is flatter at lag zero than tau².
    Flat,
    /// A table jumps at its last lag.
    JumpAtEnd {
        /// The lag, in s.
        lag: f64,
        /// From this share of the variance.
        from: f64,
        /// To this one.
        to: f64,
    },
    /// Its spectrum is negative somewhere.
    NegativePower,
}

impl Bounds {
    /// The highest angular frequency that its lags show, in rad/s.
    pub fn highest(&self) -> f64 {
        std::f64::consts::PI / self.finest
    }

    /// The half width of the narrowest band of frequencies that was kept apart, in rad/s.
    pub fn resolution(&self) -> f64 {
        scan::CUT / self.longest
    }

    /// Samples at even steps, of which the next ones are `stride` times as long.
    fn include(&mut self, step: f64, samples: usize, stride: f64) {
        let end = step * (samples - 1) as f64;
        let highest = std::f64::consts::PI / step;
        self.share = self.share.max(stride * scan::CUT / end / highest);
        self.finest = if self.finest == 0.0 {
            step
        } else {
            self.finest.min(step)
        };
        self.longest = self.longest.max(end);
    }
}

/// What tests may cost together.
#[derive(Clone, Copy, Debug)]
pub struct Budget {
    operations: u64,
}

impl Default for Budget {
    fn default() -> Self {
        /// Operations of expressions: about a second, or 500 kernels of usual length.
        const OPERATIONS: u64 = 40_000_000;
        Self { operations: OPERATIONS }
    }
}

impl Budget {
    /// Takes what a test will cost, or nothing where it is not there.
    fn take(&mut self, operations: u64) -> bool {
        let enough = operations <= self.operations;
        if enough {
            self.operations -= operations;
        }
        enough
    }
}

/// What is known of a kernel that has a positive value at lag zero. Its scale does not matter. Fails if it has none there.
pub fn examine(kernel: &Kernel, budget: &mut Budget) -> Result<Validity, Unavailable> {
    if kernel.is_valid_by_construction() {
        return Ok(Validity::ByConstruction);
    }
    let variance = kernel.value(0.0)?;
    let times = times(kernel, variance);
    let (steps, samples) = scan::plan(kernel, times);
    let of_rows = kernel.rows().map_or(0, |_| ROWS_COST);
    let work = kernel.operations().saturating_mul((steps.len() * samples) as u64);
    let work = work.saturating_add(of_rows);
    let affordable = budget.take(work);
    let scan = if affordable {
        scan::scan(kernel, variance, times)
    } else {
        scan::Scan::default()
    };
    let too_large = larger_than_at_zero(kernel, variance, times).or(scan.too_large);
    if let Some(lag) = without_value(kernel, times)
        && too_large.is_none_or(|(large, _)| large > lag)
    {
        return Ok(Validity::invalid(Kind::NoValue { lag }));
    }
    let search = Search::new(kernel, variance);
    let start = Start::fault(kernel, variance, probing_lags(times));
    let jump = jump_of_table(kernel, variance);
    let power = scan.negative.iter().copied().reduce(deeper);
    let suspected = too_large.is_some() || power.is_some() || affordable && search.rows_contradict();
    if let Some(Start::Jump(share)) = start
        && too_large.is_none()
    {
        return Ok(Validity::invalid(Kind::JumpAtZero { share }));
    }
    let witness = jump
        .and_then(|jump| proof_of_jump(kernel, jump))
        .or_else(|| {
            // Looking for a proof costs several times what the scan did.
            let look = (suspected || start.is_some()) && budget.take(work.saturating_mul(4).min(DEAREST_SEARCH));
            look.then(|| search.run(times, &scan.negative)).flatten()
        })
        .or_else(|| too_large.and_then(|(lag, ratio)| proof_of_size(kernel, lag, ratio)));
    let kind = match (too_large, start, jump, &witness) {
        (_, _, Some(kind), _) => kind,
        (Some((lag, ratio)), _, _, Some(_)) => Kind::TooLarge { lag, ratio },
        // That its derivative would have no variance is a proof as well.
        (_, Some(Start::Flat), ..) => Kind::Flat,
        (.., Some(_)) => Kind::NegativePower,
        (.., None) => {
            return Ok(match power {
                Some(power) => Validity::Undecided(scan.bounds, power),
                None if affordable && scan.bounds.finest > 0.0 => Validity::Tested(scan.bounds),
                None => Validity::Untested,
            });
        }
    };
    Ok(Validity::Invalid(Box::new(Violation {
        kind,
        witness,
        power,
        trap: Trap::recognise(kernel, variance, times),
        resolution: kernel.rows().map(|(_, resolution)| resolution),
    })))
}

/// The operations that the matrices of a table's rows count for.
const ROWS_COST: u64 = 500_000;

/// The operations that a search for a proof counts for, at most.
const DEAREST_SEARCH: u64 = 10_000_000;

impl Validity {
    /// Invalid for a reason that needs no more words.
    fn invalid(kind: Kind) -> Self {
        Self::Invalid(Box::new(Violation {
            kind,
            witness: None,
            power: None,
            trap: None,
            resolution: None,
        }))
    }
}

/// The one with more negative power; the one of finer lags where they have about the same.
fn deeper(finer: NegativePower, coarser: NegativePower) -> NegativePower {
    const ABOUT: f64 = 1.5;
    if coarser.density * coarser.width < ABOUT * finer.density * finer.width {
        coarser
    } else {
        finer
    }
}

/// The time in which a kernel begins to change, and the time after which it does not any more.
fn times(kernel: &Kernel, variance: f64) -> (f64, f64) {
    /// Of its largest change: it has begun with that.
    const BEGUN: f64 = 0.003;
    /// A kernel that is not at rest so much later never is.
    const FOREVER: f64 = 1e4;
    let lags = (-100..100).map(|power| 2.0_f64.powi(power));
    let changes: Vec<(f64, f64)> = lags
        .filter_map(|lag| Some((lag, (1.0 - kernel.value(lag).ok()? / variance).abs())))
        .filter(|(_, change)| change.is_finite())
        .collect();
    let most = changes
        .iter()
        .fold(0.0, |most: f64, (_, change)| most.max(*change))
        .min(2.0);
    let begins = changes.iter().find(|(_, change)| *change > BEGUN * most);
    let Some((begins, _)) = begins.filter(|_| most > 0.0) else {
        return kernel.times().unwrap_or((1.0, 1.0));
    };
    let rest = changes.last().map_or(0.0, |(_, change)| *change);
    let moving = changes
        .iter()
        .rev()
        .find(|(_, change)| (change - rest).abs() > BEGUN * most);
    let end = moving.map_or(*begins, |(lag, _)| 2.0 * lag);
    let (short, long) = kernel.times().unwrap_or((*begins, *begins));
    let short = short.min(*begins);
    (short, long.max(end.min(FOREVER * begins)).max(short))
}

/// Lags that show the shape of a kernel, from well below its shortest to well beyond its longest time.
fn probing_lags((shortest, longest): (f64, f64)) -> impl Iterator<Item = f64> {
    const STEPS: i32 = 256;
    let (from, to) = (0.125 * shortest, 16.0 * longest);
    let ratio = (to / from).powf(1.0 / f64::from(STEPS));
    (0..=STEPS)
        .map(move |step| from * ratio.powi(step))
        .filter(|lag| lag.is_finite())
}

/// A lag at which an expression has no value.
fn without_value(kernel: &Kernel, times: (f64, f64)) -> Option<f64> {
    probing_lags(times).find(|lag| match kernel.value(*lag) {
        Ok(value) => !value.is_finite(),
        Err(why) => matches!(why, Unavailable::NoValue { .. }),
    })
}

/// A probed lag at which the kernel is larger than at lag zero, and how many times as large: the first one, or one right
/// behind it where it is larger still.
fn larger_than_at_zero(kernel: &Kernel, variance: f64, times: (f64, f64)) -> Option<(f64, f64)> {
    const ROUNDING: f64 = 1e-9;
    /// Large enough to be seen at once.
    const PLAIN: f64 = 2.0;
    let mut larger = probing_lags(times)
        .map_while(|lag| Some((lag, kernel.known(lag)?)))
        .map(|(lag, (value, doubt))| (lag, value / variance, doubt / variance))
        .skip_while(|(_, ratio, doubt)| ratio.abs() <= 1.0 + ROUNDING + doubt)
        .map(|(lag, ratio, _)| (lag, ratio));
    let mut largest = larger.next()?;
    for (lag, ratio) in larger {
        if ratio.abs() <= largest.1.abs() || largest.1.abs() > PLAIN {
            break;
        }
        largest = (lag, ratio);
    }
    largest.1.is_finite().then_some(largest)
}

/// The jump where a table in the kernel ends.
fn jump_of_table(kernel: &Kernel, variance: f64) -> Option<Kind> {
    /// A lag right behind another.
    const BEHIND: f64 = 1.0 + 1e-9;
    /// A share of the variance that is no jump.
    const NOTHING: f64 = 1e-3;
    jumping_ends(kernel).into_iter().find_map(|lag| {
        let (from, to) = (
            kernel.value(lag).ok()? / variance,
            kernel.value(BEHIND * lag).ok()? / variance,
        );
        ((from - to).abs() > NOTHING).then_some(Kind::JumpAtEnd { lag, from, to })
    })
}

/// The last lags of the tables in a kernel that jump there.
fn jumping_ends(kernel: &Kernel) -> Vec<f64> {
    match kernel {
        Kernel::Tabulated(table) => table.jump().map(|_| table.last_lag()).into_iter().collect(),
        Kernel::Scaled(_, inner) => jumping_ends(inner),
        Kernel::Sum(parts) | Kernel::Product(parts) => parts.iter().flat_map(jumping_ends).collect(),
        Kernel::Constant | Kernel::Family(_) | Kernel::User(_) => Vec::new(),
    }
}

/// Two instants between which the kernel is larger than at one.
fn proof_of_size(kernel: &Kernel, lag: f64, ratio: f64) -> Option<Witness> {
    let weight = if ratio > 0.0 { -1 } else { 1 };
    // The fewest digits that show it.
    (1..=12).find_map(|digits| {
        let lag = Decimal::near(lag, digits)?;
        Witness::new(kernel, lag.exponent, vec![0, lag.digits], vec![1, weight])
    })
}

/// Three instants about a jump: X(t) and X(t + e) are nearly the same, but one of them depends on X(0) more than the
/// other. With weights 1, -m, m the variance is 1 - 2 m jump + 2 m² (1 - rho(e)), about -1 for m = 1 / jump and e small enough.
fn proof_of_jump(kernel: &Kernel, kind: Kind) -> Option<Witness> {
    let Kind::JumpAtEnd { lag, from, to } = kind else {
        return None;
    };
    let weight = (1.0 / (from - to).abs()).ceil() as i64;
    let weight = if from > to { weight } else { -weight };
    let last = Decimal::of(lag)?;
    (1..12).find_map(|power| {
        let little = Decimal::near(lag * 10.0_f64.powi(-power), 1)?;
        let exponent = last.exponent.min(little.exponent);
        let (last, little) = (last.in_units(exponent)?, little.in_units(exponent)?);
        Witness::new(kernel, exponent, vec![0, last, last + little], vec![1, -weight, weight])
    })
}
