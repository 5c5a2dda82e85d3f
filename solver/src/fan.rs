//! Fans: pressure over flow, at any speed and density, and how they stand in the equations.
//!
//! A fan in a slot raises the pressure of the air by P(V̇), V̇ the flow through the whole slot in the
//! fan's direction [m³/s]. P joins the points of its curve by straight lines. At a share n of full
//! speed and a density ρ in place of the curve's ρ_c
//!
//! ```text
//! P(V̇) = n²·(ρ/ρ_c)·P_c(V̇/n)
//! ```
//!
//! (fan laws: similar flows, exact where the Reynolds number does not matter). Every face of the
//! slot gets the same pressure. P(0) stands among the sources; what is missing at a flow,
//! P(V̇) − P(0), depends on all faces at once and stands in the residuals, so that a converged
//! state has its operating point on the curve.

use crate::Air;
use crate::State;
use crate::balance::slot_flows;
use crate::level::Opening;
use crate::{Problem, ProblemError};

/// A fan.
#[derive(Debug, Clone, PartialEq)]
pub struct Fan {
    /// Points (flow [m³/s], pressure [Pa]) at full speed: flows rise from zero.
    pub curve: Vec<[f64; 2]>,
    /// Density of the air that the curve holds for [kg/m³].
    pub density: f64,
    /// Share of full speed, ≥ 0; zero: it stands still.
    pub speed: f64,
    /// Whether it blows into the section.
    pub inward: bool,
    /// Loss coefficient of the standing fan on the speed through the slot [-]; also what a flow
    /// against the running fan loses beyond P(0).
    pub stopped_loss: f64,
}

impl Fan {
    /// Whether it turns.
    pub fn runs(&self) -> bool {
        self.speed > 0.0
    }

    /// Pressure rise [Pa] and its slope [Pa·s/m³] at a flow in its direction, for a running fan.
    /// Beyond the curve's end its last line goes on; against the fan the pressure stays P(0).
    pub fn pressure(&self, flow: f64, density: f64) -> [f64; 2] {
        let scale = self.speed * self.speed * density / self.density;
        let flow = flow / self.speed;
        if flow < 0.0 {
            return [scale * self.curve[0][1], 0.0];
        }
        let n = self.curve.partition_point(|p| p[0] <= flow).clamp(1, self.curve.len() - 1);
        let [a, b] = [self.curve[n - 1], self.curve[n]];
        let slope = (b[1] - a[1]) / (b[0] - a[0]);
        [scale * (a[1] + slope * (flow - a[0])), scale * slope / self.speed]
    }

    /// Largest flow of its curve at its speed [m³/s].
    pub fn last_flow(&self) -> f64 {
        self.speed * self.curve[self.curve.len() - 1][0]
    }

    /// Flow at which the pressure rise is zero, at its speed [m³/s]; `None` where the curve's end
    /// does not lead there.
    pub fn free_delivery(&self) -> Option<f64> {
        let [a, b] = [self.curve[self.curve.len() - 2], self.curve[self.curve.len() - 1]];
        let flow = match (b[1], b[1] < a[1]) {
            (0.0, _) => b[0],
            (_, true) => b[0] + b[1] * (b[0] - a[0]) / (a[1] - b[1]),
            (_, false) => return None,
        };
        Some(self.speed * flow)
    }

    /// Flow up to which the curve rises somewhere, at its speed [m³/s]; zero where it only falls.
    pub fn dip_end(&self) -> f64 {
        let rising = self.curve.windows(2).rev().find(|p| p[1][1] > p[0][1]);
        self.speed * rising.map_or(0.0, |p| p[1][0])
    }

    /// Checks the numbers.
    pub(crate) fn check(&self) -> Result<(), ProblemError> {
        let number = |what, value: f64, good: bool, bound| match good && value.is_finite() {
            true => Ok(()),
            false => Err(ProblemError::Number { what, value, bound }),
        };
        number("fan curve points", self.curve.len() as f64, self.curve.len() >= 2, "two or more")?;
        number("first flow of a fan", self.curve[0][0], self.curve[0][0] == 0.0, "zero")?;
        number("fan pressure", self.curve[0][1], self.curve[0][1] > 0.0, "positive at no flow")?;
        for pair in self.curve.windows(2) {
            number("fan flow", pair[1][0], pair[1][0] > pair[0][0], "more than the one before")?;
            number("fan pressure", pair[1][1], pair[1][1] >= 0.0, "zero or more")?;
        }
        number("fan density", self.density, self.density > 0.0, "positive")?;
        number("fan speed", self.speed, self.speed >= 0.0, "zero or more")?;
        number("stopped loss", self.stopped_loss, self.stopped_loss >= 0.0, "zero or more")
    }
}

