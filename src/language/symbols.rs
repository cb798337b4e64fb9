//! Declarations of sorts, symbols and variables.

use super::declare::{Change, Statement, end};
use super::diagnostic::Fault;
use super::lexer::{Kind, Lexer};
use super::term::{shown, type_of};
use super::words::nearest;
use crate::term::Sort;
use crate::theory::{Fixity, Side, Signature, SymbolDeclaration};
use std::ops::Range;

type Named = (String, Range<usize>);

/// The most arguments that a function can have.
const MOST_ARGUMENTS: usize = 255;

/// `sort Layer Key`
pub(crate) fn sorts(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let names = names(&mut lexer, "sort Layer Key")?;
    end(&mut lexer)?;
    let signature = &mut at.theory.signature;
    let borrowed = at.context.uses.current().is_some();
    let known = |name: &str| signature.sort_named(name).is_some();
    for (place, (name, span)) in names.iter().enumerate() {
        let twice = names[..place].iter().any(|(other, _)| other == name);
        if twice || (known(name) && !borrowed) {
            return Err(Fault::new(
                span.clone(),
                format!("the sort {} is declared already", shown(name)),
            )
            .label("a second time")
            .help("take it out, or choose another name"));
        }
    }
    if !signature.has_sorts() && !signature.is_empty() {
        return Err(Fault::new(
            names[0].1.clone(),
            "sorts come before the constants, functions and variables that have them",
        )
        .label("too late for a sort")
        .help("move this line above the first declaration, and give the others their types"));
    }
    let mut changes = Vec::new();
    for (name, span) in names {
        if signature.sort_named(&name).is_none() {
            let sort = signature.add_sort(&name).map_err(|_| {
                Fault::new(span, format!("a theory has at most {} sorts", Sort::LIMIT))
                    .help("take some sorts out")
            })?;
            changes.push(Change::Sort(sort));
        }
    }
    Ok(changes)
}

/// `constant empty : Layer`
pub(crate) fn constants(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let (names, sort) = names_with_sort(at, rest, "constant e")?;
    let declare = |(name, span): Named| {
        let declaration = SymbolDeclaration {
            name,
            fixity: Fixity::Plain,
            arguments: Vec::new(),
            result: sort,
        };
        (declaration, span)
    };
    symbols(at, names.into_iter().map(declare).collect())
}

/// `variable k : Key`
pub(crate) fn variables(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let (names, sort) = names_with_sort(at, rest, "variable x y z")?;
    let borrowing = at.context.uses.current().is_some();
    let mut fresh = Vec::new();
    for (place, (name, span)) in names.iter().enumerate() {
        let twice = names[..place].iter().any(|(other, _)| other == name);
        let meaning = at.theory.signature.meaning(name).unwrap_or_default();
        let same = meaning.variable.filter(|index| {
            let known = &at.theory.signature.variables()[*index as usize];
            known.sort == sort && (known.borrowed || borrowing)
        });
        if twice || (same.is_none() && at.theory.signature.meaning(name).is_some()) {
            return Err(taken(&at.theory.signature, name, span.clone()));
        }
        if at.theory.is_named(name) {
            return Err(Fault::new(
                span.clone(),
                format!("{} is the name of a law or claim", shown(name)),
            )
            .label("cannot be a variable as well")
            .help("choose another name for the variable or for the law"));
        }
        fresh.push((name, span, same));
    }
    let mut changes = Vec::new();
    for (name, span, same) in fresh {
        let signature = &mut at.theory.signature;
        let index = match same {
            Some(index) => index,
            None => signature.add_variable(name, sort, false).map_err(|_| {
                Fault::new(span.clone(), "there are too many variables")
                    .help("a theory has at most a million variables")
            })?,
        };
        signature.set_borrowed(index, borrowing);
        changes.push(Change::Variable(index));
    }
    Ok(changes)
}

/// `function mask 2`, `function get : Layer Key -> Value`
pub(crate) fn function(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let example = "function mask 2, or function get : Layer Key -> Value";
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let (name, span) = name_before_type(&mut lexer, example)?;
    let token = lexer.next()?;
    let (arguments, result) = match &token.kind {
        Kind::Colon => types(&mut lexer)?,
        Kind::Name(count) => {
            let count = number(count, MOST_ARGUMENTS).ok_or_else(|| {
                Fault::new(
                    token.span.clone(),
                    format!("the number of arguments, at most {MOST_ARGUMENTS}, is expected here"),
                )
                .help(format!("write {example}"))
            })?;
            let sort = only_sort(&at.theory.signature, &span, "function mask : S S -> S")?;
            (vec![sort; count], sort)
        }
        _ => {
            return Err(Fault::new(token.span, "the number of arguments is missing")
                .help(format!("write {example}")));
        }
    };
    end(&mut lexer)?;
    let declaration = SymbolDeclaration {
        name,
        fixity: Fixity::Plain,
        arguments,
        result,
    };
    symbols(at, vec![(declaration, span)])
}

