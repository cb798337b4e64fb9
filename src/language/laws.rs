//! Laws, rules, definitions and claims.

use super::declare::{Change, Statement, end};
use super::diagnostic::Fault;
use super::find;
use super::lexer::{Kind, Lexer};
use super::symbols::taken;
use super::term::{TermReader, shown};
use super::words::quote_law;
use crate::term::TermId;
use crate::theory::{Claim, Expected, Fixity, Law, LawKind, Property, SymbolDeclaration};
use std::ops::Range;

/// `law assoc: (x * y) * z = x * (y * z)`, `rule cut: f(g(x)) -> x`
pub(crate) fn law(
    at: &mut Statement<'_, '_, '_>,
    word: &str,
    rest: usize,
) -> Result<Vec<Change>, Fault> {
    let name = name(at, rest)?;
    let sides = sides(at, name.behind, word)?;
    let kind = if word == "rule" {
        LawKind::Rule
    } else {
        LawKind::Law
    };
    let name = add(at, name.named, sides.left, sides.right, kind, None)?;
    Ok(name.map(Change::Law).into_iter().collect())
}

/// `claim flip: i(x * y) = i(y) * i(x)`, `claim x * y != y * x`, `claim back: find x: x * y = e`
pub(crate) fn claim(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let name = name(at, rest)?;
    let (unknowns, start) = unknowns(at, name.behind)?;
    let sides = sides(
        at,
        start,
        if start > name.behind { "find" } else { "claim" },
    )?;
    let both = (sides.left, sides.right);
    find::check(&at.theory.bank, &at.theory.signature, &unknowns, both)?;
    if let Some((name, span)) = &name.named {
        check_name(at, name, span)?;
    }
    at.theory.push_claim(Claim {
        name: name.named.map(|(name, _)| name),
        unknowns: unknowns.into_iter().map(|(index, _)| index).collect(),
        left: sides.left,
        right: sides.right,
        expected: sides.expected,
        line: at.context.line,
    });
    Ok(vec![Change::Claim(at.theory.claims.len() - 1)])
}

/// The unknowns of `find x y: s = t`, if a claim is such a question, and where its sides begin.
fn unknowns(at: &Statement<'_, '_, '_>, start: usize) -> Result<(find::Unknowns, usize), Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(start);
    if lexer.next()?.kind != Kind::Reserved("find") {
        return Ok((find::Unknowns::new(), start));
    }
    let unknowns = find::list(&mut lexer)?;
    Ok((unknowns, lexer.at()))
}

/// `define square(x) = x * x`
pub(crate) fn define(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let Some((name, span)) = lexer.declared()? else {
        let token = lexer.next()?;
        return Err(
            Fault::new(token.span, "the name of the new symbol is missing")
                .help("write define square(x) = x * x, or define two = s(s(0))"),
        );
    };
    if at.theory.signature.meaning(&name).is_some() {
        return Err(taken(&at.theory.signature, &name, span));
    }
    let parameters = parameters(at, &mut lexer)?;
    let equal = lexer.next()?;
    if equal.kind != Kind::Equal {
        return Err(
            Fault::new(equal.span, "a definition has = behind the new symbol")
                .label("= is expected here")
                .help("write define square(x) = x * x, or define two = s(s(0))"),
        );
    }
    let start = lexer.at();
    let theory = &mut *at.theory;
    let lexer = Lexer::new(at.source.text, start..at.range.end, &theory.signature);
    let mut reader = TermReader::new(lexer, &theory.signature, &mut theory.bank);
    let body = reader
        .term(None)
        .map_err(|fault| no_recursion(fault, &name, at.source.text))?;
    finish(&mut reader)?;
    let variables = reader.bank.variables(body.term);
    if let Some(stranger) = variables.iter().find(|v| !parameters.contains(&v.index)) {
        let stranger = &theory.signature.variables()[stranger.index as usize].name;
        return Err(Fault::new(
            body.span(),
            format!(
                "{} is not among the arguments of {}",
                shown(stranger),
                shown(&name)
            ),
        )
        .label("only the arguments may occur here")
        .help(format!(
            "add {stranger} to the arguments, or take it out here"
        )));
    }
    let sorts = parameters
        .iter()
        .map(|index| theory.signature.variable(*index).sort);
    let declaration = SymbolDeclaration {
        name: name.clone(),
        fixity: Fixity::Plain,
        arguments: sorts.collect(),
        result: theory.bank.sort(body.term),
    };
    if at.theory.is_named(&name) {
        check_name(at, &name, &span)?;
    }
    let symbol = at.theory.add_symbol(declaration).map_err(|_| {
        Fault::new(span.clone(), "there are too many symbols").help("take some of them out")
    })?;
    let variables: Vec<TermId> = parameters
        .iter()
        .map(|index| {
            let variable = at.theory.signature.variable(*index);
            at.theory.bank.variable(variable)
        })
        .collect();
    let left = at.theory.bank.apply(symbol, &variables);
    let named = Some((name, span));
    let name = add(at, named, left, body.term, LawKind::Definition, None)?;
    let law = name.map(Change::Law);
    Ok([Change::Symbol(symbol)].into_iter().chain(law).collect())
}

