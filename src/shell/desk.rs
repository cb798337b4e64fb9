//! The shell itself: a session, the screen, and what they need between two lines.

use super::commands;
use super::editor::LineEditor;
use super::line::{Line, TYPED};
use super::live::Live;
use super::problem::Problem;
use super::screen::{Look, Screen};
use super::signals::Signals;
use super::{layout, question, show, status, words};
use crate::language::{Diagnostic, first_word, is_declaration, is_reserved};
use crate::proof::{self, Evidence, Table};
use crate::session::{Control, ProgramFault, Session};
use std::collections::HashMap;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::path::Path;

/// The shell.
pub struct Shell {
    /// The open theory.
    pub session: Session,
    /// Where text goes.
    pub screen: Screen,
    /// What Ctrl-C does.
    pub signals: Signals,
    /// The line editor, if somebody sits in front.
    pub editor: Option<LineEditor>,
    /// Has the user asked to leave?
    pub leaving: bool,
    /// How many lines were at fault.
    pub faults: usize,
    /// The worst of the exit statuses so far.
    pub status: u8,
    /// The script and the number of the line in it, for messages.
    pub place: Option<(String, usize)>,
    /// How many lines the last statement took besides its first.
    pub pending_lines: usize,
    /// Was the last piece of work stopped by Ctrl-C?
    pub interrupted: bool,
    /// The tables of the algebras that were printed, by number.
    pub printed: HashMap<u32, Vec<(String, Table)>>,
}

impl Shell {
    /// A shell with a session.
    pub fn new(session: Session, screen: Screen, signals: Signals) -> Shell {
        Shell {
            session,
            screen,
            signals,
            editor: None,
            leaving: false,
            faults: 0,
            status: status::FINE,
            place: None,
            pending_lines: 0,
            interrupted: false,
            printed: HashMap::new(),
        }
    }

    /// How results are to look.
    pub fn look(&self) -> Look {
        self.screen.look()
    }

    /// Prints a result.
    pub fn out(&mut self, text: &str) {
        self.screen.out(text);
    }

    /// Carries out one statement. A problem is told and counted; a fault of the program too, and
    /// the session goes on.
    pub fn statement(&mut self, text: &str) {
        self.guarded(|shell| shell.try_statement(text));
    }

    fn guarded(&mut self, act: impl FnOnce(&mut Shell) -> Result<(), Problem>) {
        match catch_unwind(AssertUnwindSafe(|| act(self))) {
            Ok(Ok(())) => {}
            Ok(Err(problem)) => self.tell(problem),
            Err(_) => self.recover(),
        }
    }

    fn try_statement(&mut self, text: &str) -> Result<(), Problem> {
        let start = text.len() - text.trim_start_matches(['\u{feff}', ' ', '\t']).len();
        let remarks = !self.session.theory().signature.has_hash();
        let line = Line::new(text, start, remarks);
        if line.peek().is_none() {
            return Ok(());
        }
        let Some(word) = first_word(text) else {
            return question::run(self, text);
        };
        let line = line.from(start + word.len());
        if let Some(command) = commands::named(word)
            && !(is_declaration(word) && line.peek().is_some())
        {
            return (command.run)(self, line);
        }
        if is_declaration(word) {
            return question::declare(self, text);
        }
        if let Some(problem) = words::not_yet(word, &line) {
            return Err(problem);
        }
        let asked = question::run(self, text);
        asked.map_err(|problem| {
            if is_reserved(word) {
                problem
            } else {
                suggest(problem, word)
            }
        })
    }

