//! `find x y: s = t within 60s`

use super::{Command, Group, Operand};
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::question;
use std::time::Duration;

/// The command.
pub const COMMAND: Command = Command {
    word: "find",
    group: Group::Asking,
    forms: &[
        ("find x y: s = t", "values of x and y for which it holds"),
        (
            "find x: s = t within 60s",
            "the same, searching for so long",
        ),
    ],
    page: "The values may mention the other variables, which count as constants. The answer is equal, \
           with values and the proof of the equation with these values put in; not equal, with a \
           finite algebra in which the sides differ for all values; or undecided. Without a time the \
           search takes at most one minute. As a claim: claim NAME: find x: s = t.",
    example: "open group\nvariable w\nfind w: x * w = y",
    operand: Operand::Terms,
    run,
};

const TIME: Duration = Duration::from_secs(60);

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    let read = shell.session.parse_find(line.text, line.at);
    let (find, end) = read.map_err(|fault| Problem::Text(vec![fault]))?;
    let budget = line.from(end).within()?.unwrap_or(TIME);
    question::settle(shell, |session, control| {
        let answer = session.find(&find, budget, control);
        answer.map(|answer| answer.number)
    })
}
