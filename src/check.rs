//! The text of `ventrise check`: what was understood, the mesh, and what a solve will take.

use std::fmt::Write as _;

use ventrise_mesh::{Crossed, Crossing, GapEnd, Generated, Geometry, Side, Spacing};
use ventrise_solver::{Air, SideCondition};

use crate::case::units::rounded;
use crate::case::{AirChoice, Case, Estimate, ProbeShape, setup, side_name};

/// Memory that a solve takes per cell [B]. Placeholder, to be set to what is measured.
const BYTES_PER_CELL: f64 = 900.0;

/// Memory that a solve takes on any mesh [B]. Placeholder, to be set to what is measured.
const BYTES_ALWAYS: f64 = 200e6;

/// Memory a solve is expected to take on so many cells [B].
pub fn memory(cells: usize) -> f64 {
    BYTES_ALWAYS + BYTES_PER_CELL * cells as f64
}

/// Tells what was understood of a case and what mesh it gets.
pub fn report(case: &Case, generated: &Generated) -> String {
    let mut page = Page::default();
    page.line(case.title());
    page.blank();
    understood(&mut page, case);
    parts(&mut page, case);
    openings(&mut page, case);
    materials(&mut page, case);
    by_hand(&mut page, case);
    mesh(&mut page, case, generated);
    let warnings: Vec<String> =
        case.warnings().into_iter().chain(generated.notes.clone()).collect();
    if !warnings.is_empty() {
        page.blank();
        page.line("Worth a look");
        for warning in warnings {
            page.line(&format!("  - {warning}"));
        }
    }
    page.0
}

/// Lines of text.
#[derive(Default)]
struct Page(String);

impl Page {
    fn line(&mut self, text: &str) {
        self.0.push_str(text.trim_end());
        self.0.push('\n');
    }

    fn blank(&mut self) {
        self.0.push('\n');
    }

    /// A label and what it stands for.
    fn fact(&mut self, label: &str, text: &str) {
        self.line(&format!("{label:<10} {text}"));
    }

    /// A heading and rows in columns: the first column to the left, the others to the right, the
    /// last as it comes.
    fn table(&mut self, heading: &str, rows: &[Vec<String>]) {
        self.blank();
        self.line(heading);
        let columns = rows.iter().map(Vec::len).max().unwrap_or(0);
        let width = |c: usize| {
            rows.iter().filter_map(|r| r.get(c)).map(|t| t.chars().count()).max().unwrap_or(0)
        };
        let widths: Vec<usize> = (0..columns).map(width).collect();
        for row in rows {
            let mut line = String::from(" ");
            for (c, (text, width)) in row.iter().zip(&widths).enumerate() {
                let written = match c {
                    0 => write!(line, " {text:<width$}"),
                    c if c + 1 == columns => write!(line, "  {text}"),
                    _ => write!(line, "  {text:>width$}"),
                };
                debug_assert!(written.is_ok());
            }
            self.line(&line);
        }
    }
}

fn mm(length: f64) -> String {
    format!("{} mm", rounded(length * 1e3, 6))
}

fn celsius(kelvin: f64) -> String {
    format!("{} degC", rounded(((kelvin - 273.15) * 1e6).round() / 1e6, 6))
}

fn watts(power: f64) -> String {
    format!("{} W", rounded(power, 6))
}

fn plural(count: usize, one: &str) -> String {
    if count == 1 { format!("1 {one}") } else { format!("{count} {one}s") }
}

