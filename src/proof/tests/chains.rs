use super::made::*;
use crate::proof::*;

fn proof(terms: Terms, laws: Vec<Equation>, claim: Claim) -> Proof {
    Proof {
        terms,
        types: None,
        laws,
        definitions: Vec::new(),
        lemmas: Vec::new(),
        claim,
    }
}

fn claim(left: TermIndex, right: TermIndex, steps: Vec<Step>) -> Claim {
    Claim {
        left,
        right,
        when: Vec::new(),
        steps,
        witness: Vec::new(),
    }
}

#[test]
fn a_proof_in_groups_is_accepted() {
    accepted(Evidence::Proof(group_proof()));
}

#[test]
fn a_lemma_is_not_known_before_it_is_proved() {
    let mut wrong = group_proof();
    wrong.lemmas.swap(0, 1);
    rejected_at(Evidence::Proof(wrong), "lemmas[0].steps[1].by");
    let mut wrong = group_proof();
    wrong.lemmas[2].steps.pop();
    rejected_at(Evidence::Proof(wrong), "lemmas[2].steps");
    let mut wrong = group_proof();
    wrong.claim.steps[1].at = vec![7];
    rejected_at(Evidence::Proof(wrong), "claim.steps[1].at[0]");
    let mut wrong = group_proof();
    wrong.claim.steps[0].with.clear();
    rejected_at(Evidence::Proof(wrong), "claim.steps[0].with");
    let mut wrong = group_proof();
    wrong.lemmas[1].equation.name = wrong.laws[0].name;
    rejected_at(Evidence::Proof(wrong), "lemmas[1].name");
}

#[test]
fn unused_lemmas_go() {
    let mut made = group_proof();
    let steps = made.claim.steps.drain(..1).collect();
    made.claim.right = term(&mut made.terms, "m(i(m(x,y)),e())");
    made.claim.steps = steps;
    made.drop_unused_lemmas();
    let names: Vec<&str> = made
        .lemmas
        .iter()
        .map(|l| made.terms.text(l.equation.name))
        .collect();
    assert_eq!(names, ["cancel", "twice unit", "twice", "right unit"]);
    accepted(Evidence::Proof(made));
    let mut set = groups(OrderKind::KnuthBendix);
    set.drop_unused_lemmas();
    assert_eq!(set.lemmas.len(), 9);
    accepted(Evidence::Complete(set));
}

#[test]
fn a_million_levels() {
    let mut terms = Terms::default();
    let law = equation(&mut terms, "flip", "a()", "b()");
    let (mut left, mut right) = (law.left, law.right);
    for _ in 0..1_000_000 {
        left = terms.apply("f", &[left]);
        right = terms.apply("f", &[right]);
    }
    let step = Step {
        by: law.name,
        way: Way::Forward,
        at: vec![0; 1_000_000],
        with: Vec::new(),
        to: right,
        given: Vec::new(),
    };
    let good = proof(terms, vec![law], claim(left, right, vec![step]));
    let mut wrong = good.clone();
    wrong.claim.steps[0].way = Way::Backward;
    rejected_at(Evidence::Proof(wrong), "claim.steps[0]");
    assert_eq!(
        check(&Evidence::Proof(good.clone()), WorkLimit(1_000_000)),
        Outcome::TooCostly
    );
    accepted(Evidence::Proof(good));
}

#[test]
fn a_term_doubled_sixty_times() {
    let mut terms = Terms::default();
    let law = equation(&mut terms, "double", "m(x,x)", "x");
    let mut chain = Vec::new();
    let bottom = terms.variable("a");
    let mut tower = vec![bottom];
    for level in 0..60 {
        tower.push(terms.apply("m", &[tower[level], tower[level]]));
    }
    assert_eq!(terms.size(tower[60]), (1 << 61) - 1);
    let x = terms.name("x");
    for level in (0..60).rev() {
        chain.push(Step {
            by: law.name,
            way: Way::Forward,
            at: Vec::new(),
            with: vec![(x, tower[level])],
            to: tower[level],
            given: Vec::new(),
        });
    }
    let good = proof(terms, vec![law], claim(tower[60], bottom, chain));
    assert_eq!(
        check(&Evidence::Proof(good.clone()), WorkLimit(5_000)),
        Outcome::Accepted
    );
    accepted(Evidence::Proof(good));
}

#[test]
fn an_equation_doubled_sixty_times_is_checked_by_its_distinct_subterms() {
    let mut terms = Terms::default();
    let (mut left, mut image) = (terms.variable("x"), terms.apply("a", &[]));
    let with = vec![(terms.name("x"), image)];
    for _ in 0..60 {
        left = terms.apply("m", &[left, left]);
        image = terms.apply("m", &[image, image]);
    }
    let right = terms.apply("b", &[]);
    let name = terms.name("tower");
    let law = Equation {
        name,
        left,
        right,
        when: Vec::new(),
    };
    let step = Step {
        by: name,
        way: Way::Forward,
        at: Vec::new(),
        with,
        to: right,
        given: Vec::new(),
    };
    let good = proof(terms, vec![law], claim(image, right, vec![step]));
    assert_eq!(
        check(&Evidence::Proof(good), WorkLimit(20_000)),
        Outcome::Accepted
    );
}