/// The parameters of a definition: different variables in brackets, or none.
fn parameters(at: &Statement<'_, '_, '_>, lexer: &mut Lexer<'_, '_>) -> Result<Vec<u32>, Fault> {
    let mut parameters = Vec::new();
    if lexer.peek()?.kind != Kind::Open {
        return Ok(parameters);
    }
    lexer.next()?;
    loop {
        let token = lexer.next()?;
        let name = match &token.kind {
            Kind::Name(name) | Kind::Quoted(name) | Kind::Sign(name) => &**name,
            _ => "",
        };
        let meaning = at.theory.signature.meaning(name).unwrap_or_default();
        match meaning.variable {
            Some(index) if !parameters.contains(&index) => parameters.push(index),
            Some(_) => {
                return Err(
                    Fault::new(token.span, format!("{} stands here twice", shown(name)))
                        .label("a second time")
                        .help("the arguments of a definition are different variables"),
                );
            }
            None => {
                let fault = Fault::new(token.span, "the arguments of a definition are variables")
                    .label("a variable is expected here");
                return Err(if name.is_empty() {
                    fault.help("write define square(x) = x * x")
                } else {
                    fault.help(format!("declare it: variable {name}"))
                });
            }
        }
        let token = lexer.next()?;
        match token.kind {
            Kind::Comma => {}
            Kind::Close => return Ok(parameters),
            _ => {
                return Err(Fault::new(token.span, "a comma or ) is expected here")
                    .help("write define square(x) = x * x"));
            }
        }
    }
}

/// A definition in which the new symbol occurs is none.
fn no_recursion(fault: Fault, name: &str, text: &str) -> Fault {
    if text.get(fault.span.clone()) != Some(name) {
        return fault;
    }
    Fault::new(
        fault.span.clone(),
        format!("{} occurs in its own definition", shown(name)),
    )
    .label("not known yet")
    .help("declare it with function or constant, and state laws about it")
}

struct Name {
    named: Option<(String, Range<usize>)>,
    behind: usize,
}

/// The name before a colon, if there is one.
fn name(at: &Statement<'_, '_, '_>, rest: usize) -> Result<Name, Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let named = lexer.law_name()?;
    if named.is_some() && lexer.next()?.kind == Kind::Colon {
        return Ok(Name {
            named,
            behind: lexer.at(),
        });
    }
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let first = lexer.next()?;
    if lexer.peek().is_ok_and(|token| token.kind == Kind::Colon) {
        return Err(match &first.kind {
            Kind::Reserved(word) => Fault::new(
                first.span,
                format!("`{word}` is a word of the shell, not a name"),
            )
            .label("a name is expected here")
            .help(format!("write \"{word}\" in quotes to have it as a name")),
            _ => Fault::new(first.span, "this cannot name a law or claim without quotes")
                .label("not a name of a law")
                .help("such a name begins with a letter and has letters, digits, _ and - in it; in quotes anything is a name"),
        });
    }
    Ok(Name {
        named: None,
        behind: rest,
    })
}

struct Sides {
    left: TermId,
    right: TermId,
    expected: Expected,
}

/// Both sides of a law, rule or claim, up to the end of the statement.
fn sides(at: &mut Statement<'_, '_, '_>, start: usize, word: &str) -> Result<Sides, Fault> {
    let theory = &mut *at.theory;
    let lexer = Lexer::new(at.source.text, start..at.range.end, &theory.signature);
    let mut reader = TermReader::new(lexer, &theory.signature, &mut theory.bank);
    let left = reader.term(None)?;
    let expected = sign(&mut reader, word)?;
    let right = reader.other_side(&left)?;
    let token = reader.lexer.peek()?;
    if token.kind == Kind::Reserved("when") {
        return Err(Fault::new(
            token.span,
            "conditional laws are not supported by this version",
        )
        .label("a condition begins here")
        .help("state the law without condition, if it holds so, or leave it out"));
    }
    finish(&mut reader)?;
    Ok(Sides {
        left: left.term,
        right: right.term,
        expected,
    })
}

