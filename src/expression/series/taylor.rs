//! Taylor coefficients of the elementary functions about a number.
//!
//! Each function here returns f_0 ... f_n of f(c + s) = sum of f_k s^k, by the recurrence its differential equation
//! gives (Griewank and Walther 2008, "Evaluating derivatives", 2nd edition, chapter 13; for powers Knuth 1997, "The art
//! of computer programming", volume 2, section 4.7; places from memory, values held against mpmath).

/// exp, from f' = f.
pub(super) fn exp(at: f64, n: usize) -> Vec<f64> {
    by_factorials(&[libm::exp(at)], n)
}

/// sin, from f'' = -f.
pub(super) fn sin(at: f64, n: usize) -> Vec<f64> {
    let (sin, cos) = (libm::sin(at), libm::cos(at));
    by_factorials(&[sin, cos, -sin, -cos], n)
}

/// cos, from f'' = -f.
pub(super) fn cos(at: f64, n: usize) -> Vec<f64> {
    let (sin, cos) = (libm::sin(at), libm::cos(at));
    by_factorials(&[cos, -sin, -cos, sin], n)
}

/// sinh, from f'' = f.
pub(super) fn sinh(at: f64, n: usize) -> Vec<f64> {
    by_factorials(&[libm::sinh(at), libm::cosh(at)], n)
}

/// cosh, from f'' = f.
pub(super) fn cosh(at: f64, n: usize) -> Vec<f64> {
    by_factorials(&[libm::cosh(at), libm::sinh(at)], n)
}

/// tanh, from f' = 1 - f². The slope at `at` itself is 1/cosh², which keeps its digits where tanh is near 1.
pub(super) fn tanh(at: f64, n: usize) -> Vec<f64> {
    let cosh = libm::cosh(at);
    let mut f = vec![libm::tanh(at), 1.0 / cosh / cosh];
    for k in 1..n {
        let square: f64 = (0..=k).map(|i| f[i] * f[k - i]).sum();
        f.push(-square / (k + 1) as f64);
    }
    f.truncate(n + 1);
    f
}

/// erf, from f' = g, g' = -2 x g, g(x) = 2/sqrt(pi) exp(-x²).
pub(super) fn erf(at: f64, n: usize) -> Vec<f64> {
    let mut g = vec![std::f64::consts::FRAC_2_SQRT_PI * libm::exp(-at * at)];
    for k in 0..n {
        let before = if k > 0 { g[k - 1] } else { 0.0 };
        g.push(-2.0 * (at * g[k] + before) / (k + 1) as f64);
    }
    integral(libm::erf(at), &g, n)
}

/// atan, from f' = g, (1 + x²) g = 1.
pub(super) fn atan(at: f64, n: usize) -> Vec<f64> {
    let square = 1.0 + at * at;
    let mut g = vec![1.0 / square];
    for k in 1..=n {
        let before = if k > 1 { g[k - 2] } else { 0.0 };
        g.push(-(2.0 * (at / square) * g[k - 1] + before / square));
    }
    integral(libm::atan(at), &g, n)
}

/// asin between -1 and 1, from f' = g, (1 - x²) g' = x g.
pub(super) fn asin(at: f64, n: usize) -> Vec<f64> {
    integral(libm::asin(at), &asin_slope(at, n), n)
}

/// acos between -1 and 1: its slope is that of asin, negated.
pub(super) fn acos(at: f64, n: usize) -> Vec<f64> {
    let slope: Vec<f64> = asin_slope(at, n).into_iter().map(|g| -g).collect();
    integral(libm::acos(at), &slope, n)
}

fn asin_slope(at: f64, n: usize) -> Vec<f64> {
    let square = (1.0 - at) * (1.0 + at);
    let mut g = vec![1.0 / libm::sqrt(square)];
    for k in 0..n {
        let count = k as f64;
        let before = if k > 0 { g[k - 1] } else { 0.0 };
        g.push((at * (2.0 * count + 1.0) * g[k] + count * before) / ((count + 1.0) * square));
    }
    g
}

/// ln(1 + s).
pub(super) fn ln_one_plus(n: usize) -> Vec<f64> {
    let sign = |k: usize| if k % 2 == 1 { 1.0 } else { -1.0 };
    std::iter::once(0.0)
        .chain((1..=n).map(|k| sign(k) / k as f64))
        .collect()
}

/// (1 + s)^exponent, from (1 + s) f' = exponent f.
pub(super) fn power_of_one_plus(exponent: f64, n: usize) -> Vec<f64> {
    let mut f = vec![1.0];
    for k in 0..n {
        f.push(f[k] * (exponent - k as f64) / (k + 1) as f64);
    }
    f
}

/// The coefficients of a function whose derivatives repeat after a while.
fn by_factorials(derivatives: &[f64], n: usize) -> Vec<f64> {
    let mut factorial = 1.0;
    let derivatives = derivatives.iter().cycle().take(n + 1).enumerate();
    derivatives
        .map(|(k, derivative)| {
            factorial *= k.max(1) as f64;
            derivative / factorial
        })
        .collect()
}

/// The coefficients of a function from its value and those of its slope.
fn integral(value: f64, slope: &[f64], n: usize) -> Vec<f64> {
    let rest = slope.iter().take(n).enumerate().map(|(k, g)| g / (k + 1) as f64);
    std::iter::once(value).chain(rest).collect()
}
