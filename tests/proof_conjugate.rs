//! Conduction in blocks together with air beside them; conduction alone.

#![allow(clippy::print_stdout)]
#![allow(clippy::unwrap_used)]

mod proof;

use proof::{error_order, solved, within};
use ventrise::benchmark::{compute, names, references};
use ventrise_mesh::{Geometry, Layout, Mesh, Rectangle, Side};
use ventrise_solver::samples::{
    AMBIENT, Annulus, ConductingBlock, Grading, Layers, Rod, Shell, Slab, block_range, graded,
    joined, max_speed, side_heat,
};
use ventrise_solver::{Air, AirModel, Block, Description, Problem, SideCondition, Solid};

/// Conducting wall (Kaminski & Prakash 1986, recomputed values): 64 cells across the air, band
/// 0.3 %: the reference's own meshes agree to 0.1 %, this mesh is off by (h/δ)² = 0.1 to 0.2 %.
#[test]
fn conducting_walls() {
    for name in names().into_iter().filter(|n| n.starts_with("conducting-wall")) {
        let c = compute(name, 64, false).unwrap();
        assert!(c.settled && c.heat_error.abs() < 1e-6, "{name} {:e}", c.heat_error);
        let nu = c.quantity("nu_mean").unwrap();
        within(name, nu.computed, nu.references[0].value, 0.003);
    }
}

/// Centred block (House, Beckermann & Smith 1990, recomputed values), band 0.3 %.
#[test]
fn centred_conducting_blocks() {
    for name in names().into_iter().filter(|n| n.starts_with("conducting-block")) {
        let c = compute(name, 96, false).unwrap();
        assert!(c.settled && c.heat_error.abs() < 1e-6, "{name} {:e}", c.heat_error);
        let nu = c.quantity("nu_mean").unwrap();
        within(name, nu.computed, nu.references[0].value, 0.003);
    }
}

/// Without gravity only conduction is left. A block of the air's conductivity gives Nu = 1
/// exactly; the other two are the recomputed limits 0.298 and 3.356, three digits each.
#[test]
fn conduction_limits_of_a_large_block() {
    for (ratio, nusselt, band) in [(0.2, 0.298, 0.002), (1.0, 1.0, 1e-9), (5.0, 3.356, 0.002)] {
        let sample = ConductingBlock {
            rayleigh: 0.0,
            size: 0.9,
            ratio,
            gap_cells: 8,
            block_cells: 96,
            grading: Grading::Both(1.5),
            heat: 0.0,
        };
        let problem = sample.problem().unwrap();
        let solution = solved(&problem, 1e-9);
        let heat = side_heat(&problem, &solution.air, &solution.state, Side::Left);
        within(&format!("k* = {ratio}"), heat, nusselt, band);
    }
}

/// A block that conducts ten thousand times as well as the air, with heat: all of it arrives at
/// the four cold walls, and the block is isothermal.
#[test]
fn heated_metal_block_in_a_closed_cavity_conserves_heat() {
    let sample =
        ConductingBlock { rayleigh: 1e5, ratio: 1e4, heat: 7.3, ..ConductingBlock::default() };
    let problem = sample.problem().unwrap();
    let solution = solved(&problem, 1e-8);
    let out: f64 =
        Side::ALL.iter().map(|s| -side_heat(&problem, &solution.air, &solution.state, *s)).sum();
    within("heat out", out, 7.3, 1e-6);
    let [low, high] = block_range(problem.mesh(), &solution.state, 0);
    assert!(low > 0.1 && high - low < 1e-3 * low, "{low} {high}");
    assert!(max_speed(problem.mesh(), &solution.state) > 1.0);
}

/// Two square cavities with a metal partition between them, 2 K across: the partition takes the
/// mean temperature, so each is the cavity of 1 K and Rayleigh number 1e4 (2.24482, see
/// square-cavity.csv). Two closed air regions, conductivity ratio 1e4. The partition carries the
/// heat from its upper to its lower end with a temperature difference of about Nu/(2·1e4·1), far
/// below the band.
#[test]
fn two_closed_cavities_share_a_metal_partition() {
    let segment = |from: f64| graded(from, from + 1.0, 64, Grading::Both(1.2));
    let layout = Layout {
        geometry: Geometry::Planar { depth: 1.0 },
        width: 3.0,
        height: 1.0,
        blocks: vec![Rectangle { x: [1.0, 2.0], y: [0.0, 1.0] }],
        slots: vec![],
        x_lines: vec![],
        y_lines: vec![],
        walls: [true; 4],
    };
    let x = joined(&[segment(0.0), graded(1.0, 2.0, 16, Grading::Both(1.0)), segment(2.0)]);
    let prandtl = 0.71;
    let problem = Problem::new(Description {
        mesh: Mesh::from_lines(&layout, x, segment(0.0)).unwrap(),
        air: AirModel::Given(Air {
            density: 1.0,
            viscosity: prandtl,
            conductivity: 1.0,
            specific_heat: 1.0,
            expansion: 1.0,
        }),
        ambient: AMBIENT,
        gravity: [0.0, -1e4 * prandtl],
        solids: vec![Solid { conductivity: [1e4; 2], density: 1.0, specific_heat: 1.0 }],
        blocks: vec![Block { solid: 0, heat: 0.0 }],
        slots: vec![],
        fans: vec![],
        sides: [
            SideCondition::Temperature(AMBIENT + 1.0),
            SideCondition::Temperature(AMBIENT - 1.0),
            SideCondition::Adiabatic,
            SideCondition::Adiabatic,
        ],
        parts: vec![vec![0]],
        joints: Vec::new(),
        sources: None,
        radiation: None,
        heat_laws: Vec::new(),
    })
    .unwrap();
    let solution = solved(&problem, 1e-8);
    let [hot, cold] =
        [Side::Left, Side::Right].map(|s| side_heat(&problem, &solution.air, &solution.state, s));
    within("left cavity", hot, 2.24482, 0.002);
    within("right cavity", -cold, 2.24482, 0.002);
    assert!((hot + cold).abs() < 1e-6 * hot, "{hot} {cold}");
    let [low, high] = block_range(problem.mesh(), &solution.state, 0);
    assert!(low.abs() < 2e-3 && high.abs() < 2e-3, "{low} {high}");
}

