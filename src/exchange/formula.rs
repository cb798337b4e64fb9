//! Formulas that are one equation.

use super::token::{Kind, Lexer, Token};
use crate::language::Fault;
use rustc_hash::{FxHashMap, FxHashSet};
use std::ops::Range;

/// A word or variable, by its number in [`Terms`].
pub(super) type Word = u32;

/// A part of a term; a term is written as its parts in the order in which they are read.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum Node {
    /// A variable.
    Variable(Word),
    /// A function or constant, with its number of arguments, which follow.
    Apply(Word, u32),
}

/// All terms that were read.
#[derive(Default)]
pub(super) struct Terms {
    /// The terms, one after the other.
    pub nodes: Vec<Node>,
    /// The words and variables as they are written, without quotes.
    pub words: Vec<String>,
    known: FxHashMap<String, Word>,
}

/// A term, as its place in [`Terms::nodes`].
pub(super) type Term = Range<usize>;

/// A variable that a quantifier binds.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) struct Bound {
    /// The variable.
    pub variable: Word,
    /// For all values, or for some value?
    pub universal: bool,
}

/// A formula with its negations moved inwards.
#[derive(Clone, Debug)]
pub(super) struct Formula {
    /// The quantified variables that occur, the outermost first.
    pub bound: Vec<Bound>,
    /// The left side.
    pub left: Term,
    /// The right side.
    pub right: Term,
    /// Is it an equation, and not an inequation?
    pub positive: bool,
    /// Its place in the text.
    pub span: Range<usize>,
}

impl Formula {
    /// Is it an equation that is to hold for all values of its variables?
    pub fn is_law(&self) -> bool {
        self.positive && self.bound.iter().all(|bound| bound.universal)
    }

    /// The opposite.
    pub fn negated(mut self) -> Formula {
        self.positive = !self.positive;
        for bound in &mut self.bound {
            bound.universal = !bound.universal;
        }
        self
    }
}

impl Terms {
    fn word(&mut self, text: &str) -> Word {
        if let Some(known) = self.known.get(text) {
            return *known;
        }
        let word = self.words.len() as Word;
        self.words.push(text.to_owned());
        self.known.insert(text.to_owned(), word);
        word
    }

    /// Reads a formula. In clauses all variables are quantified universally.
    ///
    /// # Errors
    ///
    /// Whatever is not one equation or inequation.
    pub fn formula(&mut self, lexer: &mut Lexer<'_>, is_clause: bool) -> Result<Formula, Fault> {
        let start = lexer.peek()?.span.start;
        let mut brackets = Vec::new();
        let mut negated = false;
        let mut bound: Vec<Bound> = Vec::new();
        loop {
            let token = lexer.peek()?;
            match token.kind {
                Kind::Sign("(") => {
                    lexer.next()?;
                    brackets.push(token.span);
                }
                Kind::Sign("~") => {
                    lexer.next()?;
                    negated = !negated;
                }
                Kind::Sign(sign @ ("!" | "?")) => {
                    if is_clause {
                        return Err(Fault::new(token.span, "a clause has no quantifiers")
                            .help("leave it out, or write fof in place of cnf"));
                    }
                    lexer.next()?;
                    let universal = (sign == "!") != negated;
                    self.bound(lexer, universal, &mut bound)?;
                }
                _ => break,
            }
        }
        let left_start = lexer.peek()?.span.start;
        let left = self.term(lexer)?;
        let atom = left_start..lexer.last();
        let token = lexer.next()?;
        let positive = match token.kind {
            Kind::Sign("=") => !negated,
            Kind::Sign("!=") => negated,
            _ => return Err(no_equation(&token, atom)),
        };
        let right = self.term(lexer)?;
        while let Some(open) = brackets.pop() {
            let token = lexer.next()?;
            if !token.is(")") {
                return Err(one_equation(&token)
                    .unwrap_or_else(|| unclosed(&token))
                    .also(open, "the bracket was opened"));
            }
        }
        if let Some(fault) = one_equation(&lexer.peek()?) {
            return Err(fault);
        }
        let span = start..lexer.last();
        let bound = self.bindings(left.start..right.end, bound, is_clause, &span)?;
        Ok(Formula {
            bound,
            left,
            right,
            positive,
            span,
        })
    }

