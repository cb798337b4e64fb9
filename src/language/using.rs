//! Taking in another theory.

use super::declare::{Change, Statement, end, statement};
use super::diagnostic::{Diagnostic, Fault, Source};
use super::split::next_piece;
use super::term::shown;
use super::words::is_plain_law_name;
use std::ops::Range;

/// A theory that was found.
#[derive(Clone, Debug, PartialEq, Eq)]
pub struct Loaded {
    /// What messages call it, the same for the same theory: usually the path.
    pub source: String,
    /// Its text.
    pub text: String,
}

/// Finds theories for `use`.
pub trait Loader {
    /// The theory of this name or at this path, as the text called `from` means it; or, as a
    /// sentence without full stop, why there is none.
    fn load(&self, name: &str, from: &str) -> Result<Loaded, String>;
}

/// A loader that finds nothing.
#[derive(Clone, Copy, Debug, Default)]
pub struct NoLoader;

impl Loader for NoLoader {
    fn load(&self, name: &str, _from: &str) -> Result<Loaded, String> {
        Err(format!("there is no theory {name}"))
    }
}

/// The theories that are being read.
#[derive(Debug, Default)]
pub(crate) struct Uses {
    open: Vec<Used>,
}

/// A theory that is being read because another uses it.
#[derive(Debug)]
pub(crate) struct Used {
    /// A name for it that a law name can begin with.
    pub name: String,
    /// How many laws without a name it has had.
    pub unnamed: u32,
    source: String,
}

impl Uses {
    /// The theory that is being read, if it is a used one.
    pub fn current(&mut self) -> Option<&mut Used> {
        self.open.last_mut()
    }
}

const DEEPEST: usize = 32;

/// The most messages that are given at once.
pub(crate) const MOST_MESSAGES: usize = 20;

/// Takes in the theory that a `use` line names.
pub(crate) fn take(
    at: &mut Statement<'_, '_, '_>,
    rest: usize,
) -> Result<Vec<Change>, Vec<Diagnostic>> {
    let (name, span) = name(at, rest).map_err(|fault| vec![fault.at(at.source)])?;
    let loaded = match at.context.loader.load(&name, at.source.name) {
        Ok(loaded) => loaded,
        Err(why) => {
            let fault = Fault::new(span, why).label("cannot be used").help(
                "give the name of a theory, or the path of a file, in quotes if it has blanks",
            );
            return Err(vec![fault.at(at.source)]);
        }
    };
    if at.theory.used.contains(&loaded.source) {
        return Ok(vec![Change::Used(name)]);
    }
    let open = &at.context.uses.open;
    let circle =
        loaded.source == at.theory.source || open.iter().any(|used| used.source == loaded.source);
    if circle || open.len() >= DEEPEST {
        let fault = if circle {
            Fault::new(span, format!("{} is used by itself", shown(&name)))
                .label("this closes a circle")
                .help("take one of the use lines of the circle out")
        } else {
            Fault::new(
                span,
                format!("theories use each other more than {DEEPEST} deep"),
            )
            .help("put the declarations of some of them together")
        };
        return Err(vec![fault.at(at.source)]);
    }
    let backup = open.is_empty().then(|| at.theory.clone());
    let used = Used {
        name: prefix(&name),
        unnamed: 0,
        source: loaded.source.clone(),
    };
    at.context.uses.open.push(used);
    let faults = read_used(at, &loaded);
    at.context.uses.open.pop();
    if faults.is_empty() {
        at.theory.used.push(loaded.source);
        return Ok(vec![Change::Used(name)]);
    }
    if let Some(backup) = backup {
        *at.theory = backup;
    }
    let (line, _) = super::line_and_column(at.source.text, span.start);
    let by = format!("used by {}, line {line}", at.source.name);
    Err(faults.into_iter().map(|fault| fault.note(&by)).collect())
}

fn read_used(at: &mut Statement<'_, '_, '_>, loaded: &Loaded) -> Vec<Diagnostic> {
    let source = Source {
        name: &loaded.source,
        text: &loaded.text,
    };
    let mut faults = Vec::new();
    if let Err(fault) = super::read::refuse_empty(source) {
        return vec![fault];
    }
    let mut place = 0;
    while let Some(piece) = next_piece(source.text, place, &at.theory.signature) {
        place = piece.range.end;
        match piece.interrupted {
            Some(fault) => faults.push(fault.at(source)),
            None => {
                let done = statement(at.theory, source, piece.range, at.context);
                faults.extend(done.err().into_iter().flatten());
            }
        }
        if faults.len() >= MOST_MESSAGES {
            break;
        }
    }
    faults
}

fn name(at: &Statement<'_, '_, '_>, rest: usize) -> Result<(String, Range<usize>), Fault> {
    let mut lexer = at.lexer();
    lexer.back_to(rest);
    let (name, span) = match lexer.clone().path().0 {
        path if path.starts_with('"') => {
            let quoted = lexer.law_name()?;
            quoted.expect("a quotation mark begins a name in quotes")
        }
        "" => {
            let span = lexer.next()?.span;
            return Err(Fault::new(span, "the name of a theory is missing")
                .help("write use NAME, or use with the path of a file"));
        }
        _ => {
            let (path, span) = lexer.path();
            (path.to_owned(), span)
        }
    };
    end(&mut lexer)?;
    Ok((name, span))
}

/// A law name to begin others with: the last part of a path, without its ending.
fn prefix(name: &str) -> String {
    let last = name.rsplit(['/', '\\']).next().unwrap_or(name);
    let stem = last.split('.').next().unwrap_or(last);
    if is_plain_law_name(stem) {
        stem.to_owned()
    } else {
        "used".to_owned()
    }
}
