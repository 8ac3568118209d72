//! Quantities as people read them.

use super::unit::Unit;

/// Decimals from 10^-4 up to 10^6 are written out, others with a power of ten.
const PLAIN_DECIMALS: std::ops::Range<i32> = -4..6;

/// A value in coherent SI units, shown in a unit to a number of significant digits: `118 kN`, `1.2e-5 /year`, `7 %`.
pub fn show(value: f64, unit: &Unit, digits: usize) -> String {
    let number = show_number(unit.from_si(value), digits);
    match unit.text() {
        "1" => number,
        text => format!("{number} {text}"),
    }
}

/// A number to a number of significant digits (from 1 to 17), without trailing zeros: `0.04`, `118`, `1.234e-7`. The
/// digits before the point are never rounded away: 123456 to three digits stays 123456. An infinity is `infinite`, what
/// is no number `undefined`.
pub fn show_number(value: f64, digits: usize) -> String {
    if value.is_nan() {
        return "undefined".to_owned();
    }
    if value.is_infinite() {
        return if value > 0.0 { "infinite" } else { "-infinite" }.to_owned();
    }
    if value == 0.0 {
        return "0".to_owned();
    }
    let digits = digits.clamp(1, 17);
    let scientific = format!("{value:.*e}", digits - 1);
    let Some((mantissa, exponent)) = scientific.split_once('e') else {
        return scientific;
    };
    match exponent.parse::<i32>() {
        Ok(power) if PLAIN_DECIMALS.contains(&power) => {
            let decimals = (digits as i32 - 1 - power).max(0) as usize;
            without_trailing_zeros(&format!("{value:.decimals$}")).to_owned()
        }
        _ => format!("{}e{exponent}", without_trailing_zeros(mantissa)),
    }
}

/// A time in seconds to a number of significant digits, in the unit people would choose: `600 s`, `30 min`, `1.5 h`,
/// `30 day`, `50 year`.
pub fn time_in_words(seconds: f64, digits: usize) -> String {
    /// From how many seconds a unit is used, and how many it has.
    const UNITS: [(f64, f64, &str); 4] = [
        (31_557_600.0, 31_557_600.0, "year"),
        (86_400.0, 86_400.0, "day"),
        (3600.0, 3600.0, "h"),
        (1000.0, 60.0, "min"),
    ];
    if !seconds.is_finite() {
        return show_number(seconds, digits);
    }
    let unit = UNITS.iter().find(|(from, _, _)| seconds.abs() >= *from);
    let (_, size, symbol) = unit.copied().unwrap_or((0.0, 1.0, "s"));
    format!("{} {symbol}", show_number(seconds / size, digits))
}

fn without_trailing_zeros(decimal: &str) -> &str {
    if decimal.contains('.') {
        decimal.trim_end_matches('0').trim_end_matches('.')
    } else {
        decimal
    }
}
