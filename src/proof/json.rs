//! Evidence from JSON.
//!
//! Unknown fields are refused: a misspelled `when` or `types` would change what is claimed.
//! JSON itself nests at most 128 deep here (the reader's own limit), so functions that follow
//! its nesting may call themselves; terms are flat in the file, whatever their depth.

use std::borrow::Cow;
use std::fmt;

use rustc_hash::FxHashMap;

use super::evidence::{
    AlgebraClaim, AlgebraEvidence, Claim, CompleteClaim, CompleteSet, Condition, Equation,
    Evidence, Lemma, OrderKind, Proof, Rule, StatedOrder, Step, Table, Types, Way,
};
use super::terms::{Name, TermIndex, Terms};
use super::values::Json;
use super::work::Outcome;

/// Reads evidence. The error is a rejection with the place and what is wrong there.
///
/// # Errors
///
/// If the text is not JSON, or not of the form of any evidence.
pub fn from_json(json: &[u8]) -> Result<Evidence, Outcome> {
    let value: Json<'_> = serde_json::from_slice(json).map_err(|error| {
        let place = format!("line {} column {}", error.line(), error.column());
        let said = error.to_string();
        // The place stands in the message as well.
        let what = said.strip_suffix(&format!(" at {place}")).unwrap_or(&said);
        Outcome::Rejected {
            reason: format!("not JSON: {what}"),
            place,
        }
    })?;
    let top = Place {
        parent: None,
        part: Part::Field(""),
    };
    let root = At {
        value: &value,
        place: &top,
    };
    let kind = root.field("kind", |at| at.text())?;
    let mut reader = Reader::default();
    match kind {
        "proof" => reader.proof(root).map(Evidence::Proof),
        "algebra" => reader.algebra(root).map(Evidence::Algebra),
        "complete" => reader.complete(root).map(Evidence::Complete),
        _ => {
            let place = Place::under(&top, Part::Field("kind"));
            Err(place.fault("is none of \"proof\", \"algebra\" and \"complete\""))
        }
    }
}

type Read<T> = Result<T, Outcome>;

/// Where a value stands in the file; only written out for a message.
#[derive(Clone, Copy)]
struct Place<'p> {
    parent: Option<&'p Place<'p>>,
    part: Part<'p>,
}

#[derive(Clone, Copy)]
enum Part<'p> {
    Field(&'p str),
    Index(usize),
}

impl<'p> Place<'p> {
    fn under(parent: &'p Place<'p>, part: Part<'p>) -> Self {
        Place {
            parent: Some(parent),
            part,
        }
    }

    fn fault(&self, reason: impl Into<String>) -> Outcome {
        let place = self.to_string();
        Outcome::Rejected {
            place: if place.is_empty() {
                "the file".into()
            } else {
                place
            },
            reason: reason.into(),
        }
    }
}

impl fmt::Display for Place<'_> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        let Some(parent) = self.parent else {
            return Ok(());
        };
        parent.fmt(f)?;
        match self.part {
            Part::Field(name) if parent.parent.is_some() => write!(f, ".{name}"),
            Part::Field(name) => f.write_str(name),
            Part::Index(number) => write!(f, "[{number}]"),
        }
    }
}

/// A value with its place.
#[derive(Clone, Copy)]
struct At<'v, 'p> {
    value: &'v Json<'v>,
    place: &'p Place<'p>,
}

