//! What a colleague would work out on paper and ask before anything is solved.

use ventrise_mesh::{AIR, Mesh, Side};
use ventrise_solver::{STEFAN_BOLTZMANN, SideCondition};

use super::estimate::{Estimate, GRAVITY};
use super::model::{Case, side_name};
use super::surfaces::heated_surfaces;

/// Optimum gap of isothermal plates, both heated, times the fourth root of the plate group
/// P = g·β·ΔT/(ν·α·L) (bar-cohen-1984 in docs/references.md).
const BEST_GAP: f64 = 2.714;

/// Painted and plastic surfaces, 0.8 to 0.95 (common practice, no source).
const UNKNOWN_EMISSIVITY: f64 = 0.9;

/// Share of all heat below which a part's heat looks like a slip of the unit.
const ODD_HEAT: f64 = 1e-4;

/// A gap between two heated faces beside the one that would serve best.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PlateGap {
    /// The narrowest gap between two heated faces [m].
    pub width: f64,
    /// Height of the face on it [m].
    pub height: f64,
    /// The gap with which a row of such plates gives off most in a given width [m].
    pub best: f64,
}

/// The narrowest gap between two heated faces, and the best one at the estimated rise: narrower
/// gaps choke the flow, wider ones leave room for more plates. b = 2.714·(ν·α·L/(g·β·ΔT))^(1/4).
pub fn plate_gap(case: &Case, estimate: &Estimate) -> Option<PlateGap> {
    let gaps = heated_surfaces(case).into_iter().filter_map(|surface| {
        let gap = surface.gap.filter(|gap| gap.both_heated)?;
        Some((gap.width, surface.height))
    });
    let (width, height) = gaps.min_by(|a, b| a.0.total_cmp(&b.0))?;
    let air = &estimate.air;
    let viscosity = air.viscosity / air.density;
    let diffusivity = air.conductivity / (air.density * air.specific_heat);
    let drive = GRAVITY * air.expansion * estimate.rise / (viscosity * diffusivity * height);
    (drive > 0.0).then(|| PlateGap { width, height, best: BEST_GAP * drive.powf(-0.25) })
}

/// Share of the heat that would leave the heated blocks by radiation, were the surroundings black
/// and at ambient temperature: at one rise both ways share the heat, Q_r/(Q_r + Q_c) with
/// Q_r = Σ ε·A·σ·(T⁴ − T_a⁴) (Stefan–Boltzmann) and Q_c the heat. Faces that look at another
/// heated face do not count. An upper bound. `None` without heated faces.
pub fn radiated_share(case: &Case, estimate: &Estimate) -> Option<f64> {
    let ambient = case.ambient().temperature;
    let emitted = STEFAN_BOLTZMANN * ((ambient + estimate.rise).powi(4) - ambient.powi(4));
    let free = heated_surfaces(case).into_iter().filter(|s| s.gap.is_none_or(|g| !g.both_heated));
    let radiated: f64 = free
        .map(|s| {
            let emissivity = case.emissivity(&case.blocks()[s.block]);
            s.area * emissivity.unwrap_or(UNKNOWN_EMISSIVITY) * emitted
        })
        .sum();
    let heat: f64 = case.blocks().iter().map(|b| b.heat.max(0.0)).sum();
    (radiated > 0.0 && heat > 0.0).then(|| radiated / (radiated + heat))
}

/// Questions about a case on its mesh, one sentence each.
pub fn questions(case: &Case, mesh: &Mesh) -> Vec<String> {
    let mut questions = Vec::new();
    let heat: f64 = case.blocks().iter().map(|b| b.heat.abs()).sum();
    for part in case.parts() {
        if part.heat != 0.0 && part.heat.abs() < ODD_HEAT * heat {
            questions.push(format!(
                "part \"{}\" has {} W, less than 1/10000 of all heat, {} W: is the unit meant?",
                part.name, part.heat, heat
            ));
        }
    }
    for slot in dead_ends(case, mesh) {
        questions.push(format!(
            "slot \"{}\" leads to a dead end: the air behind it reaches no other opening, so it \
             must breathe in and out at once",
            case.slots()[slot].name
        ));
    }
    questions
}

