//! What is said of terms that cannot be read.

use super::{TermReader, Waiting};
use crate::language::diagnostic::Fault;
use crate::language::lexer::Kind;
use crate::language::unknown::{self, Position};
use crate::term::{Sort, Symbol};
use crate::theory::{Fixity, Meaning, Side, Signature};
use std::ops::Range;

impl TermReader<'_, '_, '_> {
    /// Two terms side by side.
    pub(in crate::language) fn adjacent(&self, name: &str, span: Range<usize>) -> Fault {
        let meaning = self.signature.meaning(name).unwrap_or_default();
        if meaning == Meaning::default() {
            return self.unknown(name, span, Position::Operator, None);
        }
        if meaning.prefix.is_some() && meaning.symbol.is_none() {
            return Fault::new(span, format!("{} stands before its argument", shown(name)))
                .label("an infix operator is missing before this")
                .help(format!("declare it as one too: infix {name} 40 left"));
        }
        let declaration = meaning
            .symbol
            .and_then(|symbol| self.signature.symbol(symbol));
        if let Some(function) = declaration.filter(|d| d.arguments.len() == 2) {
            return Fault::new(
                span,
                format!(
                    "{} is a function and does not stand between its arguments",
                    shown(name)
                ),
            )
            .label("a function")
            .help(format!("write {}", call_example(&function.name, 2)))
            .help(format!(
                "or declare it as an operator: infix {name} 40 left"
            ));
        }
        Fault::new(
            span,
            format!("an operator is missing before {}", shown(name)),
        )
        .label("a second term begins here")
        .help("put an infix operator between the two terms")
    }

    pub(super) fn unknown(
        &self,
        name: &str,
        span: Range<usize>,
        position: Position,
        expected: Option<Sort>,
    ) -> Fault {
        let in_place = match self.waiting.last() {
            None => expected,
            Some(Waiting::Bracket(_)) => None,
            Some(Waiting::Prefix { symbol, .. }) => self.argument_sort(*symbol, 0),
            Some(Waiting::Infix { symbol, .. }) => self.argument_sort(*symbol, 1),
            Some(Waiting::Call { symbol, first, .. }) => {
                self.argument_sort(*symbol, self.operands.len() - *first as usize)
            }
        };
        // What stands behind the name may take it before what waits does.
        let behind = unknown::operator_behind(self.signature, self.lexer);
        let behind = behind.filter(|(fixity, _)| self.is_taken_by(*fixity));
        let expected = behind.map(|(_, sort)| sort).or(in_place);
        unknown::fault(self.signature, self.lexer, name, span, position, expected)
    }

    /// Does an operator right behind an operand take it, and not the operator that waits?
    fn is_taken_by(&self, next: Fixity) -> bool {
        let Fixity::Infix { strength, side } = next else {
            return true;
        };
        match self.waiting.last() {
            Some(Waiting::Infix {
                strength: before,
                side: waiting,
                ..
            }) => {
                strength > *before
                    || (strength == *before && side == Side::Right && *waiting == Side::Right)
            }
            Some(Waiting::Prefix {
                strength: before, ..
            }) => strength > *before,
            _ => true,
        }
    }

    pub(super) fn argument_sort(&self, symbol: Symbol, place: usize) -> Option<Sort> {
        let declaration = &self.signature.symbols()[symbol.index()];
        declaration.arguments.get(place).copied()
    }

    pub(super) fn reserved(&self, word: &str, span: Range<usize>) -> Fault {
        let fault = Fault::new(
            span.clone(),
            format!("{word} is a word of the shell, not a name"),
        )
        .label("a term is expected here")
        .help(format!("write \"{word}\" in quotes to have it as a name"));
        match self.open_bracket() {
            Some(bracket) => fault.also(bracket, "this bracket is still open"),
            None => fault,
        }
    }

    /// A token in the place of an operand with which no operand begins.
    pub(super) fn missing(&self, kind: &Kind<'_>, span: Range<usize>) -> Fault {
        let fault = match self.waiting.last() {
            Some(Waiting::Infix { symbol, .. } | Waiting::Prefix { symbol, .. }) => {
                let name = &self.signature.symbols()[symbol.index()].name;
                Fault::new(span, format!("{} has nothing behind it", shown(name)))
                    .help("write the term that it should apply to")
            }
            Some(Waiting::Call { symbol, .. }) => {
                let declaration = &self.signature.symbols()[symbol.index()];
                let count = declaration.arguments.len();
                Fault::new(
                    span,
                    format!("an argument of {} is missing", shown(&declaration.name)),
                )
                .help(format!("write {}", call_example(&declaration.name, count)))
            }
            Some(Waiting::Bracket(_)) if *kind == Kind::Close => {
                Fault::new(span, "there is nothing in these brackets")
                    .help("write a term in them, or take them away")
            }
            _ => Fault::new(span, "a term is missing here").help("write a term"),
        };
        match self.open_bracket() {
            Some(bracket) if *kind == Kind::End => {
                fault.also(bracket, "this bracket is still open")
            }
            _ => fault.label("a term is expected here"),
        }
    }

    pub(super) fn misplaced(&self, name: &str, span: Range<usize>, fixity: Fixity) -> Fault {
        let (what, example) = match fixity {
            Fixity::Postfix { .. } => ("behind its argument", format!("x{name}")),
            _ => ("between its arguments", format!("x {name} y")),
        };
        Fault::new(span, format!("{} stands {what}", shown(name)))
            .label("a term is missing before this")
            .help(format!("write {example}"))
    }
}

