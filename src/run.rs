//! From the words of the command line to an exit code.

use std::ffi::OsString;
use std::io::{self, Write};
use std::path::Path;
use std::process::ExitCode;
use std::sync::atomic::{AtomicU8, Ordering};
use std::time::Instant;

use clap::Parser;
use cpu_time::ProcessTime;
use ventrise_mesh::{Generated, Geometry};
use ventrise_solver::{Control, Problem, Solution, SolveError, StopReason, Verdict};

use crate::benchmark::{self, BenchmarkError};
use crate::case::{Case, CaseErrors, setup};
use crate::cli::{Command, Solve, Typed};
use crate::manual;
use crate::memory;
use crate::new::{self, NewError};
use crate::output::overview::Overview;
use crate::output::readings::celsius;
use crate::output::report::{self, ReportError};
use crate::output::{
    Folder, FolderError, Interruption, Results, ResultsError, Run, Summary, pictures, screen,
    write_files, write_whole,
};
use crate::progress::{ProgressView, WatchedPart};

/// How a command ends, as the exit code of the program.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
#[repr(u8)]
pub enum Ending {
    /// Settled, or nothing to solve and nothing wrong.
    Settled = 0,
    /// Solved, but not settled.
    NotSettled = 1,
    /// The case or the command is wrong; nothing was written.
    WrongInput = 2,
    /// Settled, but a part is closer to its limit than required.
    MarginNotKept = 3,
    /// A signal ended the iteration; what there was has been written.
    Interrupted = 4,
    /// File system or internal failure.
    Failure = 5,
}

impl From<Ending> for ExitCode {
    fn from(ending: Ending) -> ExitCode {
        ExitCode::from(ending as u8)
    }
}