/// Where a fan works.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FanPoint {
    /// Its slot, an index into [`crate::Description::slots`].
    pub slot: usize,
    /// Flow in its direction [m³/s].
    pub flow: f64,
    /// Pressure rise at this flow [Pa]; zero when it stands.
    pub pressure: f64,
}

/// Operating points of all fans, in the order of [`crate::Description::fans`]; `None` for a fan
/// that is in no slot.
pub fn fan_points(problem: &Problem, air: &Air, state: &State) -> Vec<Option<FanPoint>> {
    let d = problem.description();
    if d.fans.is_empty() {
        return Vec::new();
    }
    let flows = slot_flows(problem, air, state);
    let point = |(n, fan): (usize, &Fan)| {
        let slot = d.slots.iter().position(|s| s.fan == Some(n))?;
        let inward = flows[slot].inflow - flows[slot].outflow;
        let flow = if fan.inward { inward } else { -inward };
        let pressure = if fan.runs() { fan.pressure(flow, air.density)[0] } else { 0.0 };
        Some(FanPoint { slot, flow, pressure })
    };
    d.fans.iter().enumerate().map(point).collect()
}

/// A running fan in its slot on one mesh.
#[derive(Debug)]
pub(crate) struct SlotFan {
    fan: Fan,
    density: f64,
    /// Whether the slot's faces carry u (else v).
    pub along_x: bool,
    /// Every face with the force along its axis that one pascal of the fan makes [m²].
    faces: Vec<(usize, f64)>,
    /// Area of the slot [m²].
    area: f64,
}

impl SlotFan {
    /// A fan over some openings.
    pub fn new(fan: &Fan, density: f64, along_x: bool, openings: &[&Opening]) -> SlotFan {
        let sign = if fan.inward { -1.0 } else { 1.0 };
        let faces = openings.iter().map(|o| (o.face, sign * o.outward * o.area)).collect();
        let area = openings.iter().map(|o| o.area).sum();
        SlotFan { fan: fan.clone(), density, along_x, faces, area }
    }

