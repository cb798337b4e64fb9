//! Lines that are no commands: terms, equations and declarations.

use super::desk::Shell;
use super::line::{Line, TYPED};
use super::problem::Problem;
use super::show;
use crate::language::{Change, Fault, Question, Source, quote_law};
use crate::session::{Control, Session, SessionFault};
use crate::term::TermId;
use std::time::Duration;

/// A term or an equation, whole.
pub fn run(shell: &mut Shell, text: &str) -> Result<(), Problem> {
    let question = shell
        .session
        .parse_question(text)
        .map_err(|fault| Problem::Text(vec![fault]))?;
    match question {
        Question::Term(term) => normal(shell, term),
        Question::Equation(left, right) | Question::Inequation(left, right) => {
            let budget = shell.session.budgets().ask;
            ask(shell, left, right, budget)
        }
    }
}

/// Shows the normal form of a term.
pub fn normal(shell: &mut Shell, term: TermId) -> Result<(), Problem> {
    let found = shell.work(|session, control| session.normal(term, control));
    let found =
        found.map_err(|fault| Problem::session(fault, &shell.session.theory().signature))?;
    let text = show::normal(&found, &shell.session, shell.look());
    shell.out(&text);
    if let Some((fault, evidence)) = &found.fault {
        shell.report_fault(fault, evidence);
    }
    Ok(())
}

/// Asks whether two terms are equal, and shows the answer.
pub fn ask(
    shell: &mut Shell,
    left: TermId,
    right: TermId,
    budget: Duration,
) -> Result<(), Problem> {
    settle(shell, |session, control| {
        let answer = session.ask(left, right, budget, control);
        answer.map(|answer| answer.number)
    })
}

/// Has a question settled, and shows the answer, whose number is given back.
pub fn settle(
    shell: &mut Shell,
    by: impl FnOnce(&mut Session, &mut Control) -> Result<u32, SessionFault>,
) -> Result<(), Problem> {
    let asked = shell.work(by);
    let number =
        asked.map_err(|fault| Problem::session(fault, &shell.session.theory().signature))?;
    let answer = &shell.session.answers()[number as usize - 1];
    let fault = answer.fault.clone();
    // By its tables, for numbers begin anew with another theory.
    let algebra = answer.algebra.map(|algebra| algebra.number);
    let tables = shell.session.algebra_text(answer).map(|found| found.tables);
    let found = algebra.zip(tables);
    let is_printed =
        (found.as_ref()).is_some_and(|(number, tables)| shell.printed.get(number) == Some(tables));
    let place = show::Place::Shell;
    let text = show::answer_again(answer, &shell.session, shell.look(), place, is_printed);
    shell.printed.extend(found);
    shell.out(&text);
    if let Some((fault, evidence)) = fault {
        shell.report_fault(&fault, &evidence);
    }
    Ok(())
}

/// Reads a term or an equation at the place of the line, as far as it goes.
pub fn read<'t>(shell: &mut Shell, line: Line<'t>) -> Result<(Question, Line<'t>), Problem> {
    let (question, end) = shell
        .session
        .parse_question_prefix(line.text, line.at)
        .map_err(|fault| Problem::Text(vec![fault]))?;
    Ok((question, line.from(end)))
}

/// Reads a term that takes the rest of the line.
pub fn read_term(shell: &mut Shell, line: Line<'_>, word: &str) -> Result<TermId, Problem> {
    let (question, rest) = read(shell, line)?;
    rest.end()?;
    match question {
        Question::Term(term) => Ok(term),
        _ => {
            let fault = Fault::new(
                line.rest_range(),
                format!("{word} takes a term, not an equation"),
            )
            .label("an equation")
            .help("to ask whether the two sides are equal, type the equation alone");
            Err(Problem::Text(vec![fault.at(source(line.text))]))
        }
    }
}

/// The typed text as the source of messages.
pub fn source(text: &str) -> Source<'_> {
    Source { name: TYPED, text }
}

/// Takes a declaration in, and says what cannot be seen from the line itself.
pub fn declare(shell: &mut Shell, text: &str) -> Result<(), Problem> {
    let changes = shell
        .session
        .declare(text)
        .map_err(|fault| Problem::change(fault, &shell.session.theory().signature))?;
    let text = said(shell, &changes);
    shell.out(&text);
    Ok(())
}

/// Named things are quiet; laws that got a name from the program are shown with it.
fn said(shell: &Shell, changes: &[Change]) -> String {
    let theory = shell.session.theory();
    let mut rows = Vec::new();
    let mut text = String::new();
    for change in changes {
        match change {
            Change::Law(name) => {
                let Some(law) = theory.law(name) else {
                    continue;
                };
                if law.unnamed || law.property.is_some() {
                    let equation = shell.session.equation_text(law.left, "=", law.right);
                    rows.push(vec![format!("{}:", quote_law(name)), equation]);
                }
            }
            Change::Used(name) => {
                let laws = theory.laws.iter().filter(|law| law.from.is_some()).count();
                text += &format!(
                    "{name} taken in: {} from other theories now\n",
                    super::quantity::count(laws, "law")
                );
            }
            _ => {}
        }
    }
    text + &super::layout::table(&rows, shell.look())
}
