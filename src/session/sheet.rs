//! Evidence as text: its plain terms become terms of a bank of their own, for the printer.

use super::naming::Naming;
use crate::language::{Names, Printer, SymbolName, quote_law};
use crate::proof::{self, Name, Node, TermIndex, Terms, Way};
use crate::term::{Bank, Sort, Symbol, TermId, Variable};
use crate::theory::{Signature, Theory};
use rustc_hash::FxHashMap;
use std::borrow::Cow;
use std::ops::Range;

/// One line of a chain of equalities: what the step before led to, and by what.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ProofLine {
    /// The term.
    pub text: String,
    /// Where in the text the subterm stands that the step has changed.
    pub changed: Option<Range<usize>>,
    /// The law, as it is typed, or the lemma; empty for the first line.
    pub by: String,
    /// Was it used from right to left?
    pub backward: bool,
    /// The place of the changed subterm, by argument numbers from 1.
    pub at: Vec<u32>,
}

/// A proved equation.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct LemmaText {
    /// What it is called: `lemma 2`, or `rule 7` where it is about a rule.
    pub name: String,
    /// The equation.
    pub equation: String,
    /// Its chain.
    pub lines: Vec<ProofLine>,
}

/// A proof as text.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ProofText {
    /// The lemmas, in the order of use.
    pub lemmas: Vec<LemmaText>,
    /// The chain of the claim.
    pub lines: Vec<ProofLine>,
}

/// The beginning of a proof, and how much there is of it.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct ProofHead {
    /// The first lines of the chain of the claim.
    pub lines: Vec<ProofLine>,
    /// How many lines more it has.
    pub more: usize,
    /// How many lemmas it rests on.
    pub lemmas: usize,
    /// How many steps these have together.
    pub lemma_steps: usize,
}

/// A term in a line of a proof is cut where it is longer than this.
const LONGEST_LINE: usize = 4_000;

/// The plain terms of one piece of evidence, ready for the printer.
pub(super) struct Sheet<'t> {
    theory: &'t Theory,
    symbols: FxHashMap<String, Symbol>,
    terms: &'t Terms,
    /// What lemmas are called here; the others keep the names that they have in the evidence.
    lemmas: FxHashMap<Name, String>,
    bank: Bank,
    variables: Vec<String>,
    known: FxHashMap<TermIndex, TermId>,
}

struct SheetNames<'s> {
    signature: &'s Signature,
    variables: &'s [String],
}

impl Names for SheetNames<'_> {
    fn symbol(&self, symbol: Symbol) -> SymbolName<'_> {
        let known = self
            .signature
            .symbol(symbol)
            .expect("evidence has the theory's symbols");
        SymbolName {
            name: Cow::Borrowed(&known.name),
            fixity: known.fixity,
        }
    }

    fn variable(&self, variable: Variable) -> Cow<'_, str> {
        Cow::Borrowed(&self.variables[variable.index as usize])
    }
}

impl<'t> Sheet<'t> {
    pub(super) fn new(theory: &'t Theory, naming: &Naming, terms: &'t Terms) -> Self {
        let mut bank = Bank::new(1);
        for info in theory.bank.symbols() {
            bank.declare(info.clone());
        }
        let symbols = naming.symbols.iter().enumerate();
        Sheet {
            theory,
            symbols: symbols
                .map(|(n, name)| (name.clone(), Symbol(n as u32)))
                .collect(),
            terms,
            lemmas: FxHashMap::default(),
            bank,
            variables: Vec::new(),
            known: FxHashMap::default(),
        }
    }

    /// Calls the lemmas of a proof `lemma 1`, `lemma 2`, … in the order in which they stand. The
    /// numbers in their own names are those of some engine, and mean nothing outside of it.
    pub(super) fn number_lemmas(mut self, proof: &proof::Proof) -> Self {
        let names = (1_u64..).map(|number| format!("lemma {number}"));
        let free = names.filter(|name| self.theory.law(name).is_none());
        let lemmas = proof.lemmas.iter().map(|lemma| lemma.equation.name);
        self.lemmas = lemmas.zip(free).collect();
        self
    }

