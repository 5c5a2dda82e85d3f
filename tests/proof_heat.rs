//! Heat that follows the temperature of its block: a lump with a film in closed form, a table of
//! points, heat that has no steady answer, and a whole housing.

#![allow(clippy::unwrap_used)]

mod proof;

use proof::{solved, within};
use ventrise::case::{Case, setup};
use ventrise_mesh::{Geometry, Layout, Mesh, Rectangle, Side};
use ventrise_solver::{
    AirModel, Block, Control, Description, HeatLaw, Problem, Settings, SideCondition, Solid,
    StopReason, Verdict, balance, block_heats, block_temperatures, solve,
};

const AMBIENT: f64 = 300.0;
/// Film [W/(m²·K)] on 0.1 m × 1 m: 2 K/W; and from the block's mean to its surface, L/(3·k·A), to
/// which four cells of Δx add Δx²/(6·k·L·A): half cells at the edge conduct all heat, and the mean of
/// the centres is not that of the parabola between them.
const FILM: f64 = 5.0;
const RESISTANCE: f64 = 2.0 + 0.1 / (3.0 * 1e4 * 0.1) + 0.025 * 0.025 / (6.0 * 1e4 * 0.1 * 0.1);

/// A block that conducts so well that it has nearly one temperature, with a film on its right side.
fn lump(points: &[[f64; 2]]) -> Problem {
    let layout = Layout {
        geometry: Geometry::Planar { depth: 1.0 },
        width: 0.1,
        height: 0.1,
        blocks: vec![Rectangle { x: [0.0, 0.1], y: [0.0, 0.1] }],
        slots: Vec::new(),
        x_lines: Vec::new(),
        y_lines: Vec::new(),
        walls: [true; 4],
    };
    let lines = || (0..=4).map(|n| 0.025 * f64::from(n)).collect::<Vec<f64>>();
    let mesh = Mesh::from_lines(&layout, lines(), lines()).unwrap();
    let mut sides = [SideCondition::Adiabatic; 4];
    sides[Side::Right.index()] = SideCondition::Film { coefficient: FILM, temperature: AMBIENT };
    Problem::new(Description {
        mesh,
        air: AirModel::Film { pressure: 101_325.0 },
        ambient: AMBIENT,
        gravity: [0.0, -9.80665],
        solids: vec![Solid { conductivity: [1e4; 2], density: 1000.0, specific_heat: 1000.0 }],
        blocks: vec![Block { solid: 0, heat: 0.0 }],
        slots: Vec::new(),
        sides,
        parts: vec![vec![0]],
        fans: Vec::new(),
        joints: Vec::new(),
        sources: None,
        radiation: None,
        heat_laws: vec![HeatLaw { block: 0, points: points.to_vec() }],
    })
    .unwrap()
}

/// P = p·(1 + a·(T − T₀)), T = T_a + R·P: P = p·(1 + a·(T_a − T₀))/(1 − a·R·p), growth a·R·p.
#[test]
fn a_lump_with_a_slope_is_the_closed_form() {
    for (p, a, at) in [
        (10.0, 0.0039, 293.15),
        (40.0, 0.0039, 293.15),
        (120.0, 0.0039, 310.0),
        (20.0, -0.02, 300.0),
    ] {
        let step = if a < 0.0 { 40.0 } else { 100.0 };
        let problem = lump(&[[at, p], [at + step, p * (1.0 + a * step)]]);
        let solution = solved(&problem, 1e-9);
        assert_eq!(solution.verdict, Verdict::Settled);
        let exact = p * (1.0 + a * (AMBIENT - at)) / (1.0 - a * RESISTANCE * p);
        let heat = block_heats(&problem, &solution.state)[0];
        within("heat", heat, exact, 2e-6);
        let rise = block_temperatures(&problem, &solution.state)[0].unwrap().mean;
        within("rise", rise, RESISTANCE * exact, 2e-6);
        let growth = solution.heat_growth.unwrap();
        assert!((growth - a * RESISTANCE * p).abs() < 1e-3, "{growth}");
        assert!(balance(&problem, &solution.air, &solution.state).heat_error < 1e-6);
    }
}

