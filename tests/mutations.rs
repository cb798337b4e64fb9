//! Accepted evidence from theories of the program, changed at random: whatever is still accepted
//! must be so by the judgement by hand, and be about the theory.
//!
//! `MUTATIONS=100000 cargo test --release --test mutations` makes as many changes.

mod common;

use common::tree::Tree;
use common::{LONG, Random, alone, by_hand, complete};
use equable::proof::{Evidence, WorkLimit, check, read_json, to_json};
use equable::session::{Library, Session, is_of_theory};
use serde_json::Value;
use std::collections::BTreeMap;

/// Groups have a complete set and many rules, lists several sorts, quandles and loops algebras
/// with several operations.
const THEORIES: &[&str] = &["group", "list", "quandle", "loop", "semilattice", "lattice"];

/// Larger evidence has nothing that smaller evidence has not, and is slower to change.
const LARGEST: usize = 12_000;

fn open(name: &str) -> Session {
    let opened = Session::open(name, Library::default());
    opened.unwrap_or_else(|_| panic!("{name} opens")).session
}

/// The evidence of the claims of a theory, and its complete rule set if `with_rules`.
fn evidence(session: &mut Session, with_rules: bool) -> Vec<Evidence> {
    let results = alone(|control| session.check(LONG, control, &mut |_| {})).expect("an order");
    let mut found: Vec<Evidence> = results
        .into_iter()
        .filter_map(|result| result.answer.evidence)
        .collect();
    if with_rules {
        found.push(complete(session).evidence.expect("a rule set"));
    }
    found
}

/// Something inside JSON, by the keys and numbers that lead to it.
fn places(json: &Value) -> Vec<String> {
    let mut found = Vec::new();
    let mut waiting = vec![(String::new(), json)];
    while let Some((here, value)) = waiting.pop() {
        match value {
            Value::Array(list) => {
                let inside = list.iter().enumerate();
                waiting.extend(inside.map(|(n, inner)| (format!("{here}/{n}"), inner)));
            }
            Value::Object(map) => {
                let key = |key: &str| key.replace('~', "~0").replace('/', "~1");
                let inside = map.iter();
                waiting.extend(inside.map(|(k, inner)| (format!("{here}/{}", key(k)), inner)));
            }
            _ => {}
        }
        if !here.is_empty() {
            found.push(here);
        }
    }
    found
}

/// One symbol, number or truth value is another, or one part of a list or object is left out,
/// exchanged or written twice.
fn change(json: &mut Value, places: &[String], random: &mut Random) {
    let other = json.pointer(random.one_of::<String>(places)).cloned();
    let terms = json["terms"].as_array().map_or(1, Vec::len);
    let Some(target) = json.pointer_mut(random.one_of::<String>(places)) else {
        return;
    };
    match target {
        Value::Number(number) => {
            let near = number.as_u64().unwrap_or(0) as usize;
            let below = random.below(terms + 1);
            let choices = [below, near + 1, near.saturating_sub(1), random.below(3)];
            *target = (*random.one_of(&choices)).into();
        }
        Value::Bool(value) => *value = !*value,
        Value::Array(list) if !list.is_empty() && random.below(4) > 0 => {
            let n = random.below(list.len());
            let m = random.below(list.len());
            match random.below(4) {
                0 => drop(list.remove(n)),
                1 => list.swap(n, m),
                2 => list[n] = list[m].clone(),
                _ => list.push(list[n].clone()),
            }
        }
        Value::Object(map) if !map.is_empty() && random.below(4) > 0 => {
            let n = random.below(map.len());
            let key = map.keys().nth(n).cloned().unwrap_or_default();
            map.shift_remove(&key);
        }
        // Another part of the same file, often of the same kind.
        _ => *target = other.unwrap_or_default(),
    }
}

/// Strings are few among the parts of a file, and a string from elsewhere is the change that comes
/// closest to meaning something.
fn change_name(json: &mut Value, places: &[String], random: &mut Random) {
    let is_text = |place: &&String| json.pointer(place).is_some_and(Value::is_string);
    let texts: Vec<&String> = places.iter().filter(is_text).collect();
    if texts.is_empty() {
        return;
    }
    let other = json.pointer(random.one_of::<&String>(&texts)).cloned();
    let target = json.pointer_mut(random.one_of::<&String>(&texts));
    if let (Some(target), Some(other)) = (target, other) {
        *target = other;
    }
}

