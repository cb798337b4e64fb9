//! `order`; with something behind it, it is a declaration.

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::layout::{fold, fold_hanging};
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "order",
    group: Group::Working,
    forms: &[
        ("order", "the reduction order in use"),
        ("order auto", "leave the choice to the program"),
        (
            "order lpo i, *, e",
            "lexicographic path order, greatest symbol first",
        ),
        (
            "order kbo i, *, e; weights i 0, * 1; variables 1",
            "Knuth-Bendix order with weights",
        ),
    ],
    page: "The order says which side of an equation is the larger one, so that rules make terms \
           smaller. Symbols that are not named come after the named ones, as they were declared; a \
           weight is 1 unless stated. Left to itself the program tries several orders and keeps the \
           one that completes. Changing the order starts the rules afresh.",
    example: "open group\norder lpo i, *, e\norder\norder auto",
    operand: Operand::Terms,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let status = shell.session.status();
    let width = shell.look().width;
    let mut text = fold_hanging(&status.order, width, 0, 4);
    text += &fold(
        match (status.order_stated, status.order == "order auto") {
            (true, _) => "stated in the theory",
            (false, true) => "chosen by the program, as soon as something is asked or completed",
            (false, false) => "chosen by the program",
        },
        width,
        4,
    );
    shell.out(&text);
    Ok(())
}
