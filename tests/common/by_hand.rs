//! Evidence judged from its JSON alone, by the description of the form and nothing of the program:
//! every step of a proof replayed, algebras evaluated, rule sets completed by hand.
//!
//! Terms are numbered in a table of their own, in which equal terms have equal numbers.

use super::textbook::Textbook;
use super::tree::{Tree, app, var};
use serde_json::Value;
use std::collections::{BTreeMap, HashMap};

type Id = usize;
type Judged<T> = Result<T, String>;

/// A file of evidence with its terms.
pub struct Paper<'j> {
    json: &'j Value,
    /// A variable has no arguments list.
    terms: Vec<(String, Option<Vec<Id>>)>,
    known: HashMap<(String, Option<Vec<Id>>), Id>,
    /// The term for each entry of the file.
    entries: Vec<Id>,
    /// The variables in each term.
    variables: Vec<Vec<String>>,
}

/// Whether what the file says is so. A complete set with a rule that decreases neither way is only
/// judged as far as its lemmas and its order go.
pub fn judge(json: &Value) -> Judged<()> {
    let mut paper = Paper::read(json)?;
    match text(&json["kind"])? {
        "proof" => {
            let claim = &json["claim"];
            let equations = paper.lemmas()?;
            absent(claim, "when")?;
            if let Some(witness) = claim.get("witness") {
                paper.witness(claim, witness)?;
            }
            paper.chain(claim, &claim["steps"], &equations)
        }
        "algebra" => paper.algebra(),
        "complete" => paper.complete(),
        other => Err(format!("the kind {other}")),
    }
}

fn text(value: &Value) -> Judged<&str> {
    value.as_str().ok_or_else(|| format!("{value} is no text"))
}

fn list(value: &Value) -> Judged<&Vec<Value>> {
    value
        .as_array()
        .ok_or_else(|| format!("{value} is no list"))
}

fn absent(value: &Value, field: &str) -> Judged<()> {
    match value.get(field) {
        None => Ok(()),
        Some(_) => Err(format!("{field} is not judged by hand")),
    }
}

fn ensure(is_so: bool, or: impl FnOnce() -> String) -> Judged<()> {
    if is_so { Ok(()) } else { Err(or()) }
}

impl<'j> Paper<'j> {
    /// Reads the terms.
    pub fn read(json: &'j Value) -> Judged<Self> {
        let mut paper = Paper {
            json,
            terms: Vec::new(),
            known: HashMap::new(),
            entries: Vec::new(),
            variables: Vec::new(),
        };
        for entry in list(&json["terms"])? {
            let term = match entry {
                Value::String(name) => paper.make(name, None),
                Value::Array(parts) => {
                    let below = parts[1..].iter().map(|part| paper.term(part));
                    let below = below.collect::<Judged<Vec<Id>>>()?;
                    paper.make(text(&parts[0])?, Some(below))
                }
                _ => return Err(format!("{entry} is no term")),
            };
            paper.entries.push(term);
        }
        for term in 0..paper.terms.len() {
            paper.well_sorted(term)?;
        }
        Ok(paper)
    }

    fn make(&mut self, name: &str, below: Option<Vec<Id>>) -> Id {
        let key = (name.to_owned(), below);
        if let Some(id) = self.known.get(&key) {
            return *id;
        }
        let mut variables: Vec<String> = match &key.1 {
            None => vec![key.0.clone()],
            Some(below) => below
                .iter()
                .flat_map(|t| self.variables[*t].clone())
                .collect(),
        };
        variables.sort();
        variables.dedup();
        self.variables.push(variables);
        self.terms.push(key.clone());
        self.known.insert(key, self.terms.len() - 1);
        self.terms.len() - 1
    }

    fn term(&self, number: &Value) -> Judged<Id> {
        let entry = number.as_u64().and_then(|n| self.entries.get(n as usize));
        entry.copied().ok_or_else(|| format!("no term {number}"))
    }

    /// The sort of a term; all the same in a theory without sorts.
    fn sort(&self, term: Id) -> Judged<&str> {
        let (name, below) = &self.terms[term];
        let Some(types) = self.json.get("types") else {
            return Ok("");
        };
        match below {
            None => text(&self.json["variables"][name]),
            Some(_) => text(list(&types[name])?.last().ok_or("an empty type")?),
        }
    }

