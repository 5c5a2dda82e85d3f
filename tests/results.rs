//! Results of a run whose fields were made by hand: every file against the numbers it came from.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

use std::fmt::Write as _;
use std::fs::{self, File};
use std::path::{Path, PathBuf};

use serde_json::Value;
use ventrise::case::{Case, setup};
use ventrise::output::{Folder, Run, Summary, write_files};
use ventrise_mesh::{AIR, Mesh};
use ventrise_solver::{Air, Problem, Progress, Residuals, Solution, State, StopReason, Verdict};

const CASE: &str = include_str!("cases/ring.toml");

/// The case with fields that satisfy nothing but are different in every cell.
fn made_up() -> (Case, Problem, Solution) {
    let case = Case::parse(CASE, "ring.toml").unwrap();
    let mesh = setup::mesh(&case).unwrap().mesh;
    let mut state = State::rest(&mesh);
    let (nx, ny) = (mesh.nx(), mesh.ny());
    for n in 0..nx * ny {
        state.t[n] = 20.0 + (n as f64 * 0.37).sin();
        if mesh.regions()[n] == AIR {
            state.p[n] = -0.1 + 1e-3 * n as f64;
        }
    }
    let is_air = |i: usize, j: usize| mesh.regions()[mesh.cell(i, j)] == AIR;
    for j in 0..ny {
        for i in 1..nx {
            if is_air(i - 1, j) && is_air(i, j) {
                state.u[i + j * (nx + 1)] = 0.01 * ((i * j) as f64).cos();
            }
        }
    }
    for i in 6..nx {
        for j in 0..=ny {
            state.v[i + j * nx] = 0.1 + 0.01 * i as f64;
        }
    }
    let air = Air {
        density: 1.2,
        viscosity: 2e-5,
        conductivity: 0.025,
        specific_heat: 1000.0,
        expansion: 0.003,
    };
    let row = |iteration| Progress {
        iteration,
        cells: nx * ny,
        residuals: Residuals { mass: 1e-7, momentum_x: 2e-7, momentum_y: 3e-7, energy: 4e-7 },
        part_max: vec![30.5],
        ..Progress::default()
    };
    let solution = Solution {
        state,
        air,
        stop: StopReason::Converged,
        heat_growth: None,
        verdict: Verdict::Settled,
        history: vec![row(1), row(2)],
        notes: vec!["a note of the solver".into()],
    };
    let problem = setup::problem(&case, mesh).unwrap();
    (case, problem, solution)
}

fn written(name: &str, solution: Option<Verdict>) -> (PathBuf, Case, Problem, Solution) {
    let (case, problem, mut solved) = made_up();
    if let Some(verdict) = solution {
        solved.verdict = verdict;
    }
    let target = Path::new(env!("CARGO_TARGET_TMPDIR")).join(name);
    let run = Run {
        case: &case,
        problem: &problem,
        solution: &solved,
        mesh_notes: &["a note of the mesh".to_string()],
        interruption: None,
        wall_seconds: 1.5,
        cpu_seconds: 2.5,
    };
    let readings = run.readings();
    let summary = Summary::of(&run, &readings);
    let folder = Folder::begin(&target).unwrap();
    write_files(&folder, &run, &readings, &summary, Some(5)).unwrap();
    folder.keep().unwrap();
    (target, case, problem, solved)
}

fn summary_of(folder: &Path) -> Value {
    serde_json::from_str(&fs::read_to_string(folder.join("summary.json")).unwrap()).unwrap()
}

fn near(value: &Value, expected: f64) {
    let value = value.as_f64().unwrap();
    assert!((value - expected).abs() <= 1e-11 * expected.abs().max(1e-3), "{value} {expected}");
}

