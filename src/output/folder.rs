//! The results folder: written whole or not at all.
//!
//! Everything goes into a temporary folder beside the target, which then takes the target's name.
//! A folder that is there already is replaced only when it is empty or holds results; files in it
//! that are not results are carried over.

use std::fs;
use std::io;
use std::path::{Path, PathBuf};

use tempfile::TempDir;

/// Marks a folder as one of results.
const MARK: &str = "summary.json";
/// Files that a results folder consists of; anything else in it belongs to the user.
const OURS: [&str; 19] = [
    MARK,
    "fields.vtr",
    "revolved.vts",
    "history.csv",
    "parts.csv",
    "slots.csv",
    "sides.csv",
    "probes.csv",
    "layout.svg",
    "temperature.svg",
    "speed.svg",
    "heat-flux.svg",
    "profiles.svg",
    "history.svg",
    "margins.svg",
    "report.html",
    "case.toml",
    "state.ckpt",
    "fields.pvd",
];

/// Why a results folder cannot be written.
#[derive(Debug, thiserror::Error)]
pub enum FolderError {
    /// Something else has the name.
    #[error("{} is there and is no folder", .0.display())]
    NoFolder(PathBuf),
    /// A folder with something else in it has the name.
    #[error(
        "{} holds something other than results; choose another folder with --out",
        .0.display()
    )]
    Foreign(PathBuf),
    /// The file system refuses.
    #[error("{what} {}: {source}", .path.display())]
    Io {
        /// What was tried.
        what: &'static str,
        /// On which path.
        path: PathBuf,
        /// Why it failed.
        source: io::Error,
    },
}

/// A results folder that is being written; gone without a trace unless [`Folder::keep`] succeeds.
#[derive(Debug)]
pub struct Folder {
    target: PathBuf,
    temporary: TempDir,
}

fn failed(what: &'static str, path: &Path) -> impl FnOnce(io::Error) -> FolderError {
    let path = path.to_path_buf();
    move |source| FolderError::Io { what, path, source }
}

impl Folder {
    /// Begins a results folder that is to become `target`.
    ///
    /// # Errors
    /// A target that must not be replaced, or a place where nothing can be written.
    pub fn begin(target: &Path) -> Result<Folder, FolderError> {
        let target = match fs::canonicalize(target) {
            Ok(real) => real,
            Err(_) => std::path::absolute(target).map_err(failed("cannot resolve", target))?,
        };
        check_target(&target)?;
        let parent = existing_ancestor(&target);
        let temporary = tempfile::Builder::new()
            .prefix(".ventrise-")
            .tempdir_in(parent)
            .map_err(failed("cannot write in", parent))?;
        Ok(Folder { target, temporary })
    }

    /// Where the folder will be.
    pub fn target(&self) -> &Path {
        &self.target
    }

    /// Writes one file of it.
    ///
    /// # Errors
    /// What the file system or `fill` reports.
    pub fn write(
        &self,
        name: &str,
        fill: impl FnOnce(&mut dyn io::Write) -> io::Result<()>,
    ) -> Result<(), FolderError> {
        let path = self.temporary.path().join(name);
        let wrong = |source| failed("cannot write", &self.target.join(name))(source);
        let file = fs::File::create(&path).map_err(wrong)?;
        let mut out = io::BufWriter::with_capacity(1 << 20, file);
        fill(&mut out).map_err(wrong)?;
        let file = out.into_inner().map_err(|e| wrong(e.into_error()))?;
        file.sync_all().map_err(wrong)
    }

