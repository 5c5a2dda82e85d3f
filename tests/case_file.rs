//! Case files: what is understood, what is refused and how.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used, clippy::expect_used)]

use std::collections::HashSet;
use std::path::Path;

use ventrise::case::{AirChoice, Case, CaseError};
use ventrise_mesh::{Geometry, Side};
use ventrise_solver::{SideCondition, VentKind};

fn reference(name: &str) -> Case {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference").join(name);
    Case::read(&path).unwrap_or_else(|errors| panic!("{errors}"))
}

#[test]
fn the_planar_reference_housing_is_understood() {
    let case = reference("vented-planar.toml");
    assert_eq!(case.section().geometry, Geometry::Planar { depth: 1.0 });
    assert_eq!((case.section().width, case.section().height), (0.12, 0.16));
    assert_eq!(case.ambient().temperature, 313.15);
    assert_eq!(case.blocks().len(), 1);
    assert_eq!(case.blocks()[0].rectangle.x, [0.04, 0.08]);
    assert_eq!(case.heat(), 15.0);
    assert_eq!(case.slots().len(), 4);
    assert_eq!(case.slots()[3].span, [0.09, 0.11]);
    assert_eq!(case.slots()[3].side, Side::Top);
    let AirChoice::Given { air, .. } = case.air() else { panic!("{:?}", case.air()) };
    assert_eq!(air.expansion, 1.0 / 313.15);
    assert_eq!((air.density, air.viscosity), (1.1, 1.95e-5));
    assert!(case.warnings().is_empty(), "{:?}", case.warnings());
}

#[test]
fn the_axisymmetric_reference_housing_is_understood() {
    let case = reference("vented-axisymmetric.toml");
    assert_eq!(case.section().geometry, Geometry::Axisymmetric);
    assert_eq!(case.sides()[Side::Left.index()], SideCondition::Symmetry);
    assert_eq!(case.blocks().len(), 7);
    let last = &case.blocks()[6];
    assert_eq!(last.name.as_deref(), Some("fin 6"));
    assert!((last.rectangle.y[0] - 0.113).abs() < 1e-15);
    assert_eq!(case.parts().len(), 2);
    assert_eq!(case.parts()[1].blocks, [1, 2, 3, 4, 5, 6]);
    assert_eq!(case.parts()[0].limit, Some(373.15));
}

/// Everything but the text it came from and where materials are from.
fn content(case: &Case) -> String {
    let materials: Vec<_> = case
        .materials()
        .iter()
        .map(|m| (&m.name, m.conductivity, m.density, m.specific_heat))
        .collect();
    format!(
        "{:?} {:?} {:?} {:?} {materials:?} {:#?} {:?} {:?} {:?} {:?} {:?} {:?} {:?}",
        case.title(),
        case.section(),
        case.ambient(),
        case.air(),
        case.blocks(),
        case.parts(),
        case.slots(),
        case.fans(),
        case.sides(),
        case.probes(),
        case.solve_choice(),
        ventrise::case::setup::spacing(case),
    )
}

#[test]
fn a_resolved_case_reads_back_to_the_same_case() {
    let full = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/reference/every-key.toml");
    let full = Case::read(&full).unwrap_or_else(|errors| panic!("{errors}"));
    for case in [reference("vented-planar.toml"), reference("vented-axisymmetric.toml"), full] {
        let text = case.resolved();
        let again = Case::parse(&text, "case.toml").unwrap_or_else(|e| panic!("{e}\n{text}"));
        assert_eq!(content(&again), content(&case));
        assert_eq!(again.resolved(), text, "resolving twice changes nothing");
    }
}

/// Every file in `tests/bad-cases` holds its expected message after the line `# expected:`, as
/// comments. Set `VENTRISE_BLESS=1` to write what is said now.
#[test]
fn bad_cases_are_refused_with_their_messages() {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/bad-cases");
    let mut files: Vec<_> =
        std::fs::read_dir(&folder).unwrap().map(|entry| entry.unwrap().path()).collect();
    files.retain(|f| f.extension().is_some_and(|e| e == "toml"));
    files.sort();
    assert!(files.len() > 30, "the corpus is not found in {folder:?}");
    let mut wrong = Vec::new();
    let mut causes = HashSet::new();
    for file in files {
        let text = std::fs::read_to_string(&file).unwrap();
        let name = file.file_name().unwrap().to_string_lossy().into_owned();
        let input = text.split("# expected:\n").next().unwrap();
        let said = match Case::parse(input, &name) {
            Ok(_) => "accepted".to_string(),
            Err(errors) => {
                causes.extend(errors.errors().iter().map(CaseError::cause));
                errors.to_string()
            }
        };
        let comment: String =
            said.lines().map(|l| format!("# {l}").trim_end().to_string() + "\n").collect();
        let now = format!("{input}# expected:\n{comment}");
        if now != text {
            if std::env::var_os("VENTRISE_BLESS").is_some() {
                std::fs::write(&file, &now).unwrap();
            }
            wrong.push(format!("{name}:\n{said}\n"));
        }
        assert_ne!(said, "accepted", "{name}");
    }
    assert_eq!(causes.len(), 13, "every cause but an unreadable file: {causes:?}");
    assert!(wrong.is_empty(), "changed messages:\n{}", wrong.join("\n"));
}

