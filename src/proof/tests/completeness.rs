use super::made::*;
use crate::proof::check_join::Joining;
use crate::proof::check_order::{Order, least_terms};
use crate::proof::check_rewrite::{Directed, Rewriting};
use crate::proof::signature::Signature;
use crate::proof::work::Work;
use crate::proof::*;
use proptest::prelude::*;

const ORDERS: [OrderKind; 2] = [OrderKind::KnuthBendix, OrderKind::LexicographicPath];

#[test]
fn the_ten_rules_of_groups_are_complete() {
    for kind in ORDERS {
        let set = groups(kind);
        assert_eq!(set.rules.len(), 10);
        accepted(Evidence::Complete(set));
    }
}

#[test]
fn no_rule_of_groups_can_be_missing() {
    for number in 0..10 {
        let mut set = groups(OrderKind::KnuthBendix);
        set.rules.remove(number);
        assert!(matches!(
            judge(Evidence::Complete(set)),
            Outcome::Rejected { .. }
        ));
    }
    let mut set = groups(OrderKind::KnuthBendix);
    set.rules.truncate(3);
    assert!(matches!(
        judge(Evidence::Complete(set)),
        Outcome::Rejected { .. }
    ));
}

#[test]
fn semilattices_are_ground_complete() {
    for kind in ORDERS {
        accepted(Evidence::Complete(semilattice(kind)));
        for number in 0..5 {
            let mut set = semilattice(kind);
            set.rules.remove(number);
            assert!(matches!(
                judge(Evidence::Complete(set)),
                Outcome::Rejected { .. }
            ));
        }
    }
}

#[test]
fn one_symbol_is_complete_modulo_associativity_and_commutativity() {
    for kind in ORDERS {
        let mut set = semilattice(kind);
        set.laws.pop();
        set.rules
            .retain(|rule| !set.terms.text(rule.name).starts_with("idem"));
        set.lemmas
            .retain(|lemma| set.terms.text(lemma.equation.name) == "exchange");
        let set = claiming(
            set,
            ["m(m(z,y),m(y,x))", "m(x,x)"],
            ["m(x,m(y,m(y,z)))", "m(x,x)"],
        );
        accepted(Evidence::Complete(set.clone()));
        let mut less = set;
        less.rules.pop();
        assert!(matches!(
            judge(Evidence::Complete(less)),
            Outcome::Rejected { .. }
        ));
    }
}

#[test]
fn commutativity_alone_is_complete() {
    let set = laws_only(&[("m(x,y)", "m(y,x)", false)], &[("m", 1)]);
    let set = claiming(
        set,
        ["m(y,m(z,x))", "m(m(x,y),z)"],
        ["m(y,m(x,z))", "m(z,m(x,y))"],
    );
    accepted(Evidence::Complete(set.clone()));
    rejected_at(
        Evidence::Complete(claiming(set, ["m(y,x)", "x"], ["m(y,x)", "x"])),
        "claim.normal[0]",
    );
}

#[test]
fn a_variable_on_one_side_stands_for_the_least_term() {
    let set = laws_only(&[("f(x)", "f(y)", false)], &[("f", 1), ("b", 1), ("a", 1)]);
    let one = claiming(set.clone(), ["f(z)", "z"], ["f(z)", "z"]);
    accepted(Evidence::Complete(one));
    let two = claiming(set.clone(), ["f(z)", "m"], ["f(m)", "m"]);
    accepted(Evidence::Complete(two));
    let ground = claiming(set.clone(), ["f(f(b()))", "a()"], ["f(a())", "a()"]);
    accepted(Evidence::Complete(ground));
    let same = claiming(set, ["f(z)", "f(m)"], ["f(z)", "f(m)"]);
    rejected_at(Evidence::Complete(same), "claim.normal[0]");
}

#[test]
fn inverses_without_a_unit() {
    // i(x) * x does not depend on x, and nothing else is said.
    let set = laws_only(&[("m(i(x),x)", "m(i(y),y)", false)], &[("i", 1), ("m", 1)]);
    accepted(Evidence::Complete(claiming(
        set,
        ["m(i(b),b)", "b"],
        ["m(i(b),b)", "b"],
    )));
}