    /// Works on the session, with Ctrl-C and the live line.
    pub fn work<T>(&mut self, act: impl FnOnce(&mut Session, &mut Control<'_>) -> T) -> T {
        let mut live = Live::new(self.screen.has_live_line());
        self.signals.begin_work();
        let done = {
            let mut control = Control {
                stop: self.signals.stop(),
                watch: &mut |progress| live.show(progress),
            };
            // The line must not stay behind a panic either.
            catch_unwind(AssertUnwindSafe(|| act(&mut self.session, &mut control)))
        };
        live.clear();
        self.interrupted = self.signals.end_work();
        match done {
            Ok(done) => done,
            Err(panic) => std::panic::resume_unwind(panic),
        }
    }

    /// Tells a problem and counts it.
    pub fn tell(&mut self, problem: Problem) {
        self.faults += 1;
        self.status = status::worse(self.status, problem.status());
        let problem = self.put_place(problem);
        let text = problem.render(self.screen.problem_look());
        self.screen.problem(&text);
    }

    /// Tells something that is no fault of the line.
    pub fn remark(&mut self, text: &str) {
        let width = self.screen.problem_look().width;
        self.screen
            .problem(&layout::fold_hanging(text, width, 0, 2));
    }

    /// Tells what is worth knowing about a theory that was opened.
    pub fn say_notes(&mut self, notes: &[String]) {
        const MOST: usize = 8;
        for note in notes.iter().take(MOST) {
            self.remark(&format!("Note: {note}."));
        }
        if notes.len() > MOST {
            self.remark(&format!("Note: {} more like this.", notes.len() - MOST));
        }
    }

    /// In a script, what is typed has a file and a line.
    fn put_place(&self, problem: Problem) -> Problem {
        let (Problem::Text(faults), Some((script, number))) = (&problem, &self.place) else {
            return match (problem, &self.place) {
                (Problem::Said { message, help }, Some((script, number))) => Problem::Said {
                    message: format!("{script}:{number}: {message}"),
                    help,
                },
                (problem, _) => problem,
            };
        };
        let moved = |fault: &Diagnostic| {
            let mut fault = fault.clone();
            if fault.source == TYPED && fault.line > 0 {
                fault.source.clone_from(script);
                fault = fault.further_down(number - 1);
            }
            fault
        };
        Problem::Text(faults.iter().map(moved).collect())
    }

    /// Evidence was rejected: says so, and keeps it for the report.
    pub fn report_fault(&mut self, fault: &ProgramFault, evidence: &Evidence) {
        self.status = status::worse(self.status, status::PROGRAM);
        let text = proof::to_json(evidence).to_string();
        let kept = tempfile::Builder::new()
            .prefix("equable-rejected-")
            .suffix(".json")
            .tempfile()
            .and_then(|mut file| {
                std::io::Write::write_all(&mut file, text.as_bytes())?;
                file.keep().map_err(|error| error.error)
            });
        let look = self.screen.problem_look();
        let kept = kept.map(|(_, path)| path);
        let text = show::program_fault(fault, kept.as_deref().ok(), look);
        self.screen.problem(&text);
    }

    /// After a panic: the engine may be in the middle of something, so the session is made again
    /// from the text of the theory, which changes only when a line is done.
    fn recover(&mut self) {
        self.faults += 1;
        self.status = status::worse(self.status, status::PROGRAM);
        let library = self.session.library().clone();
        let made = catch_unwind(AssertUnwindSafe(|| {
            let text = self.session.theory().document.text();
            let mut session = Session::new(None, library);
            session.declare(&text).is_ok().then_some(session)
        }));
        let text = match made {
            Ok(Some(session)) => {
                self.session = session;
                "The session goes on with the laws as they are; answers and derived rules are \
                 forgotten, and save needs the name of a file."
            }
            _ => {
                "The session goes on, but it is wise to save the theory under a new name and open it again."
            }
        };
        self.remark(text);
    }

    /// May the theory be put away? Asks once, if it has changed and somebody can be asked.
    pub fn may_put_away(&mut self) -> bool {
        if !self.session.is_changed() {
            return true;
        }
        let name = self.session.name().to_owned();
        let Some(editor) = &mut self.editor else {
            self.remark(&format!("Note: {name} has changes that were not saved."));
            return true;
        };
        let question =
            format!("{name} has changes that are not saved. Save them? yes, no, or back: ");
        let answer = editor.ask(&question, &self.signals, self.screen.look());
        match answer.trim().to_lowercase().as_str() {
            "y" | "yes" => match self.session.save(None) {
                Ok(path) => {
                    self.out(&format!("saved to {}\n", path.display()));
                    true
                }
                Err(fault) => {
                    self.tell(Problem::save(fault));
                    false
                }
            },
            "n" | "no" => true,
            _ => {
                self.out("Nothing was changed: the theory stays open.\n");
                false
            }
        }
    }

    /// May this file be written? One that is there is replaced only if whoever sits in front says
    /// so. A script says what it means.
    pub fn may_replace(&mut self, path: &Path) -> bool {
        if !path.is_file() {
            return true;
        }
        let Some(editor) = self.editor.as_mut() else {
            return false;
        };
        let question = format!(
            "{} is there already. Replace it? yes or no: ",
            path.display()
        );
        let answer = editor.ask(&question, &self.signals, self.screen.look());
        matches!(answer.trim().to_lowercase().as_str(), "y" | "yes")
    }

    /// Does somebody sit in front of it?
    pub fn is_interactive(&self) -> bool {
        self.editor.is_some()
    }

    /// The theory is put away because there are no more lines.
    pub fn say_unsaved(&mut self) {
        if self.session.is_changed() {
            let name = self.session.name().to_owned();
            self.remark(&format!("Note: {name} has changes that were not saved."));
        }
    }
}

/// Says what command a word was perhaps meant to be.
fn suggest(problem: Problem, word: &str) -> Problem {
    let Problem::Text(mut faults) = problem else {
        return problem;
    };
    let at_start = |fault: &Diagnostic| fault.column == 1 && fault.line == 1;
    if let Some(fault) = faults.first_mut().filter(|fault| at_start(fault))
        && let Some(meant) = words::meant(word)
    {
        fault
            .help
            .insert(0, format!("if a command was meant: {meant}"));
    }
    Problem::Text(faults)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::Library;

    #[test]
    fn after_a_panic_the_laws_are_still_there() {
        let session = Session::new(Some("gauges"), Library::default());
        let mut shell = Shell::new(session, Screen::new(true), Signals::batch());
        shell.statement("constant a b");
        shell.statement("law same: a = b");
        shell.guarded(|_| panic!("on purpose"));
        assert_eq!(shell.faults, 1);
        assert_eq!(shell.status, status::PROGRAM);
        assert_eq!(shell.session.name(), "gauges");
        assert_eq!(shell.session.theory().laws.len(), 1);
        shell.statement("law again: b = a");
        assert_eq!(shell.session.theory().laws.len(), 2);
        assert_eq!(shell.faults, 1);
    }
}