impl<'v> At<'v, '_> {
    fn fault<T>(&self, reason: impl Into<String>) -> Read<T> {
        Err(self.place.fault(reason))
    }

    /// The fields; with `allowed`, no others than those.
    fn object(&self, allowed: Option<&[&str]>) -> Read<&'v [(Cow<'v, str>, Json<'v>)]> {
        let Json::Object(fields) = self.value else {
            return self.fault("is not an object");
        };
        let Some(allowed) = allowed else {
            return Ok(fields);
        };
        for (number, (key, _)) in fields.iter().enumerate() {
            let place = Place::under(self.place, Part::Field(key));
            if !allowed.contains(&key.as_ref()) {
                return Err(place.fault("is not a field of this object"));
            }
            // No more fields than allowed have passed without a repetition.
            if fields[..number].iter().any(|(earlier, _)| earlier == key) {
                return Err(place.fault("is written twice"));
            }
        }
        Ok(fields)
    }

    /// The value of a field.
    fn get(&self, name: &str) -> Read<Option<&'v Json<'v>>> {
        let mut fields = self.object(None)?.iter();
        Ok(fields.find(|(key, _)| key == name).map(|(_, value)| value))
    }

    /// Reads a field that has to be there.
    fn field<T>(&self, name: &str, read: impl FnOnce(At<'v, '_>) -> Read<T>) -> Read<T> {
        let place = Place::under(self.place, Part::Field(name));
        match self.get(name)? {
            Some(value) => read(At {
                value,
                place: &place,
            }),
            None => Err(place.fault("is missing")),
        }
    }

    /// Reads a field that may be absent.
    fn optional<T>(&self, name: &str, read: impl FnOnce(At<'v, '_>) -> Read<T>) -> Read<Option<T>> {
        if self.get(name)?.is_some() {
            self.field(name, read).map(Some)
        } else {
            Ok(None)
        }
    }

    /// Reads each element of an array.
    fn list<T>(&self, mut read: impl FnMut(At<'v, '_>) -> Read<T>) -> Read<Vec<T>> {
        let Json::Array(elements) = self.value else {
            return self.fault("is not an array");
        };
        let mut found = Vec::with_capacity(elements.len());
        for (number, value) in elements.iter().enumerate() {
            let place = Place::under(self.place, Part::Index(number));
            found.push(read(At {
                value,
                place: &place,
            })?);
        }
        Ok(found)
    }

    /// Reads each field of an object whose keys are names.
    fn named<T>(&self, mut read: impl FnMut(&'v str, At<'v, '_>) -> Read<T>) -> Read<Vec<T>> {
        let mut found = Vec::new();
        for (key, value) in self.object(None)? {
            let place = Place::under(self.place, Part::Field(key));
            found.push(read(
                key,
                At {
                    value,
                    place: &place,
                },
            )?);
        }
        Ok(found)
    }

    fn text(&self) -> Read<&'v str> {
        match self.value {
            Json::Text(text) => Ok(text),
            _ => self.fault("is not a string"),
        }
    }

    fn number(&self) -> Read<u64> {
        match self.value {
            Json::Number(number) => Ok(*number),
            _ => self.fault("is not a number from 0 on"),
        }
    }

    fn small(&self) -> Read<u32> {
        match u32::try_from(self.number()?) {
            Ok(number) => Ok(number),
            Err(_) => self.fault("is too large"),
        }
    }
}

#[derive(Default)]
struct Reader {
    terms: Terms,
    /// The term for each entry of the file; the file may write a term twice.
    numbers: Vec<TermIndex>,
    arities: FxHashMap<Name, usize>,
}

impl Reader {
    fn name(&mut self, at: At<'_, '_>) -> Read<Name> {
        Ok(self.terms.name(at.text()?))
    }

    fn term(&mut self, at: At<'_, '_>) -> Read<TermIndex> {
        let number = at.number()?;
        let found = usize::try_from(number)
            .ok()
            .and_then(|n| self.numbers.get(n));
        match found {
            Some(&term) => Ok(term),
            None => at.fault(format!("no term before this place has the number {number}")),
        }
    }

    /// Reads the table of terms; from then on numbers are terms.
    fn read_terms(&mut self, root: At<'_, '_>) -> Read<()> {
        root.field("terms", |at| {
            at.list(|at| {
                let term = self.entry(at)?;
                self.numbers.push(term);
                Ok(())
            })
        })?;
        Ok(())
    }

    fn entry(&mut self, at: At<'_, '_>) -> Read<TermIndex> {
        match at.value {
            Json::Text(name) => Ok(self.terms.variable(name)),
            Json::Array(parts) if !parts.is_empty() => {
                let mut operator = None;
                let mut arguments = Vec::with_capacity(parts.len() - 1);
                at.list(|part| {
                    match operator {
                        None => operator = Some(self.name(part)?),
                        Some(_) => arguments.push(self.term(part)?),
                    }
                    Ok(())
                })?;
                let Some(operator) = operator else {
                    return at.fault("has no operator");
                };
                let arity = *self.arities.entry(operator).or_insert(arguments.len());
                if arity != arguments.len() {
                    return at.fault(format!(
                        "the operator has {} arguments here and {arity} before",
                        arguments.len()
                    ));
                }
                Ok(self.terms.apply_named(operator, &arguments))
            }
            _ => at.fault("is neither a variable nor an application"),
        }
    }

    fn types(&mut self, root: At<'_, '_>) -> Read<Option<Types>> {
        let operators = root.optional("types", |at| {
            at.named(|name, at| {
                let sorts = at.list(|at| self.name(at))?;
                Ok((self.terms.name(name), sorts))
            })
        })?;
        let variables = root.optional("variables", |at| {
            at.named(|name, at| Ok((self.terms.name(name), self.name(at)?)))
        })?;
        Ok((operators.is_some() || variables.is_some()).then(|| Types {
            operators: operators.unwrap_or_default(),
            variables: variables.unwrap_or_default(),
        }))
    }

