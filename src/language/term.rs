//! Text to terms, by operator precedence with an explicit stack.
//!
//! The stacks hold one small entry for each open bracket, call, waiting operator and operand, and
//! tokens are read one at a time, so that a term a million levels deep costs what its length says.

mod faults;

use super::diagnostic::Fault;
use super::lexer::{Kind, Lexer, Token};
use super::unknown::Position;
use crate::term::{Bank, Sort, Symbol, TermId, Variable};
use crate::theory::{Fixity, Meaning, Side, Signature};
use faults::{argument_place, call_example, unclosed, with_article};
pub(in crate::language) use faults::{arguments, shown, type_of};
use std::ops::Range;

/// A term with its place in the text.
#[derive(Clone, Copy, Debug)]
pub(crate) struct Operand {
    /// The term.
    pub term: TermId,
    start: u32,
    end: u32,
}

impl Operand {
    /// Where it stands, brackets included.
    pub fn span(self) -> Range<usize> {
        self.start as usize..self.end as usize
    }

    fn new(term: TermId, span: Range<usize>) -> Self {
        // The reader refuses texts whose places do not fit: see `TermReader::term`.
        Operand {
            term,
            start: span.start as u32,
            end: span.end as u32,
        }
    }
}

/// A place of a token, kept small: the stacks may hold millions.
#[derive(Clone, Copy, Debug)]
struct Place(u32);

/// How many operators and brackets may wait at once.
const DEEPEST: usize = 1 << 24;

/// The variables of a line that has its own: those of derived rules.
///
/// A name stands for the next number when it is first met. Its sort is that of the declared
/// variable of this name, else what the line says, else the only sort that there is.
#[derive(Debug, Default)]
pub(crate) struct Locals {
    /// The names with their sorts, by number.
    pub known: Vec<(String, Sort)>,
    /// Sorts that the line states.
    pub stated: Vec<(String, Sort)>,
}

/// What waits on the stack for its operands.
#[derive(Clone, Copy, Debug)]
enum Waiting {
    Bracket(Place),
    Call {
        symbol: Symbol,
        name: Place,
        first: u32,
    },
    Prefix {
        symbol: Symbol,
        strength: u8,
        sign: Place,
    },
    Infix {
        symbol: Symbol,
        strength: u8,
        side: Side,
        sign: Place,
    },
}

/// What comes next.
enum State {
    Operand,
    Operator,
}

/// Reads terms from a lexer into a bank.
pub(crate) struct TermReader<'a, 's, 't> {
    /// Where the text is read from; it stands before the token that ended the last term.
    pub lexer: Lexer<'s, 't>,
    /// What the names mean.
    pub signature: &'s Signature,
    /// Where the terms go.
    pub bank: &'a mut Bank,
    /// What `it` stands for.
    pub it: Option<TermId>,
    /// The line's own variables, if it has its own.
    pub locals: Option<Locals>,
    waiting: Vec<Waiting>,
    operands: Vec<Operand>,
}

impl<'a, 's, 't> TermReader<'a, 's, 't> {
    /// A reader that goes on where the lexer stands.
    pub fn new(lexer: Lexer<'s, 't>, signature: &'s Signature, bank: &'a mut Bank) -> Self {
        TermReader {
            lexer,
            signature,
            bank,
            it: None,
            locals: None,
            waiting: Vec::new(),
            operands: Vec::new(),
        }
    }

    /// Reads a term up to the first token that cannot be part of it. `expected` only helps to
    /// phrase messages.
    pub fn term(&mut self, expected: Option<Sort>) -> Result<Operand, Fault> {
        self.waiting.clear();
        self.operands.clear();
        let mut state = State::Operand;
        loop {
            let token = self.lexer.next()?;
            if token.span.end > u32::MAX as usize || self.waiting.len() > DEEPEST {
                return Err(Fault::new(token.span, "this term is too large to read")
                    .help("state parts of it as definitions"));
            }
            let next = match state {
                State::Operand => self.operand(token, expected)?,
                State::Operator => {
                    let start = token.span.start;
                    match self.operator(token)? {
                        Some(next) => next,
                        None => {
                            self.lexer.back_to(start);
                            break;
                        }
                    }
                }
            };
            state = next;
        }
        self.reduce(|_| true)?;
        Ok(self
            .operands
            .pop()
            .expect("a whole term leaves one operand"))
    }