/// Why a command could not do its work.
#[derive(Debug, thiserror::Error)]
enum Trouble {
    #[error("{0}")]
    Case(#[from] CaseErrors),
    #[error("{}: {reason}", .file)]
    Mesh { file: String, reason: String },
    #[error("--revolve needs an axisymmetric section; this one is planar")]
    Revolve,
    #[error("no results: {0}")]
    Folder(#[from] FolderError),
    #[error("no solution was reached: {0}; nothing was written")]
    Solve(#[from] SolveError),
    #[error("threads cannot be started: {0}")]
    Threads(#[from] rayon::ThreadPoolBuildError),
    #[error("{0}")]
    Benchmark(#[from] BenchmarkError),
    #[error("{0}")]
    Results(#[from] ResultsError),
    #[error("{0}")]
    Report(#[from] ReportError),
    #[error("{0}")]
    New(#[from] NewError),
    #[error("cannot write {file}: {source}")]
    Write { file: String, source: io::Error },
}

impl Trouble {
    fn ending(&self) -> Ending {
        match self {
            Trouble::Case(_) | Trouble::Mesh { .. } | Trouble::Revolve | Trouble::Results(_) => {
                Ending::WrongInput
            }
            Trouble::Benchmark(
                BenchmarkError::Name { .. }
                | BenchmarkError::Cells { .. }
                | BenchmarkError::Memory { .. },
            ) => Ending::WrongInput,
            Trouble::New(
                NewError::Unknown { .. } | NewError::Exists { .. } | NewError::Name { .. },
            ) => Ending::WrongInput,
            _ => Ending::Failure,
        }
    }
}

/// Runs the program with its arguments, the program's name first.
pub fn run(words: impl IntoIterator<Item = OsString>) -> ExitCode {
    let typed = match Typed::try_parse_from(words) {
        Ok(typed) => typed,
        Err(error) => {
            // Help and version come this way too; a closed pipe is no reason to complain.
            let _ = error.print();
            return if error.use_stderr() { Ending::WrongInput } else { Ending::Settled }.into();
        }
    };
    let done = match typed.resolve() {
        Command::New { name, from } => new_case(name.as_deref(), from.as_deref()),
        Command::Check { case, layout } => check(&case, layout.as_deref()),
        Command::Report { folder } => report_again(&folder),
        Command::Solve(solve) => solve_case(&solve),
        Command::Benchmark { request, threads } => compare(&request, threads),
        Command::Schema => {
            print(|out| out.write_all(crate::case::schema().as_bytes()));
            Ok(Ending::Settled)
        }
        Command::Completions(shell) => {
            print(|out| manual::completions(shell, out));
            Ok(Ending::Settled)
        }
        Command::Man(command) => {
            print(|out| manual::page(command.as_deref(), out));
            Ok(Ending::Settled)
        }
    };
    let ending = done.unwrap_or_else(|trouble| {
        let _ = writeln!(io::stderr(), "{trouble}");
        trouble.ending()
    });
    ending.into()
}

/// Writes to standard output; a reader that has gone away is not an error.
fn print(write: impl FnOnce(&mut dyn Write) -> io::Result<()>) {
    let mut out = io::BufWriter::new(io::stdout().lock());
    if let Err(error) = write(&mut out).and_then(|()| out.flush())
        && error.kind() != io::ErrorKind::BrokenPipe
    {
        let _ = writeln!(io::stderr(), "standard output: {error}");
    }
}

fn mesh_of(case: &Case) -> Result<Generated, Trouble> {
    setup::mesh(case).map_err(|error| case.refused_mesh(&error).into())
}

/// Refuses a mesh that there is no memory for.
fn affordable(case: &Case, cells: usize) -> Result<(), Trouble> {
    let needed = memory::of_solve(cells);
    match memory::available() {
        Some(available) if needed > available => {
            Err(case.refused_memory(cells, needed, available).into())
        }
        _ => Ok(()),
    }
}

fn new_case(name: Option<&Path>, from: Option<&str>) -> Result<Ending, Trouble> {
    let Some(name) = name else {
        print(|out| out.write_all(new::list().as_bytes()));
        return Ok(Ending::Settled);
    };
    let path = new::write(name, from)?;
    let file = path.display();
    print(|out| {
        writeln!(out, "{file} written. Next: ventrise check {file}, then ventrise solve {file}")
    });
    Ok(Ending::Settled)
}

fn check(path: &Path, drawing: Option<&Path>) -> Result<Ending, Trouble> {
    let case = Case::read(path)?;
    let generated = mesh_of(&case)?;
    if affordable(&case, generated.mesh.cell_count()).is_ok() {
        problem_of(&case, &generated)?;
    }
    let overview = Overview::of(&case, &generated)
        .map_err(|e| Trouble::Mesh { file: case.file().into(), reason: e.to_string() })?;
    print(|out| overview.write(out));
    if let Some(file) = drawing {
        let mesh = &generated.mesh;
        write_to(file, &pictures::layout(&case, mesh.x(), mesh.y()))?;
        print(|out| writeln!(out, "\nDrawn in {}", file.display()));
    }
    Ok(Ending::Settled)
}

fn write_to(file: &Path, text: &str) -> Result<(), Trouble> {
    write_whole(file, text)
        .map_err(|source| Trouble::Write { file: file.display().to_string(), source })
}

fn report_again(folder: &Path) -> Result<Ending, Trouble> {
    let files = report::files(&Results::read(folder)?)?;
    for (name, text) in &files {
        write_to(&folder.join(name), text)?;
    }
    let names: Vec<&str> = files.iter().map(|f| f.0).collect();
    print(|out| writeln!(out, "Made again in {}\n  {}", folder.display(), names.join("  ")));
    Ok(Ending::Settled)
}

fn compare(request: &benchmark::Request, threads: usize) -> Result<Ending, Trouble> {
    let settled = in_pool(threads, || benchmark::run(request, &mut io::stdout()))?;
    match settled {
        Ok(true) => Ok(Ending::Settled),
        Ok(false) => Ok(Ending::NotSettled),
        // The reader has gone away and wants no more.
        Err(BenchmarkError::Write(e)) if e.kind() == io::ErrorKind::BrokenPipe => {
            Ok(Ending::Settled)
        }
        Err(error) => Err(error.into()),
    }
}

fn problem_of(case: &Case, generated: &Generated) -> Result<Problem, Trouble> {
    setup::problem(case, generated.mesh.clone())
        .map_err(|e| Trouble::Mesh { file: case.file().into(), reason: e.to_string() })
}

fn solve_case(asked: &Solve) -> Result<Ending, Trouble> {
    let (begun, processor) = (Instant::now(), ProcessTime::now());
    let case = Case::read(&asked.case)?;
    if asked.revolve.is_some() && case.section().geometry != Geometry::Axisymmetric {
        return Err(Trouble::Revolve);
    }
    if let Some([nx, ny]) = case.mesh_choice().cells {
        affordable(&case, nx * ny)?;
    }
    let generated = mesh_of(&case)?;
    affordable(&case, generated.mesh.cell_count())?;
    let problem = problem_of(&case, &generated)?;
    // Found out before the work, not after it: can the results be written?
    drop(Folder::begin(&asked.out)?);
    listen();
    let (solution, interruption) = iterate(asked, &case, &problem, begun)?;
    let run = Run {
        case: &case,
        problem: &problem,
        solution: &solution,
        mesh_notes: &generated.notes,
        interruption,
        wall_seconds: begun.elapsed().as_secs_f64(),
        cpu_seconds: processor.elapsed().as_secs_f64(),
    };
    let readings = run.readings();
    let summary = Summary::of(&run, &readings);
    let folder = Folder::begin(&asked.out)?;
    let mut files = write_files(&folder, &run, &readings, &summary, asked.revolve)?;
    match report::files_of(&run, &readings, &summary) {
        Ok(drawn) => {
            for (name, text) in drawn {
                folder.write(name, |out| out.write_all(text.as_bytes()))?;
                files.push(name);
            }
        }
        // The numbers are worth more than their pictures: they are kept.
        Err(error) => {
            let _ = writeln!(io::stderr(), "no pictures and no page: {error}");
        }
    }
    folder.keep()?;
    let ending = ending(&solution, interruption, &summary, asked.require_margin);
    if !asked.quiet {
        print(|out| {
            screen::report(out, &summary, &readings, &asked.out, &files)?;
            match (ending, asked.require_margin) {
                (Ending::MarginNotKept, Some(margin)) => {
                    writeln!(out, "The required margin of {margin} K is not kept.")
                }
                _ => Ok(()),
            }
        });
    }
    Ok(ending)
}

fn ending(
    solution: &Solution,
    interruption: Option<Interruption>,
    summary: &Summary,
    require_margin: Option<f64>,
) -> Ending {
    match solution.verdict {
        Verdict::Settled => match (require_margin, summary.least_margin()) {
            (Some(required), Some(margin)) if margin < required => Ending::MarginNotKept,
            _ => Ending::Settled,
        },
        _ if interruption == Some(Interruption::Signal) => Ending::Interrupted,
        _ => Ending::NotSettled,
    }
}

fn iterate(
    asked: &Solve,
    case: &Case,
    problem: &Problem,
    begun: Instant,
) -> Result<(Solution, Option<Interruption>), Trouble> {
    let settings = setup::settings(case);
    let ambient = case.ambient().temperature;
    let watched = |part: &crate::case::Part| WatchedPart {
        name: part.name.clone(),
        limit_rise: part.limit.map(|limit| limit - ambient),
    };
    let parts = case.parts().iter().map(watched).collect();
    let mut view = ProgressView::new(parts, celsius(ambient), settings.tolerance, asked.quiet);
    let mut interruption = None;
    let mut watch = |progress: &ventrise_solver::Progress| {
        view.update(progress);
        if SIGNALS.load(Ordering::Relaxed) > 0 {
            interruption = Some(Interruption::Signal);
        } else if asked.time_limit.is_some_and(|limit| begun.elapsed() >= limit) {
            interruption = Some(Interruption::TimeLimit);
        }
        if interruption.is_some() { Control::Stop } else { Control::Continue }
    };
    let solved =
        in_pool(asked.threads, || ventrise_solver::solve(problem, &settings, None, &mut watch))?;
    view.finish(solved.as_ref().ok().and_then(|s| s.history.last()));
    let solution = solved?;
    let interruption = interruption.filter(|_| solution.stop == StopReason::Asked);
    Ok((solution, interruption))
}

/// Works inside one pool of so many threads.
fn in_pool<T: Send>(threads: usize, work: impl FnOnce() -> T + Send) -> Result<T, Trouble> {
    Ok(rayon::ThreadPoolBuilder::new().num_threads(threads).build()?.install(work))
}

/// Interrupts received so far.
static SIGNALS: AtomicU8 = AtomicU8::new(0);

/// Listens for Ctrl-C and termination: the first ends the iteration, the third the program.
fn listen() {
    let set = ctrlc::set_handler(|| {
        let before = SIGNALS.fetch_add(1, Ordering::Relaxed);
        let text = match before {
            0 => "ending after this iteration; what there is will be written",
            1 => "once more ends at once, with nothing written",
            _ => std::process::exit(i32::from(Ending::Interrupted as u8)),
        };
        let _ = writeln!(io::stderr(), "{text}");
    });
    if let Err(error) = set {
        let _ = writeln!(io::stderr(), "Ctrl-C will end the program at once: {error}");
    }
}
