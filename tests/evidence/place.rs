//! The program in a folder of its own, and the theories by path.

use std::path::{Path, PathBuf};
use std::process::Command;
use tempfile::TempDir;

pub struct Place(TempDir);

pub struct Ran {
    pub status: i32,
    pub out: String,
    pub err: String,
}

impl Place {
    pub fn new() -> Place {
        Place(tempfile::tempdir().expect("a temporary folder"))
    }

    pub fn path(&self, name: &str) -> PathBuf {
        self.0.path().join(name)
    }

    /// Writes a file; gives its name.
    pub fn file(&self, name: &str, text: impl AsRef<[u8]>) -> String {
        std::fs::write(self.path(name), text).expect("the file can be written");
        name.to_owned()
    }

    /// The names of the files in a folder, in order, with the folder.
    pub fn files(&self, folder: &str) -> Vec<String> {
        let entries = std::fs::read_dir(self.path(folder)).expect("the folder");
        let name = |entry: std::fs::DirEntry| entry.file_name().into_string().expect("UTF-8");
        let mut names: Vec<String> = entries
            .map(|entry| name(entry.expect("an entry")))
            .collect();
        names.sort();
        names
            .iter()
            .map(|name| format!("{folder}/{name}"))
            .collect()
    }

    pub fn command(&self) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_equable"));
        command
            .current_dir(self.0.path())
            .env_clear()
            .env("HOME", self.0.path());
        command
    }

    pub fn run<S: AsRef<std::ffi::OsStr>>(&self, arguments: &[S]) -> Ran {
        ran(self.command().args(arguments))
    }
}

pub fn ran(command: &mut Command) -> Ran {
    let output = command.output().expect("the program starts");
    Ran {
        status: output.status.code().unwrap_or(-1),
        out: String::from_utf8(output.stdout).expect("UTF-8"),
        err: String::from_utf8(output.stderr).expect("UTF-8"),
    }
}

/// The path of a theory of the folder `theories`.
pub fn theory(name: &str) -> String {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("theories");
    folder.join(format!("{name}.theory")).display().to_string()
}
