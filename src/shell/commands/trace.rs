//! `trace T`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::layout::Breaker;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::{question, show};

/// The command.
pub const COMMAND: Command = Command {
    word: "trace",
    group: Group::Asking,
    forms: &[("trace T", "the normal form of a term, step by step")],
    page: "Each line is the term after one more step, with the law or rule that was used and the \
           place of the part that changed: at 2.1 is the first argument of the second argument. \
           why 7 tells where rule 7 comes from.",
    example: "open group\ntrace i(e) * (e * x)",
    operand: Operand::Terms,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    let term = question::read_term(shell, line, "trace")?;
    let lines = shell.work(|session, control| session.trace(term, control));
    let theory = shell.session.theory();
    let lines = lines.map_err(|fault| Problem::session(fault, &theory.signature))?;
    let mut text = show::chain(&lines, shell.look(), Breaker::new(&theory.signature));
    if lines.len() == 1 {
        text += "    no rule applies: this is a normal form\n";
    }
    shell.out(&text);
    Ok(())
}
