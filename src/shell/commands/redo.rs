//! `redo`

use super::{Command, Group, Operand};
use crate::language::Fault;
use crate::shell::desk::Shell;
use crate::shell::layout::fold_hanging;
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "redo",
    group: Group::Working,
    forms: &[("redo", "bring back what undo took back")],
    page: "Works until something else is changed.",
    example: "constant a\nundo\nredo",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let Some(change) = shell.session.redo() else {
        let fault = Fault::new(line.at - 4..line.at, "there is nothing to bring back")
            .help("redo brings back what undo has taken back, until something else is changed");
        return Err(line.problem(fault));
    };
    let text = fold_hanging(
        &format!("brought back: {}", change.line.trim()),
        shell.look().width,
        0,
        4,
    );
    shell.out(&text);
    Ok(())
}
