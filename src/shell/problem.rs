//! What went wrong, and how it is told.

use super::layout::{fold, fold_hanging};
use super::screen::{Ink, Look};
use crate::language::{Diagnostic, DropFault, quote_law};
use crate::order::OrderProblem;
use crate::rewrite::Stopped;
use crate::session::{ChangeFault, NoOrder, Obstacle, OpenFault, SaveFault, SessionFault};
use crate::term::Symbol;
use crate::theory::Signature;
use std::path::Path;

/// Why a line was not carried out. The session is as before and goes on.
#[derive(Debug)]
pub enum Problem {
    /// Something is wrong with the text.
    Text(Vec<Diagnostic>),
    /// Something else is in the way.
    Said {
        /// What, as a sentence without full stop.
        message: String,
        /// What to do, one remedy each.
        help: Vec<String>,
    },
}

impl Problem {
    /// Something that is not about a place in the text.
    pub fn said(message: impl Into<String>, help: impl Into<String>) -> Problem {
        Problem::Said {
            message: message.into(),
            help: vec![help.into()],
        }
    }

    /// As it is printed.
    pub fn render(&self, look: Look) -> String {
        match self {
            Problem::Text(faults) => faults
                .iter()
                .map(|fault| fault.render(look.color, look.width))
                .collect(),
            Problem::Said { message, help } => {
                let text = fold_hanging(&format!("Error: {message}"), look.width, 0, 2);
                let mut text = text.replacen("Error:", &look.ink(Ink::Strong, "Error:"), 1);
                for help in help {
                    text += &fold_hanging(&format!("Help: {help}"), look.width, 2, 8);
                }
                text
            }
        }
    }

    /// Why a change was not made, in a theory with this signature.
    pub fn change(fault: ChangeFault, signature: &Signature) -> Problem {
        match fault {
            ChangeFault::Text(faults) => Problem::Text(faults),
            ChangeFault::Order(fault) => Problem::order(&fault, signature),
            ChangeFault::Drop(DropFault::Unknown) => {
                Problem::said(DropFault::Unknown.to_string(), "laws and claims list them")
            }
            ChangeFault::Drop(fault) => {
                Problem::said(fault.to_string(), "laws shows where each law comes from")
            }
        }
    }

    /// Why work was not begun or finished.
    pub fn session(fault: SessionFault, signature: &Signature) -> Problem {
        match fault {
            SessionFault::NoOrder(fault) => Problem::order(&fault, signature),
            SessionFault::Stopped(stopped) => {
                let message = format!("{} before there was anything to show", stop_text(stopped));
                Problem::said(message, "what was found is kept; say it again to go on")
            }
        }
    }

    /// Why there is no usable order.
    fn order(fault: &NoOrder, signature: &Signature) -> Problem {
        match fault {
            NoOrder::Directed { rule, because } => {
                let reason = match because {
                    Obstacle::OpenVariable(variable) => format!(
                        "{variable} stands on its right side only, so that the result could be anything"
                    ),
                    Obstacle::Permutation => {
                        "it could be applied to its own result again and again".to_owned()
                    }
                    Obstacle::Alone => {
                        "no order was found in which its right side is smaller than its left side"
                            .to_owned()
                    }
                    Obstacle::With(names) => format!(
                        "in no order that was found it decreases together with: {}",
                        quoted(names)
                    ),
                };
                let rule = quote_law(rule);
                Problem::said(
                    format!("rule {rule} cannot be used from left to right: {reason}"),
                    "make a law of it, which is used in both directions, or turn it round",
                )
            }
            NoOrder::Misdirected(names) => Problem::said(
                format!(
                    "in this order the right side is not smaller than the left side in: {}",
                    quoted(names)
                ),
                "change the precedence or the weights, or make laws of these rules; help order",
            ),
            NoOrder::Stated(problem) => Problem::said(
                format!(
                    "this is no reduction order: {}",
                    order_problem(*problem, signature)
                ),
                "change the line that states it, or leave the choice to the program with order auto",
            ),
        }
    }

    /// Why a theory was not opened.
    pub fn open(fault: OpenFault) -> Problem {
        match fault {
            OpenFault::Missing { name, close } => {
                let mut help = Vec::new();
                if !close.is_empty() {
                    help.push(format!("did you mean {}?", close.join(" or ")));
                }
                help.push(
                    "in the shell, theories lists those that can be opened by name".to_owned(),
                );
                let message = format!("there is no theory and no file {name}");
                Problem::Said { message, help }
            }
            OpenFault::Folder(path) => Problem::said(
                format!("{} is a folder, not a theory", path.display()),
                "give the name of a file in it",
            ),
            OpenFault::System(path, error) => Problem::system("read", &path, &error),
            OpenFault::Text(faults) => Problem::Text(faults),
        }
    }