/// Slots whose air is connected with no other opening, where there are others.
fn dead_ends(case: &Case, mesh: &Mesh) -> Vec<usize> {
    let openings = openings(case, mesh);
    let space = spaces(mesh);
    let reached: Vec<(Opening, usize)> =
        openings.into_iter().map(|(opening, cell)| (opening, space[cell])).collect();
    let others = |slot: usize| reached.iter().filter(move |(o, _)| *o != Opening::Slot(slot));
    let is_dead_end = |slot: &usize| {
        let own = reached.iter().find(|(o, _)| *o == Opening::Slot(*slot));
        own.is_some_and(|(_, space)| {
            others(*slot).count() > 0 && others(*slot).all(|(_, other)| other != space)
        })
    };
    (0..case.slots().len()).filter(is_dead_end).collect()
}

/// Where air passes the edge.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Opening {
    Slot(usize),
    Side(&'static str),
}

/// Every opening with the air cells behind it.
fn openings(case: &Case, mesh: &Mesh) -> Vec<(Opening, usize)> {
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let mut found = Vec::new();
    for side in Side::ALL {
        let open = case.sides()[side.index()] == SideCondition::Open;
        for (n, slot) in mesh.slots(side).iter().enumerate() {
            let cell = match side {
                Side::Left => mesh.cell(0, n),
                Side::Right => mesh.cell(nx - 1, n),
                Side::Bottom => mesh.cell(n, 0),
                Side::Top => mesh.cell(n, ny - 1),
            };
            let opening = match slot {
                Some(slot) => Opening::Slot(*slot as usize),
                None if open => Opening::Side(side_name(side)),
                None => continue,
            };
            if mesh.regions()[cell] == AIR {
                found.push((opening, cell));
            }
        }
    }
    found
}

