//! Terms and equations that are typed outside declarations.

use super::diagnostic::{Diagnostic, Source};
use super::laws::finish;
use super::lexer::{Kind, Lexer};
use super::term::TermReader;
use crate::term::TermId;
use crate::theory::Theory;
use std::ops::Range;

/// What was asked; the terms are in the bank of the theory.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Question {
    /// A term.
    Term(TermId),
    /// An equation.
    Equation(TermId, TermId),
    /// `s != t`
    Inequation(TermId, TermId),
}

/// Reads a question that takes the whole text; a `?` before it is read past. `it` is what the name
/// `it` stands for, unless the theory declares it.
///
/// The bank grows by what is read; the caller may roll it back.
pub fn parse_question(
    theory: &mut Theory,
    source: &str,
    text: &str,
    it: Option<TermId>,
) -> Result<Question, Diagnostic> {
    let blank = |c: char| c.is_whitespace() || c == '\u{feff}';
    let start = text.len() - text.trim_start_matches(blank).len();
    let start = start + usize::from(text[start..].starts_with('?'));
    let range = start..text.len();
    parse(theory, source, text, range, it, true).map(|(question, _)| question)
}

/// Reads a question that begins at `range.start` and ends at the first token that cannot be part
/// of it; gives the place of that token. For commands such as `prove s = t within 60s`.
pub fn parse_question_prefix(
    theory: &mut Theory,
    source: &str,
    text: &str,
    range: Range<usize>,
    it: Option<TermId>,
) -> Result<(Question, usize), Diagnostic> {
    parse(theory, source, text, range, it, false)
}

fn parse(
    theory: &mut Theory,
    name: &str,
    text: &str,
    range: Range<usize>,
    it: Option<TermId>,
    whole: bool,
) -> Result<(Question, usize), Diagnostic> {
    let source = Source { name, text };
    let mark = theory.bank.mark();
    let lexer = Lexer::new(text, range, &theory.signature);
    let mut reader = TermReader::new(lexer, &theory.signature, &mut theory.bank);
    reader.it = it;
    let mut read = || {
        let left = reader.term(None)?;
        let token = reader.lexer.peek()?;
        let question = match token.kind {
            Kind::Equal | Kind::NotEqual => {
                reader.lexer.next()?;
                let right = reader.other_side(&left)?;
                if token.kind == Kind::Equal {
                    Question::Equation(left.term, right.term)
                } else {
                    Question::Inequation(left.term, right.term)
                }
            }
            _ => Question::Term(left.term),
        };
        if whole {
            finish(&mut reader)?;
        }
        Ok((question, reader.lexer.peek()?.span.start))
    };
    let result = read().map_err(|fault: super::Fault| fault.at(source));
    if result.is_err() {
        theory.bank.rollback(mark);
    }
    result
}

/// The name of a law, claim or rule at the start of a command's argument, and the text behind it.
///
/// A name in quotes, or the longest of `known` that the text begins with (such as
/// `+ associative`), or a plain name.
pub fn law_name<'t, 'n>(
    text: &'t str,
    known: impl Iterator<Item = &'n str>,
) -> Option<(String, &'t str)> {
    let text = text.trim_start();
    if let Some(inside) = text.strip_prefix('"') {
        let end = inside.find('"')?;
        return Some((inside[..end].to_owned(), &inside[end + 1..]));
    }
    let whole = |name: &&str| {
        text.strip_prefix(*name).is_some_and(|rest| {
            let boundary = |c: char| c.is_whitespace() || matches!(c, ',' | ':' | ')');
            rest.is_empty() || rest.starts_with(boundary)
        })
    };
    if let Some(name) = known.filter(whole).max_by_key(|name| name.len()) {
        return Some((name.to_owned(), &text[name.len()..]));
    }
    let end = text
        .find(|c: char| c.is_whitespace() || matches!(c, ',' | ':'))
        .unwrap_or(text.len());
    (end > 0).then(|| (text[..end].to_owned(), &text[end..]))
}
