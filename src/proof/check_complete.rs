//! The checker for complete rule sets.
//!
//! Why acceptance is right. Let `>` be the stated order on ground terms over the operators of the
//! precedence and the claim's variables as constants; it is total there, monotone and well-founded.
//! Take every ground instance of every rule in its decreasing direction as a rewrite rule. The
//! relation terminates. It is confluent if it is locally so, and by the critical pair lemma
//! (Knuth & Bendix 1970; for ordered equations Bachmair, Dershowitz & Plaisted 1989; Martin &
//! Nipkow 1990) it is locally so if the ground instances of all critical pairs join. As the laws
//! join too, laws and rules have the same ground equations, and ground terms with different
//! normal forms are not equal. Variables of the claim are constants of which no law speaks, so
//! what holds for them is what holds for all values.

use rustc_hash::FxHashSet;

use super::check_chain::Chains;
use super::check_join::{Goal, Joined, Joining, Role};
use super::check_order::{Comparison, Order, least_terms, unlisted};
use super::check_rewrite::{Directed, Rewriting, root, unify};
use super::evidence::{CompleteClaim, CompleteSet, Rule};
use super::terms::{Name, Node, Substitution, TermIndex, Terms};
use super::work::{Stop, Work, rejected};

/// Checks a complete rule set, and that its claim's sides have the different normal forms stated.
pub(super) fn check_complete(set: &CompleteSet, work: &mut Work) -> Result<(), Stop> {
    let mut chains = Chains::new(set.terms.clone(), set.types.as_ref(), work)?;
    check_rules_proved(set, &mut chains, work)?;
    let Chains {
        terms, signature, ..
    } = chains;
    let mut terms = terms;
    let mut signature = signature;

    let constants = claim_constants(set.claim.as_ref(), &mut terms, work)?;
    let mut below: Vec<Name> = Vec::new();
    for (variable, constant) in &constants {
        if let (Some(sort), Node::Apply(name, _)) =
            (signature.variable_sort(*variable), terms.node(*constant))
        {
            signature.add_constant(name, sort);
            below.push(name);
        }
    }
    let directed = directions(set, &terms, &signature, work)?;
    let mut order = Order::new(&terms, &signature, &set.order, &below)?;
    check_precedence(set, &order, &terms, work)?;
    check_decreasing(set, &order, &terms, work)?;
    let mut least = least_terms(&order, &mut terms, &signature, work)?;

    // Every sort is taken to have an element; one without ground terms gets a constant.
    let mut empty: Vec<Name> = directed
        .iter()
        .flat_map(|rule| rule.extra.iter().map(|&(_, sort)| sort))
        .filter(|sort| !least.contains_key(sort))
        .collect();
    empty.sort_unstable();
    empty.dedup();
    if !empty.is_empty() {
        for sort in empty {
            let name = terms.fresh_name("element");
            signature.add_constant(name, sort);
            below.insert(0, name);
        }
        order = Order::new(&terms, &signature, &set.order, &below)?;
        least = least_terms(&order, &mut terms, &signature, work)?;
    }

    let mut joining = Joining::new(Rewriting::new(terms, signature, order, directed, least));
    check_laws_join(set, &mut joining, work)?;
    if let Some(claim) = &set.claim {
        check_claim(claim, &constants, &mut joining, work)?;
    }
    check_pairs_join(set, &mut joining, work)
}

