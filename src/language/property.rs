//! The usual laws by their usual names: `law + is associative commutative`.

mod build;

use super::declare::{Change, Statement};
use super::diagnostic::Fault;
use super::laws::{add, check_name};
use super::lexer::{Kind, Lexer, Token};
use super::term::shown;
use super::words::{nearest, quote_symbol};
use crate::term::Symbol;
use crate::theory::{LawKind, Property, Signature};
use build::{build, choose_variables, sorts_of};
use std::ops::Range;

/// What stands behind a property word.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum PropertyOperand {
    /// Nothing.
    Nothing,
    /// A constant, `e` in the equations.
    Constant,
    /// A function of one argument, `i` in the equations; `e` is the unit stated before.
    Unary,
    /// Another binary operator behind `over`, `+` in the equations.
    Over,
    /// Another binary operator, `+` in the equations.
    Binary,
}

/// A property word with the equations that it states.
#[derive(Clone, Copy, Debug)]
pub struct PropertyRow {
    /// The word.
    pub word: &'static str,
    /// How many arguments the operator has: `*` in the equations if two, `f` if one.
    pub arity: usize,
    /// What stands behind the word.
    pub operand: PropertyOperand,
    /// The equations in Polish notation, each with the side that `left` or `right` before the word
    /// chooses; without one of these all are stated. An equation without a side is always stated.
    pub equations: &'static [(&'static str, &'static str, &'static str)],
}

/// Word to equation. Sides are written operator first: `*xy` is `x * y`.
pub const PROPERTIES: &[PropertyRow] = &[
    row(
        "associative",
        2,
        PropertyOperand::Nothing,
        &[("", "**xyz", "*x*yz")],
    ),
    row(
        "commutative",
        2,
        PropertyOperand::Nothing,
        &[("", "*xy", "*yx")],
    ),
    row(
        "idempotent",
        2,
        PropertyOperand::Nothing,
        &[("", "*xx", "x")],
    ),
    row(
        "idempotent",
        1,
        PropertyOperand::Nothing,
        &[("", "ffx", "fx")],
    ),
    row(
        "involutive",
        1,
        PropertyOperand::Nothing,
        &[("", "ffx", "x")],
    ),
    row(
        "unit",
        2,
        PropertyOperand::Constant,
        &[("left", "*ex", "x"), ("right", "*xe", "x")],
    ),
    row(
        "zero",
        2,
        PropertyOperand::Constant,
        &[("left", "*ex", "e"), ("right", "*xe", "e")],
    ),
    row(
        "inverse",
        2,
        PropertyOperand::Unary,
        &[("left", "*ixx", "e"), ("right", "*xix", "e")],
    ),
    row(
        "distributes",
        2,
        PropertyOperand::Over,
        &[("left", "*x+yz", "+*xy*xz"), ("right", "*+xyz", "+*xz*yz")],
    ),
    row(
        "distributes",
        1,
        PropertyOperand::Over,
        &[("", "f+xy", "+fxfy")],
    ),
    row(
        "absorbs",
        2,
        PropertyOperand::Binary,
        &[("", "*x+xy", "x"), ("right", "*+xyx", "x")],
    ),
];

const fn row(
    word: &'static str,
    arity: usize,
    operand: PropertyOperand,
    equations: &'static [(&'static str, &'static str, &'static str)],
) -> PropertyRow {
    PropertyRow {
        word,
        arity,
        operand,
        equations,
    }
}

/// One law of a property line.
struct Stated {
    words: String,
    left: &'static str,
    right: &'static str,
    symbols: Symbols,
    span: Range<usize>,
}

/// What the letters of the table stand for.
#[derive(Clone, Copy, Default)]
struct Symbols {
    operator: Option<Symbol>,
    constant: Option<Symbol>,
    unary: Option<Symbol>,
    other: Option<Symbol>,
}

/// Does `is` stand behind the first name or sign?
pub(crate) fn is_property(at: &Statement<'_, '_, '_>, rest: usize) -> bool {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let _ = lexer.next();
    lexer
        .next()
        .is_ok_and(|token| token.kind == Kind::Reserved("is"))
}

