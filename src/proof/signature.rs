//! Operators with their arities and sorts, and the sort of every term.

use rustc_hash::FxHashMap;

use super::evidence::{Condition, Equation, Types};
use super::terms::{Name, Node, TermIndex, Terms};
use super::work::{Stop, Work, rejected};

/// The sorts of operators and variables. In a theory without sorts everything has the sort "".
#[derive(Clone, Debug)]
pub(super) struct Signature {
    /// Argument sorts and result sort.
    pub operators: FxHashMap<Name, (Vec<Name>, Name)>,
    variables: FxHashMap<Name, Name>,
    /// The sort of all variables, unless sorts are named.
    unnamed: Option<Name>,
}

impl Signature {
    /// Reads the sorts off `types`, or the arities off the terms, and checks that every term of
    /// the table obeys them.
    pub(super) fn read(
        terms: &mut Terms,
        types: Option<&Types>,
        work: &mut Work,
    ) -> Result<Signature, Stop> {
        let mut signature = Signature {
            operators: FxHashMap::default(),
            variables: FxHashMap::default(),
            unnamed: None,
        };
        match types {
            Some(types) => signature.read_types(terms, types)?,
            None => signature.unnamed = Some(terms.name("")),
        }
        for term in terms.all() {
            work.spend(1 + terms.arguments(term).len() as u64)?;
            signature
                .check_term(terms, term)
                .map_err(|reason| rejected(format!("terms[{}]", term.number()), reason))?;
        }
        Ok(signature)
    }

    fn read_types(&mut self, terms: &Terms, types: &Types) -> Result<(), Stop> {
        for (operator, sorts) in &types.operators {
            let place = || format!("types.{}", terms.text(*operator));
            let Some((result, arguments)) = sorts.split_last() else {
                return Err(rejected(place(), "a type names at least the result's sort"));
            };
            let entry = (arguments.to_vec(), *result);
            if self.operators.insert(*operator, entry).is_some() {
                return Err(rejected(place(), "the operator has two types"));
            }
        }
        for (variable, sort) in &types.variables {
            if self.variables.insert(*variable, *sort).is_some() {
                let place = format!("variables.{}", terms.text(*variable));
                return Err(rejected(place, "the variable has two sorts"));
            }
        }
        Ok(())
    }

    fn check_term(&mut self, terms: &Terms, term: TermIndex) -> Result<(), String> {
        match terms.node(term) {
            Node::Variable(name) => {
                if self.unnamed.is_none() && !self.variables.contains_key(&name) {
                    return Err(format!("the variable {} has no sort", terms.text(name)));
                }
            }
            Node::Apply(name, arguments) => {
                if let Some(sort) = self.unnamed {
                    let implied = || (vec![sort; arguments.len()], sort);
                    self.operators.entry(name).or_insert_with(implied);
                }
                let Some((sorts, _)) = self.operators.get(&name) else {
                    return Err(format!("the operator {} has no type", terms.text(name)));
                };
                if sorts.len() != arguments.len() {
                    return Err(format!(
                        "the operator {} has {} arguments here and {} elsewhere",
                        terms.text(name),
                        arguments.len(),
                        sorts.len()
                    ));
                }
                for (number, (&argument, &sort)) in arguments.iter().zip(sorts).enumerate() {
                    if self.sort(terms, argument) != sort {
                        return Err(format!(
                            "argument {number} of {} is not of sort {}",
                            terms.text(name),
                            terms.text(sort)
                        ));
                    }
                }
            }
        }
        Ok(())
    }

    /// The sort of a term whose names are all known.
    pub(super) fn sort(&self, terms: &Terms, term: TermIndex) -> Name {
        match (terms.node(term), self.unnamed) {
            (_, Some(sort)) => sort,
            (Node::Variable(name), None) => self.variables[&name],
            (Node::Apply(name, _), None) => self.operators[&name].1,
        }
    }

    /// The sort of a variable, if it has one.
    pub(super) fn variable_sort(&self, variable: Name) -> Option<Name> {
        self.unnamed
            .or_else(|| self.variables.get(&variable).copied())
    }

    /// Adds a variable.
    pub(super) fn add_variable(&mut self, variable: Name, sort: Name) {
        self.variables.insert(variable, sort);
    }

    /// Adds a constant.
    pub(super) fn add_constant(&mut self, constant: Name, sort: Name) {
        self.operators.insert(constant, (Vec::new(), sort));
    }

    /// Checks that both sides have one sort.
    pub(super) fn check_sides(
        &self,
        terms: &Terms,
        left: TermIndex,
        right: TermIndex,
        place: &str,
    ) -> Result<(), Stop> {
        if self.sort(terms, left) == self.sort(terms, right) {
            Ok(())
        } else {
            Err(rejected(place, "the two sides are of different sorts"))
        }
    }

    /// Checks that the two sides of each condition have one sort.
    pub(super) fn check_conditions(
        &self,
        terms: &Terms,
        when: &[Condition],
        place: &str,
    ) -> Result<(), Stop> {
        for (number, condition) in when.iter().enumerate() {
            let place = format!("{place}.when[{number}]");
            self.check_sides(terms, condition.left, condition.right, &place)?;
        }
        Ok(())
    }

    /// Checks that the sides of an equation, and of its conditions, have one sort.
    pub(super) fn check_equation(
        &self,
        terms: &Terms,
        equation: &Equation,
        place: &str,
    ) -> Result<(), Stop> {
        self.check_sides(terms, equation.left, equation.right, place)?;
        self.check_conditions(terms, &equation.when, place)
    }
}