fn understood(page: &mut Page, case: &Case) {
    let section = case.section();
    let size = match section.geometry {
        Geometry::Planar { depth } => format!(
            "planar, {} wide, {} high, {} deep",
            mm(section.width),
            mm(section.height),
            mm(depth)
        ),
        Geometry::Axisymmetric => format!(
            "axisymmetric, radius {}, {} high, full revolution",
            mm(section.width),
            mm(section.height)
        ),
    };
    page.fact("Section", &size);
    let ambient = case.ambient();
    let pressure = format!("{} Pa", rounded(ambient.pressure, 6));
    page.fact(
        "Ambient",
        &match ambient.altitude {
            Some(altitude) => format!(
                "{} at {} m altitude ({pressure})",
                celsius(ambient.temperature),
                rounded(altitude, 6)
            ),
            None => format!("{} at {pressure}", celsius(ambient.temperature)),
        },
    );
    let numbers = |air: &Air| {
        format!(
            "{} kg/m3, {} Pa s, {} W/(m K), {} J/(kg K), {} 1/K",
            rounded(air.density, 5),
            rounded(air.viscosity, 5),
            rounded(air.conductivity, 5),
            rounded(air.specific_heat, 5),
            rounded(air.expansion, 5)
        )
    };
    match case.air() {
        AirChoice::Film => {
            let air = Air::dry(ambient.temperature, ambient.pressure);
            page.fact("Air", "dry air at the film temperature of the result");
            page.fact("", &format!("at ambient: {}", numbers(&air)));
        }
        AirChoice::Given { air, .. } => page.fact("Air", &format!("as given: {}", numbers(air))),
    }
    for side in Side::ALL {
        let axis = section.geometry == Geometry::Axisymmetric && side == Side::Left;
        let condition = match case.sides()[side.index()] {
            SideCondition::Symmetry if axis => "axis".to_string(),
            SideCondition::Adiabatic => "adiabatic wall".to_string(),
            SideCondition::Symmetry => "symmetry".to_string(),
            SideCondition::Open => "open to outside air".to_string(),
            SideCondition::Temperature(t) => format!("wall at {}", celsius(t)),
            SideCondition::Flux(q) => {
                let way = if q < 0.0 { "out of" } else { "into" };
                format!("wall, {} W/m2 {way} the section", rounded(q.abs(), 6))
            }
            SideCondition::Film { coefficient, temperature } => format!(
                "wall, film {} W/(m2 K) to {}",
                rounded(coefficient, 6),
                celsius(temperature)
            ),
            SideCondition::Sliding(speed) => format!("wall sliding at {speed} m/s"),
        };
        page.fact(if side == Side::Left { "Sides" } else { "" }, &{
            format!("{:<7} {condition}", side_name(side))
        });
    }
    page.fact(
        "Heat",
        &format!("{} in {}", watts(case.heat()), plural(case.blocks().len(), "block")),
    );
}

fn parts(page: &mut Page, case: &Case) {
    let mut rows: Vec<Vec<String>> = case
        .parts()
        .iter()
        .map(|part| {
            vec![
                part.name.clone(),
                plural(part.blocks.len(), "block"),
                watts(part.heat),
                part.limit.map_or("no limit".to_string(), |l| format!("limit {}", celsius(l))),
            ]
        })
        .collect();
    let loose: Vec<f64> =
        case.blocks().iter().filter(|b| b.part.is_none()).map(|b| b.heat).collect();
    if !loose.is_empty() {
        let label = "(no part)".to_string();
        let heat = watts(loose.iter().sum());
        rows.push(vec![label, plural(loose.len(), "block"), heat, "not judged".to_string()]);
    }
    if !rows.is_empty() {
        page.table("Parts", &rows);
    }
}

fn openings(page: &mut Page, case: &Case) {
    let rows: Vec<Vec<String>> = case
        .slots()
        .iter()
        .map(|slot| {
            vec![
                slot.name.clone(),
                side_name(slot.side).to_string(),
                format!("{} to {}", mm(slot.span[0]), mm(slot.span[1])),
                format!("{} cm2", rounded(case.slot_area(slot) * 1e4, 4)),
                format!("loss {}", rounded(slot.loss, 4)),
            ]
        })
        .collect();
    if !rows.is_empty() {
        page.table("Slots", &rows);
    }
    let rows: Vec<Vec<String>> = case
        .probes()
        .iter()
        .map(|probe| {
            let point = |[x, y]: [f64; 2]| format!("({}, {})", mm(x), mm(y));
            let place = match probe.shape {
                ProbeShape::Point(at) => format!("at {}", point(at)),
                ProbeShape::Line { from, to } => format!("from {} to {}", point(from), point(to)),
            };
            vec![probe.name.clone(), place]
        })
        .collect();
    if !rows.is_empty() {
        page.table("Probes", &rows);
    }
}

fn materials(page: &mut Page, case: &Case) {
    let rows: Vec<Vec<String>> = case
        .materials()
        .iter()
        .enumerate()
        .filter(|(m, _)| case.blocks().iter().any(|b| b.material == *m))
        .map(|(_, material)| {
            let [x, y] = material.conductivity;
            let conductivity = if x == y {
                format!("{} W/(m K)", rounded(x, 4))
            } else {
                format!("x {}, y {} W/(m K)", rounded(x, 4), rounded(y, 4))
            };
            let source = material.source.unwrap_or("as described in the case");
            vec![material.name.clone(), conductivity, source.to_string()]
        })
        .collect();
    if !rows.is_empty() {
        page.table("Materials", &rows);
    }
}

