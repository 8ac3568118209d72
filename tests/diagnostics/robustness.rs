//! Texts that no one would write on purpose. None may panic or run on without end; whatever is wrong is said.

use crate::support::memory::{Memory, Run, run};
use crate::support::random::Random;
use outcross::diagnostics::Severity;
use outcross::source::{Disk, Reader, Unreadable};
use std::fs;
use std::path::{Path, PathBuf};

fn check(text: &str) -> Run {
    Memory::of("model.limit", text).run("model.limit", true)
}

/// A text that is wrong: there is no model, and an error says why.
fn refused(text: &str) -> Run {
    let run = check(text);
    assert!(run.model.is_none(), "{text}");
    assert!(run.diagnostics.iter().any(|one| one.severity() == Severity::Error));
    run
}

fn process(deviation: &str, correlation: &str) -> String {
    format!("process pull : kN = gaussian(mean: 3 kN, standard_deviation: {deviation}, correlation: {correlation})\n")
}

#[test]
fn an_empty_file_is_an_empty_model() {
    for text in ["", "\n", "   \t ", "# nothing but a comment", "\u{feff}", "\r\n\r\n"] {
        let run = check(text);
        assert!(run.diagnostics.is_empty(), "{}", run.shown());
        assert!(run.model.is_some());
    }
}

#[test]
fn scatter_that_is_none() {
    for deviation in ["0", "0 kN", "-0.0 kN", "-1 kN", "1e-400 kN", "-1e-300 kN"] {
        let run = refused(&process(deviation, "exponential(length: 1 s)"));
        assert_eq!(run.codes(), ["value/range"], "{deviation}");
    }
}

#[test]
fn arithmetic_without_a_value() {
    for value in [
        "0/0",
        "1/0",
        "1e999",
        "-1e999 kN",
        "1e400 - 1e400",
        "sqrt(-1)",
        "ln(0)",
        "ln(-1)",
        "log10(0)",
        "asin(2)",
        "acos(-1.5)",
        "exp(1000)",
        "cosh(1e6)",
        "0^-1",
        "(-8)^(1/3)",
        "(0 kN)^-1",
        "1e308 * 10",
        "1e308 + 1e308",
        "1e308 km^3",
        "tan(1 rad * 1e999)",
    ] {
        let run = refused(&format!("constant a = {value}\n"));
        assert!(
            run.codes().iter().all(|code| *code == "value/not-finite"),
            "{value}: {:?}",
            run.codes()
        );
    }
}

#[test]
fn values_at_the_edge_of_what_a_double_holds() {
    for value in [
        "1e308",
        "-1e308",
        "1e-308",
        "4.9e-324",
        "1e308 mm",
        "9007199254740993",
        "0e999",
    ] {
        let run = check(&format!("constant a = {value}\n"));
        assert!(run.diagnostics.is_empty(), "{value}: {}", run.shown());
    }
    for (deviation, length) in [
        ("1e160 kN", "1 s"),
        ("1e305 kN", "1 s"),
        ("1e-170 kN", "1 s"),
        ("1e-320 kN", "1 s"),
        ("1 kN", "1e300 s"),
        ("1 kN", "1e-300 s"),
        ("1 kN", "1e-310 s"),
        ("1e150 kN", "1e-160 s"),
    ] {
        let correlations = [
            format!("squared_exponential(length: {length})"),
            format!("matern(smoothness: 5/2, length: {length})"),
            format!("rational_quadratic(mixture: 2, length: {length})"),
            format!("damped_cosine(frequency: 1 Hz, scale_of_fluctuation: {length})"),
            format!("oscillator(frequency: 1 / {length} * 1 rad, damping: 1e-300)"),
        ];
        for correlation in correlations {
            let text = process(deviation, &correlation)
                + "limit state far { failure when pull > 1e300 kN\n reference period 1e300 year }\n\
                   limit state near { failure when abs(pull) > 1e-300 kN\n reference period 1e-300 s }\n";
            check(&text);
        }
    }
}

#[test]
fn numbers_of_odd_forms() {
    for value in [
        "1e99999999999999999999",
        "1e-99999999999999999999",
        "0.00000000000000000000000000000000000000000000000001",
        "1_000_000_000_000_000_000_000",
        "1__0",
        "1.e5",
        ".5",
        "1e",
        "0x10",
        "NaN",
        "inf",
        "٣",
        "1 m^999999999999",
        "1 m^-128",
        "1 m^127*m^127",
        "(1 m)^1e9",
        "(1 m)^0.123456789",
        "(1 m)^(0/0)",
        "2^1e999",
    ] {
        check(&format!("constant a = {value}\n"));
    }
    let digits = "9".repeat(100_000);
    check(&format!(
        "constant a = {digits}\nconstant b = 0.{digits}\nconstant c = 1e{digits}\n"
    ));
}

