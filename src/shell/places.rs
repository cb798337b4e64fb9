//! The platform's places for the history and the user's theories.

use crate::session::Library;
use directories::ProjectDirs;
use std::path::PathBuf;

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

/// Where theories are looked for.
pub fn library() -> Library {
    Library {
        working: std::env::current_dir().ok(),
        user: folders().map(|folders| folders.data_dir().join("theories")),
    }
}