/// `law + is associative commutative`
pub(crate) fn take(at: &mut Statement<'_, '_, '_>, rest: usize) -> Result<Vec<Change>, Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let sign = lexer.next()?;
    let name = symbol_name(&sign).unwrap_or_default().to_owned();
    let mut reader = Reader {
        signature: &at.theory.signature,
        lexer,
        name: name.clone(),
        span: sign.span,
        unit: known_unit(at, &name),
    };
    reader.lexer.next()?;
    let stated = reader.all()?;
    let names: Vec<String> = stated
        .iter()
        .map(|law| format!("{name} {}", law.words))
        .collect();
    if at.context.uses.current().is_none() {
        for (place, (law, name)) in stated.iter().zip(&names).enumerate() {
            check_name(at, name, &law.span)?;
            if names[..place].contains(name) {
                return Err(
                    Fault::new(law.span.clone(), "this property is stated twice")
                        .label("a second time")
                        .help("take it out"),
                );
            }
        }
    }
    let sorts = stated
        .iter()
        .map(|law| sorts_of(&at.theory.signature, law))
        .collect::<Result<Vec<_>, _>>()?;
    let operator_name = name;
    let mut changes = Vec::new();
    for ((law, name), sorts) in stated.into_iter().zip(names).zip(sorts) {
        let variables = choose_variables(at, &sorts, &law.span)?;
        let left = build(at, &law, law.left, &variables);
        let right = build(at, &law, law.right, &variables);
        let property = Property {
            operator: quote_symbol(&operator_name),
            words: law.words.clone(),
        };
        let named = Some((name, law.span));
        let added = add(at, named, left, right, LawKind::Law, Some(property))?;
        changes.extend(added.map(Change::Law));
    }
    Ok(changes)
}

/// The unit of an operator that an earlier line stated.
fn known_unit(at: &Statement<'_, '_, '_>, name: &str) -> Option<Symbol> {
    at.theory.laws.iter().rev().find_map(|law| {
        let property = law.property.as_ref()?;
        let is_unit =
            property.words.starts_with("left unit ") || property.words.starts_with("right unit ");
        if !is_unit || property.operator != quote_symbol(name) {
            return None;
        }
        let arguments = at.theory.bank.arguments(law.left);
        arguments.iter().find_map(|a| at.theory.bank.as_symbol(*a))
    })
}

struct Reader<'s, 't> {
    signature: &'s Signature,
    lexer: Lexer<'s, 't>,
    name: String,
    span: Range<usize>,
    unit: Option<Symbol>,
}

impl<'s, 't> Reader<'s, 't> {
    fn all(&mut self) -> Result<Vec<Stated>, Fault> {
        let mut stated = Vec::new();
        loop {
            let token = self.lexer.next()?;
            match token.kind {
                Kind::End if stated.is_empty() => {
                    return Err(
                        Fault::new(token.span, "a property is missing here").help(all_words())
                    );
                }
                Kind::End => return Ok(stated),
                Kind::Comma | Kind::Reserved("and") if !stated.is_empty() => {}
                Kind::Name(_) => self.one(token, &mut stated)?,
                _ => {
                    return Err(Fault::new(token.span, "a property is expected here")
                        .label("not a property")
                        .help(all_words()));
                }
            }
        }
    }

    /// One property with the side before it and the symbol behind it.
    fn one(&mut self, first: Token<'t>, stated: &mut Vec<Stated>) -> Result<(), Fault> {
        let start = first.span.start;
        let mut word = first;
        let mut side = match &word.kind {
            Kind::Name(name) if name == "left" => "left",
            Kind::Name(name) if name == "right" => "right",
            _ => "",
        };
        if !side.is_empty() {
            word = self.lexer.next()?;
        }
        let rows = self.rows(&word)?;
        if side.is_empty() && rows[0].operand == PropertyOperand::Over {
            // `distributes left over +` reads as well as `left distributes over +`.
            side = match &self.lexer.peek()?.kind {
                Kind::Name(name) if name == "left" => "left",
                Kind::Name(name) if name == "right" => "right",
                _ => "",
            };
            if !side.is_empty() {
                self.lexer.next()?;
            }
        }
        let row = self.fitting(&rows, &word)?;
        let (mut symbols, operand) = self.operand(row)?;
        symbols.operator = self.operator(row.arity);
        let span = start..self.lexer.at();
        if !side.is_empty() && row.equations.len() == 1 {
            return Err(Fault::new(span, format!("{} has no sides", row.word))
                .label(format!("without {side}"))
                .help(format!("write {}", row.word)));
        }
        // `absorbs` alone, and `left absorbs`, are the usual law; the other needs its side.
        let wanted = |equation: &str| match (equation, side) {
            ("", "" | "left") => true,
            ("", _) => row.equations.len() == 1,
            (_, "") => row.equations[0].0 == "left",
            (equation, side) => equation == side,
        };
        for (equation, left, right) in row.equations.iter().filter(|row| wanted(row.0)) {
            let before = if equation.is_empty() { "" } else { " " };
            stated.push(Stated {
                words: format!("{equation}{before}{}{operand}", row.word),
                left,
                right,
                symbols,
                span: span.clone(),
            });
        }
        Ok(())
    }

