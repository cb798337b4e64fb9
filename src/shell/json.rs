//! Answers as JSON, one object a line.

use super::arguments::Json;
use super::problem::Problem;
use crate::language::Names;
use crate::language::TheoryNames;
use crate::order::OrderKind;
use crate::proof::{Evidence, to_json};
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

/// Why there is no answer about a file: the first fault, and how many more there are.
pub fn refused(file: &str, problem: &Problem) -> Value {
    let (text, place, more) = match problem {
        Problem::Text(faults) => {
            let first = faults.first();
            let place = first.filter(|fault| fault.line > 0).map(|fault| {
                let (source, line, column) = (&fault.source, fault.line, fault.column);
                json!({ "source": source, "line": line, "column": column })
            });
            let text = first.map_or("", |fault| &fault.message);
            (text, place, faults.len().saturating_sub(1))
        }
        Problem::Said { message, .. } => (message.as_str(), None, 0),
    };
    json!({ "file": file, "error": { "text": text, "place": place, "more": more } })
}

/// Where the evidence of an answer is, as fields of its object.
pub struct Kept {
    /// The value of `"evidence"`: a path, the evidence itself, or null.
    evidence: Value,
    /// The path, where the evidence itself stands in the other field.
    file: Option<String>,
}

impl Kept {
    /// Of evidence that was written to `file`, if it was written.
    pub fn new(form: Json, evidence: Option<&Evidence>, file: Option<String>) -> Kept {
        match (form, evidence) {
            (Json::Full, Some(evidence)) => Kept {
                evidence: to_json(evidence),
                file,
            },
            _ => Kept {
                evidence: file.map_or(Value::Null, Value::String),
                file: None,
            },
        }
    }

    fn put_into(self, made: &mut Value) {
        if let Some(object) = made.as_object_mut() {
            object.insert("evidence".to_owned(), self.evidence);
            if let Some(file) = self.file {
                object.insert("evidence_file".to_owned(), json!(file));
            }
        }
    }
}

/// The answer to a question of `ask`.
pub fn ask(file: &str, question: &str, wanted: Expected, answer: &Answer, kept: Kept) -> Value {
    object(file, None, question, Some(wanted), answer, kept)
}

/// The answer to a claim.
pub fn claim(file: &str, result: &ClaimResult, kept: Kept) -> Value {
    object(
        file,
        result.name.as_deref(),
        &result.text,
        Some(result.expected),
        &result.answer,
        kept,
    )
}

fn object(
    file: &str,
    claim: Option<&str>,
    question: &str,
    wanted: Option<Expected>,
    answer: &Answer,
    kept: Kept,
) -> Value {
    let mut made = json!({
        "file": file,
        "claim": claim,
        "question": question,
        "verdict": answer.verdict.text(),
        "expected": expected(wanted),
        "by": answer.by.map(By::text),
        "seconds": seconds(answer.elapsed),
    });
    kept.put_into(&mut made);
    if let (false, Some(object)) = (answer.values.is_empty(), made.as_object_mut()) {
        let values = answer.values.iter();
        let values = values.map(|(name, value)| (name.clone(), json!(value)));
        object.insert("values".to_owned(), Value::Object(values.collect()));
    }
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
pub fn complete(file: &str, session: &Session, done: &Completion, kept: Kept) -> Value {
    let rules: Vec<Value> = session
        .rules()
        .into_iter()
        .map(|rule| json!({ "number": rule.number, "rule": rule.text, "oriented": rule.oriented }))
        .collect();
    let mut made = json!({
        "file": file,
        "complete": done.complete,
        "rules": done.rules,
        "oriented": done.oriented,
        "order": order(session, &done.order),
        "pairs": done.pairs,
        "seconds": seconds(done.elapsed),
        "list": rules,
    });
    kept.put_into(&mut made);
    made
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