    /// Why a theory was not saved.
    pub fn save(fault: SaveFault) -> Problem {
        match fault {
            SaveFault::NoPath => Problem::said(
                "this theory has no file of its own yet",
                "give it one, such as save gauges.theory",
            ),
            SaveFault::System(path, error) => {
                let Problem::Said { message, .. } = Problem::system("write", &path, &error) else {
                    unreachable!("it is made as such")
                };
                Problem::said(
                    message,
                    "nothing is lost: save FILE keeps the theory in another place",
                )
            }
        }
    }

    /// The system does not let a file be read or written.
    pub fn system(what: &str, path: &Path, error: &std::io::Error) -> Problem {
        use std::io::ErrorKind;
        let name = path.display();
        let (why, help) = match error.kind() {
            ErrorKind::NotFound if what == "read" => (
                "there is no such file".to_owned(),
                "look at the spelling and at the folder",
            ),
            ErrorKind::NotFound => (
                "there is no such folder".to_owned(),
                "make the folder first, or take another",
            ),
            ErrorKind::PermissionDenied | ErrorKind::ReadOnlyFilesystem => (
                "you may not do that here".to_owned(),
                "take another place, or change the rights",
            ),
            ErrorKind::StorageFull => (
                "the disk is full".to_owned(),
                "make room, or take another place",
            ),
            ErrorKind::IsADirectory => {
                ("it is a folder".to_owned(), "give the name of a file in it")
            }
            _ => (plain_error(error), "look at the file and its folder"),
        };
        Problem::said(format!("{name} cannot be {}: {why}", past(what)), help)
    }

    /// The exit status for it.
    pub fn status(&self) -> u8 {
        super::status::INPUT
    }
}

/// Names of laws, as they are typed.
fn quoted(names: &[String]) -> String {
    let quoted: Vec<String> = names.iter().map(|name| quote_law(name)).collect();
    quoted.join(", ")
}

fn past(what: &str) -> &str {
    if what == "write" { "written" } else { what }
}

/// The system's own words, without its number.
pub fn plain_error(error: &std::io::Error) -> String {
    let text = error.to_string();
    let end = text.find(" (os error").unwrap_or(text.len());
    let mut chars = text[..end].chars();
    let first = chars.next().into_iter().flat_map(char::to_lowercase);
    first.chain(chars).collect()
}

/// Why work ended, as the end of a sentence.
pub fn stop_text(stopped: Stopped) -> &'static str {
    match stopped {
        Stopped::Interrupted => "stopped by Ctrl-C",
        Stopped::Time => "the time was used up",
        Stopped::Memory => "the memory was used up",
    }
}

fn order_problem(problem: OrderProblem, signature: &Signature) -> String {
    let name = |symbol: Symbol| {
        signature
            .symbol(symbol)
            .map_or_else(|| "a symbol".to_owned(), |known| known.name.clone())
    };
    match problem {
        OrderProblem::UnknownSymbol(symbol) => format!("{} is not known", name(symbol)),
        OrderProblem::NamedTwice(symbol) => format!("{} is named twice", name(symbol)),
        OrderProblem::WeighedTwice(symbol) => format!("{} has two weights", name(symbol)),
        OrderProblem::VariableWithoutWeight => "variables must weigh at least 1".to_owned(),
        OrderProblem::LightConstant {
            constant,
            weight,
            variable_weight,
        } => format!(
            "the constant {} weighs {weight}, less than a variable ({variable_weight})",
            name(constant)
        ),
        OrderProblem::WeightlessNotGreatest { symbol, greatest } => format!(
            "{} takes one argument and weighs 0, so it must be the greatest in the precedence, which {} is",
            name(symbol),
            name(greatest)
        ),
    }
}

/// What to say when the program itself is at fault.
pub const OWN_FAULT: &str = "This is a fault of the program, not of what you typed. Please report it, with the line that led to it.";

/// From now on a panic says one plain sentence, and nothing of the inside but the place.
pub fn install_panic_sentence() {
    std::panic::set_hook(Box::new(|panic| {
        use std::io::Write;
        let payload = panic.payload();
        let what = payload
            .downcast_ref::<&str>()
            .map(|text| (*text).to_owned())
            .or_else(|| payload.downcast_ref::<String>().cloned())
            .unwrap_or_else(|| "unknown".to_owned());
        let place = panic
            .location()
            .map_or_else(String::new, |at| format!(" ({at})"));
        let text = format!("{OWN_FAULT}\nWhat happened: {what}{place}");
        // Nobody is left to be told when this cannot be written.
        let _ = std::io::stderr().write_all(fold(&text, 80, 0).as_bytes());
    }));
}
