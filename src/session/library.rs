//! Where theories are found: the working folder, the user's folder, and those inside the program.

use crate::language::{Loaded, Loader};
use std::path::PathBuf;

/// The places, in the order in which they are looked at.
#[derive(Clone, Debug, Default)]
pub struct Library {
    /// The folder that names without a path are looked for in first.
    pub working: Option<PathBuf>,
    /// The user's theory folder.
    pub user: Option<PathBuf>,
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

impl Library {
    /// All theories, by place and name. Files that cannot be read are left out.
    pub fn list(&self) -> Vec<Listed> {
        todo!()
    }
}

impl Loader for Library {
    fn load(&self, name: &str, from: &str) -> Result<Loaded, String> {
        let _ = (name, from);
        todo!()
    }
}