#[test]
fn deep_brackets() {
    let nested = |depth: usize| format!("constant a = {}1{}\n", "(".repeat(depth), ")".repeat(depth));
    assert!(check(&nested(150)).diagnostics.is_empty());
    for depth in [300, 10_000, 200_000] {
        assert_eq!(refused(&nested(depth)).codes(), ["syntax/nesting"], "{depth}");
    }
    for opening in ["(", "sqrt(", "-(", "{", "gaussian(mean: ", "2^(", "any("] {
        refused(&format!("constant a = {}\n", opening.repeat(50_000)));
        refused(&format!(
            "limit state a {{ failure when {} }}\n",
            opening.repeat(50_000)
        ));
    }
    check(&format!("constant a = {}1\n", "-".repeat(200_000)));
    check(&format!("constant a = 1{}\n", "^1".repeat(50_000)));
    check(&format!("constant a = 1{}\n", " + 1".repeat(200_000)));
    check(&format!("constant a = 1{}\n", " * 1".repeat(200_000)));
    check(&format!("constant a = b{}\n", ".b".repeat(100_000)));
    check(&format!("constant a = 1 m{}\n", "*m".repeat(50_000)));
}

#[test]
fn a_long_chain_and_a_long_circle() {
    let chain: String = (0..10_000)
        .map(|i| format!("constant a{i} = a{} + 1\n", i + 1))
        .collect();
    let run = check(&format!("{chain}constant a10000 = 1\n"));
    assert!(run.diagnostics.is_empty(), "{}", run.shown());
    let run = refused(&format!("{chain}constant a10000 = a0\n"));
    assert_eq!(run.codes(), ["name/cycle"]);
    assert!(run.shown().len() < 10_000, "a circle is shown by its beginning");
}

#[test]
fn circles_of_all_with_all() {
    let sum: Vec<String> = (0..200).map(|i| format!("a{i}")).collect();
    let all: String = (0..200)
        .map(|i| format!("constant a{i} = {}\n", sum.join(" + ")))
        .collect();
    let run = refused(&all);
    assert!(
        run.codes().iter().all(|code| *code == "name/cycle"),
        "{:?}",
        run.codes()
    );
    assert!(run.diagnostics.len() <= 200, "{}", run.diagnostics.len());
}

#[test]
fn parts_in_a_circle() {
    let files = Memory::of("a.limit", "use \"b.limit\" as b\n")
        .with("b.limit", "use \"./c.limit\" as c\nuse \"c.limit\" as d\n")
        .with("c.limit", "use \"a.limit\" as a\n");
    let run = files.run("a.limit", true);
    assert!(run.model.is_none());
    assert!(run.codes().iter().all(|code| *code == "part/cycle"), "{}", run.shown());
    let run = Memory::of("a.limit", "use \"a.limit\" as a\n").run("a.limit", true);
    assert_eq!(run.codes(), ["part/cycle"]);
}

#[test]
fn parts_that_double_at_every_level() {
    let mut files = Memory::default();
    for level in 0..30 {
        let next = level + 1;
        let text = format!("use \"{next}.limit\" as a\nuse \"{next}.limit\" as b\nprocess x = a.x + b.x\n");
        files.insert(format!("{level}.limit"), text);
    }
    files.insert(
        "30.limit",
        "process x = gaussian(standard_deviation: 1, correlation: exponential(length: 1 s))\n",
    );
    let run = files.run("0.limit", true);
    assert!(run.model.is_none());
    assert!(run.codes().contains(&"model/too-large"), "{:?}", run.codes());
}

#[test]
fn parts_in_a_long_chain() {
    let mut files = Memory::default();
    for level in 0..200 {
        files.insert(format!("{level}.limit"), format!("use \"{}.limit\" as a\n", level + 1));
    }
    assert_eq!(files.run("0.limit", true).codes(), ["model/too-large"]);
}

#[test]
fn sums_that_double_at_every_step() {
    let mut text = process("1 kN", "exponential(length: 1 s)").replace("pull", "x0");
    for step in 1..60 {
        text += &format!(
            "process x{step} = x{0} + delay(x{0}, by: {1} s)\n",
            step - 1,
            1_u64 << step
        );
    }
    let run = refused(&text);
    assert!(run.codes().contains(&"model/too-large"), "{:?}", run.codes());
}

/// A reader that always fails in the same way.
struct Failing(Unreadable);

impl Reader for Failing {
    fn read(&self, _: &Path) -> Result<String, Unreadable> {
        Err(self.0.clone())
    }

    fn identity(&self, path: &Path) -> PathBuf {
        path.to_path_buf()
    }
}