    /// The variables behind a quantifier, in square brackets, and the colon.
    fn bound(
        &mut self,
        lexer: &mut Lexer<'_>,
        universal: bool,
        bound: &mut Vec<Bound>,
    ) -> Result<(), Fault> {
        expect(lexer, "[", "a quantifier is written ![X, Y]: or ?[X, Y]:")?;
        loop {
            let token = lexer.next()?;
            let Kind::Variable(name) = token.kind else {
                return Err(Fault::new(token.span, "a variable is expected here")
                    .help("variables begin with a capital letter"));
            };
            let variable = self.word(name);
            bound.push(Bound {
                variable,
                universal,
            });
            let token = lexer.next()?;
            match token.kind {
                Kind::Sign(",") => {}
                Kind::Sign("]") => break,
                Kind::Sign(":") => {
                    return Err(
                        Fault::new(token.span, "variables with a type are not supported")
                            .help("state the equations without types, as fof or cnf"),
                    );
                }
                _ => {
                    return Err(Fault::new(token.span, "a comma or ] is expected here")
                        .help("a quantifier is written ![X, Y]: or ?[X, Y]:"));
                }
            }
        }
        expect(lexer, ":", "a quantifier is written ![X, Y]: or ?[X, Y]:")
    }

    /// The quantified variables that occur; the innermost quantifier of a variable counts.
    fn bindings(
        &self,
        nodes: Range<usize>,
        bound: Vec<Bound>,
        is_clause: bool,
        span: &Range<usize>,
    ) -> Result<Vec<Bound>, Fault> {
        let mut free: FxHashSet<Word> = FxHashSet::default();
        let mut in_order = Vec::new();
        for node in &self.nodes[nodes] {
            if let Node::Variable(variable) = node
                && free.insert(*variable)
            {
                in_order.push(*variable);
            }
        }
        if is_clause {
            let all = |variable| Bound {
                variable,
                universal: true,
            };
            return Ok(in_order.into_iter().map(all).collect());
        }
        let mut used = bound;
        used.reverse();
        used.retain(|bound| free.remove(&bound.variable));
        used.reverse();
        match in_order.iter().find(|variable| free.contains(variable)) {
            None => Ok(used),
            Some(variable) => {
                let name = &self.words[*variable as usize];
                Err(
                    Fault::new(span.clone(), format!("{name} is bound by no quantifier"))
                        .label("in this formula")
                        .help(format!(
                            "write ![{name}]: before it, or cnf in place of fof"
                        )),
                )
            }
        }
    }

    /// Reads a term.
    fn term(&mut self, lexer: &mut Lexer<'_>) -> Result<Term, Fault> {
        let start = self.nodes.len();
        // The applications that are open: where each stands, and where its bracket was opened.
        let mut open: Vec<(usize, Range<usize>)> = Vec::new();
        loop {
            let token = lexer.next()?;
            let node = match &token.kind {
                Kind::Word(name) => Node::Apply(self.word(name), 0),
                Kind::Variable(name) => Node::Variable(self.word(name)),
                _ => return Err(no_term(&token)),
            };
            self.nodes.push(node);
            let bracket = lexer.peek()?;
            if bracket.is("(") {
                lexer.next()?;
                if let Kind::Variable(name) = token.kind {
                    return Err(Fault::new(
                        token.span,
                        format!("{name} is a variable and takes no arguments"),
                    )
                    .help("functions begin with a small letter, or stand in 'single quotes'"));
                }
                open.push((self.nodes.len() - 1, bracket.span));
                self.count(&open);
                continue;
            }
            loop {
                let Some((_, bracket)) = open.last() else {
                    return Ok(start..self.nodes.len());
                };
                let token = lexer.next()?;
                match token.kind {
                    Kind::Sign(",") => {
                        self.count(&open);
                        break;
                    }
                    Kind::Sign(")") => {
                        open.pop();
                    }
                    _ => {
                        return Err(
                            unclosed(&token).also(bracket.clone(), "the bracket was opened")
                        );
                    }
                }
            }
        }
    }

