//! Ids: one newtype a kind of thing, all over `u32` or smaller.

/// A sort, by its number in the signature; a theory that names none has the single sort 0.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Sort(pub u16);

impl Sort {
    /// How many sorts a signature can have.
    pub const LIMIT: usize = 1 << 11;
}

/// A function symbol or constant, by its number in the bank that it was declared in.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Symbol(pub u32);

impl Symbol {
    /// The number as an index into per-symbol arrays.
    pub fn index(self) -> usize {
        self.0 as usize
    }
}

/// A variable: its number within the equation that it stands in, and its sort.
///
/// Two variables of one equation never share a number, so substitutions are arrays by number.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct Variable {
    /// The number, below [`Variable::LIMIT`].
    pub index: u32,
    /// The sort of the terms that it stands for.
    pub sort: Sort,
}

impl Variable {
    /// Numbers of variables lie below this.
    pub const LIMIT: u32 = 1 << 20;

    pub(super) const BIT: u32 = 1 << 31;

    pub(super) fn pack(self) -> u32 {
        assert!(
            self.index < Self::LIMIT && (self.sort.0 as usize) < Sort::LIMIT,
            "the language floor bounds variables and sorts"
        );
        Self::BIT | u32::from(self.sort.0) << 20 | self.index
    }

    pub(super) fn unpack(head: u32) -> Self {
        Variable {
            index: head & (Self::LIMIT - 1),
            sort: Sort((head >> 20 & 0x7ff) as u16),
        }
    }
}

/// A term, by its place in a [`Bank`](super::Bank). Arguments have smaller ids than the term.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub struct TermId(pub u32);

impl TermId {
    /// No term: a filler for arrays.
    pub const NONE: TermId = TermId(u32::MAX);

    /// The id as an index into per-term arrays.
    pub fn index(self) -> usize {
        self.0 as usize
    }

    /// Is this a term and not the filler?
    pub fn is_some(self) -> bool {
        self != Self::NONE
    }
}
