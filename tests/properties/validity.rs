//! Kernels that Bochner's theorem makes valid are accepted, others are refused with a proof: 200 of each, as expressions and
//! as tables.

use crate::support::memory::{Memory, Run};
use crate::support::random::Random;
use std::f64::consts::FRAC_PI_2;
use std::fmt::Write;

/// A function of the lag, in the language and in Rust.
struct Function {
    text: String,
    value: Box<dyn Fn(f64) -> f64>,
}

/// Chance, in the ranges that kernels have.
struct Chance(Random);

impl Chance {
    fn share(&mut self) -> f64 {
        (self.0.next() >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// To three digits.
    fn between(&mut self, low: f64, high: f64) -> f64 {
        let value = low + (high - low) * self.share();
        format!("{value:.2e}").parse().expect("a number")
    }

    /// Lengths over three decades.
    fn length(&mut self) -> f64 {
        let power = self.between(-1.0, 2.0);
        format!("{:.2e}", 10.0_f64.powf(power)).parse().expect("a number")
    }

    fn below(&mut self, end: usize) -> usize {
        self.0.below(end)
    }
}

fn function(text: String, value: impl Fn(f64) -> f64 + 'static) -> Function {
    Function {
        text,
        value: Box::new(value),
    }
}

/// A correlation function with a known spectrum that is nowhere negative.
fn valid_member(chance: &mut Chance, length: f64) -> Function {
    let l = length * chance.between(0.3, 1.0);
    let w = chance.between(0.5, 6.0) / length;
    match chance.below(8) {
        0 => function(format!("exp(-(tau / {l} s)^2 / 2)"), move |t| {
            (-0.5 * (t / l).powi(2)).exp()
        }),
        1 => function(format!("exp(-tau / {l} s)"), move |t| (-t / l).exp()),
        2 => function(format!("1 / (1 + (tau / {l} s)^2)"), move |t| {
            1.0 / (1.0 + (t / l).powi(2))
        }),
        3 => function(format!("max(1 - tau / {l} s, 0)"), move |t| (1.0 - t / l).max(0.0)),
        4 => function(format!("(1 + tau / {l} s) * exp(-tau / {l} s)"), move |t| {
            (1.0 + t / l) * (-t / l).exp()
        }),
        5 => {
            let p = chance.between(0.4, 1.99);
            function(format!("exp(-(tau / {l} s)^{p})"), move |t| (-(t / l).powf(p)).exp())
        }
        6 => {
            // An oscillator: its share of sine is decay over frequency.
            let z = chance.between(0.01, 0.6);
            let (decay, wave) = (z * w, w * (1.0 - z * z).sqrt());
            let sine = decay / wave;
            function(
                format!("exp(-{decay} /s * tau) * (cos({wave} rad/s * tau) + {sine} * sin({wave} rad/s * tau))"),
                move |t| (-decay * t).exp() * ((wave * t).cos() + sine * (wave * t).sin()),
            )
        }
        _ => function(format!("cos({w} rad/s * tau)"), move |t| (w * t).cos()),
    }
}

/// A member or a product of two.
fn valid_term(chance: &mut Chance, length: f64) -> Function {
    let one = valid_member(chance, length);
    if chance.below(3) > 0 {
        return one;
    }
    let two = valid_member(chance, length);
    let (first, second) = (one.value, two.value);
    function(format!("({}) * ({})", one.text, two.text), move |t| {
        first(t) * second(t)
    })
}

/// A positive mixture.
fn valid(chance: &mut Chance) -> Function {
    let length = chance.length();
    let count = 1 + chance.below(3);
    let mut left = 100;
    let mut text = String::new();
    let mut terms: Vec<(f64, Function)> = Vec::new();
    for place in 0..count {
        let percent = if place + 1 == count {
            left
        } else {
            1 + chance.below(left - count)
        };
        left -= percent;
        let term = valid_term(chance, length);
        let plus = if place > 0 { " + " } else { "" };
        write!(text, "{plus}{percent} % * {}", term.text).expect("a text takes everything");
        terms.push((percent as f64 / 100.0, term));
    }
    function(text, move |t| {
        terms.iter().map(|(weight, term)| weight * (term.value)(t)).sum()
    })
}

/// A function that is not the correlation of any process.
fn invalid(chance: &mut Chance) -> Function {
    let l = chance.length();
    match chance.below(8) {
        // Flatter than tau² at lag 0.
        0 => {
            let p = chance.between(2.05, 6.0);
            function(format!("exp(-(tau / {l} s)^{p})"), move |t| (-(t / l).powf(p)).exp())
        }
        1 => {
            let p = chance.between(1.2, 5.0);
            function(format!("max(1 - (tau / {l} s)^{p}, 0)"), move |t| {
                (1.0 - (t / l).powf(p)).max(0.0)
            })
        }
        // A jump beyond lag 0.
        2 => {
            let share = chance.between(0.1, 1.0);
            let rest = 1.0 - share;
            function(
                format!("{share} * step({l} s - tau) + (1 - {share}) * exp(-(tau / {l} s)^2)"),
                move |t| share * f64::from(t <= l) + rest * (-(t / l).powi(2)).exp(),
            )
        }
        // The narrower Gaussian is the wider one over frequency.
        3 => {
            let (a, r) = (chance.between(0.03, 1.0), chance.between(0.2, 0.8));
            function(
                format!("(1 + {a}) * exp(-(tau / {l} s)^2 / 2) - {a} * exp(-(tau / ({r} * {l} s))^2 / 2)"),
                move |t| {
                    let gauss = |u: f64| (-0.5 * u * u).exp();
                    (1.0 + a) * gauss(t / l) - a * gauss(t / (r * l))
                },
            )
        }
        // A sine that its decay does not allow.
        4 => {
            let (decay, wave) = (chance.between(0.05, 0.5) / l, chance.between(1.0, 5.0) / l);
            let sign = if chance.below(2) == 0 { 1.0 } else { -1.0 };
            let sine = sign * decay / wave * chance.between(1.1, 3.0);
            function(
                format!("exp(-{decay} /s * tau) * (cos({wave} rad/s * tau) + ({sine}) * sin({wave} rad/s * tau))"),
                move |t| (-decay * t).exp() * ((wave * t).cos() + sine * (wave * t).sin()),
            )
        }
        // A negative line.
        5 => {
            let (e, w) = (chance.between(0.02, 0.3), chance.between(3.0, 9.0) / l);
            function(
                format!("(1 + {e}) * exp(-(tau / {l} s)^2 / 2) - {e} * cos({w} rad/s * tau)"),
                move |t| (1.0 + e) * (-0.5 * (t / l).powi(2)).exp() - e * (w * t).cos(),
            )
        }
        6 => function(format!("cos(pi / 2 * 1 rad * min(tau / {l} s, 1))"), move |t| {
            (FRAC_PI_2 * (t / l).min(1.0)).cos()
        }),
        _ => {
            let p = chance.between(2.5, 6.0);
            function(format!("1 / (1 + (tau / {l} s)^{p})"), move |t| {
                1.0 / (1.0 + (t / l).powf(p))
            })
        }
    }
}

fn process(correlation: &str) -> String {
    format!("process x : kN = gaussian(standard_deviation: 3 kN, correlation: {correlation})\n")
}

/// The check of a kernel that is written out.
fn written(text: &str) -> Run {
    let model = format!("kernel k(tau) = {text}\n{}", process("k()"));
    Memory::of("model.limit", &model).run("model.limit", true)
}

/// The check of a kernel that is given by a table, its values rounded.
fn tabulated(kernel: &Function, lags: &[f64], decimals: usize) -> Run {
    let mut table = "lag [s],correlation\n0,1\n".to_string();
    for lag in lags {
        let written = format!("{lag:.9}");
        let value = (kernel.value)(written.parse().expect("a number"));
        writeln!(table, "{written},{value:.decimals$}").expect("a text takes everything");
    }
    let half_digit = 0.5 * 0.1_f64.powi(decimals as i32);
    let last = lags.last().copied().unwrap_or(0.0);
    let mut beyond = (0..2000).map(|step| (kernel.value)(last * (1.0 + 0.01 * f64::from(step))));
    let gone = beyond.all(|value| value.abs() < half_digit);
    let beyond = if gone { "zero" } else { "refuse" };
    let model = process(&format!("tabulated(\"table.csv\", beyond: {beyond})"));
    Memory::of("model.limit", &model)
        .with("table.csv", &table)
        .run("model.limit", true)
}

/// A proof as the message shows it.
struct Proof {
    instants: Vec<f64>,
    weights: Vec<f64>,
    /// The variance, as a share of the process's.
    share: f64,
    /// The rounding that it allows for.
    rounding: f64,
}

fn witness(run: &Run) -> Option<Proof> {
    let [finding] = run.diagnostics.as_slice() else {
        return None;
    };
    let label = finding
        .labels
        .iter()
        .find(|label| label.text.starts_with("at the instants "))?;
    let (times, rest) = label
        .text
        .strip_prefix("at the instants ")?
        .split_once(" the weights ")?;
    let (weights, rest) = rest.split_once(" give the weighted sum a variance of ")?;
    let (share, rest) = rest.split_once(" times ")?;
    let rounding = rest
        .split_once(", with rounding by ")
        .and_then(|(_, rest)| rest.split_once(' '));
    let numbers = |list: &str| -> Option<Vec<f64>> {
        list.split(", ")
            .map(|one| one.trim_end_matches(" s").parse().ok())
            .collect()
    };
    Some(Proof {
        instants: numbers(times)?,
        weights: numbers(weights)?,
        share: share.parse().ok()?,
        rounding: rounding.map_or(Some(1e-12), |(rounding, _)| rounding.parse().ok())?,
    })
}

/// The variance of the weighted sum.
fn variance(times: &[f64], weights: &[f64], value: impl Fn(f64) -> f64) -> f64 {
    let pairs = times.iter().zip(weights);
    pairs
        .clone()
        .flat_map(|one| pairs.clone().map(move |two| (one, two)))
        .map(|((t, w), (u, v))| w * v * value((t - u).abs()))
        .sum()
}

/// Fails unless a kernel was refused with a proof that holds.
fn proven(run: &Run, text: &str, value: impl Fn(f64) -> f64) -> Result<usize, String> {
    let proof = witness(run).ok_or_else(|| format!("no proof: {text}\n{}", run.shown()))?;
    let code = run.codes()[0];
    if !["kernel/negative-spectrum", "kernel/bound", "kernel/jump"].contains(&code) {
        return Err(format!("{code}: {text}"));
    }
    let Proof {
        instants,
        weights,
        share,
        rounding,
    } = proof;
    let found = variance(&instants, &weights, value);
    let doubt = 2.0 * rounding * weights.iter().map(|weight| weight.abs()).sum::<f64>().powi(2);
    if instants.len() == weights.len() && found < 0.0 && (found - share).abs() <= 0.01 * share.abs() + doubt {
        Ok(instants.len())
    } else {
        Err(format!("{found} is not {share}: {text}\n{}", run.shown()))
    }
}

fn fine(failures: &[String]) {
    assert!(
        failures.is_empty(),
        "{} failures\n{}",
        failures.len(),
        failures.join("\n")
    );
}

#[test]
fn valid_kernels_are_accepted() {
    let mut chance = Chance(Random(1932));
    let mut failures = Vec::new();
    for _ in 0..200 {
        let kernel = valid(&mut chance);
        let run = written(&kernel.text);
        if !run.diagnostics.is_empty() {
            failures.push(format!("{}\n{}", kernel.text, run.shown()));
        }
    }
    fine(&failures);
}

#[test]
fn tables_of_valid_kernels_are_accepted() {
    let mut chance = Chance(Random(1933));
    let mut failures = Vec::new();
    for _ in 0..200 {
        let kernel = valid(&mut chance);
        let step = chance.length() * 0.1;
        let (rows, decimals) = (8 + chance.below(150), 1 + chance.below(7));
        // Every second table has uneven lags.
        let uneven = chance.below(2) == 0;
        let mut last = 0.0;
        let lags: Vec<f64> = (1..rows)
            .map(|_| {
                last += step * if uneven { chance.between(0.3, 2.0) } else { 1.0 };
                last
            })
            .collect();
        let run = tabulated(&kernel, &lags, decimals);
        if !run.diagnostics.is_empty() {
            failures.push(format!(
                "{} {step} {rows} {decimals} {uneven}\n{}",
                kernel.text,
                run.shown()
            ));
        }
    }
    fine(&failures);
}

#[test]
fn other_kernels_are_refused_with_a_proof() {
    let mut chance = Chance(Random(1938));
    let mut failures = Vec::new();
    let mut sizes = Vec::new();
    for _ in 0..200 {
        let kernel = invalid(&mut chance);
        match proven(&written(&kernel.text), &kernel.text, &kernel.value) {
            Ok(size) => sizes.push(size),
            Err(why) => failures.push(why),
        }
    }
    fine(&failures);
    sizes.sort_unstable();
    assert!(sizes[100] <= 4 && sizes[199] <= 32, "{sizes:?}");
}

#[test]
fn tables_of_other_kernels_are_refused_with_a_proof() {
    let mut chance = Chance(Random(1911));
    let mut failures = Vec::new();
    let mut tried = 0;
    while tried < 200 {
        let l = chance.length();
        let (kind, steep) = (chance.below(3), chance.between(3.0, 6.0));
        // Far enough from any covariance function that no rounding to four digits hides it.
        let kernel = match kind {
            0 => function("parabola".into(), move |t: f64| (1.0 - (t / l).powi(2)).max(0.0)),
            1 => function("box".into(), move |t: f64| f64::from(t < 0.99 * l)),
            _ => function("flat".into(), move |t: f64| (-(t / l).powf(steep)).exp()),
        };
        tried += 1;
        let step = l / (4 + chance.below(20)) as f64;
        let lags: Vec<f64> = (1..60).map(|row| f64::from(row) * step).collect();
        let run = tabulated(&kernel, &lags, 4);
        let text = format!("{} {l} {step}", kernel.text);
        if let Err(why) = proven(&run, &text, &kernel.value) {
            failures.push(why);
        }
    }
    fine(&failures);
}
