//! Taking laws and claims out of a theory and its text.

use super::lexer::{Kind, Lexer};
use super::words::quote_law;
use crate::theory::{Claim, Law, LawKind, LineId, Theory};

/// Why a law or claim cannot be dropped.
#[derive(Clone, Debug, PartialEq, Eq)]
pub enum DropFault {
    /// There is none of this name.
    Unknown,
    /// It comes from another theory, whose name this is.
    Borrowed(String),
}

impl std::fmt::Display for DropFault {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            DropFault::Unknown => write!(f, "there is no law or claim of this name"),
            DropFault::Borrowed(name) => {
                write!(
                    f,
                    "it comes with use {name}; drop it there, or copy the other laws"
                )
            }
        }
    }
}

impl Theory {
    /// Takes a law out, and its part of the text. Laws without a name that stand further down get
    /// theirs written out, so that they keep it.
    pub fn drop_law(&mut self, name: &str) -> Result<Law, DropFault> {
        let place = self.laws.iter().position(|law| law.name == name);
        let place = place.ok_or(DropFault::Unknown)?;
        if let Some(from) = &self.laws[place].from {
            return Err(DropFault::Borrowed(from.clone()));
        }
        let law = self.laws.remove(place);
        self.names.remove(name);
        if law.property.is_some() {
            self.rewrite_properties(law.line);
        } else if law.kind == LawKind::Definition {
            self.keep_symbol(&law);
        } else {
            self.document.remove(law.line);
        }
        if law.unnamed {
            self.write_out_names(place);
        }
        Ok(law)
    }

    /// Takes a claim out, and its line.
    pub fn drop_claim(&mut self, name: &str) -> Result<(), DropFault> {
        let named = |claim: &Claim| claim.name.as_deref() == Some(name);
        let place = self.claims.iter().position(named);
        let claim = self.claims.remove(place.ok_or(DropFault::Unknown)?);
        self.names.remove(name);
        self.document.remove(claim.line);
        Ok(())
    }

    fn rewrite_properties(&mut self, line: LineId) {
        let rest = self.laws.iter().filter(|law| law.line == line);
        let rest: Vec<_> = rest.filter_map(|law| law.property.as_ref()).collect();
        match rest.first() {
            None => self.document.remove(line),
            Some(first) => {
                let words: Vec<&str> = rest.iter().map(|p| p.words.as_str()).collect();
                let text = format!("law {} is {}", first.operator, words.join(" "));
                self.document.replace(line, &text);
            }
        }
    }

    /// A definition without its law is a declaration of the symbol.
    fn keep_symbol(&mut self, law: &Law) {
        let Some(symbol) = self.bank.as_symbol(law.left) else {
            return;
        };
        let text = super::symbols::print_symbol(&self.signature, symbol);
        self.document.replace(law.line, &text);
    }

    /// Writes the names of laws without one into their lines, from this law on.
    fn write_out_names(&mut self, from: usize) {
        for law in &mut self.laws[from..] {
            if !law.unnamed || law.from.is_some() {
                continue;
            }
            law.unnamed = false;
            let Some(line) = self.document.line(law.line) else {
                continue;
            };
            let mut lexer = Lexer::new(&line.text, 0..line.text.len(), &self.signature);
            if let Ok(word) = lexer.next()
                && matches!(word.kind, Kind::Reserved(_))
            {
                let (before, after) = line.text.split_at(word.span.end);
                let text = format!("{before} {}:{after}", quote_law(&law.name));
                let text = text.trim_end_matches(['\r', '\n']).to_owned();
                self.document.replace(law.line, &text);
            }
        }
    }
}
