//! `separate s = t, at most 8`

use super::{Command, Group, Operand};
use crate::language::{Fault, Question};
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::question;

/// The command.
pub const COMMAND: Command = Command {
    word: "separate",
    group: Group::Asking,
    forms: &[
        (
            "separate s = t, at most 8",
            "look for a finite algebra that tells them apart",
        ),
        (
            "separate s = t within 60s",
            "the same, up to any size, for so long",
        ),
    ],
    page: "Every law holds in the algebra, and its tables give the two sides different values: so \
           the equation does not follow from the laws. Sizes are tried upward, counted over all \
           sorts; the search ends with an algebra, when all sizes are done, when the time is used \
           up, or on Ctrl-C, and says which sizes it has ruled out.",
    example: "open settings\nseparate x ▷ y = y ▷ x, at most 4",
    operand: Operand::Terms,
    run,
};

/// Without a size and without a time: the size at which to end.
const MOST: u32 = 8;

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    let (asked, mut rest) = question::read(shell, line)?;
    let (Question::Equation(left, right) | Question::Inequation(left, right)) = asked else {
        let fault = Fault::new(line.rest_range(), "separate takes an equation")
            .label("not of the form s = t")
            .help("write separate s = t, at most 8");
        return Err(line.problem(fault));
    };
    let most = most(&mut rest)?;
    let within = rest.within()?;
    let most = most.unwrap_or(if within.is_some() { u32::MAX } else { MOST });
    question::settle(shell, |session, control| {
        session
            .separate(left, right, most, within, control)
            .map(|answer| answer.number)
    })
}

/// Reads `, at most N`, with or without the comma.
fn most(line: &mut Line<'_>) -> Result<Option<u32>, Problem> {
    let comma = line.keyword(",");
    if !line.keyword("at") && !comma {
        return Ok(None);
    }
    let wanted = |line: &Line<'_>, range| {
        line.problem(
            Fault::new(range, "a number of elements is expected here")
                .label("not a number from 1 to 255")
                .help("write separate s = t, at most 8"),
        )
    };
    if !line.keyword("most") {
        return Err(wanted(line, line.rest_range()));
    }
    match line.word() {
        Some((word, range)) => match word.parse() {
            Ok(most @ 1..=255) => Ok(Some(most)),
            _ => Err(wanted(line, range)),
        },
        None => Err(wanted(line, line.rest_range())),
    }
}
