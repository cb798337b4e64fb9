//! Opening and saving.

use super::file::write_atomically;
use super::library::{Found, built_in_source, is_path};
use super::runner::Runner;
use super::workers::Workers;
use super::{Library, Session};
use crate::language::{Diagnostic, decode, read_theory, set_derived, set_order};
use crate::theory::Derived;
use std::path::{Path, PathBuf};

/// What opening a theory has brought.
pub struct Opened {
    /// The session.
    pub session: Session,
    /// How many derived rules were verified and taken in.
    pub derived: usize,
    /// Derived lines that were refused, with their places; the rest was taken.
    pub refused: Vec<Diagnostic>,
    /// What is worth knowing about the text that is no fault, as sentences without full stop.
    pub notes: Vec<String>,
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
        let (source, text, path) = match library.find(name, None) {
            None if Path::new(name).is_dir() => return Err(OpenFault::Folder(name.into())),
            None => {
                let close = library.close(name);
                return Err(OpenFault::Missing {
                    name: name.to_owned(),
                    close,
                });
            }
            Some(Found::BuiltIn(name, text)) => (built_in_source(name), text.to_owned(), None),
            Some(Found::File(path)) => {
                if path.is_dir() {
                    return Err(OpenFault::Folder(path));
                }
                let source = path.display().to_string();
                let bytes =
                    std::fs::read(&path).map_err(|error| OpenFault::System(path.clone(), error))?;
                let text = decode(&source, bytes).map_err(|fault| OpenFault::Text(vec![fault]))?;
                (source, text, Some(path))
            }
        };
        let theory = read_theory(&source, &text, &library).map_err(OpenFault::Text)?;
        let mut session = Session::with(theory, path, library);
        let (derived, refused) = session.take_derived();
        Ok(Opened {
            session,
            derived,
            refused,
            notes: Vec::new(),
        })
    }

    /// Begins with a theory that is there as text and has no file of its own; `source` is what
    /// messages call it.
    pub fn read(source: &str, text: &str, library: Library) -> Result<Opened, Vec<Diagnostic>> {
        let theory = read_theory(source, text, &library)?;
        let mut session = Session::with(theory, None, library);
        let (derived, refused) = session.take_derived();
        Ok(Opened {
            session,
            derived,
            refused,
            notes: Vec::new(),
        })
    }

    /// Verifies the derived rules of the file by deriving each again, and begins with them.
    fn take_derived(&mut self) -> (usize, Vec<Diagnostic>) {
        let mut refused = self.theory.refusals();
        let (Some(setting), false) = (&self.theory.order, self.theory.derived.is_empty()) else {
            return (0, refused);
        };
        let Ok(mut runner) = Runner::new(&self.theory, setting.clone(), STATED) else {
            return (0, refused);
        };
        let mut taken = 0;
        for (rule, result) in runner.take_derived(&self.theory) {
            match result {
                Ok(()) => taken += 1,
                Err(why) => {
                    let help = "take the line out; completing again derives the rule anew";
                    refused.push(self.theory.diagnostic(rule.line, &why, help));
                }
            }
        }
        self.workers = Workers::begin_with(runner);
        (taken, refused)
    }

    /// Saves to a file, or to where the theory came from: laws, claims, order and derived rules.
    /// Atomic: the file is whole, old or new, whatever happens. Returns the path.
    pub fn save(&mut self, path: Option<&Path>) -> Result<PathBuf, SaveFault> {
        let path = match path.or(self.path.as_deref()) {
            Some(path) => path.to_owned(),
            None => return Err(SaveFault::NoPath),
        };
        self.store_derived();
        let text = self.theory.document.text();
        write_atomically(&path, |file| file.write_all(text.as_bytes()))
            .map_err(|error| SaveFault::System(path.clone(), error))?;
        self.saved_text = text;
        self.theory.source = path.display().to_string();
        self.path = Some(path.clone());
        Ok(path)
    }

    /// The path that a name typed after `save` means: a name without ending gets the usual one.
    pub fn save_path(name: &str) -> PathBuf {
        if is_path(name) {
            PathBuf::from(name)
        } else {
            PathBuf::from(format!("{name}.{}", super::library::ENDING))
        }
    }

    /// Writes the derived rules, with the order that they decrease in, into the document, if
    /// somebody has asked for them: by completing, or by saving them before.
    fn store_derived(&mut self) {
        if !self.completed && self.theory.derived.is_empty() {
            return;
        }
        let Some(runner) = self.workers.best_ref() else {
            return;
        };
        if !runner.is_current(&self.theory) || !self.workers.is_of(self.lineage) {
            return;
        }
        let setting = runner.setting.clone();
        let derived: Vec<Derived> = runner.derived(&mut self.theory.bank, &self.theory.laws);
        if self.theory.order.is_none() {
            set_order(&mut self.theory, Some(setting));
            self.workers.state_order();
        }
        set_derived(&mut self.theory, derived);
    }
}

const STATED: &str = "is the one that was stated";
