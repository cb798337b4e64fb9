//! `answers`

use super::{Command, Group, Operand};
use crate::session::Verdict;
use crate::shell::desk::Shell;
use crate::shell::layout::table;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::quantity::show_duration;
use crate::shell::screen::Ink;

/// The command.
pub const COMMAND: Command = Command {
    word: "answers",
    group: Group::Asking,
    forms: &[("answers", "all answers so far")],
    page: "There are three: equal, with a proof; not equal, with two different normal forms by \
           complete rules or with a finite algebra in which the laws hold and the sides differ; \
           undecided, with how far the search came and what to try next. An equation is equal if \
           its two sides have the same value in everything that obeys the laws, for all values of \
           the variables; every sort is taken to have an element. Every proof and every complete set of \
           rules has been checked by a part of the program that has no share in finding them. \
           Answers keep their numbers; one that was given before the laws changed says so.",
    example: "open group\nx * i(x) = e\nanswers",
    operand: Operand::Words,
    run,
};

fn run(shell: &mut Shell, line: Line<'_>) -> Result<(), Problem> {
    line.end()?;
    let look = shell.look();
    let row = |answer: &crate::session::Answer| {
        let ink = match answer.verdict {
            Verdict::Equal => Ink::Good,
            Verdict::NotEqual => Ink::Other,
            Verdict::Undecided => Ink::Open,
        };
        let verdict = format!("{:<9}", answer.verdict.text());
        let mut time = show_duration(answer.elapsed);
        if answer.outdated {
            time += ", by earlier laws";
        }
        vec![
            format!("{:>3}", answer.number),
            look.ink(ink, &verdict),
            answer.question.clone(),
            look.ink(Ink::Quiet, &time),
        ]
    };
    let rows: Vec<_> = shell.session.answers().iter().map(row).collect();
    if rows.is_empty() {
        shell.out("No answers yet. Type an equation, such as x * e = x.\n");
    } else {
        shell.out(&table(&rows, look));
    }
    Ok(())
}
