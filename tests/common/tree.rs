//! Terms as plain trees, for small terms only: everything here is recursive.

use super::{Random, term};
use equable::proof::{Node, TermIndex, Terms};
use equable::session::Session;
use equable::term::TermId;
use std::collections::BTreeMap;
use std::fmt;

/// A term. Prefix and infix `-` have the same name and differ in their arguments.
#[derive(Clone, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Tree {
    Var(String),
    App(String, Vec<Tree>),
}

use Tree::{App, Var};

/// What stands for variables.
pub type Values = BTreeMap<String, Tree>;

pub fn var(name: &str) -> Tree {
    Var(name.to_owned())
}

pub fn app(name: &str, arguments: Vec<Tree>) -> Tree {
    App(name.to_owned(), arguments)
}

/// Signs stand between or before their arguments, names before them, always in brackets.
impl fmt::Display for Tree {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Var(name) => write!(f, "{name}"),
            App(name, arguments) => match &arguments[..] {
                [] => write!(f, "{name}"),
                [left, right] if is_sign(name) => write!(f, "({left} {name} {right})"),
                [argument] if is_sign(name) => write!(f, "({name} {argument})"),
                [first, rest @ ..] => {
                    write!(f, "{name}({first}")?;
                    for argument in rest {
                        write!(f, ", {argument}")?;
                    }
                    write!(f, ")")
                }
            },
        }
    }
}

fn is_sign(name: &str) -> bool {
    !name.starts_with(|c: char| c.is_alphanumeric() || c == '_')
}

impl Tree {
    /// A term of a session's theory.
    pub fn of(session: &Session, term: TermId) -> Tree {
        let (bank, signature) = (&session.theory().bank, &session.theory().signature);
        if let Some(variable) = bank.as_variable(term) {
            return Var(signature.variables()[variable.index as usize].name.clone());
        }
        let symbol = bank.as_symbol(term).expect("a term");
        let name = signature
            .symbol(symbol)
            .expect("a known symbol")
            .name
            .clone();
        let arguments = bank.arguments(term).iter();
        App(name, arguments.map(|a| Tree::of(session, *a)).collect())
    }

    /// A term as a session reads it.
    pub fn read(session: &mut Session, text: &str) -> Tree {
        let term = term(session, text);
        Tree::of(session, term)
    }

    /// A term of evidence. Where a sign has two meanings, evidence adds the number of arguments.
    pub fn of_evidence(terms: &Terms, term: TermIndex) -> Tree {
        match terms.node(term) {
            Node::Variable(name) => var(terms.text(name)),
            Node::Apply(name, arguments) => {
                let text = terms.text(name);
                let ending = format!("/{}", arguments.len());
                let name = text.strip_suffix(&ending).filter(|name| !name.is_empty());
                let arguments = arguments.iter().map(|a| Tree::of_evidence(terms, *a));
                app(name.unwrap_or(text), arguments.collect())
            }
        }
    }

    pub fn size(&self) -> usize {
        match self {
            Var(_) => 1,
            App(_, arguments) => 1 + arguments.iter().map(Tree::size).sum::<usize>(),
        }
    }

    pub fn variables(&self, found: &mut Vec<String>) {
        match self {
            Var(name) if !found.contains(name) => found.push(name.clone()),
            Var(_) => {}
            App(_, arguments) => arguments.iter().for_each(|a| a.variables(found)),
        }
    }

    /// The places of all subterms, the root first.
    pub fn places(&self) -> Vec<Vec<usize>> {
        let mut places = vec![Vec::new()];
        if let App(_, arguments) = self {
            for (n, argument) in arguments.iter().enumerate() {
                places.extend(argument.places().into_iter().map(|mut place| {
                    place.insert(0, n);
                    place
                }));
            }
        }
        places
    }

    pub fn at(&self, place: &[usize]) -> &Tree {
        match (place, self) {
            ([], _) => self,
            ([n, rest @ ..], App(_, arguments)) => arguments[*n].at(rest),
            _ => panic!("no such place"),
        }
    }

    pub fn with(&self, place: &[usize], new: Tree) -> Tree {
        match (place, self) {
            ([], _) => new,
            ([n, rest @ ..], App(name, arguments)) => {
                let mut arguments = arguments.clone();
                arguments[*n] = arguments[*n].with(rest, new);
                App(name.clone(), arguments)
            }
            _ => panic!("no such place"),
        }
    }

    pub fn instance(&self, values: &Values) -> Tree {
        match self {
            Var(name) => values.get(name).unwrap_or(self).clone(),
            App(name, arguments) => {
                let arguments = arguments.iter().map(|a| a.instance(values));
                App(name.clone(), arguments.collect())
            }
        }
    }

    /// Extends the values so that the instance of `self` is `term`.
    pub fn matches(&self, term: &Tree, values: &mut Values) -> bool {
        match (self, term) {
            (Var(name), _) => values.entry(name.clone()).or_insert_with(|| term.clone()) == term,
            (App(f, ss), App(g, ts)) => {
                let same = f == g && ss.len() == ts.len();
                same && ss.iter().zip(ts).all(|(s, t)| s.matches(t, values))
            }
            _ => false,
        }
    }
}

/// Two sides with their variables renamed `v0`, `v1`, … in the order of first occurrence.
pub fn renamed(left: &Tree, right: &Tree) -> (Tree, Tree) {
    let mut names = Vec::new();
    left.variables(&mut names);
    right.variables(&mut names);
    let fresh = |(n, name)| (name, var(&format!("v{n}")));
    let values: Values = names.into_iter().enumerate().map(fresh).collect();
    (left.instance(&values), right.instance(&values))
}

/// Symbols to build random terms of: names with numbers of arguments, and variables.
pub struct Symbols<'s> {
    pub leaves: &'s [&'s str],
    pub variables: &'s [&'s str],
    pub inner: &'s [(&'s str, usize)],
}

impl Symbols<'_> {
    /// A random term with about this many inner symbols.
    pub fn tree(&self, random: &mut Random, size: usize) -> Tree {
        if size == 0 || self.inner.is_empty() {
            let place = random.below(self.leaves.len() + self.variables.len());
            return match self.leaves.get(place) {
                Some(leaf) => app(leaf, Vec::new()),
                None => var(self.variables[place - self.leaves.len()]),
            };
        }
        let (name, arity) = *random.one_of(self.inner);
        let mut left = size - 1;
        let mut arguments = Vec::new();
        for n in 0..arity {
            let own = if n + 1 == arity {
                left
            } else {
                random.below(left + 1)
            };
            left -= own;
            arguments.push(self.tree(random, own));
        }
        app(name, arguments)
    }
}

/// One random use of a law, either way round, somewhere in a term. Variables that only the other
/// side has become random small terms. The term itself if the law applies nowhere.
pub fn apply_somewhere(
    term: &Tree,
    laws: &[(Tree, Tree)],
    symbols: &Symbols,
    random: &mut Random,
) -> Tree {
    let mut uses = Vec::new();
    for place in term.places() {
        for (left, right) in laws {
            for (from, to) in [(left, right), (right, left)] {
                let mut values = Values::new();
                if from.matches(term.at(&place), &mut values) {
                    uses.push((place.clone(), to, values));
                }
            }
        }
    }
    if uses.is_empty() {
        return term.clone();
    }
    let (place, to, values) = &uses[random.below(uses.len())];
    let mut values = values.clone();
    let mut names = Vec::new();
    to.variables(&mut names);
    for name in names {
        let size = random.below(2);
        values
            .entry(name)
            .or_insert_with(|| symbols.tree(random, size));
    }
    term.with(place, to.instance(&values))
}
