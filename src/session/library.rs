//! Where theories are found: the working folder, the user's folder, and those inside the program.

use crate::language::{Loaded, Loader, decode, nearest};
use std::path::{Path, PathBuf};

/// The ending of a theory file.
pub(super) const ENDING: &str = "theory";

macro_rules! built_in {
    ($($name:literal)*) => {
        /// The theories inside the program: name and text.
        pub(super) const BUILT_IN: &[(&str, &str)] = &[
            $(($name, include_str!(concat!("../../theories/", $name, ".theory")))),*
        ];
    };
}

built_in! {
    "abelian_group"
    "band"
    "boolean_algebra"
    "boolean_ring"
    "calibration"
    "central_groupoid"
    "combinators"
    "counter"
    "datum"
    "distributive_lattice"
    "exponent_two"
    "fibonacci_2_5"
    "filter_rules"
    "group"
    "kuratowski"
    "lattice"
    "left_regular_band"
    "list"
    "loop"
    "modular_lattice"
    "monoid"
    "natural"
    "quality_masks"
    "quandle"
    "quasigroup"
    "queue"
    "readings"
    "register"
    "ring"
    "semigroup"
    "semilattice"
    "set"
    "settings"
    "stack"
    "station_register"
    "station_settings"
    "time_windows"
    "triangle_2_3_4"
    "xor_messages"
}

/// The places, in the order in which they are looked at.
#[derive(Clone, Debug, Default)]
pub struct Library {
    /// The folder that names without a path are looked for in first.
    pub working: Option<PathBuf>,
    /// The user's theory folder.
    pub user: Option<PathBuf>,
    /// The folder in which the paths begin that files in clause syntax include; without one they
    /// are looked for beside the file and above it.
    pub clauses: Option<PathBuf>,
}

/// Which place a theory is in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Shelf {
    /// The working folder.
    Working,
    /// The user's folder.
    User,
    /// Inside the program.
    BuiltIn,
}

/// A theory that can be opened by its name.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Listed {
    /// The name to open it by.
    pub name: String,
    /// Where it is.
    pub shelf: Shelf,
    /// Its file, if it is one.
    pub path: Option<PathBuf>,
    /// The first line of its note.
    pub note: Option<String>,
}

/// A theory that was found by a name or path.
pub(super) enum Found {
    File(PathBuf),
    BuiltIn(&'static str, &'static str),
}

/// Only so much of a file is read to find its note.
const NOTE_WITHIN: u64 = 16 << 10;

impl Library {
    /// All theories, by place and name. Files that cannot be read are left out, and so are those
    /// that another of the same name hides.
    pub fn list(&self) -> Vec<Listed> {
        let mut listed: Vec<Listed> = Vec::new();
        let folders = [(Shelf::Working, &self.working), (Shelf::User, &self.user)];
        for (shelf, folder) in folders {
            for (name, path) in folder.iter().flat_map(|folder| theories_in(folder)) {
                let Some(text) = beginning(&path) else {
                    continue;
                };
                if listed.iter().all(|other| other.name != name) {
                    listed.push(Listed {
                        name,
                        shelf,
                        note: note(&text),
                        path: Some(path),
                    });
                }
            }
        }
        for (name, text) in BUILT_IN {
            if listed.iter().all(|other| other.name != *name) {
                let (name, note) = ((*name).to_owned(), note(text));
                listed.push(Listed {
                    name,
                    shelf: Shelf::BuiltIn,
                    path: None,
                    note,
                });
            }
        }
        listed
    }

    /// The theory that is meant by what was typed or written after `use`.
    ///
    /// A path is relative to `from`, the folder of the file that uses it, if there is one. A name
    /// is looked for beside that file, in the working folder, the user's folder, the program.
    pub(super) fn find(&self, name: &str, from: Option<&Path>) -> Option<Found> {
        let written = Path::new(name);
        if is_path(name) {
            let beside = from.map(|from| from.join(written));
            let mut paths = beside.into_iter().chain([written.to_owned()]);
            return paths.find(|path| path.exists()).map(Found::File);
        }
        let file = format!("{name}.{ENDING}");
        let folders = from
            .into_iter()
            .chain(self.working.as_deref())
            .chain(self.user.as_deref());
        let mut paths = folders.map(|folder| folder.join(&file));
        if let Some(path) = paths.find(|path| path.is_file()) {
            return Some(Found::File(path));
        }
        let built_in = BUILT_IN.iter().find(|(known, _)| *known == name);
        built_in.map(|(name, text)| Found::BuiltIn(name, text))
    }

