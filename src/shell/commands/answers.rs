//! `answers`

use super::{Command, Group, Operand};
use crate::session::Answer;
use crate::shell::desk::Shell;
use crate::shell::layout::{Breaker, columns, cut, pad};
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::quantity::show_duration;
use crate::shell::screen::{Ink, Look};
use crate::shell::show;

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
    let breaker = Breaker::new(&shell.session.theory().signature);
    let answers = shell.session.answers();
    if answers.is_empty() {
        shell.out("No answers yet. Type an equation, such as x * e = x.\n");
        return Ok(());
    }
    // Times stand below each other as far as the questions leave room for that.
    let widths = answers.iter().map(|answer| columns(&answer.question));
    let beside = look.width.saturating_sub(COLUMN + 3 + TIME);
    let column = widths.filter(|width| *width <= beside).max().unwrap_or(0);
    let text: String = (answers.iter())
        .map(|answer| entry(answer, column, look, breaker))
        .collect();
    shell.out(&text);
    Ok(())
}

/// Where the questions begin, if there is room.
const COLUMN: usize = 18;
/// At least so many columns are left for a question beside its verdict.
const ROOM: usize = 30;
/// For a time as most of them are.
const TIME: usize = 12;
/// A question is cut behind so many lines.
const LINES: usize = 3;

/// One answer: its number, the verdict, the question in lines that fit, and the time. Colours are
/// put on last, for a line is broken by what it looks like.
fn entry(answer: &Answer, column: usize, look: Look, breaker: Breaker<'_>) -> String {
    let mut facts = show_duration(answer.elapsed);
    if answer.outdated {
        facts += ", by earlier laws";
    }
    let verdict = answer.verdict.text();
    let number = format!("{:>3}", answer.number);
    let is_wide = look.width >= COLUMN + ROOM;
    let lead = if is_wide { COLUMN } else { 4 };
    let room = look.width.saturating_sub(lead).max(8);
    let question = cut(&answer.question, LINES * room - LINES);
    let indent = " ".repeat(lead);
    let mut lines: Vec<String> = Vec::new();
    for piece in breaker.pieces(&question, room, room) {
        // A term without a place to break it goes over the edge, which a cut prevents.
        lines.push(cut(&question[piece], room));
    }
    let mut beside = false;
    if let [line] = &mut lines[..] {
        let padded = pad(line, column);
        beside = columns(&padded) + 3 + columns(&facts) <= room;
        if beside {
            *line = padded;
        }
    }
    let ink = show::ink(answer.verdict);
    let mut text = format!("{number}   {}", look.ink(ink, verdict));
    text += &if is_wide {
        " ".repeat(COLUMN - 6 - columns(verdict))
    } else {
        format!("\n{indent}")
    };
    text += &lines.join(&format!("\n{indent}"));
    let facts = look.ink(Ink::Quiet, &facts);
    text += &if beside {
        format!("   {facts}\n")
    } else {
        format!("\n{indent}{facts}\n")
    };
    text
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::{Library, Session};
    use crate::shell::screen::Screen;
    use crate::shell::signals::Signals;

    #[test]
    fn long_questions_are_wrapped_before_they_are_coloured() {
        let session = Session::new(None, Library::default());
        let mut shell = Shell::new(session, Screen::new(true), Signals::batch());
        shell.statement("infix + 40 left\nconstant gauge\nfunction f 1");
        for (question, width) in [(400, 20), (400, 60), (12, 60), (1, 80)] {
            let sum = vec!["gauge"; question].join(" + ");
            shell.statement(&format!("{sum} = {sum}"));
            let answer = shell.session.answers().last().expect("an answer").clone();
            let breaker = Breaker::new(&shell.session.theory().signature);
            let plain = entry(
                &answer,
                0,
                Look {
                    color: false,
                    width,
                },
                breaker,
            );
            let colored = entry(&answer, 0, Look { color: true, width }, breaker);
            assert!(colored.contains("\x1b[") && !colored.contains('\u{241b}'));
            let mut bare = String::new();
            for part in colored.split('\x1b') {
                let code = part.strip_prefix('[').and_then(|part| part.split_once('m'));
                bare += code.map_or(part, |(_, text)| text);
            }
            assert_eq!(bare, plain);
            assert!(plain.lines().all(|line| columns(line) <= width), "{plain}");
            assert!(plain.lines().count() <= 6, "{plain}");
        }
        let tower = format!("{}gauge{}", "f(".repeat(300), ")".repeat(300));
        shell.statement(&format!("{tower} = {tower}"));
        let answer = shell.session.answers().last().expect("an answer");
        let breaker = Breaker::new(&shell.session.theory().signature);
        let look = Look {
            color: false,
            width: 40,
        };
        let text = entry(answer, 0, look, breaker);
        assert!(text.lines().all(|line| columns(line) <= 40), "{text}");
    }
}