#[test]
fn summary_has_every_key_in_the_units_it_says() {
    let (folder, case, problem, solved) = written("made-up.results", None);
    let s = summary_of(&folder);
    let keys: Vec<&str> = s.as_object().unwrap().keys().map(String::as_str).collect();
    let wanted = [
        "ventrise",
        "case",
        "verdict",
        "mesh",
        "air",
        "numbers",
        "iterations",
        "wall_seconds",
        "cpu_seconds",
        "residuals",
        "balance",
        "heat_paths_w",
        "parts",
        "slots",
        "sides",
        "probes",
        "warnings",
    ];
    assert!(wanted.iter().all(|key| keys.contains(key)), "{keys:?}");
    assert_eq!(s["verdict"], "settled");
    assert_eq!(s["case"]["title"], "Ring, and a \"core\"");
    assert_eq!(s["case"]["sha256"], case.sha256());
    assert_eq!((&s["iterations"], &s["mesh"]["cells"]), (&Value::from(2), &Value::from(200)));
    near(&s["residuals"]["energy"], 4e-7);

    // The part: extremes and mean straight from the cells inside its rectangle.
    let mesh = problem.mesh();
    let (mut low, mut high, mut volume, mut sum) = (f64::MAX, f64::MIN, 0.0, 0.0);
    for j in 4..16 {
        for i in 0..4 {
            let rise = solved.state.t[mesh.cell(i, j)];
            (low, high) = (low.min(rise), high.max(rise));
            volume += mesh.volume(i, j);
            sum += mesh.volume(i, j) * rise;
        }
    }
    let part = &s["parts"][0];
    assert_eq!(part["name"], "radio");
    near(&part["heat_w"], 1.0);
    near(&part["min_c"], 40.0 + low);
    near(&part["mean_c"], 40.0 + sum / volume);
    near(&part["max_c"], 40.0 + high);
    near(&part["limit_c"], 85.0);
    near(&part["margin_k"], 45.0 - high);
    near(&part["resistance_k_w"], high);
    assert!(part.get("band_c").is_none());

    // Slots: speed 0.1 + 0.01 i over the rings i = 6..10 of 10 mm.
    let (mut flow, mut carried) = (0.0, 0.0);
    for i in 6..10 {
        let (inner, outer) = (0.01 * i as f64, 0.01 * (i + 1) as f64);
        let part = std::f64::consts::PI * (outer * outer - inner * inner) * (0.1 + 0.01 * i as f64);
        flow += part;
        carried += part * solved.state.t[mesh.cell(i, 19)];
    }
    near(&s["slots"][0]["in_m3_s"], flow);
    near(&s["slots"][0]["out_m3_s"], 0.0);
    assert!(s["slots"][0]["out_mean_c"].is_null());
    near(&s["slots"][1]["out_m3_s"], flow);
    near(&s["slots"][1]["out_mean_c"], 40.0 + carried / flow);
    near(&s["slots"][1]["heat_w"], 1200.0 * carried);
    near(&s["heat_paths_w"]["slots"], 1200.0 * carried);
    near(&s["balance"]["mass_error"], 0.0);

    // The film: 5 mm of air and 8 W/(m²·K) in series on the mantle of the section.
    let per_height = 2.0 * std::f64::consts::PI * 0.1 / (0.005 / 0.025 + 1.0 / 8.0);
    let film: f64 = (0..20).map(|j| per_height * 0.01 * solved.state.t[mesh.cell(9, j)]).sum();
    assert_eq!(s["sides"][1]["name"], "right");
    near(&s["sides"][1]["heat_w"], film);
    near(&s["balance"]["heat_in_w"], 1.0);
    near(&s["balance"]["heat_out_w"], film + 1200.0 * carried);

    let warnings = s["warnings"].as_array().unwrap();
    for note in ["a note of the solver", "a note of the mesh"] {
        assert!(warnings.iter().any(|w| w == note), "{warnings:?}");
    }
    assert_eq!(s["probes"][0]["name"], "TC1");
    assert_eq!(s["probes"][1]["at_m"].as_array().unwrap().len(), 2);
}

#[test]
fn tables_repeat_the_summary() {
    let (folder, ..) = written("tables.results", None);
    let s = summary_of(&folder);
    let text = |name: &str| fs::read_to_string(folder.join(name)).unwrap();
    let parts = text("parts.csv");
    assert!(parts.starts_with("part,heat_w,min_c,mean_c,max_c,limit_c,margin_k,resistance_k_w\n"));
    let cells: Vec<&str> = parts.lines().nth(1).unwrap().split(',').collect();
    assert_eq!(cells[4].parse::<f64>().unwrap(), s["parts"][0]["max_c"].as_f64().unwrap());
    let history = text("history.csv");
    assert!(history.lines().next().unwrap().ends_with(",drift_k,radio max_c"));
    assert_eq!(history.lines().count(), 3);
    assert!(history.lines().nth(2).unwrap().ends_with(",70.5"));
    let probes = text("probes.csv");
    assert_eq!(probes.lines().filter(|l| l.starts_with("TC1,")).count(), 1);
    assert_eq!(probes.lines().filter(|l| l.starts_with("column,")).count(), 101);
    let point: Vec<&str> = probes.lines().nth(1).unwrap().split(',').collect();
    let summary_c = s["probes"][0]["temperature_c"].as_f64().unwrap();
    assert_eq!(point[4].parse::<f64>().unwrap(), summary_c);
    assert_eq!(text("slots.csv").lines().count(), 3);
    assert_eq!(text("sides.csv").lines().count(), 5);
    Case::parse(&text("case.toml"), "case.toml").unwrap();
}