fn by_hand(page: &mut Page, case: &Case) {
    let estimate = Estimate::of(case);
    if estimate.rise <= 0.0 {
        return;
    }
    let mut rows = vec![
        vec![
            "surfaces above the air beside them".to_string(),
            format!("about {} K", rounded(estimate.rise, 2)),
        ],
        vec![
            format!("Rayleigh number over {}", mm(estimate.length)),
            format!("about {:.1e}", estimate.rayleigh),
        ],
        vec![
            "boundary layer".to_string(),
            format!("about {} mm thick", rounded(estimate.layer * 1e3, 2)),
        ],
    ];
    if let Some(draught) = estimate.draught {
        rows.push(vec![
            "draught through the slots".to_string(),
            format!(
                "at most about {} m3/h, leaving {} K warmer",
                rounded(draught.flow * 3600.0, 2),
                rounded(draught.rise, 2)
            ),
        ]);
    }
    page.table("By hand (good to a factor of two)", &rows);
}

fn mesh(page: &mut Page, case: &Case, generated: &Generated) {
    let mesh = &generated.mesh;
    let [smallest, largest] = mesh.cell_sizes();
    page.blank();
    page.fact("Mesh", &format!("{} x {} = {} cells", mesh.nx(), mesh.ny(), mesh.cell_count()));
    page.fact(
        "",
        &match setup::spacing(case) {
            Spacing::Uniform { .. } => "plain uniform".to_string(),
            Spacing::Graded { cell, wall, growth, across, .. } => {
                format!("cell {}, wall {}, growth {growth}, across {across}", mm(cell), mm(wall))
            }
        },
    );
    let [small, large] = [smallest, largest].map(|s| rounded(s * 1e3, 3));
    page.fact("", &format!("smallest cell edge {small} mm, largest {large} mm"));
    page.fact("Memory", &format!("about {:.0} MB for a solve", memory(mesh.cell_count()) / 1e6));
    let Ok(crossings) = mesh.crossings(&setup::layout(case)) else { return };
    let across = case.mesh_choice().across;
    let is_block = |c: &Crossing| matches!(c.crossed, Crossed::Block(_));
    let row = |c: &Crossing| {
        let wanted = c.crossed.wanted(across);
        let mark = if c.cells < wanted { format!("<- fewer than {wanted}") } else { String::new() };
        vec![
            crossed_name(case, c),
            format!("along {}", c.axis.letter()),
            format!("{} to {}", mm(c.from), mm(c.to)),
            plural(c.cells, "cell"),
            mark,
        ]
    };
    let rows: Vec<Vec<String>> = crossings.iter().filter(|c| !is_block(c)).map(row).collect();
    if !rows.is_empty() {
        page.table("Cells across slots and gaps", &rows);
    }
    if let Some(fewest) = crossings.iter().filter(|c| is_block(c)).min_by_key(|c| c.cells) {
        let short: Vec<Vec<String>> =
            crossings.iter().filter(|c| is_block(c) && c.cells < across).map(row).collect();
        if short.is_empty() {
            page.blank();
            page.line(&format!(
                "Cells across blocks: at least {} ({} along {})",
                fewest.cells,
                crossed_name(case, fewest),
                fewest.axis.letter()
            ));
        } else {
            page.table("Blocks with few cells across", &short);
        }
    }
}

fn crossed_name(case: &Case, crossing: &Crossing) -> String {
    let block = |b: usize| match case.blocks().get(b).and_then(|b| b.name.as_deref()) {
        Some(name) => name.to_string(),
        None => format!("block {}", b + 1),
    };
    let end = |end: GapEnd| match end {
        GapEnd::Block(b) => block(b),
        GapEnd::Side(side) => format!("{} side", side_name(side)),
    };
    match crossing.crossed {
        Crossed::Block(b) => block(b),
        Crossed::Slot(s) => match case.slots().get(s) {
            Some(slot) => format!("slot {}", slot.name),
            None => format!("slot {}", s + 1),
        },
        Crossed::Gap([a, b]) => format!("gap {} - {}", end(a), end(b)),
        Crossed::HalfGap([a, b]) => format!("half gap {} - {}", end(a), end(b)),
    }
}
