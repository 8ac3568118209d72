//! Models made for measuring: as large as asked, and like those people write.

use std::fmt::Write;

/// A model of `scale` times 10 declarations: 3 processes, 5 margins and 2 limit states for each.
pub fn model(scale: usize) -> String {
    let kernels = [
        "squared_exponential(length: 3.5 s)",
        "matern(smoothness: 5/2, length: 90 s)",
        "oscillator(frequency: 0.4 Hz, damping: 1.5 %)",
        "rational_quadratic(length: 20 s, mixture: 2)",
        "0.7 * matern(smoothness: 3/2, length: 8 s) + 0.3 * squared_exponential(length: 60 s)",
    ];
    let mut text = String::from("language 1\ntitle \"Generated for measurement\"\n");
    for block in 0..scale {
        for index in 3 * block..3 * block + 3 {
            let kernel = kernels[index % kernels.len()];
            let (mean, deviation) = (100 + index % 37, 10 + index % 11);
            let _ = write!(
                text,
                "\n# Load {index} on the frame, as counted.\nprocess load_{index} : kN = gaussian(\n    mean: {mean} kN\n    \
                 standard_deviation: {deviation} kN\n    correlation: {kernel}\n) basis \"Counted on site, sheet {index}\"\n",
            );
        }
        for index in 5 * block..5 * block + 5 {
            let load = |offset: usize| (3 * block + index * 7 + offset) % (3 * scale);
            let (a, b, c) = (load(0), load(1), load(2));
            let _ = writeln!(
                text,
                "margin reserve_{index} : kN = 900 kN - 1.{} * load_{a} - 0.5 * (load_{b} + 0.8 * load_{c})",
                index % 10,
            );
        }
        for index in 2 * block..2 * block + 2 {
            let margin = (5 * block + index) % (5 * scale);
            let _ = writeln!(
                text,
                "limit state failing_{index} {{\n    failure when reserve_{margin} < 0\n    reference period 50 year\n    \
                 require failure_probability <= 0.5 over 1 year basis \"Agreed\"\n}}",
            );
        }
    }
    text
}

/// A margin of 2,000 terms over 500 sources: each source as it is, doubled by a name of its own, delayed, and
/// differentiated.
pub fn wide_margin() -> String {
    let mut text = String::new();
    let mut margin = String::from("margin wide : kN = 9000 kN");
    for index in 0..500 {
        let _ = writeln!(
            text,
            "process p{index} : kN = gaussian(mean: 1 kN, standard_deviation: 2 kN, correlation: \
             squared_exponential(length: {} s))",
            3 + index % 7
        );
        let _ = write!(
            margin,
            "\n    - 0.5 * p{index} - 1.5 * p{index} - 0.3 * delay(p{index}, by: 0.4 s) + 2 s * derivative(p{index})"
        );
    }
    text.push_str(&margin);
    text.push_str("\nlimit state exceeded { failure when wide < 0 reference period 1 year }\n");
    text
}