    /// The field of the state, or of a residual, that its faces are in.
    fn field<'s>(&self, state: &'s State) -> &'s [f64] {
        if self.along_x { &state.u } else { &state.v }
    }

    /// Adds the force at no flow.
    pub fn add_shut_off(&self, source: &mut State) {
        let [pressure, _] = self.fan.pressure(0.0, self.density);
        let source = if self.along_x { &mut source.u } else { &mut source.v };
        self.faces.iter().for_each(|(face, push)| source[*face] += push * pressure);
    }

    /// Speed through the slot that it cannot exceed by itself [m/s]: that of P(0) without any loss,
    /// or of free delivery.
    pub fn largest_speed(&self) -> f64 {
        let [pressure, _] = self.fan.pressure(0.0, self.density);
        let free = self.fan.free_delivery().map_or(f64::INFINITY, |flow| flow / self.area);
        (2.0 * pressure / self.density).sqrt().min(free)
    }

    /// Size of its force on the slot's air at a state [N].
    pub fn force(&self, state: &State) -> f64 {
        let [lack, _] = self.lack(state);
        (self.fan.pressure(0.0, self.density)[0] + lack).abs() * self.area
    }

    /// P(V̇) − P(0) [Pa] and its slope [Pa·s/m³] at a state.
    fn lack(&self, state: &State) -> [f64; 2] {
        let field = self.field(state);
        let flow: f64 = self.faces.iter().map(|(face, push)| push * field[*face]).sum();
        if flow < 0.0 {
            // Air driven back through the fan: P(0), and what the standing fan would lose.
            let factor = 0.5 * self.density * self.fan.stopped_loss / (self.area * self.area);
            return [factor * flow * flow, 2.0 * factor * flow];
        }
        let [pressure, slope] = self.fan.pressure(flow, self.density);
        [pressure - self.fan.pressure(0.0, self.density)[0], slope]
    }

    /// Adds what is missing of the force at no flow to a residual.
    pub fn add_lack(&self, state: &State, residual: &mut State) {
        let [lack, _] = self.lack(state);
        let residual = if self.along_x { &mut residual.u } else { &mut residual.v };
        self.faces.iter().for_each(|(face, push)| residual[*face] += push * lack);
    }

    /// Every face with its missing force [N], its area [m²] and a share of the diagonal [kg/s]
    /// that answers rightly to a change of all faces alike.
    pub fn each_face(&self, state: &State, mut each: impl FnMut(usize, f64, f64, f64)) {
        let [lack, slope] = self.lack(state);
        for (face, push) in &self.faces {
            let stiffness = (-slope).max(0.0) * push.abs() * self.area;
            each(*face, push * lack, push.abs(), stiffness);
        }
    }

    /// Every pair of faces with −∂(force on the first)/∂(speed on the second) [kg/s].
    pub fn each_pair(&self, state: &State, mut each: impl FnMut(usize, usize, f64)) {
        let [_, slope] = self.lack(state);
        for (row, push) in &self.faces {
            for (column, other) in &self.faces {
                each(*row, *column, -slope * push * other);
            }
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn fan(speed: f64) -> Fan {
        let curve = vec![[0.0, 12.0], [0.002, 8.0], [0.004, 9.0], [0.008, 0.0]];
        Fan { curve, density: 1.2, speed, inward: true, stopped_loss: 8.0 }
    }

    #[test]
    fn the_curve_is_joined_by_straight_lines_and_goes_on_at_its_end() {
        for (flow, pressure, slope) in [
            (0.0, 12.0, -2000.0),
            (0.001, 10.0, -2000.0),
            (0.003, 8.5, 500.0),
            (0.006, 4.5, -2250.0),
            (0.010, -4.5, -2250.0),
            (-0.001, 12.0, 0.0),
        ] {
            let [p, s] = fan(1.0).pressure(flow, 1.2);
            assert!((p - pressure).abs() < 1e-12 && (s - slope).abs() < 1e-9, "{flow}: {p} {s}");
        }
        assert_eq!(fan(1.0).free_delivery(), Some(0.008));
        assert_eq!(fan(1.0).dip_end(), 0.004);
        let cut = Fan { curve: vec![[0.0, 12.0], [0.004, 6.0]], ..fan(1.0) };
        assert!((cut.free_delivery().unwrap_or(0.0) - 0.008).abs() < 1e-15);
        assert_eq!(cut.dip_end(), 0.0);
    }

    /// Fan laws: at half speed half the flow at a quarter of the pressure; pressure as density.
    #[test]
    fn speed_and_density_follow_the_fan_laws() {
        let [full, full_slope] = fan(1.0).pressure(0.006, 1.2);
        let [half, half_slope] = fan(0.5).pressure(0.003, 1.2);
        assert!((half - 0.25 * full).abs() < 1e-12);
        assert!((half_slope - 0.5 * full_slope).abs() < 1e-9);
        let [thin, _] = fan(1.0).pressure(0.006, 0.9);
        assert!((thin - 0.75 * full).abs() < 1e-12);
        assert_eq!(fan(0.5).last_flow(), 0.004);
        assert_eq!(fan(0.5).free_delivery(), Some(0.004));
    }

    #[test]
    fn curves_that_are_none_are_refused() {
        let refused =
            |curve: &[[f64; 2]]| Fan { curve: curve.to_vec(), ..fan(1.0) }.check().is_err();
        assert!(fan(1.0).check().is_ok() && fan(0.0).check().is_ok());
        assert!(refused(&[[0.0, 5.0]]));
        assert!(refused(&[[0.1, 5.0], [0.2, 0.0]]));
        assert!(refused(&[[0.0, 5.0], [0.0, 4.0]]));
        assert!(refused(&[[0.0, 0.0], [0.1, 0.0]]));
        assert!(refused(&[[0.0, 5.0], [0.1, -1.0]]));
        assert!(refused(&[[0.0, 5.0], [f64::NAN, 1.0]]));
    }
}
