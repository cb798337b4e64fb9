//! A question with unknowns as a question without: by an equality of its own.
//!
//! `find x: s = t` is asked as: do the laws, with eq(z, z) = true and eq(s, t) = false, imply
//! true = false? They do exactly if some instance of s = t follows from the laws (Avenhaus,
//! Hillenbrand & Löchner, "On using ground joinable equations in equational theorem proving",
//! Journal of Symbolic Computation 36, 2003, section 2.2). The results of eq have a sort of their
//! own, so that it never stands inside another term, and an algebra of these laws in which true
//! and false differ is an algebra of the theory in which s and t differ for all values of the
//! unknowns. The other variables are constants in it.

use crate::term::{Sort, Substitution, Symbol, TermId, Variable, instantiate};
use crate::theory::{Fixity, Law, LawKind, LineId, SignatureFull, SymbolDeclaration, Theory};
use rustc_hash::FxHashMap;

/// No text of a theory can have a name that begins with this.
const INNER: &str = "\u{1}";

/// A theory with the equality, and the question in it.
pub(super) struct Extension {
    /// The theory with the sort, the symbols and the two laws.
    pub(super) theory: Theory,
    /// true and false.
    pub(super) question: (TermId, TermId),
    /// The names of the added symbols, each with the variable that it stands for, if it does.
    added: FxHashMap<String, Option<Variable>>,
    /// The names of the laws eq(z, z) = true and eq(s, t) = false.
    pub(super) laws: [String; 2],
    /// The variables that are not unknowns, each with its constant.
    pub(super) fixed: Vec<(Variable, Symbol)>,
}

impl Extension {
    /// The question in an extension of the theory.
    pub(super) fn new(
        theory: &Theory,
        (left, right): (TermId, TermId),
        unknowns: &[u32],
    ) -> Result<Extension, SignatureFull> {
        let mut theory = theory.clone();
        let sort = theory.bank.sort(left);
        let verdict = theory
            .signature
            .add_inner_sort(&format!("{INNER}verdict"))?;
        let names = ["eq", "true", "false"].map(|name| format!("{INNER}{name}"));
        let eq = symbol(&mut theory, &names[0], vec![sort, sort], verdict)?;
        theory.signature.set_equality(eq);
        let yes = symbol(&mut theory, &names[1], vec![], verdict)?;
        let no = symbol(&mut theory, &names[2], vec![], verdict)?;
        let mut variables = theory.bank.variables(left);
        variables.extend(theory.bank.variables(right));
        variables.sort_unstable_by_key(|variable| variable.index);
        variables.dedup();
        variables.retain(|variable| !unknowns.contains(&variable.index));
        let mut added: FxHashMap<String, Option<Variable>> =
            names.iter().map(|name| (name.clone(), None)).collect();
        let mut fixed = Vec::new();
        let mut constants = Substitution::default();
        for variable in variables {
            let name = &theory.signature.variables()[variable.index as usize].name;
            let name = format!("{INNER}{name}");
            let constant = symbol(&mut theory, &name, vec![], variable.sort)?;
            let term = theory.bank.apply(constant, &[]);
            constants.set(variable.index, term);
            fixed.push((variable, constant));
            added.insert(name, Some(variable));
        }
        let any = theory
            .signature
            .add_variable(&format!("{INNER}z"), sort, false)?;
        let any = theory.bank.variable(Variable { index: any, sort });
        let bank = &mut theory.bank;
        let sides = [left, right].map(|side| instantiate(bank, side, &constants));
        let question = (bank.apply(yes, &[]), bank.apply(no, &[]));
        let same = bank.apply(eq, &[any, any]);
        let asked = bank.apply(eq, &sides);
        let laws = ["same", "asked"].map(|name| format!("{INNER}{name}"));
        law(&mut theory, &laws[0], same, question.0);
        law(&mut theory, &laws[1], asked, question.1);
        Ok(Extension {
            theory,
            question,
            added,
            laws,
            fixed,
        })
    }

    /// The names of the added symbols, each with the variable that it stands for, if it does.
    pub(super) fn added(&self) -> &FxHashMap<String, Option<Variable>> {
        &self.added
    }
}

fn symbol(
    theory: &mut Theory,
    name: &str,
    arguments: Vec<Sort>,
    result: Sort,
) -> Result<Symbol, SignatureFull> {
    theory.add_symbol(SymbolDeclaration {
        name: name.to_owned(),
        fixity: Fixity::Plain,
        arguments,
        result,
    })
}

fn law(theory: &mut Theory, name: &str, left: TermId, right: TermId) {
    let line: LineId = theory.document.next_id();
    theory.push_law(Law {
        name: name.to_owned(),
        left,
        right,
        kind: LawKind::Law,
        line,
        property: None,
        from: None,
        unnamed: false,
    });
}