/// Checks the lemmas, and that each rule is one of the equations known after them.
fn check_rules_proved(set: &CompleteSet, chains: &mut Chains, work: &mut Work) -> Result<(), Stop> {
    if let Some(number) = set.laws.iter().position(|law| !law.when.is_empty()) {
        let place = format!("laws[{number}].when");
        return Err(rejected(place, "rule sets do not settle conditional laws"));
    }
    let stated: Vec<TermIndex> = set.claim.iter().flat_map(|c| [c.left, c.right]).collect();
    chains.learn_laws(&set.laws, work)?;
    chains.learn_definitions(&set.definitions, &set.laws, &stated, work)?;
    chains.learn_lemmas(&set.lemmas, work)?;
    let mut names = FxHashSet::default();
    for (number, rule) in set.rules.iter().enumerate() {
        let place = format!("rules[{number}]");
        if !names.insert(rule.name) {
            return Err(rejected(
                format!("{place}.name"),
                "two rules have this name",
            ));
        }
        if !chains.proves(rule.name, rule.left, rule.right) {
            let name = chains.terms.text(rule.name);
            let reason = format!("no lemma named {name} proves these sides");
            return Err(rejected(place, reason));
        }
    }
    if let Some(claim) = &set.claim {
        chains
            .signature
            .check_sides(&chains.terms, claim.left, claim.right, "claim")?;
    }
    Ok(())
}

/// A constant for each variable of the claim, in the order of the alphabet.
fn claim_constants(
    claim: Option<&CompleteClaim>,
    terms: &mut Terms,
    work: &mut Work,
) -> Result<Vec<(Name, TermIndex)>, Stop> {
    let Some(claim) = claim else {
        return Ok(Vec::new());
    };
    let mut variables = terms.variables(&[claim.left, claim.right], work)?;
    variables.sort_unstable_by(|one, other| terms.text(*one).cmp(terms.text(*other)));
    Ok(variables
        .into_iter()
        .map(|variable| {
            let hint = terms.text(variable).to_owned();
            let constant = terms.fresh_name(&hint);
            (variable, terms.apply_named(constant, &[]))
        })
        .collect())
}

/// Every oriented rule in its direction, every other one in both.
pub(super) fn directions(
    set: &CompleteSet,
    terms: &Terms,
    signature: &super::signature::Signature,
    work: &mut Work,
) -> Result<Vec<Directed>, Stop> {
    let mut directed = Vec::new();
    for (number, rule) in set.rules.iter().enumerate() {
        let mut add = |left, right| -> Result<(), Stop> {
            let known = terms.variables(&[left], work)?;
            let inside = terms.variables(&[right], work)?;
            work.spend((known.len() * inside.len()) as u64)?;
            let extra = inside
                .into_iter()
                .filter(|name| !known.contains(name))
                .filter_map(|name| Some((name, signature.variable_sort(name)?)))
                .collect();
            directed.push(Directed {
                rule: number,
                left,
                right,
                ordered: !rule.oriented,
                extra,
            });
            Ok(())
        };
        add(rule.left, rule.right)?;
        if !rule.oriented {
            add(rule.right, rule.left)?;
        }
    }
    Ok(directed)
}

fn check_precedence(
    set: &CompleteSet,
    order: &Order,
    terms: &Terms,
    work: &mut Work,
) -> Result<(), Stop> {
    let equations = set.laws.iter().chain(&set.definitions);
    let mut roots: Vec<TermIndex> = equations.flat_map(|e| [e.left, e.right]).collect();
    roots.extend(set.rules.iter().flat_map(|rule| [rule.left, rule.right]));
    roots.extend(set.claim.iter().flat_map(|claim| [claim.left, claim.right]));
    match unlisted(order, terms, &roots, work)?.into_iter().min() {
        None => Ok(()),
        Some(missing) => {
            let reason = format!("the operator {} is not listed", terms.text(missing));
            Err(rejected("order.precedence", reason))
        }
    }
}

/// Checks that every oriented rule decreases; then no variable is only on its right.
fn check_decreasing(
    set: &CompleteSet,
    order: &Order,
    terms: &Terms,
    work: &mut Work,
) -> Result<(), Stop> {
    let mut comparison = Comparison::default();
    for (number, rule) in set.rules.iter().enumerate() {
        if rule.oriented && !comparison.is_greater(order, terms, rule.left, rule.right, work)? {
            let Rule { left, right, .. } = rule;
            let reason = format!(
                "{} is not greater than {} in the stated order",
                terms.show(*left),
                terms.show(*right)
            );
            return Err(rejected(format!("rules[{number}]"), reason));
        }
    }
    Ok(())
}

