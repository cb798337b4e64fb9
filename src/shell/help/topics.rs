//! Pages about what is neither a command nor a declaration.

use super::Page;
use crate::language::PROPERTIES;
use crate::shell::layout::fold;
use crate::shell::screen::Look;

/// What can be asked by typing it.
pub const QUESTIONS: Page = Page {
    word: "questions",
    forms: &[
        ("a term", "its normal form"),
        ("s = t", "are the two sides equal by the laws?"),
        ("s != t", "the same question"),
        ("? …", "a question, even if it begins like a command"),
        ("it", "the last normal form, inside a question"),
    ],
    page: "A line that begins with no command and no declaration is a question. A term is rewritten \
           as far as the rules go. An equation is asked for all values of the variables: the answer \
           is equal, not equal or undecided; help answers tells what they mean.",
    example: "open group\ni(e) * (e * x)\nit = x\nx * i(x) = e",
};

/// All topics.
pub const TOPICS: &[Page] = &[
    QUESTIONS,
    Page {
        word: "names",
        forms: &[
            ("harbour, x1, α", "names: letters, digits and _"),
            ("*, ++, ▷, '", "signs: other characters of one line"),
            ("\"new\"", "any text in double quotes is a name"),
        ],
        page: "Signs may be any but = != : , ( ) # -> and quotes. A row of signs is split into the \
               longest declared ones, so that x*-y needs no blanks. Words that begin a line of the \
               language need quotes to be names. Names of laws, claims and theories may have - inside \
               and begin with a letter. # starts a remark, to the end of the line. A line goes on in \
               the next one while a bracket is open, or after = or an infix operator at its end.",
        example: "constant \"new\"\npostfix ' 80\n\"new\"' = \"new\"",
    },
    Page {
        word: "json",
        forms: &[
            ("equable check --json FILE", "one JSON object a line"),
            ("--json=full", "the same, with the evidence inside"),
        ],
        page: "ask and check: file, claim (its name, or null), question, verdict (equal, not equal, \
               undecided), expected (equal or not equal), by, seconds, evidence (null, the path that \
               --evidence gave, or the evidence itself); where there are some, values (of the unknowns \
               of find), normal (the two normal forms that differ), and rules and pairs (how far an \
               undecided search came).\n\n\
               by says how it was settled: table (both sides had been rewritten before, to the same \
               term), normal forms (both sides were rewritten to the same term), proof (a search \
               found one), complete (the rules are complete and the normal forms differ), known \
               algebra (found for an earlier question), algebra (searched for), or null.\n\n\
               normal: file, term, normal, steps, seconds, complete, checked, finished. complete: \
               file, complete, rules, oriented, order, pairs, seconds, list, evidence. verify: file, \
               outcome (accepted, rejected, too costly to check), kind, claim, unknowns, laws (how \
               many), place, reason, seconds. A file with which nothing can be done: file and error, \
               with text, place (source, line and column, or null) and more (how many further \
               faults). help evidence is about the evidence.",
        example: "",
    },
    Page {
        word: "properties",
        forms: &[("law + is associative commutative", "several laws at once")],
        page: "Each word states one or more laws, which are named after it, such as + associative. \
               Before unit, zero, inverse and the like, left or right states only that side.",
        example: "infix + 40 left\nconstant zero\nlaw + is associative commutative unit zero\nlaws",
    },
];

/// The property words with the equations that they state.
pub fn property_list(look: Look) -> String {
    let mut words: Vec<&str> = PROPERTIES.iter().map(|row| row.word).collect();
    words.dedup();
    let text = format!("The words: {}.", words.join(", "));
    format!("\n{}", fold(&text, look.width, 0))
}
