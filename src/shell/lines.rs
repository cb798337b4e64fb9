//! Lines from a pipe, a file or the line editor, put together to statements.

use super::desk::Shell;
use super::line::TYPED;
use super::problem::{Problem, plain_error};
use crate::language::{
    Diagnostic, Fault, Source, first_word, is_declaration, is_open, is_reserved,
};
use std::collections::VecDeque;
use std::io::BufRead;

/// What a source of lines gives.
pub enum Read {
    /// One or more lines, without the last line end.
    Text(String),
    /// Ctrl-C: what was begun is forgotten.
    Cleared,
    /// There are no more.
    End,
}

/// Where lines come from.
pub trait Lines {
    /// The next line. `continuing` says that a statement is open.
    fn read(&mut self, shell: &mut Shell, continuing: bool) -> Read;
}

/// Carries out all statements of a source.
pub fn run(shell: &mut Shell, lines: &mut dyn Lines) {
    let mut ahead = Ahead::default();
    while !shell.leaving && shell.screen.broken().is_none() && !shell.signals.is_leaving() {
        let Some(text) = statement(shell, lines, &mut ahead) else {
            break;
        };
        shell.statement(&text);
        if shell.interrupted && shell.place.is_some() {
            break;
        }
    }
}

/// Lines that were read and not used yet.
#[derive(Default)]
struct Ahead {
    lines: VecDeque<String>,
}

impl Ahead {
    fn next(&mut self, shell: &mut Shell, lines: &mut dyn Lines, continuing: bool) -> Read {
        if let Some(line) = self.lines.pop_front() {
            return Read::Text(line);
        }
        match lines.read(shell, continuing) {
            Read::Text(text) => {
                self.lines.extend(text.split('\n').map(str::to_owned));
                Read::Text(self.lines.pop_front().unwrap_or_default())
            }
            other => other,
        }
    }
}

/// The next statement, with all the lines that it takes.
fn statement(shell: &mut Shell, lines: &mut dyn Lines, ahead: &mut Ahead) -> Option<String> {
    'anew: loop {
        let mut text = match ahead.next(shell, lines, false) {
            Read::Text(text) => text,
            Read::Cleared => continue,
            Read::End => return None,
        };
        let first = text.clone();
        count_line(shell);
        let mut more = 0;
        while is_open(&shell.session.theory().signature, &text) {
            match ahead.next(shell, lines, true) {
                Read::Text(line) => {
                    let new = first_word(&line).is_some_and(is_reserved);
                    if new {
                        // With the new line behind it the message says what is still open where.
                        if first_word(&first).is_some_and(is_declaration) {
                            text += &format!("\n{line}");
                        }
                        ahead.lines.push_front(line);
                        break;
                    }
                    text += &format!("\n{line}");
                    more += 1;
                }
                Read::Cleared => {
                    ahead.lines.clear();
                    continue 'anew;
                }
                Read::End => break,
            }
        }
        // The place stays that of the first line while the statement is carried out.
        shell.pending_lines = more;
        return Some(text);
    }
}

fn count_line(shell: &mut Shell) {
    let pending = std::mem::take(&mut shell.pending_lines);
    if let Some((_, number)) = &mut shell.place {
        *number += 1 + pending;
    }
}

/// Lines of a pipe or a file.
pub struct Piped<R> {
    reader: R,
}

impl<R: BufRead> Piped<R> {
    /// Lines of a reader.
    pub fn new(reader: R) -> Self {
        Piped { reader }
    }
}

impl<R: BufRead> Lines for Piped<R> {
    fn read(&mut self, shell: &mut Shell, _continuing: bool) -> Read {
        loop {
            let mut bytes = Vec::new();
            match self.reader.read_until(b'\n', &mut bytes) {
                Ok(0) => return Read::End,
                Ok(_) => {}
                Err(error) => {
                    let message = format!("reading stopped: {}", plain_error(&error));
                    shell.tell(Problem::said(message, "look at where the lines come from"));
                    return Read::End;
                }
            }
            while matches!(bytes.last(), Some(b'\n' | b'\r')) {
                bytes.pop();
            }
            match text(bytes) {
                Ok(text) => return Read::Text(text),
                Err(fault) => {
                    count_line(shell);
                    shell.tell(Problem::Text(vec![fault]));
                }
            }
        }
    }
}

fn text(bytes: Vec<u8>) -> Result<String, Diagnostic> {
    let (text, at, message, help) = match String::from_utf8(bytes) {
        Ok(text) => match text.find('\0') {
            None => return Ok(text),
            Some(at) => (
                text,
                at,
                "there is a NUL byte in the line",
                "lines are text in UTF-8",
            ),
        },
        Err(error) => {
            let at = error.utf8_error().valid_up_to();
            let text = String::from_utf8_lossy(error.as_bytes()).into_owned();
            (
                text,
                at,
                "the line is not UTF-8 text",
                "save the script in UTF-8",
            )
        }
    };
    let width = text[at..].chars().next().map_or(0, char::len_utf8);
    let fault = Fault::new(at..at + width, message)
        .label("this byte")
        .help(help);
    let source = Source {
        name: TYPED,
        text: &text,
    };
    Err(Diagnostic::new(source, fault))
}
