//! One statement of a theory.

use super::diagnostic::{Diagnostic, Fault, Source};
use super::lexer::{Kind, Lexer, Token};
use super::split::next_piece;
use super::term::shown;
use super::using::{Loader, Uses};
use super::words::{DECLARATIONS, is_declaration, nearest};
use super::{derived, laws, order, property, symbols, using};
use crate::term::{Sort, Symbol};
use crate::theory::{LineId, Theory};
use std::ops::Range;

/// What a declaration added or changed.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum Change {
    /// The theory has a name.
    Named(String),
    /// A remark.
    Note(String),
    /// Another theory was taken in.
    Used(String),
    /// A sort.
    Sort(Sort),
    /// A symbol.
    Symbol(Symbol),
    /// A variable, by its number in the signature.
    Variable(u32),
    /// A law, rule or definition, by its name.
    Law(String),
    /// A claim, by its place in the list.
    Claim(usize),
    /// The order was set, or left to the program.
    Order,
    /// A derived rule, by its number.
    Derived(u32),
}

/// Where statements come from and what that means for them.
pub(crate) struct Context<'c> {
    /// Finds other theories.
    pub loader: &'c dyn Loader,
    /// The line that the statement will have, or the `use` line that brings it.
    pub line: LineId,
    /// How many lines of the text come before the statement; 0 where nobody asks.
    pub lines_before: usize,
    /// Was it typed, and may replace what can be there only once?
    pub typed: bool,
    /// Theories that are being read, the innermost last.
    pub uses: Uses,
}

/// A statement under way.
pub(crate) struct Statement<'a, 'c, 't> {
    /// The theory that it adds to.
    pub theory: &'a mut Theory,
    /// The text that it is in.
    pub source: Source<'t>,
    /// Where in the text it is.
    pub range: Range<usize>,
    /// Where it comes from.
    pub context: &'a mut Context<'c>,
}

impl Theory {
    /// Takes in what was typed: one declaration, or several lines of them. The text becomes part of
    /// the document. On error the theory is as before.
    pub fn declare(
        &mut self,
        text: &str,
        source: &str,
        loader: &dyn Loader,
    ) -> Result<Vec<Change>, Vec<Diagnostic>> {
        let source = Source { name: source, text };
        let mut changes = Vec::new();
        let mut backup = None;
        let mut at = 0;
        while let Some(piece) = next_piece(text, at, &self.signature) {
            at = piece.range.end;
            if at < text.len() && backup.is_none() {
                backup = Some(self.clone());
            }
            let mut context = Context {
                loader,
                line: self.document.next_id(),
                lines_before: 0,
                typed: true,
                uses: Uses::default(),
            };
            let done = match piece.interrupted {
                Some(fault) => Err(vec![fault.at(source)]),
                None => statement(self, source, piece.range.clone(), &mut context),
            };
            match done {
                Ok(more) => changes.extend(more),
                Err(faults) => {
                    if let Some(backup) = backup {
                        *self = backup;
                    }
                    return Err(faults);
                }
            }
            let before = self.derived.first().map(|rule| rule.line);
            self.document.insert(&text[piece.range], before);
        }
        Ok(changes)
    }
}

/// Takes in one statement; on error the theory is as before. The document is the caller's
/// business.
pub(crate) fn statement(
    theory: &mut Theory,
    source: Source<'_>,
    range: Range<usize>,
    context: &mut Context<'_>,
) -> Result<Vec<Change>, Vec<Diagnostic>> {
    let mark = theory.bank.mark();
    let mut made = Statement {
        theory,
        source,
        range,
        context,
    };
    let done = made.take();
    if done.is_err() {
        theory.bank.rollback(mark);
    }
    done
}

impl<'t> Statement<'_, '_, 't> {
    /// The tokens of the statement.
    pub fn lexer(&self) -> Lexer<'_, 't> {
        Lexer::new(self.source.text, self.range.clone(), &self.theory.signature)
    }

    fn take(&mut self) -> Result<Vec<Change>, Vec<Diagnostic>> {
        let mut lexer = self.lexer();
        let first = lexer.next();
        let rest = lexer.at();
        let result = first.and_then(|first| self.dispatch(first, rest));
        match result {
            Ok(Taken::Done(changes)) => Ok(changes),
            Ok(Taken::Use) => using::take(self, rest),
            Err(fault) => Err(vec![fault.at(self.source)]),
        }
    }

