//! Case files to start from: the worked examples, carried in the program.

use std::fs::OpenOptions;
use std::io::{self, Write};
use std::path::{Path, PathBuf};

/// A scenario: its name and the text of its case file.
pub type Scenario = (&'static str, &'static str);

/// All scenarios, the first being the one taken when none is asked for.
pub const SCENARIOS: [Scenario; 12] = [
    ("wall-cabinet", include_str!("../cases/wall-cabinet.toml")),
    ("battery-locker", include_str!("../cases/battery-locker.toml")),
    ("bench-supplies", include_str!("../cases/bench-supplies.toml")),
    ("dry-transformer", include_str!("../cases/dry-transformer.toml")),
    ("gateway", include_str!("../cases/gateway.toml")),
    ("mast-radio", include_str!("../cases/mast-radio.toml")),
    ("resistor-tray", include_str!("../cases/resistor-tray.toml")),
    ("roadside-box", include_str!("../cases/roadside-box.toml")),
    ("sensor-box", include_str!("../cases/sensor-box.toml")),
    ("sensor-screen", include_str!("../cases/sensor-screen.toml")),
    ("signal-case", include_str!("../cases/signal-case.toml")),
    ("telemetry-pillar", include_str!("../cases/telemetry-pillar.toml")),
];

/// Why no case file was written.
#[derive(Debug, thiserror::Error)]
pub enum NewError {
    /// No such scenario.
    #[error("there is no scenario \"{name}\"{hint}; `ventrise new --list` shows all")]
    Unknown {
        /// As asked for.
        name: String,
        /// The nearest one, as a clause.
        hint: String,
    },
    /// The file is there already.
    #[error("{file} exists already; nothing was written. Choose another name or move it away")]
    Exists {
        /// Its path.
        file: String,
    },
    /// The name is none for a file.
    #[error("\"{name}\" is no name for a case; a name such as radio or drafts/radio belongs here")]
    Name {
        /// As typed.
        name: String,
    },
    /// The file system refused.
    #[error("cannot write {file}: {source}")]
    Write {
        /// Its path.
        file: String,
        /// Why.
        source: io::Error,
    },
}

/// Name and first line of every scenario.
pub fn list() -> String {
    let mut text = String::new();
    for (name, case) in SCENARIOS {
        let shows = case.lines().next().unwrap_or_default().trim_start_matches(['#', ' ']);
        text += &format!("{name:18}{shows}\n");
    }
    text
}

/// Writes a scenario to `name`, with the ending .toml, and returns the path; never over a file.
///
/// # Errors
/// An unknown scenario, a name that is none, a file that exists, a refusal of the file system.
pub fn write(name: &Path, scenario: Option<&str>) -> Result<PathBuf, NewError> {
    let wanted = scenario.unwrap_or(SCENARIOS[0].0);
    let Some((_, text)) = SCENARIOS.iter().find(|(name, _)| *name == wanted) else {
        let likeness = |s: &&Scenario| (1000.0 * strsim::jaro_winkler(s.0, wanted)) as u32;
        let nearest = SCENARIOS.iter().max_by_key(likeness).filter(|s| likeness(s) > 700);
        let hint = nearest.map_or(String::new(), |s| format!("; the nearest is \"{}\"", s.0));
        return Err(NewError::Unknown { name: wanted.to_string(), hint });
    };
    // What ends in a separator names a folder, though its last part looks like a file.
    let typed = name.display().to_string();
    if name.file_name().is_none() || typed.ends_with(std::path::is_separator) {
        return Err(NewError::Name { name: typed });
    }
    let path = match name.extension() {
        Some(ending) if ending.eq_ignore_ascii_case("toml") => name.to_path_buf(),
        _ => PathBuf::from(format!("{}.toml", name.display())),
    };
    let file = path.display().to_string();
    let opened = OpenOptions::new().write(true).create_new(true).open(&path);
    let written = opened.and_then(|mut f| f.write_all(text.as_bytes()));
    match written {
        Ok(()) => Ok(path),
        Err(e) if e.kind() == io::ErrorKind::AlreadyExists => Err(NewError::Exists { file }),
        Err(source) => Err(NewError::Write { file, source }),
    }
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;
    use crate::case::Case;

    #[test]
    fn every_scenario_is_written_once_and_reads_back() {
        let place = tempfile::tempdir().unwrap();
        for (name, text) in SCENARIOS {
            let path = write(&place.path().join(name), Some(name)).unwrap();
            assert_eq!(path.file_name().unwrap().to_str(), Some(format!("{name}.toml").as_str()));
            assert_eq!(std::fs::read_to_string(&path).unwrap(), text);
            assert!(Case::read(&path).is_ok());
            assert!(matches!(write(&path, Some(name)), Err(NewError::Exists { .. })));
            assert!(list().contains(name));
        }
    }

    #[test]
    fn an_unknown_scenario_is_refused_with_the_nearest() {
        let place = tempfile::tempdir().unwrap();
        let error = write(&place.path().join("a"), Some("mast-radoi")).unwrap_err();
        assert!(error.to_string().contains("the nearest is \"mast-radio\""), "{error}");
        assert_eq!(std::fs::read_dir(place.path()).unwrap().count(), 0);
    }
}
