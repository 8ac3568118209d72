//! The spectrum of a kernel: lines and density.
//!
//! The product of two kernels has the convolution of their spectra. Lines are convolved exactly: a line at frequency w moves a
//! density by w to either side. Only what two densities make of each other takes a numerical transform.

use std::f64::consts::{FRAC_2_PI, PI};

use super::family::Correlation;
use super::{Estimate, Kernel, Line, Peak, Unavailable, transform};

/// How often the distance from a peak grows eightfold.
const GRADES: i32 = 3;

/// More spectral lines than that are not kept.
pub(super) const MOST_LINES: usize = 4096;

impl Kernel {
    /// The lines of the spectrum, by rising frequency. Those of user kernels are not known.
    pub fn lines(&self) -> Result<Vec<Line>, Unavailable> {
        Ok(match self {
            Self::Constant => vec![Line {
                frequency: 0.0,
                power: 1.0,
            }],
            Self::Family(family) => family.lines(),
            Self::Tabulated(table) => table.lines(),
            Self::User(_) => Vec::new(),
            Self::Scaled(weight, kernel) => {
                let lines = kernel.lines()?.into_iter();
                lines
                    .map(|line| Line {
                        power: weight * line.power,
                        ..line
                    })
                    .collect()
            }
            Self::Sum(terms) => {
                let mut lines = Vec::new();
                for term in terms.iter() {
                    lines.extend(term.lines()?);
                }
                merged(lines)
            }
            Self::Product(factors) => lines_of_product(factors)?,
        })
    }

    /// The one-sided density of the continuous part of the spectrum at omega >= 0, per rad/s. In closed form for named families,
    /// tables, their sums, and their products with lines; else by a cosine transform, whose error it states.
    pub fn density(&self, omega: f64) -> Result<Estimate, Unavailable> {
        match self {
            Self::Constant => Ok(Estimate::closed(0.0)),
            Self::Family(family) => Ok(Estimate::closed(family.density(omega).unwrap_or(0.0))),
            Self::Tabulated(table) => Ok(Estimate::closed(table.density(omega)?)),
            Self::User(_) => self.transformed(omega, |lag| self.value(lag)),
            Self::Scaled(weight, kernel) => Ok(kernel.density(omega)?.times(*weight)),
            Self::Sum(terms) => terms
                .iter()
                .try_fold(Estimate::closed(0.0), |sum, term| Ok(sum.plus(term.density(omega)?))),
            Self::Product(factors) => {
                self.lines()?;
                density_of_product(factors, omega)
            }
        }
    }

    /// Where the density lives: its peaks, with frequency 0 for what lies about zero, and the edges of bands with no
    /// width. What integrates over frequency must look there.
    pub fn peaks(&self) -> Result<Vec<Peak>, Unavailable> {
        Ok(match self {
            Self::Constant => Vec::new(),
            Self::Family(family) => family.peaks(),
            Self::Tabulated(_) | Self::User(_) => {
                let widths = self
                    .times()
                    .map_or([0.0; 0].to_vec(), |(short, long)| vec![1.0 / long, 1.0 / short]);
                widths.into_iter().map(|width| Peak { frequency: 0.0, width }).collect()
            }
            Self::Scaled(_, kernel) => kernel.peaks()?,
            Self::Sum(terms) => {
                let mut peaks = Vec::new();
                for term in terms.iter() {
                    peaks.extend(term.peaks()?);
                }
                peaks
            }
            Self::Product(factors) => {
                let mut peaks = vec![Peak {
                    frequency: 0.0,
                    width: 0.0,
                }];
                for factor in factors.iter() {
                    let lines = factor.lines()?.into_iter().map(|line| Peak {
                        frequency: line.frequency,
                        width: 0.0,
                    });
                    let others: Vec<Peak> = factor.peaks()?.into_iter().chain(lines).collect();
                    peaks = peaks
                        .iter()
                        .flat_map(|one| others.iter().flat_map(|two| one.beat(*two)))
                        .collect();
                    peaks.sort_by(|a, b| a.frequency.total_cmp(&b.frequency).then(a.width.total_cmp(&b.width)));
                    peaks.dedup();
                    if peaks.len() > MOST_LINES {
                        return Err(Unavailable::TooManyLines);
                    }
                }
                peaks
            }
        })
    }