/// The sign between the sides.
fn sign(reader: &mut TermReader<'_, '_, '_>, word: &str) -> Result<Expected, Fault> {
    let token = reader.lexer.next()?;
    let wanted = if word == "rule" { "->" } else { "=" };
    let fault = match (token.kind, word) {
        (Kind::Equal, "law" | "claim" | "find") | (Kind::Arrow, "rule") => {
            return Ok(Expected::Equal);
        }
        (Kind::NotEqual, "claim") => return Ok(Expected::NotEqual),
        (_, "find") => find::no_equation(token.span),
        (Kind::Arrow, _) => Fault::new(token.span, "an arrow stands in rules only")
            .help("write = here, or rule as the first word"),
        (Kind::Equal, _) => Fault::new(token.span, "a rule has an arrow between its sides")
            .help("write -> here, or law as the first word"),
        (Kind::NotEqual, _) => Fault::new(token.span, "laws are equations")
            .help("write = here; only a claim can have !="),
        (Kind::Name(name) | Kind::Quoted(name) | Kind::Sign(name), _) => {
            reader.adjacent(&name, token.span)
        }
        (Kind::Close, _) => Fault::new(token.span, "this bracket was never opened")
            .help("take it away, or put the opening bracket where it belongs"),
        _ => Fault::new(
            token.span,
            format!("{wanted} and a second term are missing here"),
        )
        .help(format!("a {word} is written {word} NAME: s {wanted} t")),
    };
    Err(fault)
}

/// Checks that the statement ends behind a term.
pub(crate) fn finish(reader: &mut TermReader<'_, '_, '_>) -> Result<(), Fault> {
    let token = reader.lexer.peek()?;
    match token.kind {
        Kind::Name(name) | Kind::Quoted(name) | Kind::Sign(name) => {
            Err(reader.adjacent(&name, token.span))
        }
        Kind::Equal | Kind::NotEqual | Kind::Arrow => {
            Err(Fault::new(token.span, "an equation has two sides")
                .label("a third side begins here")
                .help("state two equations, each in its own line"))
        }
        _ => end(&mut reader.lexer),
    }
}

/// Checks that a law or claim can have this name.
pub(crate) fn check_name(
    at: &Statement<'_, '_, '_>,
    name: &str,
    span: &Range<usize>,
) -> Result<(), Fault> {
    let theory = &*at.theory;
    let what = if theory.is_named(name) {
        if theory.law(name).is_some() {
            "law"
        } else {
            "claim"
        }
    } else {
        let meaning = theory.signature.meaning(name).unwrap_or_default();
        if meaning.variable.is_some() {
            return Err(Fault::new(
                span.clone(),
                format!(
                    "{} is a variable and cannot name a law or claim",
                    shown(name)
                ),
            )
            .label("a variable")
            .help("choose another name, or leave the name and its colon out"));
        }
        return Ok(());
    };
    Err(Fault::new(
        span.clone(),
        format!("there is a {what} {} already", shown(name)),
    )
    .label("named a second time")
    .help(format!(
        "choose another name, or drop {} first",
        quote_law(name)
    )))
}

/// Adds a law under its name, or under the next free `law1`, `law2`, …; none if another theory
/// brings a law that is there already.
pub(crate) fn add(
    at: &mut Statement<'_, '_, '_>,
    named: Option<(String, Range<usize>)>,
    left: TermId,
    right: TermId,
    kind: LawKind,
    property: Option<Property>,
) -> Result<Option<String>, Fault> {
    let unnamed = named.is_none();
    let borrowed = at.context.uses.current().map(|used| {
        used.unnamed += u32::from(unnamed);
        (used.name.clone(), used.unnamed)
    });
    let name = match (&borrowed, named) {
        (None, Some((name, span))) => {
            check_name(at, &name, &span)?;
            name
        }
        (None, None) => unnamed_law(at),
        (Some((prefix, _)), Some((name, span))) => {
            let same = at.theory.law(&name);
            if same.is_some_and(|law| (law.left, law.right) == (left, right)) {
                return Ok(None);
            }
            if check_name(at, &name, &span).is_ok() {
                name
            } else {
                let long = format!("{prefix}-{name}");
                check_name(at, &long, &span)?;
                long
            }
        }
        (Some((prefix, number)), None) => {
            let name = format!("{prefix}-law{number}");
            let start = at.range.start;
            check_name(at, &name, &(start..start))?;
            name
        }
    };
    if let Some(number) = law_number(&name) {
        at.theory.next_law = at.theory.next_law.max(number + 1);
    }
    at.theory.push_law(Law {
        name: name.clone(),
        left,
        right,
        kind,
        line: at.context.line,
        property,
        from: borrowed.map(|(prefix, _)| prefix),
        unnamed,
    });
    Ok(Some(name))
}

fn unnamed_law(at: &Statement<'_, '_, '_>) -> String {
    let mut number = at.theory.next_law;
    loop {
        let name = format!("law{number}");
        if check_name(at, &name, &(0..0)).is_ok() {
            return name;
        }
        number += 1;
    }
}

/// The number in a name that could have been given to a law without one.
fn law_number(name: &str) -> Option<u32> {
    let number: u32 = name.strip_prefix("law")?.parse().ok()?;
    // Counting on from a number that someone chose must not overflow.
    (number < 1_000_000_000).then_some(number)
}
