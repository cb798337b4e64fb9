//! The program in a folder of its own.

use std::io::Write;
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};
use tempfile::TempDir;

/// A folder that the program runs in and that is also its home.
pub struct Place {
    folder: TempDir,
}

/// What a run gave.
pub struct Ran {
    pub status: i32,
    pub out: String,
    pub err: String,
}

impl Place {
    pub fn new() -> Place {
        Place {
            folder: tempfile::tempdir().expect("a temporary folder"),
        }
    }

    pub fn path(&self) -> &Path {
        self.folder.path()
    }

    /// Writes a file; gives its path.
    pub fn file(&self, name: &str, text: impl AsRef<[u8]>) -> PathBuf {
        let path = self.folder.path().join(name);
        std::fs::write(&path, text).expect("the file can be written");
        path
    }

    /// The program with these arguments, not yet started.
    pub fn command(&self, arguments: &[&str]) -> Command {
        let mut command = Command::new(env!("CARGO_BIN_EXE_equable"));
        command
            .args(arguments)
            .current_dir(self.folder.path())
            .env_clear()
            .env("HOME", self.folder.path())
            .env("TERM", "xterm-256color");
        command
    }

    /// Runs the program to its end with this input.
    pub fn run(&self, arguments: &[&str], input: impl AsRef<[u8]>) -> Ran {
        finish(self.command(arguments), input.as_ref())
    }
}

/// Runs a command to its end with this input.
pub fn finish(mut command: Command, input: &[u8]) -> Ran {
    let mut child = command
        .stdin(Stdio::piped())
        .stdout(Stdio::piped())
        .stderr(Stdio::piped())
        .spawn()
        .expect("the program starts");
    let mut stdin = child.stdin.take().expect("a pipe");
    let input = input.to_vec();
    // The program may end before it has read everything.
    let writer = std::thread::spawn(move || drop(stdin.write_all(&input)));
    let Output {
        status,
        stdout,
        stderr,
    } = child.wait_with_output().expect("the program ends");
    writer.join().expect("the input was written");
    Ran {
        status: status.code().unwrap_or(-1),
        out: String::from_utf8(stdout).expect("UTF-8"),
        err: String::from_utf8(stderr).expect("UTF-8"),
    }
}

/// Laws of groups, with claims.
pub const GROUP: &str = "\
theory group
infix * 40 left
function i 1
constant e
variable x y z
law left-unit: e * x = x
law left-inverse: i(x) * x = e
law assoc: (x * y) * z = x * (y * z)
claim flip: i(x * y) = i(y) * i(x)
claim x * y != y * x
";

/// A band with a one-sided inverse: the rules do not come to an end, and as the inverse is
/// two-sided in every finite algebra, none tells the two sides of the claim apart.
pub const OPEN: &str = "\
theory unsettled
infix * 40 left
function f 1
function g 1
variable x y z
law assoc: (x * y) * z = x * (y * z)
law again: x * x = x
law back: g(f(x)) = x
claim onto: f(g(x)) != x
";
