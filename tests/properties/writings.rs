//! Two ways of writing a model are one model: equal forms, equal numbers to the last bit.

use super::models::{Combination, combination};
use crate::support::{Results, model, results, results_beside};
use proptest::prelude::*;

const LIMIT_STATE: &str = "limit state failing {
    failure when m outside -10 kN to 2000 kN
    reference period 50 year
    first passage poisson_safe_start
    tabulate at 1 s, 1 h
}";

/// What the results say of the margin and the limit state.
fn numbers(results: &Results) -> (serde_json::Value, serde_json::Value) {
    (results.moments("m").0.clone(), results.limit_state("failing").0.clone())
}

/// Fails unless a text says the same as the plain way of writing.
fn same(plain: &Combination, other: &str) -> Result<(), TestCaseError> {
    let plain = format!("{}\n{LIMIT_STATE}", plain.text());
    let other = format!("{other}\n{LIMIT_STATE}");
    prop_assert_eq!(
        numbers(&results(&plain)),
        numbers(&results(&other)),
        "{}\nagainst\n{}",
        plain,
        other
    );
    let form = |text: &str| {
        let model = model(text);
        model
            .varying
            .iter()
            .find(|one| one.name == "m")
            .map(|one| one.form.clone())
    };
    prop_assert_eq!(form(&plain), form(&other), "forms of\n{}\nagainst\n{}", plain, other);
    Ok(())
}

proptest! {
    #![proptest_config(ProptestConfig { cases: 32, failure_persistence: None, ..ProptestConfig::default() })]

    #[test]
    fn terms_in_another_order(model in combination()) {
        let mut other = model.clone();
        other.terms.reverse();
        let terms: Vec<String> = other.terms.iter().map(|term| term.text()).collect();
        let text = format!("{}\nmargin m : kN = {} + {} kN", model.declarations().join("\n"), terms.join(" + "), model.constant);
        same(&model, &text)?;
    }

    #[test]
    fn declarations_in_another_order(model in combination()) {
        let plain = format!("{}\n{LIMIT_STATE}", model.text());
        let mut lines = model.declarations();
        lines.reverse();
        let other = format!("{LIMIT_STATE}\nmargin m : kN = {}\n{}", model.form(), lines.join("\n"));
        // The sources have other numbers then, so only the results are compared.
        prop_assert_eq!(numbers(&results(&plain)), numbers(&results(&other)), "{}", plain);
    }

    #[test]
    fn by_way_of_other_processes(model in combination(), split in 0..5usize) {
        let terms: Vec<String> = model.terms.iter().map(|term| term.text()).collect();
        let (one, two) = terms.split_at(split.min(terms.len() - 1));
        let part = |terms: &[String]| terms.iter().map(|term| format!(" + {term}")).collect::<String>();
        let text = format!(
            "{}\nprocess one : kN = {} kN{}\nprocess two : kN = 0 kN{}\nmargin m : kN = two + one",
            model.declarations().join("\n"), model.constant, part(one), part(two)
        );
        // Where `one` has no terms it is a number, which a process may not be.
        prop_assume!(!one.is_empty());
        same(&model, &text)?;
    }

    #[test]
    fn a_factor_multiplied_out(model in combination(), power in -3..4i32) {
        let factor = 2f64.powi(power);
        let terms: Vec<String> = model
            .terms
            .iter()
            .map(|term| term.written(term.coefficient / factor, &term.operand(&format!("x{}", term.source))))
            .collect();
        let text = format!(
            "{}\nmargin m : kN = {factor} * ({} kN + {})",
            model.declarations().join("\n"), model.constant / factor, terms.join(" + ")
        );
        same(&model, &text)?;
    }

    #[test]
    fn a_term_in_two_halves(model in combination()) {
        let halves: Vec<String> = model
            .terms
            .iter()
            .map(|term| term.written(0.5 * term.coefficient, &term.operand(&format!("x{}", term.source))))
            .collect();
        let text = format!(
            "{}\nmargin m : kN = {} + {} kN + {}",
            model.declarations().join("\n"), halves.join(" + "), model.constant, halves.join(" + ")
        );
        same(&model, &text)?;
    }

    #[test]
    fn a_delay_in_two_steps_and_outside_the_derivative(model in combination(), first in -16..16i32) {
        let first = f64::from(first) / 8.0;
        let terms: Vec<String> = model
            .terms
            .iter()
            .map(|term| {
                let mut operand = format!("delay(x{}, by: {first} s)", term.source);
                for _ in 0..term.derivatives {
                    operand = format!("derivative({operand})");
                }
                term.written(term.coefficient, &format!("delay({operand}, by: {} s)", term.delay - first))
            })
            .collect();
        let text = format!("{}\nmargin m : kN = {} kN + {}", model.declarations().join("\n"), model.constant, terms.join(" + "));
        same(&model, &text)?;
    }

    #[test]
    fn sources_in_a_part(model in combination()) {
        let plain = format!("{}\n{LIMIT_STATE}", model.text());
        let terms: Vec<String> = model
            .terms
            .iter()
            .map(|term| term.written(term.coefficient, &term.operand(&format!("loads.x{}", term.source))))
            .collect();
        let other = format!(
            "use \"loads.limit\" as loads\nmargin m : kN = {} kN + {}\n{LIMIT_STATE}",
            model.constant, terms.join(" + ")
        );
        let part = model.declarations().join("\n");
        let beside = results_beside(&other, &[("loads.limit", &part)]);
        prop_assert_eq!(numbers(&results(&plain)), numbers(&beside), "{}", plain);
    }
}