#[test]
fn files_that_cannot_be_read() {
    let mut shown = String::new();
    for (why, code) in [
        (Unreadable::Missing, "file/unreadable"),
        (Unreadable::Folder, "file/unreadable"),
        (Unreadable::NotAFile, "file/unreadable"),
        (Unreadable::Absolute, "file/outside"),
        (Unreadable::Outside(PathBuf::from("/srv/models")), "file/outside"),
        (Unreadable::NotUtf8(3), "file/unreadable"),
        (
            Unreadable::Other("the lock is held by another".to_owned()),
            "file/unreadable",
        ),
        (Unreadable::TooLarge, "file/too-large"),
    ] {
        let run = run(&Failing(why), Path::new("model.limit"), true);
        assert!(run.model.is_none());
        assert_eq!(run.codes(), [code]);
        shown += &run.shown();
    }
    insta::assert_snapshot!(shown);
}

#[test]
fn files_on_the_disk_that_cannot_be_read() {
    let folder = std::env::temp_dir().join(format!("outcross-robustness-{}", std::process::id()));
    fs::create_dir_all(folder.join("inner")).expect("a folder for this test");
    fs::write(folder.join("latin.limit"), b"# Tr\xe4ger\n").expect("a file for this test");
    fs::write(
        folder.join("user.limit"),
        "use \"inner\" as a\nuse \"latin.limit\" as b\nuse \"nothing\" as c\n",
    )
    .expect("a file for this test");
    let disk = Disk::within(&folder).expect("the folder is there");
    for name in [
        "inner",
        "latin.limit",
        "nothing.limit",
        "latin.limit/nothing.limit",
        "\0",
        "",
    ] {
        let run = run(&disk, &folder.join(name), true);
        assert!(run.model.is_none(), "{name}");
        assert_eq!(run.codes(), ["file/unreadable"], "{name}");
    }
    let run = run(&disk, &folder.join("user.limit"), true);
    assert_eq!(run.codes(), ["file/unreadable"; 3]);
    fs::remove_dir_all(&folder).expect("the folder of this test can be removed");
}

#[test]
fn a_model_without_a_repository_reads_its_own_folder() {
    let folder = std::env::temp_dir().join(format!("outcross-root-{}", std::process::id()));
    fs::create_dir_all(folder.join("inner")).expect("a folder for this test");
    let real = fs::canonicalize(&folder).expect("the folder is there");
    assert_eq!(Disk::around(&folder.join("model.limit")).root(), real);
    assert_eq!(Disk::around(&folder.join("inner/../model.limit")).root(), real);
    fs::create_dir(folder.join(".git")).expect("a folder for this test");
    assert_eq!(Disk::around(&folder.join("inner/model.limit")).root(), real);
    assert_eq!(Disk::around(&folder.join("nowhere/model.limit")).root(), real);
    fs::remove_dir_all(&folder).expect("the folder of this test can be removed");
}

/// A text of characters that `character` makes of numbers from 0 to 255.
fn noise(length: usize, character: impl Fn(u8) -> char) -> String {
    let mut random = Random(20);
    (0..length).map(|_| character(random.next() as u8)).collect()
}

/// Mostly what a keyboard has.
fn typed(number: u8) -> char {
    char::from(if number < 8 { b'\n' } else { 32 + number % 95 })
}

#[test]
fn ten_megabytes_of_noise() {
    refused(&noise(10 << 20, |number| char::from(32 + number % 95)));
    refused(&noise(1 << 20, typed));
    refused(&noise(1 << 20, |number| {
        char::from_u32(u32::from(number) * 37).unwrap_or(' ')
    }));
}

#[test]
fn ten_megabytes_of_declarations() {
    let line = "constant a = 3 kN + 2 kN * sqrt(4) # and so on\n";
    let run = refused(&line.repeat((10 << 20) / line.len()));
    assert!(run.codes().iter().all(|code| *code == "name/repeated"));
}

#[test]
fn tables_of_nonsense() {
    let model = process("1 kN", "tabulated(\"table.csv\", beyond: zero)");
    for table in [
        "",
        "\n\n",
        "lag [s],correlation",
        "lag [s],correlation\n0,1\n0.1,nan\n0.2,0\n",
        "lag [s],correlation\n0,1\n0.1,1e999\n0.2,0\n",
        "lag [s],correlation\n0,1\n0.1,\n0.2,0\n",
        "lag [s],correlation\n0,1\n\n\n0.1,\"0.9\n0.2,0\n",
        "lag [s],correlation\n0,1\n1e-320,0.5\n2e-320,0\n",
        "lag [s],correlation,,,\n0,1,2,3\n",
        "lag [,correlation\n0,1\n",
        "lag [s^99999999999],correlation\n0,1\n",
        "\u{feff}lag,lag\n",
        "橋 [s],correlation\n0,1\n",
    ] {
        let run = Memory::of("model.limit", &model)
            .with("table.csv", table)
            .run("model.limit", true);
        assert!(run.model.is_none(), "{table}");
        assert!(!run.shown().is_empty());
    }
    let bytes = noise(1 << 20, typed);
    let run = Memory::of("model.limit", &model)
        .with("table.csv", &bytes)
        .run("model.limit", true);
    assert!(run.model.is_none());
}
