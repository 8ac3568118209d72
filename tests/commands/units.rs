//! Units are for people: a model in other units gives the same results.

use super::{Folder, near};
use serde_json::Value;

/// One model with blanks for its units.
const MODEL: &str = r#"
parameter level : <force> = <24 kN>
process swing : <force> = gaussian(
    mean: <2 kN>
    autocovariance: (<1.5 kN>)^2 * squared_exponential(length: <40 s>) * harmonic(frequency: <0.2 Hz>)
)
process drift : <force> = gaussian(
    standard_deviation: <0.8 kN>
    correlation: matern(smoothness: 5/2, length: <6 min>)
)
margin both : <force> = level - swing - 2 * delay(drift, by: <30 s>) - <2 s> * derivative(swing)
limit state late {
    failure when both < 0
    reference period <3 h>
    first passage poisson_safe_start
    require reliability_index >= 1
    tabulate at <10 min>, <1 h>
}
expect standard_deviation(swing) = <1.5 kN> within <15 N>
"#;

/// The blanks, and the same quantities otherwise.
const SPELLINGS: [[&str; 2]; 11] = [
    ["24 kN", "24000 N"],
    ["2 kN", "2e-3 MN"],
    ["1.5 kN", "1500 N"],
    ["0.2 Hz", "1.2566370614359172 rad/s"],
    ["40 s", "40e3 ms"],
    ["0.8 kN", "0.8e6 mN"],
    ["6 min", "360 s"],
    ["30 s", "0.5 min"],
    ["3 h", "10800 s"],
    ["10 min", "600 s"],
    ["1 h", "60 min"],
];

fn results(model: &str) -> Value {
    let mut document = Folder::with("a.limit", model)
        .run(["evaluate", "a.limit", "--json"])
        .ends_with(0)
        .json();
    // The text differs, and so does its digest; a tolerance in N is a number in N.
    document["model"].take();
    document["expectations"][0]["text"].take();
    document
}

/// Holds that two documents are alike but for the rounding of their numbers.
fn alike(one: &Value, other: &Value, place: &str) {
    match (one, other) {
        (Value::Object(ours), Value::Object(theirs)) => {
            assert!(ours.keys().eq(theirs.keys()), "{place}");
            for (key, value) in ours {
                alike(value, &theirs[key], &format!("{place}.{key}"));
            }
        }
        (Value::Array(ours), Value::Array(theirs)) => {
            assert_eq!(ours.len(), theirs.len(), "{place}");
            for (index, (ours, theirs)) in ours.iter().zip(theirs).enumerate() {
                alike(ours, theirs, &format!("{place}[{index}]"));
            }
        }
        (Value::Number(ours), Value::Number(theirs)) => {
            let (ours, theirs) = (ours.as_f64().unwrap_or(f64::NAN), theirs.as_f64().unwrap_or(f64::NAN));
            assert!(
                ours == theirs || near(ours, theirs, 1e-14),
                "{place}: {ours:e} and {theirs:e}"
            );
        }
        _ => assert_eq!(one, other, "{place}"),
    }
}

#[test]
fn other_units_give_the_same_results() {
    let mut first = MODEL.replace("<force>", "kN");
    let mut second = MODEL.replace("<force>", "N");
    for [one, other] in SPELLINGS {
        first = first.replace(&format!("<{one}>"), one);
        second = second.replace(&format!("<{one}>"), other);
    }
    for model in [&mut first, &mut second] {
        *model = model.replace("<2 s>", "2 s").replace("<15 N>", "15 N");
    }
    assert!(
        !first.contains('<') || first.matches('<').count() == 1,
        "only `both < 0` is left"
    );
    let (first, second) = (results(&first), results(&second));
    assert_eq!(first["limit_states"][0]["requirements"][0]["verdict"], "met");
    alike(&first, &second, "");
}
