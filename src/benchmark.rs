//! Published cavity cases, computed and set beside their table values.

mod case;
mod table;

use std::io::Write;
use std::time::Instant;

use serde_json::Value;
use ventrise_solver::samples::SampleError;
use ventrise_solver::{Progress, Settings, SolveError};

use crate::memory;
use crate::output::words::counted;

pub use case::{Case, names};
pub use table::{Reference, references, source_text};

/// Most cells along each side: 17 million in all, near the most that a mesh may have.
const MOST_CELLS: usize = 4096;

/// What to compute.
#[derive(Debug, Clone, Default, PartialEq)]
pub struct Request {
    /// A case such as `square-cavity-1e6` or a group such as `square-cavity`; without a name the
    /// square cavity at Rayleigh numbers 1e3 to 1e6.
    pub name: Option<String>,
    /// Without a name: 1e7 too.
    pub all: bool,
    /// Cells along each side; default 128.
    pub cells: Option<usize>,
    /// Equal cells instead of graded ones.
    pub uniform: bool,
    /// A JSON list instead of tables.
    pub json: bool,
}

/// Why no comparison came out.
#[derive(Debug, thiserror::Error)]
pub enum BenchmarkError {
    /// No case has this name.
    #[error("no benchmark is named `{name}`; there are: {known}")]
    Name {
        /// As asked.
        name: String,
        /// All names.
        known: String,
    },
    /// Too few cells, or not as the case needs them.
    #[error("cells must be {bound}, not {cells}")]
    Cells {
        /// As asked.
        cells: usize,
        /// The bound in words.
        bound: &'static str,
    },
    /// More memory than there is [GB].
    #[error(
        "{cells} cells along each side need about {needed:.1} GB of memory, and this machine has \
         {available:.1} GB left; ask for fewer"
    )]
    Memory {
        /// Cells along each side.
        cells: usize,
        /// Needed.
        needed: f64,
        /// Left.
        available: f64,
    },
    /// The case could not be built.
    #[error(transparent)]
    Sample(#[from] SampleError),
    /// The solver broke down.
    #[error(transparent)]
    Solve(#[from] SolveError),
    /// The table could not be written.
    #[error(transparent)]
    Write(#[from] std::io::Error),
}

/// A quantity with its references.
#[derive(Debug, Clone, PartialEq)]
pub struct Quantity {
    /// Its key: `nu_mean`, `u_max`, ...
    pub name: &'static str,
    /// As computed.
    pub computed: f64,
    /// From the tables, the target first.
    pub references: Vec<Reference>,
}

impl Quantity {
    /// Computed less the target, relative to the target; `None` without a reference.
    pub fn difference(&self) -> Option<f64> {
        self.references.first().map(|r| (self.computed - r.value) / r.value)
    }
}

/// One computed case.
#[derive(Debug, Clone, PartialEq)]
pub struct Comparison {
    /// Name of the case.
    pub case: String,
    /// Rayleigh number (Grashof, Reynolds number where the case has one instead) [-].
    pub number: f64,
    /// Which of them.
    pub number_name: &'static str,
    /// Cells of the whole mesh.
    pub cells: usize,
    /// Cells along x and y.
    pub mesh: [usize; 2],
    /// Quantities.
    pub quantities: Vec<Quantity>,
    /// Heat in by the hot side less heat out by the cold one, over the former [-].
    pub heat_error: f64,
    /// Outer iterations on all meshes.
    pub iterations: usize,
    /// Whether every bound was met.
    pub settled: bool,
    /// Elapsed time [s].
    pub wall_seconds: f64,
    /// Processor time of all threads [s].
    pub cpu_seconds: f64,
}

impl Comparison {
    /// A quantity by its key.
    pub fn quantity(&self, name: &str) -> Option<&Quantity> {
        self.quantities.iter().find(|q| q.name == name)
    }
}

/// Computes one case by its name.
///
/// # Errors
/// An unknown name, too few cells, a breakdown of the solver.
pub fn compute(name: &str, cells: usize, uniform: bool) -> Result<Comparison, BenchmarkError> {
    let case = Case::named(name).ok_or_else(|| unknown(name))?;
    if !cells.is_multiple_of(8) || !(16..=MOST_CELLS).contains(&cells) {
        let bound = "a multiple of eight from 16 to 4096";
        return Err(BenchmarkError::Cells { cells, bound });
    }
    let needed = memory::of_solve(cells * cells);
    if let Some(available) = memory::available().filter(|available| needed > *available) {
        let [needed, available] = [needed, available].map(|bytes| bytes / 1e9);
        return Err(BenchmarkError::Memory { cells, needed, available });
    }
    let problem = case.problem(cells, uniform)?;
    let mesh = problem.mesh();
    let (wall, cpu) = (Instant::now(), cpu_time::ProcessTime::now());
    let settings = Settings { tolerance: 1e-7, ..Settings::default() };
    let mut iterations = 0;
    let start = case.start(&problem);
    let solution = ventrise_solver::solve(&problem, &settings, start, &mut |p: &Progress| {
        iterations = p.iteration;
        ventrise_solver::Control::Continue
    })?;
    let (wall_seconds, cpu_seconds) = (wall.elapsed().as_secs_f64(), cpu.elapsed().as_secs_f64());
    let read = case.read(&problem, &solution.air, &solution.state);
    let quantities = read.quantities.into_iter().map(|(name, computed)| Quantity {
        name,
        computed,
        references: references(case.name(), name),
    });
    Ok(Comparison {
        case: case.name().to_string(),
        number: case.number(),
        number_name: case.number_name(),
        cells: mesh.cell_count(),
        mesh: [mesh.nx(), mesh.ny()],
        quantities: quantities.collect(),
        heat_error: read.heat_error,
        iterations,
        settled: solution.stop == ventrise_solver::StopReason::Converged,
        wall_seconds,
        cpu_seconds,
    })
}

/// Computes what is asked for and writes tables, or a JSON list, to `out`. True when every case
/// settled.
///
/// # Errors
/// As [`compute`]; writing.
pub fn run(request: &Request, out: &mut dyn Write) -> Result<bool, BenchmarkError> {
    let cases = chosen(request)?;
    let cells = request.cells.unwrap_or(128);
    let mut settled = true;
    let mut list = Vec::new();
    for name in cases {
        let comparison = compute(name, cells, request.uniform)?;
        settled &= comparison.settled;
        if request.json {
            list.push(json(&comparison));
        } else {
            table(&comparison, request.uniform, out)?;
            out.flush()?;
        }
    }
    if request.json {
        writeln!(out, "[\n{}\n]", list.join(",\n"))?;
    }
    Ok(settled)
}

fn unknown(name: &str) -> BenchmarkError {
    BenchmarkError::Name { name: name.to_string(), known: names().join(", ") }
}

fn chosen(request: &Request) -> Result<Vec<&'static str>, BenchmarkError> {
    let all = names();
    let Some(name) = &request.name else {
        let keep = |n: &&str| {
            n.starts_with("square-cavity-") && (request.all || *n != "square-cavity-1e7")
        };
        return Ok(all.into_iter().filter(keep).collect());
    };
    let exact: Vec<&'static str> = all.iter().copied().filter(|n| n == name).collect();
    if !exact.is_empty() {
        return Ok(exact);
    }
    // A group: the name up to a dash that a number follows.
    let group: Vec<&'static str> =
        all.iter().copied().filter(|n| Case::group_of(n) == name.as_str()).collect();
    if group.is_empty() { Err(unknown(name)) } else { Ok(group) }
}

fn table(c: &Comparison, uniform: bool, out: &mut dyn Write) -> std::io::Result<()> {
    let grading = if uniform { "equal" } else { "graded" };
    let [nx, ny] = c.mesh;
    writeln!(
        out,
        "{}   {nx} x {ny} {grading} cells, {}, {:.2} s{}",
        c.case,
        counted(c.iterations, "iteration"),
        c.wall_seconds,
        if c.settled { "" } else { ", NOT SETTLED" }
    )?;
    writeln!(
        out,
        "  {:<10} {:>12} {:>12} {:>11}  source",
        "", "computed", "published", "difference"
    )?;
    for q in &c.quantities {
        let mut label = q.name;
        for reference in &q.references {
            let difference = 100.0 * (q.computed - reference.value) / reference.value;
            let [computed, published] = [q.computed, reference.value].map(significant);
            writeln!(
                out,
                "  {label:<10} {computed:>12} {published:>12} {difference:>+9.3} %  {}",
                source_text(&reference.source)
            )?;
            label = "";
        }
    }
    writeln!(out, "  heat in less heat out {:.1e} of heat in\n", c.heat_error.abs())
}

/// About six significant digits.
fn significant(value: f64) -> String {
    let digits = 5 - value.abs().log10().floor().clamp(-3.0, 5.0) as i32;
    format!("{value:.*}", digits.max(0) as usize)
}

/// One object, keys in a fixed order.
fn json(c: &Comparison) -> String {
    let text = |value: &str| Value::from(value).to_string();
    let number = |value: f64| Value::from(value).to_string();
    let mut fields = vec![
        ("case".to_string(), text(&c.case)),
        (c.number_name.to_string(), number(c.number)),
        ("cells".to_string(), c.cells.to_string()),
        ("nx".to_string(), c.mesh[0].to_string()),
        ("ny".to_string(), c.mesh[1].to_string()),
    ];
    let mut sources: Vec<&'static str> = Vec::new();
    for q in &c.quantities {
        fields.push((q.name.to_string(), number(q.computed)));
        for (n, reference) in q.references.iter().enumerate() {
            if n == 0 {
                fields.push((format!("{}_reference", q.name), number(reference.value)));
                let source = source_text(&reference.source);
                if !sources.contains(&source) {
                    sources.push(source);
                }
            } else {
                let key = format!("{}_{}", q.name, reference.source.replace('-', "_"));
                fields.push((key, number(reference.value)));
            }
        }
    }
    fields.push(("source".to_string(), text(&sources.join("; "))));
    fields.push(("heat_error".to_string(), number(c.heat_error)));
    fields.push(("settled".to_string(), c.settled.to_string()));
    fields.push(("iterations".to_string(), c.iterations.to_string()));
    fields.push(("wall_seconds".to_string(), number(c.wall_seconds)));
    fields.push(("cpu_seconds".to_string(), number(c.cpu_seconds)));
    let lines: Vec<String> =
        fields.iter().map(|(key, value)| format!("    {}: {value}", text(key))).collect();
    format!("  {{\n{}\n  }}", lines.join(",\n"))
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    fn comparison() -> Comparison {
        Comparison {
            case: "square-cavity-1e6".to_string(),
            number: 1e6,
            number_name: "rayleigh",
            cells: 64,
            mesh: [8, 8],
            quantities: vec![Quantity {
                name: "nu_mean",
                computed: 8.9,
                references: references("square-cavity-1e6", "nu_mean"),
            }],
            heat_error: 1e-9,
            iterations: 7,
            settled: true,
            wall_seconds: 0.25,
            cpu_seconds: 0.5,
        }
    }

    #[test]
    fn json_has_the_reference_and_its_source_beside_the_value() {
        let value: Value = serde_json::from_str(&format!("[{}]", json(&comparison()))).unwrap();
        let entry = &value[0];
        assert_eq!(entry["case"], "square-cavity-1e6");
        assert_eq!(entry["rayleigh"], 1e6);
        assert_eq!(entry["cells"], 64);
        assert_eq!(entry["nu_mean"], 8.9);
        assert_eq!(entry["nu_mean_reference"], 8.8252);
        assert_eq!(entry["nu_mean_de_vahl_davis_1983"], 8.8);
        assert!(entry["source"].as_str().unwrap().contains("1991"));
        assert_eq!(entry["iterations"], 7);
        assert_eq!(entry["cpu_seconds"], 0.5);
    }

    #[test]
    fn table_shows_every_reference_with_its_difference() {
        let mut out = Vec::new();
        table(&comparison(), false, &mut out).unwrap();
        let text = String::from_utf8(out).unwrap();
        assert!(text.contains("8 x 8 graded cells"), "{text}");
        assert!(text.contains("8.90000") && text.contains("8.82520"), "{text}");
        assert!(text.contains("+0.848 %") && text.contains("+1.136 %"), "{text}");
    }

    #[test]
    fn names_choose_a_case_a_group_or_nothing() {
        let named = |name: &str| chosen(&Request { name: Some(name.into()), ..Request::default() });
        assert_eq!(named("square-cavity-1e5").unwrap(), ["square-cavity-1e5"]);
        assert_eq!(named("square-cavity").unwrap().len(), 5);
        assert_eq!(named("lid-cavity").unwrap().len(), 3);
        assert_eq!(named("conducting-wall").unwrap().len(), 12);
        assert_eq!(named("annulus").unwrap().len(), 4);
        assert!(matches!(named("square"), Err(BenchmarkError::Name { .. })));
        assert_eq!(chosen(&Request::default()).unwrap().len(), 4);
        assert_eq!(chosen(&Request { all: true, ..Request::default() }).unwrap().len(), 5);
    }

    #[test]
    fn cells_out_of_range_are_refused() {
        let error = compute("square-cavity-1e3", 30, false).unwrap_err();
        assert_eq!(error.to_string(), "cells must be a multiple of eight from 16 to 4096, not 30");
    }
}
