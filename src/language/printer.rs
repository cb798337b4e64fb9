//! Terms to text.
//!
//! Brackets stand only where reading would otherwise give another term. Nothing recurses; the cost
//! is linear in the text that is written, and the text can be limited, since a term that shares its
//! parts may be unimaginably long when written out.

use super::names::Names;
use super::words::{is_sign_char, quote_symbol};
use crate::term::{Bank, Head, Symbol, TermId};
use crate::theory::{Fixity, Side};
use rustc_hash::FxHashMap;
use std::ops::Range;
use unicode_width::UnicodeWidthChar;

/// A term as text.
#[derive(Clone, Debug, Default, PartialEq, Eq)]
pub struct Printed {
    /// The text.
    pub text: String,
    /// Where in the text the subterm stands that was asked for, brackets around it left out.
    pub highlight: Option<Range<usize>>,
    /// How many symbols and variables were left out because of the limit; 0 if the text is whole.
    pub missing: u64,
    breaks: Vec<Break>,
}

/// A blank at which the text may be broken, and how many brackets and calls it stands in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
struct Break {
    at: usize,
    depth: u32,
}

/// Writes terms of any bank whose symbols and variables `names` knows.
#[derive(Clone, Copy)]
pub struct Printer<'n> {
    names: &'n dyn Names,
    limit: usize,
}

/// What is around a subterm.
#[derive(Clone, Copy)]
enum Around {
    Nothing,
    LeftOf(u8, Side),
    RightOf(u8, Side),
    Prefix(u8),
    Postfix,
}

enum Task {
    Term {
        term: TermId,
        around: Around,
        /// The strength of the infix operator that follows.
        follow: Option<u8>,
        /// How far the subterm is on the way to the place that was asked for.
        way: Option<usize>,
    },
    Symbol(Symbol),
    Comma,
    Open,
    Close,
    Infix(Symbol),
    EndHighlight,
}

#[derive(Clone)]
struct Written {
    text: String,
    fixity: Fixity,
    is_sign: bool,
}

impl<'n> Printer<'n> {
    /// A printer without limit.
    pub fn new(names: &'n dyn Names) -> Self {
        Printer {
            names,
            limit: usize::MAX,
        }
    }

    /// A printer that stops after about so many bytes.
    #[must_use]
    pub fn limit(self, bytes: usize) -> Self {
        Printer {
            limit: bytes,
            ..self
        }
    }

    /// The text of a term; if it is cut, it ends with `…` and the number of symbols left out.
    pub fn term(&self, bank: &Bank, term: TermId) -> String {
        self.print(bank, term, None).text
    }

    /// The text of an equation with this sign between the sides.
    pub fn equation(&self, bank: &Bank, left: TermId, sign: &str, right: TermId) -> String {
        format!(
            "{} {sign} {}",
            self.term(bank, left),
            self.term(bank, right)
        )
    }

    /// The text of a term with the place of a subterm in it, for highlighting.
    pub fn print(&self, bank: &Bank, term: TermId, place: Option<&[u32]>) -> Printed {
        let mut writer = Writer {
            bank,
            names: self.names,
            place: place.unwrap_or_default(),
            known: FxHashMap::default(),
            tasks: Vec::new(),
            depth: 0,
            count: 0,
            last: Last::Nothing,
            pending: false,
            start: None,
            printed: Printed::default(),
        };
        writer.tasks.push(Task::Term {
            term,
            around: Around::Nothing,
            follow: None,
            way: place.map(|_| 0),
        });
        while let Some(task) = writer.tasks.pop() {
            if writer.printed.text.len() >= self.limit {
                let size = u64::from(bank.size(term));
                writer.printed.missing = size.saturating_sub(writer.count).max(1);
                let more = if bank.size(term) == u32::MAX {
                    "more than 4 billion".to_owned()
                } else {
                    writer.printed.missing.to_string()
                };
                writer.printed.text += &format!(" … ({more} symbols left out)");
                break;
            }
            writer.step(task);
        }
        writer.printed
    }
}

/// What was written last, to tell where a blank is needed.
#[derive(Clone, Copy, PartialEq, Eq)]
enum Last {
    Nothing,
    Name,
    Sign,
}