    fn well_sorted(&self, term: Id) -> Judged<()> {
        let (name, Some(below)) = &self.terms[term] else {
            return self.sort(term).map(|_| ());
        };
        let Some(types) = self.json.get("types") else {
            return Ok(());
        };
        let wanted = list(&types[name])?;
        ensure(wanted.len() == below.len() + 1, || {
            format!("arity of {name}")
        })?;
        for (argument, sort) in below.iter().zip(wanted) {
            ensure(self.sort(*argument)? == text(sort)?, || {
                format!("sorts of {name}")
            })?;
        }
        Ok(())
    }

    fn instance(&mut self, term: Id, with: &BTreeMap<&str, Id>) -> Id {
        if self.variables[term].is_empty() {
            return term;
        }
        match self.terms[term].clone() {
            (name, None) => with[name.as_str()],
            (name, Some(below)) => {
                let below = below.into_iter().map(|t| self.instance(t, with)).collect();
                self.make(&name, Some(below))
            }
        }
    }

    /// The equations that may be cited, after every lemma was proved by those before it.
    fn lemmas(&mut self) -> Judged<BTreeMap<&'j str, &'j Value>> {
        let json = self.json;
        let mut known = BTreeMap::new();
        for law in list(&json["laws"])? {
            absent(law, "when")?;
            let new = known.insert(text(&law["name"])?, law).is_none();
            ensure(new, || "a name twice".to_owned())?;
        }
        ensure(list(&json["definitions"])?.is_empty(), || {
            "definitions".to_owned()
        })?;
        for lemma in list(&json["lemmas"])? {
            absent(lemma, "when")?;
            self.chain(lemma, &lemma["steps"], &known)?;
            let new = known.insert(text(&lemma["name"])?, lemma).is_none();
            ensure(new, || "a name twice".to_owned())?;
        }
        Ok(known)
    }

    fn chain(
        &mut self,
        sides: &Value,
        steps: &'j Value,
        known: &BTreeMap<&str, &'j Value>,
    ) -> Judged<()> {
        let mut now = self.term(&sides["left"])?;
        for (number, step) in list(steps)?.iter().enumerate() {
            let next = self.step(now, step, known);
            now = next.map_err(|why| format!("step {number}: {why}"))?;
        }
        ensure(now == self.term(&sides["right"])?, || {
            "another end".to_owned()
        })
    }

    fn step(&mut self, now: Id, step: &'j Value, known: &BTreeMap<&str, &'j Value>) -> Judged<Id> {
        absent(step, "given")?;
        let equation = known.get(text(&step["by"])?).ok_or("an unknown equation")?;
        let (left, right) = (
            self.term(&equation["left"])?,
            self.term(&equation["right"])?,
        );
        let (from, to) = match text(&step["way"])? {
            "forward" => (left, right),
            "backward" => (right, left),
            other => return Err(format!("the way {other}")),
        };
        let mut with = BTreeMap::new();
        for (name, value) in step["with"].as_object().ok_or("no with")? {
            let term = self.term(value)?;
            let variable = self.known.get(&(name.clone(), None)).copied();
            let variable = variable.ok_or("with names no variable")?;
            ensure(self.sort(variable)? == self.sort(term)?, || {
                "sorts".to_owned()
            })?;
            with.insert(name.as_str(), term);
        }
        for variable in self.variables[left].iter().chain(&self.variables[right]) {
            let named = with.contains_key(variable.as_str());
            ensure(named, || format!("{variable} is not in with"))?;
        }
        let (from, to) = (self.instance(from, &with), self.instance(to, &with));
        // Down along the path, then up again with the other side in its place.
        let mut above = Vec::new();
        let mut here = now;
        for index in list(&step["at"])? {
            let index = index.as_u64().ok_or("no place")? as usize;
            let (name, below) = self.terms[here].clone();
            let below = below.filter(|below| index < below.len());
            let below = below.ok_or("no such place")?;
            here = below[index];
            above.push((name, below, index));
        }
        ensure(here == from, || "the equation does not fit".to_owned())?;
        let mut whole = to;
        while let Some((name, mut below, index)) = above.pop() {
            below[index] = whole;
            whole = self.make(&name, Some(below));
        }
        ensure(whole == self.term(&step["to"])?, || {
            "to is another term".to_owned()
        })?;
        Ok(whole)
    }