    /// Rising frequencies from 0, graded towards each peak of the density: what an integral over frequency begins with.
    /// Beyond the last of them the density only falls.
    pub fn frequency_grid(&self) -> Result<Vec<f64>, Unavailable> {
        let mut grid = vec![0.0];
        for peak in self.peaks()? {
            grid.push(peak.frequency);
            for power in 0..=GRADES {
                let distance = peak.width * 8.0_f64.powi(power);
                grid.extend([peak.frequency - distance, peak.frequency + distance]);
            }
        }
        grid.retain(|frequency| *frequency >= 0.0 && frequency.is_finite());
        grid.sort_by(f64::total_cmp);
        grid.dedup();
        Ok(grid)
    }

    /// Whether the spectrum has a continuous part.
    pub fn has_density(&self) -> bool {
        match self {
            Self::Constant | Self::Family(super::Family::Harmonic(_)) => false,
            Self::Family(_) | Self::Tabulated(_) | Self::User(_) => true,
            Self::Scaled(_, kernel) => kernel.has_density(),
            Self::Sum(parts) | Self::Product(parts) => parts.iter().any(Kernel::has_density),
        }
    }

    /// Whether the density is in closed form.
    pub fn density_is_closed(&self) -> bool {
        match self {
            Self::Constant | Self::Family(_) | Self::Tabulated(_) => true,
            Self::User(_) => false,
            Self::Scaled(_, kernel) => kernel.density_is_closed(),
            Self::Sum(parts) => parts.iter().all(Kernel::density_is_closed),
            Self::Product(parts) => {
                parts.iter().all(Kernel::density_is_closed)
                    && parts.iter().filter(|part| part.has_density()).count() < 2
            }
        }
    }

    /// The scale of fluctuation times the variance: the integral of C over all lags, negative ones too (E. Vanmarcke 1983, Random
    /// Fields, ch. 5). Zero or infinite where it is; a line at a frequency above zero adds nothing.
    pub fn integral_over_lags(&self) -> Result<Estimate, Unavailable> {
        match self {
            Self::Constant => Ok(Estimate::closed(f64::INFINITY)),
            Self::Family(family) => Ok(Estimate::closed(family.scale_of_fluctuation())),
            Self::Tabulated(table) => Ok(Estimate::closed(table.scale_of_fluctuation()?)),
            Self::User(_) => Ok(self.transformed(0.0, |lag| self.value(lag))?.times(PI)),
            Self::Scaled(weight, kernel) => Ok(kernel.integral_over_lags()?.times(*weight)),
            Self::Sum(terms) => terms.iter().try_fold(Estimate::closed(0.0), |sum, term| {
                Ok(sum.plus(term.integral_over_lags()?))
            }),
            Self::Product(_) => match self.lines()?.first() {
                Some(line) if line.frequency == 0.0 => Ok(Estimate::closed(f64::INFINITY)),
                _ => Ok(self.density(0.0)?.times(PI)),
            },
        }
    }

    /// The scale of fluctuation, in s: the integral of the correlation coefficient over all lags.
    pub fn scale_of_fluctuation(&self) -> Result<Estimate, Unavailable> {
        Ok(self.integral_over_lags()?.times(1.0 / self.value(0.0)?))
    }

    /// 2/pi times the cosine transform of a function that varies as this kernel does.
    pub(super) fn transformed(
        &self,
        omega: f64,
        function: impl Fn(f64) -> Result<f64, Unavailable>,
    ) -> Result<Estimate, Unavailable> {
        let Some(times) = self.times() else {
            // Constant, or an expression that has no value.
            function(0.0)?;
            function(1.0)?;
            return Ok(Estimate::closed(0.0));
        };
        let kinks: Vec<f64> = self.kinks().iter().map(|kink| kink.lag).collect();
        Ok(transform::cosine(function, omega, times, &kinks)?.times(FRAC_2_PI))
    }
}

