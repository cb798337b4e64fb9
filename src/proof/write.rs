//! Evidence to JSON.

use serde_json::{Map, Value, json};

use super::evidence::{
    AlgebraEvidence, CompleteSet, Condition, Equation, Evidence, Lemma, OrderKind, Proof,
    StatedOrder, Step, Table, Types, Way,
};
use super::terms::{Name, Node, TermIndex, Terms};

/// The JSON form of evidence, such that [`super::from_json`] gives the same evidence back. All
/// terms of the table are written, also those that nothing refers to.
pub fn to_json(evidence: &Evidence) -> Value {
    match evidence {
        Evidence::Proof(proof) => write_proof(proof),
        Evidence::Algebra(algebra) => write_algebra(algebra),
        Evidence::Complete(set) => write_complete(set),
    }
}

/// Starts an object with its kind, terms and sorts.
fn start(kind: &str, terms: &Terms, types: Option<&Types>) -> Map<String, Value> {
    let mut object = Map::new();
    object.insert("kind".into(), json!(kind));
    let entries = terms.all().map(|term| match terms.node(term) {
        Node::Variable(name) => json!(terms.text(name)),
        Node::Apply(name, arguments) => {
            let mut entry = vec![json!(terms.text(name))];
            entry.extend(arguments.iter().map(|&argument| number(argument)));
            Value::Array(entry)
        }
    });
    object.insert("terms".into(), entries.collect());
    if let Some(types) = types {
        let sorts = |sorts: &Vec<Name>| sorts.iter().map(|&s| json!(terms.text(s))).collect();
        let operators = types.operators.iter().map(|(name, s)| (*name, sorts(s)));
        let variables = types
            .variables
            .iter()
            .map(|&(name, s)| (name, json!(terms.text(s))));
        object.insert("types".into(), by_name(terms, operators));
        object.insert("variables".into(), by_name(terms, variables));
    }
    object
}

fn number(term: TermIndex) -> Value {
    json!(term.number())
}

fn by_name(terms: &Terms, pairs: impl Iterator<Item = (Name, Value)>) -> Value {
    let object: Map<String, Value> = pairs
        .map(|(name, value)| (terms.text(name).to_owned(), value))
        .collect();
    Value::Object(object)
}

fn add_conditions(object: &mut Value, when: &[Condition]) {
    if !when.is_empty() {
        let conditions = when
            .iter()
            .map(|c| json!({ "left": number(c.left), "right": number(c.right) }));
        object["when"] = conditions.collect();
    }
}

fn equation(terms: &Terms, equation: &Equation) -> Value {
    let mut object = json!({
        "name": terms.text(equation.name),
        "left": number(equation.left),
        "right": number(equation.right),
    });
    add_conditions(&mut object, &equation.when);
    object
}

fn equations(terms: &Terms, equations: &[Equation]) -> Value {
    equations.iter().map(|one| equation(terms, one)).collect()
}

fn lemmas(terms: &Terms, lemmas: &[Lemma]) -> Value {
    let written = lemmas.iter().map(|lemma| {
        let mut object = equation(terms, &lemma.equation);
        object["steps"] = steps(terms, &lemma.steps);
        object
    });
    written.collect()
}

/// Calls itself for the chains given for conditions, which the JSON reader limits to a nesting
/// far below what a stack holds.
fn steps(terms: &Terms, chain: &[Step]) -> Value {
    let written = chain.iter().map(|step| {
        let mut object = json!({
            "by": terms.text(step.by),
            "way": match step.way {
                Way::Forward => "forward",
                Way::Backward => "backward",
            },
            "at": step.at,
            "with": by_name(terms, step.with.iter().map(|&(name, term)| (name, number(term)))),
            "to": number(step.to),
        });
        if !step.given.is_empty() {
            object["given"] = step.given.iter().map(|chain| steps(terms, chain)).collect();
        }
        object
    });
    written.collect()
}