/// The laws of a theory as trees, under the names that evidence uses.
fn laws(session: &Session) -> BTreeMap<String, (Tree, Tree)> {
    let laws = session.theory().laws.iter();
    laws.map(|law| {
        let sides = (Tree::of(session, law.left), Tree::of(session, law.right));
        (law.name.clone(), sides)
    })
    .collect()
}

/// What the program says of a file, as `verify --theory` does it.
fn accepted(session: &Session, bytes: &[u8]) -> bool {
    let Ok((evidence, left)) = read_json(bytes, WorkLimit(20_000_000)) else {
        return false;
    };
    is_of_theory(session.theory(), &evidence).is_ok() && check(&evidence, left).is_accepted()
}

/// What is still accepted has laws and sorts of the theory and is so.
fn judge(session: &Session, first: &Value, changed: &Value) -> Result<(), String> {
    let paper = by_hand::Paper::read(changed)?;
    let known = laws(session);
    let listed = changed["laws"].as_array().ok_or("no laws")?;
    for law in listed {
        let name = law["name"].as_str().ok_or("no name")?;
        if known.get(name) != Some(&paper.sides(law)?) {
            return Err(format!("{name} is another law"));
        }
    }
    if changed["kind"] != "proof" && listed.len() < known.len() {
        return Err("a law is missing".to_owned());
    }
    for (name, sorts) in changed["types"].as_object().into_iter().flatten() {
        let before = &first["types"][name];
        if !before.is_null() && before != sorts {
            return Err(format!("{name} has other sorts"));
        }
    }
    if first.get("types").is_some() && changed.get("types").is_none() {
        return Err("the sorts are left out".to_owned());
    }
    by_hand::judge(changed)?;
    match changed.get("claim") {
        // The other complete sets are judged whole by hand.
        Some(claim) if changed["kind"] == "complete" && session.name() == "semilattice" => {
            by_hand::differ_in_two_elements(changed, claim)
        }
        _ => Ok(()),
    }
}

#[test]
fn what_is_still_accepted_after_a_change_is_so() {
    let wanted = std::env::var("MUTATIONS").ok();
    let wanted: usize = wanted.and_then(|n| n.parse().ok()).unwrap_or(6_000);
    let mut bases = Vec::new();
    for name in THEORIES {
        let mut session = open(name);
        let with_rules = ["group", "semilattice"].contains(name);
        for one in evidence(&mut session, with_rules) {
            let json = to_json(&one);
            let text = json.to_string();
            if text.len() <= LARGEST {
                assert!(accepted(&session, text.as_bytes()), "{name}");
                judge(&session, &json, &json).unwrap_or_else(|why| panic!("{name}: {why}: {json}"));
                bases.push((*name, json));
            }
        }
    }
    let of_kind = |kind: &str| {
        bases
            .iter()
            .filter(|(_, json)| json["kind"] == kind)
            .count()
    };
    assert!(of_kind("proof") > 4 && of_kind("algebra") > 2 && of_kind("complete") > 1);

    let sessions: BTreeMap<&str, Session> =
        THEORIES.iter().map(|name| (*name, open(name))).collect();
    let mut random = Random(0x0071_de9a_u64);
    let mut kept = BTreeMap::new();
    for (number, (name, json)) in bases.iter().enumerate() {
        let session = &sessions[name];
        let places = places(json);
        let share = wanted * (number + 1) / bases.len() - wanted * number / bases.len();
        for _ in 0..share {
            let mut changed = json.clone();
            for _ in 0..=usize::from(random.below(4) == 0) {
                if random.below(4) == 0 {
                    change_name(&mut changed, &places, &mut random);
                } else {
                    change(&mut changed, &places, &mut random);
                }
            }
            if changed != *json && accepted(session, changed.to_string().as_bytes()) {
                *kept.entry(json["kind"].to_string()).or_insert(0) += 1;
                judge(session, json, &changed)
                    .unwrap_or_else(|why| panic!("{name}: {why}: {changed}"));
            }
        }
    }
    println!("of {wanted} changes these were still accepted: {kept:?}");
    assert_eq!(
        kept.len(),
        3,
        "changes that leave evidence true are found too"
    );
}
