//! Faults in files that others use: where they are, which `use` led there, and where their values were set.

use crate::support::memory::{Memory, Run};

const WIND: &str = "\
parameter deviation : kN = 2 kN
constant  spread    : kN = 1.2 * deviation
process pull : kN = gaussian(
    standard_deviation: spread
    correlation:        squared_exponential(length: 3 s)
)
";

const FAULTY: &str = "constant width = 3 m + 2 kN\n";

fn run(model: &str, others: &[(&str, &str)]) -> Run {
    let texts = Memory::of("model.limit", model);
    let texts = others.iter().fold(texts, |texts, (name, text)| texts.with(name, text));
    texts.run("model.limit", true)
}

/// The labels of the only finding.
#[track_caller]
fn labels(run: &Run) -> Vec<String> {
    let [finding] = run.diagnostics.as_slice() else {
        panic!("{}", run.shown());
    };
    let labels = finding.labels.iter();
    labels
        .map(|label| format!("{}: {}", run.files.text(label.place), label.text))
        .collect()
}

#[test]
fn the_way_to_a_fault_in_a_part_of_a_part() {
    let run = run(
        "# The whole.\nuse \"deck.limit\" as deck\n\nuse \"deck.limit\" as other\n",
        &[("deck.limit", "use \"wind.limit\" as wind\n"), ("wind.limit", FAULTY)],
    );
    insta::assert_snapshot!(run.shown());
}

#[test]
fn a_fault_of_a_file_is_one_fault_however_often_it_is_used() {
    for fault in [
        FAULTY,
        "constant a = 3 +\n",
        "constant a = b\n",
        "constant a = a\n",
        "constant a = 1\nconstant a = 2\n",
        "process a = gaussian(standard_deviation: 0, correlation: exponential(length: 1 s))\n",
        "use \"nowhere.limit\" as n\n",
        "process a = gaussian(standard_deviation: 1, correlation: tabulated(\"nowhere.csv\", beyond: zero))\n",
    ] {
        let run = run(
            "use \"part.limit\" as one\nuse \"part.limit\" as two\nuse \"./part.limit\" as three\n",
            &[("part.limit", fault)],
        );
        let uses = labels(&run);
        assert_eq!(
            uses.last().map(String::as_str),
            Some("\"part.limit\": used here as `one`"),
            "{}",
            run.shown()
        );
    }
}

#[test]
fn a_value_that_a_use_set_is_shown_there() {
    let run = run(
        "use \"wind.limit\" as west (deviation: 3 kN)\nuse \"wind.limit\" as east (\n    deviation: -3 kN\n)\n",
        &[("wind.limit", WIND)],
    );
    assert_eq!(
        labels(&run),
        ["-3 kN: `deviation` is set here", "\"wind.limit\": used here as `east`"]
    );
    insta::assert_snapshot!(run.shown());
}

#[test]
fn a_value_that_was_handed_on() {
    let run = run(
        "parameter gust = 0.5\nuse \"deck.limit\" as deck (deviation: 2 kN - 4 kN)\n",
        &[
            (
                "deck.limit",
                "parameter deviation : kN\nuse \"wind.limit\" as wind (deviation: deviation / 2)\n",
            ),
            ("wind.limit", WIND),
        ],
    );
    assert_eq!(
        labels(&run),
        [
            "deviation / 2: `deviation` is set here",
            "\"wind.limit\": used here as `wind`",
            "\"deck.limit\": used here as `deck`",
        ]
    );
}

#[test]
fn a_value_of_the_part_itself_is_not_set_by_anyone() {
    let run = run(
        "use \"wind.limit\" as wind\n",
        &[("wind.limit", &WIND.replace("= 2 kN", "= 0 kN"))],
    );
    assert_eq!(labels(&run), ["\"wind.limit\": used here as `wind`"]);
}

#[test]
fn a_fault_in_the_values_of_a_use_is_in_the_file_that_uses() {
    let run = run("use \"wind.limit\" as wind (deviation: 3 m)\n", &[("wind.limit", WIND)]);
    assert_eq!(labels(&run), ["deviation: the parameter is declared here"]);
}

#[test]
fn a_long_way_is_shown_by_its_ends() {
    let texts: Vec<(String, String)> = (1..20)
        .map(|level| {
            let next = level + 1;
            let text = if level == 19 {
                FAULTY.to_owned()
            } else {
                format!("use \"{next}.limit\" as p{next}\n")
            };
            (format!("{level}.limit"), text)
        })
        .collect();
    let texts: Vec<(&str, &str)> = texts.iter().map(|(name, text)| (&**name, &**text)).collect();
    let run = run("use \"1.limit\" as p1\n", &texts);
    let labels: Vec<&str> = run.diagnostics[0].labels.iter().map(|label| &*label.text).collect();
    assert_eq!(
        labels[labels.len() - 5..],
        [
            "used here as `p19`",
            "used here as `p18`",
            "used here as `p17`",
            "used here as `p16`",
            "used here as `p1`, 14 more uses in between",
        ]
    );
}

#[test]
fn a_kernel_of_a_part_called_with_wrong_values() {
    let run = run(
        "use \"kernels.limit\" as site\n\
         process pull : kN = gaussian(standard_deviation: 2 kN, correlation: site.mixed(length: -1 s))\n",
        &[(
            "kernels.limit",
            "kernel mixed(tau, length: s) = 0.5 * exponential(length: length) + 0.5 * harmonic(frequency: 1 Hz)\n",
        )],
    );
    insta::assert_snapshot!(run.shown());
}