impl Peak {
    /// Where two peaks meet when their densities are convolved.
    fn beat(self, other: Self) -> [Self; 2] {
        let width = self.width + other.width;
        let peak = |frequency: f64| Self { frequency, width };
        [
            peak((self.frequency - other.frequency).abs()),
            peak(self.frequency + other.frequency),
        ]
    }
}

/// Sorted, lines of one frequency added up.
fn merged(mut lines: Vec<Line>) -> Vec<Line> {
    lines.sort_by(|a, b| a.frequency.total_cmp(&b.frequency));
    let mut sums: Vec<Line> = Vec::with_capacity(lines.len());
    for line in lines {
        match sums.last_mut() {
            Some(last) if last.frequency == line.frequency => last.power += line.power,
            _ => sums.push(line),
        }
    }
    // A constant that was taken off cancels up to rounding.
    let total: f64 = sums.iter().map(|line| line.power.abs()).sum();
    sums.retain(|line| line.power.abs() > 8.0 * f64::EPSILON * total);
    sums
}

fn lines_of_product(factors: &[Kernel]) -> Result<Vec<Line>, Unavailable> {
    let mut product = vec![Line {
        frequency: 0.0,
        power: 1.0,
    }];
    for factor in factors {
        let mut lines = Vec::new();
        for two in factor.lines()? {
            lines.extend(product.iter().flat_map(|one| beat(*one, two)));
            if lines.len() > 4 * MOST_LINES {
                return Err(Unavailable::TooManyLines);
            }
        }
        product = merged(lines);
        if product.len() > MOST_LINES {
            return Err(Unavailable::TooManyLines);
        }
    }
    Ok(product)
}

/// cos(a tau) cos(b tau) is half of cos((a - b) tau) + cos((a + b) tau).
fn beat(one: Line, two: Line) -> [Line; 2] {
    let power = 0.5 * one.power * two.power;
    let line = |frequency: f64| Line { frequency, power };
    [
        line((one.frequency - two.frequency).abs()),
        line(one.frequency + two.frequency),
    ]
}

fn density_of_product(factors: &[Kernel], omega: f64) -> Result<Estimate, Unavailable> {
    let (continuous, pure): (Vec<Kernel>, Vec<Kernel>) = factors.iter().cloned().partition(Kernel::has_density);
    let lines = lines_of_product(&pure)?;
    moved(&lines, omega, |there| density_of_continuous(&continuous, there))
}

/// Of a product of factors that all have a density, and perhaps lines besides.
fn density_of_continuous(factors: &[Kernel], omega: f64) -> Result<Estimate, Unavailable> {
    let [first, rest @ ..] = factors else {
        return Ok(Estimate::closed(0.0));
    };
    if rest.is_empty() {
        return first.density(omega);
    }
    let lines = (first.lines()?, lines_of_product(rest)?);
    let by_lines = moved(&lines.0, omega, |there| density_of_continuous(rest, there))?;
    let of_lines = moved(&lines.1, omega, |there| first.density(there))?;
    let without_lines = |lag: f64| {
        let rest = rest
            .iter()
            .map(|factor| factor.value(lag))
            .product::<Result<f64, _>>()?;
        Ok((first.value(lag)? - waves(&lines.0, lag)) * (rest - waves(&lines.1, lag)))
    };
    let of_densities = Kernel::product(factors.to_vec()).transformed(omega, without_lines)?;
    Ok(by_lines.plus(of_lines).plus(of_densities))
}

/// The covariance that lines have.
fn waves(lines: &[Line], lag: f64) -> f64 {
    lines.iter().map(|line| line.power * (line.frequency * lag).cos()).sum()
}

/// A density moved by each line to either side.
fn moved(
    lines: &[Line],
    omega: f64,
    density: impl Fn(f64) -> Result<Estimate, Unavailable>,
) -> Result<Estimate, Unavailable> {
    let mut sum = Estimate::closed(0.0);
    for line in lines {
        sum = sum.plus(if line.frequency == 0.0 {
            density(omega)?.times(line.power)
        } else {
            let below = density((omega - line.frequency).abs())?;
            below.plus(density(omega + line.frequency)?).times(0.5 * line.power)
        });
    }
    Ok(sum)
}
