//! Laws, claims, and derived rules with the record of their derivation.

use super::LineId;
use crate::term::TermId;

/// What sort of statement a law came from.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum LawKind {
    /// An equation for use in both directions.
    Law,
    /// An equation that the order must make decrease from left to right.
    Rule,
    /// The definition of the symbol that its left side begins with.
    Definition,
}

/// The part of a `law … is …` line that a law came from.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Property {
    /// The operator, as it is written in a line.
    pub operator: String,
    /// The words that state this one law, such as `left unit e`.
    pub words: String,
}

/// A named equation of a theory.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Law {
    /// Its name, unlike that of every other law and claim.
    pub name: String,
    /// The left side, in the bank of the theory.
    pub left: TermId,
    /// The right side.
    pub right: TermId,
    /// Where it came from.
    pub kind: LawKind,
    /// The line that states it, or the `use` line that brought it.
    pub line: LineId,
    /// The property that states it, if one does.
    pub property: Option<Property>,
    /// The theory that it was taken from, if by `use`.
    pub from: Option<String>,
    /// Was it stated without a name?
    pub unnamed: bool,
}

/// What a claim expects.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Expected {
    /// The equation should follow.
    Equal,
    /// It should not.
    NotEqual,
}

/// What should, or should not, follow from the laws.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Claim {
    /// Variables for which there should be values, by their numbers in the signature; the other
    /// variables are universally quantified, and each value may depend on all of them.
    pub unknowns: Vec<u32>,
    /// Its name, if it has one.
    pub name: Option<String>,
    /// The left side, in the bank of the theory.
    pub left: TermId,
    /// The right side.
    pub right: TermId,
    /// What is expected.
    pub expected: Expected,
    /// The line that states it.
    pub line: LineId,
}

/// A derived rule in one of its two directions.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub struct Use {
    /// The number of the rule.
    pub rule: u32,
    /// From right to left?
    pub backward: bool,
}

/// One rewriting step of a record.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct RecordStep {
    /// The rule that was applied.
    pub by: Use,
    /// Where, by argument numbers from 0.
    pub at: Vec<u32>,
}

/// What a derived rule started from.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub enum Origin {
    /// A law of the theory.
    Law(String),
    /// The overlap of two rules.
    Overlap {
        /// The rule in whose left side the other was applied.
        outer: Use,
        /// Where.
        at: Vec<u32>,
        /// The rule that was applied there.
        inner: Use,
    },
    /// An earlier form of the rule.
    Rule(u32),
}

/// How a rule was derived: enough to derive it again without search.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Record {
    /// The equation at the start.
    pub origin: Origin,
    /// The steps on its left side.
    pub left: Vec<RecordStep>,
    /// The steps on its right side.
    pub right: Vec<RecordStep>,
    /// Were the sides then exchanged?
    pub swapped: bool,
}

/// A derived rule.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Derived {
    /// Its number, unlike that of every other.
    pub number: u32,
    /// The left side, in the bank of the theory. The variables of a derived rule are its own: they
    /// are numbered 0, 1, 2, … in the order of first occurrence, left side first, and have nothing
    /// to do with those of the signature.
    pub left: TermId,
    /// The right side.
    pub right: TermId,
    /// Does the order make it decrease from left to right?
    pub oriented: bool,
    /// Is it kept only for the records of others?
    pub retired: bool,
    /// How it was derived.
    pub record: Record,
    /// The line that states it.
    pub line: LineId,
}

/// A line of a derived rule that could not be read, and why.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Refused {
    /// The line.
    pub line: LineId,
    /// How many physical lines come before it.
    pub before: usize,
    /// The place in its text, in bytes.
    pub span: std::ops::Range<usize>,
    /// What is wrong.
    pub message: String,
    /// A few words for the place.
    pub label: String,
    /// What to do.
    pub help: Vec<String>,
}