#[test]
fn exclusive_or_is_ground_complete() {
    let set = laws_only(
        &[
            ("p(p(x,y),z)", "p(x,p(y,z))", true),
            ("p(x,y)", "p(y,x)", false),
            ("p(x,p(y,z))", "p(y,p(x,z))", false),
            ("p(x,x)", "o()", true),
            ("p(x,p(x,y))", "y", true),
            ("p(o(),x)", "x", true),
            ("p(x,o())", "x", true),
        ],
        &[("p", 1), ("o", 1)],
    );
    let set = claiming(set, ["p(z,p(x,p(y,z)))", "y"], ["p(x,y)", "y"]);
    accepted(Evidence::Complete(set.clone()));
    let mut less = set;
    less.rules.remove(4);
    assert!(!judge(Evidence::Complete(less)).is_accepted());
}

/// Boolean rings: with two commutative operators and distributivity the cases go up to five
/// variables.
#[test]
fn boolean_rings_are_ground_complete() {
    let laws = [
        ("p(p(x,y),z)", "p(x,p(y,z))", true),
        ("p(x,y)", "p(y,x)", false),
        ("p(x,p(y,z))", "p(y,p(x,z))", false),
        ("p(x,x)", "o()", true),
        ("p(x,p(x,y))", "y", true),
        ("p(o(),x)", "x", true),
        ("p(x,o())", "x", true),
        ("m(m(x,y),z)", "m(x,m(y,z))", true),
        ("m(x,y)", "m(y,x)", false),
        ("m(x,m(y,z))", "m(y,m(x,z))", false),
        ("m(x,x)", "x", true),
        ("m(x,m(x,y))", "m(x,y)", true),
        ("m(o(),x)", "o()", true),
        ("m(x,o())", "o()", true),
        ("m(x,p(y,z))", "p(m(x,y),m(x,z))", true),
        ("m(p(x,y),z)", "p(m(x,z),m(y,z))", true),
    ];
    let mut set = laws_only(&laws, &[("m", 1), ("p", 1), ("o", 1)]);
    set.order.kind = OrderKind::LexicographicPath;
    set.order.weights.clear();
    let set = claiming(
        set,
        ["m(p(x,y),p(x,y))", "p(x,p(y,m(x,y)))"],
        ["p(x,y)", "p(x,p(y,m(x,y)))"],
    );
    accepted(Evidence::Complete(set));
}

#[test]
fn equal_elements_collapse() {
    let set = laws_only(&[("x", "y", false)], &[("a", 1)]);
    let same = claiming(set.clone(), ["x", "y"], ["x", "y"]);
    rejected_at(Evidence::Complete(same), "claim.normal[1]");
    let same = claiming(set, ["x", "y"], ["x", "x"]);
    rejected_at(Evidence::Complete(same), "claim.normal");
}

#[test]
fn a_law_that_does_not_follow_from_the_rules_is_noticed() {
    let mut set = laws_only(
        &[("f(f(x))", "x", true), ("g(x)", "x", true)],
        &[("f", 1), ("g", 1)],
    );
    set.rules.pop();
    rejected_at(Evidence::Complete(set), "laws[1]");
}

#[test]
fn rules_must_decrease_be_proved_and_be_listed() {
    let set = || laws_only(&[("f(f(x))", "g(x)", true)], &[("f", 1), ("g", 1)]);
    let mut wrong = set();
    wrong.order.weights[1].1 = 3;
    rejected_at(Evidence::Complete(wrong), "rules[0]");
    let mut wrong = set();
    wrong.order.precedence.pop();
    rejected_at(Evidence::Complete(wrong), "order.precedence");
    let mut wrong = set();
    wrong.rules[0].right = term(&mut wrong.terms, "x");
    rejected_at(Evidence::Complete(wrong), "rules[0]");
    let mut wrong = set();
    wrong.order.variable = 0;
    rejected_at(Evidence::Complete(wrong), "order.variable");
    let mut wrong = set();
    wrong.order.weights[1].1 = 0;
    rejected_at(Evidence::Complete(wrong), "order.weights.g");
    // f(f(x)) = g(x) has the critical pair f(g(x)) = g(f(x)).
    rejected_at(Evidence::Complete(set()), "rules[0]");
}

