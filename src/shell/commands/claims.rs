//! `claims`

use super::{Command, Group, Operand};
use crate::language::quote_law;
use crate::shell::desk::Shell;
use crate::shell::layout::table;
use crate::shell::line::Line;
use crate::shell::problem::Problem;

/// The command.
pub const COMMAND: Command = Command {
    word: "claims",
    group: Group::Working,
    forms: &[("claims", "what should, or should not, follow")],
    page: "In the order in which they were stated, with their names if they have one. check \
           verifies them.",
    example: "open group\nclaims",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let row = |claim: crate::session::ClaimView| {
        let name = claim.name.as_deref().map(quote_law);
        vec![name.unwrap_or_default(), claim.text]
    };
    let rows: Vec<Vec<String>> = shell.session.claims().into_iter().map(row).collect();
    if rows.is_empty() {
        shell.out("No claims yet. State one, such as claim x * e = x.\n");
    } else {
        let text = table(&rows, shell.look());
        shell.out(&text);
    }
    Ok(())
}
