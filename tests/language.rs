//! The language as a user meets it: what is read, what it becomes, and what is said of errors.

use equable::language::{
    Diagnostic, Loaded, Loader, NoLoader, Printer, Question, TheoryNames, is_open, parse_question,
    read_theory,
};
use equable::theory::Theory;

fn read(text: &str) -> Theory {
    read_theory("test.theory", text, &NoLoader).unwrap_or_else(|faults| {
        panic!(
            "{}",
            faults
                .iter()
                .map(|f| f.render(false, 80))
                .collect::<String>()
        )
    })
}

/// The first message about a text that is at fault.
fn fault(text: &str) -> Diagnostic {
    match read_theory("test.theory", text, &NoLoader) {
        Ok(_) => panic!("this should be at fault: {text}"),
        Err(faults) => faults.into_iter().next().expect("at least one message"),
    }
}

/// The laws as text, in order.
fn laws(theory: &Theory) -> Vec<String> {
    let names = TheoryNames(&theory.signature);
    let printer = Printer::new(&names);
    theory
        .laws
        .iter()
        .map(|law| {
            let equation = printer.equation(&theory.bank, law.left, "=", law.right);
            format!("{}: {equation}", law.name)
        })
        .collect()
}

const GROUP: &str = "\
theory group
note A set with a product, a unit and inverses. # shown on opening
infix * 40 left
constant e
function i 1
variable x y z   # three are enough

law assoc: (x * y) * z = x * (y * z)
law * is left unit e left inverse i
claim flip: i(x * y) = i(y) * i(x)
claim x * y != y * x
order kbo i, *, e; weights i 0, * 1; variables 1
";

#[test]
fn a_theory_is_read_and_kept_byte_for_byte() {
    let theory = read(GROUP);
    assert_eq!(theory.name.as_deref(), Some("group"));
    assert_eq!(theory.notes, ["A set with a product, a unit and inverses."]);
    assert_eq!(
        laws(&theory),
        [
            "assoc: x * y * z = x * (y * z)",
            "* left unit e: e * x = x",
            "* left inverse i: i(x) * x = e",
        ]
    );
    assert_eq!(theory.claims.len(), 2);
    assert!(theory.order.is_some());
    assert_eq!(theory.document.text(), GROUP);
    let dos = GROUP.replace('\n', "\r\n");
    assert_eq!(read(&dos).document.text(), dos);
    let marked = format!("\u{feff}{}", GROUP.trim_end());
    assert_eq!(read(&marked).document.text(), marked);
}

#[test]
fn a_typed_question() {
    let mut theory = read(GROUP);
    let q = parse_question(&mut theory, "prompt", "? i(x) * x = e", None);
    assert!(matches!(q, Ok(Question::Equation(..))));
    let q = parse_question(&mut theory, "prompt", "x * it", None).unwrap_err();
    assert!(q.message.contains("`it` was never declared"), "{q}");
    assert!(is_open(&theory.signature, "x * y ="));
    assert!(is_open(&theory.signature, "x *\n"));
    assert!(!is_open(&theory.signature, "x * y"));
    assert!(!is_open(&theory.signature, "infix ( 40 left"));
}

