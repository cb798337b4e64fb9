//! `proof`, `proof 3`, `proof 3 short`

use super::{Command, Group, Operand};
use crate::language::Fault;
use crate::session::{Answer, Verdict};
use crate::shell::desk::Shell;
use crate::shell::layout::{Breaker, fold};
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::quantity::count;
use crate::shell::show;
use std::ops::Range;

/// The command.
pub const COMMAND: Command = Command {
    word: "proof",
    group: Group::Asking,
    forms: &[
        ("proof", "the proof of the last answer"),
        ("proof 3", "the proof of answer 3"),
        ("proof 3 short", "its lemmas only, without their steps"),
    ],
    page: "A proof is a chain of equalities: every line is equal to the line before it, by the law \
           or lemma beside it, used from left to right unless it says otherwise, at the place that \
           it gives. Lemmas come first, each with its own chain, numbered in the order \
           in which they are proved; short gives each in one line. (why and trace speak of rules by \
           the numbers that rules shows.) A checker of its own has gone \
           through every step before the answer was printed. For an answer `not equal` the normal \
           forms are shown, for rules that are complete give equal terms the same one.",
    example: "open group\nx * i(x) = e\nproof\nproof 1 short",
    operand: Operand::Answers,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let short = line.keyword("short");
    let place = number(shell, &mut line)?;
    let short = short || line.keyword("short");
    line.end()?;
    let answer = &shell.session.answers()[place];
    let text = render(shell, answer, short);
    shell.out(&text);
    Ok(())
}

/// The place of the answer that the line names; the last one if it names none.
fn number(shell: &Shell, line: &mut Line<'_>) -> Result<usize, Problem> {
    let wanted = line.peek().filter(|(word, _)| *word != "short");
    if wanted.is_some() {
        line.word();
    }
    answer_at(shell, line, wanted)
}

/// The place of the answer with the number that was read from the line; of the last one if there
/// was none.
pub(super) fn answer_at(
    shell: &Shell,
    line: &Line<'_>,
    wanted: Option<(&str, Range<usize>)>,
) -> Result<usize, Problem> {
    let known = shell.session.answers().len();
    let fault = |range, message: String| {
        let help = match known {
            0 => "type an equation first: its answer gets a number".to_owned(),
            1 => "there is answer 1 only; answers lists it".to_owned(),
            _ => format!("there are answers 1 to {known}; answers lists them"),
        };
        Fault::new(range, message).help(help)
    };
    let Some((word, range)) = wanted else {
        return match known.checked_sub(1) {
            Some(last) => Ok(last),
            None => Err(line.problem(fault(line.command(), "there is no answer yet".to_owned()))),
        };
    };
    match word.parse::<usize>() {
        Ok(number) if (1..=known).contains(&number) => Ok(number - 1),
        Ok(number) => Err(line.problem(fault(range, format!("there is no answer {number}")))),
        Err(_) => Err(line.problem(fault(
            range,
            "the number of an answer is expected".to_owned(),
        ))),
    }
}

fn render(shell: &Shell, answer: &Answer, short: bool) -> String {
    let look = shell.look();
    let breaker = Breaker::new(&shell.session.theory().signature);
    let mut text = String::new();
    if answer.outdated {
        text += &fold(
            "The laws have changed since this answer was given.",
            look.width,
            0,
        );
    }
    text += &match (answer.verdict, shell.session.proof_text(answer)) {
        (_, Some(proof)) if short => show::proof_short(&proof, &answer.question, look),
        (_, Some(proof)) => show::proof(&proof, &answer.question, look, breaker),
        (Verdict::NotEqual, None) => show::answer(answer, &shell.session, look, show::Place::Shell),
        (Verdict::Equal, None) => fold("The proof cannot be shown as text.", look.width, 0),
        (Verdict::Undecided, None) => {
            let tried = answer
                .frontier
                .as_ref()
                .map_or(0, |frontier| frontier.rules);
            // A question with unknowns begins with the word for it.
            let word = if answer.question.starts_with("find ") {
                ""
            } else {
                "prove "
            };
            let text = format!(
                "Answer {} is undecided after {}: there is no proof to show. {word}{} within 60s looks longer.",
                answer.number,
                count(tried, "rule"),
                answer.question
            );
            fold(&text, look.width, 0)
        }
    };
    text
}