    /// Reads the term after an equality sign and checks that the sorts agree.
    pub fn other_side(&mut self, left: &Operand) -> Result<Operand, Fault> {
        let sort = self.bank.sort(left.term);
        let right = self.term(Some(sort))?;
        let other = self.bank.sort(right.term);
        if sort != other {
            return Err(Fault::new(
                left.span().start..right.span().end,
                "the two sides of an equation are of the same sort",
            )
            .label(format!(
                "the left side is of sort {}, the right side of sort {}",
                self.signature.sort_name(sort),
                self.signature.sort_name(other)
            ))
            .help("check which symbols the two sides begin with"));
        }
        Ok(right)
    }

    /// Takes the token at which an operand should begin.
    fn operand(&mut self, token: Token<'t>, expected: Option<Sort>) -> Result<State, Fault> {
        let span = token.span;
        match token.kind {
            Kind::Open => {
                self.waiting.push(Waiting::Bracket(place(&span)));
                Ok(State::Operand)
            }
            Kind::Name(name) | Kind::Quoted(name) | Kind::Sign(name) => {
                self.named(&name, span, expected)
            }
            Kind::Unknown(sign) => Err(self.unknown(&sign, span, Position::Operand, expected)),
            Kind::Reserved(word) => Err(self.reserved(word, span)),
            kind => Err(self.missing(&kind, span)),
        }
    }

    /// Takes a name or sign in the place of an operand.
    fn named(
        &mut self,
        name: &str,
        span: Range<usize>,
        expected: Option<Sort>,
    ) -> Result<State, Fault> {
        let meaning = self.signature.meaning(name).unwrap_or_default();
        if let Some(symbol) = meaning.prefix {
            let Fixity::Prefix { strength } = self.signature.symbols()[symbol.index()].fixity
            else {
                unreachable!("`prefix` holds prefix operators only");
            };
            self.waiting.push(Waiting::Prefix {
                symbol,
                strength,
                sign: place(&span),
            });
            return Ok(State::Operand);
        }
        if let Some(symbol) = meaning.symbol {
            return self.symbol(symbol, name, span);
        }
        if let Some(variable) = self.variable(name, meaning) {
            let term = self.bank.variable(variable);
            self.operands.push(Operand::new(term, span));
            return self.no_call(name, "a variable");
        }
        if let Some(it) = self.it.filter(|_| name == "it") {
            self.operands.push(Operand::new(it, span));
            return self.no_call(name, "the last normal form");
        }
        Err(self.unknown(name, span, Position::Operand, expected))
    }

    /// Takes a constant or a function in the place of an operand.
    fn symbol(&mut self, symbol: Symbol, name: &str, span: Range<usize>) -> Result<State, Fault> {
        let declaration = &self.signature.symbols()[symbol.index()];
        match declaration.fixity {
            Fixity::Plain if declaration.arguments.is_empty() => {
                let term = self.bank.apply(symbol, &[]);
                self.operands.push(Operand::new(term, span));
                self.no_call(name, "a constant")
            }
            Fixity::Plain => {
                let open = self.lexer.peek()?;
                if open.kind != Kind::Open {
                    let count = declaration.arguments.len();
                    return Err(Fault::new(
                        span,
                        format!("{} takes {}", shown(name), arguments(count)),
                    )
                    .label("no bracket follows")
                    .help(format!("write {}", call_example(name, count))));
                }
                self.lexer.next()?;
                self.waiting.push(Waiting::Call {
                    symbol,
                    name: place(&span),
                    first: self.operands.len() as u32,
                });
                Ok(State::Operand)
            }
            fixity => Err(self.misplaced(name, span, fixity)),
        }
    }

    fn variable(&mut self, name: &str, meaning: Meaning) -> Option<Variable> {
        let declared = meaning.variable.map(|index| self.signature.variable(index));
        let Some(locals) = &mut self.locals else {
            return declared;
        };
        if let Some(place) = locals.known.iter().position(|(known, _)| known == name) {
            let sort = locals.known[place].1;
            let index = place as u32;
            return Some(Variable { index, sort });
        }
        let stated = locals.stated.iter().find(|(stated, _)| stated == name);
        let only = (self.signature.sorts().len() == 1).then_some(Sort(0));
        let sort = declared
            .map(|variable| variable.sort)
            .or(stated.map(|(_, sort)| *sort))
            .or(only)?;
        let index = locals.known.len() as u32;
        if index >= Variable::LIMIT {
            return None;
        }
        locals.known.push((name.to_owned(), sort));
        Some(Variable { index, sort })
    }