    fn algebra(&mut self) -> Judged<()> {
        for law in list(&self.json["laws"])? {
            absent(law, "when")?;
            let sides = [self.term(&law["left"])?, self.term(&law["right"])?];
            let names = self.of_both(sides);
            self.holds(sides, &names)?;
        }
        let claim = &self.json["claim"];
        absent(claim, "when")?;
        let mut at = BTreeMap::new();
        for (name, element) in claim["with"].as_object().ok_or("no with")? {
            let variable = self.known.get(&(name.clone(), None)).copied();
            let size = self.size(variable.ok_or("no such variable")?)?;
            let element = element.as_u64().filter(|element| *element < size);
            at.insert(name.clone(), element.ok_or("no such element")?);
        }
        if let Some(unknowns) = claim.get("unknowns") {
            return self.differ(claim, list(unknowns)?, at);
        }
        let left = self.value(self.term(&claim["left"])?, &at)?;
        let right = self.value(self.term(&claim["right"])?, &at)?;
        let stated = [left, right].map(Value::from);
        ensure(left != right, || "the sides are the same".to_owned())?;
        ensure(list(&claim["values"])?[..] == stated, || {
            "other values".to_owned()
        })
    }

    /// Has every unknown a value, and does none occur in the claim any more?
    fn witness(&self, claim: &Value, witness: &Value) -> Judged<()> {
        let values = witness.as_object().ok_or("no witness")?;
        let mut terms = vec![self.term(&claim["left"])?, self.term(&claim["right"])?];
        for value in values.values() {
            terms.push(self.term(value)?);
        }
        let occurs = |name: &String| terms.iter().any(|t| self.variables[*t].contains(name));
        match values.keys().find(|name| occurs(name)) {
            None => Ok(()),
            Some(name) => Err(format!("{name} still occurs")),
        }
    }

    /// Do the sides differ for all values of the unknowns?
    fn differ(
        &self,
        claim: &Value,
        unknowns: &[Value],
        mut at: BTreeMap<String, u64>,
    ) -> Judged<()> {
        absent(claim, "values")?;
        let sides = [self.term(&claim["left"])?, self.term(&claim["right"])?];
        let mut sizes = Vec::new();
        for unknown in unknowns {
            let name = text(unknown)?.to_owned();
            ensure(!at.contains_key(&name), || {
                "a value of an unknown".to_owned()
            })?;
            let variable = self.known.get(&(name.clone(), None)).copied();
            sizes.push((name, self.size(variable.ok_or("no such unknown")?)?));
        }
        let all: u64 = sizes.iter().map(|(_, size)| size).product();
        for number in 0..all {
            let mut rest = number;
            for (name, size) in &sizes {
                at.insert(name.clone(), rest % size);
                rest /= size;
            }
            let same = self.value(sides[0], &at)? == self.value(sides[1], &at)?;
            ensure(!same, || format!("the sides agree: {at:?}"))?;
        }
        Ok(())
    }

    /// How many elements the sort of a term has.
    fn size(&self, term: Id) -> Judged<u64> {
        let size = self.json["sorts"][self.sort(term)?].as_u64();
        size.filter(|size| *size > 0)
            .ok_or_else(|| "no size".to_owned())
    }

    /// The variables of two terms.
    fn of_both(&self, sides: [Id; 2]) -> Vec<String> {
        let names = sides.iter().flat_map(|t| self.variables[*t].clone());
        let mut names: Vec<String> = names.collect();
        names.sort();
        names.dedup();
        names
    }

    /// Counts through all assignments.
    fn holds(&self, [left, right]: [Id; 2], names: &[String]) -> Judged<()> {
        let sizes = names
            .iter()
            .map(|name| self.size(self.known[&(name.clone(), None)]));
        let sizes = sizes.collect::<Judged<Vec<u64>>>()?;
        let all: u64 = sizes.iter().product();
        for number in 0..all {
            let mut rest = number;
            let mut at = BTreeMap::new();
            for (name, size) in names.iter().zip(&sizes) {
                at.insert(name.clone(), rest % size);
                rest /= size;
            }
            let same = self.value(left, &at)? == self.value(right, &at)?;
            ensure(same, || format!("a law does not hold: {at:?}"))?;
        }
        Ok(())
    }