    /// Gives the folder its name, in place of an older one.
    ///
    /// # Errors
    /// What the file system reports; the older folder is then back in its place.
    pub fn keep(self) -> Result<(), FolderError> {
        let Folder { target, temporary } = self;
        check_target(&target)?;
        share(temporary.path()).map_err(failed("cannot set the rights of", &target))?;
        let parents = MadeParents::of(&target)?;
        let beside = |name: &str| {
            let stem = temporary.path().file_name().unwrap_or_default().to_string_lossy();
            existing_ancestor(&target).join(format!("{stem}{name}"))
        };
        let older = target.exists().then(|| beside("-older"));
        if let Some(older) = &older {
            fs::rename(&target, older).map_err(failed("cannot replace", &target))?;
        }
        if let Err(source) = fs::rename(temporary.path(), &target) {
            if let Some(older) = &older {
                fs::rename(older, &target).map_err(failed("cannot put back", &target))?;
            }
            return Err(failed("cannot write", &target)(source));
        }
        // The folder has its own name now; nothing of the temporary one is left to remove.
        let _ = temporary.keep();
        parents.keep();
        match older {
            Some(older) => retire(&older, &target).map_err(failed("cannot remove", &older)),
            None => Ok(()),
        }
    }
}

/// Writes one file whole or not at all, in place of an older one.
///
/// # Errors
/// What the file system reports.
pub fn write_whole(target: &Path, text: &str) -> io::Result<()> {
    let parent = match target.parent() {
        Some(parent) if parent != Path::new("") => parent,
        _ => Path::new("."),
    };
    // The rights of any new file, or those of the file that is replaced.
    let rights = fs::metadata(target).ok().map(|m| m.permissions());
    let place = tempfile::Builder::new().prefix(".ventrise-").tempdir_in(parent)?;
    let temporary = place.path().join("file");
    let mut file = fs::File::create(&temporary)?;
    io::Write::write_all(&mut file, text.as_bytes())?;
    file.sync_all()?;
    drop(file);
    if let Some(rights) = rights {
        fs::set_permissions(&temporary, rights)?;
    }
    fs::rename(&temporary, target)
}

/// Temporary folders are private; results get the rights of any new folder.
fn share(path: &Path) -> io::Result<()> {
    let probe = path.join("rights");
    fs::create_dir(&probe)?;
    let rights = fs::metadata(&probe)?.permissions();
    fs::remove_dir(&probe)?;
    fs::set_permissions(path, rights)
}

/// Refuses targets that are no folders or lie below none, and folders of something else.
fn check_target(target: &Path) -> Result<(), FolderError> {
    if let Some(above) = target.ancestors().skip(1).find(|a| a.exists())
        && !above.is_dir()
    {
        return Err(FolderError::NoFolder(above.into()));
    }
    if !target.exists() {
        return Ok(());
    }
    if !target.is_dir() {
        return Err(FolderError::NoFolder(target.into()));
    }
    let mut entries = fs::read_dir(target).map_err(failed("cannot read", target))?;
    if entries.next().is_some() && !target.join(MARK).is_file() {
        return Err(FolderError::Foreign(target.into()));
    }
    Ok(())
}

fn existing_ancestor(target: &Path) -> &Path {
    target.ancestors().skip(1).find(|a| a.is_dir()).unwrap_or(Path::new("/"))
}

/// Parents made for a target; removed again unless kept.
struct MadeParents(Vec<PathBuf>);

impl MadeParents {
    fn of(target: &Path) -> Result<MadeParents, FolderError> {
        let missing: Vec<&Path> = target.ancestors().skip(1).take_while(|a| !a.exists()).collect();
        let mut made = MadeParents(Vec::new());
        for parent in missing.into_iter().rev() {
            fs::create_dir(parent).map_err(failed("cannot make", parent))?;
            made.0.push(parent.into());
        }
        Ok(made)
    }

    fn keep(mut self) {
        self.0.clear();
    }
}

impl Drop for MadeParents {
    fn drop(&mut self) {
        for parent in self.0.iter().rev() {
            // Best effort: what cannot be removed is an empty folder.
            let _ = fs::remove_dir(parent);
        }
    }
}

