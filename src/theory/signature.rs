//! What the names and signs of a theory mean.

use crate::term::{Sort, Symbol, Variable};
use rustc_hash::FxHashMap;

/// On which side an infix operator collects operands of its own strength.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Side {
    /// `x * y * z` is `(x * y) * z`.
    Left,
    /// `x * y * z` is `x * (y * z)`.
    Right,
    /// `x * y * z` needs brackets.
    None,
}

/// How a symbol is written.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Fixity {
    /// A constant `e`, or a function `f(x, y)`.
    Plain,
    /// Between its two arguments.
    Infix {
        /// From 0 to 99; the stronger operator takes its operands first.
        strength: u8,
        /// What a chain of it means.
        side: Side,
    },
    /// Before its argument.
    Prefix {
        /// From 0 to 99; it takes everything to its right that binds more strongly.
        strength: u8,
    },
    /// Behind its argument, where it binds before anything else.
    Postfix {
        /// From 0 to 99; kept as it was stated.
        strength: u8,
    },
}

/// A symbol with its name, shape and way of writing.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct SymbolDeclaration {
    /// Its name, without quotes.
    pub name: String,
    /// How it is written.
    pub fixity: Fixity,
    /// The sorts of its arguments.
    pub arguments: Vec<Sort>,
    /// The sort of its result.
    pub result: Sort,
}

/// A variable with its name and sort.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct VariableDeclaration {
    /// Its name, without quotes.
    pub name: String,
    /// Its sort.
    pub sort: Sort,
    /// Was it made up for a law stated by a property word? Such a variable cannot be typed, and
    /// makes way, by taking another name, for a declaration of its name.
    pub implicit: bool,
    /// Was it brought by `use`? Then it may be declared again, alike.
    pub borrowed: bool,
}

/// All that one name can mean. At most one of `variable` and the symbols is present, except that
/// a sign may be prefix and infix.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub struct Meaning {
    /// The variable, by its number in [`Signature::variables`].
    pub variable: Option<u32>,
    /// The prefix operator.
    pub prefix: Option<Symbol>,
    /// The constant, function, infix or postfix operator.
    pub symbol: Option<Symbol>,
}

/// The signature has no room for another sort, symbol or variable.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub struct SignatureFull;

/// Sorts, symbols and variables.
///
/// `Symbol(n)` is the `n`-th of `symbols`; a variable's number in equations of the theory is its
/// place in `variables`. Nothing is ever removed, so that these numbers stay.
#[derive(Clone, Debug)]
pub struct Signature {
    sorts: Vec<String>,
    symbols: Vec<SymbolDeclaration>,
    variables: Vec<VariableDeclaration>,
    meanings: FxHashMap<String, Meaning>,
    longest: usize,
    has_hash: bool,
    has_implicit: bool,
    /// The equality by which a question with unknowns is asked.
    equality: Option<Symbol>,
}

impl Default for Signature {
    fn default() -> Self {
        Signature {
            sorts: vec![String::new()],
            symbols: Vec::new(),
            variables: Vec::new(),
            meanings: FxHashMap::default(),
            longest: 0,
            has_hash: false,
            has_implicit: false,
            equality: None,
        }
    }
}

impl Signature {
    /// The names of the sorts; the single name "" while none is declared.
    pub fn sorts(&self) -> &[String] {
        &self.sorts
    }

    /// All symbols.
    pub fn symbols(&self) -> &[SymbolDeclaration] {
        &self.symbols
    }

    /// All variables.
    pub fn variables(&self) -> &[VariableDeclaration] {
        &self.variables
    }

    /// One symbol, if the signature has it.
    pub fn symbol(&self, symbol: Symbol) -> Option<&SymbolDeclaration> {
        self.symbols.get(symbol.index())
    }

    /// The variable with this number, as equations of the theory have it.
    pub fn variable(&self, index: u32) -> Variable {
        Variable {
            index,
            sort: self.variables[index as usize].sort,
        }
    }

    /// Are there named sorts?
    pub fn has_sorts(&self) -> bool {
        !(self.sorts.len() == 1 && self.sorts[0].is_empty())
    }

    /// Is there nothing yet that has a sort?
    pub fn is_empty(&self) -> bool {
        self.symbols.is_empty() && self.variables.is_empty()
    }

    /// The sort of this name.
    pub fn sort_named(&self, name: &str) -> Option<Sort> {
        let place = self.sorts.iter().position(|sort| sort == name)?;
        Some(Sort(place as u16))
    }

    /// The name of a sort; "" for the unnamed one.
    pub fn sort_name(&self, sort: Sort) -> &str {
        self.sorts
            .get(sort.0 as usize)
            .map_or("", |name| name.as_str())
    }

