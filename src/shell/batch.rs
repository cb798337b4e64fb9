//! What the command line asks for.

use super::arguments::{Arguments, EvidenceFolder, Options, Task};
use super::commands::open;
use super::desk::Shell;
use super::editor;
use super::evidence::Folder;
use super::json::Kept;
use super::line::Line;
use super::lines::{self, Piped};
use super::problem::{Problem, plain_error};
use super::quantity::count;
use super::screen::Screen;
use super::signals::Signals;
use super::{json, line, places, show, status, verify};
use crate::language::{Diagnostic, Fault, Question, Source, first_word};
use crate::proof::Evidence;
use crate::session::{Answer, ClaimResult, Session, Verdict};
use crate::theory::Expected;
use std::io::{ErrorKind, IsTerminal};
use std::path::Path;
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, mpsc};
use std::time::Duration;

/// Does it, and gives the exit status.
pub fn run(arguments: Arguments) -> u8 {
    let screen = Screen::new(arguments.plain);
    let session = Session::new(None, places::library(arguments.library.as_deref()));
    match arguments.task {
        None => enter_shell(session, arguments.file.as_deref(), screen),
        Some(task) => {
            let mut shell = Shell::new(session, screen, Signals::batch());
            let status = match task {
                Task::Run { script } => run_script(&mut shell, &script),
                Task::Ask {
                    file,
                    question,
                    options,
                    evidence,
                } => match folder(&evidence, false) {
                    Ok(mut kept) => ask(&mut shell, &file, &question, options, &mut kept),
                    Err(problem) => told(&mut shell, problem),
                },
                Task::Normal {
                    file,
                    term,
                    options,
                } => normal(&mut shell, &file, &term, options),
                Task::Check {
                    files,
                    options,
                    evidence,
                } => match folder(&evidence, true) {
                    Ok(mut kept) => check(&mut shell, &files, options, &mut kept),
                    Err(problem) => told(&mut shell, problem),
                },
                Task::Complete {
                    file,
                    options,
                    evidence,
                } => match folder(&evidence, true) {
                    Ok(mut kept) => complete(&mut shell, &file, options, &mut kept),
                    Err(problem) => told(&mut shell, problem),
                },
                Task::Verify {
                    files,
                    theory,
                    json,
                } => verify::run(&mut shell, &files, theory.as_deref(), json),
            };
            finish(&shell, status)
        }
    }
}

/// The folder for evidence, if there is to be one.
fn folder(wanted: &EvidenceFolder, replaces: bool) -> Result<Option<Folder>, Problem> {
    let folder = wanted.folder.as_deref();
    folder.map(|path| Folder::make(path, replaces)).transpose()
}

fn told(shell: &mut Shell, problem: Problem) -> u8 {
    shell.tell(problem);
    shell.status
}

/// Writes evidence into the folder, if there are both; gives the path.
fn keep(
    shell: &mut Shell,
    folder: &mut Option<Folder>,
    (theory, about): (&str, &str),
    evidence: Option<&Evidence>,
) -> Option<String> {
    let written = folder.as_mut()?.write(theory, about, evidence?);
    match written {
        Ok(path) => Some(path),
        Err(problem) => {
            shell.tell(problem);
            None
        }
    }
}

/// The exit status, after a last look at whether everything could be written.
fn finish(shell: &Shell, status: u8) -> u8 {
    match shell.screen.broken() {
        None => status,
        // Whoever was reading has read enough.
        Some(error) if error.kind() == ErrorKind::BrokenPipe => status,
        Some(error) => {
            eprintln_quietly(&format!(
                "Error: the results cannot be written: {}\n",
                plain_error(error)
            ));
            status::PROGRAM
        }
    }
}

fn eprintln_quietly(text: &str) {
    use std::io::Write;
    // Nobody is left to be told when this cannot be written.
    let _ = std::io::stderr().write_all(text.as_bytes());
}