fn write_proof(proof: &Proof) -> Value {
    let terms = &proof.terms;
    let mut object = start("proof", terms, proof.types.as_ref());
    object.insert("laws".into(), equations(terms, &proof.laws));
    object.insert("definitions".into(), equations(terms, &proof.definitions));
    object.insert("lemmas".into(), lemmas(terms, &proof.lemmas));
    let mut claim = json!({
        "left": number(proof.claim.left),
        "right": number(proof.claim.right),
    });
    add_conditions(&mut claim, &proof.claim.when);
    if !proof.claim.witness.is_empty() {
        let witness = proof.claim.witness.iter();
        claim["witness"] = by_name(terms, witness.map(|&(name, term)| (name, number(term))));
    }
    claim["steps"] = steps(terms, &proof.claim.steps);
    object.insert("claim".into(), claim);
    Value::Object(object)
}

fn write_algebra(algebra: &AlgebraEvidence) -> Value {
    let terms = &algebra.terms;
    let mut object = start("algebra", terms, algebra.types.as_ref());
    object.insert("laws".into(), equations(terms, &algebra.laws));
    let sorts = algebra
        .sorts
        .iter()
        .map(|&(name, size)| (name, json!(size)));
    object.insert("sorts".into(), by_name(terms, sorts));
    let tables = algebra.tables.iter().map(|(name, t)| (*name, nested(t)));
    object.insert("tables".into(), by_name(terms, tables));
    let claim = &algebra.claim;
    let with = claim.with.iter().map(|&(name, value)| (name, json!(value)));
    let mut written = json!({
        "left": number(claim.left),
        "right": number(claim.right),
        "with": by_name(terms, with),
    });
    add_conditions(&mut written, &claim.when);
    if !claim.unknowns.is_empty() {
        written["unknowns"] = claim
            .unknowns
            .iter()
            .map(|&n| json!(terms.text(n)))
            .collect();
    }
    if let Some(values) = claim.values {
        written["values"] = json!(values);
    }
    object.insert("claim".into(), written);
    Value::Object(object)
}

/// The table as nested arrays, built from the inside out.
fn nested(table: &Table) -> Value {
    let mut layer: Vec<Value> = table.values.iter().map(|value| json!(value)).collect();
    for &side in table.shape.iter().rev() {
        let rows = layer.chunks(side.max(1) as usize);
        layer = rows.map(|row| Value::Array(row.to_vec())).collect();
    }
    layer.into_iter().next().unwrap_or(Value::Null)
}

fn write_complete(set: &CompleteSet) -> Value {
    let terms = &set.terms;
    let mut object = start("complete", terms, set.types.as_ref());
    object.insert("laws".into(), equations(terms, &set.laws));
    object.insert("definitions".into(), equations(terms, &set.definitions));
    object.insert("lemmas".into(), lemmas(terms, &set.lemmas));
    object.insert("order".into(), write_order(terms, &set.order));
    let rules = set.rules.iter().map(|rule| {
        json!({
            "name": terms.text(rule.name),
            "left": number(rule.left),
            "right": number(rule.right),
            "oriented": rule.oriented,
        })
    });
    object.insert("rules".into(), rules.collect());
    if let Some(claim) = &set.claim {
        let written = json!({
            "left": number(claim.left),
            "right": number(claim.right),
            "normal": claim.normal.map(number),
        });
        object.insert("claim".into(), written);
    }
    Value::Object(object)
}

fn write_order(terms: &Terms, order: &StatedOrder) -> Value {
    let precedence: Value = order
        .precedence
        .iter()
        .map(|&n| json!(terms.text(n)))
        .collect();
    match order.kind {
        OrderKind::KnuthBendix => {
            let weights = order
                .weights
                .iter()
                .map(|&(name, weight)| (name, json!(weight)));
            json!({
                "kind": "kbo",
                "precedence": precedence,
                "weights": by_name(terms, weights),
                "variable": order.variable,
            })
        }
        OrderKind::LexicographicPath => json!({ "kind": "lpo", "precedence": precedence }),
    }
}
