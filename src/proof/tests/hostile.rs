use super::made::*;
use crate::proof::*;
use serde_json::{Value, json};

fn outcome(json: &Value) -> Outcome {
    check_json(json.to_string().as_bytes(), WorkLimit::default())
}

#[track_caller]
fn place_of(json: &Value, expected: &str) {
    match outcome(json) {
        Outcome::Rejected { place, .. } => assert_eq!(place, expected),
        other => panic!("{other:?}"),
    }
}

fn all() -> Vec<Value> {
    vec![
        to_json(&Evidence::Proof(group_proof())),
        to_json(&Evidence::Algebra(projection())),
        to_json(&Evidence::Complete(semilattice(OrderKind::KnuthBendix))),
        to_json(&Evidence::Complete(groups(OrderKind::LexicographicPath))),
    ]
}

#[test]
fn json_comes_back() {
    for json in all() {
        let text = json.to_string();
        let evidence = from_json(text.as_bytes()).expect("evidence");
        assert_eq!(to_json(&evidence).to_string(), text);
    }
}

#[test]
fn truncated_files() {
    for json in all() {
        let text = json.to_string();
        for length in (0..text.len()).step_by(7) {
            let outcome = check_json(&text.as_bytes()[..length], WorkLimit::default());
            assert!(matches!(outcome, Outcome::Rejected { .. }));
        }
    }
}

#[test]
fn missing_fields_are_named() {
    for json in all() {
        let fields: Vec<String> = json.as_object().unwrap().keys().cloned().collect();
        for field in fields {
            let mut less = json.clone();
            less.as_object_mut().unwrap().shift_remove(&field);
            match outcome(&less) {
                Outcome::Rejected { place, .. } => {
                    let optional = ["definitions", "lemmas"].contains(&field.as_str());
                    assert!(optional || place == field, "{field}: {place}");
                }
                Outcome::Accepted => assert!(["definitions", "claim"].contains(&field.as_str())),
                Outcome::TooCostly => panic!("too costly"),
            }
        }
    }
}

#[test]
fn wrong_values_are_found_with_their_place() {
    let change = |path: &str, value: Value, expected: &str| {
        let mut json = to_json(&Evidence::Proof(group_proof()));
        *json.pointer_mut(path).expect("the path exists") = value;
        place_of(&json, expected);
    };
    change("/kind", json!("poem"), "kind");
    change("/terms/1", json!(["e", 99]), "terms[1][1]");
    change("/terms/2", json!(["m", 2, 0]), "terms[2][1]");
    change("/terms/0", json!([]), "terms[0]");
    change("/terms/0", json!(17), "terms[0]");
    change("/laws/0/left", json!(1_000_000_000_000_u64), "laws[0].left");
    change("/laws/0/left", json!(-1), "laws[0].left");
    change("/laws/0/left", json!(1.5), "laws[0].left");
    change("/laws/0/name", json!(null), "laws[0].name");
    change("/laws/0/name", json!("assoc"), "laws[2].name");
    change(
        "/lemmas/3/steps/0/with/x",
        json!("x"),
        "lemmas[3].steps[0].with.x",
    );
    change(
        "/lemmas/3/steps/0/at",
        json!([-1]),
        "lemmas[3].steps[0].at[0]",
    );
    change(
        "/lemmas/3/steps/0/way",
        json!("up"),
        "lemmas[3].steps[0].way",
    );
    change("/lemmas/3/steps/0/by", json!("up"), "lemmas[3].steps[0].by");
    change("/claim", json!([]), "claim");
}

#[test]
fn one_operator_has_one_arity() {
    let mut json = to_json(&Evidence::Proof(group_proof()));
    let terms = json["terms"].as_array_mut().unwrap();
    terms.push(json!(["m", 0]));
    let place = format!("terms[{}]", terms.len() - 1);
    place_of(&json, &place);
}