/// The fault for a bracket that is open where the term must end.
pub(super) fn unclosed(bracket: Range<usize>, kind: &Kind<'_>, span: Range<usize>) -> Fault {
    let before = match kind {
        Kind::End => "the line ends".to_owned(),
        Kind::Reserved(word) => format!("`{word}`"),
        Kind::Equal => "`=`".to_owned(),
        Kind::NotEqual => "`!=`".to_owned(),
        Kind::Colon => "`:`".to_owned(),
        Kind::Arrow => "`->`".to_owned(),
        _ => "this".to_owned(),
    };
    Fault::new(
        bracket,
        format!("this bracket is not closed before {before}"),
    )
    .label("opened here")
    .also(span, "it should be closed before this")
    .help("close it with )")
}

/// A name in a message, shortened if it is long.
pub(in crate::language) fn shown(name: &str) -> String {
    let mut short: String = name.chars().take(40).collect();
    if short.len() < name.len() {
        short.push('…');
    }
    format!("`{short}`")
}

/// `a List`, `an Item`.
pub(super) fn with_article(sort: &str) -> String {
    let is_vowel = |c: char| "aeiou".contains(c.to_ascii_lowercase());
    let article = if sort.starts_with(is_vowel) {
        "an"
    } else {
        "a"
    };
    format!("{article} {sort}")
}

/// `1 argument`, `2 arguments`.
pub(in crate::language) fn arguments(count: usize) -> String {
    match count {
        0 => "no arguments".to_owned(),
        1 => "1 argument".to_owned(),
        count => format!("{count} arguments"),
    }
}

/// How a function with this many arguments is written.
pub(super) fn call_example(name: &str, count: usize) -> String {
    let names = ["x", "y", "z", "u", "v"];
    match names.get(..count) {
        Some(names) => format!("{name}({})", names.join(", ")),
        None => format!("{name}(x1, …, x{count})"),
    }
}

pub(super) fn argument_place(fixity: Fixity, place: usize) -> String {
    match (fixity, place) {
        (Fixity::Infix { .. }, 0) => "on its left".to_owned(),
        (Fixity::Infix { .. }, _) => "on its right".to_owned(),
        (Fixity::Plain, _) => format!("as argument {}", place + 1),
        _ => "as its argument".to_owned(),
    }
}

/// The type of a symbol as a declaration states it.
pub(in crate::language) fn type_of(signature: &Signature, symbol: Symbol) -> String {
    let declaration = &signature.symbols()[symbol.index()];
    let result = signature.sort_name(declaration.result);
    let names = declaration
        .arguments
        .iter()
        .map(|sort| signature.sort_name(*sort));
    match names.collect::<Vec<_>>() {
        names if names.is_empty() => result.to_owned(),
        names => format!("{} -> {result}", names.join(" ")),
    }
}
