//! The command line: as typed, then checked and resolved.

use std::num::NonZeroUsize;
use std::path::PathBuf;
use std::time::Duration;

use clap::{Args, CommandFactory, Parser, Subcommand, ValueHint};
use clap_complete::Shell;

use crate::benchmark;
use crate::case::units::{self, Dimension};

/// Most threads: beyond the cores of a machine they only wait for each other.
const MOST_THREADS: i64 = 256;

/// Will every part of a fanless, vented housing stay below its limit?
#[derive(Debug, Parser)]
#[command(
    name = "ventrise",
    version,
    about,
    long_about = "Will every part of a fanless, vented housing stay below its limit? Ventrise \
                  computes the draught that heat drives through the vents of a housing's section, \
                  and the temperatures of its parts.",
    after_help = "Example:\n  ventrise solve cases/wall-cabinet.toml\n\nExit codes: 0 settled, 1 \
                  not settled, 2 wrong case or command, 3 margin not kept,\n4 interrupted, 5 file \
                  system or internal failure.",
    max_term_width = 100
)]
pub struct Typed {
    /// What to do.
    #[command(subcommand)]
    pub command: TypedCommand,
}

/// Commands as typed.
#[derive(Debug, Subcommand)]
pub enum TypedCommand {
    /// Write a case file to start from
    #[command(after_help = "Examples:\n  ventrise new --list\n  ventrise new my-radio --from \
                            mast-radio             writes my-radio.toml")]
    New {
        /// Name of the case; NAME.toml is written, never over a file
        #[arg(required_unless_present = "list")]
        name: Option<PathBuf>,
        /// Scenario to start from [default: wall-cabinet]
        #[arg(long, value_name = "SCENARIO")]
        from: Option<String>,
        /// Show the scenarios
        #[arg(long, conflicts_with_all = ["name", "from"])]
        list: bool,
    },
    /// Read and judge a case: what was understood, mesh, cells across gaps; solves nothing
    #[command(
        after_help = "Examples:\n  ventrise check cases/wall-cabinet.toml\n  ventrise check \
                            radio.toml --layout pictures/radio.svg"
    )]
    Check(TypedCheck),
    /// Solve a case and write its results folder
    #[command(after_help = "Examples:
  ventrise solve cases/wall-cabinet.toml
  ventrise solve radio.toml --out runs/radio       results in a folder of your choice
  ventrise solve radio.toml --quiet --require-margin 5 --time-limit \"10 min\"
                                                   in a script: the exit code answers
  ventrise solve cases/mast-radio.toml --revolve 36
                                                   also the body, for a viewer")]
    Solve(TypedSolve),
    /// Make the pictures and the page of a results folder again
    #[command(after_help = "Example:\n  ventrise report cases/wall-cabinet.results")]
    Report {
        /// Results folder
        #[arg(value_hint = ValueHint::DirPath)]
        folder: PathBuf,
    },
    /// Compute published cavity cases and set them beside their table values
    #[command(after_help = "Examples:
  ventrise benchmark                               square cavity, Rayleigh 1e3 to 1e6
  ventrise benchmark square-cavity-1e6 --cells 64  one case, coarser
  ventrise benchmark lid-cavity --uniform          a group of cases, equal cells
  ventrise benchmark annulus --json                for a script")]
    Benchmark(TypedBenchmark),
    /// Print the JSON Schema of the case file, with which editors complete and check
    #[command(after_help = "Example:
  ventrise schema > ventrise.schema.json           then let the first line of a case file be
                                                   #:schema ventrise.schema.json")]
    Schema,
    /// Print what a shell needs to complete commands, options and file names
    #[command(after_help = "Examples:
  ventrise completions bash > ~/.local/share/bash-completion/completions/ventrise
  ventrise completions zsh > ~/.zfunc/_ventrise    a folder of fpath
  ventrise completions fish > ~/.config/fish/completions/ventrise.fish")]
    Completions {
        /// The shell
        shell: Shell,
    },
    /// Print a manual page
    #[command(after_help = "Examples:
  ventrise man > ventrise.1 && man ./ventrise.1
  ventrise man solve > ventrise-solve.1")]
    Man {
        /// Command to print the page of [default: the program as a whole]
        #[arg(value_name = "COMMAND", value_parser = page)]
        page: Option<String>,
    },
}

