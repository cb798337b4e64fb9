//! Finite algebras as tables.

use super::{Equation, Signature};
use crate::term::{Sort, Symbol};
use std::fmt;

/// The values of one operation, the last argument changing fastest. A constant has one value.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Table {
    shape: Box<[u32]>,
    values: Box<[u8]>,
    quick: Option<Box<[u8; 256]>>,
}

impl Table {
    /// How many values each argument takes.
    pub fn shape(&self) -> &[u32] {
        &self.shape
    }

    /// All values, as many as the product of the shape.
    pub fn values(&self) -> &[u8] {
        &self.values
    }

    /// The table once more with 256 entries, so that a byte is always a valid index: by the
    /// argument for one argument, by 16 times the first plus the second for two, both below 16.
    pub(super) fn quick(&self) -> Option<&[u8; 256]> {
        self.quick.as_deref()
    }

    /// The value at these arguments; none if there are too many or too few, or one is no element.
    pub fn get(&self, arguments: &[u32]) -> Option<u32> {
        if arguments.len() != self.shape.len() {
            return None;
        }
        let mut cell = 0;
        for (&argument, &side) in arguments.iter().zip(&self.shape) {
            if argument >= side {
                return None;
            }
            cell = cell * side as usize + argument as usize;
        }
        Some(u32::from(self.values[cell]))
    }
}

fn quick(sides: &[u32], values: &[u8]) -> Option<Box<[u8; 256]>> {
    let mut table = Box::new([0; 256]);
    match *sides {
        [_] => table[..values.len()].copy_from_slice(values),
        [rows, columns] if rows <= 16 && columns <= 16 => {
            for (row, values) in values.chunks(columns as usize).enumerate() {
                table[row * 16..row * 16 + values.len()].copy_from_slice(values);
            }
        }
        _ => return None,
    }
    Some(table)
}

/// What is wrong with tables that were to be an algebra.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum AlgebraFault {
    /// There is not one size for each sort, or one is not from 1 to [`Algebra::LARGEST`].
    Sizes,
    /// There is not one table for each symbol.
    Count,
    /// The table of this symbol has not as many entries as its sorts demand.
    Entries(Symbol),
    /// The table of this symbol holds something that is no element.
    Range(Symbol),
}

impl fmt::Display for AlgebraFault {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            AlgebraFault::Sizes => write!(f, "the sizes do not fit the sorts"),
            AlgebraFault::Count => write!(f, "there is not one table for each symbol"),
            AlgebraFault::Entries(symbol) => {
                write!(f, "the table of symbol {} has a wrong size", symbol.0)
            }
            AlgebraFault::Range(symbol) => {
                write!(f, "the table of symbol {} leaves the sort", symbol.0)
            }
        }
    }
}

impl std::error::Error for AlgebraFault {}

/// A finite algebra: a size for every sort and a table for every symbol of a signature.
///
/// Invariant: the tables have the shapes that the signature and the sizes demand, and hold
/// elements only.
#[derive(Clone, Debug, PartialEq, Eq, Hash)]
pub struct Algebra {
    sizes: Box<[u32]>,
    tables: Box<[Table]>,
}

impl Algebra {
    /// The largest size of a sort.
    pub const LARGEST: u32 = 255;

    /// An algebra of these sizes and values, checked against the signature.
    pub fn new(
        signature: &Signature,
        sizes: Vec<u32>,
        values: Vec<Vec<u8>>,
    ) -> Result<Self, AlgebraFault> {
        let fits = |&size: &u32| (1..=Self::LARGEST).contains(&size);
        if sizes.len() != signature.sorts() || !sizes.iter().all(fits) {
            return Err(AlgebraFault::Sizes);
        }
        if values.len() != signature.symbols().len() {
            return Err(AlgebraFault::Count);
        }
        let mut tables = Vec::with_capacity(values.len());
        for (number, (values, shape)) in values.into_iter().zip(signature.symbols()).enumerate() {
            let symbol = Symbol(number as u32);
            let size = |sort: &Sort| sizes[sort.0 as usize];
            let sides: Box<[u32]> = shape.arguments.iter().map(size).collect();
            let product = |cells: usize, &side: &u32| cells.checked_mul(side as usize);
            if sides.iter().try_fold(1, product) != Some(values.len()) {
                return Err(AlgebraFault::Entries(symbol));
            }
            let range = size(&shape.result);
            if values.iter().any(|&value| u32::from(value) >= range) {
                return Err(AlgebraFault::Range(symbol));
            }
            tables.push(Table {
                quick: quick(&sides, &values),
                shape: sides,
                values: values.into_boxed_slice(),
            });
        }
        Ok(Algebra {
            sizes: sizes.into_boxed_slice(),
            tables: tables.into_boxed_slice(),
        })
    }

    /// The same algebra for a signature that has grown: one element for each new sort, and the
    /// value 0 everywhere for each new symbol. None if that would be too large.
    pub fn extended(&self, signature: &Signature) -> Option<Self> {
        let mut sizes = self.sizes.to_vec();
        sizes.resize(signature.sorts(), 1);
        let mut values: Vec<Vec<u8>> = self
            .tables
            .iter()
            .map(|table| table.values.to_vec())
            .collect();
        for shape in signature.symbols().iter().skip(values.len()) {
            let size = |sort: &Sort| sizes[sort.0 as usize] as usize;
            let cells = shape.arguments.iter().try_fold(1usize, |cells, sort| {
                cells
                    .checked_mul(size(sort))
                    .filter(|&cells| cells <= 1 << 24)
            });
            values.push(vec![0; cells?]);
        }
        Algebra::new(signature, sizes, values).ok()
    }

    /// The number of elements of each sort.
    pub fn sizes(&self) -> &[u32] {
        &self.sizes
    }

    /// The number of elements of a sort.
    pub fn size(&self, sort: Sort) -> u32 {
        self.sizes[sort.0 as usize]
    }

    /// The number of elements of all sorts together.
    pub fn total(&self) -> u32 {
        self.sizes.iter().sum()
    }

    /// The tables by symbol.
    pub fn tables(&self) -> &[Table] {
        &self.tables
    }

    /// The table of a symbol.
    pub fn table(&self, symbol: Symbol) -> &Table {
        &self.tables[symbol.index()]
    }

    /// The values of both sides under an assignment, which has an element of the right sort for
    /// each variable of the equation. Costs a look-up for each distinct subterm.
    pub fn evaluate(&self, equation: &Equation, assignment: &[u32]) -> [u32; 2] {
        debug_assert_eq!(assignment.len(), equation.variables().len());
        let mut registers = assignment.to_vec();
        for &step in equation.steps() {
            let table = self.table(step.symbol);
            let arguments = equation.arguments(step).iter().zip(&table.shape);
            let cell = arguments.fold(0, |cell, (&from, &side)| {
                cell * side as usize + registers[from as usize] as usize
            });
            registers.push(u32::from(table.values[cell]));
        }
        [registers[equation.left()], registers[equation.right()]]
    }
}

/// An algebra in which the laws hold and the sides of the claim differ.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Counterexample {
    /// The algebra.
    pub algebra: Algebra,
    /// The values of the claim's variables, in their order of first occurrence.
    pub assignment: Vec<u32>,
    /// The values of the two sides.
    pub values: [u32; 2],
    /// Is it known that none is smaller, counting the elements of all sorts together?
    pub smallest: bool,
}
