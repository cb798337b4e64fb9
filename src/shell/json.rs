//! Answers as JSON, one object a line.

use crate::language::Names;
use crate::language::TheoryNames;
use crate::order::OrderKind;
use crate::session::{Answer, By, ClaimResult, Completion, NormalForm, Session};
use crate::theory::Expected;
use serde_json::{Map, Value, json};
use std::time::Duration;

/// What was expected of an answer.
pub fn expected(expected: Option<Expected>) -> Value {
    match expected {
        Some(Expected::Equal) => json!("equal"),
        Some(Expected::NotEqual) => json!("not equal"),
        None => Value::Null,
    }
}

/// The answer to a question of `ask`.
pub fn ask(file: &str, question: &str, wanted: Expected, answer: &Answer) -> Value {
    object(file, None, question, Some(wanted), answer)
}

/// The answer to a claim.
pub fn claim(file: &str, result: &ClaimResult) -> Value {
    object(
        file,
        result.name.as_deref(),
        &result.text,
        Some(result.expected),
        &result.answer,
    )
}

fn object(
    file: &str,
    claim: Option<&str>,
    question: &str,
    wanted: Option<Expected>,
    answer: &Answer,
) -> Value {
    let mut made = json!({
        "file": file,
        "claim": claim,
        "question": question,
        "verdict": answer.verdict.text(),
        "expected": expected(wanted),
        "by": answer.by.map(By::text),
        "seconds": seconds(answer.elapsed),
        "evidence": null,
    });
    if let (Some([left, right]), Some(object)) = (&answer.normal, made.as_object_mut()) {
        object.insert("normal".to_owned(), json!([left, right]));
    }
    if let (Some(frontier), Some(object)) = (&answer.frontier, made.as_object_mut()) {
        object.insert("rules".to_owned(), json!(frontier.rules));
        object.insert("pairs".to_owned(), json!(frontier.pairs));
    }
    made
}

/// A normal form.
pub fn normal(file: &str, found: &NormalForm) -> Value {
    json!({
        "file": file,
        "term": found.term,
        "normal": found.text,
        "steps": found.steps,
        "seconds": seconds(found.elapsed),
        "complete": found.complete,
        "checked": found.checked,
        "finished": found.stopped.is_none(),
    })
}

/// A completion.
pub fn complete(file: &str, session: &Session, done: &Completion) -> Value {
    let rules: Vec<Value> = session
        .rules()
        .into_iter()
        .map(|rule| json!({ "number": rule.number, "rule": rule.text, "oriented": rule.oriented }))
        .collect();
    json!({
        "file": file,
        "complete": done.complete,
        "rules": done.rules,
        "oriented": done.oriented,
        "order": order(session, &done.order),
        "pairs": done.pairs,
        "seconds": seconds(done.elapsed),
        "list": rules,
    })
}

/// The order as in evidence, from the line that states it.
fn order(session: &Session, line: &str) -> Value {
    let mut theory = session.theory().clone();
    if theory.declare(line, "order", session.library()).is_err() {
        return Value::Null;
    }
    let Some(setting) = &theory.order else {
        return Value::Null;
    };
    let names = TheoryNames(&theory.signature);
    let name = |symbol| {
        let declaration = theory.signature.symbol(symbol);
        let both = declaration.and_then(|known| theory.signature.meaning(&known.name));
        let both = both.is_some_and(|meaning| meaning.prefix.is_some() && meaning.symbol.is_some());
        let arity = declaration.map_or(0, |known| known.arguments.len());
        let name = names.symbol(symbol).name.into_owned();
        if both {
            format!("{name}/{arity}")
        } else {
            name
        }
    };
    let precedence: Vec<String> = setting.precedence.iter().map(|s| name(*s)).collect();
    match setting.kind {
        OrderKind::Lpo => json!({ "kind": "lpo", "precedence": precedence }),
        OrderKind::Kbo => {
            let weights: Map<String, Value> = setting
                .weights
                .iter()
                .map(|(symbol, weight)| (name(*symbol), json!(weight)))
                .collect();
            json!({
                "kind": "kbo",
                "precedence": precedence,
                "weights": weights,
                "variable": setting.variable_weight,
            })
        }
    }
}

/// Seconds, to the microsecond.
fn seconds(time: Duration) -> f64 {
    (time.as_secs_f64() * 1e6).round() / 1e6
}
