//! Reading whole files.

use super::declare::{Context, statement};
use super::diagnostic::{Diagnostic, Fault, Source};
use super::split::next_piece;
use super::using::{Loader, MOST_MESSAGES, Uses};
use crate::theory::Theory;

/// Reads a theory. On error there are several messages, but not more than about twenty.
///
/// Costs time linear in the length of the text, apart from what `use` brings.
pub fn read_theory(
    source: &str,
    text: &str,
    loader: &dyn Loader,
) -> Result<Theory, Vec<Diagnostic>> {
    let source = Source { name: source, text };
    refuse_empty(source).map_err(|fault| vec![fault])?;
    let mut theory = Theory {
        source: source.name.to_owned(),
        ..Theory::default()
    };
    let mut faults = Vec::new();
    let (mut at, mut lines_before) = (0, 0);
    while let Some(piece) = next_piece(text, at, &theory.signature) {
        at = piece.range.end;
        let mut context = Context {
            loader,
            line: theory.document.next_id(),
            lines_before,
            typed: false,
            uses: Uses::default(),
        };
        match piece.interrupted {
            Some(fault) => faults.push(fault.at(source)),
            None => {
                let done = statement(&mut theory, source, piece.range.clone(), &mut context);
                // A name that is missing once is often missing many times: say so once.
                let fresh = |fault: &Diagnostic| {
                    !fault.message.ends_with("was never declared")
                        || faults.iter().all(|f| f.message != fault.message)
                };
                let more: Vec<_> = done.err().into_iter().flatten().filter(fresh).collect();
                faults.extend(more);
            }
        }
        let lines = &text[piece.range];
        lines_before += lines.bytes().filter(|byte| *byte == b'\n').count();
        theory.document.push(lines);
        if faults.len() >= MOST_MESSAGES && at < text.len() {
            let last = faults.pop().expect("there are many");
            faults.push(last.note("reading stopped here; there may be more errors"));
            break;
        }
    }
    if faults.is_empty() {
        Ok(theory)
    } else {
        Err(faults)
    }
}

/// A text without anything in it is no theory.
pub(crate) fn refuse_empty(source: Source<'_>) -> Result<(), Diagnostic> {
    let blank = |c: char| c.is_whitespace() || c == '\u{feff}';
    if !source.text.trim_matches(blank).is_empty() {
        return Ok(());
    }
    Err(Fault::new(0..0, "the file is empty")
        .label("nothing is declared here")
        .help("a theory begins with a line such as theory gauges")
        .at(source))
}

/// The bytes of a file as text. A byte order mark at the start stays, so that saving changes
/// nothing; reading skips it.
///
/// Not UTF-8, a NUL byte, or a file of 2 GiB or more are errors with line and column.
pub fn decode(source: &str, bytes: Vec<u8>) -> Result<String, Diagnostic> {
    if bytes.len() >= 1 << 31 {
        let help = "split it into several theories, and put them together with use";
        return Err(Diagnostic::about(
            source,
            "the file is larger than 2 GiB",
            help,
        ));
    }
    if let Some(at) = bytes.iter().position(|byte| *byte == 0) {
        let help = "this may not be a text file; a theory is text in UTF-8";
        return Err(at_byte(
            source,
            &bytes,
            at,
            "there is a NUL byte in the file",
            help,
        ));
    }
    String::from_utf8(bytes).map_err(|error| {
        let at = error.utf8_error().valid_up_to();
        let help = "save the file in UTF-8";
        at_byte(
            source,
            error.as_bytes(),
            at,
            "the file is not UTF-8 text",
            help,
        )
    })
}

fn at_byte(source: &str, bytes: &[u8], at: usize, message: &str, help: &str) -> Diagnostic {
    // Only the line around the byte is needed, with the number of lines before it.
    let start = bytes[..at].iter().rposition(|byte| *byte == b'\n');
    let start = start.map_or(0, |end| end + 1);
    let lines = bytes[..start].iter().filter(|byte| **byte == b'\n').count();
    let upto = bytes.len().min(at + 400);
    let before = String::from_utf8_lossy(&bytes[start..at]);
    let after = String::from_utf8_lossy(&bytes[at..upto]);
    let text = format!("{before}{after}");
    let width = after.chars().next().map_or(0, char::len_utf8);
    let mut made = Fault::new(before.len()..before.len() + width, message)
        .label("this byte")
        .help(help)
        .at(Source {
            name: source,
            text: &text,
        })
        .further_down(lines);
    made.span = at..at + 1;
    made
}