/// Right cancellation as a conditional law: `x = y when m(x, z) = m(y, z)`.
fn cancellation() -> Proof {
    let mut terms = Terms::default();
    let mut cancel = equation(&mut terms, "cancel", "x", "y");
    let (left, right) = (term(&mut terms, "m(x,z)"), term(&mut terms, "m(y,z)"));
    cancel.when.push(Condition { left, right });
    // When m(f(a), b) = m(a, b) then f(a) = a.
    let (left, right) = (term(&mut terms, "f(a)"), term(&mut terms, "a"));
    let condition = Condition {
        left: term(&mut terms, "m(f(a),b)"),
        right: term(&mut terms, "m(a,b)"),
    };
    let given = Step {
        by: terms.name("when 1"),
        way: Way::Forward,
        at: Vec::new(),
        with: Vec::new(),
        to: condition.right,
        given: Vec::new(),
    };
    let b = term(&mut terms, "b");
    let step = Step {
        by: cancel.name,
        way: Way::Forward,
        at: Vec::new(),
        with: ["x", "y", "z"]
            .map(|n| terms.name(n))
            .into_iter()
            .zip([left, right, b])
            .collect(),
        to: right,
        given: vec![vec![given]],
    };
    let mut made = proof(terms, vec![cancel], claim(left, right, vec![step]));
    made.claim.when.push(condition);
    made
}

#[test]
fn conditions_are_proved_and_used() {
    accepted(Evidence::Proof(cancellation()));
    let mut wrong = cancellation();
    wrong.claim.when.clear();
    rejected_at(
        Evidence::Proof(wrong),
        "claim.steps[0].given[0].steps[0].by",
    );
    let mut wrong = cancellation();
    wrong.claim.steps[0].given[0].clear();
    rejected_at(Evidence::Proof(wrong), "claim.steps[0].given[0].steps");
    let mut wrong = cancellation();
    wrong.claim.steps[0].given.clear();
    rejected_at(Evidence::Proof(wrong), "claim.steps[0].given");
    let mut wrong = cancellation();
    wrong.laws[0].name = wrong.terms.name("when 1");
    rejected_at(Evidence::Proof(wrong), "laws[0].name");
}

#[test]
fn conditions_hold_for_their_own_variables_only() {
    let mut wrong = cancellation();
    // m(f(c), b) = m(c, b) is another equation than the condition.
    let c = term(&mut wrong.terms, "c");
    wrong.claim.left = term(&mut wrong.terms, "f(c)");
    wrong.claim.right = c;
    wrong.claim.steps[0].to = c;
    wrong.claim.steps[0].with[0].1 = wrong.claim.left;
    wrong.claim.steps[0].with[1].1 = c;
    wrong.claim.steps[0].given[0][0].to = term(&mut wrong.terms, "m(c,b)");
    rejected_at(
        Evidence::Proof(wrong.clone()),
        "claim.steps[0].given[0].steps[0]",
    );
    let a = wrong.terms.name("a");
    wrong.claim.steps[0].given[0][0].with = vec![(a, c)];
    rejected_at(Evidence::Proof(wrong), "claim.steps[0].given[0].steps[0]");
}

#[test]
fn definitions_are_conservative() {
    let with = |left: &str, right: &str| {
        let mut made = group_proof();
        made.definitions
            .push(equation(&mut made.terms, "new", left, right));
        Evidence::Proof(made)
    };
    accepted(with("square(x)", "m(x,x)"));
    rejected_at(with("square(x)", "m(x,y)"), "definitions[0]");
    rejected_at(with("square(x,x)", "m(x,x)"), "definitions[0]");
    rejected_at(with("square(x)", "square(x)"), "definitions[0]");
    rejected_at(with("i(x)", "m(x,x)"), "definitions[0]");
    rejected_at(with("x", "m(x,x)"), "definitions[0]");
    let mut twice = group_proof();
    for name in ["one", "two"] {
        twice
            .definitions
            .push(equation(&mut twice.terms, name, "square(x)", "m(x,x)"));
    }
    rejected_at(Evidence::Proof(twice), "definitions[1]");
}

#[test]
fn a_definition_says_nothing_about_the_claim() {
    // The claim g(x) = x is not true because somebody defines g so.
    let mut terms = Terms::default();
    let definition = equation(&mut terms, "new", "g(x)", "x");
    let law = equation(&mut terms, "law", "f(x)", "x");
    let done = step(
        &terms,
        &definition,
        Way::Forward,
        definition.left,
        definition.right,
    );
    let claim = claim(definition.left, definition.right, vec![done]);
    let mut made = proof(terms, vec![law], claim);
    made.definitions.push(definition);
    rejected_at(Evidence::Proof(made), "definitions[0]");
}

