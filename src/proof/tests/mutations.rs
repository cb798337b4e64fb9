//! Random changes of accepted evidence. Whatever is still accepted must be true by an evaluation
//! that is written here once more, on the JSON alone.

use super::made::*;
use crate::proof::*;
use serde_json::Value;
use std::collections::BTreeMap;

/// A small generator (xorshift, Marsaglia 2003), so that failures can be repeated.
pub struct Random(pub u64);

impl Random {
    pub fn below(&mut self, bound: usize) -> usize {
        self.0 ^= self.0 << 13;
        self.0 ^= self.0 >> 7;
        self.0 ^= self.0 << 17;
        (self.0 % bound as u64) as usize
    }
}

/// Paths of all values inside `json`.
fn paths(json: &Value, here: &str, found: &mut Vec<String>) {
    let children: Vec<(String, &Value)> = match json {
        Value::Array(list) => list
            .iter()
            .enumerate()
            .map(|(n, v)| (n.to_string(), v))
            .collect(),
        Value::Object(map) => map.iter().map(|(k, v)| (k.clone(), v)).collect(),
        _ => Vec::new(),
    };
    for (key, child) in children {
        let path = format!("{here}/{key}");
        paths(child, &path, found);
        found.push(path);
    }
}

/// One change: another number, name or truth value, an element or field left out or copied.
fn mutate(json: &Value, random: &mut Random) -> Value {
    let mut changed = json.clone();
    let mut all = Vec::new();
    paths(json, "", &mut all);
    let other = json
        .pointer(&all[random.below(all.len())])
        .expect("a path")
        .clone();
    let size = json["terms"].as_array().map_or(1, Vec::len) + 1;
    let pick = random.below(all.len());
    let target = changed.pointer_mut(&all[pick]).expect("a path");
    match target {
        Value::Number(number) => {
            let near = number.as_u64().unwrap_or(0) as usize;
            let choices = [
                random.below(size),
                near + 1,
                near.saturating_sub(1),
                random.below(3),
            ];
            *target = choices[random.below(4)].into();
        }
        Value::String(text) => {
            let names = [
                "m", "i", "e", "x", "y", "z", "assoc", "comm", "forward", "backward", "kbo",
            ];
            *text = names[random.below(names.len())].into();
        }
        Value::Bool(value) => *value = !*value,
        Value::Array(list) if !list.is_empty() => {
            let number = random.below(list.len());
            match random.below(3) {
                0 => drop(list.remove(number)),
                1 => list.swap(0, number),
                _ => list.push(list[number].clone()),
            }
        }
        Value::Object(map) if !map.is_empty() => {
            let key = map
                .keys()
                .nth(random.below(map.len()))
                .cloned()
                .expect("a key");
            map.shift_remove(&key);
        }
        _ => *target = other,
    }
    changed
}

/// An algebra on `size` elements, by the operator's name; the index is that of all arguments.
type Algebra = BTreeMap<String, Vec<usize>>;

fn value(
    json: &Value,
    term: &Value,
    at: &BTreeMap<String, usize>,
    tables: &Algebra,
    size: usize,
) -> usize {
    match &json["terms"][term.as_u64().unwrap() as usize] {
        Value::String(name) => at[name],
        Value::Array(parts) => {
            let place = parts[1..].iter().fold(0, |place, part| {
                place * size + value(json, part, at, tables, size)
            });
            tables[parts[0].as_str().unwrap()][place]
        }
        _ => unreachable!("accepted evidence has terms"),
    }
}

fn variables(json: &Value) -> Vec<String> {
    let entries = json["terms"].as_array().unwrap();
    let names = entries
        .iter()
        .filter_map(|entry| entry.as_str().map(str::to_owned));
    let mut names: Vec<String> = names.collect();
    names.sort();
    names.dedup();
    names
}

/// Whether an equation holds under all assignments.
fn holds(json: &Value, equation: &Value, tables: &Algebra, size: usize) -> bool {
    let names = variables(json);
    (0..size.pow(names.len() as u32)).all(|mut code| {
        let mut at = BTreeMap::new();
        for name in &names {
            at.insert(name.clone(), code % size);
            code /= size;
        }
        let side = |side: &str| value(json, &equation[side], &at, tables, size);
        side("left") == side("right")
    })
}