struct Writer<'a> {
    bank: &'a Bank,
    names: &'a dyn Names,
    place: &'a [u32],
    known: FxHashMap<Symbol, Written>,
    tasks: Vec<Task>,
    depth: u32,
    count: u64,
    last: Last,
    pending: bool,
    start: Option<usize>,
    printed: Printed,
}

impl Writer<'_> {
    fn step(&mut self, task: Task) {
        match task {
            Task::Term {
                term,
                around,
                follow,
                way,
            } => self.term(term, around, follow, way),
            Task::Symbol(symbol) => self.symbol(symbol),
            Task::Comma => {
                self.printed.text.push(',');
                self.blank();
            }
            Task::Open => {
                self.bare("(");
                self.depth += 1;
            }
            Task::Close => {
                self.depth -= 1;
                self.bare(")");
            }
            Task::Infix(symbol) => {
                self.printed.text.push(' ');
                self.last = Last::Nothing;
                self.symbol(symbol);
                self.blank();
            }
            Task::EndHighlight => {
                let end = self.printed.text.len();
                self.printed.highlight = self.start.map(|start| start..end);
            }
        }
    }

    fn term(&mut self, term: TermId, around: Around, follow: Option<u8>, way: Option<usize>) {
        let is_place = way == Some(self.place.len());
        let symbol = match self.bank.head(term) {
            Head::Symbol(symbol) => symbol,
            Head::Variable(variable) => {
                self.pending |= is_place;
                let name = quote_symbol(&self.names.variable(variable));
                let is_sign = name.starts_with(is_sign_char);
                self.piece(&name, is_sign);
                if is_place {
                    self.step(Task::EndHighlight);
                }
                return;
            }
        };
        let fixity = self.written(symbol).fixity;
        let brackets = needs_brackets(fixity, around, follow);
        if brackets {
            self.step(Task::Open);
            self.tasks.push(Task::Close);
        }
        if is_place {
            self.pending = true;
            self.tasks.push(Task::EndHighlight);
        }
        let follow = follow.filter(|_| !brackets);
        self.parts(term, symbol, fixity, follow, way);
    }

    /// Puts the parts of an application on the stack, the last one first.
    fn parts(
        &mut self,
        term: TermId,
        symbol: Symbol,
        fixity: Fixity,
        follow: Option<u8>,
        way: Option<usize>,
    ) {
        let arguments = self.bank.arguments(term);
        let place = self.place;
        let argument = |number: usize, around: Around, follow: Option<u8>| Task::Term {
            term: arguments[number],
            around,
            follow,
            way: way
                .filter(|way| place.get(*way) == Some(&(number as u32)))
                .map(|way| way + 1),
        };
        match (fixity, arguments.len()) {
            (Fixity::Infix { strength, side }, 2) => {
                let right = argument(1, Around::RightOf(strength, side), follow);
                let left = argument(0, Around::LeftOf(strength, side), Some(strength));
                self.tasks.extend([right, Task::Infix(symbol), left]);
            }
            (Fixity::Prefix { strength }, 1) => {
                let operand = argument(0, Around::Prefix(strength), follow);
                self.tasks.extend([operand, Task::Symbol(symbol)]);
            }
            (Fixity::Postfix { .. }, 1) => {
                let operand = argument(0, Around::Postfix, None);
                self.tasks.extend([Task::Symbol(symbol), operand]);
            }
            (_, 0) => self.tasks.push(Task::Symbol(symbol)),
            (_, count) => {
                self.tasks.push(Task::Close);
                for number in (0..count).rev() {
                    self.tasks.push(argument(number, Around::Nothing, None));
                    if number > 0 {
                        self.tasks.push(Task::Comma);
                    }
                }
                self.tasks.extend([Task::Open, Task::Symbol(symbol)]);
            }
        }
    }

    /// A symbol; named operators keep a blank to their argument, signs stand close to it.
    fn symbol(&mut self, symbol: Symbol) {
        let written = self.written(symbol).clone();
        match written.fixity {
            Fixity::Prefix { .. } if !written.is_sign => {
                self.piece(&written.text, false);
                self.bare(" ");
            }
            Fixity::Postfix { .. } if !written.is_sign => {
                self.bare(" ");
                self.piece(&written.text, false);
            }
            _ => self.piece(&written.text, written.is_sign),
        }
    }

    fn written(&mut self, symbol: Symbol) -> &Written {
        let names = self.names;
        self.known.entry(symbol).or_insert_with(|| {
            let name = names.symbol(symbol);
            let text = quote_symbol(&name.name);
            Written {
                is_sign: text.starts_with(is_sign_char),
                text,
                fixity: name.fixity,
            }
        })
    }

    /// A name or sign, with a blank before it if it would run into the one before.
    fn piece(&mut self, text: &str, is_sign: bool) {
        let kind = if is_sign { Last::Sign } else { Last::Name };
        if self.last == kind {
            self.printed.text.push(' ');
        }
        self.begin_highlight();
        self.count += 1;
        self.printed.text += text;
        self.last = kind;
    }

    fn bare(&mut self, text: &str) {
        if text != " " {
            self.begin_highlight();
        }
        self.printed.text += text;
        self.last = Last::Nothing;
    }

    /// A blank at which a line may be broken.
    fn blank(&mut self) {
        let at = self.printed.text.len();
        let depth = self.depth;
        self.printed.breaks.push(Break { at, depth });
        self.bare(" ");
    }

    fn begin_highlight(&mut self) {
        if std::mem::take(&mut self.pending) {
            self.start = Some(self.printed.text.len());
        }
    }
}

