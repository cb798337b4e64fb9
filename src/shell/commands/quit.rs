//! `quit`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "quit",
    group: Group::Keeping,
    forms: &[("quit", "leave the shell; so does Ctrl-D")],
    page: "If the theory has changes that are not saved, you are asked first.",
    example: "quit",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    if shell.may_put_away() {
        shell.leaving = true;
    }
    Ok(())
}