    /// What a name means. Implicit variables have no meaning in text.
    pub fn meaning(&self, name: &str) -> Option<Meaning> {
        self.meanings.get(name).copied()
    }

    /// Is the name taken, be it by an implicit variable?
    pub fn is_taken(&self, name: &str) -> bool {
        self.meanings.contains_key(name)
            || self.variables.iter().any(|variable| variable.name == name)
    }

    /// All names that mean something, in no particular order.
    pub fn names(&self) -> impl Iterator<Item = &str> {
        self.meanings.keys().map(String::as_str)
    }

    /// The length in bytes of the longest sign that means something.
    pub fn longest_sign(&self) -> usize {
        self.longest
    }

    /// Does some name hold a `#`, which else starts a remark?
    pub fn has_hash(&self) -> bool {
        self.has_hash
    }

    /// Adds a sort; the first one takes the place of the unnamed sort, which nothing may have yet.
    pub fn add_sort(&mut self, name: &str) -> Result<Sort, SignatureFull> {
        if !self.has_sorts() {
            debug_assert!(self.is_empty());
            self.sorts[0] = name.to_owned();
            return Ok(Sort(0));
        }
        if self.sorts.len() >= Sort::LIMIT {
            return Err(SignatureFull);
        }
        self.sorts.push(name.to_owned());
        Ok(Sort(self.sorts.len() as u16 - 1))
    }

    /// The symbol that was added as the equality by which a question with unknowns is asked.
    pub(crate) fn equality(&self) -> Option<Symbol> {
        self.equality
    }

    /// Says which symbol is the equality by which a question with unknowns is asked.
    pub(crate) fn set_equality(&mut self, equality: Symbol) {
        self.equality = Some(equality);
    }

    /// Adds a sort beside those there are, the unnamed one included. Its name must be one that no
    /// text can have.
    pub(crate) fn add_inner_sort(&mut self, name: &str) -> Result<Sort, SignatureFull> {
        if self.sorts.len() >= Sort::LIMIT {
            return Err(SignatureFull);
        }
        self.sorts.push(name.to_owned());
        Ok(Sort(self.sorts.len() as u16 - 1))
    }

    /// Adds a symbol, whose name must be free for its fixity.
    pub fn add_symbol(&mut self, declaration: SymbolDeclaration) -> Result<Symbol, SignatureFull> {
        if self.symbols.len() >= (1 << 30) {
            return Err(SignatureFull);
        }
        let symbol = Symbol(self.symbols.len() as u32);
        self.make_way(&declaration.name);
        let meaning = self.enter(&declaration.name);
        match declaration.fixity {
            Fixity::Prefix { .. } => meaning.prefix = Some(symbol),
            _ => meaning.symbol = Some(symbol),
        }
        self.symbols.push(declaration);
        Ok(symbol)
    }

    /// Adds a variable, whose name must be free.
    pub fn add_variable(
        &mut self,
        name: &str,
        sort: Sort,
        implicit: bool,
    ) -> Result<u32, SignatureFull> {
        if !implicit {
            self.make_way(name);
        }
        let index = self.variables.len() as u32;
        if index >= Variable::LIMIT {
            return Err(SignatureFull);
        }
        self.has_implicit |= implicit;
        if !implicit {
            self.enter(name).variable = Some(index);
        }
        self.variables.push(VariableDeclaration {
            name: name.to_owned(),
            sort,
            implicit,
            borrowed: false,
        });
        Ok(index)
    }

    /// Says that a variable was brought by `use`, or that it is now the theory's own.
    pub fn set_borrowed(&mut self, index: u32, borrowed: bool) {
        self.variables[index as usize].borrowed = borrowed;
    }

    /// A name `x1`, `x2`, … that is taken neither here nor by `others`, from this number on.
    pub fn fresh_name(&self, from: &mut u32, others: impl Fn(&str) -> bool) -> String {
        loop {
            let name = format!("x{from}");
            *from += 1;
            if !self.is_taken(&name) && !others(&name) {
                return name;
            }
        }
    }

    /// Renames the implicit variable of this name, if there is one.
    fn make_way(&mut self, name: &str) {
        if !self.has_implicit {
            return;
        }
        let same = |v: &VariableDeclaration| v.implicit && v.name == name;
        if let Some(place) = self.variables.iter().position(same) {
            let fresh = self.fresh_name(&mut 1, |other| other == name);
            self.variables[place].name = fresh;
        }
    }

    fn enter(&mut self, name: &str) -> &mut Meaning {
        if !name.starts_with(|c: char| c.is_alphanumeric() || c == '_') {
            self.longest = self.longest.max(name.len());
        }
        self.has_hash |= name.contains('#');
        self.meanings.entry(name.to_owned()).or_default()
    }
}