fn check_laws_join(set: &CompleteSet, joining: &mut Joining, work: &mut Work) -> Result<(), Stop> {
    let laws = set.laws.iter().enumerate().map(|law| ("laws", law));
    let definitions = set
        .definitions
        .iter()
        .enumerate()
        .map(|law| ("definitions", law));
    for (kind, (number, law)) in laws.chain(definitions) {
        let goal = Goal {
            left: law.left,
            right: law.right,
            peaks: Vec::new(),
        };
        if let Joined::No(left, right) = joining.joins(&goal, work)? {
            let terms = &joining.system.terms;
            let (left, right) = (terms.show(left), terms.show(right));
            let reason = format!("the sides do not join: {left} and {right}");
            return Err(rejected(format!("{kind}[{number}]"), reason));
        }
    }
    Ok(())
}

/// Checks that the normal forms are those stated, and different.
fn check_claim(
    claim: &CompleteClaim,
    constants: &[(Name, TermIndex)],
    joining: &mut Joining,
    work: &mut Work,
) -> Result<(), Stop> {
    let with: Substitution = constants.iter().copied().collect();
    let Joining { system, plain, .. } = joining;
    for (number, side) in [claim.left, claim.right].into_iter().enumerate() {
        let side = system.terms.instantiate(side, &with, work)?;
        let stated = system
            .terms
            .instantiate(claim.normal[number], &with, work)?;
        let normal = plain.normal_form(system, side, work)?;
        if normal != stated {
            let reason = format!(
                "the normal form is {}, not {}",
                system.terms.show(normal),
                system.terms.show(stated)
            );
            return Err(rejected(format!("claim.normal[{number}]"), reason));
        }
    }
    if claim.normal[0] == claim.normal[1] {
        return Err(rejected(
            "claim.normal",
            "the two normal forms are the same",
        ));
    }
    Ok(())
}

/// A non-variable subterm and the path to it.
type Place = (Vec<u32>, TermIndex);

/// Checks that every critical pair joins.
fn check_pairs_join(set: &CompleteSet, joining: &mut Joining, work: &mut Work) -> Result<(), Stop> {
    let count = joining.system.rules.len();
    let mut outer = Vec::with_capacity(count);
    let mut inner = Vec::with_capacity(count);
    for number in 0..count {
        outer.push(renamed(joining, number, Role::Outer, work)?);
        inner.push(renamed(joining, number, Role::Inner, work)?);
    }
    for (first, sides) in outer.iter().enumerate() {
        for (path, subterm) in places(&joining.system.terms, sides.0, work)? {
            let operator = root(&joining.system.terms, subterm);
            for second in joining.system.candidates(operator) {
                if path.is_empty() && is_covered(joining, first, second) {
                    continue;
                }
                let overlap = Overlap {
                    outer: *sides,
                    inner: inner[second],
                    path: &path,
                    subterm,
                    ordered: [first, second].map(|number| joining.system.rules[number].ordered),
                };
                let Some(goal) = critical_pair(joining, &overlap, work)? else {
                    continue;
                };
                if let Joined::No(left, right) = joining.joins(&goal, work)? {
                    let terms = &joining.system.terms;
                    let [one, other] = [first, second].map(|n| joining.system.rules[n].rule);
                    let reason = format!(
                        "the critical pair with {} at {path:?} does not join: {} and {}",
                        terms.text(set.rules[other].name),
                        terms.show(left),
                        terms.show(right)
                    );
                    return Err(rejected(format!("rules[{one}]"), reason));
                }
            }
        }
    }
    Ok(())
}

