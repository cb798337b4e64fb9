//! What was read as the text of a theory.

use super::formula::{Node, Term, Terms, Word};
use super::naming::{Taken, Written};
use crate::language::{quote_law, quote_symbol};
use rustc_hash::FxHashMap;

/// A statement of the theory.
pub(super) struct Statement {
    /// Its name in the file.
    pub name: String,
    /// What it becomes.
    pub purpose: Purpose,
    /// The left side.
    pub left: Term,
    /// The right side.
    pub right: Term,
}

/// What becomes of a formula.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) enum Purpose {
    /// A law.
    Law,
    /// A claim, in which values are asked for these variables.
    Claim(Vec<Word>),
}

/// So many names stand in one declaration.
const PER_LINE: usize = 12;

/// The text of the theory, and notes on what became of names.
pub(super) fn text(title: &str, terms: &Terms, statements: &[Statement]) -> (String, Vec<String>) {
    let mut book = Book::new(terms, statements);
    let mut text = String::new();
    let title: String = title
        .chars()
        .filter(|c| *c != '"' && !c.is_control())
        .collect();
    if !title.is_empty() {
        text += &format!("theory {}\n", quote_law(&title));
    }
    book.declare(&mut text);
    let is_claim = |statement: &&Statement| statement.purpose != Purpose::Law;
    let laws = statements.iter().filter(|s| !is_claim(s));
    for statement in laws.chain(statements.iter().filter(is_claim)) {
        let name = quote_law(&book.laws.take(&statement.name));
        match &statement.purpose {
            Purpose::Law => text += &format!("law {name}: "),
            Purpose::Claim(unknowns) if unknowns.is_empty() => text += &format!("claim {name}: "),
            Purpose::Claim(unknowns) => {
                let unknowns = unknowns.iter().map(|word| book.variables[word].as_str());
                let unknowns = unknowns.collect::<Vec<_>>().join(" ");
                text += &format!("claim {name}: find {unknowns}: ");
            }
        }
        book.term(statement.left.clone(), &mut text);
        text += " = ";
        book.term(statement.right.clone(), &mut text);
        text.push('\n');
    }
    (text, book.notes())
}

/// `a`, `a and b`, `a, b and c`.
fn and<T: AsRef<str>>(parts: &[T]) -> String {
    let mut text = String::new();
    for (place, part) in parts.iter().enumerate() {
        text += match (place, parts.len() - place) {
            (0, _) => "",
            (_, 1) => " and ",
            _ => ", ",
        };
        text += part.as_ref();
    }
    text
}

/// The names of the theory.
struct Book<'t> {
    terms: &'t Terms,
    variables: FxHashMap<Word, String>,
    symbols: FxHashMap<(Word, u32), Written>,
    /// Variables and symbols in the order in which they occur.
    variables_in_order: Vec<Word>,
    symbols_in_order: Vec<(Word, u32)>,
    /// A law may be called like a function, but not like a variable.
    laws: Taken,
}

impl<'t> Book<'t> {
    fn new(terms: &'t Terms, statements: &[Statement]) -> Book<'t> {
        let mut book = Book {
            terms,
            variables: FxHashMap::default(),
            symbols: FxHashMap::default(),
            variables_in_order: Vec::new(),
            symbols_in_order: Vec::new(),
            laws: Taken::default(),
        };
        let nodes = || {
            let sides = statements.iter().flat_map(|s| [&s.left, &s.right]);
            sides.flat_map(|side| &terms.nodes[side.clone()])
        };
        let mut names = Taken::default();
        for node in nodes() {
            if let Node::Variable(word) = *node
                && !book.variables.contains_key(&word)
            {
                let name = names.take(&terms.words[word as usize]);
                book.laws.take(&name);
                book.variables.insert(word, quote_symbol(&name));
                book.variables_in_order.push(word);
            }
        }
        for node in nodes() {
            if let Node::Apply(word, arguments) = *node
                && !book.symbols.contains_key(&(word, arguments))
            {
                let name = names.take(&terms.words[word as usize]);
                let written = Written::new(&name, arguments);
                book.symbols.insert((word, arguments), written);
                book.symbols_in_order.push((word, arguments));
            }
        }
        book
    }

    /// One note for each name with different numbers of arguments: often it is mistyped.
    fn notes(&self) -> Vec<String> {
        let mut uses: FxHashMap<Word, Vec<u32>> = FxHashMap::default();
        for (word, arguments) in &self.symbols_in_order {
            uses.entry(*word).or_default().push(*arguments);
        }
        let mut notes = Vec::new();
        for (word, _) in &self.symbols_in_order {
            let Some(counts) = uses.remove(word).filter(|counts| counts.len() > 1) else {
                continue;
            };
            let written = counts
                .iter()
                .map(|n| self.symbols[&(*word, *n)].text.as_str());
            let written: Vec<&str> = written.collect();
            let numbers: Vec<String> = counts.iter().map(u32::to_string).collect();
            let how_many = match counts.len() {
                2 => "two".to_owned(),
                many => many.to_string(),
            };
            notes.push(format!(
                "{} is used with {} arguments, as {how_many} symbols {}",
                self.terms.words[*word as usize],
                and(&numbers),
                and(&written)
            ));
        }
        notes
    }

    /// The lines that declare constants, functions and variables.
    fn declare(&self, text: &mut String) {
        let is_constant = |(_, arguments): &&(Word, u32)| *arguments == 0;
        let constants: Vec<&str> = self
            .symbols_in_order
            .iter()
            .filter(is_constant)
            .map(|symbol| self.symbols[symbol].text.as_str())
            .collect();
        let variables: Vec<&str> = self
            .variables_in_order
            .iter()
            .map(|word| self.variables[word].as_str())
            .collect();
        for names in constants.chunks(PER_LINE) {
            *text += &format!("constant {}\n", names.join(" "));
        }
        for symbol in self.symbols_in_order.iter().filter(|s| s.1 > 0) {
            *text += &self.symbols[symbol].declaration(symbol.1);
            text.push('\n');
        }
        for names in variables.chunks(PER_LINE) {
            *text += &format!("variable {}\n", names.join(" "));
        }
    }

    /// Writes a term.
    fn term(&self, term: Term, text: &mut String) {
        // The applications that are open: arguments to come, what stands between them, and
        // whether a bracket is to be closed.
        let mut open: Vec<(u32, &str, bool)> = Vec::new();
        for node in &self.terms.nodes[term] {
            match *node {
                Node::Variable(word) => *text += &self.variables[&word],
                Node::Apply(word, arguments) => {
                    let written = &self.symbols[&(word, arguments)];
                    if written.is_infix {
                        // Functions have brackets of their own; their arguments need none.
                        let inside = open.last().is_some_and(|(_, between, _)| *between != ", ");
                        if inside {
                            text.push('(');
                        }
                        open.push((arguments, &written.text, inside));
                        continue;
                    }
                    *text += &written.text;
                    if arguments > 0 {
                        text.push('(');
                        open.push((arguments, ", ", true));
                        continue;
                    }
                }
            }
            while let Some((left, between, closes)) = open.last_mut() {
                *left -= 1;
                match (*left, *between) {
                    (0, _) => {
                        if *closes {
                            text.push(')');
                        }
                        open.pop();
                        continue;
                    }
                    (_, ", ") => *text += ", ",
                    (_, sign) => *text += &format!(" {sign} "),
                }
                break;
            }
        }
    }
}
