//! Film coefficient of a plate that stands or lies in still air: what it warms carries its heat off.
//!
//! ```text
//! upright          Nu = (0.825 + 0.387·Ra^(1/6) / [1 + (0.492/Pr)^(9/16)]^(8/27))²
//! warm, face up    Nu = 0.54·Ra^(1/4), from where it is more on 0.15·Ra^(1/3)
//! warm, face down  Nu = 0.27·Ra^(1/4)
//! ```
//! Ra = g·β·|ΔT|·L³/(ν·α), Nu = h·L/k, properties at the mean of plate and air. L is the height of
//! an upright plate, area over perimeter of one that lies. A plate colder than the air is the same
//! upside down.
//!
//! # Source
//! churchill-chu-1975 (upright, all Ra up to 1e12); mcadams-1954, with the length of
//! lloyd-moran-1974 (lying; 1e4 to 1e11 upward, 1e5 to 1e10 downward). Written from memory.

use ventrise_mesh::{Geometry, Mesh, Side};

use crate::{Air, SideCondition};

/// Smaller differences between plate and air count as this [K]: the lying plate's film has no
/// finite slope at zero.
const LEAST_DIFFERENCE: f64 = 0.01;

/// How a plate is turned.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Facing {
    /// Upright.
    Sideways,
    /// Level, its outer face on top.
    Up,
    /// Level, its outer face below.
    Down,
}

impl Facing {
    /// How the outer face of a side is turned.
    pub fn of(side: Side) -> Facing {
        match side {
            Side::Left | Side::Right => Facing::Sideways,
            Side::Bottom => Facing::Down,
            Side::Top => Facing::Up,
        }
    }
}

/// Film coefficient [W/(m²·K)] of a plate `difference` [K] warmer than still air (colder when below
/// zero). `length` L [m]; `air` at the mean of both temperatures; `gravity` [m/s²].
pub fn still_air_film(
    facing: Facing,
    length: f64,
    difference: f64,
    air: &Air,
    gravity: f64,
) -> f64 {
    let size = difference.abs().max(LEAST_DIFFERENCE);
    let rayleigh = gravity * air.expansion * size * length.powi(3)
        / (air.kinematic_viscosity() * air.diffusivity());
    let nusselt = match (facing, difference < 0.0) {
        (Facing::Sideways, _) => {
            let prandtl = (1.0 + (0.492 / air.prandtl()).powf(9.0 / 16.0)).powf(8.0 / 27.0);
            (0.825 + 0.387 * rayleigh.powf(1.0 / 6.0) / prandtl).powi(2)
        }
        (Facing::Up, false) | (Facing::Down, true) => {
            (0.54 * rayleigh.powf(0.25)).max(0.15 * rayleigh.cbrt())
        }
        (Facing::Down, false) | (Facing::Up, true) => 0.27 * rayleigh.powf(0.25),
    };
    nusselt * air.conductivity / length
}

/// Length L of the outer face of a side [m]: the height of an upright one, area over perimeter of a
/// level one (w·D/(2(w + D)), R/2 of a disc). What a symmetry plane cuts in half counts whole.
pub(crate) fn plate_length(mesh: &Mesh, sides: &[SideCondition; 4], side: Side) -> f64 {
    let mirrors = |pair: [Side; 2]| {
        let mirrored = |s: &Side| sides[s.index()] == SideCondition::Symmetry;
        pair.iter().filter(|s| mirrored(s)).count()
    };
    let whole = |extent: f64, mirrors: usize| match mirrors {
        0 => extent,
        1 => 2.0 * extent,
        _ => f64::INFINITY,
    };
    let [width, height] = [mesh.x(), mesh.y()].map(|lines| lines[lines.len() - 1] - lines[0]);
    match (Facing::of(side), mesh.geometry()) {
        // Endless up and down: its own section is the best there is.
        (Facing::Sideways, _) => match mirrors([Side::Bottom, Side::Top]) {
            1 => 2.0 * height,
            _ => height,
        },
        (_, Geometry::Axisymmetric) => 0.5 * width,
        (_, Geometry::Planar { depth }) => {
            let width = whole(width, mirrors([Side::Left, Side::Right]));
            0.5 / (1.0 / width + 1.0 / depth)
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Air by its k, ν, α and β, as tables give it.
    fn tabled(conductivity: f64, viscosity: f64, diffusivity: f64, expansion: f64) -> Air {
        let (density, specific_heat) = (1.0, conductivity / diffusivity);
        Air { density, viscosity, conductivity, specific_heat, expansion }
    }

    /// Worked examples of Incropera & DeWitt, Fundamentals of Heat and Mass Transfer, from memory:
    /// 9.2, a glass fire screen 0.71 m high, 209 K above 23 °C: Ra 1.813e9, Nu 147, h 7.0; 9.3, a
    /// duct 0.75 m wide and long, 30 K above 15 °C: top 5.47, bottom 2.07 W/(m²·K).
    #[test]
    fn films_are_those_of_worked_examples() {
        let hot = tabled(33.8e-3, 26.4e-6, 38.3e-6, 0.0025);
        let film = still_air_film(Facing::Sideways, 0.71, 209.0, &hot, 9.8);
        assert!((film * 0.71 / 33.8e-3 - 147.0).abs() < 0.5, "{film}");
        let warm = tabled(0.0265, 16.2e-6, 22.9e-6, 0.0033);
        let top = still_air_film(Facing::Up, 0.375, 30.0, &warm, 9.8);
        let bottom = still_air_film(Facing::Down, 0.375, 30.0, &warm, 9.8);
        assert!((top - 5.47).abs() < 0.01 && (bottom - 2.07).abs() < 0.01, "{top} {bottom}");
    }

    #[test]
    fn a_cold_plate_is_a_warm_one_upside_down() {
        let air = Air::dry(300.0, 101_325.0);
        for (cold, warm) in [
            (Facing::Up, Facing::Down),
            (Facing::Down, Facing::Up),
            (Facing::Sideways, Facing::Sideways),
        ] {
            let film = |facing, difference| still_air_film(facing, 0.2, difference, &air, 9.8);
            assert_eq!(film(cold, -20.0), film(warm, 20.0));
        }
    }

    #[test]
    fn a_film_has_no_jump_and_no_zero() {
        let air = Air::dry(300.0, 101_325.0);
        for facing in [Facing::Sideways, Facing::Up, Facing::Down] {
            let film = |difference| still_air_film(facing, 0.4, difference, &air, 9.8);
            let mut last = film(0.0);
            assert!(last > 0.0 && last == film(LEAST_DIFFERENCE));
            for n in 1..4000 {
                let next = film(0.01 * 1.003_f64.powi(n));
                assert!(next >= last && next < 1.002 * last, "{facing:?} {n}");
                last = next;
            }
        }
    }
}
