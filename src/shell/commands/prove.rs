//! `prove s = t within 60s`

use super::{Command, Group, Operand};
use crate::language::{Fault, Question};
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::question;
use std::time::Duration;

/// The command.
pub const COMMAND: Command = Command {
    word: "prove",
    group: Group::Asking,
    forms: &[
        ("prove s = t within 60s", "look for a proof for so long"),
        ("prove s = t", "the same, for one minute"),
    ],
    page: "The search ends as soon as there is an answer, when the time is used up, or on Ctrl-C. \
           What it finds is kept, so a second try goes on where the first one ended.",
    example: "open group\nprove i(x * y) = i(y) * i(x) within 10s",
    operand: Operand::Terms,
    run,
};

const TIME: Duration = Duration::from_secs(60);

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    let (asked, mut rest) = question::read(shell, line)?;
    let Question::Equation(left, right) = asked else {
        let fault = Fault::new(line.rest_range(), "prove takes an equation")
            .label("not of the form s = t")
            .help("write prove s = t within 60s");
        return Err(line.problem(fault));
    };
    let budget = rest.within()?.unwrap_or(TIME);
    question::settle(shell, |session, control| {
        session
            .prove(left, right, budget, control)
            .map(|answer| answer.number)
    })
}
