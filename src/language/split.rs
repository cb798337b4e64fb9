//! Where a statement ends.

use super::diagnostic::Fault;
use super::lexer::{Kind, Lexer};
use super::words::{first_word, is_reserved};
use crate::theory::{Fixity, Signature};
use std::ops::Range;

/// A statement, with all the lines that it takes, or a line that states nothing.
pub(crate) struct Piece {
    /// Its lines, the last line end included.
    pub range: Range<usize>,
    /// What is wrong, if a line that begins with a reserved word came before the statement was
    /// finished.
    pub interrupted: Option<Fault>,
}

/// The piece of a text that begins at `at`; none at the end of the text. Costs time linear in the
/// length of the piece.
pub(crate) fn next_piece(text: &str, at: usize, signature: &Signature) -> Option<Piece> {
    if at >= text.len() {
        return None;
    }
    let mut end = line_end(text, at);
    let mut openness = Openness::new(text, at..end, signature);
    let mut interrupted = None;
    while openness.is_open() && end < text.len() {
        let next = line_end(text, end);
        if let Some(word) = first_word(&text[end..next]).filter(|word| is_reserved(word)) {
            interrupted = Some(interruption(text, at..end, end..next, word, signature));
            break;
        }
        openness.go_on(text, end..next, signature);
        end = next;
    }
    Some(Piece {
        range: at..end,
        interrupted,
    })
}

/// Does the statement go on in the next line? It does while a bracket is open, or after `=` or an
/// infix operator at its end inside a term.
pub fn is_open(signature: &Signature, text: &str) -> bool {
    let end = line_end(text, 0);
    let mut openness = Openness::new(text, 0..end, signature);
    openness.go_on(text, end..text.len(), signature);
    openness.is_open()
}

/// What is known about a statement so far.
struct Openness {
    has_terms: bool,
    depth: usize,
    ends_with_operator: bool,
    /// Something cannot be read: waiting for more lines would not help.
    broken: bool,
}

impl Openness {
    fn new(text: &str, line: Range<usize>, signature: &Signature) -> Self {
        let mut made = Openness {
            has_terms: has_terms(text, line.clone(), signature),
            depth: 0,
            ends_with_operator: false,
            broken: false,
        };
        made.go_on(text, line, signature);
        made
    }

    fn is_open(&self) -> bool {
        self.has_terms && !self.broken && (self.depth > 0 || self.ends_with_operator)
    }

    fn go_on(&mut self, text: &str, lines: Range<usize>, signature: &Signature) {
        if !self.has_terms {
            return;
        }
        let mut lexer = Lexer::new(text, lines, signature);
        loop {
            let Ok(token) = lexer.next() else {
                self.broken = true;
                return;
            };
            self.ends_with_operator = match token.kind {
                Kind::End => return,
                Kind::Open => {
                    self.depth += 1;
                    false
                }
                Kind::Close => {
                    self.depth = self.depth.saturating_sub(1);
                    false
                }
                Kind::Equal | Kind::NotEqual | Kind::Arrow => true,
                Kind::Name(name) | Kind::Sign(name) | Kind::Quoted(name) => {
                    is_infix(signature, &name)
                }
                _ => false,
            };
        }
    }
}

fn is_infix(signature: &Signature, name: &str) -> bool {
    let symbol = signature.meaning(name).and_then(|meaning| meaning.symbol);
    let fixity = symbol.map(|symbol| signature.symbols()[symbol.index()].fixity);
    matches!(fixity, Some(Fixity::Infix { .. }))
}

/// Can a statement that begins like this go on in the next line? A line of properties cannot, nor can
/// the record of a derived rule, whatever words are infix operators.
fn has_terms(text: &str, line: Range<usize>, signature: &Signature) -> bool {
    let Some(word) = first_word(&text[line.clone()]).filter(|word| is_reserved(word)) else {
        return true;
    };
    match word {
        "law" => {
            let mut lexer = Lexer::new(text, line, signature);
            let mut token = || lexer.next().map(|token| token.kind);
            let (_, _, third) = (token(), token(), token());
            third != Ok(Kind::Reserved("is"))
        }
        "rule" | "define" | "claim" | "given" | "trace" | "apply" | "find" | "prove"
        | "separate" | "closed" | "evaluate" | "replace" => true,
        _ => false,
    }
}

fn line_end(text: &str, at: usize) -> usize {
    text[at..].find('\n').map_or(text.len(), |end| at + end + 1)
}

fn interruption(
    text: &str,
    statement: Range<usize>,
    line: Range<usize>,
    word: &str,
    signature: &Signature,
) -> Fault {
    let start = line.start + text[line.clone()].find(word).unwrap_or(0);
    let span = start..start + word.len();
    let help =
        format!("finish the statement above; to have {word} as a name, write \"{word}\" in quotes");
    match innermost_bracket(text, statement.clone(), signature) {
        Some(bracket) => Fault::new(span, "a bracket is still open where this line begins")
            .label("a new statement begins")
            .also(bracket..bracket + 1, "the bracket was opened here")
            .help(help),
        None => Fault::new(span, "the statement above is not finished")
            .label("a new statement begins")
            .also(statement.start..statement.start, "it begins here")
            .help(help),
    }
}

fn innermost_bracket(text: &str, range: Range<usize>, signature: &Signature) -> Option<usize> {
    let mut lexer = Lexer::new(text, range, signature);
    let mut open = Vec::new();
    while let Ok(token) = lexer.next() {
        match token.kind {
            Kind::Open => open.push(token.span.start),
            Kind::Close => {
                open.pop();
            }
            Kind::End => break,
            _ => {}
        }
    }
    open.pop()
}
