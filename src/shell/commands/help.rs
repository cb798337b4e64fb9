//! `help`, `help WORD`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::help;
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "help",
    group: Group::Keeping,
    forms: &[
        ("help", "all commands"),
        (
            "help WORD",
            "a command, a declaration or a topic, with an example",
        ),
    ],
    page: "Topics are questions, names and properties.",
    example: "help law\nhelp questions",
    operand: Operand::Topics,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let look = shell.look();
    let text = match line.word() {
        None => help::overview(look),
        Some((word, range)) => {
            line.end()?;
            help::page(word, look).ok_or_else(|| help::unknown(word, range, &line))?
        }
    };
    shell.out(&text);
    Ok(())
}
