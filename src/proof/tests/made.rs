//! Evidence written by hand, and the helpers to write it.

use crate::proof::*;
use std::collections::HashMap;

/// Reads `f(x, g(a()))`; a name without brackets is a variable, `a()` is a constant.
pub fn term(terms: &mut Terms, text: &str) -> TermIndex {
    let mut open: Vec<(String, Vec<TermIndex>)> = Vec::new();
    let mut word = String::new();
    let mut last = None;
    for letter in text.chars().chain([',']) {
        match letter {
            ' ' => {}
            '(' => open.push((std::mem::take(&mut word), Vec::new())),
            ',' | ')' => {
                if !word.is_empty() {
                    last = Some(terms.variable(&std::mem::take(&mut word)));
                }
                if let (Some(argument), Some((_, arguments))) = (last.take(), open.last_mut()) {
                    arguments.push(argument);
                } else if open.is_empty() && letter == ',' {
                    continue;
                }
                if letter == ')' {
                    let (name, arguments) = open.pop().expect("brackets match");
                    last = Some(terms.apply(&name, &arguments));
                }
            }
            letter => word.push(letter),
        }
    }
    terms
        .get(terms.len() as u64 - 1)
        .map(|_| ())
        .expect("a term");
    let text: String = text.chars().filter(|c| *c != ' ').collect();
    terms
        .all()
        .find(|&t| written(terms, t) == text)
        .expect("the term was made")
}

fn written(terms: &Terms, term: TermIndex) -> String {
    match terms.node(term) {
        Node::Variable(name) => terms.text(name).to_owned(),
        Node::Apply(name, arguments) => {
            let parts: Vec<String> = arguments.iter().map(|&a| written(terms, a)).collect();
            format!("{}({})", terms.text(name), parts.join(","))
        }
    }
}

pub fn equation(terms: &mut Terms, name: &str, left: &str, right: &str) -> Equation {
    Equation {
        left: term(terms, left),
        right: term(terms, right),
        name: terms.name(name),
        when: Vec::new(),
    }
}

/// Extends `with` so that `pattern` becomes `subject`.
fn fits(
    terms: &Terms,
    pattern: TermIndex,
    subject: TermIndex,
    with: &mut HashMap<Name, TermIndex>,
) -> bool {
    match (terms.node(pattern), terms.node(subject)) {
        (Node::Variable(name), _) => *with.entry(name).or_insert(subject) == subject,
        (Node::Apply(f, some), Node::Apply(g, others)) => {
            f == g
                && some
                    .iter()
                    .zip(others)
                    .all(|(&p, &s)| fits(terms, p, s, with))
        }
        _ => false,
    }
}

/// The step by `equation` between two whole terms; place and substitution are found.
pub fn step(terms: &Terms, equation: &Equation, way: Way, from: TermIndex, to: TermIndex) -> Step {
    let (source, target) = match way {
        Way::Forward => (equation.left, equation.right),
        Way::Backward => (equation.right, equation.left),
    };
    let (mut before, mut after, mut at) = (from, to, Vec::new());
    loop {
        let mut with = HashMap::new();
        if fits(terms, source, before, &mut with) && fits(terms, target, after, &mut with) {
            return Step {
                by: equation.name,
                way,
                at,
                with: with.into_iter().collect(),
                to,
                given: Vec::new(),
            };
        }
        let pairs = terms.arguments(before).iter().zip(terms.arguments(after));
        let (number, (&one, &other)) = pairs
            .enumerate()
            .find(|(_, (one, other))| one != other)
            .expect("the step is found");
        at.push(number as u32);
        (before, after) = (one, other);
    }
}

/// Name, sides and steps of a lemma, as for [`lemma`].
type LemmaText<'a> = (&'a str, [&'a str; 2], &'a [(&'a str, &'a str)]);

/// A lemma; each step is an equation's name, with `-` before it if used backward, and the term.
pub fn lemma(
    terms: &mut Terms,
    known: &[Equation],
    name: &str,
    sides: [&str; 2],
    chain: &[(&str, &str)],
) -> Lemma {
    let equation = equation(terms, name, sides[0], sides[1]);
    let mut from = equation.left;
    let mut steps = Vec::new();
    for (by, to) in chain {
        let way = if by.starts_with('-') {
            Way::Backward
        } else {
            Way::Forward
        };
        let by = by.trim_start_matches('-');
        let used = known
            .iter()
            .find(|e| terms.text(e.name) == by)
            .expect("known");
        let to = term(terms, to);
        steps.push(step(terms, used, way, from, to));
        from = to;
    }
    Lemma { equation, steps }
}

