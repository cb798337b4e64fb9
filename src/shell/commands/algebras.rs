//! `algebras`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::show;

/// The command.
pub const COMMAND: Command = Command {
    word: "algebras",
    group: Group::Working,
    forms: &[("algebras", "the finite algebras that were found")],
    page: "A finite algebra in which every law holds, and in which the two sides of an equation \
           differ, shows that the equation does not follow. Every algebra that was found is kept \
           and tried first on the questions to come; a new law takes away those that break it. \
           Their elements are numbered from 0.",
    example: "open settings\nx ▷ y = y ▷ x\nalgebras",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let look = shell.look();
    let algebras = shell.session.algebras();
    if algebras.is_empty() {
        shell.out("No algebras yet. A question that does not follow brings one.\n");
    }
    for algebra in &algebras {
        shell.out(&show::known_algebra(algebra, look));
    }
    Ok(())
}
