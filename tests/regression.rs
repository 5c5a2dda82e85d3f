//! Mistakes of earlier versions, each with a test named after it.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

use std::fmt::Write as _;
use std::fs;
use std::path::Path;
use std::process::Command;
use std::time::{Duration, Instant};

use ventrise::case::{Case, Estimate, setup};

/// A housing with one block, to be changed by the tests.
const PLAIN: &str = include_str!("cases/plain.toml");

fn parsed(text: &str) -> Case {
    Case::parse(text, "case.toml").unwrap_or_else(|errors| panic!("{errors}"))
}

fn changed(from: &str, to: &str) -> String {
    assert!(PLAIN.contains(from), "{from}");
    PLAIN.replacen(from, to, 1)
}

/// Runs the program on a case in a folder of its own: exit code, output, errors.
fn run(case: &str, words: &[&str]) -> (i32, String, String) {
    let place = tempfile::tempdir().unwrap();
    fs::write(place.path().join("case.toml"), case).unwrap();
    let mut command = Command::new(env!("CARGO_BIN_EXE_ventrise"));
    let output = command.current_dir(place.path()).args(words).output().unwrap();
    let left = fs::read_dir(place.path()).unwrap().count();
    let code = output.status.code().unwrap();
    assert!(code < 2 || left == 1, "something was written");
    let text = |bytes: Vec<u8>| String::from_utf8(bytes).unwrap();
    (code, text(output.stdout), text(output.stderr))
}

#[test]
fn thousands_of_overlapping_blocks_are_refused_at_once_and_briefly() {
    let mut blocks = String::new();
    for _ in 0..3000 {
        blocks += "[[block]]\nmaterial = \"aluminium\"\nx = [\"1 mm\", \"9 mm\"]\n\
                   y = [\"1 mm\", \"9 mm\"]\n";
    }
    let pattern = "[[block]]\nmaterial = \"aluminium\"\nx = [\"1 mm\", \"9 mm\"]\n\
                   y = [\"1 mm\", \"9 mm\"]\nrepeat = { count = 1000, step-x = \"0.1 mm\" }\n";
    let text = changed("[[slot]]", &format!("{blocks}{pattern}[[slot]]"));
    let begun = Instant::now();
    let errors = Case::parse(&text, "case.toml").unwrap_err();
    let said = errors.to_string();
    assert!(begun.elapsed() < Duration::from_secs(1), "{:?}", begun.elapsed());
    assert!(errors.errors().len() >= 3000);
    assert!(said.lines().count() < 120, "{} lines", said.lines().count());
    assert!(said.contains("more of the same kinds"), "{said}");
}

#[test]
fn thousands_of_blocks_in_order_are_read_in_a_moment() {
    let mut blocks = String::new();
    for n in 0..3000 {
        let (x, y) = (1 + 2 * (n % 50), 1 + 2 * (n / 50));
        write!(
            blocks,
            "[[block]]\nname = \"b{n}\"\nmaterial = \"aluminium\"\nheat = \"1 mW\"\n\
             x = [\"{x} mm\", \"{} mm\"]\ny = [\"{y} mm\", \"{} mm\"]\n",
            x + 1,
            y + 1
        )
        .unwrap();
    }
    let text =
        changed(&PLAIN[PLAIN.find("[[block]]").unwrap()..PLAIN.find("[[slot]]").unwrap()], &blocks);
    let begun = Instant::now();
    let case = parsed(&text);
    assert_eq!(case.blocks().len(), 3000);
    assert!(case.warnings().len() >= 3000, "parts without a limit");
    assert!(begun.elapsed() < Duration::from_secs(1), "{:?}", begun.elapsed());
}

#[test]
fn a_mesh_that_memory_cannot_hold_is_2_before_anything_is_done() {
    let text = format!("{PLAIN}[mesh]\ncells = [4000, 4000]\n");
    let case = parsed(&text);
    let said = case.refused_memory(16_000_000, 12.3e9, 1.5e9).to_string();
    assert!(
        said.starts_with("case.toml:29: mesh: cells = [4000, 4000]: a mesh of 16000000"),
        "{said}"
    );
    assert!(said.contains("12 GB") && said.contains("1.5 GB left"), "{said}");
    assert!(said.ends_with("1 mistake in case.toml; nothing was written"), "{said}");
}

#[cfg(target_os = "linux")]
#[test]
fn a_limit_on_memory_is_respected_instead_of_dying_of_it() {
    let place = tempfile::tempdir().unwrap();
    fs::write(place.path().join("case.toml"), format!("{PLAIN}[mesh]\ncells = [1600, 1600]\n"))
        .unwrap();
    let limited = |words: &str| {
        let line = format!("ulimit -v 1500000; exec {} {words}", env!("CARGO_BIN_EXE_ventrise"));
        let output =
            Command::new("sh").args(["-c", &line]).current_dir(place.path()).output().unwrap();
        (output.status.code(), String::from_utf8(output.stderr).unwrap())
    };
    let (code, said) = limited("solve case.toml");
    assert!(code == Some(2) && said.contains("GB of memory"), "{code:?} {said}");
    let (code, said) = limited("check case.toml");
    assert_eq!(code, Some(0), "{said}");
    let (code, said) = limited("benchmark square-cavity-1e3 --cells 2048");
    assert!(code == Some(2) && said.contains("GB of memory"), "{code:?} {said}");
}