/// Moves what is not results from the older folder to the new one and removes the older one.
fn retire(older: &Path, target: &Path) -> io::Result<()> {
    for entry in fs::read_dir(older)? {
        let name = entry?.file_name();
        if !OURS.iter().any(|ours| name == *ours) {
            fs::rename(older.join(&name), target.join(&name))?;
        }
    }
    fs::remove_dir_all(older)
}

#[cfg(test)]
#[allow(clippy::unwrap_used)]
mod tests {
    use super::*;

    fn write_to(target: &Path, text: &str) -> Result<(), FolderError> {
        let folder = Folder::begin(target)?;
        folder.write(MARK, |out| out.write_all(text.as_bytes()))?;
        folder.keep()
    }

    fn names(folder: &Path) -> Vec<String> {
        let entries = fs::read_dir(folder).unwrap();
        let mut names: Vec<String> =
            entries.map(|e| e.unwrap().file_name().into_string().unwrap()).collect();
        names.sort();
        names
    }

    #[test]
    fn a_new_folder_appears_with_its_parents_and_nothing_else() {
        let place = tempfile::tempdir().unwrap();
        write_to(&place.path().join("a/b/c"), "1").unwrap();
        assert_eq!(names(place.path()), ["a"]);
        assert_eq!(names(&place.path().join("a/b")), ["c"]);
        assert_eq!(names(&place.path().join("a/b/c")), [MARK]);
    }

    #[test]
    fn older_results_are_replaced_and_the_users_own_files_stay() {
        let place = tempfile::tempdir().unwrap();
        let target = place.path().join("x.results");
        write_to(&target, "1").unwrap();
        fs::write(target.join("notes.txt"), "mine").unwrap();
        fs::write(target.join("report.html"), "stale").unwrap();
        write_to(&target, "2").unwrap();
        assert_eq!(names(place.path()), ["x.results"]);
        assert_eq!(names(&target), ["notes.txt", MARK]);
        assert_eq!(fs::read_to_string(target.join(MARK)).unwrap(), "2");
    }

    #[test]
    fn a_folder_of_something_else_is_left_alone() {
        let place = tempfile::tempdir().unwrap();
        fs::write(place.path().join("thesis.txt"), "years of work").unwrap();
        let error = write_to(place.path(), "1").unwrap_err();
        assert!(matches!(error, FolderError::Foreign(_)), "{error}");
        for target in ["thesis.txt", "thesis.txt/results"] {
            let error = write_to(&place.path().join(target), "1").unwrap_err();
            assert!(matches!(error, FolderError::NoFolder(_)), "{error}");
        }
        assert_eq!(names(place.path()), ["thesis.txt"]);
    }

    #[test]
    fn a_failure_while_writing_leaves_nothing_new() {
        let place = tempfile::tempdir().unwrap();
        let target = place.path().join("x.results");
        write_to(&target, "1").unwrap();
        let folder = Folder::begin(&target).unwrap();
        let full = |_: &mut dyn io::Write| Err(io::Error::other("no room"));
        assert!(folder.write("fields.vtr", full).is_err());
        drop(folder);
        assert_eq!(names(place.path()), ["x.results"]);
        assert_eq!(fs::read_to_string(target.join(MARK)).unwrap(), "1");
    }

    #[test]
    fn a_single_file_is_replaced_whole() {
        let place = tempfile::tempdir().unwrap();
        let file = place.path().join("x.svg");
        for text in ["first", "second"] {
            write_whole(&file, text).unwrap();
            assert_eq!(fs::read_to_string(&file).unwrap(), text);
        }
        fs::create_dir(place.path().join("folder.svg")).unwrap();
        assert!(write_whole(&place.path().join("folder.svg"), "x").is_err());
        assert_eq!(names(place.path()), ["folder.svg", "x.svg"]);
    }

    #[test]
    fn an_empty_folder_can_be_the_target() {
        let place = tempfile::tempdir().unwrap();
        let target = place.path().join("empty");
        fs::create_dir(&target).unwrap();
        write_to(&target, "1").unwrap();
        assert_eq!(names(&target), [MARK]);
    }
}
