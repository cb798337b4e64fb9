//! `check`, `check within 30s`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::show;

/// The command.
pub const COMMAND: Command = Command {
    word: "check",
    group: Group::Working,
    forms: &[
        ("check", "verify every claim"),
        ("check within 30s", "the same, each for so long at most"),
    ],
    page: "Asks every claim of the theory and says whether it is as claimed. Each has the time that \
           budget check gives, 10 s at first. proof N shows the proof of one; the answers are \
           numbered as they come.",
    example: "open group\ncheck within 5s",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let within = line.within()?.unwrap_or(shell.session.budgets().check);
    let claims = shell.session.theory().claims.len();
    if claims == 0 {
        shell.out("There are no claims. State one, such as claim x * e = x.\n");
        return Ok(());
    }
    let results = shell.work(|session, control| session.check(within, control, &mut |_| {}));
    let results =
        results.map_err(|fault| Problem::session(fault, &shell.session.theory().signature))?;
    let mut text = show::claims(&results, &shell.session, shell.look(), None);
    text += &show::claims_summary(&results, shell.look());
    text += &show::claims_left(results.len(), claims, shell.look());
    shell.out(&text);
    for (fault, evidence) in results
        .iter()
        .filter_map(|result| result.answer.fault.as_ref())
    {
        shell.report_fault(fault, evidence);
    }
    Ok(())
}
