//! Tables of the page.

use serde::Serialize;
use ventrise_solver::{HEAT_BOUND, MASS_BOUND};

use crate::case::units::rounded;
use crate::output::fans;
use crate::output::results::Results;
use crate::output::summary::{BOUSSINESQ_SPREAD, TURBULENT_REYNOLDS};
use crate::output::told::{ToldOuter, ToldPart};
use crate::output::words::{fixed, grouped, mm, sized};

/// Seconds in an hour: flows are shown per hour.
const HOUR: f64 = 3600.0;
/// Air below ambient by more than this gets a row of its own [K].
const SHOWN_COLD: f64 = 0.05;
/// Smaller shares of all heat are round-off.
const ROUND_OFF: f64 = 1e-6;
/// Rayleigh number beyond which layers on upright surfaces turn turbulent (common handbook value).
const TURBULENT_RAYLEIGH: f64 = 1e9;

/// A table, all text.
#[derive(Debug, Clone, Default, PartialEq, Serialize)]
pub struct Table {
    /// Names of the columns.
    pub header: Vec<&'static str>,
    /// Rows.
    pub rows: Vec<Vec<String>>,
    /// A sentence below.
    pub note: String,
}

/// A way that heat takes.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Path {
    /// Name.
    pub name: String,
    /// Heat [W], written.
    pub heat: String,
    /// Share of all that leaves.
    pub share: String,
    /// Width of its bar [%].
    pub bar: String,
}

/// Up to six significant digits, no more than it takes.
pub fn number(value: f64) -> String {
    rounded(value, 6)
}

fn perhaps(value: Option<f64>, decimals: usize) -> String {
    value.map_or_else(|| "–".into(), |v| fixed(v, decimals))
}

fn of_size(value: Option<f64>, decimals: usize) -> String {
    value.map_or_else(|| "–".into(), |v| sized(v, decimals, 0.0))
}

fn scientific(value: Option<f64>) -> String {
    value.map_or_else(|| "–".into(), |v| if v == 0.0 { "0".into() } else { format!("{v:.1e}") })
}

/// Parts against their limits, least margin first.
pub fn margins(results: &Results) -> Table {
    let mut parts: Vec<&ToldPart> = results.told.parts.iter().collect();
    let key = |p: &ToldPart| p.margin_k.unwrap_or(f64::INFINITY);
    parts.sort_by(|a, b| key(a).total_cmp(&key(b)));
    let radiates = parts.iter().any(|p| p.radiated_w.is_some());
    let junctions = parts.iter().any(|p| p.junction_c.is_some());
    let row = |p: &&ToldPart| {
        let judged = match (p.margin_k, p.limit_c) {
            (Some(margin), _) if margin < 0.0 => "over",
            (Some(_), _) => "kept",
            (None, Some(_)) => "not judged",
            (None, None) => "none",
        };
        let max = match p.band_c {
            Some([low, high]) if high - low >= 0.05 => {
                format!("{} to {}", fixed(low, 1), fixed(high, 1))
            }
            Some([_, high]) => fixed(high, 1),
            None => perhaps(p.max_c, 1),
        };
        let radiated = radiates.then(|| of_size(p.radiated_w, 2));
        let at = if p.limit_at.is_some() { " (junction)" } else { "" };
        let numbers = [
            format!("{}{at}", perhaps(p.limit_c, 1)),
            perhaps(p.margin_k, 1),
            perhaps(p.resistance_k_w, 2),
            judged.into(),
        ];
        let junction = junctions.then(|| perhaps(p.junction_c, 1));
        let start = [p.name.clone(), rounded(p.heat_w, 4)].into_iter().chain(radiated);
        start.chain([max]).chain(junction).chain(numbers).collect()
    };
    let radiated = radiates.then_some("Radiated, W");
    let header = ["Part", "Heat, W"].into_iter().chain(radiated);
    let junction = junctions.then_some("Junction, °C");
    let header = header.chain(["Hottest, °C"]).chain(junction);
    let rest = ["Limit, °C", "Margin, K", "K/W", "Limit is"];
    Table {
        header: header.chain(rest).collect(),
        rows: parts.iter().map(row).collect(),
        note: "K/W: rise of the hottest place above ambient over the part's own heat.".into(),
    }
}

