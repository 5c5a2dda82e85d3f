//! Natural convection with surface radiation in a square cavity, all walls grey with the same
//! emissivity, floor and roof adiabatic in total.
//!
//! The problem is that of M. Akiyama, Q. P. Chong, Numer. Heat Transfer A 32 (1997) 419-433; the
//! values are an independent finite-volume recomputation, extrapolated from two meshes (the printed
//! ones, from memory, agree within 0.1 % in convection and 1.6 % in radiation, with other air).
#![allow(clippy::unwrap_used, clippy::print_stdout)]

use ventrise_mesh::{Geometry, Layout, Mesh, Side};
use ventrise_solver::samples::{Grading, graded};
use ventrise_solver::{
    Air, AirModel, Control, Description, Problem, Settings, SideCondition, SideSurface, StopReason,
    Surfaces, radiant_heat, side_flows, solve,
};

const MEAN: f64 = 293.5;
const DIFFERENCE: f64 = 10.0;

/// Side length [m], emissivity; Nusselt numbers of convection and radiation at the hot wall, at the
/// cold wall, mean temperatures of floor and roof over the difference.
struct Row {
    length: f64,
    emissivity: f64,
    hot: [f64; 2],
    cold: [f64; 2],
}

fn nusselt(row: &Row, cells: usize) -> ([f64; 2], [f64; 2], f64) {
    let (k, nu, density) = (0.02590, 1.5146e-5, 1.2);
    let viscosity = nu * density;
    let air = Air {
        density,
        viscosity,
        conductivity: k,
        specific_heat: 0.71 * k / viscosity,
        expansion: 1.0 / MEAN,
    };
    let lines = graded(0.0, row.length, cells, Grading::Both(1.5));
    let layout = Layout {
        geometry: Geometry::Planar { depth: 1.0 },
        width: row.length,
        height: row.length,
        blocks: Vec::new(),
        slots: Vec::new(),
        x_lines: Vec::new(),
        y_lines: Vec::new(),
        walls: [true; 4],
    };
    let wall = |t| SideCondition::Temperature(t);
    let problem = Problem::new(Description {
        mesh: Mesh::from_lines(&layout, lines.clone(), lines).unwrap(),
        air: AirModel::Given(air),
        ambient: MEAN,
        gravity: [0.0, -9.81],
        solids: Vec::new(),
        blocks: Vec::new(),
        slots: Vec::new(),
        sides: [
            wall(MEAN + 0.5 * DIFFERENCE),
            wall(MEAN - 0.5 * DIFFERENCE),
            SideCondition::Adiabatic,
            SideCondition::Adiabatic,
        ],
        parts: Vec::new(),
        fans: Vec::new(),
        joints: Vec::new(),
        sources: None,
        heat_laws: Vec::new(),
        radiation: Some(Surfaces {
            blocks: Vec::new(),
            sides: [SideSurface::Wall(row.emissivity); 4],
        }),
    })
    .unwrap();
    let settings = Settings { assess_stability: false, ..Settings::default() };
    let solution = solve(&problem, &settings, None, &mut |_| Control::Continue).unwrap();
    assert_eq!(solution.stop, StopReason::Converged);
    let cycles = solution.history.iter().filter(|r| r.cells == cells * cells).count();
    let state = &solution.state;
    let flows = side_flows(&problem, &air, state);
    let radiant = radiant_heat(&problem, &air, &state.t).unwrap();
    let of = |side: Side, sign: f64| {
        let radiated = sign * radiant.sides[side.index()];
        let total = sign * flows[side.index()].conduction;
        [(total - radiated) / (k * DIFFERENCE), radiated / (k * DIFFERENCE)]
    };
    println!("{cycles} cycles");
    let error = solution.history.last().unwrap().heat_error;
    (of(Side::Left, -1.0), of(Side::Right, 1.0), error)
}

#[test]
fn nusselt_numbers_of_convection_and_radiation() {
    let rows = [
        Row { length: 0.021_30, emissivity: 0.8, hot: [2.2473, 2.3507], cold: [2.2757, 2.3223] },
        Row { length: 0.045_89, emissivity: 0.2, hot: [4.3874, 1.0726], cold: [4.4039, 1.0561] },
        Row { length: 0.045_89, emissivity: 0.8, hot: [4.1837, 5.1144], cold: [4.2415, 5.0566] },
        Row { length: 0.098_88, emissivity: 0.8, hot: [7.8086, 11.0836], cold: [7.9222, 10.970] },
    ];
    for row in rows {
        let (hot, cold, error) = nusselt(&row, 80);
        println!("{:.5} m, {}: hot {hot:.4?}, cold {cold:.4?}", row.length, row.emissivity);
        // Half a per cent: the tables' own claim for a well resolved mesh.
        for (found, published) in hot.iter().chain(&cold).zip(row.hot.iter().chain(&row.cold)) {
            assert!((found / published - 1.0).abs() < 5e-3, "{found} against {published}");
        }
        assert!(error < 1e-6, "{error}");
    }
}
