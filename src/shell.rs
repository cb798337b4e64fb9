//! The line editor, the commands and the batch commands: everything that prints or asks.
//!
//! A line goes from [`lines`](self) through `Shell::statement` to a command of the one list in
//! `commands`, to `Session::declare`, or to the question behind it. Results are laid out by `show`
//! as text for a `Look` (colours and width) and leave through the `Screen`.

mod arguments;
mod batch;
mod commands;
mod desk;
mod editor;
mod evidence;
mod help;
mod json;
mod layout;
mod line;
mod lines;
mod live;
mod places;
mod problem;
mod quantity;
mod question;
mod screen;
mod show;
mod signals;
mod verify;
mod words;

use arguments::Arguments;
use std::process::ExitCode;

/// Runs the program: reads the command line, does what it says, and gives the exit status.
pub fn main() -> ExitCode {
    problem::install_panic_sentence();
    let arguments = match Arguments::read() {
        Ok(arguments) => arguments,
        Err(error) => {
            let status = if error.use_stderr() { status::INPUT } else { 0 };
            // Where the help cannot be printed, nothing else can be either.
            let _ = error.print();
            return ExitCode::from(status);
        }
    };
    match std::panic::catch_unwind(|| batch::run(arguments)) {
        Ok(status) => ExitCode::from(status),
        Err(_) => ExitCode::from(status::PROGRAM),
    }
}

/// Exit statuses.
mod status {
    /// Everything is as asked or claimed.
    pub const FINE: u8 = 0;
    /// Something is not.
    pub const NOT: u8 = 1;
    /// Something is undecided.
    pub const UNDECIDED: u8 = 2;
    /// The input is at fault.
    pub const INPUT: u8 = 3;
    /// The program could not do its work.
    pub const PROGRAM: u8 = 4;
    /// Ended by Ctrl-C, as shells have it.
    pub const INTERRUPTED: u8 = 130;

    /// The one to report of two.
    pub fn worse(a: u8, b: u8) -> u8 {
        let rank = |status: u8| match status {
            FINE => 0,
            UNDECIDED => 1,
            NOT => 2,
            INPUT => 3,
            PROGRAM => 4,
            _ => 5,
        };
        if rank(a) >= rank(b) { a } else { b }
    }
}
