//! Names of the file as names of a theory.

use crate::language::quote_symbol;
use rustc_hash::FxHashSet;
use unicode_normalization::UnicodeNormalization;

/// Names are at most so many bytes long, with room for a number behind them.
const LONGEST: usize = 240;

/// The names that are taken.
#[derive(Default)]
pub(super) struct Taken(FxHashSet<String>);

impl Taken {
    /// Takes a name; gives the one that it became. Quotation marks and control characters become
    /// `_`, and a name that is taken gets the first of `_2`, `_3`, … that is free.
    pub fn take(&mut self, name: &str) -> String {
        let legal: String = name.nfc().map(legal).collect();
        let mut length = legal.len().min(LONGEST);
        while !legal.is_char_boundary(length) {
            length -= 1;
        }
        let base = &legal[..length];
        let mut made = base.to_owned();
        let mut number = 2;
        while !self.0.insert(made.clone()) {
            made = format!("{base}_{number}");
            number += 1;
        }
        made
    }
}

fn legal(c: char) -> char {
    if c == '"' || c.is_control() { '_' } else { c }
}

/// How a function of this name and number of arguments is written.
#[derive(Clone, Debug, PartialEq, Eq)]
pub(super) struct Written {
    /// The name, with quotes where it needs them.
    pub text: String,
    /// Does it stand between its arguments?
    pub is_infix: bool,
}

impl Written {
    /// A function of this name.
    pub fn new(name: &str, arguments: u32) -> Written {
        // Other signs could be read as something else, or as a remark.
        let harmless = |c: char| "+*/\\^&|<>-".contains(c);
        let is_infix = arguments == 2 && name.chars().all(harmless) && name != "->";
        let plain = is_infix || name.starts_with(|c: char| c.is_alphanumeric() || c == '_');
        let text = if plain {
            quote_symbol(name)
        } else {
            format!("\"{name}\"")
        };
        Written { text, is_infix }
    }

    /// The word that declares it, with the name and what follows.
    pub fn declaration(&self, arguments: u32) -> String {
        match arguments {
            2 if self.is_infix => format!("infix {} 40 none", self.text),
            _ => format!("function {} {arguments}", self.text),
        }
    }
}
