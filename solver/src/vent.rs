//! What a vent's shape costs: loss laws of louvres, perforated sheet and wire mesh.
//!
//! A vent covers a slot; u is the mean speed through the slot's whole (gross) area, f the share of
//! it that is free. The pressure lost is
//!
//! ```text
//! Δp = ½·ρ·a·u² + ½·μ·b·u        K = Δp / (½·ρ·u²) = a + b·ν/u
//! ```
//!
//! a [-] being what is left at large speeds, b [1/m] the viscous share, which rules at the speeds of
//! a natural draught. Both follow from f and the size of the passages; docs/equations.md derives
//! them.
//!
//! # Source
//! idelchik-1966 (perforated sheet, louvres), brundrett-1993 (mesh).

use crate::Air;

/// What a vent is made of.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum VentKind {
    /// Slats with clear gaps between them, the same all along their depth.
    Louvre {
        /// Clear gap between two slats [m].
        gap: f64,
        /// Depth of the slats along the flow [m].
        blade: f64,
    },
    /// Thin sheet with square-edged holes.
    Perforated {
        /// Diameter of the holes [m].
        hole: f64,
        /// Thickness of the sheet [m].
        sheet: f64,
    },
    /// Plain woven wire.
    Mesh {
        /// Diameter of the wire [m].
        wire: f64,
    },
}

/// A vent in a slot.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Vent {
    /// What it is made of.
    pub kind: VentKind,
    /// Free area of the clean vent over the slot's area, in (0, 1].
    pub free_share: f64,
    /// Share of the free area that is blocked, in [0, 1).
    pub blocked: f64,
}

/// Coefficients a and b of a loss law.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LossLaw {
    /// a [-], on the speed through the slot's whole area.
    pub loss: f64,
    /// b [1/m].
    pub friction: f64,
}

impl LossLaw {
    /// K at a speed through the slot's whole area [-]; infinite at rest where there is friction.
    pub fn at(&self, speed: f64, air: &Air) -> f64 {
        if self.friction == 0.0 {
            return self.loss;
        }
        self.loss + self.friction * air.kinematic_viscosity() / speed.abs()
    }
}

/// Free shares of [`THIN_PLATE`].
const SHARES: [f64; 11] = [0.0, 0.2, 0.3, 0.4, 0.5, 0.6, 0.7, 0.8, 0.9, 0.95, 1.0];
/// Viscous part ζ_φ of the loss of a thin square-edged plate on the speed in its holes, at the
/// Reynolds numbers of [`FIT`]: idelchik-1966, diagram 4-19, from memory; 1.0 has none.
const THIN_PLATE: [[f64; 2]; 11] = [
    [1.94, 0.54],
    [1.78, 0.57],
    [1.57, 0.43],
    [1.35, 0.28],
    [1.10, 0.12],
    [0.85, 0.06],
    [0.58, 0.03],
    [0.40, 0.02],
    [0.20, 0.0],
    [0.03, 0.0],
    [0.0, 0.0],
];
/// Share of the quadratic loss that is there at these Reynolds numbers (same diagram).
const QUADRATIC_SHARE: [f64; 2] = [0.34, 0.46];
/// Reynolds numbers of the holes at which the law meets the diagram.
const FIT: [f64; 2] = [25.0, 400.0];

/// Mesh: K·f²/(1 − f²) as a + b/Re, Re on wire diameter and u, meeting
/// 7/Re + 0.9/log₁₀(Re + 1.25) + 0.05·log₁₀ Re (brundrett-1993, from memory) at Re = 5 and 100.
const WOVEN: [f64; 2] = [0.516_51, 10.246];

/// Friction of the developed flow between two plates, K = 24·(l/b)/Re_b on the speed between them:
/// Δp = 12·μ·w·l/b² over ½·ρ·w².
const BETWEEN_PLATES: f64 = 24.0;
/// The same in a round hole, K = 64·(t/d)/Re_d (Poiseuille).
const IN_A_HOLE: f64 = 64.0;

impl Vent {
    /// Free area over the slot's area, what is blocked taken off.
    pub fn open_share(&self) -> f64 {
        self.free_share * (1.0 - self.blocked)
    }