/// The shell, for somebody in front or for a pipe.
fn enter_shell(session: Session, file: Option<&str>, screen: Screen) -> u8 {
    let is_interactive = std::io::stdin().is_terminal() && std::io::stdout().is_terminal();
    if is_interactive {
        return editor::run(session, screen, file);
    }
    let mut shell = Shell::new(session, screen, Signals::batch());
    if let Some(file) = file
        && !open_into(&mut shell, file)
    {
        let status = shell.status;
        return finish(&shell, status);
    }
    shell.place = Some(("input".to_owned(), 0));
    let status = run_lines(&mut shell, &mut Piped::new(std::io::stdin().lock()));
    finish(&shell, status)
}

fn run_script(shell: &mut Shell, script: &str) -> u8 {
    if script == "-" {
        shell.place = Some(("input".to_owned(), 0));
        return run_lines(shell, &mut Piped::new(std::io::stdin().lock()));
    }
    let path = Path::new(script);
    let opened = std::fs::File::open(path).and_then(|file| {
        if file.metadata()?.is_dir() {
            return Err(std::io::Error::from(ErrorKind::IsADirectory));
        }
        Ok(file)
    });
    let file = match opened {
        Ok(file) => file,
        Err(error) => {
            shell.tell(Problem::system("read", path, &error));
            return shell.status;
        }
    };
    shell.place = Some((script.to_owned(), 0));
    run_lines(shell, &mut Piped::new(std::io::BufReader::new(file)))
}

/// Carries out all lines; at the end says how many were at fault.
fn run_lines(shell: &mut Shell, source: &mut dyn lines::Lines) -> u8 {
    lines::run(shell, source);
    let place = shell.place.take();
    if shell.interrupted {
        let line = place.map_or(0, |(_, number)| number);
        shell.remark(&format!(
            "Stopped by Ctrl-C at line {line}; the lines after it were not read."
        ));
        shell.status = status::worse(shell.status, status::INTERRUPTED);
    }
    if !shell.leaving {
        shell.say_unsaved();
    }
    if shell.faults > 0 {
        let were = if shell.faults == 1 { "was" } else { "were" };
        let text = format!("{} {were} at fault.", count(shell.faults, "line"));
        shell.remark(&text);
    }
    shell.status
}

/// Opens a theory; tells what is wrong with it.
fn open_into(shell: &mut Shell, file: &str) -> bool {
    match places::open(file, shell.session.library().clone()) {
        Ok(opened) => {
            open::enter(shell, opened);
            true
        }
        Err(fault) => {
            shell.tell(Problem::open(fault));
            false
        }
    }
}

/// The same without a word about what is in it.
fn open_quietly(shell: &mut Shell, file: &str) -> bool {
    match places::open(file, shell.session.library().clone()) {
        Ok(opened) => {
            shell.session = opened.session;
            shell.say_notes(&opened.notes);
            if !opened.refused.is_empty() {
                shell.tell(Problem::Text(opened.refused));
                shell.remark("These derived rules are left out; everything else was taken.");
            }
            true
        }
        Err(fault) => {
            shell.tell(Problem::open(fault));
            false
        }
    }
}

/// Reads a question from the command line.
fn question(shell: &mut Shell, text: &str) -> Option<Question> {
    let text = text.trim();
    if text.is_empty() {
        shell.tell(Problem::said(
            "the question is empty",
            "write it in quotes, such as 'x * e = x'",
        ));
        return None;
    }
    match shell.session.parse_question(text) {
        Ok(question) => Some(question),
        Err(mut fault) => {
            if fault.source == line::TYPED {
                fault.source = "question".to_owned();
            }
            shell.tell(Problem::Text(vec![fault]));
            None
        }
    }
}

/// A problem with the question as a whole.
fn about(text: &str, message: &str, help: &str) -> Problem {
    let text = text.trim();
    let fault = Fault::new(0..text.len(), message).help(help);
    let source = Source {
        name: "question",
        text,
    };
    Problem::Text(vec![Diagnostic::new(source, fault)])
}