    fn conditions(&mut self, at: At<'_, '_>) -> Read<Vec<Condition>> {
        let conditions = at.optional("when", |at| {
            at.list(|at| {
                at.object(Some(&["left", "right"]))?;
                Ok(Condition {
                    left: at.field("left", |at| self.term(at))?,
                    right: at.field("right", |at| self.term(at))?,
                })
            })
        })?;
        Ok(conditions.unwrap_or_default())
    }

    /// The fields of an equation; others may stand beside them.
    fn sides(&mut self, at: At<'_, '_>) -> Read<Equation> {
        Ok(Equation {
            name: at.field("name", |at| self.name(at))?,
            left: at.field("left", |at| self.term(at))?,
            right: at.field("right", |at| self.term(at))?,
            when: self.conditions(at)?,
        })
    }

    fn equations(&mut self, at: At<'_, '_>) -> Read<Vec<Equation>> {
        at.list(|at| {
            at.object(Some(&["name", "left", "right", "when"]))?;
            self.sides(at)
        })
    }

    fn definitions(&mut self, root: At<'_, '_>) -> Read<Vec<Equation>> {
        let definitions = root.optional("definitions", |at| self.equations(at))?;
        Ok(definitions.unwrap_or_default())
    }

    fn lemmas(&mut self, root: At<'_, '_>) -> Read<Vec<Lemma>> {
        let lemmas = root.optional("lemmas", |at| {
            at.list(|at| {
                at.object(Some(&["name", "left", "right", "when", "steps"]))?;
                Ok(Lemma {
                    equation: self.sides(at)?,
                    steps: at.field("steps", |at| self.steps(at))?,
                })
            })
        })?;
        Ok(lemmas.unwrap_or_default())
    }

    fn steps(&mut self, at: At<'_, '_>) -> Read<Vec<Step>> {
        at.list(|at| {
            at.object(Some(&["by", "way", "at", "with", "to", "given"]))?;
            let given = at.optional("given", |at| at.list(|at| self.steps(at)))?;
            Ok(Step {
                by: at.field("by", |at| self.name(at))?,
                way: at.field("way", |at| match at.text()? {
                    "forward" => Ok(Way::Forward),
                    "backward" => Ok(Way::Backward),
                    _ => at.fault("is neither \"forward\" nor \"backward\""),
                })?,
                at: at.field("at", |at| at.list(|at| at.small()))?,
                with: at.field("with", |at| self.terms_by_name(at))?,
                to: at.field("to", |at| self.term(at))?,
                given: given.unwrap_or_default(),
            })
        })
    }

    fn terms_by_name(&mut self, at: At<'_, '_>) -> Read<Vec<(Name, TermIndex)>> {
        at.named(|name, at| Ok((self.terms.name(name), self.term(at)?)))
    }

    fn proof(&mut self, root: At<'_, '_>) -> Read<Proof> {
        root.object(Some(&[
            "kind",
            "terms",
            "types",
            "variables",
            "laws",
            "definitions",
            "lemmas",
            "claim",
        ]))?;
        self.read_terms(root)?;
        Ok(Proof {
            types: self.types(root)?,
            laws: root.field("laws", |at| self.equations(at))?,
            definitions: self.definitions(root)?,
            lemmas: self.lemmas(root)?,
            claim: root.field("claim", |at| {
                at.object(Some(&["left", "right", "when", "steps", "witness"]))?;
                let witness = at.optional("witness", |at| self.terms_by_name(at))?;
                Ok(Claim {
                    left: at.field("left", |at| self.term(at))?,
                    right: at.field("right", |at| self.term(at))?,
                    when: self.conditions(at)?,
                    steps: at.field("steps", |at| self.steps(at))?,
                    witness: witness.unwrap_or_default(),
                })
            })?,
            terms: std::mem::take(&mut self.terms),
        })
    }

    fn algebra(&mut self, root: At<'_, '_>) -> Read<AlgebraEvidence> {
        root.object(Some(&[
            "kind",
            "terms",
            "types",
            "variables",
            "laws",
            "sorts",
            "tables",
            "claim",
        ]))?;
        self.read_terms(root)?;
        Ok(AlgebraEvidence {
            types: self.types(root)?,
            laws: root.field("laws", |at| self.equations(at))?,
            sorts: root.field("sorts", |at| self.numbers_by_name(at, |at| at.small()))?,
            tables: root.field("tables", |at| {
                at.named(|name, at| Ok((self.terms.name(name), table(at)?)))
            })?,
            claim: root.field("claim", |at| self.algebra_claim(at))?,
            terms: std::mem::take(&mut self.terms),
        })
    }

    fn numbers_by_name<T>(
        &mut self,
        at: At<'_, '_>,
        read: impl Fn(At<'_, '_>) -> Read<T>,
    ) -> Read<Vec<(Name, T)>> {
        at.named(|name, at| Ok((self.terms.name(name), read(at)?)))
    }

