//! How findings are drawn where the text is not plain: other scripts, tabs, line ends, wide characters, long lines.

use crate::support::memory::Memory;
use outcross::diagnostics::{json, terminal};

fn shown(text: &str) -> String {
    Memory::of("model.limit", text).run("model.limit", false).shown()
}

#[test]
fn names_of_other_scripts() {
    insta::assert_snapshot!(shown(
        "constant σ_tárolt = 12 mm2\nconstant Länge = 3 m + σ_Größe\nconstant 幅 = 200 mm + 幅員\n"
    ));
}

#[test]
fn wide_characters_and_marks_that_combine() {
    insta::assert_snapshot!(shown(
        "# 橋\nconstant 梁の高さ = 梁幅 + 3 m\nconstant e\u{301}paisseur = 3 m + 2 kN\ntitle \"🌉\" constant a = 3 m + 2 kN\n"
    ));
}

#[test]
fn tabs() {
    insta::assert_snapshot!(shown(
        "constant\tthickness\t=\t12 mm\t+\t3 kN\n\t\tconstant width = 3 mn2\n"
    ));
}

#[test]
fn line_ends_of_two_characters() {
    let text = "# Girder.\nconstant a = 3 m + 2 kN\n\nconstant b = (3 m +\n    2 kN\n)\n";
    let plain = shown(text);
    let other = shown(&text.replace('\n', "\r\n"));
    assert_eq!(plain, other);
    insta::assert_snapshot!(other);
}

#[test]
fn a_byte_order_mark() {
    insta::assert_snapshot!(shown("\u{feff}constant a = 3 m + 2 kN\n"));
}

#[test]
fn the_end_of_the_file() {
    insta::assert_snapshot!(shown("constant a = 3 m\nconstant b = a +"));
    insta::assert_snapshot!(shown("constant a = 3 m\nconstant b = a +\n\n\n"));
    insta::assert_snapshot!(shown("constant b = π_"));
}

#[test]
fn very_long_lines() {
    let many = vec!["1 m"; 2000].join(" + ");
    insta::assert_snapshot!(shown(&format!("constant a = {many} + 3 kN\nconstant b = {many}\n")));
    let name = "a".repeat(3000);
    let run = shown(&format!("constant b = {name}\n"));
    assert!(run.lines().count() < 20, "{run}");
}

#[test]
fn a_finding_over_many_lines() {
    insta::assert_snapshot!(shown(
        "process pull : kN = 2 * gaussian(\n    mean: 3 kN\n    # A comment between.\n    standard_deviation: 2 kN\n\n    correlation: exponential(length: 3 s)\n)\n"
    ));
}

#[test]
fn more_findings_than_are_drawn() {
    let text: String = (0..130).map(|i| format!("constant a{i} = 3 m + 2 kN\n")).collect();
    let shown = shown(&text);
    assert_eq!(shown.matches("[unit/mismatch]").count(), 100);
    assert!(
        shown.ends_with("... and 30 more; `check --json` lists them all\n"),
        "{shown}"
    );
}

#[test]
fn colours_are_asked_for() {
    let run = Memory::of("model.limit", "constant a = 3 m + 2 kN\n").run("model.limit", false);
    let mut coloured = Vec::new();
    terminal::write(&mut coloured, &run.files, &run.diagnostics, true).expect("a vector takes everything");
    assert!(coloured.contains(&0x1b));
    assert!(!run.shown().contains('\u{1b}'));
}

#[test]
fn a_byte_order_mark_is_no_column() {
    for ending in ["\n", "\r\n"] {
        let text = format!("\u{feff}constant a = 3 m + 2 kN{ending}constant b = 3 m + 2 kN{ending}");
        let run = Memory::of("model.limit", &text).run("model.limit", false);
        let document = serde_json::to_value(json::document(&run.files, &run.diagnostics)).expect("findings are JSON");
        for (line, finding) in document["diagnostics"].as_array().expect("a list").iter().enumerate() {
            assert_eq!(finding["line"], line + 1);
            assert_eq!([&finding["column"], &finding["end_column"]], [20, 24]);
        }
        // With the mark or without, what is drawn is the same.
        assert_eq!(run.shown(), shown(text.trim_start_matches('\u{feff}')));
    }
}

#[test]
fn columns_count_characters_whatever_their_width() {
    let text = "constant 梁e\u{301}🌉 = 3 m + 2 kN\n";
    let run = Memory::of("model.limit", text).run("model.limit", false);
    let document = serde_json::to_value(json::document(&run.files, &run.diagnostics)).expect("findings are JSON");
    let first = &document["diagnostics"][0];
    assert_eq!(first["line"], 1);
    assert!(first["column"].as_u64().is_some_and(|column| column >= 10), "{first}");
}

#[test]
fn emoji_of_several_characters_and_scripts_from_the_right() {
    insta::assert_snapshot!(shown(
        "title \"👩‍🔧🇨🇭\" constant a = 3 m + 2 kN\nconstant عرض = 3 m + 2 kN\nconstant רוחב = אורך\n"
    ));
}

#[test]
fn a_place_in_the_middle_of_a_long_line() {
    let many = vec!["1 m"; 700].join(" + ");
    let shown = shown(&format!("constant a = {many} + 3 kN + {many}\n"));
    assert!(shown.len() < 600, "{shown}");
    insta::assert_snapshot!(shown);
}

#[test]
fn a_long_line_of_tabs_and_wide_characters() {
    let many = vec!["梁\t"; 700].join("+ ");
    let declared = "constant 梁 = 1 m\n";
    insta::assert_snapshot!(shown(&format!("{declared}constant a = {many} + e\u{301}\t+ {many}\n")));
    let text = format!("\u{feff}constant a = b + \"{}\"\r\n", "🌉".repeat(3000));
    let shown = shown(&text);
    assert!(shown.len() < 1500, "{shown}");
}

#[test]
fn a_long_line_beside_a_short_one() {
    let many = vec!["1 m"; 700].join(" + ");
    insta::assert_snapshot!(shown(&format!("constant a = {many}\nconstant a = 2\n")));
}

#[test]
fn the_end_of_a_file_of_other_kinds() {
    for text in [
        "constant a = 3 m\r\nconstant b = a +",
        "constant a = 3 m\r\nconstant b = a +\r\n",
        "constant b = 梁 +\t",
        "constant b = (",
        "title \"🌉",
        "\u{feff}constant b = (3 m",
    ] {
        let run = Memory::of("model.limit", text).run("model.limit", false);
        assert!(!run.diagnostics.is_empty(), "{text}");
        let shown = run.shown();
        assert!(shown.contains("model.limit:"), "{shown}");
    }
    insta::assert_snapshot!(shown("constant b = 梁 +\t"));
}

#[test]
fn control_characters_do_not_reach_the_terminal() {
    let long = " + 1".repeat(300);
    for text in [
        "constant a = 3 m + 2 kN # \u{1b}[31m\u{7}\n".to_owned(),
        "constant a\u{1b}[2J = 3 m + 2 kN\n".to_owned(),
        format!("title \"\u{1b}]0;x\u{7}\" constant a = 3 m + 2 kN{long}\n"),
    ] {
        let run = shown(&text);
        assert!(!run.is_empty() && !run.contains(['\u{1b}', '\u{7}']), "{run}");
    }
}
