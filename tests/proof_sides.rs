//! Outer faces of sides against the one-dimensional wall: flux through a plate, a wall, then by film
//! and radiation outside, with and without sun. Every root by bisection, to 1e-4.

#![allow(clippy::unwrap_used)]

mod proof;

use proof::{solved, within};
use ventrise_mesh::{Geometry, Layout, Mesh, Rectangle, Side};
use ventrise_solver::{
    Air, AirModel, Block, Description, Facing, OuterFilm, Outside, Problem, STEFAN_BOLTZMANN,
    SideCondition, Solid, balance, side_flows, still_air_film,
};

const AMBIENT: f64 = 300.0;
const PRESSURE: f64 = 101_325.0;
const GRAVITY: f64 = 9.80665;
/// The plate: thickness across, length along, depth [m]; conductivity [W/(m·K)]; heat [W].
const PLATE: [f64; 3] = [0.02, 0.3, 0.4];
const CONDUCTIVITY: f64 = 0.5;

/// A solid plate whose one side has an outer face, all other sides adiabatic.
fn plate(side: Side, outside: Outside, heat: f64) -> Problem {
    let upright = matches!(side, Side::Left | Side::Right);
    let [thick, long, depth] = PLATE;
    let [width, height] = if upright { [thick, long] } else { [long, thick] };
    let layout = Layout {
        geometry: Geometry::Planar { depth },
        width,
        height,
        blocks: vec![Rectangle { x: [0.0, width], y: [0.0, height] }],
        slots: Vec::new(),
        x_lines: Vec::new(),
        y_lines: Vec::new(),
        walls: [true; 4],
    };
    let lines = |extent: f64| (0..=8).map(|n| extent * f64::from(n) / 8.0).collect::<Vec<f64>>();
    let mesh = Mesh::from_lines(&layout, lines(width), lines(height)).unwrap();
    let mut sides = [SideCondition::Adiabatic; 4];
    sides[side.index()] = SideCondition::Outside(outside);
    Problem::new(Description {
        mesh,
        air: AirModel::Film { pressure: PRESSURE },
        ambient: AMBIENT,
        gravity: [0.0, -GRAVITY],
        solids: vec![Solid {
            conductivity: [CONDUCTIVITY; 2],
            density: 1000.0,
            specific_heat: 1000.0,
        }],
        blocks: vec![Block { solid: 0, heat }],
        slots: Vec::new(),
        sides,
        parts: vec![vec![0]],
        fans: Vec::new(),
        joints: Vec::new(),
        sources: None,
        radiation: None,
        heat_laws: Vec::new(),
    })
    .unwrap()
}

/// Root of a rising function by bisection.
fn root(of: impl Fn(f64) -> f64, mut low: f64, mut high: f64) -> f64 {
    for _ in 0..200 {
        let middle = 0.5 * (low + high);
        if of(middle) > 0.0 { high = middle } else { low = middle }
    }
    low
}

/// Film of the outer face at a temperature [W/(m²·K)].
fn film(side: Side, outside: &Outside, surface: f64) -> f64 {
    let [_, long, depth] = PLATE;
    let length = match Facing::of(side) {
        Facing::Sideways => long,
        _ => long * depth / (2.0 * (long + depth)),
    };
    match outside.film {
        OuterFilm::Given(h) => h,
        OuterFilm::StillAir => {
            let air = Air::dry(0.5 * (surface + outside.air), PRESSURE);
            still_air_film(Facing::of(side), length, surface - outside.air, &air, GRAVITY)
        }
    }
}

/// What leaves the outer face at a temperature, sun taken off [W/m²].
fn leaving(side: Side, o: &Outside, surface: f64) -> f64 {
    film(side, o, surface) * (surface - o.air)
        + o.emissivity * STEFAN_BOLTZMANN * (surface.powi(4) - o.surroundings.powi(4))
        - o.sun
}

#[test]
fn every_outer_face_is_the_exact_wall() {
    let area = PLATE[1] * PLATE[2];
    for side in Side::ALL {
        for outer_film in [OuterFilm::Given(7.0), OuterFilm::StillAir] {
            for emissivity in [0.0, 0.85] {
                for sun in [0.0, 480.0] {
                    for wall in [0.0, 0.012] {
                        for heat in [18.0, -3.0] {
                            let outside = Outside {
                                film: outer_film,
                                air: AMBIENT,
                                emissivity,
                                surroundings: 285.0,
                                sun,
                                wall,
                            };
                            let problem = plate(side, outside, heat);
                            let solution = solved(&problem, 1e-9);
                            let (air, state) = (&solution.air, &solution.state);
                            let flux = heat / area;
                            let surface =
                                root(|t| leaving(side, &outside, t) - flux, 100.0, 1000.0);
                            let flow = side_flows(&problem, air, state)[side.index()];
                            let outer = flow.outer.unwrap();
                            let what = format!("{side:?} {outside:?} {heat} W");
                            within(&what, AMBIENT + outer.mean_rise, surface, 1e-6);
                            let rise = surface - AMBIENT;
                            assert!((outer.mean_rise - rise).abs() <= 1e-4 * rise.abs(), "{what}");
                            assert!((outer.max_rise - rise).abs() <= 1e-4 * rise.abs(), "{what}");
                            // The balance closes to 1e-6 of all heat that goes in, the sun's too.
                            let all = heat.abs() + area * sun;
                            assert!((flow.conduction - heat).abs() <= 1e-6 * all, "{what}");
                            let expected = film(side, &outside, surface);
                            within(&what, outer.coefficient, expected, 1e-4);
                            // On the far side of the plate the cells' centres lie s inside:
                            // T = T_far − q·s²/(2·k·L). The half cell at the edge conducts all
                            // of q, which makes every centre q·s²/(2·k·L) warmer.
                            let far = surface + flux * (wall + 0.5 * PLATE[0] / CONDUCTIVITY);
                            let inner = match side {
                                Side::Left | Side::Bottom => problem.mesh().cell(7, 7),
                                _ => problem.mesh().cell(0, 0),
                            };
                            within(&what, AMBIENT + state.t[inner], far, 1e-7);
                            let b = balance(&problem, air, state);
                            assert!(b.heat_error <= 1e-6, "{what} {b:?}");
                            let into = heat.max(0.0) + area * sun;
                            assert!(b.heat_in >= into * (1.0 - 1e-9), "{what} {b:?}");
                        }
                    }
                }
            }
        }
    }
}