/// Would the text be read as another term without brackets?
fn needs_brackets(fixity: Fixity, around: Around, follow: Option<u8>) -> bool {
    match fixity {
        Fixity::Plain | Fixity::Postfix { .. } => false,
        Fixity::Prefix { strength } => {
            matches!(around, Around::Postfix) || follow.is_some_and(|follow| follow > strength)
        }
        Fixity::Infix { strength, side } => match around {
            Around::Nothing => false,
            Around::Postfix => true,
            Around::Prefix(other) => strength <= other,
            Around::LeftOf(other, at) => {
                strength < other || (strength == other && !(side == Side::Left && at == Side::Left))
            }
            Around::RightOf(other, at) => {
                strength < other
                    || (strength == other && !(side == Side::Right && at == Side::Right))
            }
        },
    }
}

/// The text in lines of `width` columns where that is possible, lines after the first indented,
/// with the place of the highlight in it. Lines are broken behind operators and commas, at the
/// outermost that fits, so that the lines read again give the same term.
pub fn wrap(printed: &Printed, width: usize, indent: usize) -> (String, Option<Range<usize>>) {
    let text = &printed.text;
    let mut wrapped = String::with_capacity(text.len());
    let mut cuts: Vec<usize> = Vec::new();
    let (mut start, mut room, mut next) = (0, width, 0);
    loop {
        let end = fitting(&text[start..], room).map_or(text.len(), |length| start + length);
        if end == text.len() {
            break;
        }
        let breaks = &printed.breaks[next..];
        let usable = |b: &&Break| !text[b.at + 1..].starts_with(['#', '?']);
        let within = breaks.iter().take_while(|b| b.at <= end).filter(usable);
        let best = within.min_by_key(|b| (b.depth, std::cmp::Reverse(b.at)));
        let Some(cut) = best.or_else(|| breaks.iter().find(usable)).copied() else {
            break;
        };
        wrapped += &text[start..cut.at];
        wrapped.push('\n');
        wrapped.extend(std::iter::repeat_n(' ', indent));
        cuts.push(cut.at);
        start = cut.at + 1;
        room = width.saturating_sub(indent).max(1);
        next += breaks.iter().take_while(|b| b.at <= cut.at).count();
    }
    wrapped += &text[start..];
    let moved = |at: usize| at + indent * cuts.iter().filter(|cut| **cut < at).count();
    let highlight = printed.highlight.clone();
    let highlight = highlight.map(|range| moved(range.start)..moved(range.end));
    (wrapped, highlight)
}

/// The length in bytes of what fits into so many columns; none if all does.
fn fitting(text: &str, room: usize) -> Option<usize> {
    let mut width = 0;
    for (at, c) in text.char_indices() {
        width += c.width().unwrap_or(0);
        if width > room {
            return Some(at);
        }
    }
    None
}
