//! Files and screen: what a run leaves behind.

use std::io;

pub mod by_hand;
pub mod csv;
pub mod fans;
pub mod folder;
pub mod outer_heat;
pub mod overview;
pub mod pictures;
pub mod readings;
pub mod report;
pub mod results;
pub mod screen;
pub mod slots;
pub mod summary;
pub mod table;
pub mod told;
pub mod vtk;
mod vtr;
mod warnings;
pub mod words;

pub use crate::case::side_name;
pub use folder::{Folder, FolderError, write_whole};
pub use readings::{Interruption, Readings, Run};
pub use results::{Results, ResultsError};
pub use summary::Summary;

/// Writes all files of a run into its folder; returns their names. `revolve` is the number of
/// sectors of the revolved fields, if they are wanted.
///
/// # Errors
/// What the file system reports.
pub fn write_files(
    folder: &Folder,
    run: &Run,
    readings: &Readings,
    summary: &Summary,
    revolve: Option<usize>,
) -> Result<Vec<&'static str>, FolderError> {
    let (case, history) = (run.case, &run.solution.history);
    let fields = run.fields();
    let mut names = Vec::new();
    let mut file = |name, fill: &mut dyn FnMut(&mut dyn io::Write) -> io::Result<()>| {
        names.push(name);
        folder.write(name, |out| fill(out))
    };
    let text = |text: String| move |out: &mut dyn io::Write| out.write_all(text.as_bytes());
    file("summary.json", &mut |out| text(summary.to_json().map_err(io::Error::other)?)(out))?;
    file("fields.vtr", &mut |out| fields.write_rectilinear(out))?;
    if let Some(sectors) = revolve {
        file("revolved.vts", &mut |out| fields.write_revolved(sectors, out))?;
    }
    file("history.csv", &mut text(csv::history(case, readings.ambient, history)))?;
    file("parts.csv", &mut text(csv::parts(summary)))?;
    file("slots.csv", &mut text(csv::slots(summary)))?;
    file("sides.csv", &mut text(csv::sides(summary)))?;
    file("probes.csv", &mut text(csv::probes(case, readings)))?;
    file("case.toml", &mut text(case.resolved()))?;
    Ok(names)
}