#[test]
fn numbers_on_the_command_line_have_upper_bounds_too() {
    for words in [
        &["solve", "case.toml", "--threads", "100000"][..],
        &["benchmark", "--threads", "100000"],
        &["benchmark", "square-cavity-1e3", "--cells", "100000000"],
    ] {
        let (code, _, said) = run(PLAIN, words);
        assert!(code == 2 && (said.contains("256") || said.contains("4096")), "{code} {said}");
    }
}

#[test]
fn what_the_mesh_refuses_is_said_at_the_keys_of_the_case() {
    let said = |mesh: &str| {
        let case = parsed(&format!("{PLAIN}[mesh]\n{mesh}\n"));
        case.refused_mesh(&setup::mesh(&case).unwrap_err()).to_string()
    };
    let few = said("cells = [1, 40]");
    assert!(
        few.starts_with("case.toml:29: mesh: cells = [1, 40]: 1 cell along x cannot be"),
        "{few}"
    );
    assert!(few.contains("into 5 pieces along x") && few.contains("at least 5 cells"), "{few}");
    let many = said("cell = \"2 um\"\nwall = \"2 um\"");
    assert!(many.contains("wall = \"2 um\", cell = \"2 um\": the mesh would need about"), "{many}");
    assert!(many.contains("20 million") && many.contains("choose a larger cell"), "{many}");
    for text in [few, many] {
        assert!(text.ends_with("1 mistake in case.toml; nothing was written"), "{text}");
    }
    let (code, _, error) =
        run(&format!("{PLAIN}[mesh]\ncells = [1, 40]\n"), &["solve", "case.toml"]);
    assert!(code == 2 && error.contains("1 cell along x"), "{code} {error}");
}

#[test]
fn a_pressure_beside_given_air_is_not_ignored_in_silence() {
    let given = "altitude = \"3000 m\"\n[air]\nproperties = \"given\"\ndensity = \"1.1 kg/m3\"\n\
                 viscosity = \"1.95e-5 Pa s\"\nconductivity = \"0.0275 W/(m K)\"\n\
                 specific-heat = \"1007 J/(kg K)\"\nexpansion = \"0.0032 1/K\"\n[[block]]";
    let said = parsed(&changed("[[block]]", given)).warnings();
    let warning = "line 9: ambient: altitude = \"3000 m\" has no effect";
    assert!(said.iter().any(|w| w.starts_with(warning)), "{said:?}");
    // Not said of the sea level that is taken for granted, nor after a resolved case is read back.
    let silent = parsed(&changed("[[block]]", given).replace("altitude = \"3000 m\"\n", ""));
    for case in [&silent, &parsed(&silent.resolved())] {
        assert!(!case.warnings().iter().any(|w| w.contains("no effect")));
    }
}

#[test]
fn a_file_too_large_for_a_case_is_refused_by_its_size() {
    let place = tempfile::tempdir().unwrap();
    let file = place.path().join("case.toml");
    fs::write(&file, format!("{PLAIN}{}", "# filler\n".repeat(1_200_000))).unwrap();
    let said = Case::read(&file).unwrap_err().to_string();
    assert!(said.contains("larger than 10 MB") && said.contains("nothing was written"), "{said}");
    if Path::new("/dev/zero").exists() {
        let said = Case::read(Path::new("/dev/zero")).unwrap_err().to_string();
        assert!(said.contains("larger than 10 MB"), "{said}");
    }
}

#[test]
fn heat_without_a_steady_way_out_is_warned_of() {
    let trapped = |text: &str| {
        let warnings = parsed(text).warnings();
        warnings.iter().any(|w| w.starts_with("the heat has no steady way out"))
    };
    let low = PLAIN.replace(
        "side = \"top\"\nfrom = \"10 mm\"\nto = \"30 mm\"",
        "side = \"bottom\"\nfrom = \"90 mm\"\nto = \"110 mm\"",
    );
    let bottom =
        format!("{}[sides]\nbottom = \"open\"\n", &PLAIN[..PLAIN.find("[[slot]]").unwrap()]);
    assert!(trapped(&low) && trapped(&bottom));
    // Cold sinks: the same upside down.
    let high = PLAIN.replace(
        "side = \"bottom\"\nfrom = \"10 mm\"\nto = \"30 mm\"",
        "side = \"top\"\nfrom = \"90 mm\"\nto = \"110 mm\"",
    );
    assert!(trapped(&high.replace("15 W", "-15 W")) && !trapped(&high));
    // A side that lets heat through, a slot in a wall, cold air that falls out of the floor.
    assert!(!trapped(&format!("{low}[sides]\ntop = {{ film = \"8 W/(m2 K)\" }}\n")));
    assert!(!trapped(&low.replacen("side = \"bottom\"", "side = \"left\"", 1)));
    assert!(!trapped(&low.replace("15 W", "-15 W")) && !trapped(PLAIN));
}