/// Heat by path, largest first.
pub fn paths(results: &Results) -> Vec<Path> {
    let told = &results.told;
    let mut found: Vec<(String, f64)> = Vec::new();
    for slot in &told.slots {
        found.push((format!("with air through “{}”", slot.name), slot.heat_w));
    }
    for side in &told.sides {
        match &side.outer {
            Some(o) => {
                found.push((format!("by the film of the {} side", side.name), o.film_w));
                found.push((format!("radiated by the {} side outside", side.name), o.radiation_w));
                found.push((format!("sun absorbed by the {} side", side.name), -o.sun_w));
            }
            None => found.push((format!("through the {} side", side.name), side.conduction_w)),
        }
        found.push((format!("with air through the open {} side", side.name), side.convection_w));
    }
    // Slots and sides are told one by one; what else there is has its own name.
    let others = told.heat_paths_w.iter().filter(|(k, _)| !matches!(k.as_str(), "slots" | "sides"));
    found.extend(others.filter_map(|(name, heat)| Some((path_name(name), (*heat)?))));
    let b = &told.balance;
    let scale = b.heat_in_w.unwrap_or(0.0).abs().max(b.heat_out_w.unwrap_or(0.0).abs());
    found.retain(|(_, heat)| heat.abs() > ROUND_OFF * scale);
    found.sort_by(|a, b| b.1.total_cmp(&a.1));
    let out: f64 = found.iter().map(|f| f.1.max(0.0)).sum();
    let path = |(name, heat): (String, f64)| Path {
        name,
        heat: sized(heat, 3, scale),
        share: if heat > 0.0 { format!("{} %", fixed(100.0 * heat / out, 1)) } else { "in".into() },
        bar: fixed((100.0 * heat / out).clamp(0.0, 100.0), 1),
    };
    found.into_iter().map(path).collect()
}

/// Name of a path that is neither a slot nor a side.
fn path_name(key: &str) -> String {
    match key {
        "radiation" => "radiated through slots and open sides".into(),
        other => other.replace('_', " "),
    }
}

/// The balance below the paths.
pub fn paths_note(results: &Results) -> String {
    let b = &results.told.balance;
    format!(
        "In all {} W go in and {} W come out; what is below zero comes in.",
        of_size(b.heat_in_w, 3),
        of_size(b.heat_out_w, 3)
    )
}

/// Outer faces of sides.
pub fn outer(results: &Results) -> Table {
    let told = &results.told;
    let b = &told.balance;
    let all_heat = b.heat_in_w.unwrap_or(0.0).abs().max(b.heat_out_w.unwrap_or(0.0).abs());
    let row = |(name, o): (&String, &ToldOuter)| {
        let heat = [o.film_w, o.radiation_w, o.sun_w].map(|watts| sized(watts, 3, all_heat));
        let rest =
            [fixed(o.surface_mean_c, 1), fixed(o.surface_max_c, 1), sized(o.film_w_m2_k, 3, 0.0)];
        std::iter::once(name.clone()).chain(heat).chain(rest).collect()
    };
    Table {
        header: vec![
            "Outer face",
            "Film, W",
            "Radiated, W",
            "Sun absorbed, W",
            "Mean, °C",
            "Hottest, °C",
            "Film, W/(m² K)",
        ],
        rows: told
            .sides
            .iter()
            .filter_map(|s| Some((&s.name, s.outer.as_ref()?)))
            .map(row)
            .collect(),
        note: "Film and radiation leave the face, the sun's heat enters it; the rest comes from \
               inside. Temperatures are for information, no statement of conformity."
            .into(),
    }
}

