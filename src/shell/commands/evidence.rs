//! `evidence FILE`, `evidence 3 FILE`

use super::{Command, Group, Operand, proof};
use crate::language::Fault;
use crate::session::{Answer, Verdict, write_evidence};
use crate::shell::desk::Shell;
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use std::path::Path;

/// The command.
pub const COMMAND: Command = Command {
    word: "evidence",
    group: Group::Asking,
    forms: &[
        ("evidence FILE", "write the evidence of the last answer"),
        ("evidence 3 FILE", "write that of answer 3"),
    ],
    page: "Writes the evidence of an answer as one JSON object, so that anyone can check the answer \
           with a program of their own: a proof, a finite algebra, or a complete rule set. \
           equable verify FILE, on the command line, runs the checkers of this program on it, \
           without the search. The file is written whole or not at all.",
    example: "open group\nx * i(x) = e\nevidence 1 inverse.json",
    operand: Operand::Files,
    run,
};

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let is_number = |word: &str| word.bytes().all(|byte| byte.is_ascii_digit());
    let number = line.peek().filter(|(word, _)| is_number(word));
    if number.is_some() {
        line.word();
    }
    if line.peek().is_none() {
        let fault = Fault::new(line.rest_range(), "the file is missing");
        let help = "write evidence 3 FILE, or evidence FILE for the last answer";
        return Err(line.problem(fault.help(help)));
    }
    let place = proof::answer_at(shell, &line, number)?;
    let rest = line.rest();
    let (name, _) = line.word().unwrap_or_default();
    // A path with blanks is understood without quotes too, since nothing else can follow.
    let path = Path::new(if line.end().is_ok() { name } else { rest });
    let answer = &shell.session.answers()[place];
    if answer.evidence.is_none() {
        return Err(without(answer));
    }
    if !shell.may_replace(path) {
        shell.out("Nothing was written.\n");
        return Ok(());
    }
    let answer = &shell.session.answers()[place];
    let (number, outdated) = (answer.number, answer.outdated);
    if let Some(evidence) = &answer.evidence {
        write_evidence(path, evidence).map_err(|error| Problem::system("write", path, &error))?;
    }
    let path = path.display();
    shell.out(&format!("evidence of answer {number} written to {path}\n"));
    if outdated {
        shell.remark(
            "Note: the laws have changed since this answer was given; the evidence has those of then.",
        );
    }
    Ok(())
}

/// Why there is nothing to write.
fn without(answer: &Answer) -> Problem {
    let number = answer.number;
    match answer.verdict {
        Verdict::Undecided => {
            // A question with unknowns begins with the word for it.
            let what = if answer.question.starts_with("find ") {
                "find x: s = t within 60s, with the unknowns and"
            } else {
                "prove s = t within 60s, with"
            };
            Problem::said(
                format!("answer {number} is undecided, so there is no evidence"),
                format!("{what} the sides of the question, looks longer"),
            )
        }
        _ => Problem::said(
            format!("answer {number} has no evidence that could be written"),
            "ask the question again",
        ),
    }
}