    /// Takes the token behind an operand; none if it ends the term.
    fn operator(&mut self, token: Token<'t>) -> Result<Option<State>, Fault> {
        let span = token.span;
        match token.kind {
            Kind::Close => self.close(span),
            Kind::Comma => self.comma(span),
            Kind::Name(name) | Kind::Quoted(name) | Kind::Sign(name) => {
                self.operator_named(&name, span)
            }
            Kind::Unknown(sign) => Err(self.unknown(&sign, span, Position::Operator, None)),
            Kind::Open => Err(
                Fault::new(span, "an operator is missing before this bracket")
                    .help("put an infix operator between the two terms, or close the line here"),
            ),
            kind => match self.open_bracket() {
                Some(bracket) => Err(unclosed(bracket, &kind, span)),
                None => Ok(None),
            },
        }
    }

    fn operator_named(&mut self, name: &str, span: Range<usize>) -> Result<Option<State>, Fault> {
        let meaning = self.signature.meaning(name).unwrap_or_default();
        let fixity = meaning
            .symbol
            .map(|symbol| self.signature.symbols()[symbol.index()].fixity);
        match (fixity, meaning.symbol) {
            (Some(Fixity::Infix { strength, side }), Some(symbol)) => {
                self.make_room(strength, side, name, &span)?;
                self.waiting.push(Waiting::Infix {
                    symbol,
                    strength,
                    side,
                    sign: place(&span),
                });
                Ok(Some(State::Operand))
            }
            (Some(Fixity::Postfix { .. }), Some(symbol)) => {
                let start = self
                    .operands
                    .last()
                    .map_or(span.start, |o| o.start as usize);
                self.apply(symbol, 1, place(&span), start..span.end)?;
                Ok(Some(State::Operator))
            }
            // The caller may know the word; `end` reports it otherwise.
            _ if self.open_bracket().is_none() => Ok(None),
            _ => Err(self.adjacent(name, span)),
        }
    }

    /// Applies the waiting operators that take their operands before an infix operator of this
    /// strength does.
    fn make_room(
        &mut self,
        strength: u8,
        side: Side,
        name: &str,
        span: &Range<usize>,
    ) -> Result<(), Fault> {
        self.reduce(|waiting| match waiting {
            Waiting::Infix {
                strength: s,
                side: before,
                ..
            } => *s > strength || (*s == strength && *before == Side::Left && side == Side::Left),
            Waiting::Prefix { strength: s, .. } => *s >= strength,
            _ => false,
        })?;
        if let Some(Waiting::Infix {
            symbol,
            strength: s,
            side: before,
            sign,
        }) = self.waiting.last()
            && *s == strength
            && !(*before == Side::Right && side == Side::Right)
        {
            let other = &self.signature.symbols()[symbol.index()].name;
            return Err(Fault::new(
                span.clone(),
                format!(
                    "{} and {} bind equally strongly, and not to the same side",
                    shown(other),
                    shown(name)
                ),
            )
            .label("brackets are missing")
            .also(
                sign.range(),
                format!("the other operator, {}, is here", shown(other)),
            )
            .help(format!(
                "write (a {other} b) {name} c or a {other} (b {name} c)"
            )));
        }
        Ok(())
    }

    /// Applies waiting operators from the top as long as `ready` says so, at most down to the
    /// innermost open bracket.
    fn reduce(&mut self, ready: impl Fn(&Waiting) -> bool) -> Result<(), Fault> {
        while let Some(&top) = self.waiting.last() {
            if !ready(&top) {
                break;
            }
            match top {
                Waiting::Prefix { symbol, sign, .. } => {
                    let operand = self.operands.last().expect("an operand came after");
                    let span = sign.0 as usize..operand.end as usize;
                    self.apply(symbol, 1, sign, span)?;
                }
                Waiting::Infix { symbol, sign, .. } => {
                    let [.., left, right] = self.operands.as_slice() else {
                        unreachable!("an infix operator waits between two operands");
                    };
                    let span = left.start as usize..right.end as usize;
                    self.apply(symbol, 2, sign, span)?;
                }
                Waiting::Bracket(_) | Waiting::Call { .. } => break,
            }
            self.waiting.pop();
        }
        Ok(())
    }

