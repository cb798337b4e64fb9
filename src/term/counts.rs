//! How often each variable occurs in a term, in sixteen bytes.

/// Occurrences of the first sixteen variables, one byte each, each at most 127.
///
/// A term with other variables or more occurrences is *wide*: then the count says nothing and the
/// caller counts by walking the term. Adding and comparing take a few instructions; counting
/// variables was nearly all of the cost of order tests when it was done by walking.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct VariableCounts(u128);

const HIGH: u128 = 0x8080_8080_8080_8080_8080_8080_8080_8080;

impl VariableCounts {
    /// No variable.
    pub const NONE: VariableCounts = VariableCounts(0);
    const WIDE: VariableCounts = VariableCounts(u128::MAX);

    /// One occurrence of the variable with this number.
    pub fn one(index: u32) -> Self {
        if index < 16 {
            VariableCounts(1 << (8 * index))
        } else {
            Self::WIDE
        }
    }

    /// Must the caller count by walking?
    pub fn is_wide(self) -> bool {
        self == Self::WIDE
    }

    /// Is there no variable?
    pub fn is_ground(self) -> bool {
        self == Self::NONE
    }

    /// The occurrences of both.
    #[must_use]
    pub fn plus(self, other: Self) -> Self {
        if self.is_wide() || other.is_wide() {
            return Self::WIDE;
        }
        let sum = self.0 + other.0;
        if sum & HIGH == 0 {
            VariableCounts(sum)
        } else {
            Self::WIDE
        }
    }

    /// Has `self` at least as many occurrences of every variable? Neither may be wide.
    pub fn cover(self, other: Self) -> bool {
        debug_assert!(!self.is_wide() && !other.is_wide());
        ((self.0 | HIGH) - other.0) & HIGH == HIGH
    }

    /// Has every variable of `other` an occurrence in `self`? Neither may be wide.
    pub fn mention(self, other: Self) -> bool {
        debug_assert!(!self.is_wide() && !other.is_wide());
        let present = |counts: u128| (counts + (HIGH - (HIGH >> 7))) & HIGH;
        present(other.0) & !present(self.0) == 0
    }

    /// The variables that occur, by number, with their occurrences; not for wide counts.
    pub fn occurring(self) -> impl Iterator<Item = (u32, u32)> {
        debug_assert!(!self.is_wide());
        let mut left = self.0;
        std::iter::from_fn(move || {
            if left == 0 {
                return None;
            }
            let index = left.trailing_zeros() / 8;
            let times = (left >> (8 * index)) as u32 & 0xff;
            left &= !(0xff << (8 * index));
            Some((index, times))
        })
    }

    /// The occurrences of the variable with this number; not for wide counts.
    pub fn of(self, index: u32) -> u32 {
        debug_assert!(!self.is_wide());
        if index < 16 {
            (self.0 >> (8 * index)) as u32 & 0xff
        } else {
            0
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    fn pack(counts: &[u8; 16]) -> VariableCounts {
        let mut sum = VariableCounts::NONE;
        for (index, &count) in counts.iter().enumerate() {
            for _ in 0..count {
                sum = sum.plus(VariableCounts::one(index as u32));
            }
        }
        sum
    }

    proptest! {
        #[test]
        fn agrees_with_counting(a in proptest::array::uniform16(0u8..100), b in proptest::array::uniform16(0u8..100)) {
            let (x, y) = (pack(&a), pack(&b));
            prop_assert_eq!(x.cover(y), a.iter().zip(&b).all(|(a, b)| a >= b));
            prop_assert_eq!(x.mention(y), a.iter().zip(&b).all(|(a, b)| *a > 0 || *b == 0));
            let over = a.iter().zip(&b).any(|(a, b)| a + b > 127);
            prop_assert_eq!(x.plus(y).is_wide(), over);
            for (index, &count) in a.iter().enumerate() {
                prop_assert_eq!(x.of(index as u32), u32::from(count));
            }
            let occurring: Vec<_> = x.occurring().collect();
            let counted = a.iter().enumerate().filter(|(_, n)| **n > 0);
            let counted: Vec<_> = counted.map(|(i, n)| (i as u32, u32::from(*n))).collect();
            prop_assert_eq!(occurring, counted);
        }
    }
}
