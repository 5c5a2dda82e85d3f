//! The program as it is called: exit codes, what it prints, what it leaves behind.
//!
//! Printed text is compared with `tests/cli/*.txt`, times, paths and round-off masked. To accept
//! what is printed now, run the tests once with `VENTRISE_ACCEPT=1` and read the difference.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

use std::fs;
use std::io::{BufRead, BufReader, Read};
use std::path::Path;
use std::process::{Command, Output, Stdio};

use serde_json::Value;
use tempfile::TempDir;

const SLAB: &str = include_str!("cases/slab.toml");
const RING: &str = include_str!("cases/ring.toml");

/// A folder of its own with one case in it.
fn place(case: &str) -> TempDir {
    let place = tempfile::tempdir().unwrap();
    fs::write(place.path().join("case.toml"), case).unwrap();
    place
}

fn ventrise(place: &TempDir, words: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_ventrise"));
    command.current_dir(place.path()).args(words);
    command
}

fn run(place: &TempDir, words: &[&str]) -> (i32, String, String) {
    let Output { status, stdout, stderr } = ventrise(place, words).output().unwrap();
    let text = |bytes| String::from_utf8(bytes).unwrap();
    (status.code().unwrap(), text(stdout), text(stderr))
}

fn names(folder: &Path) -> Vec<String> {
    let entries = fs::read_dir(folder).unwrap();
    let mut names: Vec<String> =
        entries.map(|e| e.unwrap().file_name().into_string().unwrap()).collect();
    names.sort();
    names
}

fn summary(place: &TempDir, folder: &str) -> Value {
    let path = place.path().join(folder).join("summary.json");
    serde_json::from_str(&fs::read_to_string(path).unwrap()).unwrap()
}

/// Text without what differs from run to run.
fn masked(text: &str) -> String {
    let mut out = String::new();
    for line in text.lines() {
        let line = match line {
            l if l.starts_with("Work ") => {
                let cells = l.find(" cells,").map_or(l, |n| &l[..n + 7]);
                format!("{cells} (iterations and times)")
            }
            l => match l.find("off by ") {
                Some(n) => format!("{}off by (round-off)", &l[..n]),
                None => l.to_string(),
            },
        };
        out.push_str(line.trim_end());
        out.push('\n');
    }
    out
}

fn same_as_accepted(name: &str, text: &str) {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/cli").join(name);
    let text = masked(text);
    if std::env::var_os("VENTRISE_ACCEPT").is_some() {
        fs::write(&path, &text).unwrap();
        return;
    }
    let accepted = fs::read_to_string(&path).unwrap().replace("\r\n", "\n");
    for (n, pair) in accepted.lines().zip(text.lines()).enumerate() {
        assert_eq!(pair.0, pair.1, "{name}, line {}; all of it:\n{text}", n + 1);
    }
    assert_eq!(accepted.lines().count(), text.lines().count(), "{name}; all of it:\n{text}");
}

#[test]
fn help_has_examples_and_exit_codes() {
    let place = place(SLAB);
    for (name, words) in [
        ("help.txt", &["--help"][..]),
        ("help-new.txt", &["new", "--help"]),
        ("help-solve.txt", &["solve", "--help"]),
        ("help-check.txt", &["check", "--help"]),
        ("help-report.txt", &["report", "--help"]),
        ("help-benchmark.txt", &["benchmark", "--help"]),
        ("help-schema.txt", &["schema", "--help"]),
        ("help-completions.txt", &["completions", "--help"]),
        ("help-man.txt", &["man", "--help"]),
    ] {
        let (code, out, err) = run(&place, words);
        assert_eq!((code, err.as_str()), (0, ""));
        same_as_accepted(name, &out);
    }
}