    fn value(&self, term: Id, at: &BTreeMap<String, u64>) -> Judged<u64> {
        let (name, below) = &self.terms[term];
        let Some(below) = below else {
            return at
                .get(name)
                .copied()
                .ok_or_else(|| format!("no value of {name}"));
        };
        let mut cell = &self.json["tables"][name];
        for argument in below {
            let element = self.value(*argument, at)?;
            cell = cell.get(element as usize).ok_or("a table is too small")?;
        }
        let size = self.size(term)?;
        cell.as_u64()
            .filter(|v| *v < size)
            .ok_or_else(|| format!("a cell of {name}"))
    }

    fn complete(&mut self) -> Judged<()> {
        let known = self.lemmas()?;
        let mut rules = Vec::new();
        let mut has_directions = true;
        let order = Textbook::of_json(&self.json["order"], &self.operators())?;
        for rule in list(&self.json["rules"])? {
            let name = text(&rule["name"])?;
            // A rule may be a law as it stands.
            let proved = known.get(name).ok_or("a rule without proof")?;
            let sides =
                |of: &Value| Ok::<_, String>([self.term(&of["left"])?, self.term(&of["right"])?]);
            ensure(sides(rule)? == sides(proved)?, || {
                "a lemma of another rule".to_owned()
            })?;
            let [left, right] = sides(rule)?;
            let (left, right) = (self.tree(left), self.tree(right));
            let is_oriented = rule["oriented"] == true;
            // What may be used both ways and decreases one way is used that way.
            if order.greater(&left, &right) {
                rules.push((left, right));
            } else if is_oriented {
                return Err(format!("{left} -> {right} goes up"));
            } else if order.greater(&right, &left) {
                rules.push((right, left));
            } else {
                has_directions = false;
            }
        }
        if !has_directions {
            return Ok(());
        }
        for law in list(&self.json["laws"])? {
            let (s, t) = (self.term(&law["left"])?, self.term(&law["right"])?);
            let (s, t) = (self.tree(s), self.tree(t));
            ensure(normal(&s, &rules) == normal(&t, &rules), || {
                format!("{s} = {t} does not join")
            })?;
        }
        for (s, t) in critical_pairs(&rules) {
            ensure(normal(&s, &rules) == normal(&t, &rules), || {
                format!("{s}, {t} do not join")
            })?;
        }
        if let Some(claim) = self.json.get("claim") {
            let sides = [self.term(&claim["left"])?, self.term(&claim["right"])?];
            let [s, t] = sides.map(|side| normal(&self.tree(side), &rules));
            let stated = list(&claim["normal"])?;
            let stated = [self.term(&stated[0])?, self.term(&stated[1])?].map(|t| self.tree(t));
            ensure(stated == [s.clone(), t.clone()], || {
                "other normal forms".to_owned()
            })?;
            ensure(s != t, || "the same normal form".to_owned())?;
        }
        Ok(())
    }

    /// The operators with the numbers of their arguments.
    fn operators(&self) -> BTreeMap<String, usize> {
        let applied = self.terms.iter();
        applied
            .filter_map(|(name, below)| Some((name.clone(), below.as_ref()?.len())))
            .collect()
    }

    /// A term as a tree, for small terms.
    pub fn tree(&self, term: Id) -> Tree {
        match &self.terms[term] {
            (name, None) => var(name),
            (name, Some(below)) => app(name, below.iter().map(|t| self.tree(*t)).collect()),
        }
    }

    /// The sides of an equation of the file as trees.
    pub fn sides(&self, equation: &Value) -> Judged<(Tree, Tree)> {
        let (left, right) = (
            self.term(&equation["left"])?,
            self.term(&equation["right"])?,
        );
        Ok((self.tree(left), self.tree(right)))
    }
}