#[test]
fn sorts_keep_rules_apart() {
    // All elements of S are equal; those of T are not touched.
    let sorted = |claim: [&str; 2]| {
        let operators = [("s", 1), ("t", 1), ("c", 1), ("d", 1)];
        let set = laws_only(&[("x", "y", false)], &operators);
        let mut set = claiming(set, claim, claim);
        let terms = &mut set.terms;
        let [one, other] = ["S", "T"].map(|name| terms.name(name));
        let types = [
            ("s", vec![one]),
            ("t", vec![other]),
            ("c", vec![one, other]),
        ];
        set.types = Some(Types {
            operators: types
                .map(|(name, sorts)| (terms.name(name), sorts))
                .to_vec(),
            variables: [("x", one), ("y", one), ("u", other), ("v", other)]
                .map(|(name, sort)| (terms.name(name), sort))
                .to_vec(),
        });
        set
    };
    accepted(Evidence::Complete(sorted(["u", "v"])));
    rejected_at(Evidence::Complete(sorted(["x", "y"])), "claim.normal[1]");
    assert!(!judge(Evidence::Complete(sorted(["c(x)", "c(y)"]))).is_accepted());
    assert!(!judge(Evidence::Complete(sorted(["c(u)", "u"]))).is_accepted());
}

/// The rewriting of a set over constants `a` to `d`, as the checker does it.
fn over_constants(set: CompleteSet) -> (Joining, Vec<TermIndex>) {
    let mut work = Work::new(WorkLimit::default());
    let mut terms = set.terms;
    let constants: Vec<TermIndex> = ["a", "b", "c", "d"].map(|n| terms.apply(n, &[])).to_vec();
    let signature = Signature::read(&mut terms, None, &mut work).unwrap();
    let below: Vec<Name> = ["a", "b", "c", "d"].map(|n| terms.name(n)).to_vec();
    let order = Order::new(&terms, &signature, &set.order, &below).unwrap();
    let least = least_terms(&order, &mut terms, &signature, &mut work).unwrap();
    assert_eq!(
        least.values().copied().collect::<Vec<_>>(),
        vec![constants[0]]
    );
    let mut rules = Vec::new();
    for (number, rule) in set.rules.iter().enumerate() {
        let ordered = !rule.oriented;
        let (left, right, extra) = (rule.left, rule.right, Vec::new());
        rules.push(Directed {
            rule: number,
            left,
            right,
            ordered,
            extra: extra.clone(),
        });
        if ordered {
            rules.push(Directed {
                rule: number,
                left: right,
                right: left,
                ordered,
                extra,
            });
        }
    }
    let system = Rewriting::new(terms, signature, order, rules, least);
    (Joining::new(system), constants)
}

proptest! {
    /// In the free semilattice a term is the set of its generators.
    #[test]
    fn normal_forms_of_semilattices_are_sets(
        words in proptest::collection::vec(proptest::collection::vec((0usize..4, any::<bool>()), 1..8), 2..5),
        path_order: bool,
    ) {
        let kind = ORDERS[usize::from(path_order)];
        let (mut joining, constants) = over_constants(semilattice(kind));
        let mut work = Work::new(WorkLimit::default());
        let mut found: Vec<(std::collections::BTreeSet<usize>, TermIndex)> = Vec::new();
        for word in &words {
            let mut term = constants[word[0].0];
            for &(letter, on_the_left) in &word[1..] {
                let other = constants[letter];
                let arguments = if on_the_left { [other, term] } else { [term, other] };
                term = joining.system.terms.apply("m", &arguments);
            }
            let Joining { system, plain, .. } = &mut joining;
            let normal = plain.normal_form(system, term, &mut work).unwrap();
            found.push((word.iter().map(|&(letter, _)| letter).collect(), normal));
        }
        for (set, normal) in &found {
            for (other_set, other_normal) in &found {
                prop_assert_eq!(set == other_set, normal == other_normal);
            }
        }
    }
}
