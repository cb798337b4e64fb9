//! The checker for finite algebras: every law under every assignment, and the claim's values.

use rustc_hash::FxHashMap;
use std::cell::Cell;

use super::evidence::{AlgebraEvidence, Condition, Table};
use super::signature::Signature;
use super::terms::{Name, Node, TermIndex, Terms};
use super::work::{Stop, Work, rejected};

/// Checks that every law holds in the algebra and that the sides of the claim differ in it.
pub(super) fn check_algebra(evidence: &AlgebraEvidence, work: &mut Work) -> Result<(), Stop> {
    let mut terms = evidence.terms.clone();
    let signature = Signature::read(&mut terms, evidence.types.as_ref(), work)?;
    let sizes = read_sizes(&terms, evidence)?;
    let tables = read_tables(&terms, &signature, &sizes, evidence, work)?;
    let algebra = Algebra {
        terms: &terms,
        signature: &signature,
        sizes,
        tables,
    };
    for (number, law) in evidence.laws.iter().enumerate() {
        let place = format!("laws[{number}]");
        signature.check_equation(&terms, law, &place)?;
        let program = algebra.compile(law.left, law.right, &law.when, &place, work)?;
        let free: Vec<usize> = (0..program.variables.len()).collect();
        let failure = algebra.first(
            &program,
            &free,
            Vec::new(),
            work,
            |conditions, left, right| conditions && left != right,
        )?;
        if let Some(values) = failure {
            let reason = format!(
                "the law fails for {}",
                algebra.assignment(&program, &values)
            );
            return Err(rejected(place, reason));
        }
    }
    check_claim(&algebra, evidence, work)
}

fn check_claim(
    algebra: &Algebra<'_>,
    evidence: &AlgebraEvidence,
    work: &mut Work,
) -> Result<(), Stop> {
    let claim = &evidence.claim;
    let terms = algebra.terms;
    algebra
        .signature
        .check_sides(terms, claim.left, claim.right, "claim")?;
    algebra
        .signature
        .check_conditions(terms, &claim.when, "claim")?;
    let program = algebra.compile(claim.left, claim.right, &claim.when, "claim", work)?;
    let names = program.variables.len() + claim.with.len();
    work.spend((names as u64).saturating_mul(claim.unknowns.len() as u64))?;
    let mut given: FxHashMap<Name, u32> = FxHashMap::default();
    for &(variable, value) in &claim.with {
        let place = || format!("claim.with.{}", terms.text(variable));
        if claim.unknowns.contains(&variable) {
            return Err(rejected(place(), "an unknown has no fixed value"));
        }
        if given.insert(variable, value).is_some() {
            return Err(rejected(place(), "the variable has two values"));
        }
    }
    let mut start = Vec::new();
    let mut free = Vec::new();
    for (number, &(variable, size)) in program.variables.iter().enumerate() {
        if claim.unknowns.contains(&variable) {
            free.push(number);
            start.push(0);
            continue;
        }
        let place = || format!("claim.with.{}", terms.text(variable));
        match given.get(&variable) {
            Some(&value) if value < size => start.push(value),
            Some(_) => return Err(rejected(place(), "the value is not an element")),
            None => return Err(rejected(place(), "the variable has no value")),
        }
    }
    match (claim.values, claim.unknowns.is_empty()) {
        (Some(_), false) => {
            return Err(rejected(
                "claim.values",
                "with unknowns there are no fixed values",
            ));
        }
        (None, true) => return Err(rejected("claim.values", "the values are missing")),
        _ => {}
    }
    let values = claim.values;
    let computed = Cell::new((true, [0, 0]));
    // Without unknowns this looks at one assignment.
    let failure = algebra.first(&program, &free, start, work, |conditions, left, right| {
        computed.set((conditions, [left, right]));
        !conditions || left == right || values.is_some_and(|values| values != [left, right])
    })?;
    let Some(assignment) = failure else {
        return Ok(());
    };
    let at = algebra.assignment(&program, &assignment);
    let (conditions, [left, right]) = computed.get();
    Err(match values {
        _ if !conditions => rejected("claim", format!("a condition fails for {at}")),
        _ if left == right => {
            let reason = format!("both sides have the value {left} for {at}");
            rejected("claim", reason)
        }
        _ => {
            let reason = format!("the values of the sides are {left} and {right} for {at}");
            rejected("claim.values", reason)
        }
    })
}

/// The number of elements of each sort, at least one.
fn read_sizes(terms: &Terms, evidence: &AlgebraEvidence) -> Result<FxHashMap<Name, u32>, Stop> {
    let mut sizes = FxHashMap::default();
    for &(sort, size) in &evidence.sorts {
        let place = || format!("sorts.{}", terms.text(sort));
        if size == 0 {
            return Err(rejected(place(), "a sort has at least one element"));
        }
        if sizes.insert(sort, size).is_some() {
            return Err(rejected(place(), "the sort has two sizes"));
        }
    }
    Ok(sizes)
}