/// `check` as typed.
#[derive(Debug, Args)]
pub struct TypedCheck {
    /// Case file (TOML)
    #[arg(value_hint = ValueHint::FilePath)]
    pub case: PathBuf,
    /// Where to draw the section to scale [default: NAME.layout.svg beside the case file]
    #[arg(long, value_name = "FILE.svg", value_parser = drawing)]
    pub layout: Option<PathBuf>,
    /// Draw nothing, write nothing
    #[arg(long, conflicts_with = "layout")]
    pub no_layout: bool,
}

/// `benchmark` as typed.
#[derive(Debug, Args)]
pub struct TypedBenchmark {
    /// Case such as square-cavity-1e6 [default: the square cavity at Rayleigh 1e3 to 1e6]
    pub name: Option<String>,
    /// Cells along each side [default: 128]
    #[arg(long, value_name = "N")]
    pub cells: Option<usize>,
    /// Equal cells instead of cells graded towards the walls
    #[arg(long)]
    pub uniform: bool,
    /// Rayleigh 1e7 too
    #[arg(long)]
    pub all: bool,
    /// A JSON list instead of tables
    #[arg(long)]
    pub json: bool,
    /// Threads to work with, at most 256 [default: all the machine offers]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=MOST_THREADS))]
    pub threads: Option<u16>,
}

/// `solve` as typed.
#[derive(Debug, Args)]
pub struct TypedSolve {
    /// Case file (TOML)
    #[arg(value_hint = ValueHint::FilePath)]
    pub case: PathBuf,
    /// Results folder [default: NAME.results beside the case file]
    #[arg(long, value_name = "DIR", value_hint = ValueHint::DirPath)]
    pub out: Option<PathBuf>,
    /// Threads to work with, at most 256 [default: all the machine offers]
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u16).range(1..=MOST_THREADS))]
    pub threads: Option<u16>,
    /// Show nothing but errors
    #[arg(long, short)]
    pub quiet: bool,
    /// Also write the fields of an axisymmetric section turned into a body of N sectors
    #[arg(long, value_name = "N", value_parser = clap::value_parser!(u32).range(3..=720))]
    pub revolve: Option<u32>,
    /// End with exit code 3 if a part comes closer to its limit than so many kelvin
    #[arg(long, value_name = "K", value_parser = kelvin, allow_hyphen_values = true)]
    pub require_margin: Option<f64>,
    /// Stop after this time with what there is, such as "10 min"
    #[arg(long, value_name = "TIME", value_parser = time)]
    pub time_limit: Option<Duration>,
}

/// What is to be done, resolved.
#[derive(Debug, Clone, PartialEq)]
pub enum Command {
    /// Write a scenario under a name; without one, list them.
    New {
        /// Name of the case.
        name: Option<PathBuf>,
        /// Scenario.
        from: Option<String>,
    },
    /// Judge a case.
    Check {
        /// The case file.
        case: PathBuf,
        /// Where to draw its section, if it is to be drawn.
        layout: Option<PathBuf>,
    },
    /// Solve a case.
    Solve(Solve),
    /// Make pictures and page again.
    Report {
        /// The results folder.
        folder: PathBuf,
    },
    /// Compute published cases.
    Benchmark {
        /// Which and how.
        request: benchmark::Request,
        /// Number of threads.
        threads: usize,
    },
    /// Print the schema of the case file.
    Schema,
    /// Print the completions of a shell.
    Completions(Shell),
    /// Print the manual page of a command, or of the program.
    Man(Option<String>),
}

/// A solve with its defaults resolved.
#[derive(Debug, Clone, PartialEq)]
pub struct Solve {
    /// The case file.
    pub case: PathBuf,
    /// The results folder.
    pub out: PathBuf,
    /// Number of threads.
    pub threads: usize,
    /// Show nothing but errors.
    pub quiet: bool,
    /// Sectors of the revolved fields.
    pub revolve: Option<usize>,
    /// Least margin of every part with a limit [K].
    pub require_margin: Option<f64>,
    /// Time after which to stop.
    pub time_limit: Option<Duration>,
}

impl Typed {
    /// Resolves what was typed.
    pub fn resolve(self) -> Command {
        match self.command {
            TypedCommand::New { name, from, list: _ } => Command::New { name, from },
            TypedCommand::Check(TypedCheck { case, layout, no_layout }) => {
                let beside = || case.with_extension("layout.svg");
                let layout = (!no_layout).then(|| layout.unwrap_or_else(beside));
                Command::Check { case, layout }
            }
            TypedCommand::Schema => Command::Schema,
            TypedCommand::Completions { shell } => Command::Completions(shell),
            TypedCommand::Man { page } => Command::Man(page),
            TypedCommand::Report { folder } => Command::Report { folder },
            TypedCommand::Solve(typed) => Command::Solve(Solve {
                out: typed.out.unwrap_or_else(|| typed.case.with_extension("results")),
                threads: all_unless(typed.threads),
                quiet: typed.quiet,
                revolve: typed.revolve.map(|n| n as usize),
                require_margin: typed.require_margin,
                time_limit: typed.time_limit,
                case: typed.case,
            }),
            TypedCommand::Benchmark(typed) => Command::Benchmark {
                request: benchmark::Request {
                    name: typed.name,
                    all: typed.all,
                    cells: typed.cells,
                    uniform: typed.uniform,
                    json: typed.json,
                },
                threads: all_unless(typed.threads),
            },
        }
    }
}