#[test]
fn default_meshes_are_of_moderate_size() {
    for name in ["vented-planar.toml", "vented-axisymmetric.toml", "every-key.toml"] {
        let case = reference(name);
        let generated = ventrise::case::setup::mesh(&case).unwrap();
        let cells = generated.mesh.cell_count();
        let most = if case.mesh_choice().cell.is_some() { 60_000 } else { 40_000 };
        assert!((8_000..=most).contains(&cells), "{name}: {cells} cells by default");
        ventrise::case::setup::problem(&case, generated.mesh).unwrap();
    }
}

fn warnings_of(text: &str) -> Vec<String> {
    Case::parse(text, "case.toml").unwrap_or_else(|errors| panic!("{errors}")).warnings()
}

const PLAIN: &str = include_str!("cases/plain.toml");

#[test]
fn doubtful_but_possible_cases_are_accepted_with_warnings() {
    assert_eq!(warnings_of(PLAIN), Vec::<String>::new());
    for (from, to, warning) in [
        ("limit = \"85 degC\"", "", "part \"core\" has heat but no limit to be judged by"),
        ("\"85 degC\"", "\"30 degC\"", "the limit of part \"core\" is not above ambient"),
        ("\"15 W\"", "\"0 W\"", "there is no heat at all: the air will stay at rest"),
        ("\"15 W\"", "\"-2 W\"", "line 14: block \"core\": heat below zero: the block is cooled"),
        (
            "side = \"top\"\nfrom = \"10 mm\"\nto = \"30 mm\"",
            "side = \"bottom\"\nfrom = \"90 mm\"\nto = \"110 mm\"",
            "the heat has no steady way out: every opening lies in the floor",
        ),
        ("\"15 W\"", "\"9 kW\"", "by hand the surfaces get about"),
        (
            "[ambient]",
            "[sides]\nleft = { flux = \"-5 W/m2\" }\n[ambient]",
            "the flux of the left side is below zero",
        ),
        (
            "[ambient]",
            "[sides]\nleft = { temperature = \"400 degC\" }\n[ambient]",
            "the left side is 360 K from ambient",
        ),
    ] {
        assert!(PLAIN.contains(from), "{from}");
        let text = PLAIN.replace(from, to);
        let said = warnings_of(&text);
        assert!(said.iter().any(|w| w.starts_with(warning)), "{warning}: {said:?}");
    }
}

#[test]
fn the_reference_temperature_leaves_the_given_density_alone() {
    let air = "[air]\nproperties = \"given\"\ndensity = \"1.2 kg/m3\"\nviscosity = \"1.9e-5 Pa s\"\n\
               conductivity = \"0.027 W/(m K)\"\nspecific-heat = \"1007 J/(kg K)\"\n\
               expansion = \"0.0033 1/K\"\nreference-temperature = \"20 degC\"\n";
    let text = PLAIN.replace("[ambient]", &format!("{air}[ambient]"));
    let case = Case::parse(&text, "case.toml").unwrap();
    let AirChoice::Given { air, reference_temperature } = *case.air() else { panic!() };
    assert_eq!((air.density, reference_temperature), (1.2, 293.15));
    let said = case.warnings();
    assert!(said.iter().any(|w| w.contains("6.6 % lower")), "{said:?}");
}

#[test]
fn pressure_follows_altitude_by_the_standard_atmosphere() {
    // ISO 2533, geometric altitude; values as tabulated in a published library of it.
    for (altitude, pressure) in [("0 m", 101325.0), ("1000 m", 89876.0), ("3 000 m", 70121.0)] {
        let altitude = altitude.replace(' ', "").replace('m', " m");
        let text = PLAIN.replace("\"40 degC\"", &format!("\"40 degC\"\naltitude = \"{altitude}\""));
        let case = Case::parse(&text, "case.toml").unwrap();
        assert!((case.ambient().pressure - pressure).abs() < 1.0, "{:?}", case.ambient());
    }
}