/// Slots and open sides.
pub fn slots(results: &Results) -> Table {
    let told = &results.told;
    let b = &told.balance;
    let all_heat = b.heat_in_w.unwrap_or(0.0).abs().max(b.heat_out_w.unwrap_or(0.0).abs());
    let flows = told.slots.iter().map(|s| s.in_m3_s + s.out_m3_s);
    let flows = flows.chain(told.sides.iter().map(|s| s.in_m3_s + s.out_m3_s));
    let most = flows.fold(0.0_f64, |most, flow| most.max(HOUR * flow));
    let flow = |per_second: f64| sized(HOUR * per_second, 3, most);
    let heat = |watts: f64| sized(watts, 3, all_heat);
    let mut rows: Vec<Vec<String>> = Vec::new();
    for s in &told.slots {
        rows.push(vec![
            s.name.clone(),
            s.side.clone().unwrap_or_default(),
            perhaps(s.area_m2.map(|a| 1e4 * a), 1),
            flow(s.in_m3_s),
            flow(s.out_m3_s),
            perhaps(s.out_mean_c, 1),
            of_size(s.mean_pressure_pa, 3),
            heat(s.heat_w),
        ]);
    }
    for s in told.sides.iter().filter(|s| s.in_m3_s + s.out_m3_s > 0.0) {
        let dash = || "–".to_string();
        rows.push(vec![
            "open side".into(),
            s.name.clone(),
            dash(),
            flow(s.in_m3_s),
            flow(s.out_m3_s),
            perhaps(s.out_mean_c, 1),
            dash(),
            heat(s.convection_w),
        ]);
    }
    Table {
        header: vec![
            "Slot",
            "Side",
            "Area, cm²",
            "In, m³/h",
            "Out, m³/h",
            "Out, °C",
            "Pressure, Pa",
            "Heat, W",
        ],
        rows,
        note: "Pressure: mean behind the slot, against still outside air at its height.".into(),
    }
}

/// Areas and losses of the slots; nothing where no vent covers one.
pub fn vents(results: &Results) -> Table {
    let slots = &results.told.slots;
    if slots.iter().all(|s| s.vent.is_none()) {
        return Table::default();
    }
    let row = |s: &crate::output::told::ToldSlot| {
        vec![
            s.name.clone(),
            s.vent.clone().unwrap_or_else(|| "loss as given".into()),
            perhaps(s.area_m2.map(|a| 1e4 * a), 1),
            perhaps(s.free_area_m2.map(|a| 1e4 * a), 1),
            of_size(s.speed_m_s, 3),
            perhaps(s.loss, 2),
            perhaps(s.reynolds, 0),
        ]
    };
    Table {
        header: vec!["Slot", "Vent", "Gross, cm²", "Free, cm²", "Speed, m/s", "Loss K", "Reynolds"],
        rows: slots.iter().map(row).collect(),
        note: "Speed: mean through the gross area, to which K refers. Reynolds number: of the \
               vent's gaps, holes or wires; of the slot where a loss is given."
            .into(),
    }
}

/// Where fans work.
pub fn fans(results: &Results) -> Table {
    let row = |f: &crate::output::told::ToldFan| {
        let point = [f.speed, f.flow_m3_s, f.pressure_pa];
        let cells = fans::cells(point, [f.free_delivery_m3_s, f.free_delivery_share]);
        let place = format!("{}, {}", f.slot, f.direction);
        [f.name.clone(), place].into_iter().chain(cells).collect()
    };
    Table {
        header: vec![
            "Fan",
            "Slot, direction",
            "Speed, %",
            "Flow, m³/h",
            "Pressure, Pa",
            "Free, m³/h",
            "Of it, %",
        ],
        rows: results.told.fans.iter().map(row).collect(),
        note: "The operating point on the curve at this speed and density of the air. Free: the \
               flow without any pressure rise."
            .into(),
    }
}

/// Probes.
pub fn probes(results: &Results) -> Table {
    let row = |p: &crate::output::told::ToldProbe| {
        vec![
            p.name.clone(),
            perhaps(p.temperature_c, 1),
            perhaps(p.min_c, 1),
            perhaps(p.max_c, 1),
            perhaps(p.speed_m_s, 3),
        ]
    };
    Table {
        header: vec!["Probe", "°C", "Lowest, °C", "Highest, °C", "Speed, m/s"],
        rows: results.told.probes.iter().map(row).collect(),
        note: "Of a line: means along it, and its lowest and highest temperature.".into(),
    }
}