#[test]
fn every_command_has_examples_a_manual_page_and_completions() {
    let place = place(SLAB);
    let (code, help, _) = run(&place, &["--help"]);
    assert_eq!(code, 0);
    let (_, commands) = help.split_once("Commands:\n").unwrap();
    let (commands, _) = commands.split_once("\n\n").unwrap();
    let names: Vec<&str> = commands
        .lines()
        .filter(|line| line.starts_with("  ") && !line.starts_with("   "))
        .map(|line| line.split_whitespace().next().unwrap())
        .filter(|name| *name != "help")
        .collect();
    assert!(names.len() >= 8 && names.contains(&"solve"), "{names:?}");
    let completions = ["bash", "zsh", "fish"].map(|shell| {
        let (code, out, err) = run(&place, &["completions", shell]);
        assert_eq!((code, err.as_str()), (0, ""), "{shell}");
        out
    });
    let (code, program, _) = run(&place, &["man"]);
    assert!(code == 0 && program.starts_with(".ie"), "{program}");
    for name in names {
        let (_, help, _) = run(&place, &[name, "--help"]);
        assert!(help.contains("Example"), "{name}: {help}");
        let (code, page, err) = run(&place, &["man", name]);
        assert_eq!((code, err.as_str()), (0, ""), "{name}");
        assert!(page.contains(&format!(".TH ventrise-{name} 1")), "{page}");
        assert!(program.contains(&format!("ventrise\\-{name}(1)")), "{name}: {program}");
        assert!(completions.iter().all(|text| text.contains(name)), "{name}");
    }
    let (code, out, err) = run(&place, &["man", "solv"]);
    assert!(code == 2 && out.is_empty() && err.contains("name of a command"), "{err}");
}

#[test]
fn the_schema_is_json_with_every_table() {
    let place = place(SLAB);
    let (code, out, err) = run(&place, &["schema"]);
    assert_eq!((code, err.as_str()), (0, ""));
    let schema: Value = serde_json::from_str(&out).unwrap();
    assert_eq!(schema["$schema"], "https://json-schema.org/draft/2020-12/schema");
    assert_eq!(schema["required"], serde_json::json!(["section", "ambient"]));
    let width = &schema["properties"]["section"]["properties"]["width"];
    assert_eq!(width["examples"], serde_json::json!(["120 mm"]));
    assert_eq!(schema["properties"]["mesh"]["properties"]["growth"]["default"], 1.2);
    assert_eq!(schema["properties"]["block"]["items"]["additionalProperties"], false);
}

#[test]
fn check_tells_what_was_understood_and_draws_it() {
    let place = place(RING);
    let (code, out, err) = run(&place, &["check", "case.toml"]);
    assert_eq!((code, err.as_str()), (0, ""));
    same_as_accepted("check-ring.txt", &out);
    assert_eq!(names(place.path()), ["case.layout.svg", "case.toml"]);
    let (code, ..) = run(&place, &["check", "case.toml", "--layout", "other.svg"]);
    assert_eq!(code, 0);
    let read = |name: &str| fs::read_to_string(place.path().join(name)).unwrap();
    assert_eq!(read("other.svg"), read("case.layout.svg"));
}

#[test]
fn check_writes_nothing_when_it_is_not_to_draw_or_the_case_is_wrong() {
    let ring = place(RING);
    let (code, out, err) = run(&ring, &["check", "case.toml", "--no-layout"]);
    assert_eq!((code, err.as_str()), (0, ""));
    assert!(!out.contains("Drawn"), "{out}");
    assert_eq!(names(ring.path()), ["case.toml"]);
    let wrong = place(&RING.replace("1 W", "1 mm"));
    assert_eq!(run(&wrong, &["check", "case.toml"]).0, 2);
    assert_eq!(names(wrong.path()), ["case.toml"]);
    // A drawing that cannot be written is told, after what was understood.
    let (code, out, err) = run(&ring, &["check", "case.toml", "--layout", "no/such/x.svg"]);
    assert_eq!(code, 5, "{err}");
    assert!(out.contains("Section") && err.contains("no/such/x.svg"), "{out}{err}");
}

#[test]
fn a_settled_run_is_0_and_leaves_every_file() {
    let place = place(SLAB);
    let (code, out, err) = run(&place, &["solve", "case.toml"]);
    assert_eq!(code, 0, "{out}{err}");
    same_as_accepted("solve-slab.txt", &out);
    assert_eq!(names(place.path()), ["case.results", "case.toml"]);
    // No air moves in it and no line probe is in it: no speed.svg, no profiles.svg.
    let files = [
        "case.toml",
        "fields.vtr",
        "heat-flux.svg",
        "history.csv",
        "history.svg",
        "layout.svg",
        "margins.svg",
        "parts.csv",
        "probes.csv",
        "report.html",
        "sides.csv",
        "slots.csv",
        "summary.json",
        "temperature.svg",
    ];
    assert_eq!(names(&place.path().join("case.results")), files);
    // The parabola's end: 70 degC; a cell's centre lies 2.5 mm before it.
    let s = summary(&place, "case.results");
    assert_eq!(s["verdict"], "settled");
    let end = s["probes"][0]["temperature_c"].as_f64().unwrap();
    assert!((end - 70.0).abs() < 0.05, "{end}");
    assert!(s["balance"]["heat_error"].as_f64().unwrap() < 1e-6);
    // What was solved, with all defaults resolved, is the same case again.
    fs::copy(place.path().join("case.results/case.toml"), place.path().join("again.toml")).unwrap();
    let (code, ..) = run(&place, &["solve", "again.toml", "--quiet"]);
    assert_eq!(code, 0);
    assert_eq!(summary(&place, "again.results")["parts"], s["parts"]);
}

