//! A results folder read back: all that pictures and page are made from.
//!
//! A solve hands over the same texts that it writes, so a picture drawn at once and one drawn
//! again from the folder are the same.

use std::fs;
use std::path::Path;

use crate::case::Case;

use super::readings::celsius;
use super::table::Table;
use super::told::Told;
use super::vtk::{Fields, Values};
use super::vtr;

/// What a folder of results holds.
#[derive(Debug, Clone)]
pub struct Results {
    /// The case as solved.
    pub case: Case,
    /// Its text, all defaults resolved.
    pub case_text: String,
    /// The summary.
    pub told: Told,
    /// The fields.
    pub fields: Fields,
    /// `history.csv`.
    pub history: Table,
    /// `probes.csv`.
    pub probes: Table,
}

/// Why a folder cannot be read as one of results.
#[derive(Debug, thiserror::Error)]
pub enum ResultsError {
    /// No results are there.
    #[error("{folder} holds no results: {file} cannot be read ({source})")]
    Missing {
        /// The folder.
        folder: String,
        /// The file.
        file: &'static str,
        /// Why.
        source: std::io::Error,
    },
    /// A file does not hold what it should.
    #[error("{file} of the results is damaged or of another version: {reason}")]
    Damaged {
        /// The file.
        file: &'static str,
        /// What is wrong.
        reason: String,
    },
}

fn damaged(file: &'static str, reason: impl ToString) -> ResultsError {
    ResultsError::Damaged { file, reason: reason.to_string() }
}

/// The texts of a results folder.
#[derive(Debug, Clone)]
pub struct Texts<'a> {
    /// `case.toml`.
    pub case: &'a str,
    /// `summary.json`.
    pub summary: &'a str,
    /// `history.csv`.
    pub history: &'a str,
    /// `probes.csv`.
    pub probes: &'a str,
}

impl Results {
    /// Results from texts and fields.
    ///
    /// # Errors
    /// Texts that cannot be read, or that do not belong together.
    pub fn new(texts: &Texts, fields: Fields) -> Result<Results, ResultsError> {
        let case =
            Case::parse(texts.case, "case.toml").map_err(|errors| damaged("case.toml", errors))?;
        let told: Told =
            serde_json::from_str(texts.summary).map_err(|e| damaged("summary.json", e))?;
        let table = |file, text| {
            Table::parse(text).map_err(|row| damaged(file, format!("row {row} has gaps")))
        };
        let results = Results {
            history: table("history.csv", texts.history)?,
            probes: table("probes.csv", texts.probes)?,
            case_text: texts.case.to_string(),
            case,
            told,
            fields,
        };
        results.check()?;
        Ok(results)
    }

    /// Reads a results folder.
    ///
    /// # Errors
    /// Files that are missing or damaged.
    pub fn read(folder: &Path) -> Result<Results, ResultsError> {
        let missing = |file: &'static str| {
            move |source| ResultsError::Missing {
                folder: folder.display().to_string(),
                file,
                source,
            }
        };
        let text =
            |file: &'static str| fs::read_to_string(folder.join(file)).map_err(missing(file));
        let summary = text("summary.json")?;
        let [case, history, probes] =
            [text("case.toml")?, text("history.csv")?, text("probes.csv")?];
        let fields =
            vtr::read(&text("fields.vtr")?).map_err(|reason| damaged("fields.vtr", reason))?;
        let texts = Texts { case: &case, summary: &summary, history: &history, probes: &probes };
        Results::new(&texts, fields)
    }

    /// Heat that all blocks release at the result [W].
    pub fn heat(&self) -> f64 {
        let parts = self.told.parts.iter().zip(self.case.parts());
        let follows: f64 = parts.map(|(told, part)| told.heat_w - part.heat).sum();
        self.case.heat() + follows
    }

    /// Ambient temperature [°C].
    pub fn ambient(&self) -> f64 {
        celsius(self.case.ambient().temperature)
    }

    /// Cells along x and y.
    pub fn size(&self) -> [usize; 2] {
        [self.fields.x.len() - 1, self.fields.y.len() - 1]
    }

    /// Values of a field of numbers, one per cell.
    pub fn scalar(&self, name: &str) -> &[f64] {
        match self.field(name) {
            Some(Values::Scalar(values)) => values,
            _ => &[],
        }
    }

    /// Values of a field of directions, one per cell.
    pub fn vector(&self, name: &str) -> &[[f64; 2]] {
        match self.field(name) {
            Some(Values::Vector(values)) => values,
            _ => &[],
        }
    }

    /// Index of the block of every cell, −1 in air.
    pub fn blocks(&self) -> &[i32] {
        match self.field("block") {
            Some(Values::Index(values)) => values,
            _ => &[],
        }
    }

    fn field(&self, name: &str) -> Option<&Values> {
        self.fields.fields.iter().find(|f| f.name == name).map(|f| &f.values)
    }

    fn check(&self) -> Result<(), ResultsError> {
        let wrong = |reason: String| Err(damaged("fields.vtr", reason));
        for lines in [&self.fields.x, &self.fields.y] {
            if lines.len() < 2 || !lines.windows(2).all(|w| w[0] < w[1]) {
                return wrong("mesh lines do not rise".into());
            }
        }
        let section = self.case.section();
        for (lines, extent) in [(&self.fields.x, section.width), (&self.fields.y, section.height)] {
            let end = lines[lines.len() - 1];
            if (end - extent).abs() > 1e-6 * extent {
                return wrong(format!("the mesh ends at {end} m, the section at {extent} m"));
            }
        }
        let [nx, ny] = self.size();
        let cells = nx * ny;
        let whole = [
            ("temperature", self.scalar("temperature").len()),
            ("speed", self.scalar("speed").len()),
            ("velocity", self.vector("velocity").len()),
            ("heat_flux", self.vector("heat_flux").len()),
            ("block", self.blocks().len()),
        ];
        for (name, length) in whole {
            if length != cells {
                return wrong(format!("{name} has {length} values for {cells} cells"));
            }
        }
        Ok(())
    }
}