#[test]
fn unknown_and_repeated_fields() {
    let mut json = to_json(&Evidence::Proof(group_proof()));
    json["laws"][0]["whenn"] = json!([]);
    place_of(&json, "laws[0].whenn");
    let text = to_json(&Evidence::Proof(group_proof())).to_string();
    let text = text.replacen("\"name\":", "\"left\":0,\"name\":", 1);
    match check_json(text.as_bytes(), WorkLimit::default()) {
        Outcome::Rejected { place, .. } => assert_eq!(place, "laws[0].left"),
        other => panic!("{other:?}"),
    }
}

#[test]
fn terms_may_be_written_twice() {
    let mut json = to_json(&Evidence::Proof(group_proof()));
    let terms = json["terms"].as_array_mut().unwrap();
    let count = terms.len();
    // The claim's left side once more, from its copied parts on.
    let copies: Vec<Value> = terms
        .iter()
        .map(|entry| match entry {
            Value::Array(parts) => {
                let shifted = parts[1..]
                    .iter()
                    .map(|n| json!(n.as_u64().unwrap() + count as u64));
                std::iter::once(parts[0].clone()).chain(shifted).collect()
            }
            other => other.clone(),
        })
        .collect();
    terms.extend(copies);
    let left = json["claim"]["left"].as_u64().unwrap();
    json["claim"]["left"] = json!(left + count as u64);
    assert_eq!(outcome(&json), Outcome::Accepted);
}

#[test]
fn nesting_a_million_deep() {
    for (open, close) in [
        ("[", "]"),
        ("{\"terms\":", "}"),
        ("{\"kind\":\"proof\",\"terms\":[", "]}"),
    ] {
        let text = open.repeat(1_000_000) + &close.repeat(1_000_000);
        for limit in [WorkLimit::default(), WorkLimit(u64::MAX)] {
            let outcome = check_json(text.as_bytes(), limit);
            assert!(
                matches!(&outcome, Outcome::Rejected { place, .. } if place.starts_with("line 1"))
            );
        }
    }
}

#[test]
fn what_is_no_json() {
    for text in [
        &b""[..],
        b"null",
        b"[]",
        b"{}",
        b"\xff\xfe",
        b"\0",
        b"{\"kind\":\"\xff\"}",
    ] {
        assert!(matches!(
            check_json(text, WorkLimit::default()),
            Outcome::Rejected { .. }
        ));
    }
}

#[test]
fn huge_sizes() {
    let mut json = to_json(&Evidence::Algebra(projection()));
    json["sorts"][""] = json!(1_000_000_000);
    place_of(&json, "tables.m");
    json["sorts"][""] = json!(1_u64 << 40);
    place_of(&json, "sorts.");
    json["sorts"][""] = json!(0);
    place_of(&json, "sorts.");
    json["sorts"][""] = json!(2);
    json["tables"]["m"] = json!([[0, 0], [1]]);
    place_of(&json, "tables.m[1]");
    json["tables"]["m"] = json!([]);
    place_of(&json, "tables.m");
    let big = vec![0; 20_000_000];
    json["tables"]["m"] = json!(big);
    assert_eq!(outcome(&json), Outcome::TooCostly);
}

#[test]
fn a_small_limit_is_too_costly_never_an_answer() {
    for json in all() {
        let text = json.to_string();
        let mut accepted = false;
        for limit in (0..18).map(|power| 1 << power) {
            let outcome = check(&from_json(text.as_bytes()).unwrap(), WorkLimit(limit));
            assert!(!matches!(outcome, Outcome::Rejected { .. }));
            // More work never turns acceptance back.
            assert!(!accepted || outcome.is_accepted());
            accepted = outcome.is_accepted();
        }
    }
}

#[test]
fn overlaps_without_end_are_too_costly() {
    // A left side doubled forty times has too many places to overlap.
    let mut set = laws_only(&[("f(x)", "x", true)], &[("f", 1), ("m", 1), ("g", 1)]);
    let mut tower = term(&mut set.terms, "f(x)");
    for _ in 0..40 {
        tower = set.terms.apply("m", &[tower, tower]);
    }
    let right = term(&mut set.terms, "x");
    set.laws[0].left = tower;
    set.laws[0].right = right;
    set.rules[0].left = tower;
    assert_eq!(judge(Evidence::Complete(set)), Outcome::TooCostly);
}