/// All algebras on two elements for the operators in the terms of `json`.
fn algebras_of_size_two(json: &Value) -> Vec<Algebra> {
    let mut arities: BTreeMap<String, usize> = BTreeMap::new();
    for entry in json["terms"].as_array().unwrap() {
        if let Value::Array(parts) = entry {
            arities.insert(parts[0].as_str().unwrap().to_owned(), parts.len() - 1);
        }
    }
    let cells: usize = arities.values().map(|&arity| 1 << arity).sum();
    assert!(cells <= 16, "few enough operators");
    (0..1_usize << cells)
        .map(|mut code| {
            let mut tables = Algebra::new();
            for (name, &arity) in &arities {
                let table = (0..1 << arity).map(|_| {
                    let cell = code % 2;
                    code /= 2;
                    cell
                });
                tables.insert(name.clone(), table.collect());
            }
            tables
        })
        .filter(|tables| {
            let laws = json["laws"].as_array().unwrap();
            laws.iter().all(|law| holds(json, law, tables, 2))
        })
        .collect()
}

/// Changes `evidence` and calls `judged` with what is accepted; gives the number of those.
fn survivors(evidence: Evidence, changes: usize, seed: u64, judged: impl Fn(&Value)) -> usize {
    let json = to_json(&evidence);
    let mut random = Random(seed);
    let mut accepted = 0;
    for _ in 0..changes {
        let mut changed = mutate(&json, &mut random);
        if random.below(3) == 0 {
            changed = mutate(&changed, &mut random);
        }
        let outcome = check_json(changed.to_string().as_bytes(), WorkLimit(20_000_000));
        if outcome.is_accepted() && changed != json {
            accepted += 1;
            judged(&changed);
        }
    }
    accepted
}

/// What a proof says is true in every algebra on two elements that has the laws.
#[test]
fn changed_proofs() {
    let accepted = survivors(
        Evidence::Proof(group_proof()),
        10_000,
        0x1234_5678_9abc,
        |json| {
            for tables in algebras_of_size_two(json) {
                assert!(holds(json, &json["claim"], &tables, 2), "{json}");
            }
        },
    );
    assert!(accepted > 0);
}

/// The evaluation decides about algebras in both directions.
#[test]
fn changed_algebras() {
    let json = to_json(&Evidence::Algebra(projection()));
    let mut random = Random(0x9876_5432_1abc);
    let mut accepted = 0;
    for _ in 0..10_000 {
        let mut changed = json.clone();
        for _ in 0..=random.below(2) {
            changed = mutate(&changed, &mut random);
        }
        if check_json(changed.to_string().as_bytes(), WorkLimit(20_000_000)).is_accepted() {
            accepted += 1;
            let size = changed["sorts"][""].as_u64().unwrap_or(1) as usize;
            let table = changed["tables"]["m"].as_array();
            let rows = table
                .into_iter()
                .flatten()
                .flat_map(|row| row.as_array().unwrap());
            let cells: Vec<usize> = rows.map(|cell| cell.as_u64().unwrap() as usize).collect();
            let tables = Algebra::from([("m".to_owned(), cells)]);
            for law in changed["laws"].as_array().unwrap() {
                assert!(holds(&changed, law, &tables, size), "{changed}");
            }
            let claim = &changed["claim"];
            let with = claim["with"].as_object().unwrap().iter();
            let at = with
                .map(|(k, v)| (k.clone(), v.as_u64().unwrap() as usize))
                .collect();
            let side = |side: &str| value(&changed, &claim[side], &at, &tables, size);
            assert_ne!(side("left"), side("right"), "{changed}");
        }
    }
    assert!(accepted > 0);
}

/// What is not equal in a semilattice differs in one with two elements, so whatever a changed
/// semilattice still claims has to differ in an algebra on two elements.
#[test]
fn changed_rule_sets() {
    for (kind, seed) in [
        (OrderKind::KnuthBendix, 0x1357),
        (OrderKind::LexicographicPath, 0x2468),
    ] {
        let accepted = survivors(
            Evidence::Complete(semilattice(kind)),
            10_000,
            seed,
            |json| {
                if json["claim"].is_object() {
                    let algebras = algebras_of_size_two(json);
                    let differs = |tables: &Algebra| !holds(json, &json["claim"], tables, 2);
                    assert!(algebras.iter().any(differs), "{json}");
                }
            },
        );
        assert!(accepted > 0);
    }
}