    /// The loss law on the speed through the slot's whole area.
    ///
    /// - perforated: K·f² = A + (B + 64·t/d)/Re, Re = w·d/ν in the holes (w = u/f); A + B/Re meets
    ///   ζ_φ + ε·ζ of the diagram at Re 25 and 400, ζ = (0.707·(1 − f)^0.375 + 1 − f)² being the
    ///   quadratic loss. Within a tenth of the diagram from Re 25 to 1000 up to f = 0.5; below 25
    ///   the exact creeping flow (12π/Re) costs up to a third more
    /// - mesh: K·f²/(1 − f²) = 0.517 + 10.2/Re, Re = u·d/ν on the wire
    /// - louvre: K·f² = 0.85·(1 − f) + 1 − f² + 24·(l/b)/Re, Re = w·b/ν in the gaps: contraction,
    ///   jets that recover nothing, friction
    pub fn law(&self) -> LossLaw {
        let f = self.open_share();
        match self.kind {
            VentKind::Louvre { gap, blade } => LossLaw {
                loss: (0.85 * (1.0 - f) + 1.0 - f * f) / (f * f),
                friction: BETWEEN_PLATES * blade / (gap * gap * f),
            },
            VentKind::Perforated { hole, sheet } => {
                let [a, b] = thin_plate(f);
                LossLaw { loss: a / (f * f), friction: (b + IN_A_HOLE * sheet / hole) / (hole * f) }
            }
            VentKind::Mesh { wire } => {
                let solidity = (1.0 - f * f) / (f * f);
                LossLaw { loss: solidity * WOVEN[0], friction: solidity * WOVEN[1] / wire }
            }
        }
    }

    /// Reynolds number that the law is written in [-]: of the gaps, the holes, the wire.
    pub fn reynolds(&self, speed: f64, air: &Air) -> f64 {
        let inside = speed.abs() / self.open_share();
        let [speed, size] = match self.kind {
            VentKind::Louvre { gap, .. } => [inside, gap],
            VentKind::Perforated { hole, .. } => [inside, hole],
            VentKind::Mesh { wire } => [speed.abs(), wire],
        };
        speed * size / air.kinematic_viscosity()
    }

    /// Reynolds numbers between which the law was compared with published ones.
    pub fn range(&self) -> [f64; 2] {
        match self.kind {
            VentKind::Louvre { .. } => [0.0, 2000.0],
            VentKind::Perforated { .. } => [10.0, 2000.0],
            VentKind::Mesh { .. } => [1.0, 1000.0],
        }
    }
}

/// Quadratic loss of a thin square-edged plate on the speed in its holes [-]: idelchik-1966,
/// diagram 8-1, from memory; within 15 % of the table of blevins-1984 (as a library gives it).
fn quadratic(f: f64) -> f64 {
    (0.707 * (1.0 - f).powf(0.375) + 1.0 - f).powi(2)
}

/// A and B of a thin plate's loss A + B/Re on the speed in its holes.
fn thin_plate(f: f64) -> [f64; 2] {
    let n = SHARES.partition_point(|s| *s <= f).clamp(1, SHARES.len() - 1);
    let t = (f - SHARES[n - 1]) / (SHARES[n] - SHARES[n - 1]);
    let at = |k: usize| {
        let viscous = THIN_PLATE[n - 1][k] + t * (THIN_PLATE[n][k] - THIN_PLATE[n - 1][k]);
        viscous + QUADRATIC_SHARE[k] * quadratic(f)
    };
    let b = (at(0) - at(1)) / (1.0 / FIT[0] - 1.0 / FIT[1]);
    [at(1) - b / FIT[1], b]
}

#[cfg(test)]
mod tests {
    use super::*;

    fn air() -> Air {
        crate::by_hand::air() // ν = 2e-5/1.2 m²/s
    }

    fn vent(kind: VentKind, free_share: f64) -> Vent {
        Vent { kind, free_share, blocked: 0.0 }
    }

    /// K on the speed u at which the vent has a Reynolds number.
    fn loss_at(vent: &Vent, reynolds: f64) -> f64 {
        let unit = vent.reynolds(1.0, &air());
        vent.law().at(reynolds / unit, &air())
    }

    /// Diagram 4-19 of idelchik-1966 (from memory) between the two Reynolds numbers that the law
    /// is made from: ζ_φ at 60, 100, 200 and 1000 and the shares of the quadratic loss there.
    #[test]
    fn perforated_sheet_follows_the_diagram_between_its_ends() {
        let shares = [0.37, 0.40, 0.42, 0.53];
        for (f, viscous) in [
            (0.2, [1.05, 0.85, 0.67, 0.36]),
            (0.3, [0.88, 0.75, 0.57, 0.30]),
            (0.4, [0.79, 0.57, 0.40, 0.19]),
            (0.5, [0.55, 0.34, 0.19, 0.07]),
        ] {
            let sheet = vent(VentKind::Perforated { hole: 3e-3, sheet: 0.0 }, f);
            for (k, reynolds) in [60.0, 100.0, 200.0, 1000.0].into_iter().enumerate() {
                let diagram = (viscous[k] + shares[k] * quadratic(f)) / (f * f);
                let ratio = loss_at(&sheet, reynolds) / diagram;
                assert!((ratio - 1.0).abs() < 0.11, "f {f}, Re {reynolds}: {ratio}");
            }
        }
    }

