//! From text to a checked case.

use std::io::Read;
use std::path::Path;

use sha2::{Digest, Sha256};
use toml::de::DeTable;

use super::blocks::read_blocks;
use super::edge::{read_probes, read_sides, read_slots};
use super::error::{CaseError, CaseErrors, Cause};
use super::fans::read_fans;
use super::joints::read_joints;
use super::model::{Case, Origin};
use super::parse::{Reader, Scope};
use super::tables::{
    mesh_keys, read_air, read_ambient, read_materials, read_mesh, read_section, read_solve,
};
use super::vocabulary::TOP;
use super::{check, doubts, fans};

/// Most bytes of a case file: ten times what the largest number of blocks takes.
const LARGEST_FILE: usize = 10_000_000;

impl Case {
    /// Reads and checks a case file.
    ///
    /// # Errors
    /// A file that cannot be read; every mistake in it.
    pub fn read(path: &Path) -> Result<Case, CaseErrors> {
        let file = path.display().to_string();
        let failed = |message: String| {
            let error = CaseError::new(Cause::File, "", message);
            Err(CaseErrors::new(&file, "", vec![error]))
        };
        match read_at_most(path, LARGEST_FILE + 1) {
            Err(error) => failed(format!("the file cannot be read ({error})")),
            Ok(bytes) if bytes.len() > LARGEST_FILE => failed(format!(
                "the file is larger than {} MB, the most a case file may have",
                LARGEST_FILE / 1_000_000
            )),
            Ok(bytes) => match String::from_utf8(bytes) {
                Ok(text) => Case::parse(&text, &file),
                Err(error) => {
                    let at = error.utf8_error().valid_up_to();
                    let line = error.as_bytes().iter().take(at).filter(|b| **b == b'\n').count();
                    failed(format!("line {} is not UTF-8 text", line + 1))
                }
            },
        }
    }

    /// Checks the text of a case; `file` is the name shown in messages.
    ///
    /// # Errors
    /// Every mistake in the text.
    pub fn parse(text: &str, file: &str) -> Result<Case, CaseErrors> {
        let mut reader = Reader::new(text);
        let (document, syntax) = DeTable::parse_recoverable(text);
        let mut syntax_errors: Vec<CaseError> = Vec::new();
        for e in &syntax {
            let error = CaseError::new(Cause::Syntax, "", syntax_message(e.message()));
            syntax_errors.push(match e.span() {
                Some(span) => error.at(span),
                None => error,
            });
        }
        let top = Scope::new(document.get_ref(), 0..0, "");
        let case = read_case(&mut reader, &top, text, file);
        if !syntax_errors.is_empty() {
            syntax_errors.extend(sure_despite(text, &syntax_errors, reader.errors));
            return Err(CaseErrors::new(file, text, syntax_errors));
        }
        match case {
            Some(mut case) if reader.errors.is_empty() => {
                reader.warnings.sort_by_key(|w| w.span().map_or(usize::MAX, |s| s.start));
                case.origin.warnings = reader.warnings;
                Ok(case)
            }
            _ => Err(CaseErrors::new(file, text, reader.errors)),
        }
    }

    /// What is allowed but looks doubtful, one sentence each, with its line where it has one.
    pub fn warnings(&self) -> Vec<String> {
        let line = |w: &CaseError| {
            w.span().map(|s| {
                let before = self.origin.text.get(..s.start).unwrap_or("");
                1 + before.matches('\n').count()
            })
        };
        let mut warnings: Vec<String> = self
            .origin
            .warnings
            .iter()
            .map(|w| match line(w) {
                Some(line) => format!("line {line}: {}", w.message()),
                None => w.message(),
            })
            .collect();
        warnings.extend(doubts::doubts(self));
        warnings
    }
}