/// `infix * 40 left`, `prefix - 60`, `postfix ' 80`
pub(crate) fn operator(
    at: &mut Statement<'_, '_, '_>,
    word: &str,
    rest: usize,
) -> Result<Vec<Change>, Fault> {
    let example = match word {
        "infix" => "infix * 40 left",
        "prefix" => "prefix - 60",
        _ => "postfix ' 80",
    };
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let (name, span) = one_name(&mut lexer, example)?;
    let strength = strength(&mut lexer, example)?;
    let fixity = match word {
        "infix" => Fixity::Infix {
            strength,
            side: side(&mut lexer)?,
        },
        "prefix" => Fixity::Prefix { strength },
        _ => Fixity::Postfix { strength },
    };
    let count = if word == "infix" { 2 } else { 1 };
    let colon = lexer.peek()?;
    let (arguments, result) = if colon.kind == Kind::Colon {
        lexer.next()?;
        let start = lexer.at();
        let (arguments, result) = types(&mut lexer)?;
        if arguments.len() != count {
            return Err(Fault::new(
                start..lexer.at(),
                format!(
                    "an operator of this kind takes {}",
                    super::term::arguments(count)
                ),
            )
            .label(format!(
                "a type with {}",
                super::term::arguments(arguments.len())
            ))
            .help(format!("write {example} : {}S", "S ".repeat(count) + "-> ")));
        }
        (arguments, result)
    } else {
        let typed = format!("{example} : {}-> S", "S ".repeat(count));
        let sort = only_sort(&at.theory.signature, &span, &typed)?;
        (vec![sort; count], sort)
    };
    end(&mut lexer)?;
    let declaration = SymbolDeclaration {
        name,
        fixity,
        arguments,
        result,
    };
    symbols(at, vec![(declaration, span)])
}

/// Adds symbols, all or none.
pub(crate) fn symbols(
    at: &mut Statement<'_, '_, '_>,
    declarations: Vec<(SymbolDeclaration, Range<usize>)>,
) -> Result<Vec<Change>, Fault> {
    let borrowing = at.context.uses.current().is_some();
    let mut fresh = Vec::new();
    for (place, (declaration, span)) in declarations.iter().enumerate() {
        let name = &declaration.name;
        let signature = &at.theory.signature;
        let twice = declarations[..place]
            .iter()
            .any(|(other, _)| other.name == *name);
        let meaning = signature.meaning(name).unwrap_or_default();
        let same = [meaning.symbol, meaning.prefix]
            .into_iter()
            .flatten()
            .find(|symbol| signature.symbols()[symbol.index()] == *declaration);
        if same.is_some() && borrowing && !twice {
            continue;
        }
        let free = match declaration.fixity {
            Fixity::Prefix { .. } => {
                meaning.prefix.is_none() && is_infix(signature, meaning.symbol)
            }
            Fixity::Infix { .. } => meaning.symbol.is_none(),
            _ => meaning.symbol.is_none() && meaning.prefix.is_none(),
        };
        if twice || !free || meaning.variable.is_some() {
            return Err(taken(signature, name, span.clone()));
        }
        fresh.push((declaration.clone(), span.clone()));
    }
    let mut changes = Vec::new();
    for (declaration, span) in fresh {
        let symbol = at.theory.add_symbol(declaration).map_err(|_| {
            Fault::new(span, "there are too many symbols").help("take some of them out")
        })?;
        changes.push(Change::Symbol(symbol));
    }
    Ok(changes)
}

/// May a prefix operator of this name be added?
fn is_infix(signature: &Signature, symbol: Option<crate::term::Symbol>) -> bool {
    symbol.is_none_or(|symbol| {
        let fixity = signature.symbols()[symbol.index()].fixity;
        matches!(fixity, Fixity::Infix { .. })
    })
}

