//! `ventrise new`: a case file to start from.

#![allow(clippy::unwrap_used)]

use std::collections::BTreeSet;
use std::fs;
use std::path::Path;
use std::process::{Command, Output};

use tempfile::TempDir;

fn run(place: &TempDir, words: &[&str]) -> (i32, String, String) {
    let mut command = Command::new(env!("CARGO_BIN_EXE_ventrise"));
    let Output { status, stdout, stderr } =
        command.current_dir(place.path()).args(words).output().unwrap();
    let text = |bytes| String::from_utf8(bytes).unwrap();
    (status.code().unwrap(), text(stdout), text(stderr))
}

fn names(place: &TempDir) -> Vec<String> {
    let entries = fs::read_dir(place.path()).unwrap();
    let mut names: Vec<String> =
        entries.map(|e| e.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    names
}

/// The worked examples as they lie in `cases/`: name and text.
fn examples() -> Vec<(String, String)> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("cases");
    let files = fs::read_dir(folder).unwrap().map(|e| e.unwrap().path());
    files
        .map(|p| {
            let name = p.file_stem().unwrap().to_str().unwrap().to_string();
            (name, fs::read_to_string(&p).unwrap())
        })
        .collect()
}

#[test]
fn what_is_written_passes_check_and_is_the_example() {
    for (name, text) in examples() {
        let place = tempfile::tempdir().unwrap();
        let (code, out, err) = run(&place, &["new", "mine", "--from", &name]);
        assert_eq!((code, err.as_str()), (0, ""), "{name}");
        assert!(out.contains("mine.toml written"), "{out}");
        assert_eq!(names(&place), ["mine.toml"]);
        assert_eq!(fs::read_to_string(place.path().join("mine.toml")).unwrap(), text, "{name}");
        let (code, _, err) = run(&place, &["check", "mine.toml", "--no-layout"]);
        assert_eq!((code, err.as_str()), (0, ""), "{name}");
    }
}

#[test]
fn without_a_scenario_it_starts_from_the_wall_cabinet() {
    let place = tempfile::tempdir().unwrap();
    // The ending may be typed; what follows another dot belongs to the name.
    for (typed, written) in [("a", "a.toml"), ("b.TOML", "b.TOML"), ("c.v2", "c.v2.toml")] {
        assert_eq!(run(&place, &["new", typed]).0, 0);
        let text = fs::read_to_string(place.path().join(written)).unwrap();
        assert!(text.starts_with("# Wall charger cabinet\n"), "{typed}");
    }
    assert_eq!(names(&place), ["a.toml", "b.TOML", "c.v2.toml"]);
}

#[test]
fn nothing_is_overwritten() {
    let place = tempfile::tempdir().unwrap();
    let file = place.path().join("radio.toml");
    fs::write(&file, "mine").unwrap();
    for typed in ["radio", "radio.toml", "./radio"] {
        let (code, out, err) = run(&place, &["new", typed, "--from", "mast-radio"]);
        assert_eq!((code, out.as_str()), (2, ""));
        assert!(err.contains("radio.toml exists already"), "{err}");
        assert_eq!(fs::read_to_string(&file).unwrap(), "mine");
    }
    // Nor is a folder, or something that only a link leads to.
    fs::create_dir(place.path().join("folder.toml")).unwrap();
    assert_eq!(run(&place, &["new", "folder"]).0, 2);
    #[cfg(unix)]
    {
        std::os::unix::fs::symlink("elsewhere.toml", place.path().join("link.toml")).unwrap();
        assert_eq!(run(&place, &["new", "link"]).0, 2);
    }
    assert!(!names(&place).contains(&"elsewhere.toml".to_string()));
}

#[test]
fn the_list_has_every_example_with_what_it_is_about() {
    let place = tempfile::tempdir().unwrap();
    let (code, out, err) = run(&place, &["new", "--list"]);
    assert_eq!((code, err.as_str()), (0, ""));
    let listed: BTreeSet<(String, String)> = out
        .lines()
        .map(|line| line.split_once("  ").unwrap())
        .map(|(name, about)| (name.to_string(), about.trim().to_string()))
        .collect();
    let expected: BTreeSet<(String, String)> = examples()
        .into_iter()
        .map(|(name, text)| {
            let first = text.lines().next().unwrap();
            (name, first.strip_prefix("# ").unwrap().to_string())
        })
        .collect();
    assert_eq!(listed, expected, "src/new.rs and cases/ must agree");
    assert!(out.lines().all(|line| line.chars().count() <= 100), "{out}");
    assert!(names(&place).is_empty());
}

#[test]
fn unknown_scenarios_and_names_are_refused() {
    let place = tempfile::tempdir().unwrap();
    for (typed, hint) in [
        ("wall-cabinett", "the nearest is \"wall-cabinet\""),
        ("mast radio", "the nearest is \"mast-radio\""),
        ("xyzzy", "ventrise new --list"),
    ] {
        let (code, out, err) = run(&place, &["new", "case", "--from", typed]);
        assert_eq!((code, out.as_str()), (2, ""));
        assert!(err.contains(&format!("\"{typed}\"")) && err.contains(hint), "{err}");
    }
    for name in ["..", "sub/", ""] {
        let (code, _, err) = run(&place, &["new", name]);
        assert_eq!(code, 2, "{name}: {err}");
    }
    // No name, or a name where nothing will be written.
    assert_eq!(run(&place, &["new"]).0, 2);
    assert_eq!(run(&place, &["new", "case", "--list"]).0, 2);
    assert!(names(&place).is_empty());
    // A folder that is not there is the file system's trouble.
    let (code, _, err) = run(&place, &["new", "no/such/case"]);
    assert_eq!(code, 5);
    assert!(err.contains("no/such/case.toml"), "{err}");
}