/// Closed forms; 40 cells, band 0.1 %.
#[test]
fn exact_conduction() {
    let shell =
        Shell { radii: [0.02, 0.04], height: 1.0, conductivity: 0.2, heat: 18.1294, cells: 40 };
    assert!((shell.exact_shell() - 10.0).abs() < 1e-4);
    let problem = shell.problem().unwrap();
    let solution = solved(&problem, 1e-9);
    within("shell", Shell::difference(&problem, &solution.state), shell.exact(), 1e-3);

    let rod = Rod { radius: 0.01, conductivity: 20.0, heat_density: 1e6, cells: 40 };
    let problem = rod.problem().unwrap();
    let solution = solved(&problem, 1e-9);
    within("rod", Rod::centre(&problem, &solution.state), 1.25, 1e-3);

    let slab = Slab { half_thickness: 0.01, conductivity: 20.0, heat_density: 1e6, cells: 40 };
    let problem = slab.problem().unwrap();
    let solution = solved(&problem, 1e-9);
    within("slab", Slab::centre(&problem, &solution.state), 2.5, 1e-3);
}

/// 3 mm at 0.2, 10 mm of still air at 0.0263, 1 mm at 160 W/(m·K): 0.395234 m²K/W. Exact on any
/// mesh whose lines fall on the interfaces.
#[test]
fn layers_in_series_are_exact_on_any_mesh() {
    for cells in [2, 5] {
        let layers = Layers {
            layers: vec![[0.003, 0.2], [0.010, 0.0263], [0.001, 160.0]],
            air: Some(1),
            cells,
        };
        within("resistance", layers.resistance(), 0.395234, 1e-6);
        let problem = layers.problem().unwrap();
        let solution = solved(&problem, 1e-9);
        let heat = side_heat(&problem, &solution.air, &solution.state, Side::Left);
        within("heat", heat, 10.0 / layers.resistance(), 1e-8);
        assert!(max_speed(problem.mesh(), &solution.state) < 1e-12);
    }
}

/// The radial error is h²-proportional: rings do not follow the logarithm exactly.
#[test]
fn radial_conduction_is_second_order() {
    let off = [10, 20].map(|cells| {
        let shell = Shell { radii: [0.01, 0.05], height: 0.1, conductivity: 0.2, heat: 3.0, cells };
        let problem = shell.problem().unwrap();
        let solution = solved(&problem, 1e-9);
        (Shell::difference(&problem, &solution.state) - shell.exact()).abs()
    });
    let order = error_order(off);
    assert!((order - 2.0).abs() < 0.1, "{order} from {off:?}");
}

/// Recomputed annulus table, band 0.5 %; the outer wall sends out what the inner wall takes in,
/// K·Nu_o = Nu_i. At radius ratio 1.1 the annulus is nearly the plane cavity: over its conduction
/// value (K − 1)/ln K it comes within 0.23 % of the square cavity's 1.11779, 2.24482, 4.52164
/// (0.13 % in the recomputed table, 0.1 % from this mesh).
#[test]
fn vertical_annuli() {
    for name in names().into_iter().filter(|n| n.starts_with("annulus")) {
        let c = compute(name, 64, false).unwrap();
        assert!(c.settled && c.heat_error.abs() < 1e-6, "{name} {:e}", c.heat_error);
        let nu = c.quantity("nu_mean").unwrap();
        within(name, nu.computed, nu.references[0].value, 0.005);
        if let Some(power) = name.strip_prefix("annulus-slim-") {
            let square = references(&format!("square-cavity-{power}"), "nu_mean")[0].value;
            within("as a cavity", nu.computed * 1.1_f64.ln() / 0.1, square, 0.0023);
        }
    }
}

/// Without gravity the annulus conducts (K − 1)/ln K = 1.44270 at K = 2.
#[test]
fn annulus_without_gravity_conducts() {
    let annulus = Annulus {
        rayleigh: 0.0,
        prandtl: 0.7,
        radius_ratio: 2.0,
        aspect: 1.0,
        nusselt_guess: 1.0 / 2.0_f64.ln(),
        cells: 32,
        grading: Grading::Uniform,
    };
    let problem = annulus.problem().unwrap();
    let solution = solved(&problem, 1e-9);
    let nusselt = annulus.nusselt(&problem, &solution.air, &solution.state);
    within("conduction", nusselt.inner, 1.0 / 2.0_f64.ln(), 1e-3);
}