/// The threads asked for, or all that the machine offers.
fn all_unless(asked: Option<u16>) -> usize {
    let offered = || std::thread::available_parallelism().map_or(1, NonZeroUsize::get);
    asked.map_or_else(offered, usize::from)
}

/// The name of a command.
fn page(text: &str) -> Result<String, String> {
    match Typed::command().find_subcommand(text) {
        Some(_) => Ok(text.into()),
        None => Err("the name of a command belongs here, such as solve".into()),
    }
}

/// A margin: a finite number of kelvin, with or without the unit.
fn kelvin(text: &str) -> Result<f64, String> {
    let number = text.trim().strip_suffix('K').unwrap_or(text).trim();
    match number.parse::<f64>() {
        Ok(value) if value.is_finite() => Ok(value),
        _ => Err("a number of kelvin such as 5 or \"5 K\" belongs here".into()),
    }
}

/// A file for a drawing: its name says that it is one, so that nothing else is overwritten.
fn drawing(text: &str) -> Result<PathBuf, String> {
    let path = PathBuf::from(text);
    match path.extension() {
        Some(ending) if ending.eq_ignore_ascii_case("svg") => Ok(path),
        _ => Err("a file name that ends in .svg belongs here".into()),
    }
}

/// A time with its unit.
fn time(text: &str) -> Result<Duration, String> {
    match units::parse(text, Dimension::Time).map(Duration::try_from_secs_f64) {
        Ok(Ok(time)) if !time.is_zero() => Ok(time),
        _ => Err("a time above zero with its unit belongs here, such as \"90 s\", \"10 min\" or \
                  \"2 h\""
            .into()),
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    fn resolve(words: &[&str]) -> Result<Command, clap::Error> {
        Typed::try_parse_from(std::iter::once(&"ventrise").chain(words)).map(Typed::resolve)
    }

    #[test]
    fn the_command_line_is_consistent() {
        Typed::command().debug_assert();
    }

    #[test]
    fn results_go_beside_the_case() {
        let Command::Solve(solve) = resolve(&["solve", "a/radio.v2.toml"]).unwrap() else {
            panic!("not a solve");
        };
        assert_eq!(solve.out, PathBuf::from("a/radio.v2.results"));
        assert!(solve.threads >= 1 && !solve.quiet);
    }

    #[test]
    fn drawings_go_beside_the_case_or_where_they_are_wanted() {
        let layout =
            |words: &[&str]| match resolve(&[&["check", "a/radio.v2.toml"], words].concat()) {
                Ok(Command::Check { layout, .. }) => layout,
                _ => panic!("not a check"),
            };
        assert_eq!(layout(&[]), Some("a/radio.v2.layout.svg".into()));
        assert_eq!(layout(&["--layout", "b.SVG"]), Some("b.SVG".into()));
        assert_eq!(layout(&["--no-layout"]), None);
        assert!(resolve(&["check", "radio.toml", "--layout", "radio.toml"]).is_err());
    }

    #[test]
    fn values_have_bounds_and_units() {
        let solve = |words: &[&str]| resolve(&[&["solve", "x.toml"], words].concat());
        let Ok(Command::Solve(s)) =
            solve(&["--require-margin", "-2.5 K", "--time-limit", "2 min", "--revolve", "12"])
        else {
            panic!("refused");
        };
        assert_eq!((s.require_margin, s.revolve), (Some(-2.5), Some(12)));
        assert_eq!(s.time_limit, Some(Duration::from_secs(120)));
        for wrong in [
            ["--threads", "0"],
            ["--threads", "257"],
            ["--revolve", "2"],
            ["--time-limit", "10"],
            ["--time-limit", "0 s"],
            ["--require-margin", "nan"],
            ["--require-margin", "5 mm"],
        ] {
            assert!(solve(&wrong).is_err(), "{wrong:?}");
        }
    }
}
