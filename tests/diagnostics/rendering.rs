//! How findings are drawn where the text is not plain: other scripts, tabs, line ends, wide characters, long lines.

use super::memory::Memory;
use outcross::diagnostics::terminal;

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
