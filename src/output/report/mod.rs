//! `report.html`: one page that holds everything a person needs to sign off, or not.
//!
//! It is made from the files of the results folder alone, so that `report` gives the same page
//! again, and it asks nothing of a network.

mod answer;
mod cautions;
mod rows;

use std::io;

use minijinja::{Environment, context};

use super::csv;
use super::pictures::{Picture, pictures};
use super::readings::{Readings, Run};
use super::results::{Results, ResultsError, Texts};
use super::summary::Summary;
use super::words::{fixed, mm};
use crate::case::units::rounded;

/// The picture that stands beside the margins.
const FIRST: &str = "margins.svg";
/// Name of the page.
pub const PAGE: &str = "report.html";
const TEMPLATE: &str = include_str!("page.html");
const STYLE: &str = include_str!("style.css");
/// What a drawing needs to stand alone but not inside a page.
const STANDALONE: &str =
    " xmlns=\"http://www.w3.org/2000/svg\" xmlns:xlink=\"http://www.w3.org/1999/xlink\"";

/// Why pictures and page cannot be made.
#[derive(Debug, thiserror::Error)]
pub enum ReportError {
    /// The results.
    #[error("{0}")]
    Results(#[from] ResultsError),
    /// An image.
    #[error("an image cannot be made: {0}")]
    Image(#[from] io::Error),
    /// The summary's text.
    #[error("the summary cannot be written: {0}")]
    Summary(#[from] serde_json::Error),
    /// The page.
    #[error("the page cannot be made: {0}")]
    Page(#[from] minijinja::Error),
}

/// File names with their contents: all pictures, then the page.
///
/// # Errors
/// What the image encoder and the template report.
pub fn files(results: &Results) -> Result<Vec<(&'static str, String)>, ReportError> {
    let pictures = pictures(results)?;
    let page = page(results, &pictures)?;
    let mut files: Vec<(&'static str, String)> =
        pictures.into_iter().map(|p| (p.file, p.svg)).collect();
    files.push((PAGE, page));
    Ok(files)
}

/// The same for a run, before or after its folder is written.
///
/// # Errors
/// As for [`files`].
pub fn files_of(
    run: &Run,
    readings: &Readings,
    summary: &Summary,
) -> Result<Vec<(&'static str, String)>, ReportError> {
    let (case, history) = (run.case, &run.solution.history);
    let texts = Texts {
        case: &case.resolved(),
        summary: &summary.to_json()?,
        history: &csv::history(case, readings.ambient, history),
        probes: &csv::probes(case, readings),
    };
    files(&Results::new(&texts, run.fields())?)
}

/// The page.
fn page(results: &Results, pictures: &[Picture]) -> Result<String, minijinja::Error> {
    let mut environment = Environment::new();
    environment.add_template("page.html", TEMPLATE)?;
    let shown = |p: &Picture| {
        let svg = p.svg.replacen(STANDALONE, "", 1);
        context! { svg, caption => p.caption }
    };
    let told = &results.told;
    environment.get_template("page.html")?.render(context! {
        style => STYLE,
        title => told.case.title,
        facts => facts(results),
        question => answer::question(results),
        answer => answer::answer(results),
        margins => rows::margins(results),
        first => pictures.iter().filter(|p| p.file == FIRST).map(shown).collect::<Vec<_>>(),
        pictures => pictures.iter().filter(|p| p.file != FIRST).map(shown).collect::<Vec<_>>(),
        paths => rows::paths(results),
        paths_note => rows::paths_note(results),
        outer => rows::outer(results),
        slots => rows::slots(results),
        vents => rows::vents(results),
        fans => rows::fans(results),
        probes => rows::probes(results),
        state => rows::state(results),
        validity => rows::validity(results),
        cautions => cautions::cautions(results),
        warnings => told.warnings,
        hash => told.case.sha256,
        case_text => results.case_text,
        version => told.ventrise,
    })
}

/// What the page begins with: names and values.
fn facts(results: &Results) -> Vec<[String; 2]> {
    let (case, told) = (&results.case, &results.told);
    let section = case.section();
    let size = match section.geometry {
        ventrise_mesh::Geometry::Planar { depth } => {
            let [w, h, d] = [section.width, section.height, depth].map(mm);
            ["Section, width × height × depth".into(), format!("{w} × {h} × {d} mm")]
        }
        ventrise_mesh::Geometry::Axisymmetric => {
            let [w, h] = [section.width, section.height].map(mm);
            ["Round section, radius × height".into(), format!("{w} × {h} mm")]
        }
    };
    let ambient = case.ambient();
    let place = match ambient.altitude {
        Some(altitude) => format!("altitude {} m", rows::number(altitude)),
        None => format!("{} hPa", fixed(ambient.pressure / 100.0, 0)),
    };
    vec![
        ["Ambient".into(), format!("{} °C, {place}", fixed(results.ambient(), 1))],
        ["Heat released".into(), format!("{} W", rounded(results.heat(), 4))],
        size,
        ["Verdict".into(), told.verdict.clone()],
    ]
}
