//! Pages about the lines that say what there is.

use super::Page;

/// One page for each word that begins a declaration, but `order`, which is a command too.
pub const DECLARATION_PAGES: &[Page] = &[
    Page {
        word: "theory",
        forms: &[("theory gauges", "name the theory")],
        page: "The name is what the prompt shows. new NAME begins a theory with a name.",
        example: "theory gauges",
    },
    Page {
        word: "note",
        forms: &[("note …", "a remark, shown when the theory is opened")],
        page: "The first line of the first note is also what theories shows. For remarks that only a \
               reader of the file sees, write # before them.",
        example: "note Readings of the harbour gauge, put together from parts.",
    },
    Page {
        word: "use",
        forms: &[("use monoid", "take in another theory, by name or file")],
        page: "Takes in the declarations and laws, but not the claims and the order. Its laws are \
               called by the name of the theory and their own. A theory that is used twice is taken \
               in once.",
        example: "use monoid\nlaws",
    },
    Page {
        word: "sort",
        forms: &[("sort Layer Key", "name sorts")],
        page: "A theory that names no sort has a single one without a name. Sorts come before what \
               has them.",
        example: "sort Layer Key\nconstant factory : Layer\nvariable k : Key",
    },
    Page {
        word: "constant",
        forms: &[
            ("constant empty", "a constant"),
            ("constant empty : Layer", "a constant of a sort"),
        ],
        page: "Several may stand in one line: constant harbour fleet factory.",
        example: "constant harbour fleet factory",
    },
    Page {
        word: "function",
        forms: &[
            ("function mask 2", "a function of so many arguments"),
            (
                "function get : Layer Key -> Value",
                "a function by its type",
            ),
        ],
        page: "Applied as mask(x, y). infix, prefix and postfix declare operators instead.",
        example: "function mask 2\nvariable x y\nlaw twice: mask(x, mask(x, y)) = mask(x, y)",
    },
    Page {
        word: "infix",
        forms: &[
            ("infix * 40 left", "an operator between its arguments"),
            (
                "infix ++ 50 right : List List -> List",
                "the same with its type",
            ),
        ],
        page: "The number from 0 to 99 is how strongly it binds: the stronger operator takes its \
               arguments first. The side says what x * y * z is: left (x * y) * z, right x * (y * z), \
               none that brackets are needed. A name may be infix too, as in infix mod 50 left.",
        example: "infix + 30 left\ninfix * 40 left\nvariable x y z\nlaw spread: x * (y + z) = x * y + x * z",
    },
    Page {
        word: "prefix",
        forms: &[("prefix - 60", "an operator before its argument")],
        page: "It takes everything to its right that binds more strongly. A sign may be prefix and \
               infix.",
        example: "prefix - 60\nvariable x\nlaw twice: - - x = x",
    },
    Page {
        word: "postfix",
        forms: &[("postfix ' 80", "an operator behind its argument")],
        page: "It binds before anything else.",
        example: "postfix ' 80\nvariable x\nlaw twice: x'' = x",
    },
    Page {
        word: "variable",
        forms: &[
            ("variable x y z", "variables"),
            ("variable k : Key", "variables of a sort"),
        ],
        page: "A law holds for all values of its variables. Every name in a term must be declared, \
               so that a mistyped one is noticed.",
        example: "variable x y z",
    },
    Page {
        word: "law",
        forms: &[
            ("law unit: x * e = x", "a law with a name"),
            ("law x * e = x", "a law that gets a name, law1, law2, …"),
            (
                "law + is associative commutative",
                "the usual laws by their usual names",
            ),
        ],
        page: "A law is used in both directions to find out what follows. help properties lists the \
               usual laws. drop NAME takes a law out.",
        example: "infix + 40 left\nconstant zero\nvariable x\nlaw + is associative commutative\nlaw right: x + zero = x\nlaws",
    },
    Page {
        word: "rule",
        forms: &[("rule cut: f(g(x)) -> x", "a law for this direction only")],
        page: "The order must make the right side smaller than the left one; if it does not, the \
               line is refused, with the rules that stand in the way. help order tells about orders.",
        example: "function f 1\nfunction g 1\nvariable x\nrule cut: f(g(x)) -> x\nf(f(g(x)))",
    },
    Page {
        word: "define",
        forms: &[("define square(x) = x * x", "a new symbol with its law")],
        page: "The symbol must be new, and every variable of the right side must stand on the left.",
        example: "infix * 40 left\nvariable x\ndefine square(x) = x * x\nsquare(square(x))",
    },
    Page {
        word: "claim",
        forms: &[
            ("claim comm: x * y = y * x", "what should follow"),
            ("claim x * y != y * x", "what should not"),
            ("claim find w: x * w = y", "there should be values"),
        ],
        page: "A claim is not used to find anything out. check verifies all claims, here and on the \
               command line.",
        example: "constant a b\nlaw same: a = b\nclaim other: b = a\ncheck",
    },
    Page {
        word: "derived",
        forms: &[("derived …", "a derived rule; written by save, not typed")],
        page: "save writes the rules that were found, each with the record of how it was derived. \
               open derives each again from its record, without search, and leaves out what fails.",
        example: "",
    },
];