fn ask(
    shell: &mut Shell,
    file: &str,
    text: &str,
    options: Options,
    folder: &mut Option<Folder>,
) -> u8 {
    if !open_quietly(shell, file) {
        return shell.status;
    }
    if first_word(text) == Some("find") {
        return find(shell, file, text, options, folder);
    }
    let (left, right, wanted) = match question(shell, text) {
        None => return shell.status,
        Some(Question::Equation(left, right)) => (left, right, Expected::Equal),
        Some(Question::Inequation(left, right)) => (left, right, Expected::NotEqual),
        Some(Question::Term(_)) => {
            let help = "write 's = t', or use normal for the normal form of a term";
            shell.tell(about(text, "this is a term, not an equation", help));
            return shell.status;
        }
    };
    let budget = options.within.unwrap_or(shell.session.budgets().ask);
    let asked = shell.work(|session, control| {
        let answer = session.ask(left, right, budget, control);
        answer.map(|answer| answer.number)
    });
    if let Err(fault) = asked {
        let problem = Problem::session(fault, &shell.session.theory().signature);
        shell.tell(problem);
        return shell.status;
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
            return told(shell, Problem::Text(faults));
        }
        Err(problem) => return told(shell, problem),
    };
    let budget = options.within.unwrap_or(shell.session.budgets().ask);
    let asked = shell.work(|session, control| session.find(&find, budget, control).cloned());
    match asked {
        Ok(answer) => {
            let question = answer.question.clone();
            let wanted = Expected::Equal;
            tell_answer(shell, file, &question, wanted, &answer, options, folder)
        }
        Err(fault) => {
            let problem = Problem::session(fault, &shell.session.theory().signature);
            told(shell, problem)
        }
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

/// The line that says where the evidence is.
fn evidence_in(path: Option<String>) -> String {
    path.map_or_else(String::new, |path| format!("evidence in {path}\n"))
}

fn normal(shell: &mut Shell, file: &str, text: &str, options: Options) -> u8 {
    if !open_quietly(shell, file) {
        return shell.status;
    }
    let term = match question(shell, text) {
        None => return shell.status,
        Some(Question::Term(term)) => term,
        Some(_) => {
            let help = "write a term, or use ask for an equation";
            shell.tell(about(text, "this is an equation, not a term", help));
            return shell.status;
        }
    };
    // The laws alone may not rewrite far; a short completion costs little beside a new process.
    let within = options.within.unwrap_or(shell.session.budgets().ask);
    if shell.session.status().rules == 0 {
        let done = shell.work(|session, control| session.complete(Some(within), control));
        if let Err(fault) = done {
            let problem = Problem::session(fault, &shell.session.theory().signature);
            shell.tell(problem);
            return shell.status;
        }
    }
    let timer = options
        .within
        .map(|within| Timer::start(within, shell.signals.stop()));
    let found = shell.work(|session, control| session.normal(term, control));
    drop(timer);
    let found = match found {
        Ok(found) => found,
        Err(fault) => {
            let problem = Problem::session(fault, &shell.session.theory().signature);
            shell.tell(problem);
            return shell.status;
        }
    };
    if options.json.is_some() {
        shell.out(&format!("{}\n", json::normal(file, &found)));
    } else {
        shell.out(&format!("{}\n", found.text));
    }
    if found.stopped.is_some() {
        shell.remark("Rewriting was stopped; this is how far it came.");
        return status::UNDECIDED;
    }
    if !found.complete && options.json.is_none() {
        shell.remark(
            "Note: the rules are not complete, so an equal term may have another normal form.",
        );
    }
    status::FINE
}

/// Sets a flag after a time, unless it is let go before.
struct Timer {
    _ends_when_dropped: mpsc::Sender<()>,
}

impl Timer {
    fn start(time: Duration, stop: Arc<AtomicBool>) -> Timer {
        let (sender, receiver) = mpsc::channel::<()>();
        std::thread::spawn(move || {
            if receiver.recv_timeout(time) == Err(mpsc::RecvTimeoutError::Timeout) {
                stop.store(true, Ordering::Relaxed);
            }
        });
        Timer {
            _ends_when_dropped: sender,
        }
    }
}

fn check(shell: &mut Shell, files: &[String], options: Options, folder: &mut Option<Folder>) -> u8 {
    let mut worst = status::FINE;
    for file in files {
        shell.status = status::FINE;
        let status = check_one(shell, file, files.len() > 1, options, folder);
        worst = status::worse(worst, status);
        if shell.interrupted || shell.screen.broken().is_some() {
            break;
        }
    }
    worst
}

fn check_one(
    shell: &mut Shell,
    file: &str,
    is_one_of_many: bool,
    options: Options,
    folder: &mut Option<Folder>,
) -> u8 {
    if !open_quietly(shell, file) {
        return shell.status;
    }
    if is_one_of_many && options.json.is_none() {
        shell.out(&format!("{file}\n"));
    }
    let within = options.within.unwrap_or(shell.session.budgets().check);
    let claims = shell.session.theory().claims.len();
    let results = shell.work(|session, control| session.check(within, control, &mut |_| {}));
    let results = match results {
        Ok(results) => results,
        Err(fault) => {
            let problem = Problem::session(fault, &shell.session.theory().signature);
            shell.tell(problem);
            return shell.status;
        }
    };
    let look = shell.look();
    let paths: Vec<Option<String>> = results
        .iter()
        .map(|result| {
            let number = result.number.to_string();
            let about = result.name.as_deref().unwrap_or(&number);
            let evidence = result.answer.evidence.as_ref();
            keep(shell, folder, (file, about), evidence)
        })
        .collect();
    let text = if let Some(form) = options.json {
        let line = |(result, path): (&ClaimResult, Option<String>)| {
            let kept = Kept::new(form, result.answer.evidence.as_ref(), path);
            format!("{}\n", json::claim(file, result, kept))
        };
        results.iter().zip(paths).map(line).collect()
    } else if claims == 0 {
        "no claims\n".to_owned()
    } else {
        show::claims(&results, look, show::Place::Batch)
            + &show::claims_summary(&results, look)
            + &show::claims_left(results.len(), claims, look)
    };
    shell.out(&text);
    for (fault, evidence) in results
        .iter()
        .filter_map(|result| result.answer.fault.as_ref())
    {
        shell.report_fault(fault, evidence);
    }
    let all_done = results.len() == claims;
    let left = if all_done {
        status::FINE
    } else {
        status::UNDECIDED
    };
    let of = |result: &ClaimResult| match result.is_as_claimed() {
        Some(true) => status::FINE,
        Some(false) => status::NOT,
        None => status::UNDECIDED,
    };
    let status = results.iter().map(of).fold(left, status::worse);
    status::worse(shell.status, status)
}

fn complete(shell: &mut Shell, file: &str, options: Options, folder: &mut Option<Folder>) -> u8 {
    if !open_quietly(shell, file) {
        return shell.status;
    }
    let within = options.within.or(shell.session.budgets().complete);
    let done = shell.work(|session, control| session.complete(within, control));
    let done = match done {
        Ok(done) => done,
        Err(fault) => {
            let problem = Problem::session(fault, &shell.session.theory().signature);
            shell.tell(problem);
            return shell.status;
        }
    };
    let path = keep(shell, folder, (file, "complete"), done.evidence.as_ref());
    let text = if let Some(form) = options.json {
        let kept = Kept::new(form, done.evidence.as_ref(), path);
        format!("{}\n", json::complete(file, &shell.session, &done, kept))
    } else {
        let mut text = show::completion(&done, shell.look(), show::Place::Batch);
        for rule in shell.session.rules() {
            text += &format!("{}\n", rule.text);
        }
        text + &evidence_in(path)
    };
    shell.out(&text);
    if let Some((fault, evidence)) = &done.fault {
        shell.report_fault(fault, evidence);
        return shell.status;
    }
    let status = if done.complete {
        status::FINE
    } else {
        status::UNDECIDED
    };
    status::worse(shell.status, status)
}