fn all_lemmas(terms: &mut Terms, laws: &[Equation], texts: &[LemmaText<'_>]) -> Vec<Lemma> {
    let mut known = laws.to_vec();
    let mut lemmas = Vec::new();
    for (name, sides, chain) in texts {
        let lemma = lemma(terms, &known, name, *sides, chain);
        known.push(lemma.equation.clone());
        lemmas.push(lemma);
    }
    lemmas
}

pub fn order(terms: &mut Terms, kind: OrderKind, operators: &[(&str, u64)]) -> StatedOrder {
    StatedOrder {
        kind,
        precedence: operators.iter().map(|(name, _)| terms.name(name)).collect(),
        weights: operators
            .iter()
            .map(|&(name, w)| (terms.name(name), w))
            .collect(),
        variable: 1,
    }
}

/// The ten rules of Knuth & Bendix 1970, §4, example 1; the chains are from memory.
pub fn groups(kind: OrderKind) -> CompleteSet {
    let mut terms = Terms::default();
    let laws: Vec<Equation> = [
        ("unit", "m(e(),x)", "x"),
        ("inverse", "m(i(x),x)", "e()"),
        ("assoc", "m(m(x,y),z)", "m(x,m(y,z))"),
    ]
    .into_iter()
    .map(|(name, left, right)| equation(&mut terms, name, left, right))
    .collect();
    let lemmas = all_lemmas(&mut terms, &laws, GROUP_LEMMAS);
    let helpers = ["twice unit", "twice"];
    let mut equations = laws.clone();
    equations.extend(lemmas.iter().map(|lemma| lemma.equation.clone()));
    equations.retain(|e| !helpers.contains(&terms.text(e.name)));
    let rules = equations.iter().map(|e| rule(e, true)).collect();
    let order = order(&mut terms, kind, &[("i", 0), ("m", 1), ("e", 1)]);
    let (left, right) = (term(&mut terms, "m(x,y)"), term(&mut terms, "m(y,x)"));
    CompleteSet {
        terms,
        types: None,
        laws,
        definitions: Vec::new(),
        lemmas,
        order,
        rules,
        claim: Some(CompleteClaim {
            left,
            right,
            normal: [left, right],
        }),
    }
}

const GROUP_LEMMAS: &[LemmaText<'static>] = &[
    (
        "cancel",
        ["m(i(x),m(x,y))", "y"],
        &[
            ("-assoc", "m(m(i(x),x),y)"),
            ("inverse", "m(e(),y)"),
            ("unit", "y"),
        ],
    ),
    (
        "twice unit",
        ["m(i(i(x)),e())", "x"],
        &[("-inverse", "m(i(i(x)),m(i(x),x))"), ("cancel", "x")],
    ),
    (
        "twice",
        ["m(x,y)", "m(i(i(x)),y)"],
        &[
            ("-twice unit", "m(m(i(i(x)),e()),y)"),
            ("assoc", "m(i(i(x)),m(e(),y))"),
            ("unit", "m(i(i(x)),y)"),
        ],
    ),
    (
        "right unit",
        ["m(x,e())", "x"],
        &[("twice", "m(i(i(x)),e())"), ("twice unit", "x")],
    ),
    (
        "inverse twice",
        ["i(i(x))", "x"],
        &[("-right unit", "m(i(i(x)),e())"), ("twice unit", "x")],
    ),
    (
        "inverse unit",
        ["i(e())", "e()"],
        &[("-right unit", "m(i(e()),e())"), ("inverse", "e()")],
    ),
    (
        "right inverse",
        ["m(x,i(x))", "e()"],
        &[("-inverse twice", "m(i(i(x)),i(x))"), ("inverse", "e()")],
    ),
    (
        "right cancel",
        ["m(x,m(i(x),y))", "y"],
        &[
            ("-assoc", "m(m(x,i(x)),y)"),
            ("right inverse", "m(e(),y)"),
            ("unit", "y"),
        ],
    ),
    (
        "inverse product",
        ["i(m(x,y))", "m(i(y),i(x))"],
        &[
            ("-right unit", "m(i(m(x,y)),e())"),
            ("-right inverse", "m(i(m(x,y)),m(x,i(x)))"),
            ("-right cancel", "m(i(m(x,y)),m(x,m(y,m(i(y),i(x)))))"),
            ("-assoc", "m(i(m(x,y)),m(m(x,y),m(i(y),i(x))))"),
            ("cancel", "m(i(y),i(x))"),
        ],
    ),
];

pub fn rule(equation: &Equation, oriented: bool) -> Rule {
    Rule {
        name: equation.name,
        left: equation.left,
        right: equation.right,
        oriented,
    }
}

/// A semilattice with its five rules, of which two are not oriented (Martin & Nipkow 1990, §5).
pub fn semilattice(kind: OrderKind) -> CompleteSet {
    let mut terms = Terms::default();
    let laws: Vec<Equation> = [
        ("assoc", "m(m(x,y),z)", "m(x,m(y,z))"),
        ("comm", "m(x,y)", "m(y,x)"),
        ("idem", "m(x,x)", "x"),
    ]
    .into_iter()
    .map(|(name, left, right)| equation(&mut terms, name, left, right))
    .collect();
    let lemmas = all_lemmas(&mut terms, &laws, SEMILATTICE_LEMMAS);
    let rules = vec![
        rule(&laws[0], true),
        rule(&laws[1], false),
        rule(&laws[2], true),
        rule(&lemmas[0].equation, true),
        rule(&lemmas[1].equation, false),
    ];
    let order = order(&mut terms, kind, &[("m", 1)]);
    let (left, right) = (term(&mut terms, "m(y,x)"), term(&mut terms, "x"));
    let normal = [term(&mut terms, "m(x,y)"), right];
    CompleteSet {
        terms,
        types: None,
        laws,
        definitions: Vec::new(),
        lemmas,
        order,
        rules,
        claim: Some(CompleteClaim {
            left,
            right,
            normal,
        }),
    }
}

const SEMILATTICE_LEMMAS: &[LemmaText<'static>] = &[
    (
        "idem inside",
        ["m(x,m(x,y))", "m(x,y)"],
        &[("-assoc", "m(m(x,x),y)"), ("idem", "m(x,y)")],
    ),
    (
        "exchange",
        ["m(x,m(y,z))", "m(y,m(x,z))"],
        &[
            ("-assoc", "m(m(x,y),z)"),
            ("comm", "m(m(y,x),z)"),
            ("assoc", "m(y,m(x,z))"),
        ],
    ),
];

/// A rule set of laws alone, each with whether it is oriented.
pub fn laws_only(laws: &[(&str, &str, bool)], operators: &[(&str, u64)]) -> CompleteSet {
    let mut terms = Terms::default();
    let mut set_laws = Vec::new();
    let mut rules = Vec::new();
    for (number, (left, right, oriented)) in laws.iter().enumerate() {
        let law = equation(&mut terms, &format!("law {number}"), left, right);
        rules.push(rule(&law, *oriented));
        set_laws.push(law);
    }
    let order = order(&mut terms, OrderKind::KnuthBendix, operators);
    CompleteSet {
        terms,
        types: None,
        laws: set_laws,
        definitions: Vec::new(),
        lemmas: Vec::new(),
        order,
        rules,
        claim: None,
    }
}

/// Puts a claim into a set.
pub fn claiming(mut set: CompleteSet, sides: [&str; 2], normal: [&str; 2]) -> CompleteSet {
    let [left, right] = sides.map(|text| term(&mut set.terms, text));
    let normal = normal.map(|text| term(&mut set.terms, text));
    set.claim = Some(CompleteClaim {
        left,
        right,
        normal,
    });
    set
}

/// The proof of `i(m(x, y)) = m(i(y), i(x))` in groups.
pub fn group_proof() -> Proof {
    let groups = groups(OrderKind::KnuthBendix);
    let mut lemmas = groups.lemmas;
    let last = lemmas.pop().expect("a lemma");
    Proof {
        terms: groups.terms,
        types: None,
        laws: groups.laws,
        definitions: Vec::new(),
        lemmas,
        claim: Claim {
            left: last.equation.left,
            right: last.equation.right,
            when: Vec::new(),
            steps: last.steps,
            witness: Vec::new(),
        },
    }
}

/// Left projection on two elements: associative and idempotent, not commutative.
pub fn projection() -> AlgebraEvidence {
    let mut terms = Terms::default();
    let laws = vec![
        equation(&mut terms, "assoc", "m(m(x,y),z)", "m(x,m(y,z))"),
        equation(&mut terms, "idem", "m(x,x)", "x"),
    ];
    let (left, right) = (term(&mut terms, "m(x,y)"), term(&mut terms, "m(y,x)"));
    let unnamed = terms.name("");
    let table = Table {
        shape: vec![2, 2],
        values: vec![0, 0, 1, 1],
    };
    AlgebraEvidence {
        types: None,
        laws,
        sorts: vec![(unnamed, 2)],
        tables: vec![(terms.name("m"), table)],
        claim: AlgebraClaim {
            left,
            right,
            when: Vec::new(),
            with: vec![(terms.name("x"), 0), (terms.name("y"), 1)],
            unknowns: Vec::new(),
            values: Some([0, 1]),
        },
        terms,
    }
}

/// The outcome of the check under the usual limit, which has to be the same through JSON.
pub fn judge(evidence: Evidence) -> Outcome {
    let outcome = check(&evidence, WorkLimit::default());
    let json = to_json(&evidence).to_string();
    assert_eq!(outcome, check_json(json.as_bytes(), WorkLimit::default()));
    outcome
}

#[track_caller]
pub fn accepted(evidence: Evidence) {
    assert_eq!(judge(evidence), Outcome::Accepted);
}

#[track_caller]
pub fn rejected_at(evidence: Evidence, expected: &str) {
    match judge(evidence) {
        Outcome::Rejected { place, .. } => assert_eq!(place, expected),
        other => panic!("{other:?}"),
    }
}