#[test]
fn a_sway_is_told_with_its_bands_and_judged_by_the_upper_end() {
    let verdict = Verdict::Swaying {
        period: Some(1.1),
        growth: None,
        band: vec![[30.0, 44.0]],
        slot_band: Vec::new(),
    };
    let (folder, ..) = written("sway.results", Some(verdict));
    let s = summary_of(&folder);
    assert_eq!(s["verdict"], "swaying");
    near(&s["sway"]["period_s"], 1.1);
    near(&s["parts"][0]["band_c"][1], 84.0);
    near(&s["parts"][0]["margin_k"], 1.0);
}

/// Arrays worked out here from the state, for the independent reader (`.ci/read_vtr.py`).
fn plain(problem: &Problem, solved: &Solution) -> String {
    let (mesh, state) = (problem.mesh(), &solved.state);
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let [mut velocity, mut speed, mut flux] = [vec![], vec![], vec![]];
    for j in 0..ny {
        for i in 0..nx {
            let n = i + j * nx;
            let west = i + j * (nx + 1);
            let in_air = mesh.regions()[n] == AIR;
            let pair = |a: f64, b: f64| if in_air { 0.5 * (a + b) } else { 0.0 };
            let (u, v) =
                (pair(state.u[west], state.u[west + 1]), pair(state.v[n], state.v[n + nx]));
            velocity.extend([u, v]);
            speed.push(u.hypot(v));
            flux.extend(heat_flux(mesh, state, i, j));
        }
    }
    let temperature: Vec<f64> = state.t.iter().map(|rise| 40.0 + rise).collect();
    let block: Vec<i32> =
        mesh.regions().iter().map(|r| if *r == AIR { -1 } else { *r as i32 }).collect();
    let mut text = String::from("sectors 5\n");
    let mut line = |name: &str, values: &[f64]| {
        write!(text, "{name} f64").unwrap();
        values.iter().for_each(|v| write!(text, " {:016x}", v.to_bits()).unwrap());
        text.push('\n');
    };
    line("x", mesh.x());
    line("y", mesh.y());
    line("temperature", &temperature);
    line("pressure", &state.p);
    line("velocity", &velocity);
    line("speed", &speed);
    line("~heat_flux", &flux);
    for name in ["block", "material"] {
        // One block of one material, so that both indices are the same.
        write!(text, "{name} i32").unwrap();
        block.iter().for_each(|v| write!(text, " {v}").unwrap());
        text.push('\n');
    }
    text
}

/// Mean of the fluxes through the faces on both sides, from Fourier's law over two half cells.
fn heat_flux(mesh: &Mesh, state: &State, i: usize, j: usize) -> [f64; 2] {
    let k = |i: usize, j: usize| match mesh.regions()[mesh.cell(i, j)] {
        AIR => [0.025, 0.025],
        _ => [200.0, 50.0],
    };
    let t = |i: usize, j: usize| state.t[mesh.cell(i, j)];
    let between = |a: (usize, usize), b: (usize, usize), axis: usize| {
        let half = |c: (usize, usize)| {
            0.5 * if axis == 0 { mesh.dx(c.0) } else { mesh.dy(c.1) } / k(c.0, c.1)[axis]
        };
        (t(a.0, a.1) - t(b.0, b.1)) / (half(a) + half(b))
    };
    let west = if i == 0 { 0.0 } else { between((i - 1, j), (i, j), 0) };
    let east = if i + 1 < mesh.nx() {
        between((i, j), (i + 1, j), 0)
    } else {
        t(i, j) / (0.5 * mesh.dx(i) / 0.025 + 1.0 / 8.0)
    };
    let south = if j == 0 { 0.0 } else { between((i, j - 1), (i, j), 1) };
    let north = if j + 1 < mesh.ny() { between((i, j), (i, j + 1), 1) } else { 0.0 };
    [0.5 * (west + east), 0.5 * (south + north)]
}

