//! Text to theories and terms, and back.
//!
//! [`read_theory`] reads a file, [`Theory::declare`](crate::theory::Theory::declare) one typed
//! declaration, [`parse_question`] a term or an equation; [`Printer`] writes terms, and
//! [`Diagnostic`] is what every message about text is.

mod declare;
mod derived;
mod diagnostic;
mod edit;
mod find;
mod laws;
mod lexer;
mod names;
mod order;
mod printer;
mod property;
mod question;
mod read;
mod split;
mod symbols;
mod term;
mod unknown;
mod using;
mod words;

pub use declare::Change;
pub use derived::{print_derived, set_derived};
pub use diagnostic::{Diagnostic, Fault, FaultParts, Message, Source, line_and_column, visible};
pub use edit::DropFault;
pub use find::{Find, parse_find};
pub use names::{Names, RuleNames, SymbolName, TheoryNames};
pub use order::{print_order, set_order};
pub use printer::{Printed, Printer, wrap};
pub use property::{PROPERTIES, PropertyOperand, PropertyRow};
pub use question::{Question, law_name, parse_question, parse_question_prefix};
pub use read::{decode, read_theory};
pub use split::is_open;
pub use symbols::print_symbol;
pub use using::{Loaded, Loader, NoLoader};
pub use words::{
    DECLARATIONS, RESERVED, first_word, is_declaration, is_reserved, nearest, quote_law,
    quote_symbol,
};