    /// Replaces the last `count` operands by the symbol applied to them.
    fn apply(
        &mut self,
        symbol: Symbol,
        count: usize,
        name: Place,
        span: Range<usize>,
    ) -> Result<(), Fault> {
        let first = self.operands.len() - count;
        let declaration = &self.signature.symbols()[symbol.index()];
        if declaration.arguments.len() != count {
            let wanted = declaration.arguments.len();
            return Err(Fault::new(
                span,
                format!(
                    "{} takes {}, and here {} {count}",
                    shown(&declaration.name),
                    arguments(wanted),
                    if count == 1 { "is" } else { "are" }
                ),
            )
            .label(arguments(count))
            .also(name.range(), "the function is here")
            .help(format!("write {}", call_example(&declaration.name, wanted))));
        }
        let wanted_sorts = declaration.arguments.iter().enumerate();
        for (operand, (place, &wanted)) in self.operands[first..].iter().zip(wanted_sorts) {
            let sort = self.bank.sort(operand.term);
            if sort != wanted {
                return Err(Fault::new(
                    operand.span(),
                    format!(
                        "{} takes {} {}, not {}",
                        shown(&declaration.name),
                        with_article(self.signature.sort_name(wanted)),
                        argument_place(declaration.fixity, place),
                        with_article(self.signature.sort_name(sort))
                    ),
                )
                .label(format!("of sort {}", self.signature.sort_name(sort)))
                .also(
                    name.range(),
                    format!("{} is here", shown(&declaration.name)),
                )
                .help(format!("its type is {}", type_of(self.signature, symbol))));
            }
        }
        let terms = self.operands.drain(first..).map(|operand| operand.term);
        let term = if count <= 2 {
            let mut pair = [TermId::NONE; 2];
            for (slot, term) in pair.iter_mut().zip(terms) {
                *slot = term;
            }
            self.bank.apply(symbol, &pair[..count])
        } else {
            let terms: Vec<TermId> = terms.collect();
            self.bank.apply(symbol, &terms)
        };
        self.operands.push(Operand::new(term, span));
        Ok(())
    }

    fn close(&mut self, span: Range<usize>) -> Result<Option<State>, Fault> {
        self.reduce(|_| true)?;
        match self.waiting.pop() {
            Some(Waiting::Bracket(open)) => {
                let inside = self.operands.last_mut().expect("an operand came before");
                (inside.start, inside.end) = (open.0, span.end as u32);
            }
            Some(Waiting::Call {
                symbol,
                name,
                first,
            }) => {
                let whole = name.0 as usize..span.end;
                self.apply(symbol, self.operands.len() - first as usize, name, whole)?;
            }
            _ => {
                return Err(Fault::new(span, "this bracket was never opened")
                    .label("no bracket to close")
                    .help("take it away, or put the opening bracket where it belongs"));
            }
        }
        Ok(Some(State::Operator))
    }

    fn comma(&mut self, span: Range<usize>) -> Result<Option<State>, Fault> {
        self.reduce(|_| true)?;
        match self.waiting.last() {
            Some(Waiting::Call { .. }) => Ok(Some(State::Operand)),
            Some(Waiting::Bracket(open)) => {
                let open = open.range();
                Err(
                    Fault::new(span, "a comma stands only between the arguments of a function")
                        .also(open, "this bracket does not follow a function")
                        .help("put the name of a function before the bracket, or an operator in place of the comma"),
                )
            }
            _ => Ok(None),
        }
    }

    /// A bracket right behind something that takes no arguments is reported here, where it is
    /// known what that is.
    fn no_call(&self, name: &str, what: &str) -> Result<State, Fault> {
        let next = self.lexer.peek();
        match next {
            Ok(token) if token.kind == Kind::Open => Err(Fault::new(
                token.span,
                format!("{} is {what} and takes no arguments", shown(name)),
            )
            .label("no arguments can follow")
            .help("an infix operator may be missing, or it is another name that was meant")),
            // What is wrong with the next token is reported when it is read.
            _ => Ok(State::Operator),
        }
    }

    fn open_bracket(&self) -> Option<Range<usize>> {
        self.waiting.iter().rev().find_map(|waiting| match waiting {
            Waiting::Bracket(open) => Some(open.range()),
            Waiting::Call { name, .. } => Some(name.range()),
            _ => None,
        })
    }
}

impl Place {
    /// Of its first character.
    fn range(self) -> Range<usize> {
        self.0 as usize..self.0 as usize + 1
    }
}

fn place(span: &Range<usize>) -> Place {
    Place(span.start as u32)
}
