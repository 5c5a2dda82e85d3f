//! What the mesh refuses, said in the words and at the keys of the case.

use std::fmt::Write as _;

use ventrise_mesh::{CELL_LIMIT, MeshError};

use super::error::{CaseError, CaseErrors, Cause};
use super::model::Case;
use super::units::rounded;

/// Keys that decide how many cells a graded mesh gets, the mightiest first.
const SIZES: [&str; 4] = ["wall", "cell", "across", "growth"];

impl Case {
    /// The mesh's refusal as a mistake of the case.
    pub fn refused_mesh(&self, refusal: &MeshError) -> CaseErrors {
        let error = match refusal {
            MeshError::TooFew { axis, cells, segments } => self.too_few(*axis, *cells, *segments),
            MeshError::TooMany { needed, .. } => self.too_many(*needed),
            other => CaseError::new(Cause::Range, "mesh", other.to_string()),
        };
        self.refused(error)
    }

    /// A mesh that needs more memory [bytes] than there is.
    pub fn refused_memory(&self, cells: usize, needed: f64, available: f64) -> CaseErrors {
        let [needed, available] = [needed, available].map(|bytes| rounded(bytes / 1e9, 2));
        let message = format!(
            "{}a mesh of {cells} cells needs about {needed} GB of memory to be solved, and this \
             machine has {available} GB left",
            self.written(&["cells", "cell", "wall", "across"])
        );
        let hint = match self.mesh.cells {
            Some(_) => "ask for fewer cells, or solve on a machine with more memory",
            None => {
                "choose a larger cell and wall or a smaller across, or solve on a machine with \
                 more memory"
            }
        };
        let error = CaseError::new(Cause::Range, "mesh", message).hint(hint);
        self.refused(self.at_key(error, &["cells", "cell", "wall", "across"]))
    }

    fn too_few(&self, axis: char, cells: usize, pieces: usize) -> CaseError {
        let message = format!(
            "{}{cells} {} along {axis} cannot be: the edges of blocks, slots and line probes cut \
             the section into {pieces} pieces along {axis}, and every piece needs a cell",
            self.written(&["cells"]),
            if cells == 1 { "cell" } else { "cells" },
        );
        let error = CaseError::new(Cause::Range, "mesh", message);
        self.at_key(error, &["cells"]).hint(format!(
            "ask for at least {pieces} cells along {axis}, or leave cells out for a graded mesh"
        ))
    }

    fn too_many(&self, needed: usize) -> CaseError {
        let message = format!(
            "{}the mesh would need about {} cells, more than the {} million possible",
            self.written(&SIZES),
            rounded(needed as f64, 2),
            CELL_LIMIT / 1_000_000
        );
        let error = CaseError::new(Cause::Range, "mesh", message);
        self.at_key(error, &SIZES).hint(if self.origin.mesh_keys.is_empty() {
            "write [mesh] with a larger cell and wall or a smaller across, and close or leave out \
             what is very thin"
        } else {
            "choose a larger cell and wall or a smaller across"
        })
    }

    /// The keys as typed, as the beginning of a sentence: `cell = "1 um", across = 8: `.
    fn written(&self, keys: &[&str]) -> String {
        let mut text = String::new();
        for key in keys {
            let Some((_, span)) = self.origin.mesh_keys.iter().find(|(k, _)| k == key) else {
                continue;
            };
            let value = self.origin.text.get(span.clone()).unwrap_or("");
            let joint = if text.is_empty() { "" } else { ", " };
            let added = write!(text, "{joint}{key} = {value}");
            debug_assert!(added.is_ok());
        }
        if text.is_empty() { text } else { text + ": " }
    }

    /// The error at the first of the keys that is written.
    fn at_key(&self, error: CaseError, keys: &[&str]) -> CaseError {
        let given = &self.origin.mesh_keys;
        match keys.iter().find_map(|key| given.iter().find(|(k, _)| k == key)) {
            Some((_, span)) => error.at(span.clone()),
            None => error,
        }
    }

    fn refused(&self, error: CaseError) -> CaseErrors {
        CaseErrors::new(&self.origin.file, &self.origin.text, vec![error])
    }
}