#[test]
fn a_part_sums_its_blocks_and_touching_edges_are_the_same_number() {
    let more = "[[block]]\nname = \"fin\"\npart = \"core\"\nmaterial = \"aluminium\"\n\
                x = [\"80 mm\", \"90 mm\"]\ny = [\"40 mm\", \"40.1 mm\"]\nheat = \"0.5 W\"\n\
                repeat = { count = 11, step-y = \"0.3 mm\" }\n[[slot]]";
    let text = PLAIN.replacen("[[slot]]", more, 1);
    let text = text.replacen(
        "[[slot]]",
        "[[block]]\nmaterial = \"copper\"\nx = [\"80 mm\", \"90 mm\"]\ny = [\"43.1 mm\", \"44 mm\"]\n[[slot]]",
        1,
    );
    let case = Case::parse(&text, "case.toml").unwrap_or_else(|e| panic!("{e}"));
    assert_eq!(case.parts().len(), 1);
    assert_eq!(case.parts()[0].blocks.len(), 12);
    assert!((case.parts()[0].heat - 20.5).abs() < 1e-12);
    assert_eq!(case.parts()[0].limit, Some(358.15));
    let blocks = case.blocks();
    assert_eq!(blocks[11].rectangle.y[1], blocks[12].rectangle.y[0]);
    assert_eq!(blocks[12].part, None);
}

#[test]
fn line_ends_marks_and_plain_ways_of_writing_are_understood() {
    let windows = PLAIN.replace('\n', "\r\n");
    let dotted =
        PLAIN.replace("[ambient]\ntemperature = \"40 degC\"", "[ambient]\ntemperature = '40°C'");
    let marked = format!("\u{feff}{PLAIN}");
    let whole = PLAIN.replacen("loss = 1.5", "loss = 1_000", 1);
    for text in [windows, dotted, marked, whole] {
        let case = Case::parse(&text, "case.toml").unwrap_or_else(|e| panic!("{e}"));
        assert_eq!(case.ambient().temperature, 313.15);
        let loss = case.slots()[0].resistance.law().loss;
        assert!(loss == 1.5 || loss == 1000.0);
    }
}

#[test]
fn a_vent_is_described_in_the_words_of_the_trade() {
    let vent = |text: &str| {
        let text = PLAIN.replacen("loss = 1.5", text, 1);
        let case = Case::parse(&text, "case.toml").unwrap_or_else(|e| panic!("{e}"));
        *case.slots()[0].resistance.vent().unwrap()
    };
    let sheet = "kind = \"perforated\"\nhole = \"3 mm\"\nsheet = \"1 mm\"";
    let dusty = vent(&format!("{sheet}\nfree-area = \"40 %\"\nblocked = \"25 %\""));
    assert_eq!(dusty.kind, VentKind::Perforated { hole: 3e-3, sheet: 1e-3 });
    assert!((dusty.open_share() - 0.3).abs() < 1e-15);
    let louvre = "kind = \"louvre\"\ngap = \"6 mm\"\nblade = \"12 mm\"\nfree-area = \"55 %\"";
    assert_eq!(vent(louvre).kind, VentKind::Louvre { gap: 6e-3, blade: 12e-3 });
    assert_eq!(vent(louvre).blocked, 0.0);
    // Square mesh, 1.2 mm clear between wires of 0.4 mm: (1.2/1.6)² of the area is free.
    let mesh = vent("kind = \"mesh\"\nopening = \"1.2 mm\"\nwire = \"0.4 mm\"");
    assert!((mesh.free_share - 0.5625).abs() < 1e-12);
}

#[test]
fn a_file_that_cannot_be_read_is_named() {
    let errors = Case::read(Path::new("no-such-folder/case.toml")).unwrap_err();
    let said = errors.to_string();
    assert!(said.starts_with("no-such-folder/case.toml: the file cannot be read"), "{said}");
}

#[test]
fn the_fingerprint_is_that_of_the_text() {
    let case = Case::parse(PLAIN, "case.toml").unwrap();
    let other = Case::parse(&format!("{PLAIN}# remark\n"), "case.toml").unwrap();
    // By `sha256sum` of GNU coreutils.
    assert_eq!(case.sha256(), "33d0c7b257bdd34023ff034375bb1d2bca48c228b2a9df63a67bbdba187e303a");
    assert_ne!(case.sha256(), other.sha256());
}