/// The mesh, and how well the equations are solved.
pub fn state(results: &Results) -> Table {
    let told = &results.told;
    let (mesh, air) = (&told.mesh, &told.air);
    let tolerance = results.case.solve_choice().tolerance;
    let mut rows: Vec<Vec<String>> = Vec::new();
    let mut row = |what: &str, value: String, bound: String, met: &str| {
        rows.push(vec![what.into(), value, bound, met.into()]);
    };
    let none = || "–".to_string();
    let cells = format!("{} × {} = {}", mesh.nx, mesh.ny, grouped(mesh.cells));
    row("cells", cells, none(), "");
    let sizes = format!("{} to {} mm", mm(mesh.smallest_m), mm(mesh.largest_m));
    row("cell sizes", sizes, none(), "");
    row("iterations", grouped(told.iterations), none(), "");
    let bound = |b: f64| format!("{b:.0e}");
    let within = |v: Option<f64>, bound: f64| match v {
        Some(v) if v <= bound => "met",
        Some(_) => "not met",
        None => "",
    };
    for (name, value) in &told.residuals {
        let what = format!("residual, {}", name.replace('_', " "));
        row(&what, scientific(*value), bound(tolerance), within(*value, tolerance));
    }
    let b = &told.balance;
    row(
        "heat balance",
        scientific(b.heat_error),
        bound(HEAT_BOUND),
        within(b.heat_error, HEAT_BOUND),
    );
    row(
        "air balance",
        scientific(b.mass_error),
        bound(MASS_BOUND),
        within(b.mass_error, MASS_BOUND),
    );
    row("density of the air", format!("{} kg/m³", fixed(air.density, 4)), none(), "");
    row("its viscosity", format!("{:.3e} Pa s", air.viscosity), none(), "");
    row("its conductivity", format!("{} W/(m K)", fixed(air.conductivity, 5)), none(), "");
    row("its specific heat", format!("{} J/(kg K)", fixed(air.specific_heat, 1)), none(), "");
    row("fastest air", format!("{} m/s", of_size(air.max_speed_m_s, 3)), none(), "");
    row("warmest air", format!("{} °C", perhaps(air.max_temperature_c, 1)), none(), "");
    if let Some(coldest) = air.min_temperature_c.filter(|c| *c < results.ambient() - SHOWN_COLD) {
        row("coldest air", format!("{} °C", fixed(coldest, 1)), none(), "");
    }
    let stack = format!("{} Pa", of_size(air.stack_pressure_pa, 3));
    row("pressure of the warm column", stack, none(), "");
    let time =
        format!("{} s, processors {} s", fixed(told.wall_seconds, 1), fixed(told.cpu_seconds, 1));
    row("time", time, none(), "");
    Table { header: vec!["Of the solve", "Value", "Bound", ""], rows, note: String::new() }
}

/// How far the case is inside what the model holds for.
pub fn validity(results: &Results) -> Table {
    let told = &results.told;
    let ambient = results.ambient();
    let word = |v: Option<f64>, bound: f64| match v {
        Some(v) if v <= bound => "within",
        Some(_) => "beyond",
        None => "",
    };
    let mut rows: Vec<Vec<String>> = Vec::new();
    let mut row = |what: &str, value: String, bound: String, word: &str| {
        rows.push(vec![what.into(), value, bound, word.into()]);
    };
    let rise = told.air.max_temperature_c.map(|t| t - ambient);
    let bound = format!("{BOUSSINESQ_SPREAD} K");
    let shown = format!("{} K", perhaps(rise, 1));
    row(
        "linear density law: warmest air above ambient",
        shown,
        bound,
        word(rise, BOUSSINESQ_SPREAD),
    );
    if !told.slots.is_empty() {
        let re = told.numbers.vent_reynolds;
        let bound = format!("about {TURBULENT_REYNOLDS}");
        row(
            "laminar slots: largest Reynolds number",
            perhaps(re, 0),
            bound,
            word(re, TURBULENT_REYNOLDS),
        );
    }
    let ra = told.numbers.rayleigh;
    let bound = format!("about {TURBULENT_RAYLEIGH:.0e}");
    row(
        "laminar layers: Rayleigh number on the section's height",
        scientific(ra),
        bound,
        word(ra, TURBULENT_RAYLEIGH),
    );
    Table {
        header: vec!["What the model rests on", "Here", "Holds up to", ""],
        rows,
        note:
            "Beyond its bound the density law is off by more than a tenth: D. D. Gray, A. Giorgini, Int. J. Heat Mass Transfer 19 (1976) 545-551. \
               Reynolds and Rayleigh numbers: common practice."
                .into(),
    }
}