/// The number of the connected air space that every cell belongs to; 0 in solids.
fn spaces(mesh: &Mesh) -> Vec<usize> {
    let (nx, ny) = (mesh.nx(), mesh.ny());
    let mut space = vec![0; nx * ny];
    let mut count = 0;
    let mut waiting = Vec::new();
    for begin in 0..nx * ny {
        if space[begin] != 0 || mesh.regions()[begin] != AIR {
            continue;
        }
        count += 1;
        space[begin] = count;
        waiting.push(begin);
        while let Some(n) = waiting.pop() {
            let (i, j) = (n % nx, n / nx);
            let beside = [
                (i > 0).then(|| n - 1),
                (i + 1 < nx).then(|| n + 1),
                (j > 0).then(|| n - nx),
                (j + 1 < ny).then(|| n + nx),
            ];
            for m in beside.into_iter().flatten() {
                if space[m] == 0 && mesh.regions()[m] == AIR {
                    space[m] = count;
                    waiting.push(m);
                }
            }
        }
    }
    space
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use crate::case::setup;

    const PLAIN: &str = include_str!("../../tests/cases/plain.toml");

    fn case(text: &str) -> Case {
        Case::parse(text, "case.toml").unwrap_or_else(|e| panic!("{e}"))
    }

    fn with(more: &str) -> Case {
        case(&format!("{PLAIN}\n{more}\n"))
    }

    fn asked(case: &Case) -> Vec<String> {
        questions(case, &setup::mesh(case).unwrap().mesh)
    }

    /// Two plates of 80 mm height, 8 mm apart.
    fn plates() -> Case {
        let two = "heat = \"15 W\"\nrepeat = { count = 2, step-x = \"12 mm\" }";
        let text = PLAIN.replace("x = [\"40 mm\", \"80 mm\"]", "x = [\"40 mm\", \"44 mm\"]");
        assert_ne!(text, PLAIN);
        case(&text.replace("heat = \"15 W\"", two))
    }

    #[test]
    fn the_best_gap_gives_off_most_by_the_published_law_of_plate_channels() {
        let case = plates();
        let estimate = Estimate::of(&case);
        let gap = plate_gap(&case, &estimate).unwrap();
        assert!((gap.width - 8e-3).abs() < 1e-12 && (gap.height - 80e-3).abs() < 1e-12, "{gap:?}");
        // bar-cohen-1984: Nu = (576/El² + 2.873/√El)^(-1/2), El the channel's Rayleigh number; of
        // thin plates in a given width those serve best whose h/b ~ Nu/b² is largest.
        let air = &estimate.air;
        let diffusivity = air.conductivity / (air.density * air.specific_heat);
        let group = GRAVITY * air.expansion * estimate.rise
            / (air.viscosity / air.density * diffusivity * gap.height);
        let given_off = |b: f64| {
            let el = group * b.powi(4);
            (576.0 / (el * el) + 2.873 / el.sqrt()).powf(-0.5) / (b * b)
        };
        let widths = (500..1500).map(|n| gap.best * f64::from(n) * 1e-3);
        let best = widths.max_by(|a, b| given_off(*a).total_cmp(&given_off(*b))).unwrap();
        // The factor has four digits, the law's 2.873 too.
        assert!((best / gap.best - 1.0).abs() < 2e-3, "{best} {gap:?}");
        assert_eq!(plate_gap(&with(""), &Estimate::of(&with(""))), None);
    }

    #[test]
    fn the_radiated_share_is_that_of_the_coefficients() {
        // One block of 40 × 80 mm over a depth of 0.3 m, cold walls in front of its faces.
        let text = PLAIN.replace("heat = \"15 W\"", "heat = \"15 W\"\nemissivity = 0.5");
        let case = case(&text);
        let estimate = Estimate::of(&case);
        let share = radiated_share(&case, &estimate).unwrap();
        let area = 0.3 * 2.0 * (0.04 + 0.08);
        let (ambient, hot) = (313.15_f64, 313.15 + estimate.rise);
        // Linear between the two temperatures: h_r = ε·σ·(T + T_a)·(T² + T_a²), h_c = Q/(A·ΔT).
        let radiant = 0.5 * 5.670_374e-8 * (hot + ambient) * (hot * hot + ambient * ambient);
        let convective = 15.0 / (area * estimate.rise);
        assert!((share - radiant / (radiant + convective)).abs() < 1e-6, "{share}");
    }

    #[test]
    fn a_slot_before_a_closed_space_is_a_dead_end_and_a_passage_is_none() {
        assert_eq!(asked(&with("")), Vec::<String>::new());
        let shelf = |to: &str| {
            format!(
                "[[block]]\nmaterial = \"steel\"\nx = [\"0 mm\", \"{to} mm\"]\n\
                 y = [\"130 mm\", \"132 mm\"]\n[[slot]]\nname = \"attic\"\nside = \"left\"\n\
                 from = \"140 mm\"\nto = \"150 mm\"\nloss = 1\n"
            )
        };
        let roof = "side = \"top\"\nfrom = \"10 mm\"\nto = \"30 mm\"";
        let text = PLAIN.replace(roof, "side = \"left\"\nfrom = \"90 mm\"\nto = \"110 mm\"");
        let asked = |to: &str| asked(&case(&format!("{text}\n{}", shelf(to))));
        assert_eq!(asked("100"), Vec::<String>::new());
        let said = asked("120");
        assert!(
            said.len() == 1 && said[0].starts_with("slot \"attic\" leads to a dead end"),
            "{said:?}"
        );
    }

    #[test]
    fn a_heat_far_below_the_sum_is_asked_about() {
        let small = "[[block]]\nname = \"sensor\"\nmaterial = \"steel\"\nx = [\"90 mm\", \"95 mm\"]\n\
                     y = [\"20 mm\", \"25 mm\"]\nheat = ";
        assert_eq!(asked(&with(&format!("{small}\"20 mW\""))), Vec::<String>::new());
        let said = asked(&with(&format!("{small}\"20e-3 mW\"")));
        assert!(said.len() == 1 && said[0].contains("\"sensor\" has 0.00002 W"), "{said:?}");
    }
}
