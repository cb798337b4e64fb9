//! The line that sets the reduction order.

use super::declare::{Change, Statement};
use super::diagnostic::Fault;
use super::lexer::{Kind, Lexer};
use super::symbols::number;
use super::term::shown;
use super::words::{nearest, quote_symbol};
use crate::order::{OrderKind, OrderSetting};
use crate::term::Symbol;
use crate::theory::{Signature, Theory};

const EXAMPLE: &str =
    "order kbo i, *, e; weights i 0, * 1; variables 1, or order lpo i, *, e, or order auto";

/// `order kbo i, *, e; weights i 0, * 1; variables 1`
pub(crate) fn take(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let setting = setting(&mut lexer)?;
    if let Some(line) = at.theory.order_line {
        if !at.context.typed {
            let number = at.theory.document.number(line).unwrap_or(0);
            let start = at.range.start;
            return Err(Fault::new(start..start, "the order is set already")
                .label("a second time")
                .help(format!("take this line or line {number} out")));
        }
        at.theory.document.remove(line);
    }
    at.theory.order = setting;
    at.theory.order_line = Some(at.context.line);
    Ok(vec![Change::Order])
}

/// Sets the order, in the text as well; without one the program chooses.
pub fn set_order(theory: &mut Theory, setting: Option<OrderSetting>) {
    if theory.order == setting {
        return;
    }
    let text = match &setting {
        Some(setting) => print_order(&theory.signature, setting),
        None => "order auto".to_owned(),
    };
    match (theory.order_line, &setting) {
        (Some(line), None) => {
            theory.document.remove(line);
            theory.order_line = None;
        }
        (Some(line), Some(_)) => theory.document.replace(line, &text),
        (None, Some(_)) => {
            let before = theory.derived.first().map(|rule| rule.line);
            theory.order_line = Some(theory.document.insert(&text, before));
        }
        (None, None) => {}
    }
    theory.order = setting;
}

/// The line that states this order.
pub fn print_order(signature: &Signature, setting: &OrderSetting) -> String {
    let name = |symbol: Symbol| order_name(signature, symbol);
    let names: Vec<String> = setting.precedence.iter().map(|s| name(*s)).collect();
    let kind = match setting.kind {
        OrderKind::Kbo => "kbo",
        OrderKind::Lpo => "lpo",
    };
    let mut line = format!("order {kind}");
    if !names.is_empty() {
        line += &format!(" {}", names.join(", "));
    }
    if setting.kind == OrderKind::Lpo {
        return line;
    }
    if !setting.weights.is_empty() {
        let weights = setting.weights.iter();
        let weights: Vec<String> = weights.map(|(s, w)| format!("{} {w}", name(*s))).collect();
        line += &format!("; weights {}", weights.join(", "));
    }
    line + &format!("; variables {}", setting.variable_weight)
}

/// A symbol's name in an order: with its number of arguments if the sign is both prefix and infix.
fn order_name(signature: &Signature, symbol: Symbol) -> String {
    let declaration = &signature.symbols()[symbol.index()];
    let meaning = signature.meaning(&declaration.name).unwrap_or_default();
    let mut name = quote_symbol(&declaration.name);
    if name.contains([';', '/', ':']) && !name.starts_with('"') {
        name = format!("\"{name}\"");
    }
    if meaning.prefix.is_some() && meaning.symbol.is_some() {
        name += &format!("/{}", declaration.arguments.len());
    }
    name
}

fn setting(lexer: &mut Lexer<'_, '_>) -> Result<Option<OrderSetting>, Fault> {
    let token = lexer.next()?;
    let kind = match &token.kind {
        Kind::Name(word) if word == "auto" => {
            super::declare::end(lexer)?;
            return Ok(None);
        }
        Kind::Name(word) if word == "kbo" => OrderKind::Kbo,
        Kind::Name(word) if word == "lpo" => OrderKind::Lpo,
        _ => {
            return Err(Fault::new(token.span, "kbo, lpo or auto is expected here")
                .help(format!("write {EXAMPLE}")));
        }
    };
    let mut setting = OrderSetting {
        kind,
        precedence: Vec::new(),
        weights: Vec::new(),
        variable_weight: 1,
    };
    let mut next = lexer.peek()?.kind;
    while next != Kind::End && !is_semicolon(&next) {
        let (symbol, fault) = symbol(lexer)?;
        if setting.precedence.contains(&symbol) {
            return Err(fault("stands twice in the precedence"));
        }
        setting.precedence.push(symbol);
        next = separator(lexer)?;
    }
    while is_semicolon(&next) {
        lexer.next()?;
        let part = lexer.next()?;
        match (&part.kind, kind) {
            (Kind::Name(word), OrderKind::Kbo) if word == "weights" => {
                next = weights(lexer, &mut setting)?;
            }
            (Kind::Name(word), OrderKind::Kbo) if word == "variables" => {
                let token = lexer.next()?;
                let weight = weight(&token.kind).filter(|weight| *weight > 0);
                setting.variable_weight = weight.ok_or_else(|| {
                    Fault::new(token.span, "the weight of a variable is at least 1")
                        .help("write variables 1")
                })?;
                next = lexer.peek()?.kind;
            }
            (Kind::Name(word), OrderKind::Lpo) if word == "weights" || word == "variables" => {
                return Err(
                    Fault::new(part.span, "the lexicographic path order has no weights")
                        .help("take the weights out, or write kbo"),
                );
            }
            _ => {
                return Err(
                    Fault::new(part.span, "weights or variables is expected here")
                        .help(format!("write {EXAMPLE}")),
                );
            }
        }
    }
    super::declare::end(lexer)?;
    Ok(Some(setting))
}

