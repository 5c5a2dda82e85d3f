//! Case files: what is understood, what is refused and how.

use std::path::Path;

use ventrise::case::{AirChoice, Case};
use ventrise_mesh::{Geometry, Side};
use ventrise_solver::SideCondition;

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
        "{:?} {:?} {:?} {:?} {materials:?} {:#?} {:?} {:?} {:?} {:?} {:?} {:?}",
        case.title(),
        case.section(),
        case.ambient(),
        case.air(),
        case.blocks(),
        case.parts(),
        case.slots(),
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
    for file in files {
        let text = std::fs::read_to_string(&file).unwrap();
        let name = file.file_name().unwrap().to_string_lossy().into_owned();
        let input = text.split("# expected:\n").next().unwrap();
        let said = match Case::parse(input, &name) {
            Ok(_) => "accepted".to_string(),
            Err(errors) => errors.to_string(),
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
    assert!(wrong.is_empty(), "changed messages:\n{}", wrong.join("\n"));
}
