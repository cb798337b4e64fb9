//! Opening and saving.

use super::{Library, Session};
use crate::language::Diagnostic;
use std::path::{Path, PathBuf};

/// What opening a theory has brought.
pub struct Opened {
    /// The session.
    pub session: Session,
    /// How many derived rules were verified and taken in.
    pub derived: usize,
    /// Derived lines that were refused, with their places; the rest was taken.
    pub refused: Vec<Diagnostic>,
}

/// Why a theory was not opened.
#[derive(Debug)]
pub enum OpenFault {
    /// There is no file or theory of this name; with the names that are close.
    Missing {
        /// What was asked for.
        name: String,
        /// Theories of a similar name.
        close: Vec<String>,
    },
    /// It is a folder.
    Folder(PathBuf),
    /// The system does not let it be read.
    System(PathBuf, std::io::Error),
    /// The text is at fault.
    Text(Vec<Diagnostic>),
}

/// Why a theory was not saved. What was there before is untouched.
#[derive(Debug)]
pub enum SaveFault {
    /// There is no file to save to: the theory was never saved, or came from inside the program.
    NoPath,
    /// The system does not let it be written.
    System(PathBuf, std::io::Error),
}

impl Session {
    /// Opens a theory by name, or by path if `name` has a separator or an ending.
    pub fn open(name: &str, library: Library) -> Result<Opened, OpenFault> {
        let _ = (name, library);
        todo!()
    }

    /// Saves to a file, or to where the theory came from: laws, claims, order and derived rules.
    /// Atomic: the file is whole, old or new, whatever happens. Returns the path.
    pub fn save(&mut self, path: Option<&Path>) -> Result<PathBuf, SaveFault> {
        let _ = path;
        todo!()
    }
}