#[test]
fn quiet_prints_nothing() {
    let place = place(SLAB);
    let (code, out, err) = run(&place, &["solve", "case.toml", "--quiet", "--out", "runs/a"]);
    assert_eq!((code, out.as_str(), err.as_str()), (0, "", ""));
    assert_eq!(names(place.path()), ["case.toml", "runs"]);
    assert_eq!(summary(&place, "runs/a")["verdict"], "settled");
}

#[test]
fn the_number_of_threads_changes_no_bit() {
    let place = place(RING);
    let mut found = Vec::new();
    for threads in ["1", "2", "3"] {
        let words = ["solve", "case.toml", "--quiet", "--threads", threads, "--out", threads];
        let (_, _, err) = run(&place, &words);
        let mut s = summary(&place, threads);
        for key in ["wall_seconds", "cpu_seconds"] {
            assert!(s.as_object_mut().unwrap().remove(key).is_some(), "{err}");
        }
        let fields = fs::read(place.path().join(threads).join("fields.vtr")).unwrap();
        found.push((s, fields));
    }
    assert!(found[0] == found[1] && found[0] == found[2]);
}

#[test]
fn a_margin_that_is_not_kept_is_3_with_results() {
    let place = place(SLAB);
    // The limit is 80 degC, the end reaches 70.
    let (code, ..) = run(&place, &["solve", "case.toml", "--require-margin", "9.5"]);
    assert_eq!(code, 0);
    let (code, out, _) = run(&place, &["solve", "case.toml", "--require-margin", "11 K"]);
    assert_eq!(code, 3);
    assert!(out.contains("The required margin of 11 K is not kept."), "{out}");
    assert_eq!(summary(&place, "case.results")["verdict"], "settled");
}

#[test]
fn a_wrong_case_or_command_is_2_and_nothing_is_written() {
    let wrong = SLAB.replace("heat = \"2 W\"", "heat = \"2 mm\"").replace("limit =", "limmit =");
    let place = place(&wrong);
    let (code, out, err) = run(&place, &["solve", "case.toml"]);
    assert_eq!((code, out.as_str()), (2, ""));
    same_as_accepted("wrong-case.txt", &err);
    for words in [
        &["check", "case.toml"][..],
        &["solve", "absent.toml"],
        &["solve"],
        &["solve", "case.toml", "--threads", "0"],
        &["frobnicate"],
        &["benchmark", "no-such-case"],
    ] {
        let (code, out, err) = run(&place, words);
        assert_eq!((code, out.as_str()), (2, ""), "{words:?}");
        assert!(!err.is_empty());
    }
    fs::write(place.path().join("case.toml"), SLAB).unwrap();
    let (code, _, err) = run(&place, &["solve", "case.toml", "--revolve", "12"]);
    assert!(code == 2 && err.contains("axisymmetric"), "{code} {err}");
    assert_eq!(names(place.path()), ["case.toml"]);
}

#[test]
fn results_that_cannot_be_written_are_5_and_nothing_is_left() {
    let place = place(SLAB);
    fs::create_dir(place.path().join("mine")).unwrap();
    fs::write(place.path().join("mine/thesis.txt"), "years of work").unwrap();
    for out in ["case.toml", "case.toml/below", "mine"] {
        let (code, _, err) = run(&place, &["solve", "case.toml", "--out", out]);
        assert_eq!(code, 5, "{out}: {err}");
        assert!(err.contains("no results: "), "{err}");
    }
    assert_eq!(names(place.path()), ["case.toml", "mine"]);
    assert_eq!(names(&place.path().join("mine")), ["thesis.txt"]);
}

#[test]
fn a_closed_pipe_changes_neither_results_nor_exit_code() {
    let place = place(SLAB);
    let mut child =
        ventrise(&place, &["solve", "case.toml"]).stdout(Stdio::piped()).spawn().unwrap();
    drop(child.stdout.take());
    assert_eq!(child.wait().unwrap().code(), Some(0));
    assert_eq!(summary(&place, "case.results")["verdict"], "settled");
}