/// Whether an overlap at the root is trivial (a rule with itself) or the mirror of another one.
fn is_covered(joining: &Joining, first: usize, second: usize) -> bool {
    let itself = first == second && joining.system.rules[first].extra.is_empty();
    // A left side that is a variable is not overlapped on, so its mirror does not exist.
    let mirrored = root(&joining.system.terms, joining.system.rules[second].left).is_some();
    itself || (second < first && mirrored)
}

/// The sides of a rule with variables of a role of their own.
fn renamed(
    joining: &mut Joining,
    number: usize,
    role: Role,
    work: &mut Work,
) -> Result<(TermIndex, TermIndex), Stop> {
    let (left, right) = (
        joining.system.rules[number].left,
        joining.system.rules[number].right,
    );
    let mut with = Substitution::default();
    let names = joining.system.terms.variables(&[left, right], work)?;
    for (position, name) in names.into_iter().enumerate() {
        if let Some(sort) = joining.system.signature.variable_sort(name) {
            with.insert(name, joining.variable(role, position as u32, sort));
        }
    }
    let terms = &mut joining.system.terms;
    Ok((
        terms.instantiate(left, &with, work)?,
        terms.instantiate(right, &with, work)?,
    ))
}

/// All places of `term` where no variable stands.
fn places(terms: &Terms, term: TermIndex, work: &mut Work) -> Result<Vec<Place>, Stop> {
    let mut found = Vec::new();
    let mut waiting = vec![(Vec::new(), term)];
    while let Some((path, term)) = waiting.pop() {
        work.spend(10 + path.len() as u64)?;
        if let Node::Apply(_, arguments) = terms.node(term) {
            for (number, &argument) in arguments.iter().enumerate() {
                let mut inner = path.clone();
                inner.push(number as u32);
                waiting.push((inner, argument));
            }
            found.push((path, term));
        }
    }
    Ok(found)
}

struct Overlap<'a> {
    outer: (TermIndex, TermIndex),
    inner: (TermIndex, TermIndex),
    path: &'a [u32],
    /// The subterm of the outer left side at `path`.
    subterm: TermIndex,
    /// Whether each of the two is an ordered equation.
    ordered: [bool; 2],
}

/// What the two rules make of the overlap's most general term, if there is one.
fn critical_pair(
    joining: &mut Joining,
    overlap: &Overlap<'_>,
    work: &mut Work,
) -> Result<Option<Goal>, Stop> {
    let Rewriting {
        terms, signature, ..
    } = &mut joining.system;
    let Some(with) = unify(terms, signature, overlap.subterm, overlap.inner.0, work)? else {
        return Ok(None);
    };
    let mut instance = |term| terms.instantiate(term, &with, work);
    let peak = instance(overlap.outer.0)?;
    let right = instance(overlap.outer.1)?;
    let inner = (instance(overlap.inner.0)?, instance(overlap.inner.1)?);
    let left = replaced(terms, peak, overlap.path, inner.1, work)?;
    let mut peaks = Vec::new();
    if overlap.ordered[0] {
        peaks.push((peak, right));
    }
    if overlap.ordered[1] {
        peaks.push(inner);
    }
    Ok(Some(Goal { left, right, peaks }))
}

/// `term` with `new` at `path`.
fn replaced(
    terms: &mut Terms,
    term: TermIndex,
    path: &[u32],
    new: TermIndex,
    work: &mut Work,
) -> Result<TermIndex, Stop> {
    let mut above = Vec::with_capacity(path.len());
    let mut current = term;
    for &number in path {
        above.push(current);
        current = terms.arguments(current)[number as usize];
    }
    let mut result = new;
    for (&number, term) in path.iter().zip(above).rev() {
        if let Node::Apply(operator, arguments) = terms.node(term) {
            let mut arguments = arguments.to_vec();
            arguments[number as usize] = result;
            result = terms.apply_charged(operator, &arguments, work)?;
        }
    }
    Ok(result)
}
