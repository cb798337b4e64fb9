//! Questions with unknowns: `find x y: s = t`.

use super::diagnostic::{Diagnostic, Fault, Source};
use super::lexer::{Kind, Lexer};
use super::term::{TermReader, shown};
use crate::term::{Bank, TermId};
use crate::theory::{Signature, Theory};
use std::ops::Range;

/// A question for values; the terms are in the bank of the theory.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Find {
    /// The unknowns, by their numbers in the signature; each occurs in a side.
    pub unknowns: Vec<u32>,
    /// The left side.
    pub left: TermId,
    /// The right side.
    pub right: TermId,
}

/// The unknowns of a question, with their places.
pub(super) type Unknowns = Vec<(u32, Range<usize>)>;

const FORM: &str = "write find x y: s = t, with the unknowns before the colon";

/// Reads `x y: s = t` at `from`, behind the word `find`, up to the first token that cannot be part
/// of it; gives the place of that token.
///
/// # Errors
///
/// What is no such question. The bank is then as before.
pub fn parse_find(
    theory: &mut Theory,
    source: &str,
    text: &str,
    from: usize,
    it: Option<TermId>,
) -> Result<(Find, usize), Diagnostic> {
    let mark = theory.bank.mark();
    let read = read(theory, text, from, it);
    read.map_err(|fault| {
        theory.bank.rollback(mark);
        fault.at(Source { name: source, text })
    })
}

fn read(
    theory: &mut Theory,
    text: &str,
    from: usize,
    it: Option<TermId>,
) -> Result<(Find, usize), Fault> {
    let mut lexer = Lexer::new(text, from..text.len(), &theory.signature);
    let unknowns = list(&mut lexer)?;
    let mut reader = TermReader::new(lexer, &theory.signature, &mut theory.bank);
    reader.it = it;
    let left = reader.term(None)?;
    let token = reader.lexer.next()?;
    if token.kind != Kind::Equal {
        return Err(no_equation(token.span));
    }
    let right = reader.other_side(&left)?;
    let end = reader.lexer.peek()?.span.start;
    let (left, right) = (left.term, right.term);
    check(&theory.bank, &theory.signature, &unknowns, (left, right))?;
    let unknowns = unknowns.into_iter().map(|(index, _)| index).collect();
    let find = Find {
        unknowns,
        left,
        right,
    };
    Ok((find, end))
}

/// The message where `=` is missing between the sides.
pub(super) fn no_equation(span: Range<usize>) -> Fault {
    Fault::new(span, "find looks for values that make two terms equal")
        .label("= is expected here")
        .help(FORM)
}

/// The unknowns up to the colon, each once.
pub(super) fn list(lexer: &mut Lexer<'_, '_>) -> Result<Unknowns, Fault> {
    let mut unknowns: Unknowns = Vec::new();
    loop {
        let token = lexer.next()?;
        let name = match &token.kind {
            Kind::Name(name) | Kind::Quoted(name) | Kind::Sign(name) => name,
            Kind::Colon if !unknowns.is_empty() => return Ok(unknowns),
            Kind::Comma if !unknowns.is_empty() => continue,
            _ => {
                return Err(Fault::new(token.span, "an unknown is expected here").help(FORM));
            }
        };
        let meaning = lexer.signature().meaning(name).unwrap_or_default();
        let Some(index) = meaning.variable else {
            return Err(
                Fault::new(token.span, format!("{} is not a variable", shown(name)))
                    .label("unknowns are variables")
                    .help(FORM)
                    .help(format!("declare it, if it is new: variable {name}")),
            );
        };
        if unknowns.iter().any(|(known, _)| *known == index) {
            return Err(
                Fault::new(token.span, format!("{} stands here twice", shown(name)))
                    .label("a second time")
                    .help(FORM),
            );
        }
        unknowns.push((index, token.span));
    }
}

/// Checks that each unknown occurs in a side.
pub(super) fn check(
    bank: &Bank,
    signature: &Signature,
    unknowns: &Unknowns,
    (left, right): (TermId, TermId),
) -> Result<(), Fault> {
    if unknowns.is_empty() {
        return Ok(());
    }
    let mut occurring = bank.variables(left);
    occurring.extend(bank.variables(right));
    let missing = unknowns
        .iter()
        .find(|(index, _)| occurring.iter().all(|variable| variable.index != *index));
    match missing {
        None => Ok(()),
        Some((index, span)) => {
            let name = shown(&signature.variables()[*index as usize].name);
            Err(Fault::new(
                span.clone(),
                format!("{name} does not occur in the equation"),
            )
            .label("any value would do")
            .help("take it out, or put it into one of the sides"))
        }
    }
}
