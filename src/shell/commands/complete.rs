//! `complete`, `complete within 30s`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::show;
use std::time::Duration;

/// The command.
pub const COMMAND: Command = Command {
    word: "complete",
    group: Group::Working,
    forms: &[
        ("complete", "look for a complete set of rules"),
        ("complete within 30s", "the same, for so long at most"),
    ],
    page: "Forms the critical pairs of the rules and makes rules of those that do not join, until \
           none is left. Then every equation is decided by two normal forms. Not every theory has a \
           finite complete set of rules: Ctrl-C stops, everything found is kept, and complete goes \
           on from there. budget complete 60s sets a time for good; a script that sets none stops after a minute.",
    example: "open group\ncomplete within 10s\nrules",
    operand: Operand::Words,
    run,
};

/// For how long it works in a script that does not say.
const SCRIPT: Duration = Duration::from_secs(60);

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let within = line.within()?.or(shell.session.budgets().complete);
    // Nobody is there to press Ctrl-C.
    let within = within.or((!shell.is_interactive()).then_some(SCRIPT));
    let done = shell.work(|session, control| session.complete(within, control));
    let done = done.map_err(|fault| Problem::session(fault, &shell.session.theory().signature))?;
    let text = show::completion(&done, shell.look(), show::Place::Shell);
    shell.out(&text);
    if let Some((fault, evidence)) = &done.fault {
        shell.report_fault(fault, evidence);
    }
    Ok(())
}