/// Theories by name.
struct Shelf(&'static [(&'static str, &'static str)]);

impl Loader for Shelf {
    fn load(&self, name: &str, _from: &str) -> Result<Loaded, String> {
        let found = self.0.iter().find(|(known, _)| *known == name);
        let (name, text) = found.ok_or(format!("there is no theory {name}"))?;
        Ok(Loaded {
            source: format!("{name}.theory"),
            text: (*text).to_owned(),
        })
    }
}

fn read_with(shelf: &Shelf, text: &str) -> Result<Theory, Vec<Diagnostic>> {
    read_theory("test.theory", text, shelf)
}

/// A term printed after it was read.
fn printed(theory: &mut Theory, text: &str) -> String {
    let term = match parse_question(theory, "prompt", text, None) {
        Ok(Question::Term(term)) => term,
        other => panic!("{other:?}"),
    };
    let names = TheoryNames(&theory.signature);
    Printer::new(&names).term(&theory.bank, term)
}

#[test]
fn names_and_signs() {
    let mut theory = read(
        "infix * 40 left\ninfix - 30 left\nprefix - 60\ninfix -- 30 none\npostfix ' 80\n\
         infix mod 50 left\nprefix not 60\ninfix ++ 50 right\nconstant 0 2x ∅ \"new\" \"a b\" é\n\
         infix ≠ 20 none\ninfix :: 50 right\nfunction ¬ 1\nvariable x y z\n",
    );
    for (text, wanted) in [
        ("x*-y", "x * -y"),
        ("x - -y", "x - -y"),
        ("x--y", "x -- y"),
        ("- - x", "- -x"),
        ("x - y - z", "x - y - z"),
        ("x - (y - z)", "x - (y - z)"),
        ("x ++ y ++ z", "x ++ y ++ z"),
        ("(x ++ y) ++ z", "(x ++ y) ++ z"),
        ("x mod y * z", "x mod y * z"),
        ("x mod (y * z)", "x mod (y * z)"),
        ("-x * y", "-x * y"),
        ("-(x * y)", "-(x * y)"),
        ("-x'", "-x'"),
        ("(-x)'", "(-x)'"),
        ("x * y'", "x * y'"),
        ("x''", "x' '"),
        ("not x mod y", "not x mod y"),
        ("not(x mod y)", "not (x mod y)"),
        ("0*2x*∅", "0 * 2x * ∅"),
        ("∅*∅", "∅ * ∅"),
        ("\"new\" * \"a b\"", "\"new\" * \"a b\""),
        ("x \"*\" y", "x * y"),
        ("¬(-∅)", "¬(- ∅)"),
        ("x::y::z", "x :: y :: z"),
        // Decomposed letters and signs are the composed ones.
        ("e\u{301} * x =\u{338} y", "é * x ≠ y"),
        ("((x))", "x"),
        ("x # a remark", "x"),
    ] {
        assert_eq!(printed(&mut theory, text), wanted, "{text}");
    }
    // A law name is no part of a sign that begins with a colon.
    let laws_before = theory.laws.len();
    theory.declare("law x::0 = x", "prompt", &NoLoader).unwrap();
    assert_eq!(theory.laws[laws_before].name, "law1");
}

#[test]
fn a_sign_may_hold_anything_but_be_a_barred_token() {
    let theory = read(
        "infix == 40 none\ninfix +# 40 left\ninfix -> 30 left # no\n"
            .replace("infix -> 30 left # no\n", "")
            .as_str(),
    );
    assert_eq!(theory.signature.symbols().len(), 2);
    let theory = read(
        "infix +# 40 left\nvariable x y\n## a remark\nlaw x +# y = y +# x ## another\n#+# third\n",
    );
    assert_eq!(laws(&theory), ["law1: x +# y = y +# x"]);
    for barred in ["=", "!=", ":", ",", "(", ")", "#", "->", "\""] {
        fault(&format!("infix {barred} 40 left"));
    }
    assert_eq!(
        read("infix \"->\" 40 left").signature.symbols()[0].name,
        "->"
    );
    // A reserved word is a name only in quotes.
    for word in equable::language::RESERVED {
        let d = fault(&format!("constant {word}"));
        assert!(
            d.help.iter().any(|h| h.contains(&format!("\"{word}\""))),
            "{d}"
        );
        read(&format!("constant \"{word}\""));
    }
}

#[test]
fn sorts_and_types() {
    let theory = read(
        "sort Layer Key Value\nconstant empty : Layer\nfunction get : Layer Key -> Value\n\
         infix ▷ 40 left : Layer Layer -> Layer\nprefix - 60 : Layer -> Layer\n\
         variable l m : Layer\nvariable k: Key\nconstant ∅: Layer\nconstant deep : Value\n\
         law get(empty, k) = deep\nlaw ▷ is associative unit empty\n",
    );
    assert_eq!(theory.signature.sorts(), ["Layer", "Key", "Value"]);
    assert_eq!(
        laws(&theory)[1..],
        [
            // A third variable of the sort is made up.
            "▷ associative: l ▷ m ▷ x1 = l ▷ (m ▷ x1)",
            "▷ left unit empty: empty ▷ l = l",
            "▷ right unit empty: l ▷ empty = l",
        ]
    );
    // One sort needs no types.
    let theory = read("sort Set\nconstant e\nfunction f 2\nvariable x\nlaw f(x, e) = x");
    assert_eq!(theory.signature.sorts(), ["Set"]);
    // A made-up variable makes way.
    let mut theory = read("infix * 40 left\nlaw * is commutative");
    assert_eq!(laws(&theory), ["* commutative: x1 * x2 = x2 * x1"]);
    theory.declare("constant x1", "prompt", &NoLoader).unwrap();
    assert_eq!(laws(&theory), ["* commutative: x3 * x2 = x2 * x3"]);
}

#[test]
fn every_property_states_its_equation() {
    let signature = "infix * 40 left\ninfix + 30 left\nprefix - 60\nconstant e\nfunction f 1\n\
                     variable x y z\n";
    for (words, wanted) in [
        ("* is associative", vec!["x * y * z = x * (y * z)"]),
        ("* is commutative", vec!["x * y = y * x"]),
        ("* is idempotent", vec!["x * x = x"]),
        ("f is idempotent", vec!["f(f(x)) = f(x)"]),
        ("f is involutive", vec!["f(f(x)) = x"]),
        ("- is involutive", vec!["- -x = x"]),
        ("* is unit e", vec!["e * x = x", "x * e = x"]),
        ("* is left unit e", vec!["e * x = x"]),
        ("* is right unit e", vec!["x * e = x"]),
        ("* is zero e", vec!["e * x = e", "x * e = e"]),
        ("* is left zero e", vec!["e * x = e"]),
        ("* is right zero e", vec!["x * e = e"]),
        (
            "* is unit e inverse f",
            vec!["e * x = x", "x * e = x", "f(x) * x = e", "x * f(x) = e"],
        ),
        (
            "* is left unit e, left inverse - and commutative",
            vec!["e * x = x", "-x * x = e", "x * y = y * x"],
        ),
        (
            "* is right unit e right inverse f",
            vec!["x * e = x", "x * f(x) = e"],
        ),
        (
            "* is distributes over +",
            vec!["x * (y + z) = x * y + x * z", "(x + y) * z = x * z + y * z"],
        ),
        (
            "* is left distributes over *",
            vec!["x * (y * z) = x * y * (x * z)"],
        ),
        (
            "* is right distributive over +",
            vec!["(x + y) * z = x * z + y * z"],
        ),
        ("f is distributes over +", vec!["f(x + y) = f(x) + f(y)"]),
        ("* is absorbs +", vec!["x * (x + y) = x"]),
        ("* is left absorbs +", vec!["x * (x + y) = x"]),
        ("* is right absorbs +", vec!["(x + y) * x = x"]),
    ] {
        let theory = read(&format!("{signature}law {words}\n"));
        let stated: Vec<String> = laws(&theory)
            .iter()
            .map(|law| law.split(": ").nth(1).unwrap().to_owned())
            .collect();
        assert_eq!(stated, wanted, "{words}");
    }
    // The unit of an earlier line serves for an inverse.
    let theory = read(&format!(
        "{signature}law * is unit e\nlaw * is left inverse f"
    ));
    assert_eq!(laws(&theory)[2], "* left inverse f: f(x) * x = e");
    fault(&format!("{signature}law * is inverse f"));
    fault(&format!("{signature}law f is commutative"));
    fault(&format!("{signature}law * is left commutative"));
    fault("sort A B\ninfix * 40 left : A B -> A\nlaw * is commutative");
}

#[test]
fn laws_get_numbers_that_are_never_used_again() {
    let mut theory = read(
        "infix * 40 left\nvariable x y z\nlaw x * y = y * x # first\nlaw x * x = x\nlaw x = x * (x * x)\n\
         law * is associative commutative idempotent\ndefine square(x) = x * x\n",
    );
    theory.drop_law("law1").unwrap();
    theory.drop_law("* commutative").unwrap();
    theory.drop_law("square").unwrap();
    assert_eq!(
        theory.document.text(),
        "infix * 40 left\nvariable x y z\nlaw law2: x * x = x\nlaw law3: x = x * (x * x)\n\
         law * is associative idempotent\nfunction square 1\n"
    );
    assert!(theory.drop_law("law1").is_err());
    theory
        .declare("law x * y = x", "prompt", &NoLoader)
        .unwrap();
    assert_eq!(theory.laws.last().unwrap().name, "law4");
    theory.drop_law("law4").unwrap();
    theory
        .declare("law x * y = x", "prompt", &NoLoader)
        .unwrap();
    assert_eq!(theory.laws.last().unwrap().name, "law5");
    let again = read(&theory.document.text());
    assert_eq!(laws(&again)[..2], laws(&theory)[..2]);
    // Numbers that someone chose count, unless they are absurd.
    let theory =
        read("variable x y\nlaw law7: x = y\nlaw law4294967295: x = y\nlaw x = y\nlaw x = x\n");
    assert_eq!(theory.laws[2].name, "law8");
    assert_eq!(theory.laws[3].name, "law9");
}

#[test]
fn a_declaration_at_fault_changes_nothing() {
    let mut theory = read(GROUP);
    let (before, terms) = (laws(&theory), theory.bank.len());
    let variables = theory.signature.variables().len();
    for text in [
        "law i(x) * w = x",
        "law new * x = x",
        "variable a b a",
        "constant u v x",
        "define f(x) = y",
        "law * is associative nothing",
        "constant a\nlaw a * b = a",
        "use nothing",
        "law assoc: x = y",
        "order kbo w",
    ] {
        theory.declare(text, "prompt", &NoLoader).unwrap_err();
        assert_eq!(laws(&theory), before);
        assert_eq!(theory.bank.len(), terms, "{text}");
        assert_eq!(theory.bank.symbols().len(), 3, "{text}");
        assert_eq!(theory.signature.symbols().len(), 3, "{text}");
        assert_eq!(theory.signature.variables().len(), variables, "{text}");
        assert_eq!(theory.document.text(), GROUP, "{text}");
    }
    let changes = theory.declare("constant a : \nlaw a = a", "prompt", &NoLoader);
    assert!(changes.is_err());
    let changes = theory.declare("constant a\nlaw a * x =\n  a", "prompt", &NoLoader);
    assert_eq!(changes.unwrap().len(), 2);
    assert!(
        theory
            .document
            .text()
            .ends_with("\nconstant a\nlaw a * x =\n  a\n")
    );
}

#[test]
fn definitions_rules_claims_and_orders() {
    let mut theory = read(
        "infix * 40 left\ninfix - 30 left\nprefix - 60\nconstant e\nvariable x y\n\
         define square(x) = x * x\ndefine one = square(e)\ndefine swap(x, y) = y * x\n\
         rule cut: square(x) -> x * e\nclaim x * y = y * x\nclaim not-so: x * y != y * x\n\
         order kbo -/1, *, -/2; weights -/1 0, * 3; variables 2\n",
    );
    assert_eq!(
        laws(&theory),
        [
            "square: square(x) = x * x",
            "one: one = square(e)",
            "swap: swap(x, y) = y * x",
            "cut: square(x) = x * e",
        ]
    );
    let order = theory.order.clone().unwrap();
    assert_eq!(order.precedence.len(), 3);
    assert_eq!(order.variable_weight, 2);
    let line = equable::language::print_order(&theory.signature, &order);
    assert_eq!(
        line,
        "order kbo -/1, *, -/2; weights -/1 0, * 3; variables 2"
    );
    theory
        .declare("order lpo *, e", "prompt", &NoLoader)
        .unwrap();
    assert!(theory.document.text().ends_with("order lpo *, e\n"));
    assert_eq!(theory.document.text().matches("order").count(), 1);
    theory.declare("order auto", "prompt", &NoLoader).unwrap();
    assert_eq!(theory.order, None);
    fault("infix - 30 left\nprefix - 60\norder lpo -");
    fault("constant e\norder lpo e; weights e 1");
}

#[test]
fn lines_go_on_in_brackets_and_behind_operators() {
    let theory = read(
        "infix * 40 left\nvariable x y\nlaw (x *   # a remark\n\n y) * # another\n x  = \nx\nlaw x = y\n",
    );
    assert_eq!(laws(&theory), ["law1: x * y * x = x", "law2: x = y"]);
    // `law * is …` and `order …` end with an operator, and do not go on.
    read(
        "infix * 40 left\ninfix + 30 left\nlaw * is distributes over +\norder lpo +, *\nnote x *\n",
    );
    let d = fault("infix * 40 left\nvariable x\nlaw (x * x\nclaim x = x");
    assert_eq!((d.line, d.column), (4, 1));
    assert!(d.notes[0].contains("line 3, column 5"), "{}", d.notes[0]);
    let d = fault("infix * 40 left\nvariable x\nlaw x *\nclaim x = x");
    assert_eq!((d.line, d.column), (4, 1));
    let d = fault("infix * 40 left\nvariable x\nlaw x = (x\n");
    assert_eq!((d.line, d.column), (3, 9));
}

#[test]
fn theories_use_theories() {
    let shelf = Shelf(&[
        (
            "semigroup",
            "theory semigroup\nnote not shown\ninfix * 40 left\nvariable x y z\n\
             law assoc: (x * y) * z = x * (y * z)\nclaim x = y\norder lpo *\n",
        ),
        (
            "monoid",
            "use semigroup\nconstant e\nlaw e * x = x\nlaw x * e = x\n",
        ),
        ("circle", "use round\n"),
        ("round", "use circle\n"),
        ("wrong", "use semigroup\nlaw x * = y\n"),
        (
            "lattice",
            "infix ∧ 40 left\nvariable x y z\nlaw assoc: (x ∧ y) ∧ z = x ∧ (y ∧ z)\n",
        ),
        ("sorted", "sort A\nconstant a\n"),
    ]);
    let text = "use monoid\nuse semigroup\nvariable x y z\nlaw x * y = y * x\nuse lattice\n";
    let mut theory = read_with(&shelf, text).unwrap_or_else(|f| panic!("{}", f[0]));
    assert_eq!(
        laws(&theory),
        [
            "assoc: x * y * z = x * (y * z)",
            "monoid-law1: e * x = x",
            "monoid-law2: x * e = x",
            "law1: x * y = y * x",
            "lattice-assoc: x ∧ y ∧ z = x ∧ (y ∧ z)",
        ]
    );
    assert!(theory.notes.is_empty() && theory.claims.is_empty() && theory.order.is_none());
    assert_eq!(theory.document.text(), text);
    assert!(theory.drop_law("assoc").is_err());
    let at_fault = |text: &str| read_with(&shelf, text).err().unwrap().remove(0);
    assert!(at_fault("use circle").message.contains("used by itself"));
    let d = at_fault("use wrong");
    assert_eq!(
        (d.source.as_str(), d.line, d.column),
        ("wrong.theory", 2, 9)
    );
    assert!(d.notes.iter().any(|n| n.contains("test.theory, line 1")));
    assert!(at_fault("use nothing").message.contains("no theory"));
    assert!(
        at_fault("use monoid\nconstant e")
            .message
            .contains("declared already")
    );
    assert!(at_fault("use test.theory").message.contains("no theory"));
    at_fault("use monoid\nuse sorted");
    // A use that fails leaves nothing behind.
    let mut theory = read("variable q");
    theory.declare("use wrong", "prompt", &shelf).unwrap_err();
    assert!(theory.signature.symbols().is_empty() && theory.used.is_empty());
    theory.declare("use monoid", "prompt", &shelf).unwrap();
    assert_eq!(theory.laws.len(), 3);
}

#[test]
fn questions_and_names_for_commands() {
    use equable::language::{first_word, is_declaration, law_name, parse_question_prefix};
    let mut theory = read(GROUP);
    let Ok(Question::Term(e)) = parse_question(&mut theory, "prompt", "e", None) else {
        panic!()
    };
    let Ok(Question::Term(it)) = parse_question(&mut theory, "prompt", "i(it)", Some(e)) else {
        panic!()
    };
    assert_eq!(theory.bank.arguments(it), [e]);
    let text = "prove x * e = x within 60s";
    let (question, rest) =
        parse_question_prefix(&mut theory, "prompt", text, 5..text.len(), None).unwrap();
    assert!(matches!(question, Question::Equation(..)));
    assert_eq!(&text[rest..], "within 60s");
    let text = "separate x = e, at most 8";
    let (_, rest) =
        parse_question_prefix(&mut theory, "prompt", text, 8..text.len(), None).unwrap();
    assert_eq!(&text[rest..], ", at most 8");
    let text = "evaluate x * e in A2";
    let (_, rest) =
        parse_question_prefix(&mut theory, "prompt", text, 8..text.len(), None).unwrap();
    assert_eq!(&text[rest..], "in A2");
    assert!(matches!(
        parse_question(&mut theory, "prompt", "x != e", None),
        Ok(Question::Inequation(..))
    ));
    assert_eq!(first_word("  prove x = y"), Some("prove"));
    assert_eq!(first_word("? x"), None);
    assert!(is_declaration("law") && !is_declaration("prove"));
    let names = ["+", "+ associative", "left-unit"];
    let name = |text| law_name(text, names.into_iter()).map(|(name, rest)| (name, rest.to_owned()));
    assert_eq!(
        name(" + associative, x"),
        Some(("+ associative".into(), ", x".into()))
    );
    assert_eq!(
        name("left-unit to x"),
        Some(("left-unit".into(), " to x".into()))
    );
    assert_eq!(name("\"a b\" c"), Some(("a b".into(), " c".into())));
    assert_eq!(name("  "), None);
}