/// The normal form, innermost first.
fn normal(term: &Tree, rules: &[(Tree, Tree)]) -> Tree {
    let mut term = match term {
        Tree::Var(_) => term.clone(),
        Tree::App(name, below) => app(name, below.iter().map(|t| normal(t, rules)).collect()),
    };
    for (left, right) in rules {
        let mut values = BTreeMap::new();
        if left.matches(&term, &mut values) {
            term = normal(&right.instance(&values), rules);
            break;
        }
    }
    term
}

fn critical_pairs(rules: &[(Tree, Tree)]) -> Vec<(Tree, Tree)> {
    let mut pairs = Vec::new();
    for (below, below_right) in rules {
        let [below, below_right] = [below, below_right].map(primed);
        for (left, right) in rules {
            for place in left.places() {
                if matches!(left.at(&place), Tree::Var(_)) {
                    continue;
                }
                let mut values = BTreeMap::new();
                if unify(left.at(&place), &below, &mut values) {
                    let one = left.with(&place, below_right.clone());
                    pairs.push((all_the_way(&one, &values), all_the_way(right, &values)));
                }
            }
        }
    }
    pairs
}

/// The same term with other variables.
fn primed(term: &Tree) -> Tree {
    match term {
        Tree::Var(name) => var(&format!("{name}\u{2032}")),
        Tree::App(name, below) => app(name, below.iter().map(primed).collect()),
    }
}

/// Robinson's unification; values may mention variables that have values.
fn unify(s: &Tree, t: &Tree, values: &mut BTreeMap<String, Tree>) -> bool {
    let (s, t) = (all_the_way(s, values), all_the_way(t, values));
    match (&s, &t) {
        _ if s == t => true,
        (Tree::Var(x), other) | (other, Tree::Var(x)) => {
            let mut inside = Vec::new();
            other.variables(&mut inside);
            let fits = !inside.contains(x);
            values.insert(x.clone(), other.clone());
            fits
        }
        (Tree::App(f, ss), Tree::App(g, ts)) => {
            f == g && ss.len() == ts.len() && ss.iter().zip(ts).all(|(s, t)| unify(s, t, values))
        }
    }
}

fn all_the_way(term: &Tree, values: &BTreeMap<String, Tree>) -> Tree {
    match term {
        Tree::Var(name) => values
            .get(name)
            .map_or_else(|| term.clone(), |value| all_the_way(value, values)),
        Tree::App(name, below) => app(name, below.iter().map(|t| all_the_way(t, values)).collect()),
    }
}

/// Whether the sides differ in an algebra of the laws with two elements. Not every equation that
/// fails does so there; in semilattices it does.
pub fn differ_in_two_elements(json: &Value, claim: &Value) -> Judged<()> {
    let paper = Paper::read(json)?;
    let (left, right) = (paper.term(&claim["left"])?, paper.term(&claim["right"])?);
    let operators = paper.operators();
    let cells: usize = operators.values().map(|arity| 1 << arity).sum();
    assert!(cells <= 16, "few enough operators");
    let mut algebra = json.clone();
    algebra["sorts"] = serde_json::json!({ "": 2 });
    for code in 0..1_usize << cells {
        let mut bits = (0..cells).map(|n| code >> n & 1);
        let tables = operators.iter().map(|(name, arity)| {
            let row = bits.by_ref().take(1 << arity).map(Value::from);
            (name.clone(), nested(row.collect(), *arity))
        });
        let tables: serde_json::Map<String, Value> = tables.collect();
        algebra["tables"] = tables.into();
        let paper = Paper::read(&algebra)?;
        let mut laws = list(&json["laws"])?.iter();
        let is_law = |law: &Value| {
            let sides = [paper.term(&law["left"])?, paper.term(&law["right"])?];
            paper.holds(sides, &paper.of_both(sides))
        };
        if laws.all(|law| is_law(law).is_ok()) {
            let sides = [left, right];
            if paper.holds(sides, &paper.of_both(sides)).is_err() {
                return Ok(());
            }
        }
    }
    Err("the sides are equal in every algebra with two elements".to_owned())
}

fn nested(mut row: Vec<Value>, arity: usize) -> Value {
    for _ in 0..arity {
        row = row
            .chunks(2)
            .map(|pair| Value::Array(pair.to_vec()))
            .collect();
    }
    row.swap_remove(0)
}
