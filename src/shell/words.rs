//! Words that are not commands yet, and words that were perhaps meant to be commands.

use super::commands;
use super::line::Line;
use super::problem::Problem;
use crate::language::{DECLARATIONS, Fault, nearest};

/// Reserved words of later versions, with what to do instead where there is something.
const LATER: &[(&str, &str)] = &[
    (
        "given",
        "new constants and laws can stand for the assumptions",
    ),
    (
        "apply",
        "trace T shows the steps from a term to its normal form",
    ),
    (
        "closed",
        "an equation that follows from the laws holds on closed terms too",
    ),
    (
        "replace",
        "drop NAME takes a law out, and law NAME: s = t states it anew",
    ),
    (
        "rename",
        "drop NAME takes a law out, and law NAME: s = t states it anew",
    ),
    ("reload", "open FILE reads a file again"),
    (
        "audit",
        "check verifies the claims, and status tells whether the rules are complete",
    ),
    ("overlaps", "why R shows which overlap a rule comes from"),
    ("census", ""),
    ("discover", ""),
    (
        "compare",
        "use takes in another theory; its laws can then be asked about",
    ),
    ("atlas", ""),
    ("export", "save FILE writes the theory as text"),
    (
        "journal",
        "save keeps the theory; the arrow keys bring back what was typed",
    ),
];

/// Words of other trades, with ours.
const MEANT: &[(&str, &str)] = &[
    ("exit", "quit"),
    ("bye", "quit"),
    ("load", "open FILE"),
    ("read", "open FILE"),
    ("write", "save FILE"),
    ("delete", "drop NAME"),
    ("remove", "drop NAME"),
    ("axiom", "law NAME: s = t"),
    ("equation", "law NAME: s = t"),
    ("const", "constant NAME"),
    ("var", "variable NAME"),
    ("vars", "variable NAME"),
    ("operator", "infix SIGN STRENGTH SIDE"),
    ("theorem", "claim NAME: s = t"),
    ("lemma", "claim NAME: s = t"),
    ("normalize", "type the term alone for its normal form"),
    ("reduce", "type the term alone for its normal form"),
    ("steps", "trace T"),
    ("show", "laws, rules, symbols, claims, answers or status"),
    ("list", "laws, rules, symbols, claims, answers or status"),
];

/// The sentence about a reserved word that this version does nothing with.
pub fn not_yet(word: &str, line: &Line<'_>) -> Option<Problem> {
    let (_, instead) = LATER.iter().find(|(later, _)| *later == word)?;
    let start = line.at - word.len();
    let mut fault = Fault::new(
        start..line.at,
        format!("this version does not have {word} yet"),
    )
    .label("kept for a later version");
    if !instead.is_empty() {
        fault = fault.help(*instead);
    }
    Some(line.problem(fault.help("help lists what there is")))
}

/// The command that a word was perhaps meant to be.
pub fn meant(word: &str) -> Option<String> {
    if let Some((_, ours)) = MEANT.iter().find(|(other, _)| *other == word) {
        return Some((*ours).to_owned());
    }
    let known = commands::ALL.iter().map(|command| command.word);
    nearest(word, known.chain(DECLARATIONS.iter().copied())).map(str::to_owned)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::language::{RESERVED, is_declaration};

    #[test]
    fn every_reserved_word_is_a_command_a_declaration_or_for_later() {
        let inner = ["when", "and", "within", "most", "is", "over"];
        for word in RESERVED {
            let known = commands::named(word).is_some()
                || is_declaration(word)
                || LATER.iter().any(|(later, _)| later == word)
                || inner.contains(word);
            assert!(known, "{word}");
        }
        for (later, _) in LATER {
            assert!(commands::named(later).is_none(), "{later}");
        }
    }
}