#[test]
fn the_hand_estimate_stands_beside_the_hottest_part() {
    let ring = place(RING);
    let (code, out, err) = run(&ring, &["solve", "case.toml"]);
    assert_eq!(code, 0, "{out}{err}");
    // V^3 = 2 g beta H Q/(rho cp (C + C)), C = (1 + K)/A^2 of a ring of 60 to 100 mm; H from the
    // middle of the block, 100 mm, to the roof.
    let area = std::f64::consts::PI * (0.1 * 0.1 - 0.06 * 0.06);
    let losses = 2.0 * 2.5 / (area * area);
    let flow = (2.0 * 9.80665 * 3e-3 * 0.1 * 1.0 / (1.2 * 1000.0 * losses)).cbrt();
    let s = summary(&ring, "case.results");
    let found = s["by_hand"]["flow_m3_s"].as_f64().unwrap();
    assert!((found / flow - 1.0).abs() < 1e-12, "{found} {flow}");
    let rise = s["parts"][0]["max_c"].as_f64().unwrap() - 40.0;
    let line = format!(
        "By hand: surfaces about {:.0} K above the air, which leaves {:.1} K above ambient or more \
         ({:.2} m3/h at most). Computed: \"radio\" {rise:.1} K above ambient.",
        s["by_hand"]["surface_rise_k"].as_f64().unwrap(),
        1.0 / (1200.0 * flow),
        3600.0 * flow
    );
    assert!(out.contains(&line), "{line}\n{out}");
    // Without air there is nothing to estimate.
    let slab = place(SLAB);
    let (_, out, _) = run(&slab, &["solve", "case.toml"]);
    assert!(!out.contains("By hand"), "{out}");
    assert!(summary(&slab, "case.results")["by_hand"].is_null());
}

#[test]
fn revolved_fields_are_written_when_asked_for() {
    let place = place(RING);
    let (code, out, err) = run(&place, &["solve", "case.toml", "--revolve", "8"]);
    assert_eq!(code, 0, "{out}{err}");
    assert!(place.path().join("case.results/revolved.vts").is_file());
    assert!(err.contains("iteration "), "no plain progress line: {err}");
    // Again without: the older file does not stay behind.
    run(&place, &["solve", "case.toml", "--quiet"]);
    assert!(!place.path().join("case.results/revolved.vts").exists());
}

/// A run that takes many iterations.
fn long() -> String {
    let mesh = "cells = [400, 800]\n\n[solve]\ntolerance = 1e-12\nmax-iterations = 1000000";
    RING.replace("cells = [10, 20]", mesh)
}

#[test]
fn a_limit_that_ends_the_run_is_1_with_results() {
    let place = place(&long().replace("1000000", "2"));
    let (code, out, err) = run(&place, &["solve", "case.toml"]);
    assert_eq!(code, 1, "{out}{err}");
    let s = summary(&place, "case.results");
    let by = "iteration limit";
    assert_eq!((&s["verdict"], &s["stopped_by"]), (&"stopped early".into(), &by.into()));
    let (code, ..) = run(&place, &["solve", "case.toml", "--time-limit", "1 s", "--quiet"]);
    assert_eq!(code, 1);
}

#[test]
fn the_time_limit_ends_the_run_with_1() {
    let place = place(&long());
    let words = ["solve", "case.toml", "--time-limit", "0.2 s", "--quiet"];
    let (code, ..) = run(&place, &words);
    assert_eq!(code, 1);
    let s = summary(&place, "case.results");
    assert_eq!((&s["verdict"], &s["stopped_by"]), (&"stopped early".into(), &"time limit".into()));
}

#[cfg(unix)]
#[test]
fn an_interrupt_ends_the_run_with_4_and_what_there_is() {
    let place = place(&long());
    let mut child = ventrise(&place, &["solve", "case.toml"])
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .unwrap();
    let mut lines = BufReader::new(child.stderr.take().unwrap());
    let mut first = String::new();
    lines.read_line(&mut first).unwrap();
    assert!(first.starts_with("iteration "), "{first}");
    let sent = Command::new("kill").args(["-INT", &child.id().to_string()]).status().unwrap();
    assert!(sent.success());
    let mut out = String::new();
    child.stdout.take().unwrap().read_to_string(&mut out).unwrap();
    assert_eq!(child.wait().unwrap().code(), Some(4), "{out}");
    assert!(out.contains("stopped early by the signal"), "{out}");
    let s = summary(&place, "case.results");
    assert_eq!((&s["verdict"], &s["stopped_by"]), (&"stopped early".into(), &"signal".into()));
    assert_eq!(names(place.path()), ["case.results", "case.toml"]);
}
