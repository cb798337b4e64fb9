//! Where text goes, how wide that is, and whether it may have colours.

use owo_colors::{OwoColorize, Style};
use std::io::{self, IsTerminal, Write};

/// The two streams of the program.
pub struct Screen {
    plain: bool,
    colors: bool,
    out_is_terminal: bool,
    err_is_terminal: bool,
    /// Problems go to the same place as results: somebody sits in front of it.
    interactive: bool,
    /// Why no more can be written.
    broken: Option<io::Error>,
}

/// How text is to look.
#[derive(Clone, Copy, Debug)]
pub struct Look {
    /// With colours?
    pub color: bool,
    /// How many columns there are.
    pub width: usize,
}

/// What a piece of text is, for its colour. Colours only repeat what the words say.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Ink {
    /// The word `equal`, or that something is as it should be.
    Good,
    /// The word `not equal`, or that something is otherwise than claimed.
    Other,
    /// The word `undecided`.
    Open,
    /// What stands beside the matter: times, numbers of answers.
    Quiet,
    /// The subterm that a step has changed.
    Changed,
    /// A heading.
    Strong,
}

impl Look {
    /// The text in this ink.
    pub fn ink(self, ink: Ink, text: &str) -> String {
        if !self.color || text.is_empty() {
            return text.to_owned();
        }
        let style = match ink {
            Ink::Good => Style::new().green().bold(),
            Ink::Other => Style::new().magenta().bold(),
            Ink::Open => Style::new().yellow().bold(),
            Ink::Quiet => Style::new().dimmed(),
            Ink::Changed => Style::new().underline(),
            Ink::Strong => Style::new().bold(),
        };
        text.style(style).to_string()
    }
}

/// The width where there is no terminal to ask.
const WIDTH: usize = 80;

impl Screen {
    /// Looks at what the streams are. `plain` is without colours and live line.
    pub fn new(plain: bool) -> Screen {
        let set = |name| std::env::var_os(name).is_some_and(|value| !value.is_empty());
        let dumb = std::env::var_os("TERM").is_some_and(|term| term == "dumb");
        Screen {
            plain,
            colors: !plain && !set("NO_COLOR") && !dumb,
            out_is_terminal: io::stdout().is_terminal(),
            err_is_terminal: io::stderr().is_terminal(),
            interactive: false,
            broken: None,
        }
    }

    /// From now on somebody sits in front of it.
    pub fn set_interactive(&mut self) {
        self.interactive = true;
    }

    /// How results are to look.
    pub fn look(&self) -> Look {
        Look {
            color: self.colors && self.out_is_terminal,
            width: self.width(self.out_is_terminal),
        }
    }

    /// How problems are to look.
    pub fn problem_look(&self) -> Look {
        if self.interactive {
            return self.look();
        }
        Look {
            color: self.colors && self.err_is_terminal,
            width: self.width(self.err_is_terminal),
        }
    }

    fn width(&self, is_terminal: bool) -> usize {
        if !is_terminal {
            return WIDTH;
        }
        terminal_size::terminal_size().map_or(WIDTH, |(columns, _)| usize::from(columns.0).max(1))
    }

    /// Is there a terminal for a line that is drawn again and again?
    pub fn has_live_line(&self) -> bool {
        !self.plain && self.out_is_terminal && self.err_is_terminal
    }

    /// Prints a result, as it is.
    pub fn out(&mut self, text: &str) {
        if self.broken.is_some() {
            return;
        }
        let mut stream = io::stdout().lock();
        let written = stream.write_all(text.as_bytes());
        if let Err(error) = written.and_then(|()| stream.flush()) {
            self.broken = Some(error);
        }
    }

    /// Prints a problem, as it is.
    pub fn problem(&mut self, text: &str) {
        if self.interactive {
            self.out(text);
            return;
        }
        // Nobody is left to be told when this cannot be written.
        let _ = io::stderr().lock().write_all(text.as_bytes());
    }

    /// Why no more can be written, if that is so.
    pub fn broken(&self) -> Option<&io::Error> {
        self.broken.as_ref()
    }
}