    /// The rows of a word.
    fn rows(&self, word: &Token<'t>) -> Result<Vec<&'static PropertyRow>, Fault> {
        let text = match &word.kind {
            Kind::Name(name) => &**name,
            _ => "",
        };
        let usual = match text {
            "distributive" => "distributes",
            "involution" => "involutive",
            text => text,
        };
        let rows: Vec<_> = PROPERTIES.iter().filter(|row| row.word == usual).collect();
        if !rows.is_empty() {
            return Ok(rows);
        }
        let mut fault = Fault::new(word.span.clone(), format!("{} is no property", shown(text)))
            .label("not a property");
        if let Some(near) = nearest(text, PROPERTIES.iter().map(|row| row.word)) {
            fault = fault.help(format!("did you mean {near}?"));
        }
        Err(fault.help(all_words()))
    }

    /// The row that fits the number of arguments of the operator.
    fn fitting(
        &self,
        rows: &[&'static PropertyRow],
        word: &Token<'t>,
    ) -> Result<&'static PropertyRow, Fault> {
        if let Some(row) = rows.iter().find(|row| self.operator(row.arity).is_some()) {
            return Ok(row);
        }
        if self.signature.meaning(&self.name).is_none() {
            let name = &self.name;
            return Err(Fault::new(
                self.span.clone(),
                format!("{} was never declared", shown(name)),
            )
            .label("no meaning for this")
            .help(format!(
                "declare it: infix {0} 40 left, or function {0} 2",
                quote_symbol(name)
            )));
        }
        let wanted = super::term::arguments(rows[0].arity);
        Err(Fault::new(
            word.span.clone(),
            format!("only a symbol with {wanted} can be {}", rows[0].word),
        )
        .label(format!("not for {}", shown(&self.name)))
        .also(self.span.clone(), "the symbol is here")
        .help("take it out, or state the law as an equation"))
    }

    /// The operator, read as one with this many arguments.
    fn operator(&self, arity: usize) -> Option<Symbol> {
        symbol_with(self.signature, &self.name, arity)
    }

    /// The symbol behind a property word, and the words for it.
    fn operand(&mut self, row: &PropertyRow) -> Result<(Symbols, String), Fault> {
        let mut symbols = Symbols::default();
        let (arity, over) = match row.operand {
            PropertyOperand::Nothing => return Ok((symbols, String::new())),
            PropertyOperand::Constant => (0, false),
            PropertyOperand::Unary => (1, false),
            PropertyOperand::Binary => (2, false),
            PropertyOperand::Over => (2, true),
        };
        if over {
            let token = self.lexer.next()?;
            if token.kind != Kind::Reserved("over") {
                return Err(
                    Fault::new(token.span, "`over` and an operator are missing here")
                        .help(format!("write {} over +", row.word)),
                );
            }
        }
        let token = self.lexer.next()?;
        let name = symbol_name(&token).unwrap_or_default();
        let Some(symbol) = symbol_with(self.signature, name, arity) else {
            let what = match arity {
                0 => "a constant",
                1 => "a function of one argument",
                _ => "a symbol with two arguments",
            };
            let fault = Fault::new(
                token.span.clone(),
                format!("{what} is expected behind {}", row.word),
            )
            .label(format!("not {what}"));
            return Err(if name.is_empty() {
                fault.help(format!("write {} and the name of {what}", row.word))
            } else {
                fault.help("declare it first, if it is the right one")
            });
        };
        match row.operand {
            PropertyOperand::Constant => symbols.constant = Some(symbol),
            PropertyOperand::Unary => {
                symbols.unary = Some(symbol);
                symbols.constant = self.unit;
                if self.unit.is_none() {
                    return Err(Fault::new(token.span, "an inverse needs a unit")
                        .label("no unit was stated before")
                        .help(format!(
                            "write unit e before it: law {} is unit e inverse i",
                            self.name
                        )));
                }
            }
            _ => symbols.other = Some(symbol),
        }
        if row.word == "unit" {
            self.unit = Some(symbol);
        }
        let over = if over { " over" } else { "" };
        Ok((symbols, format!("{over} {}", quote_symbol(name))))
    }
}

fn all_words() -> String {
    let mut words: Vec<&str> = PROPERTIES.iter().map(|row| row.word).collect();
    words.dedup();
    format!(
        "the properties are {}, some with left or right before them",
        words.join(", ")
    )
}

fn symbol_name<'a>(token: &'a Token<'_>) -> Option<&'a str> {
    match &token.kind {
        Kind::Name(name) | Kind::Quoted(name) | Kind::Sign(name) | Kind::Unknown(name) => {
            Some(name)
        }
        _ => None,
    }
}

fn symbol_with(signature: &Signature, name: &str, arity: usize) -> Option<Symbol> {
    let meaning = signature.meaning(name)?;
    let fits = |symbol: &Symbol| signature.symbols()[symbol.index()].arguments.len() == arity;
    [meaning.symbol, meaning.prefix]
        .into_iter()
        .flatten()
        .find(fits)
}