    fn dispatch(&mut self, first: Token<'t>, rest: usize) -> Result<Taken, Fault> {
        let word = match &first.kind {
            Kind::End => return Ok(Taken::Done(Vec::new())),
            Kind::Reserved(word) => *word,
            _ => return Err(self.no_declaration(&first)),
        };
        let borrowed = self.context.uses.current().is_some();
        let changes = match word {
            // What concerns only the other theory itself is read past.
            "theory" | "note" | "claim" | "order" | "derived" if borrowed => Vec::new(),
            "use" => return Ok(Taken::Use),
            "theory" => self.name(rest)?,
            "note" => self.note(rest),
            "sort" => symbols::sorts(self, rest)?,
            "constant" => symbols::constants(self, rest)?,
            "variable" => symbols::variables(self, rest)?,
            "function" => symbols::function(self, rest)?,
            "infix" | "prefix" | "postfix" => symbols::operator(self, word, rest)?,
            "law" if property::is_property(self, rest) => property::take(self, rest)?,
            "law" | "rule" => laws::law(self, word, rest)?,
            "define" => laws::define(self, rest)?,
            "claim" => laws::claim(self, rest)?,
            "order" => order::take(self, rest)?,
            "derived" => derived::take(self, rest)?,
            _ => return Err(no_file_word(word, first.span)),
        };
        Ok(Taken::Done(changes))
    }

    fn name(&mut self, rest: usize) -> Result<Vec<Change>, Fault> {
        let mut lexer = self.lexer();
        lexer.back_to(rest);
        let Some((name, span)) = lexer.law_name()? else {
            let span = lexer.next()?.span;
            return Err(Fault::new(span, "the name of the theory is missing").help(
                "write theory NAME; names of theories begin with a letter, or are in quotes",
            ));
        };
        end(&mut lexer)?;
        if let Some(line) = self.theory.name_line {
            if !self.context.typed {
                let number = self.theory.document.number(line).unwrap_or(0);
                return Err(Fault::new(span, "the theory has a name already")
                    .label("a second name")
                    .help(format!("take this line or line {number} out")));
            }
            self.theory.document.remove(line);
        }
        self.theory.name_line = Some(self.context.line);
        self.theory.name = Some(name.clone());
        Ok(vec![Change::Named(name)])
    }

    fn note(&mut self, rest: usize) -> Vec<Change> {
        let mut lexer = self.lexer();
        lexer.back_to(rest);
        let note = lexer.remark_free_rest().0.to_owned();
        self.theory.notes.push(note.clone());
        vec![Change::Note(note)]
    }

    /// A line that begins with no word of a declaration.
    fn no_declaration(&self, first: &Token<'_>) -> Fault {
        let line = self.source.text[self.range.clone()].trim_end();
        let end = self.range.start + line.find('\n').unwrap_or(line.len());
        if let Kind::Name(word) = &first.kind
            && let Some(near) = nearest(word, DECLARATIONS.iter().copied())
        {
            return Fault::new(
                first.span.clone(),
                format!("no line of a theory begins with {}", shown(word)),
            )
            .label("not a word of a declaration")
            .help(format!("did you mean {near}?"));
        }
        Fault::new(
            first.span.start..end.max(first.span.end),
            "this is not a declaration",
        )
        .label("a question, or a declaration without its first word")
        .help("a law is written law NAME: s = t, a claim claim NAME: s = t")
        .help("a theory holds declarations only; questions are asked in the shell")
    }
}

enum Taken {
    Done(Vec<Change>),
    Use,
}

fn no_file_word(word: &str, span: Range<usize>) -> Fault {
    debug_assert!(!is_declaration(word));
    Fault::new(span, format!("`{word}` does not begin a declaration"))
        .label("not part of a theory")
        .help("a theory holds declarations only; commands and questions are for the shell")
}

/// Checks that nothing is left.
pub(crate) fn end(lexer: &mut Lexer<'_, '_>) -> Result<(), Fault> {
    let token = lexer.next()?;
    match token.kind {
        Kind::End => Ok(()),
        Kind::Close => Err(Fault::new(token.span, "this bracket was never opened")
            .label("no bracket to close")
            .help("take it away, or put the opening bracket where it belongs")),
        _ => Err(Fault::new(token.span, "the statement should end here")
            .label("this is more than expected")
            .help("put the rest on a line of its own, or make it a remark with #")),
    }
}
