//! What it costs to read evidence from its JSON form, without writing it.
//!
//! Evidence in memory is charged as if it came from a file, so that what the program prints as
//! settled is not too costly for whoever checks the file afterwards.

use super::evidence::{
    AlgebraEvidence, CompleteSet, Condition, Equation, Evidence, Lemma, Proof, Step, Types,
};
use super::terms::{Name, Node, TermIndex, Terms};

/// What reading a JSON value costs beside its bytes, in memory above all. Every value is counted
/// by the sign before it.
pub(super) const UNITS_PER_VALUE: u64 = 12;

/// The longest that an equation, a step and the rest are, without what is counted for each. More
/// is safe here, less is not.
const EQUATION: &str = r#"{"left":,"name":"","right":,"steps":[],"when":[],"oriented":false},"#;
const STEP: &str = r#"{"at":[],"by":"","given":[],"to":,"way":"backward","with":{}},"#;
const CONDITION: &str = r#"{"left":,"right":},"#;
const WHOLE: &str = concat!(
    r#"{"kind":"complete","terms":[],"types":{},"variables":{},"laws":[],"definitions":[],"#,
    r#""lemmas":[],"claim":{"left":,"right":,"when":[],"steps":[],"witness":{},"with":{},"#,
    r#""unknowns":[],"values":[,],"normal":[,]},"order":{"kind":"kbo","precedence":[],"#,
    r#""weights":{},"variable":},"rules":[],"sorts":{},"tables":{}}"#,
);

/// What reading these bytes costs.
pub(super) fn of_bytes(json: &[u8]) -> u64 {
    let opens = |byte: &&u8| matches!(byte, b'[' | b'{' | b',' | b':');
    let values = json.iter().filter(opens).count() as u64;
    (json.len() as u64).saturating_add(values.saturating_mul(UNITS_PER_VALUE))
}

/// What reading the JSON form of the evidence costs at most. Takes time linear in the evidence.
pub(super) fn of_evidence(evidence: &Evidence) -> u64 {
    let mut measure = Measure {
        terms: evidence.terms(),
        cost: of_bytes(WHOLE.as_bytes()) + 1,
    };
    measure.terms();
    evidence.types().into_iter().for_each(|t| measure.types(t));
    measure.equations(evidence.laws());
    measure.equations(evidence.definitions());
    match evidence {
        Evidence::Proof(proof) => measure.proof(proof),
        Evidence::Algebra(algebra) => measure.algebra(algebra),
        Evidence::Complete(set) => measure.complete(set),
    }
    measure.cost
}

struct Measure<'e> {
    terms: &'e Terms,
    cost: u64,
}

/// What a sign that a value follows costs.
const SIGN: u64 = 1 + UNITS_PER_VALUE;

impl Measure<'_> {
    /// A name as a string, with the sign after it.
    fn name(&mut self, name: Name) {
        let text = self.terms.text(name).bytes();
        let escaped = text.map(|byte| match byte {
            b'"' | b'\\' => 2,
            0..=0x1f => 6,
            b'[' | b'{' | b',' | b':' => SIGN,
            _ => 1,
        });
        self.cost += escaped.sum::<u64>() + 2 + SIGN;
    }

    /// A number with the sign after it.
    fn number(&mut self, number: u64) {
        self.cost += u64::from(number.checked_ilog10().unwrap_or(0)) + 1 + SIGN;
    }

    fn term(&mut self, term: TermIndex) {
        self.number(term.number().into());
    }

    fn template(&mut self, text: &str) {
        self.cost += of_bytes(text.as_bytes());
    }

    fn terms(&mut self) {
        for term in self.terms.all() {
            match self.terms.node(term) {
                Node::Variable(name) => self.name(name),
                Node::Apply(name, arguments) => {
                    // The brackets, and the comma behind them.
                    self.cost += 1 + 2 * SIGN;
                    self.name(name);
                    arguments.iter().for_each(|&argument| self.term(argument));
                }
            }
        }
    }

    fn types(&mut self, types: &Types) {
        for (name, sorts) in &types.operators {
            self.cost += 1 + 2 * SIGN;
            self.name(*name);
            sorts.iter().for_each(|&sort| self.name(sort));
        }
        for &(name, sort) in &types.variables {
            self.name(name);
            self.name(sort);
        }
    }

    fn conditions(&mut self, conditions: &[Condition]) {
        for condition in conditions {
            self.template(CONDITION);
            self.term(condition.left);
            self.term(condition.right);
        }
    }

    fn equations(&mut self, equations: &[Equation]) {
        for equation in equations {
            self.template(EQUATION);
            self.name(equation.name);
            self.term(equation.left);
            self.term(equation.right);
            self.conditions(&equation.when);
        }
    }

    fn lemmas(&mut self, lemmas: &[Lemma]) {
        for lemma in lemmas {
            self.equations(std::slice::from_ref(&lemma.equation));
            self.steps(&lemma.steps);
        }
    }

    fn steps(&mut self, steps: &[Step]) {
        let mut waiting = vec![steps];
        while let Some(steps) = waiting.pop() {
            for step in steps {
                self.template(STEP);
                self.name(step.by);
                step.at.iter().for_each(|&place| self.number(place.into()));
                self.values(&step.with);
                self.term(step.to);
                // The brackets of a chain, and the comma behind them.
                self.cost += step.given.len() as u64 * (1 + 2 * SIGN);
                waiting.extend(step.given.iter().map(Vec::as_slice));
            }
        }
    }

    fn values(&mut self, values: &[(Name, TermIndex)]) {
        for &(name, term) in values {
            self.name(name);
            self.term(term);
        }
    }

    fn numbers(&mut self, numbers: impl Iterator<Item = (Name, u64)>) {
        for (name, number) in numbers {
            self.name(name);
            self.number(number);
        }
    }

    fn proof(&mut self, proof: &Proof) {
        self.lemmas(&proof.lemmas);
        let claim = &proof.claim;
        self.term(claim.left);
        self.term(claim.right);
        self.conditions(&claim.when);
        self.steps(&claim.steps);
        self.values(&claim.witness);
    }

    fn algebra(&mut self, algebra: &AlgebraEvidence) {
        let of = |&(name, value): &(Name, u32)| (name, u64::from(value));
        self.numbers(algebra.sorts.iter().map(of));
        for (name, table) in &algebra.tables {
            self.name(*name);
            table.values.iter().for_each(|&v| self.number(v.into()));
            // The brackets of each row, and the comma behind them.
            let mut rows = 1;
            for &side in &table.shape {
                self.cost += rows * (1 + 2 * SIGN);
                rows *= u64::from(side);
            }
        }
        let claim = &algebra.claim;
        self.term(claim.left);
        self.term(claim.right);
        self.conditions(&claim.when);
        self.numbers(claim.with.iter().map(of));
        claim.unknowns.iter().for_each(|&name| self.name(name));
        for value in claim.values.into_iter().flatten() {
            self.number(value.into());
        }
    }

    fn complete(&mut self, set: &CompleteSet) {
        self.lemmas(&set.lemmas);
        set.order
            .precedence
            .iter()
            .for_each(|&name| self.name(name));
        self.numbers(set.order.weights.iter().copied());
        self.number(set.order.variable);
        for rule in &set.rules {
            self.template(EQUATION);
            self.name(rule.name);
            self.term(rule.left);
            self.term(rule.right);
        }
        if let Some(claim) = &set.claim {
            let [s, t] = claim.normal;
            for term in [claim.left, claim.right, s, t] {
                self.term(term);
            }
        }
    }
}