    /// Names of theories that are close to one that was not found.
    pub(super) fn close(&self, name: &str) -> Vec<String> {
        let listed = self.list();
        let stem = Path::new(name)
            .file_stem()
            .and_then(|stem| stem.to_str())
            .unwrap_or(name);
        let close = nearest(stem, listed.iter().map(|theory| theory.name.as_str()));
        close.map(str::to_owned).into_iter().collect()
    }
}

/// Is this a path, and not the name of a theory?
pub(super) fn is_path(name: &str) -> bool {
    name.contains(std::path::is_separator) || Path::new(name).extension().is_some()
}

fn theories_in(folder: &Path) -> Vec<(String, PathBuf)> {
    let entries = std::fs::read_dir(folder).into_iter().flatten().flatten();
    let mut found: Vec<(String, PathBuf)> = entries
        .map(|entry| entry.path())
        .filter(|path| path.extension().is_some_and(|ending| ending == ENDING) && path.is_file())
        .filter_map(|path| Some((path.file_stem()?.to_str()?.to_owned(), path)))
        .collect();
    found.sort();
    found
}

fn beginning(path: &Path) -> Option<String> {
    use std::io::Read;
    let mut bytes = Vec::new();
    std::fs::File::open(path)
        .ok()?
        .take(NOTE_WITHIN)
        .read_to_end(&mut bytes)
        .ok()?;
    Some(String::from_utf8_lossy(&bytes).into_owned())
}

fn note(text: &str) -> Option<String> {
    let notes = text
        .lines()
        .filter_map(|line| line.trim_start().strip_prefix("note "));
    notes.map(|note| note.trim().to_owned()).next()
}

impl Loader for Library {
    fn load(&self, name: &str, from: &str) -> Result<Loaded, String> {
        let folder = Path::new(from)
            .parent()
            .filter(|_| Path::new(from).is_file());
        match self.find(name, folder) {
            None => Err(format!(
                "there is no theory {name} here, in your folder or built in"
            )),
            Some(Found::BuiltIn(name, text)) => Ok(Loaded {
                source: built_in_source(name),
                text: text.to_owned(),
            }),
            Some(Found::File(path)) => {
                let shown = path.display().to_string();
                let bytes = std::fs::read(&path).map_err(|error| format!("{shown}: {error}"))?;
                let text = decode(&shown, bytes).map_err(|fault| fault.brief())?;
                let source = path.canonicalize().unwrap_or(path).display().to_string();
                Ok(Loaded { source, text })
            }
        }
    }
}

/// What messages call a theory that is inside the program.
pub(super) fn built_in_source(name: &str) -> String {
    format!("{name} (built in)")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_file_of_the_folder_is_inside_the_program() {
        let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("theories");
        let files: Vec<String> = theories_in(&folder)
            .into_iter()
            .map(|(name, _)| name)
            .collect();
        let inside: Vec<&str> = BUILT_IN.iter().map(|(name, _)| *name).collect();
        assert_eq!(files, inside);
        assert!(files.len() >= 25);
    }

    #[test]
    fn every_theory_inside_the_program_can_be_read_and_has_a_note() {
        let library = Library::default();
        for (name, text) in BUILT_IN {
            let theory = crate::language::read_theory(name, text, &library);
            let theory = theory.unwrap_or_else(|faults| panic!("{name}: {}", faults[0].brief()));
            assert_eq!(theory.name.as_deref(), Some(*name));
            assert!(
                !theory.notes.is_empty() && theory.claims.len() >= 2,
                "{name}"
            );
        }
    }
}
