//! The worked examples in `cases/`: each is read, checked and solved on a coarse mesh.

#![allow(clippy::unwrap_used, clippy::print_stdout)]

use std::collections::BTreeMap;
use std::fs;
use std::path::{Path, PathBuf};

use ventrise::case::{Case, setup};
use ventrise_solver::{
    Control, HEAT_BOUND, MASS_BOUND, Solution, Verdict, balance, part_temperatures, solve,
};

/// Every example with its hottest part, that part's rise [K] and the air drawn in [m³/h] on the
/// example's own mesh, as its comments state them (0: no air passes).
const EXAMPLES: [(&str, &str, f64, f64); 12] = [
    ("battery-locker", "pack", 24.6, 2.94),
    ("bench-supplies", "highest sink", 26.6, 3.87),
    ("dry-transformer", "inner winding", 41.3, 1.28),
    ("gateway", "radio chips", 38.0, 0.634),
    ("mast-radio", "radio", 35.3, 2.83),
    ("resistor-tray", "resistors", 33.6, 3.50),
    ("roadside-box", "converter", 26.7, 0.0),
    ("sensor-box", "electronics", 30.2, 0.0),
    ("sensor-screen", "screen", 8.5, 2.26),
    ("signal-case", "cards", 23.8, 13.47),
    ("telemetry-pillar", "modem", 22.2, 2.00),
    ("wall-cabinet", "rectifier", 27.3, 4.88),
];

/// How far a coarse mesh may be off the example's own: 2.6 % at most was measured.
const COARSE: f64 = 0.04;

fn folder() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("cases")
}

/// Every file of the folder, by its name without the ending.
fn files() -> BTreeMap<String, PathBuf> {
    let entries = fs::read_dir(folder()).unwrap().map(|e| e.unwrap().path());
    entries.map(|p| (p.file_stem().unwrap().to_str().unwrap().to_string(), p)).collect()
}

/// The text with its `[mesh]` table replaced by a coarse one: 60 cells along the longer extent,
/// the first cell at surfaces half as large.
fn coarse(text: &str, extent: f64) -> String {
    let mut kept = String::new();
    let mut inside = false;
    for line in text.lines() {
        if line.starts_with('[') {
            inside = line == "[mesh]";
        }
        if !inside {
            kept.push_str(line);
            kept.push('\n');
        }
    }
    let cell = extent * 1e3 / 60.0;
    kept + &format!("\n[mesh]\ncell = \"{cell} mm\"\nwall = \"{} mm\"\nacross = 2\n", 0.5 * cell)
}

fn case(name: &str) -> Case {
    let path = folder().join(name).with_extension("toml");
    match Case::read(&path) {
        Ok(case) => case,
        Err(errors) => panic!("{errors}"),
    }
}

#[test]
fn every_file_is_a_tested_example() {
    let files = files();
    let names: Vec<&str> = files.keys().map(String::as_str).collect();
    assert_eq!(names, EXAMPLES.map(|e| e.0), "cases/ and the table above must agree");
    for path in files.values() {
        assert_eq!(path.extension().unwrap(), "toml", "{}", path.display());
    }
}

#[test]
fn every_example_is_in_order_and_says_what_it_shows() {
    for (name, ..) in EXAMPLES {
        let case = case(name);
        assert_eq!(case.warnings(), Vec::<String>::new(), "{name}");
        for word in ["# Asked: ", "# By hand: ", "# Look at: ", "# Change next: "] {
            assert!(case.text().contains(word), "{name} lacks \"{word}\"");
        }
        let generated = setup::mesh(&case).unwrap();
        let cells = generated.mesh.cell_count();
        assert!((5_000..40_000).contains(&cells), "{name}: {cells} cells");
    }
}

/// Solves an example on its coarse mesh and compares it with what its comments say.
fn check(name: &str) -> Solution {
    let (_, part, rise, flow) = *EXAMPLES.iter().find(|e| e.0 == name).unwrap();
    let own = case(name);
    let extent = own.section().width.max(own.section().height);
    let case = Case::parse(&coarse(own.text(), extent), name).unwrap();
    let generated = setup::mesh(&case).unwrap();
    let problem = setup::problem(&case, generated.mesh.clone()).unwrap();
    let settings = setup::settings(&case);
    let solution = solve(&problem, &settings, None, &mut |_| Control::Continue).unwrap();
    assert!(
        matches!(solution.verdict, Verdict::Settled | Verdict::Swaying { .. }),
        "{name}: {:?} after {:?}",
        solution.verdict,
        solution.history.last()
    );
    let b = balance(&problem, &solution.air, &solution.state);
    assert!(b.heat_error <= HEAT_BOUND && b.mass_error <= MASS_BOUND, "{name}: {b:?}");
    let found = part_temperatures(&problem, &solution.state);
    let at = case.parts().iter().position(|p| p.name == part).unwrap();
    let hottest = found[at].unwrap().max;
    let drawn = 3600.0 * b.mass_in / solution.air.density;
    println!(
        "{name}: {} cells, {} iterations, {part} {hottest:.2} K ({rise} K), {drawn:.3} m3/h ({flow})",
        problem.mesh().cell_count(),
        solution.history.len()
    );
    assert!((hottest / rise - 1.0).abs() < COARSE, "{name}: {hottest} K, not {rise} K");
    assert!((drawn - flow).abs() <= COARSE * flow, "{name}: {drawn} m3/h, not {flow} m3/h");
    solution
}

#[test]
fn battery_locker() {
    check("battery-locker");
}

#[test]
fn bench_supplies() {
    check("bench-supplies");
}

#[test]
fn dry_transformer() {
    check("dry-transformer");
}

#[test]
fn gateway() {
    check("gateway");
}

#[test]
fn mast_radio() {
    check("mast-radio");
}

#[test]
fn resistor_tray() {
    check("resistor-tray");
}

#[test]
fn roadside_box() {
    check("roadside-box");
}

#[test]
fn sensor_box() {
    check("sensor-box");
}

#[test]
fn sensor_screen() {
    check("sensor-screen");
}

#[test]
fn signal_case() {
    check("signal-case");
}

#[test]
fn telemetry_pillar() {
    check("telemetry-pillar");
}

#[test]
fn wall_cabinet() {
    check("wall-cabinet");
}