#[test]
fn field_files_are_left_for_the_independent_reader() {
    let (results, _, problem, solved) = written("fields.results", None);
    let folder = Path::new(env!("CARGO_TARGET_TMPDIR")).join("vtk");
    fs::create_dir_all(&folder).unwrap();
    for (from, ending) in [("fields.vtr", "vtr"), ("revolved.vts", "vts")] {
        assert!(File::open(results.join(from)).unwrap().metadata().unwrap().len() > 1000);
        fs::copy(results.join(from), folder.join(format!("run.{ending}"))).unwrap();
    }
    fs::write(folder.join("run.txt"), plain(&problem, &solved)).unwrap();
}

/// The made-up fields in a case whose floor has mesh and a fan with this curve.
fn with_fan(curve: &str) -> Value {
    let vent = format!(
        "kind = \"mesh\"\nfree-area = \"50 %\"\nwire = \"0.5 mm\"\nfan = \"f\"\n\n[[fan]]\nname = \
         \"f\"\ndirection = \"in\"\nspeed = \"50 %\"\ncurve = {curve}\n"
    );
    let (_, _, solution) = made_up();
    let case = Case::parse(&CASE.replacen("loss = 1.5", &vent, 1), "ring.toml").unwrap();
    let problem = setup::problem(&case, setup::mesh(&case).unwrap().mesh).unwrap();
    let run = Run {
        case: &case,
        problem: &problem,
        solution: &solution,
        mesh_notes: &[],
        interruption: None,
        wall_seconds: 1.5,
        cpu_seconds: 2.5,
    };
    serde_json::from_str(&Summary::of(&run, &run.readings()).to_json().unwrap()).unwrap()
}

#[test]
fn vents_and_fans_are_told_with_what_was_used() {
    let s = with_fan("[[\"0 m3/h\", \"16 Pa\"], [\"100 m3/h\", \"0 Pa\"]]");
    let slot = &s["slots"][0];
    let area = std::f64::consts::PI * (0.01 - 0.0036);
    let flow = slot["in_m3_s"].as_f64().unwrap();
    near(&slot["area_m2"], area);
    near(&slot["free_area_m2"], 0.5 * area);
    near(&slot["speed_m_s"], flow / area);
    // On the wire: u·d/ν with ν = 2e-5/1.2; the law K = 3·(0.51651 + 10.246/Re) at f = 0.5.
    let reynolds = flow / area * 0.5e-3 * 1.2 / 2e-5;
    near(&slot["reynolds"], reynolds);
    near(&slot["loss"], 3.0 * (0.516_51 + 10.246 / reynolds));
    assert_eq!((&slot["vent"], &s["slots"][1]["vent"]), (&Value::from("mesh"), &Value::Null));
    near(&s["slots"][1]["free_area_m2"], area);
    near(&s["slots"][1]["loss"], 1.5);
    // At half speed 4 Pa at no flow, 50 m³/h free; air and curve have 1.2 kg/m³.
    let fan = &s["fans"][0];
    near(&fan["flow_m3_s"], flow);
    near(&fan["pressure_pa"], 4.0 * (1.0 - 3600.0 * flow / 50.0));
    near(&fan["free_delivery_share"], 3600.0 * flow / 50.0);
    let warnings = s["warnings"].to_string();
    assert!(!warnings.contains("fan"), "{warnings}");
}

#[test]
fn operating_points_off_the_curve_and_left_of_a_dip_are_warned_of() {
    for (curve, words) in [
        ("[[\"0 m3/h\", \"16 Pa\"], [\"10 m3/h\", \"12 Pa\"]]", "beyond its curve, which ends at"),
        (
            "[[\"0 m3/h\", \"9 Pa\"], [\"10 m3/h\", \"7 Pa\"], [\"90 m3/h\", \"8 Pa\"], \
             [\"99 m3/h\", \"0 Pa\"]]",
            "left of the dip",
        ),
    ] {
        let warnings = with_fan(curve)["warnings"].to_string();
        assert!(warnings.contains(words), "{warnings}");
    }
}
