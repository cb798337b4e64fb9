//! The message about a name that was never declared.

use super::diagnostic::Fault;
use super::lexer::{Kind, Lexer};
use super::term::shown;
use super::words::{nearest, quote_symbol};
use crate::term::Sort;
use crate::theory::{Fixity, Signature};
use std::ops::Range;

/// Where the name stands.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(crate) enum Position {
    /// Where a term begins.
    Operand,
    /// Behind a term.
    Operator,
}

/// The message, with the two likely declarations and the nearest name. `after` stands behind the
/// name; `expected` is the sort that its place asks for, if that is known.
pub(crate) fn fault(
    signature: &Signature,
    after: Lexer<'_, '_>,
    name: &str,
    span: Range<usize>,
    position: Position,
    expected: Option<Sort>,
) -> Fault {
    let mut fault = Fault::new(span, format!("{} was never declared", shown(name)))
        .label("no meaning for this");
    if let Some(near) = nearest(name, signature.names()) {
        fault = fault.help(format!("did you mean {}?", shown(near)));
    }
    if name.len() > 60 {
        return fault.help("declare it with `variable` or `constant`");
    }
    let quoted = quote_symbol(name);
    let is_sign = !name.starts_with(|c: char| c.is_alphanumeric() || c == '_');
    let count = call_arguments(after);
    match (position, is_sign, count) {
        (Position::Operator, _, _) => fault.help(format!(
            "declare it: infix {quoted} 40 left, or postfix {quoted} 80{}",
            typed_hint(signature)
        )),
        (Position::Operand, _, Some(count)) if !is_sign => {
            let parameters = ["x", "y", "z", "u", "v", "w"].get(..count);
            let define =
                parameters.map(|names| format!(", or define {quoted}({}) = …", names.join(", ")));
            fault.help(format!(
                "declare it: function {quoted} {}{}",
                function_type(signature, count, expected),
                define.unwrap_or_default()
            ))
        }
        (Position::Operand, true, _) => fault.help(format!(
            "declare it: prefix {quoted} 60, or constant {quoted}{}",
            typed_hint(signature)
        )),
        _ => {
            let typed = match expected {
                Some(sort) if signature.has_sorts() => {
                    format!(" : {}", signature.sort_name(sort))
                }
                _ if signature.sorts().len() > 1 => " : SORT".to_owned(),
                _ => String::new(),
            };
            fault.help(format!(
                "declare it: variable {quoted}{typed}, or constant {quoted}{typed}"
            ))
        }
    }
}

/// How many arguments follow in brackets, as far as a short look ahead can tell.
fn call_arguments(mut after: Lexer<'_, '_>) -> Option<usize> {
    let mut depth = 0;
    let mut count = 1;
    for _ in 0..200 {
        match after.next().ok()?.kind {
            Kind::Open => depth += 1,
            Kind::Close if depth == 1 => return Some(count),
            Kind::Close => depth -= 1,
            Kind::Comma if depth == 1 => count += 1,
            Kind::End => break,
            _ => {}
        }
        if depth == 0 {
            return None;
        }
    }
    (depth > 0).then_some(count)
}

fn function_type(signature: &Signature, count: usize, result: Option<Sort>) -> String {
    if signature.sorts().len() <= 1 {
        return count.to_string();
    }
    let result = result.map_or("SORT", |sort| signature.sort_name(sort));
    format!(": {} -> {result}", vec!["SORT"; count.min(8)].join(" "))
}

fn typed_hint(signature: &Signature) -> &'static str {
    if signature.sorts().len() > 1 {
        ", with its type behind a `:`"
    } else {
        ""
    }
}

/// The infix or postfix operator right behind the name, and the sort that it asks for on its left.
pub(crate) fn operator_behind(
    signature: &Signature,
    after: Lexer<'_, '_>,
) -> Option<(Fixity, Sort)> {
    let (Kind::Sign(name) | Kind::Name(name) | Kind::Quoted(name)) = after.peek().ok()?.kind else {
        return None;
    };
    let symbol = signature.meaning(&name)?.symbol?;
    let declaration = signature.symbol(symbol)?;
    match declaration.fixity {
        fixity @ (Fixity::Infix { .. } | Fixity::Postfix { .. }) => {
            Some((fixity, *declaration.arguments.first()?))
        }
        _ => None,
    }
}