/// `i 0, * 1`; gives what follows.
fn weights<'t>(lexer: &mut Lexer<'_, 't>, setting: &mut OrderSetting) -> Result<Kind<'t>, Fault> {
    loop {
        let (symbol, fault) = symbol(lexer)?;
        if setting.weights.iter().any(|(known, _)| *known == symbol) {
            return Err(fault("has two weights"));
        }
        let token = lexer.next()?;
        let Some(weight) = weight(&token.kind) else {
            return Err(
                Fault::new(token.span, "a weight is expected here").help("write weights i 0, * 1")
            );
        };
        setting.weights.push((symbol, weight));
        let comma = lexer.peek()?.kind == Kind::Comma;
        let next = separator(lexer)?;
        if !comma {
            return Ok(next);
        }
    }
}

fn weight(kind: &Kind<'_>) -> Option<u32> {
    match kind {
        Kind::Name(digits) => number(digits, 1_000_000).map(|weight| weight as u32),
        _ => None,
    }
}

/// Reads past a comma; gives what follows, which without a comma is a semicolon or the end.
fn separator<'t>(lexer: &mut Lexer<'_, 't>) -> Result<Kind<'t>, Fault> {
    let token = lexer.peek()?;
    match token.kind {
        Kind::Comma => {
            lexer.next()?;
            let next = lexer.peek()?;
            if next.kind == Kind::End || is_semicolon(&next.kind) {
                return Err(
                    Fault::new(next.span, "a symbol is missing behind the comma")
                        .help(format!("write {EXAMPLE}")),
                );
            }
            Ok(next.kind)
        }
        Kind::End => Ok(Kind::End),
        kind if is_semicolon(&kind) => Ok(kind),
        _ => Err(
            Fault::new(token.span, "a comma or a semicolon is expected here")
                .help(format!("write {EXAMPLE}")),
        ),
    }
}

pub(crate) fn is_semicolon(kind: &Kind<'_>) -> bool {
    matches!(kind, Kind::Sign(sign) if sign == ";")
}

/// A symbol, with the number of its arguments behind `/` where the sign has two meanings; and a way
/// to say what is wrong with it.
fn symbol(lexer: &mut Lexer<'_, '_>) -> Result<(Symbol, impl Fn(&str) -> Fault + use<>), Fault> {
    let signature = lexer.signature();
    let token = lexer.next()?;
    let (Kind::Name(name) | Kind::Quoted(name) | Kind::Sign(name) | Kind::Unknown(name)) =
        &token.kind
    else {
        return Err(
            Fault::new(token.span, "a symbol is expected here").help(format!("write {EXAMPLE}"))
        );
    };
    let name = name.to_string();
    let meaning = signature.meaning(&name).unwrap_or_default();
    let mut found = [meaning.symbol, meaning.prefix].into_iter().flatten();
    let symbol = match arity(lexer, token.span.end)? {
        Some(arity) => found.find(|s| signature.symbols()[s.index()].arguments.len() == arity),
        None if meaning.symbol.is_some() && meaning.prefix.is_some() => {
            return Err(
                Fault::new(token.span, format!("{} is prefix and infix", shown(&name)))
                    .label("which of the two?")
                    .help(format!("write {name}/1 or {name}/2")),
            );
        }
        None => found.next(),
    };
    let span = token.span.clone();
    match symbol {
        Some(symbol) => Ok((symbol, move |why: &str| {
            Fault::new(span.clone(), format!("{} {why}", shown(&name))).help("take one of them out")
        })),
        None => {
            let fault = Fault::new(token.span, format!("there is no symbol {}", shown(&name)))
                .label("not a symbol")
                .help("declare it before the order, or take it out");
            let names = signature.symbols().iter().map(|s| s.name.as_str());
            Err(match nearest(&name, names) {
                Some(near) => fault.help(format!("did you mean {}?", shown(near))),
                None => fault,
            })
        }
    }
}

/// `/2` right behind a name.
fn arity(lexer: &mut Lexer<'_, '_>, end: usize) -> Result<Option<usize>, Fault> {
    let mut ahead = *lexer;
    let slash = ahead.next();
    let digits = ahead.next();
    let (Ok(slash), Ok(digits)) = (slash, digits) else {
        return Ok(None);
    };
    let touching = slash.span.start == end && digits.span.start == slash.span.end;
    match (&slash.kind, &digits.kind) {
        (Kind::Sign(sign), Kind::Name(digits)) if sign == "/" && touching => {
            let count = number(digits, 1000);
            *lexer = ahead;
            Ok(count)
        }
        _ => Ok(None),
    }
}
