//! What a model may read: ordinary files inside of the root folder, wherever its paths and links lead.

use super::{Folder, GUST, Run};
use std::fs;
use std::path::PathBuf;

/// Something that nobody who reads the log should see.
const SECRET: &str = "the key is 4711\n";

/// A project of two folders, with a file outside of it.
fn project() -> Folder {
    let folder = Folder::with("project/models/a.limit", "use \"../parts/gust.limit\" as gust\n");
    folder.write("project/parts/gust.limit", GUST);
    folder.write("secret.limit", SECRET);
    folder
}

/// Checks a model of the project that is this text.
fn check(folder: &Folder, text: &str, arguments: &[&str]) -> Run {
    folder.write("project/models/b.limit", text);
    let run = folder.run([&["check", "project/models/b.limit"], arguments].concat());
    assert!(!run.err.contains("4711") && !run.out.contains("4711"), "{}", run.err);
    run
}

#[track_caller]
fn is_outside(run: Run, root: &str) {
    let run = run.ends_with(2);
    assert!(run.err.contains("file/outside"), "{}", run.err);
    assert!(run.err.contains(root), "{}", run.err);
    assert!(run.err.contains("--root FOLDER"), "{}", run.err);
}

#[test]
fn the_root_is_the_nearest_folder_with_a_repository() {
    let folder = project();
    folder.write("project/.git/HEAD", "ref: refs/heads/main\n");
    folder.run(["check", "project/models/a.limit"]).ends_with(0);
    is_outside(check(&folder, "use \"../../secret.limit\" as s", &[]), "project`");
    // A working copy beside the repository has a file in place of the folder.
    folder.write("project/models/.git", "gitdir: elsewhere\n");
    is_outside(folder.run(["check", "project/models/a.limit"]), "models`");
}

#[test]
fn the_root_is_the_folder_that_is_named() {
    let folder = project();
    for root in ["project", "./project/models/..", "."] {
        let run = folder.run(["check", "project/models/a.limit", "--root", root]);
        assert_eq!(run.status, 0, "{root}: {}", run.err);
    }
    is_outside(
        check(
            &folder,
            "use \"../parts/gust.limit\" as g",
            &["--root", "project/models"],
        ),
        "models`",
    );
    is_outside(
        check(&folder, "use \"../../secret.limit\" as s", &["--root", "project"]),
        "project`",
    );
    // Whether something is there is not told either.
    is_outside(
        check(&folder, "use \"../../nothing.limit\" as s", &["--root", "project"]),
        "project`",
    );
    is_outside(
        check(&folder, "use \"../../no/thing.limit\" as s", &["--root", "project"]),
        "project`",
    );
    let table =
        "process a = gaussian(standard_deviation: 1, correlation: tabulated(\"../../secret.limit\", beyond: zero))";
    is_outside(check(&folder, table, &["--root", "project"]), "project`");
    let run = check(&folder, "use \"../parts/nothing.limit\" as s", &["--root", "project"]).ends_with(2);
    assert!(run.err.contains("there is no such file"), "{}", run.err);
}

#[test]
fn a_root_that_is_no_folder() {
    let folder = project();
    for root in ["nowhere", "secret.limit", ""] {
        let run = folder
            .run(["check", "project/models/a.limit", "--root", root])
            .ends_with(2);
        assert!(run.err.contains("--root"), "{}", run.err);
    }
}

#[test]
fn a_model_outside_of_the_root() {
    let folder = project();
    for command in ["check", "evaluate"] {
        let run = folder.run([command, "secret.limit", "--root", "project"]).ends_with(2);
        assert!(
            run.err.contains("file/outside") && !run.err.contains("4711"),
            "{}",
            run.err
        );
    }
}

#[test]
fn absolute_paths_are_not_followed() {
    let folder = project();
    let inside = folder.path("project/parts/gust.limit");
    for target in [
        inside,
        PathBuf::from("/etc/passwd"),
        PathBuf::from("//server/share/a.limit"),
    ] {
        let run = check(&folder, &format!("use \"{}\" as g", target.display()), &["--root", "."]).ends_with(2);
        assert!(run.err.contains("file/outside"), "{}", run.err);
        assert!(run.err.contains("by relative paths only"), "{}", run.err);
    }
}

#[test]
fn a_model_on_standard_input_stands_in_the_working_folder() {
    let folder = project();
    let run = |text: &str, arguments: &[&str]| {
        let mut command = folder.command();
        command.current_dir(folder.path("project/models"));
        Run::of(command.args([&["check", "-"], arguments].concat()), text.as_bytes())
    };
    run("use \"a.limit\" as a", &["--root", ".."]).ends_with(0);
    folder.write("project/models/.git/HEAD", "");
    is_outside(run("use \"../parts/gust.limit\" as g", &[]), "models`");
    run("use \"../parts/gust.limit\" as g", &["--root", ".."]).ends_with(0);
}

#[cfg(unix)]
#[test]
fn links_count_by_where_they_lead() {
    use std::os::unix::fs::symlink;
    let folder = project();
    let link = |target: &str, name: &str| symlink(target, folder.path(name)).expect("a link can be made");
    link("../parts/gust.limit", "project/models/inside.limit");
    link("../../secret.limit", "project/models/outside.limit");
    link("../..", "project/models/up");
    link("../nothing.limit", "project/models/broken.limit");
    link("loop.limit", "project/models/loop.limit");
    let check = |text: &str| check(&folder, text, &["--root", "project"]);
    check("use \"inside.limit\" as a").ends_with(0);
    is_outside(check("use \"outside.limit\" as a"), "project`");
    is_outside(check("use \"up/secret.limit\" as a"), "project`");
    is_outside(check("use \"up/nothing.limit\" as a"), "project`");
    check("use \"up/project/parts/gust.limit\" as a").ends_with(0);
    check("use \"broken.limit\" as a").ends_with(2);
    check("use \"loop.limit\" as a").ends_with(2);
    // The same for what the command line names, such as all files of a change.
    is_outside(
        folder.run(["check", "project/models/outside.limit", "--root", "project"]),
        "project`",
    );
    folder.write("project/.git/HEAD", "");
    is_outside(folder.run(["check", "project/models/outside.limit"]), "project`");
    is_outside(folder.run(["check", "project/models/up/secret.limit"]), "project`");
    // A root may itself be a link.
    link("project", "linked");
    folder
        .run(["check", "linked/models/a.limit", "--root", "linked"])
        .ends_with(0);
    folder.run(["check", "linked/models/a.limit"]).ends_with(0);
}

#[cfg(unix)]
#[test]
fn devices_and_pipes_are_not_opened() {
    let folder = project();
    for (name, text) in [
        ("device", "use \"../null.limit\" as a"),
        ("pipe", "use \"../pipe.limit\" as a"),
    ] {
        let pipe = folder.path("project/pipe.limit");
        let _ = fs::remove_file(&pipe);
        let made = std::process::Command::new("mkfifo").arg(&pipe).status();
        assert!(made.is_ok_and(|status| status.success()));
        let null = folder.path("project/null.limit");
        let _ = fs::remove_file(&null);
        std::os::unix::fs::symlink("/dev/zero", &null).expect("a link can be made");
        let run = check(&folder, text, &["--root", "/"]).ends_with(2);
        assert!(run.err.contains("it is a device or a pipe"), "{name}: {}", run.err);
    }
}
