//! What the command line asks for.

mod ask;
mod check;
mod complete;
mod normal;

use super::arguments::{Arguments, Options, Task};
use super::commands::open;
use super::desk::Shell;
use super::editor;
use super::evidence::Folder;
use super::lines::{self, Piped};
use super::problem::{Problem, plain_error};
use super::quantity::count;
use super::screen::Screen;
use super::signals::Signals;
use super::{json, line, places, status, verify};
use crate::language::{Diagnostic, Fault, Question, Source};
use crate::proof::Evidence;
use crate::session::{Session, SessionFault};
use std::io::{ErrorKind, IsTerminal};
use std::path::Path;

/// Does it, and gives the exit status.
pub fn run(arguments: Arguments) -> u8 {
    let screen = Screen::new(arguments.plain);
    let session = Session::new(None, places::library(arguments.library.as_deref()));
    let Some(task) = arguments.task else {
        return enter_shell(session, arguments.file.as_deref(), screen);
    };
    let mut shell = Shell::new(session, screen, Signals::batch());
    let options = arguments.options;
    // A single question has no name by which an earlier run's evidence could be replaced.
    let replaces = !matches!(task, Task::Ask { .. });
    let folder = arguments.evidence.as_deref();
    let folder = folder.map(|path| Folder::make(path, replaces)).transpose();
    let mut folder = match folder {
        Ok(folder) => folder,
        Err(problem) => {
            shell.tell(problem);
            return finish(&shell, shell.status);
        }
    };
    let status = match task {
        Task::Run { script } => run_script(&mut shell, &script),
        Task::Ask { file, question } => {
            ask::ask(&mut shell, &file, &question, options, &mut folder)
        }
        Task::Normal { file, term } => normal::normal(&mut shell, &file, &term, options),
        Task::Check { files } => check::check(&mut shell, &files, options, &mut folder),
        Task::Complete { file, all } => {
            complete::complete(&mut shell, &file, all, options, &mut folder)
        }
        Task::Verify { files, theory } => {
            let as_json = options.json.is_some();
            verify::run(&mut shell, &files, theory.as_deref(), as_json)
        }
    };
    finish(&shell, status)
}

/// Tells why there is no answer about a file, as JSON too where that was asked for; gives the exit
/// status.
fn refuse(shell: &mut Shell, file: &str, options: Options, problem: Problem) -> u8 {
    if options.json.is_some() {
        shell.out(&format!("{}\n", json::refused(file, &problem)));
    }
    shell.tell(problem);
    shell.status
}

/// The same for work that was not begun or finished.
fn unfinished(shell: &mut Shell, file: &str, options: Options, fault: SessionFault) -> u8 {
    let problem = Problem::session(fault, &shell.session.theory().signature);
    refuse(shell, file, options, problem)
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

/// The same without a word about what is in it. Where it fails, gives the exit status.
fn open_quietly(shell: &mut Shell, file: &str, options: Options) -> Result<(), u8> {
    match places::open(file, shell.session.library().clone()) {
        Ok(opened) => {
            shell.session = opened.session;
            shell.say_notes(&opened.notes);
            if !opened.refused.is_empty() {
                shell.tell(Problem::Text(opened.refused));
                shell.remark("These derived rules are left out; everything else was taken.");
            }
            Ok(())
        }
        Err(fault) => Err(refuse(shell, file, options, Problem::open(fault))),
    }
}

/// Reads a question from the command line.
fn question(shell: &mut Shell, text: &str) -> Result<Question, Problem> {
    let text = text.trim();
    if text.is_empty() {
        return Err(Problem::said(
            "the question is empty",
            "write it in quotes, such as 'x * e = x'",
        ));
    }
    shell.session.parse_question(text).map_err(|mut fault| {
        if fault.source == line::TYPED {
            fault.source = "question".to_owned();
        }
        Problem::Text(vec![fault])
    })
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

/// The line that says where the evidence is.
fn evidence_in(path: Option<String>) -> String {
    path.map_or_else(String::new, |path| format!("evidence in {path}\n"))
}
