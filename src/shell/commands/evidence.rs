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
           with a program of their own. equable verify FILE, on the command line, runs the checkers \
           of this program on it, without the search; with --theory FILE it compares the laws too. \
           The file is written whole or not at all.\n\n\
           kind is proof, algebra or complete. terms lists every term once; everywhere else a term \
           is its place in that list, counted from 0. An entry is a variable, \"x\", or a symbol with \
           the places of its arguments, which stand before it: [\"*\", 0, 1]; a constant is [\"e\"]; a \
           sign that is prefix and infix is -/1 and -/2. laws are the equations taken for granted, \
           each with name, left and right; definitions are those of symbols that the program has \
           added; with sorts, types has those of each symbol, the result \
           last, and variables that of each variable.\n\n\
           A proof has lemmas, each of which may use those before it, and a claim: left, right and \
           steps. A step goes from the term before it to the term to: by names a law or lemma, way \
           is forward (from left to right) or backward, with says what stands for each of its \
           variables, and at is where: the number of the argument at each level, counted from 0, \
           where printed proofs count from 1; [] is the whole term. witness has the values that a \
           find has found.\n\n\
           An algebra has sorts, with the number of elements of each (0, 1, …), and tables: [[0, 1], \
           [1, 0]] has the value for first argument 0 and second argument 1 in its first row, \
           second place; a constant is a number. Every law holds for all values of its variables. \
           With those in with, the two sides of the claim have the two values; with unknowns, they \
           differ for all values of these.\n\n\
           A complete set has order, rules, each with name, left, right and oriented, and a lemma of \
           the same name that proves it; one that is not oriented is used both ways, on instances \
           that decrease. The claim, if there is one, has the two normal forms; its variables count \
           as constants below every symbol, smaller the earlier in the alphabet.\n\n\
           help json is about the answers of --json.",
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
