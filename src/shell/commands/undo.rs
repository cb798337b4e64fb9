//! `undo`

use super::{Command, Group, Operand};
use crate::language::Fault;
use crate::shell::desk::Shell;
use crate::shell::layout::fold_hanging;
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "undo",
    group: Group::Working,
    forms: &[("undo", "take back the last change")],
    page: "Takes back declarations, drops and changes of budgets, the last one first. redo brings them back.",
    example: "constant a\nundo\nredo",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let Some(change) = shell.session.undo() else {
        let fault = Fault::new(line.at - 4..line.at, "there is no change to take back")
            .help("changes are declarations, drop and budget");
        return Err(line.problem(fault));
    };
    let text = fold_hanging(
        &format!("taken back: {}", change.line.trim()),
        shell.look().width,
        0,
        4,
    );
    shell.out(&text);
    Ok(())
}