    fn algebra_claim(&mut self, at: At<'_, '_>) -> Read<AlgebraClaim> {
        at.object(Some(&[
            "left", "right", "when", "with", "unknowns", "values",
        ]))?;
        let unknowns = at.optional("unknowns", |at| at.list(|at| self.name(at)))?;
        let values = at.optional("values", |at| match at.list(|at| at.small())?[..] {
            [left, right] => Ok([left, right]),
            _ => at.fault("are not two values"),
        })?;
        Ok(AlgebraClaim {
            left: at.field("left", |at| self.term(at))?,
            right: at.field("right", |at| self.term(at))?,
            when: self.conditions(at)?,
            with: at.field("with", |at| self.numbers_by_name(at, |at| at.small()))?,
            unknowns: unknowns.unwrap_or_default(),
            values,
        })
    }

    fn complete(&mut self, root: At<'_, '_>) -> Read<CompleteSet> {
        root.object(Some(&[
            "kind",
            "terms",
            "types",
            "variables",
            "laws",
            "definitions",
            "lemmas",
            "order",
            "rules",
            "claim",
        ]))?;
        self.read_terms(root)?;
        Ok(CompleteSet {
            types: self.types(root)?,
            laws: root.field("laws", |at| self.equations(at))?,
            definitions: self.definitions(root)?,
            lemmas: self.lemmas(root)?,
            order: root.field("order", |at| self.order(at))?,
            rules: root.field("rules", |at| at.list(|at| self.rule(at)))?,
            claim: root.optional("claim", |at| {
                at.object(Some(&["left", "right", "normal"]))?;
                Ok(CompleteClaim {
                    left: at.field("left", |at| self.term(at))?,
                    right: at.field("right", |at| self.term(at))?,
                    normal: at.field("normal", |at| match at.list(|at| self.term(at))?[..] {
                        [left, right] => Ok([left, right]),
                        _ => at.fault("are not two terms"),
                    })?,
                })
            })?,
            terms: std::mem::take(&mut self.terms),
        })
    }

    fn order(&mut self, at: At<'_, '_>) -> Read<StatedOrder> {
        at.object(Some(&["kind", "precedence", "weights", "variable"]))?;
        let kind = at.field("kind", |at| match at.text()? {
            "kbo" => Ok(OrderKind::KnuthBendix),
            "lpo" => Ok(OrderKind::LexicographicPath),
            _ => at.fault("is neither \"kbo\" nor \"lpo\""),
        })?;
        let precedence = at.field("precedence", |at| at.list(|at| self.name(at)))?;
        let mut read_weights = |at: At<'_, '_>| self.numbers_by_name(at, |at| at.number());
        let (weights, variable) = match kind {
            OrderKind::KnuthBendix => (
                at.field("weights", read_weights)?,
                at.field("variable", |at| at.number())?,
            ),
            OrderKind::LexicographicPath => (
                at.optional("weights", &mut read_weights)?
                    .unwrap_or_default(),
                at.optional("variable", |at| at.number())?.unwrap_or(1),
            ),
        };
        Ok(StatedOrder {
            kind,
            precedence,
            weights,
            variable,
        })
    }

    fn rule(&mut self, at: At<'_, '_>) -> Read<Rule> {
        at.object(Some(&["name", "left", "right", "oriented"]))?;
        Ok(Rule {
            name: at.field("name", |at| self.name(at))?,
            left: at.field("left", |at| self.term(at))?,
            right: at.field("right", |at| self.term(at))?,
            oriented: at.field("oriented", |at| match at.value {
                Json::Bool(oriented) => Ok(*oriented),
                _ => at.fault("is neither true nor false"),
            })?,
        })
    }
}

/// Nested arrays of one shape throughout.
fn table(at: At<'_, '_>) -> Read<Table> {
    let mut shape = Vec::new();
    let mut first = at.value;
    while let Json::Array(elements) = first {
        let Some(next) = elements.first() else {
            return at.fault("has an empty array");
        };
        let Ok(side) = u32::try_from(elements.len()) else {
            return at.fault("is too large");
        };
        shape.push(side);
        first = next;
    }
    let mut values = Vec::new();
    fill(at, &shape, &mut values)?;
    Ok(Table { shape, values })
}

fn fill(at: At<'_, '_>, shape: &[u32], values: &mut Vec<u32>) -> Read<()> {
    match (at.value, shape.split_first()) {
        (Json::Array(elements), Some((&side, inner))) if elements.len() == side as usize => {
            at.list(|at| fill(at, inner, values))?;
        }
        (Json::Array(_), _) | (_, Some(_)) => {
            return at.fault("has not the shape of the rest of its table");
        }
        (_, None) => values.push(at.small()?),
    }
    Ok(())
}