/// Reads a file, or its beginning when it is longer.
fn read_at_most(path: &Path, most: usize) -> std::io::Result<Vec<u8>> {
    let mut bytes = Vec::new();
    std::fs::File::open(path)?.take(most as u64).read_to_end(&mut bytes)?;
    Ok(bytes)
}

fn read_case(reader: &mut Reader, top: &Scope, text: &str, file: &str) -> Option<Case> {
    reader.check_keys(top, &TOP);
    let title = reader.text(top, "title").map_or_else(|| stem(file), |t| t.value);
    let section = read_section(reader, top);
    let ambient = read_ambient(reader, top);
    let air = read_air(reader, top, ambient.as_ref());
    let own = read_materials(reader, top);
    let drafts = read_blocks(reader, top, ambient.as_ref());
    let slots = read_slots(reader, top);
    let fans = read_fans(reader, top);
    fans::place(reader, &fans, &slots);
    let sides = read_sides(reader, top, section.as_ref(), ambient.as_ref(), &own);
    let probes = read_probes(reader, top);
    let mesh = read_mesh(reader, top, section.as_ref());
    let solve = read_solve(reader, top);

    let bodies = check::assemble(reader, section.as_ref(), own, &drafts);
    let names: Vec<_> = drafts.iter().map(|d| d.name.as_ref().map(|n| n.value.clone())).collect();
    let joints = read_joints(reader, top, &names, &bodies.blocks, &bodies.parts);
    if let Some(section) = &section {
        check::slots(reader, section, &slots, &bodies.blocks, sides.as_ref());
        check::probes(reader, section, &probes);
        if let Some(sides) = &sides {
            check::way_out(reader, top, section, sides, &slots, &bodies.blocks);
        }
    }
    let sides = sides?;
    let fans: Vec<_> = fans.into_iter().filter_map(|f| f.fan).collect();
    let mut case = Case {
        title,
        section: section?,
        ambient: ambient?,
        air: air?,
        materials: bodies.materials,
        blocks: bodies.blocks.into_iter().map(|b| b.block).collect(),
        parts: bodies.parts,
        joints,
        slots: slots.into_iter().filter_map(|s| s.finish(&fans)).collect(),
        fans,
        sides: sides.conditions,
        side_emissivities: sides.emissivities,
        outer_sides: sides.outer,
        probes: probes.into_iter().filter_map(|p| p.finish()).collect(),
        mesh: mesh?,
        solve: solve?,
        origin: Origin {
            file: file.to_string(),
            text: text.to_string(),
            sha256: hexadecimal(&Sha256::digest(text.as_bytes())),
            warnings: Vec::new(),
            mesh_keys: mesh_keys(top),
        },
    };
    if reader.errors.is_empty() {
        check::join_edges(&mut case);
        check::emissivities(reader, &case, &drafts);
    }
    Some(case)
}

/// Of the mistakes found in a text that is not TOML throughout, those that concern a single value
/// on a line that was read well.
fn sure_despite(text: &str, syntax: &[CaseError], found: Vec<CaseError>) -> Vec<CaseError> {
    let line = |e: &CaseError| {
        let before = text.get(..e.span()?.start)?;
        Some(before.matches('\n').count())
    };
    let broken: Vec<Option<usize>> = syntax.iter().map(line).collect();
    let single = |e: &CaseError| {
        matches!(e.cause(), Cause::Unit | Cause::Dimension | Cause::Range)
            && !broken.contains(&line(e))
    };
    found.into_iter().filter(single).collect()
}

fn stem(file: &str) -> String {
    Path::new(file).file_stem().map_or("case".into(), |s| s.to_string_lossy().into_owned())
}

fn hexadecimal(bytes: &[u8]) -> String {
    bytes.iter().map(|b| format!("{b:02x}")).collect()
}

/// The TOML reader's message on one line.
fn syntax_message(message: &str) -> String {
    let line = message.split_whitespace().collect::<Vec<_>>().join(" ");
    format!("this is not TOML: {line}")
}