/// The tables, each of the shape that its operator's sorts demand and with values in range.
fn read_tables<'a>(
    terms: &Terms,
    signature: &Signature,
    sizes: &FxHashMap<Name, u32>,
    evidence: &'a AlgebraEvidence,
    work: &mut Work,
) -> Result<FxHashMap<Name, &'a Table>, Stop> {
    let mut tables = FxHashMap::default();
    for (operator, table) in &evidence.tables {
        let place = format!("tables.{}", terms.text(*operator));
        work.spend(1 + table.values.len() as u64)?;
        // An operator that occurs nowhere and has no type cannot be evaluated either.
        if let Some((arguments, result)) = signature.operators.get(operator) {
            let size = |sort: &Name| sizes.get(sort).copied();
            let shape: Option<Vec<u32>> = arguments.iter().map(size).collect();
            if shape.as_ref() != Some(&table.shape) {
                return Err(rejected(
                    place,
                    "the table has not the shape of its operator",
                ));
            }
            let Some(range) = size(result) else {
                return Err(rejected(place, "the result's sort has no size"));
            };
            if let Some(bad) = table.values.iter().position(|&value| value >= range) {
                let reason = format!("entry {bad} is not an element");
                return Err(rejected(place, reason));
            }
        }
        let product = |cells: u64, &side: &u32| cells.checked_mul(u64::from(side));
        let cells = table.shape.iter().try_fold(1, product);
        if cells != Some(table.values.len() as u64) {
            return Err(rejected(
                place,
                "the table has not as many entries as its shape says",
            ));
        }
        if tables.insert(*operator, table).is_some() {
            return Err(rejected(place, "the operator has two tables"));
        }
    }
    Ok(tables)
}

struct Algebra<'a> {
    terms: &'a Terms,
    signature: &'a Signature,
    sizes: FxHashMap<Name, u32>,
    tables: FxHashMap<Name, &'a Table>,
}

/// An equation as instructions on registers, one for each distinct subterm.
struct Program<'a> {
    variables: Vec<(Name, u32)>,
    instructions: Vec<Instruction<'a>>,
    conditions: Vec<(usize, usize)>,
    left: usize,
    right: usize,
}

enum Instruction<'a> {
    /// The value of the variable of this number.
    Variable(usize),
    /// The table's entry at the values of these registers.
    Look(&'a Table, Vec<usize>),
}

impl<'a> Algebra<'a> {
    fn compile(
        &self,
        left: TermIndex,
        right: TermIndex,
        when: &[Condition],
        place: &str,
        work: &mut Work,
    ) -> Result<Program<'a>, Stop> {
        let mut roots = vec![left, right];
        roots.extend(when.iter().flat_map(|c| [c.left, c.right]));
        let mut register: FxHashMap<TermIndex, usize> = FxHashMap::default();
        let mut variables = Vec::new();
        let mut instructions = Vec::new();
        for term in self.terms.subterms(&roots, work)? {
            let instruction = match self.terms.node(term) {
                Node::Variable(name) => {
                    let sort = self.signature.sort(self.terms, term);
                    let Some(&size) = self.sizes.get(&sort) else {
                        let reason = format!("the sort {} has no size", self.terms.text(sort));
                        return Err(rejected(place, reason));
                    };
                    variables.push((name, size));
                    Instruction::Variable(variables.len() - 1)
                }
                Node::Apply(name, arguments) => {
                    let Some(&table) = self.tables.get(&name) else {
                        let reason = format!("{} has no table", self.terms.text(name));
                        return Err(rejected(place, reason));
                    };
                    Instruction::Look(table, arguments.iter().map(|a| register[a]).collect())
                }
            };
            register.insert(term, instructions.len());
            instructions.push(instruction);
        }
        Ok(Program {
            variables,
            instructions,
            conditions: when
                .iter()
                .map(|c| (register[&c.left], register[&c.right]))
                .collect(),
            left: register[&left],
            right: register[&right],
        })
    }

    /// The first assignment that `fails`, when the variables of the numbers in `free` run through
    /// all values and the others stay as in `start`. An empty `start` stands for all zeros.
    ///
    /// `fails` gets whether the conditions hold, and the values of the two sides.
    fn first(
        &self,
        program: &Program<'a>,
        free: &[usize],
        mut start: Vec<u32>,
        work: &mut Work,
        fails: impl Fn(bool, u32, u32) -> bool,
    ) -> Result<Option<Vec<u32>>, Stop> {
        let cost: usize = program
            .instructions
            .iter()
            .map(|instruction| match instruction {
                Instruction::Variable(_) => 1,
                Instruction::Look(_, arguments) => 1 + arguments.len(),
            })
            .sum();
        let sizes = free
            .iter()
            .map(|&number| u64::from(program.variables[number].1));
        let assignments = sizes.fold(1, u64::saturating_mul);
        work.spend(assignments.saturating_mul(cost as u64))?;
        start.resize(program.variables.len(), 0);
        let mut values = start;
        let mut registers = vec![0; program.instructions.len()];
        loop {
            run(program, &values, &mut registers);
            let holds = |&(left, right): &(usize, usize)| registers[left] == registers[right];
            let conditions = program.conditions.iter().all(holds);
            if fails(
                conditions,
                registers[program.left],
                registers[program.right],
            ) {
                return Ok(Some(values));
            }
            // The next assignment, as an odometer turns.
            let next = free.iter().find(|&&number| {
                values[number] += 1;
                if values[number] == program.variables[number].1 {
                    values[number] = 0;
                }
                values[number] != 0
            });
            if next.is_none() {
                return Ok(None);
            }
        }
    }

    fn assignment(&self, program: &Program<'a>, values: &[u32]) -> String {
        let pairs = program.variables.iter().zip(values).take(8);
        let parts: Vec<String> = pairs
            .map(|((name, _), value)| format!("{} = {value}", self.terms.text(*name)))
            .collect();
        if parts.is_empty() {
            "every assignment".into()
        } else {
            parts.join(", ")
        }
    }
}

/// Fills the registers. The tables have been checked against the sorts, so indices are in range.
fn run(program: &Program<'_>, values: &[u32], registers: &mut [u32]) {
    for (target, instruction) in program.instructions.iter().enumerate() {
        registers[target] = match instruction {
            Instruction::Variable(number) => values[*number],
            Instruction::Look(table, arguments) => {
                let cell = arguments
                    .iter()
                    .zip(&table.shape)
                    .fold(0, |cell, (&from, &side)| {
                        cell * side as usize + registers[from] as usize
                    });
                table.values[cell]
            }
        };
    }
}