#[test]
fn narrow_gaps_bound_the_hand_estimate() {
    // Walls 0.9 mm to both sides of a plate 80 mm tall: by the limit of narrow channels, El/12,
    // heat = 2·A·k·g·β·ΔT²·b³/(12·ν·α·L), and the ends 8.2 mm wide give off what a plate does.
    let narrow = PLAIN
        .replace("width = \"120 mm\"", "width = \"10 mm\"")
        .replace("x = [\"40 mm\", \"80 mm\"]", "x = [\"0.9 mm\", \"9.1 mm\"]")
        .replace("from = \"10 mm\"\nto = \"30 mm\"", "from = \"1 mm\"\nto = \"9 mm\"");
    let estimate = Estimate::of(&parsed(&narrow));
    let air = estimate.air;
    let (nu, alpha) =
        (air.viscosity / air.density, air.conductivity / (air.density * air.specific_heat));
    let rise = estimate.rise;
    let channel = 2.0
        * 0.3
        * 0.08
        * air.conductivity
        * 9.80665
        * air.expansion
        * rise
        * rise
        * 0.9e-3_f64.powi(3)
        / (12.0 * nu * alpha * 0.08);
    let ends = 2.0 * 0.3 * 0.0082 * 1.4 * (rise / 0.08).powf(0.25) * rise;
    assert!((channel + ends - 15.0).abs() < 1e-6 * 15.0, "{rise}: {channel} + {ends} W");
    // Far walls change nothing.
    let free = Estimate::of(&parsed(PLAIN)).rise;
    let area = 0.3 * 2.0 * (0.08 + 0.04);
    assert!((free - (15.0 / area * 0.08_f64.powf(0.25) / 1.4).powf(0.8)).abs() < 1e-12 * free);
    assert!(rise > 4.0 * free, "{rise} {free}");
}

#[test]
fn edges_close_together_are_not_printed_as_one() {
    let near = changed(
        "[[slot]]",
        "[[block]]\nmaterial = \"copper\"\nx = [\"40 mm\", \"80 mm\"]\ny = [\"120.0001 mm\", \"121 mm\"]\n[[slot]]",
    );
    let case = parsed(&near);
    let generated = setup::mesh(&case).unwrap();
    let notes = generated.notes.join("\n");
    assert!(notes.contains("120 to 120.0001 mm (0.0001 mm wide)"), "{notes}");
    let (code, out, _) = run(&near, &["check", "case.toml"]);
    assert!(code == 0 && out.contains(" cells, 0.0001 to "), "{out}");
}

#[test]
fn an_open_side_that_breathes_out_shows_the_mean_of_what_leaves() {
    let open = format!(
        "{}[sides]\ntop = \"open\"\nbottom = \"open\"\n[mesh]\ncells = [24, 32]\n",
        &PLAIN[..PLAIN.find("[[slot]]").unwrap()]
    );
    let (_, out, error) =
        run(&open.replace("15 W", "0.1 W"), &["solve", "case.toml", "--out", "case.results"]);
    let row =
        out.lines().find(|l| l.starts_with("top side")).unwrap_or_else(|| panic!("{out}{error}"));
    let mean: f64 = row.split_whitespace().nth(4).unwrap().parse().unwrap();
    assert!((40.0..60.0).contains(&mean), "{row}");
    assert!(out.contains("\nSlot ") && !out.contains("Vent"), "{out}");
}

#[test]
fn a_milliwatt_keeps_its_digits_and_what_is_cold_is_shown() {
    let coarse = "[mesh]\ncells = [24, 32]\n";
    let little = PLAIN.replace("15 W", "1 mW") + coarse;
    let (_, out, error) = run(&little, &["solve", "case.toml", "--out", "a"]);
    assert!(out.contains("0.00100"), "{out}{error}");
    assert!(!out.contains("min degC") && !out.contains("coldest"), "{out}");
    let closed = &PLAIN[..PLAIN.find("[[slot]]").unwrap()].replace("15 W", "0 W");
    let sides =
        "[sides]\nleft = { temperature = \"38 degC\" }\nright = { temperature = \"40 degC\" }\n";
    let (_, out, error) = run(&format!("{closed}{sides}{coarse}"), &["solve", "case.toml"]);
    assert!(out.contains("min degC") && out.contains("coldest 38."), "{out}{error}");
}

#[test]
fn a_case_on_one_endless_line_is_drawn_where_the_mistake_is() {
    let text = format!("title = \"{}\" \u{7}\n", "long ".repeat(2000));
    let said = Case::parse(&text, "case.toml").unwrap_err().to_string();
    assert!(said.lines().all(|l| l.chars().count() < 250), "{said}");
    assert!(said.contains('…') && !said.contains('\u{7}'), "{said}");
}
