//! The shell for somebody in front of a terminal: prompt, history, Tab, hints.

mod helper;
mod terminal;

use super::commands::open;
use super::desk::Shell;
use super::lines::{self, Lines, Read};
use super::problem::{Problem, plain_error};
use super::screen::{Ink, Look, Screen};
use super::signals::Signals;
use super::{layout, places, status};
use crate::session::Session;
use helper::Helper;
use rustyline::error::ReadlineError;
use rustyline::history::FileHistory;
use rustyline::{ColorMode, CompletionType, Config, Editor};
use std::path::PathBuf;

/// The line editor with its history.
pub struct LineEditor {
    editor: Editor<Helper, FileHistory>,
    /// Where the history is kept, as long as it can be.
    history: Option<PathBuf>,
}

/// How many lines are remembered.
const REMEMBERED: usize = 5000;

/// Runs the shell until it is left; gives the exit status.
pub fn run(session: Session, mut screen: Screen, file: Option<&str>) -> u8 {
    screen.set_interactive();
    let editor = match LineEditor::new(screen.look().color, &session) {
        Ok(editor) => editor,
        Err(error) => {
            screen.problem(&format!("Error: the terminal cannot be used: {error}\n"));
            return status::PROGRAM;
        }
    };
    let signals = Signals::shell();
    signals.set_farewell(terminal::restorer());
    let mut shell = Shell::new(session, screen, signals);
    shell.editor = Some(editor);
    greet(&mut shell);
    if let Some(file) = file {
        match places::open(file, shell.session.library().clone()) {
            Ok(opened) => open::enter(&mut shell, opened),
            Err(fault) => {
                shell.tell(Problem::open(fault));
                return status::INPUT;
            }
        }
    }
    loop {
        lines::run(&mut shell, &mut Prompted);
        if shell.leaving || shell.signals.is_leaving() || shell.screen.broken().is_some() {
            break;
        }
        // Ctrl-D: leaves like quit.
        if shell.may_put_away() {
            break;
        }
    }
    match shell.screen.broken() {
        Some(error) if error.kind() != std::io::ErrorKind::BrokenPipe => status::PROGRAM,
        _ => status::FINE,
    }
}

fn greet(shell: &mut Shell) {
    let width = shell.look().width;
    let version = env!("CARGO_PKG_VERSION");
    let text = format!("Equable {version}. help lists the commands, theories what can be opened.");
    shell.out(&layout::fold(&text, width, 0));
    let remark = shell.editor.as_mut().and_then(LineEditor::load_history);
    if let Some(remark) = remark {
        shell.remark(&remark);
    }
}

impl LineEditor {
    fn new(color: bool, session: &Session) -> rustyline::Result<LineEditor> {
        let color_mode = if color {
            ColorMode::Enabled
        } else {
            ColorMode::Disabled
        };
        let config = Config::builder()
            .max_history_size(REMEMBERED)?
            .history_ignore_dups(true)?
            .completion_type(CompletionType::List)
            .color_mode(color_mode)
            .build();
        let mut editor = Editor::with_config(config)?;
        editor.set_helper(Some(Helper::new(session.library().clone(), color)));
        Ok(LineEditor {
            editor,
            history: places::history(),
        })
    }

    /// Reads what was typed in earlier sessions. If that is not possible, the history is not kept,
    /// and the remark says so.
    fn load_history(&mut self) -> Option<String> {
        let path = self.history.clone()?;
        let folder = path.parent()?;
        let made = std::fs::create_dir_all(folder);
        let opened = made.and_then(|()| {
            let mut options = std::fs::OpenOptions::new();
            options.append(true).create(true).open(&path).map(drop)
        });
        let loaded = match opened {
            Ok(()) => match self.editor.load_history(&path) {
                Ok(()) => return None,
                Err(error) => error.to_string(),
            },
            Err(error) => plain_error(&error),
        };
        self.history = None;
        Some(format!(
            "Note: what you type is not remembered, because {} cannot be used: {loaded}",
            path.display()
        ))
    }

    /// Remembers a statement.
    fn remember(&mut self, text: &str) {
        if text.trim().is_empty() {
            return;
        }
        let is_new = self.editor.add_history_entry(text).unwrap_or(false);
        if let Some(path) = self.history.as_ref().filter(|_| is_new)
            && self.editor.append_history(path).is_err()
        {
            // It was said at the start if the place is unusable; a full disk is not worth a word
            // after every line.
            self.history = None;
        }
    }

    /// Asks something that is no statement; nothing if the question was refused.
    pub fn ask(&mut self, question: &str, signals: &Signals, look: Look) -> String {
        let mut lines: Vec<String> = layout::fold(question, look.width.saturating_sub(6), 0)
            .lines()
            .map(str::to_owned)
            .collect();
        let prompt = lines.pop().unwrap_or_default() + " ";
        for line in lines {
            // The prompt itself should be one line.
            println_quietly(&line);
        }
        if let Some(helper) = self.editor.helper_mut() {
            helper.set_quiet(true);
        }
        signals.set_waiting(true);
        let answer = self.editor.readline(&prompt).unwrap_or_default();
        signals.set_waiting(false);
        if let Some(helper) = self.editor.helper_mut() {
            helper.set_quiet(false);
        }
        answer
    }
}

fn println_quietly(text: &str) {
    use std::io::Write;
    // The next thing that is written will notice when this cannot be.
    let _ = writeln!(std::io::stdout(), "{text}");
}

/// Lines from the prompt.
struct Prompted;

impl Lines for Prompted {
    fn read(&mut self, shell: &mut Shell, continuing: bool) -> Read {
        let look = shell.look();
        let prompt = prompt(shell.session.name(), continuing, look);
        let Some(editor) = &mut shell.editor else {
            return Read::End;
        };
        if let Some(helper) = editor.editor.helper_mut().filter(|_| !continuing) {
            helper.learn(&shell.session);
        }
        loop {
            shell.signals.set_waiting(true);
            let read = editor.editor.readline(&prompt);
            shell.signals.set_waiting(false);
            match read {
                Ok(text) => {
                    editor.remember(&text);
                    return Read::Text(text);
                }
                Err(ReadlineError::Interrupted) => return Read::Cleared,
                // The terminal has a new size.
                Err(ReadlineError::Signal(_)) => {}
                // Also when the terminal has gone away.
                Err(_) => return Read::End,
            }
        }
    }
}

/// `gauges> `, or as many columns with `… ` at the end.
fn prompt(name: &str, continuing: bool, look: Look) -> (String, String) {
    let name = layout::cut(name, (look.width / 2).max(4));
    let raw = if continuing {
        format!("{}… ", " ".repeat(layout::columns(&name)))
    } else {
        format!("{name}> ")
    };
    let styled = look.ink(Ink::Strong, &raw);
    (raw, styled)
}