    /// Slow flow through a small hole in a thin wall, Δp = 3·μ·V̇/a³ (R. A. Sampson, Phil. Trans.
    /// R. Soc. A 182 (1891), closed form): K·Re = 12π on speed and diameter of the hole. The law is
    /// made for Re above 10 and stays below it, by no more than a third.
    #[test]
    fn creeping_flow_through_a_hole_is_underrated_by_a_third_at_most() {
        let [_, b] = thin_plate(1e-3);
        let ratio = b / (12.0 * std::f64::consts::PI);
        assert!((0.66..1.0).contains(&ratio), "{ratio}");
    }

    /// Square-edged perforated plates at large Reynolds numbers, R. D. Blevins, Applied Fluid
    /// Dynamics Handbook (1984), as tabulated by the library fluids 1.3.1.
    #[test]
    fn the_quadratic_loss_is_that_of_the_handbooks() {
        for (f, blevins) in [(0.1, 250.0), (0.2, 52.0), (0.3, 17.0), (0.4, 7.7), (0.5, 3.8)] {
            let ratio = quadratic(f) / (f * f) / blevins;
            assert!((0.99..1.16).contains(&ratio), "f {f}: {ratio}");
        }
    }

    /// K. E. G. Wieghardt, Aeronaut. Quart. 4 (1953) 186-192 (formula from memory):
    /// K = 6·(1 − f)/f²·(w·d/ν)^(−1/3), measured for w·d/ν from 60 to 1000. Handbook formulas for
    /// mesh differ by as much among themselves: 20 %.
    #[test]
    fn mesh_agrees_with_another_published_law() {
        for f in [0.4, 0.5, 0.6] {
            let mesh = vent(VentKind::Mesh { wire: 0.4e-3 }, f);
            for inside in [100.0, 200.0, 400.0] {
                let other = 6.0 * (1.0 - f) / (f * f) * f64::powf(inside, -1.0 / 3.0);
                let ratio = loss_at(&mesh, inside * f) / other;
                assert!((ratio - 1.0).abs() < 0.20, "f {f}, {inside}: {ratio}");
            }
        }
    }

    #[test]
    fn mesh_meets_its_formula_where_it_was_fitted() {
        for (reynolds, band) in [(5.0, 1e-3), (100.0, 1e-3), (1.0, 0.15), (20.0, 0.07)] {
            let re: f64 = reynolds;
            let formula = 7.0 / re + 0.9 / (re + 1.25).log10() + 0.05 * re.log10();
            let ratio = (WOVEN[0] + WOVEN[1] / re) / formula;
            assert!((ratio - 1.0).abs() < band, "Re {re}: {ratio}");
        }
    }

    /// Slats so deep that only friction counts: Δp = 12·μ·w·l/b², w = u/f.
    #[test]
    fn deep_louvres_are_ducts_between_plates() {
        let (gap, blade, f, u) = (2e-3, 2.0, 0.5, 0.1);
        let law = vent(VentKind::Louvre { gap, blade }, f).law();
        let lost = 0.5 * air().density * u * u * law.at(u, &air());
        let exact = 12.0 * air().viscosity * (u / f) * blade / (gap * gap);
        assert!((lost / exact - 1.0).abs() < 0.01, "{lost} {exact}");
    }

    #[test]
    fn blocked_area_counts_as_missing_and_an_open_vent_loses_nothing() {
        let kind = VentKind::Perforated { hole: 3e-3, sheet: 1e-3 };
        let dirty = Vent { kind, free_share: 0.5, blocked: 0.2 };
        let smaller = vent(kind, 0.4);
        assert!((dirty.law().loss / smaller.law().loss - 1.0).abs() < 1e-12);
        assert!(dirty.law().loss > vent(kind, 0.5).law().loss);
        for kind in [VentKind::Mesh { wire: 1e-3 }, VentKind::Perforated { hole: 1e-3, sheet: 0.0 }]
        {
            let law = vent(kind, 1.0).law();
            assert!(law.loss.abs() < 1e-12 && law.friction.abs() < 1e-9, "{law:?}");
        }
    }
}