    /// What a law or lemma is called; a law as it is typed.
    fn name(&self, name: Name) -> String {
        if let Some(name) = self.lemmas.get(&name) {
            return name.clone();
        }
        let text = self.terms.text(name);
        match self.theory.law(text) {
            Some(_) => quote_law(text),
            None => text.to_owned(),
        }
    }

    pub(super) fn proof(&mut self, proof: &proof::Proof) -> ProofText {
        let lemmas = proof.lemmas.iter().map(|lemma| LemmaText {
            name: self.name(lemma.equation.name),
            equation: self.equation(lemma.equation.left, lemma.equation.right),
            lines: self.chain(lemma.equation.left, &lemma.steps),
        });
        ProofText {
            lemmas: lemmas.collect(),
            lines: self.chain(proof.claim.left, &proof.claim.steps),
        }
    }

    pub(super) fn head(&mut self, proof: &proof::Proof, most: usize) -> ProofHead {
        let steps = &proof.claim.steps;
        let shown = steps.len().min(most.saturating_sub(1));
        ProofHead {
            lines: self.chain(proof.claim.left, &steps[..shown]),
            more: steps.len() - shown,
            lemmas: proof.lemmas.len(),
            lemma_steps: proof.lemmas.iter().map(|lemma| lemma.steps.len()).sum(),
        }
    }

    pub(super) fn chain(&mut self, left: TermIndex, steps: &[proof::Step]) -> Vec<ProofLine> {
        let first = ProofLine {
            text: self.text(left),
            changed: None,
            by: String::new(),
            backward: false,
            at: Vec::new(),
        };
        let rest: Vec<ProofLine> = steps.iter().map(|step| self.line(step)).collect();
        std::iter::once(first).chain(rest).collect()
    }

    fn line(&mut self, step: &proof::Step) -> ProofLine {
        let term = self.term(step.to);
        let names = SheetNames {
            signature: &self.theory.signature,
            variables: &self.variables,
        };
        let printer = Printer::new(&names).limit(LONGEST_LINE);
        let printed = printer.print(&self.bank, term, Some(&step.at));
        ProofLine {
            text: printed.text,
            changed: printed.highlight,
            by: self.name(step.by),
            backward: step.way == Way::Backward,
            at: step.at.iter().map(|place| place + 1).collect(),
        }
    }

    pub(super) fn equation(&mut self, left: TermIndex, right: TermIndex) -> String {
        format!("{} = {}", self.text(left), self.text(right))
    }

    pub(super) fn text(&mut self, term: TermIndex) -> String {
        let term = self.term(term);
        let names = SheetNames {
            signature: &self.theory.signature,
            variables: &self.variables,
        };
        Printer::new(&names)
            .limit(LONGEST_LINE)
            .term(&self.bank, term)
    }

    fn term(&mut self, term: TermIndex) -> TermId {
        let mut stack = vec![term];
        let mut arguments = Vec::new();
        while let Some(&top) = stack.last() {
            if self.known.contains_key(&top) {
                stack.pop();
                continue;
            }
            let made = match self.terms.node(top) {
                Node::Variable(name) => self.variable(name),
                Node::Apply(name, below) => {
                    let before = stack.len();
                    stack.extend(below.iter().filter(|a| !self.known.contains_key(a)));
                    if stack.len() > before {
                        continue;
                    }
                    arguments.clear();
                    arguments.extend(below.iter().map(|a| self.known[a]));
                    let symbol = self.symbols[self.terms.text(name)];
                    self.bank.apply(symbol, &arguments)
                }
            };
            self.known.insert(top, made);
            stack.pop();
        }
        self.known[&term]
    }

    /// Sorts do not matter for printing.
    fn variable(&mut self, name: Name) -> TermId {
        let name = self.terms.text(name);
        let index = self.variables.iter().position(|known| known == name);
        let index = index.unwrap_or_else(|| {
            self.variables.push(name.to_owned());
            self.variables.len() - 1
        });
        self.bank.variable(Variable {
            index: index as u32,
            sort: Sort(0),
        })
    }
}
