//! The platform's places for the history and the user's theories.

use crate::exchange;
use crate::session::{Library, OpenFault, Opened, Session};
use directories::ProjectDirs;
use std::path::{Path, PathBuf};

fn folders() -> Option<ProjectDirs> {
    ProjectDirs::from("", "", "equable")
}

/// The file that keeps what was typed.
pub fn history() -> Option<PathBuf> {
    let folders = folders()?;
    let folder = folders
        .state_dir()
        .unwrap_or_else(|| folders.data_local_dir());
    Some(folder.join("history"))
}

/// The environment variable that names the folder in which included paths begin.
const CLAUSES: &str = "EQUABLE_LIBRARY";

/// Where theories are looked for; `clauses` is the folder in which the paths begin that files in
/// clause syntax include, or else the environment names it.
pub fn library(clauses: Option<&Path>) -> Library {
    let named = || {
        let folder = std::env::var_os(CLAUSES).filter(|folder| !folder.is_empty());
        folder.map(PathBuf::from)
    };
    Library {
        working: std::env::current_dir().ok(),
        user: folders().map(|folders| folders.data_dir().join("theories")),
        clauses: clauses.map(Path::to_owned).or_else(named),
    }
}

/// Opens a theory by name or path: a file in clause syntax is imported.
pub fn open(name: &str, library: Library) -> Result<Opened, OpenFault> {
    let path = Path::new(name);
    if exchange::is_clauses(path) {
        exchange::open(path, library)
    } else {
        Session::open(name, library)
    }
}