#[test]
fn substitutions_respect_sorts() {
    let mut terms = Terms::default();
    let law = equation(&mut terms, "same", "x", "y");
    let (left, right) = (term(&mut terms, "u"), term(&mut terms, "v"));
    let done = step(&terms, &law, Way::Forward, left, right);
    let mut made = proof(terms, vec![law], claim(left, right, vec![done]));
    accepted(Evidence::Proof(made.clone()));
    let sorts = |made: &mut Proof, sorts: [&str; 4]| {
        let names = ["x", "y", "u", "v"];
        let pairs = names.into_iter().zip(sorts);
        let terms = &mut made.terms;
        let variables = pairs
            .map(|(name, sort)| (terms.name(name), terms.name(sort)))
            .collect();
        made.types = Some(Types {
            operators: Vec::new(),
            variables,
        });
    };
    sorts(&mut made, ["S", "S", "T", "T"]);
    let place = match judge(Evidence::Proof(made.clone())) {
        Outcome::Rejected { place, .. } => place,
        other => panic!("{other:?}"),
    };
    assert!(place.starts_with("claim.steps[0].with."), "{place}");
    sorts(&mut made, ["S", "T", "S", "S"]);
    rejected_at(Evidence::Proof(made.clone()), "laws[0]");
    sorts(&mut made, ["S", "S", "S", "S"]);
    accepted(Evidence::Proof(made));
}

#[test]
fn a_witness_is_no_longer_in_the_claim() {
    let mut made = group_proof();
    let (unknown, witness) = (made.terms.name("w"), made.claim.left);
    made.claim.witness.push((unknown, witness));
    accepted(Evidence::Proof(made.clone()));
    made.claim.witness[0].0 = made.terms.name("x");
    rejected_at(Evidence::Proof(made), "claim.witness.x");
}

#[test]
fn algebras() {
    accepted(Evidence::Algebra(projection()));
    let mut wrong = projection();
    wrong.tables[0].1.values[0] = 1;
    assert!(!judge(Evidence::Algebra(wrong)).is_accepted());
    let mut wrong = projection();
    wrong.tables[0].1.values[3] = 2;
    rejected_at(Evidence::Algebra(wrong), "tables.m");
    let mut wrong = projection();
    wrong.claim.values = Some([1, 0]);
    rejected_at(Evidence::Algebra(wrong), "claim.values");
    let mut wrong = projection();
    wrong.claim.with[1].1 = 2;
    rejected_at(Evidence::Algebra(wrong), "claim.with.y");
    let mut wrong = projection();
    wrong.claim.with.pop();
    rejected_at(Evidence::Algebra(wrong), "claim.with.y");
    let mut wrong = projection();
    wrong.tables.clear();
    rejected_at(Evidence::Algebra(wrong), "laws[0]");
    let mut wrong = projection();
    wrong.sorts[0].1 = 1_000_000_000;
    rejected_at(Evidence::Algebra(wrong), "tables.m");
}

#[test]
fn unknowns_take_all_values() {
    // No z has m(x, z) = y when x is 0 and y is 1.
    let mut made = projection();
    made.claim.left = term(&mut made.terms, "m(x,z)");
    made.claim.right = term(&mut made.terms, "y");
    made.claim.unknowns.push(made.terms.name("z"));
    rejected_at(Evidence::Algebra(made.clone()), "claim.values");
    made.claim.values = None;
    accepted(Evidence::Algebra(made.clone()));
    // But some z has m(z, x) = y.
    made.claim.left = term(&mut made.terms, "m(z,x)");
    rejected_at(Evidence::Algebra(made), "claim");
}

#[test]
fn conditional_laws_and_claims_in_algebras() {
    let mut made = projection();
    let mut law = equation(&mut made.terms, "cancel", "x", "y");
    let (left, right) = (
        term(&mut made.terms, "m(x,z)"),
        term(&mut made.terms, "m(y,z)"),
    );
    law.when.push(Condition { left, right });
    made.laws.push(law.clone());
    accepted(Evidence::Algebra(made.clone()));
    // On the other side it does not cancel.
    made.laws[2].when[0].left = term(&mut made.terms, "m(z,x)");
    made.laws[2].when[0].right = term(&mut made.terms, "m(z,y)");
    rejected_at(Evidence::Algebra(made.clone()), "laws[2]");
    made.laws.pop();
    let x = term(&mut made.terms, "x");
    made.claim.when.push(Condition {
        left: made.claim.left,
        right: x,
    });
    accepted(Evidence::Algebra(made.clone()));
    made.claim.when[0].left = made.claim.right;
    rejected_at(Evidence::Algebra(made), "claim");
}

#[test]
fn too_many_assignments_are_too_costly() {
    let mut terms = Terms::default();
    let law = equation(&mut terms, "same", "x", "y");
    let mut made = projection();
    made.laws = vec![law];
    made.tables.clear();
    made.terms = terms;
    let unnamed = made.terms.name("");
    made.sorts = vec![(unnamed, u32::MAX)];
    made.claim.left = term(&mut made.terms, "x");
    made.claim.right = term(&mut made.terms, "y");
    made.claim.with = ["x", "y"].map(|n| (made.terms.name(n), 0)).to_vec();
    assert_eq!(judge(Evidence::Algebra(made)), Outcome::TooCostly);
}