/// The fault for a name that means something already.
pub(crate) fn taken(signature: &Signature, name: &str, span: Range<usize>) -> Fault {
    let meaning = signature.meaning(name).unwrap_or_default();
    let symbol = meaning.symbol.or(meaning.prefix);
    let what = match (meaning.variable, symbol) {
        (Some(_), _) => "as a variable".to_owned(),
        (None, Some(symbol)) => {
            let declaration = &signature.symbols()[symbol.index()];
            let kind = match declaration.fixity {
                Fixity::Plain if declaration.arguments.is_empty() => "a constant",
                Fixity::Plain => "a function",
                Fixity::Infix { .. } => "an infix operator",
                Fixity::Prefix { .. } => "a prefix operator",
                Fixity::Postfix { .. } => "a postfix operator",
            };
            if signature.has_sorts() {
                format!("as {kind} of type {}", type_of(signature, symbol))
            } else {
                format!("as {kind}")
            }
        }
        (None, None) => "in this line".to_owned(),
    };
    Fault::new(span, format!("{} is declared already, {what}", shown(name)))
        .label("declared a second time")
        .help("take one of the two declarations out, or choose another name")
}

/// One or more names up to a colon or the end.
fn names(lexer: &mut Lexer<'_, '_>, example: &str) -> Result<Vec<Named>, Fault> {
    let mut names = Vec::new();
    loop {
        match lexer.declared()? {
            Some((name, span)) => match split_colon(lexer, &name, &span) {
                Some(named) => {
                    names.push(named);
                    return Ok(names);
                }
                None => names.push((name, span)),
            },
            None if names.is_empty() => return Err(name_missing(lexer, example)?),
            None => return Ok(names),
        }
    }
}

/// A sign right before a colon, as in `constant ∅: Set`: the colon is none of it.
fn split_colon(lexer: &mut Lexer<'_, '_>, name: &str, span: &Range<usize>) -> Option<Named> {
    let short = name
        .strip_suffix(':')
        .filter(|short| !short.ends_with(':'))?;
    let is_quoted = span.len() != name.len();
    let more = lexer.peek().ok()?.kind;
    if short.is_empty() || is_quoted || more == Kind::Colon || more == Kind::End {
        return None;
    }
    lexer.back_to(span.end - 1);
    Some((short.to_owned(), span.start..span.end - 1))
}

fn name_before_type(lexer: &mut Lexer<'_, '_>, example: &str) -> Result<Named, Fault> {
    let (name, span) = one_name(lexer, example)?;
    Ok(split_colon(lexer, &name, &span).unwrap_or((name, span)))
}

fn one_name(lexer: &mut Lexer<'_, '_>, example: &str) -> Result<Named, Fault> {
    match lexer.declared()? {
        Some(named) => Ok(named),
        None => Err(name_missing(lexer, example)?),
    }
}

fn name_missing(lexer: &mut Lexer<'_, '_>, example: &str) -> Result<Fault, Fault> {
    let token = lexer.next()?;
    let fault = match &token.kind {
        Kind::Reserved(word) => Fault::new(
            token.span,
            format!("`{word}` is a word of the shell, not a name"),
        )
        .label("a name is expected here")
        .help(format!("write \"{word}\" in quotes to have it as a name")),
        _ => Fault::new(token.span, "a name or a sign is missing here")
            .label("a name is expected here")
            .help("the tokens = != : , ( ) # -> are no names; anything in quotes is one"),
    };
    Ok(fault.help(format!("write, for example, {example}")))
}

fn names_with_sort(
    at: &Statement<'_, '_, '_>,
    rest: usize,
    example: &str,
) -> Result<(Vec<Named>, Sort), Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let names = names(&mut lexer, example)?;
    let colon = lexer.peek()?;
    let sort = if colon.kind == Kind::Colon {
        lexer.next()?;
        sort(&mut lexer, &at.theory.signature)?
    } else {
        if colon.kind == Kind::End {
            only_sort(&at.theory.signature, &names[0].1, &format!("{example} : S"))?
        } else {
            Sort(0)
        }
    };
    end(&mut lexer)?;
    Ok((names, sort))
}

/// The only sort that there is, for a declaration that states none.
fn only_sort(signature: &Signature, span: &Range<usize>, typed: &str) -> Result<Sort, Fault> {
    if signature.sorts().len() == 1 {
        return Ok(Sort(0));
    }
    Err(Fault::new(
        span.clone(),
        "the theory has several sorts, and none is stated here",
    )
    .label("of which sort?")
    .help(format!("state the type, as in {typed}"))
    .help(format!("the sorts are {}", signature.sorts().join(", "))))
}

