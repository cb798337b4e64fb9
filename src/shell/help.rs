//! The pages of help: one for each command, declaration and topic.

mod declarations;
mod topics;

use super::commands::{self, Command, Group};
use super::layout::{fold, pad, table};
use super::line::Line;
use super::problem::Problem;
use super::screen::{Ink, Look};
use crate::language::{Fault, nearest};
use std::ops::Range;

pub use declarations::DECLARATION_PAGES;
pub use topics::TOPICS;

/// A page about something that is not a command.
pub struct Page {
    /// The word that it is about.
    pub word: &'static str,
    /// Its forms, each with its meaning in a few words; the first is the main one.
    pub forms: &'static [(&'static str, &'static str)],
    /// What else there is to know.
    pub page: &'static str,
    /// Lines that can be typed as they stand into a new shell.
    pub example: &'static str,
}

/// Everything, one line each.
pub fn overview(look: Look) -> String {
    let mut text = String::new();
    let mut group = |title: &str, rows: Vec<(&str, &str)>| {
        text += &format!("{}\n", look.ink(Ink::Strong, title));
        let rows: Vec<Vec<String>> = rows
            .into_iter()
            .map(|(form, meaning)| vec![format!("  {}", pad(form, 24)), meaning.to_owned()])
            .collect();
        text += &table(&rows, look);
        text.push('\n');
    };
    let declarations = DECLARATION_PAGES.iter().map(|page| page.forms[0]);
    group("Saying what there is", declarations.collect());
    let questions = topics::QUESTIONS.forms.iter().copied();
    group(
        "Asking",
        questions.chain(main_forms(Group::Asking)).collect(),
    );
    group("Working", main_forms(Group::Working).collect());
    group("Keeping", main_forms(Group::Keeping).collect());
    text + &fold(
        "help WORD tells more, with an example: help law, help complete, help names. Tab completes, \
         the arrow keys bring back what was typed, Ctrl-C stops, Ctrl-D leaves.",
        look.width,
        0,
    )
}

fn main_forms(group: Group) -> impl Iterator<Item = (&'static str, &'static str)> {
    let commands = commands::ALL
        .iter()
        .filter(move |command| command.group == group);
    commands.map(|command| command.forms[0])
}

/// The page about a word, if there is one.
pub fn page(word: &str, look: Look) -> Option<String> {
    if let Some(Command {
        forms,
        page,
        example,
        ..
    }) = commands::named(word)
    {
        return Some(lay_out(forms, page, example, look));
    }
    let mut pages = DECLARATION_PAGES.iter().chain(TOPICS);
    let found = pages.find(|page| page.word == word)?;
    let mut text = lay_out(found.forms, found.page, found.example, look);
    if word == "properties" {
        text += &topics::property_list(look);
    }
    Some(text)
}

fn lay_out(forms: &[(&str, &str)], page: &str, example: &str, look: Look) -> String {
    let row = |(form, meaning): &(&str, &str)| vec![(*form).to_owned(), (*meaning).to_owned()];
    let rows: Vec<Vec<String>> = forms.iter().map(row).collect();
    let mut text = table(&rows, look);
    text.push('\n');
    text += &fold(page, look.width, 0);
    if !example.is_empty() {
        text += &format!("\n{}\n", look.ink(Ink::Strong, "Example"));
        for line in example.lines() {
            text += &format!("    {line}\n");
        }
    }
    text
}

/// There is no page about a word.
pub fn unknown(word: &str, range: Range<usize>, line: &Line<'_>) -> Problem {
    if let Some(later) = super::words::not_yet(word, &line.from(range.end)) {
        return later;
    }
    let mut fault = Fault::new(range, format!("there is no help on {word}"));
    if let Some(near) = nearest(word, all_words().into_iter()) {
        fault = fault.help(format!("did you mean help {near}?"));
    }
    line.problem(fault.help("help alone lists everything"))
}

/// All words that help knows.
pub fn all_words() -> Vec<&'static str> {
    let commands = commands::ALL.iter().map(|command| command.word);
    let pages = DECLARATION_PAGES.iter().chain(TOPICS).map(|page| page.word);
    commands.chain(pages).collect()
}

/// All forms of lines, for hints.
pub fn all_forms() -> impl Iterator<Item = &'static str> {
    let commands = commands::ALL.iter().flat_map(|command| command.forms);
    let declarations = DECLARATION_PAGES.iter().flat_map(|page| page.forms);
    commands.chain(declarations).map(|(form, _)| *form)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::DECLARATIONS;

    #[test]
    fn every_declaration_has_a_page() {
        let look = Look {
            color: false,
            width: 80,
        };
        for word in DECLARATIONS {
            assert!(page(word, look).is_some(), "{word}");
        }
    }

    #[test]
    fn pages_fit_every_width() {
        for word in all_words() {
            for width in [1, 20, 40, 80] {
                let text = page(
                    word,
                    Look {
                        color: false,
                        width,
                    },
                )
                .unwrap();
                assert!(!text.is_empty());
            }
        }
        overview(Look {
            color: true,
            width: 20,
        });
    }

    #[test]
    fn no_word_has_two_pages() {
        let mut words = all_words();
        words.sort_unstable();
        let count = words.len();
        words.dedup();
        assert_eq!(words.len(), count);
    }
}