    /// One more argument for the innermost open application.
    fn count(&mut self, open: &[(usize, Range<usize>)]) {
        if let Some((at, _)) = open.last()
            && let Node::Apply(_, arguments) = &mut self.nodes[*at]
        {
            *arguments += 1;
        }
    }
}

/// Reads this sign.
///
/// # Errors
///
/// Something else comes.
pub(super) fn expect(lexer: &mut Lexer<'_>, sign: &str, help: &str) -> Result<(), Fault> {
    let token = lexer.next()?;
    if token.is(sign) {
        return Ok(());
    }
    Err(Fault::new(token.span, format!("{sign} is expected here")).help(help))
}

fn unclosed(token: &Token<'_>) -> Fault {
    Fault::new(token.span.clone(), "a comma or ) is expected here")
        .help("look for a bracket that is not closed")
}

/// The message if a formula goes on behind its first equation.
fn one_equation(token: &Token<'_>) -> Option<Fault> {
    let connective = match token.kind {
        Kind::Sign(sign @ ("|" | "&" | "=>" | "<=" | "<=>" | "<~>" | "~|" | "~&")) => sign,
        Kind::Sign("=" | "!=") => {
            let fault = Fault::new(token.span.clone(), "an equation has two sides");
            return Some(fault.help("state two equations, each in its own statement"));
        }
        _ => return None,
    };
    let help = match connective {
        "&" => "state each part in a statement of its own",
        _ => "only single equations and inequations can be imported",
    };
    Some(
        Fault::new(token.span.clone(), "this is not a unit equation")
            .label(format!("{connective} joins it to another formula"))
            .help(help),
    )
}

/// Where `=` or `!=` should stand behind the first term.
fn no_equation(token: &Token<'_>, atom: Range<usize>) -> Fault {
    match token.kind {
        Kind::Sign(")" | "," | "|" | "&" | "=>" | "<=" | "<=>" | "<~>" | "~|" | "~&") => {
            Fault::new(atom, "this is not an equation")
                .label("a relation")
                .help("relations can be stated as equations, such as p(X) = true")
        }
        _ => Fault::new(token.span.clone(), "= or != is expected here")
            .label("= or != is missing")
            .help("a formula is an equation s = t, or an inequation s != t"),
    }
}

fn no_term(token: &Token<'_>) -> Fault {
    let span = token.span.clone();
    match token.kind {
        Kind::Dollar => Fault::new(
            span,
            "words with $ have a meaning that equations cannot give",
        )
        .label("a word of the syntax itself")
        .help("write the statement without it, as an equation"),
        Kind::Number(number) => Fault::new(span, "numbers are not supported")
            .label("a number, which would have to differ from every other")
            .help(format!(
                "a constant can be called '{number}', in single quotes"
            )),
        Kind::Distinct => Fault::new(span, "objects in double quotes are not supported")
            .label("it would have to differ from every other")
            .help("a constant stands in 'single quotes'"),
        Kind::End => Fault::new(span, "a term is missing at the end of the text")
            .help("a statement is written cnf(name, axiom, s = t)."),
        Kind::Sign("^" | "@" | "!" | "?" | "~") => {
            Fault::new(span, "this cannot stand inside a term")
                .help("a term is a variable X, a constant c, or f(X, c)")
        }
        _ => Fault::new(span, "a term is expected here")
            .help("a term is a variable X, a constant c, or f(X, c)"),
    }
}