fn sort(lexer: &mut Lexer<'_, '_>, signature: &Signature) -> Result<Sort, Fault> {
    match lexer.declared()? {
        Some((name, span)) => sort_named(signature, &name, span),
        None => {
            let span = lexer.next()?.span;
            Err(Fault::new(span, "the name of a sort is missing here")
                .help(format!("the sorts are {}", signature.sorts().join(", "))))
        }
    }
}

fn sort_named(signature: &Signature, name: &str, span: Range<usize>) -> Result<Sort, Fault> {
    if let Some(sort) = signature.sort_named(name) {
        return Ok(sort);
    }
    let fault = Fault::new(span, format!("there is no sort {}", shown(name)))
        .label("not a sort")
        .help(format!(
            "declare it before its first use: sort {}",
            super::quote_symbol(name)
        ));
    Err(
        match nearest(name, signature.sorts().iter().map(String::as_str)) {
            Some(near) => fault.help(format!("did you mean {}?", shown(near))),
            None => fault,
        },
    )
}

/// `Layer Key -> Value`, or `Value` alone.
fn types(lexer: &mut Lexer<'_, '_>) -> Result<(Vec<Sort>, Sort), Fault> {
    let signature = lexer.signature();
    let mut sorts = Vec::new();
    loop {
        if lexer.peek()?.kind == Kind::Arrow {
            lexer.next()?;
            return Ok((sorts, sort(lexer, signature)?));
        }
        match lexer.declared()? {
            Some((name, span)) => sorts.push(sort_named(signature, &name, span)?),
            None if sorts.len() == 1 => return Ok((Vec::new(), sorts[0])),
            None => {
                let span = lexer.next()?.span;
                return Err(Fault::new(span, "the sort of the result is missing")
                    .label("-> and a sort are expected here")
                    .help("write the type as S T -> U"));
            }
        }
    }
}

fn strength(lexer: &mut Lexer<'_, '_>, example: &str) -> Result<u8, Fault> {
    let token = lexer.next()?;
    if let Kind::Name(digits) = &token.kind
        && let Some(strength) = number(digits, 99)
    {
        return Ok(strength as u8);
    }
    Err(
        Fault::new(token.span, "the strength, from 0 to 99, is missing here")
            .label("a number is expected here")
            .help(format!("write, for example, {example}"))
            .help("the stronger operator takes its operands first"),
    )
}

fn side(lexer: &mut Lexer<'_, '_>) -> Result<Side, Fault> {
    let token = lexer.next()?;
    match &token.kind {
        Kind::Name(word) if word == "left" => Ok(Side::Left),
        Kind::Name(word) if word == "right" => Ok(Side::Right),
        Kind::Name(word) if word == "none" => Ok(Side::None),
        _ => Err(Fault::new(token.span, "the side is missing here")
            .label("left, right or none is expected here")
            .help(
                "left: x * y * z is (x * y) * z; right: it is x * (y * z); none: it needs brackets",
            )),
    }
}

/// A number in decimal digits that is not greater than `most`.
pub(crate) fn number(text: &str, most: usize) -> Option<usize> {
    let is_number = !text.is_empty() && text.bytes().all(|byte| byte.is_ascii_digit());
    let number: usize = text.parse().ok()?;
    (is_number && number <= most).then_some(number)
}

/// The line that declares a symbol.
pub fn print_symbol(signature: &Signature, symbol: crate::term::Symbol) -> String {
    let declaration = &signature.symbols()[symbol.index()];
    let name = super::quote_symbol(&declaration.name);
    let count = declaration.arguments.len();
    let typed = if signature.has_sorts() {
        format!(" : {}", type_of(signature, symbol))
    } else {
        String::new()
    };
    match declaration.fixity {
        Fixity::Plain if count == 0 => format!("constant {name}{typed}"),
        Fixity::Plain if typed.is_empty() => format!("function {name} {count}"),
        Fixity::Plain => format!("function {name}{typed}"),
        Fixity::Infix { strength, side } => {
            let side = match side {
                Side::Left => "left",
                Side::Right => "right",
                Side::None => "none",
            };
            format!("infix {name} {strength} {side}{typed}")
        }
        Fixity::Prefix { strength } => format!("prefix {name} {strength}{typed}"),
        Fixity::Postfix { strength } => format!("postfix {name} {strength}{typed}"),
    }
}
