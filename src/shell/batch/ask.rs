//! One question, with unknowns or without.

use super::{about, evidence_in, keep, open_quietly, question, refuse, unfinished};
use crate::language::{Question, first_word};
use crate::session::{Answer, Verdict};
use crate::shell::arguments::Options;
use crate::shell::desk::Shell;
use crate::shell::evidence::Folder;
use crate::shell::json::{self, Kept};
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::{show, status};
use crate::theory::Expected;

/// Answers it; gives the exit status.
pub fn ask(
    shell: &mut Shell,
    file: &str,
    text: &str,
    options: Options,
    folder: &mut Option<Folder>,
) -> u8 {
    if let Err(status) = open_quietly(shell, file, options) {
        return status;
    }
    if first_word(text) == Some("find") {
        return find(shell, file, text, options, folder);
    }
    let (left, right, wanted) = match question(shell, text) {
        Err(problem) => return refuse(shell, file, options, problem),
        Ok(Question::Equation(left, right)) => (left, right, Expected::Equal),
        Ok(Question::Inequation(left, right)) => (left, right, Expected::NotEqual),
        Ok(Question::Term(_)) => {
            let help = "write 's = t', or use normal for the normal form of a term";
            let problem = about(text, "this is a term, not an equation", help);
            return refuse(shell, file, options, problem);
        }
    };
    let budget = options.within.unwrap_or(shell.session.budgets().ask);
    let asked = shell.work(|session, control| {
        let answer = session.ask(left, right, budget, control);
        answer.map(|answer| answer.number)
    });
    if let Err(fault) = asked {
        return unfinished(shell, file, options, fault);
    }
    let Some(answer) = shell.session.answers().last().cloned() else {
        return status::PROGRAM;
    };
    let sign = if wanted == Expected::Equal { "=" } else { "!=" };
    let question = shell.session.equation_text(left, sign, right);
    tell_answer(shell, file, &question, wanted, &answer, options, folder)
}

/// A question with unknowns.
fn find(
    shell: &mut Shell,
    file: &str,
    text: &str,
    options: Options,
    folder: &mut Option<Folder>,
) -> u8 {
    let text = text.trim();
    let read = shell.session.parse_find(text, "find".len());
    let read = read.map_err(|fault| Problem::Text(vec![fault]));
    let read = read.and_then(|(find, end)| Line::new(text, end, true).end().map(|()| find));
    let find = match read {
        Ok(find) => find,
        Err(Problem::Text(mut faults)) => {
            faults
                .iter_mut()
                .for_each(|fault| fault.source = "question".to_owned());
            return refuse(shell, file, options, Problem::Text(faults));
        }
        Err(problem) => return refuse(shell, file, options, problem),
    };
    let budget = options.within.unwrap_or(shell.session.budgets().ask);
    let asked = shell.work(|session, control| session.find(&find, budget, control).cloned());
    match asked {
        Ok(answer) => {
            let question = answer.question.clone();
            let wanted = Expected::Equal;
            tell_answer(shell, file, &question, wanted, &answer, options, folder)
        }
        Err(fault) => unfinished(shell, file, options, fault),
    }
}

/// Shows an answer; gives the exit status.
fn tell_answer(
    shell: &mut Shell,
    file: &str,
    question: &str,
    wanted: Expected,
    answer: &Answer,
    options: Options,
    folder: &mut Option<Folder>,
) -> u8 {
    let path = keep(shell, folder, (file, "question"), answer.evidence.as_ref());
    let text = if let Some(form) = options.json {
        let kept = Kept::new(form, answer.evidence.as_ref(), path);
        format!("{}\n", json::ask(file, question, wanted, answer, kept))
    } else {
        let place = show::Place::Batch;
        show::answer(answer, &shell.session, shell.look(), place) + &evidence_in(path)
    };
    shell.out(&text);
    if let Some((fault, evidence)) = &answer.fault {
        shell.report_fault(fault, evidence);
        return shell.status;
    }
    let status = match (answer.verdict, wanted) {
        (Verdict::Undecided, _) => status::UNDECIDED,
        (Verdict::Equal, Expected::Equal) | (Verdict::NotEqual, Expected::NotEqual) => status::FINE,
        _ => status::NOT,
    };
    status::worse(shell.status, status)
}