/// A table: below 320 K 5 W, then 0.2 W/K up to 360 K, then no more. T = 300 K + 2 K/W · P has its
/// only root at 5 W, T = 310 K; with 12 W at the foot it is P = 12 + 0.2·(R·P − 20), P = 8/(1 − 0.2·R), 13.3 W.
#[test]
fn a_table_of_points_is_followed() {
    for (foot, exact) in [(5.0, 5.0), (12.0, 8.0 / (1.0 - 0.2 * RESISTANCE))] {
        let points = [[280.0, foot], [320.0, foot], [360.0, foot + 8.0], [400.0, foot + 8.0]];
        let problem = lump(&points);
        let solution = solved(&problem, 1e-9);
        within("heat", block_heats(&problem, &solution.state)[0], exact, 2e-6);
    }
}

/// a·R·p = 1.2 and 1.02: every watt makes more than a watt, there is no steady answer.
#[test]
fn heat_without_a_steady_answer_runs_away() {
    for growth in [1.2, 1.02] {
        let p = growth / (0.0039 * RESISTANCE);
        let problem = lump(&[[AMBIENT, p], [AMBIENT + 100.0, 1.39 * p]]);
        let solution =
            solve(&problem, &Settings::default(), None, &mut |_| Control::Continue).unwrap();
        assert_eq!(solution.stop, StopReason::RanAway);
        let Verdict::RunsAway(found) = solution.verdict else { panic!("{:?}", solution.verdict) };
        assert!((found.growth - growth).abs() < 1e-6, "{found:?}");
        assert_eq!(found.block, 0);
    }
}

/// The worked cabinet with heat that grows by 0.8 %/K: at the end it is what the law says at the
/// parts' own temperatures, more than at 20 degC, and the balance closes with it.
#[test]
fn a_housing_is_solved_with_its_heat() {
    let text = include_str!("../cases/wall-cabinet.toml");
    let law = "heat-slope = \"0.8 %/K\"\nheat-at = \"20 degC\"\nheat = \"8 W\"";
    let text = text.replace("heat = \"8 W\"", law);
    assert!(text.contains("heat-slope"));
    let case = Case::parse(&text, "case.toml").unwrap();
    let mesh = setup::mesh(&case).unwrap().mesh;
    let problem = setup::problem(&case, mesh).unwrap();
    let settings = setup::settings(&case);
    let solution = solve(&problem, &settings, None, &mut |_| Control::Continue).unwrap();
    assert_eq!(solution.stop, StopReason::Converged);
    let laws = &problem.description().heat_laws;
    assert_eq!(laws.len(), 1);
    let temperatures = block_temperatures(&problem, &solution.state);
    let mean = problem.description().ambient + temperatures[laws[0].block].unwrap().mean;
    let expected = 8.0 * (1.0 + 0.008 * (mean - 293.15));
    within("heat", block_heats(&problem, &solution.state)[laws[0].block], expected, 1e-9);
    assert!(expected > 8.5);
    let b = balance(&problem, &solution.air, &solution.state);
    assert!(b.heat_error < 1e-6, "{b:?}");
    let growth = solution.heat_growth.unwrap();
    assert!((0.1..0.6).contains(&growth), "{growth}");
}

/// The same with 8 %/K: at a growth near 4 no steady flow carries the heat away.
#[test]
fn a_housing_can_run_away() {
    let text = include_str!("../cases/wall-cabinet.toml");
    let law = "heat-slope = \"8 %/K\"\nheat-at = \"20 degC\"\nheat = \"8 W\"";
    let case = Case::parse(&text.replace("heat = \"8 W\"", law), "case.toml").unwrap();
    let mesh = setup::mesh(&case).unwrap().mesh;
    let problem = setup::problem(&case, mesh).unwrap();
    let settings = setup::settings(&case);
    let solution = solve(&problem, &settings, None, &mut |_| Control::Continue).unwrap();
    let Verdict::RunsAway(found) = solution.verdict else { panic!("{:?}", solution.verdict) };
    assert!(found.growth >= 1.0 && found.temperature > 340.0, "{found:?}");
    assert_eq!(solution.heat_growth, None);
}
