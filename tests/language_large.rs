//! Terms a million levels deep, enormous lines, and terms that share their parts.

use equable::language::{
    NoLoader, Printer, Question, TheoryNames, parse_question, read_theory, set_derived, wrap,
};
use equable::term::TermId;
use equable::theory::{Derived, LineId, Origin, Record, Theory};

const MILLION: usize = 1_000_000;

fn theory() -> Theory {
    let text = "infix * 40 left\ninfix ^ 50 right\nprefix - 60\npostfix ' 80\n\
                function i 1\nconstant e\nvariable x y\n";
    read_theory("large", text, &NoLoader).unwrap_or_else(|_| panic!("the theory is right"))
}

fn term(theory: &mut Theory, text: &str) -> TermId {
    match parse_question(theory, "large", text, None) {
        Ok(Question::Term(term)) => term,
        Ok(_) => panic!("this should be a term"),
        Err(fault) => panic!("{}", fault.render(false, 80)),
    }
}

/// Reads, prints, and reads again.
fn round(theory: &mut Theory, text: &str) -> String {
    let read = term(theory, text);
    assert!(theory.bank.size(read) as usize >= MILLION);
    let names = TheoryNames(&theory.signature);
    let printed = Printer::new(&names).term(&theory.bank, read);
    assert_eq!(term(theory, &printed), read);
    printed
}

#[test]
fn a_million_levels_of_every_kind_are_read_and_printed() {
    let mut theory = theory();
    let calls = format!("{}x{}", "i(".repeat(MILLION), ")".repeat(MILLION));
    assert_eq!(round(&mut theory, &calls), calls);
    let right = format!("{}x{}", "(y * ".repeat(MILLION), ")".repeat(MILLION));
    round(&mut theory, &right);
    let left = format!("x{}", " * y".repeat(MILLION));
    assert_eq!(round(&mut theory, &left), left);
    let chain = format!("{}x", "y ^ ".repeat(MILLION));
    assert_eq!(round(&mut theory, &chain), chain);
    let prefix = format!("{}x", "-".repeat(MILLION));
    round(&mut theory, &prefix);
    let postfix = format!("x{}", "'".repeat(MILLION));
    round(&mut theory, &postfix);
}

#[test]
fn brackets_nested_a_million_deep() {
    let mut theory = theory();
    let text = format!("{}x{}", "(".repeat(MILLION), ")".repeat(MILLION));
    let x = term(&mut theory, "x");
    assert_eq!(term(&mut theory, &text), x);
    // One bracket too few, and one too many, have their places.
    let fault = parse_question(&mut theory, "large", &text[..text.len() - 1], None).unwrap_err();
    assert!(fault.message.contains("is not closed"), "{fault}");
    assert_eq!(fault.column, 1);
    let fault = parse_question(&mut theory, "large", &format!("{text})"), None).unwrap_err();
    assert_eq!(fault.column, 2 * MILLION + 2);
    let drawn = fault.render(false, 40);
    assert!(drawn.len() < 2000 && drawn.contains(&format!(":1:{}", 2 * MILLION + 2)));
    // In a file, the next statement is not swallowed.
    let file = format!("constant e\nlaw {}e\nclaim e = e\n", "(".repeat(MILLION));
    let faults = read_theory("large", &file, &NoLoader).err().unwrap();
    assert_eq!((faults.len(), faults[0].line), (1, 3));
}

#[test]
fn a_line_of_fifty_megabytes() {
    let mut theory = theory();
    let text = format!("x{}", " * i(e)".repeat(50_000_000 / 7));
    let read = term(&mut theory, &text);
    assert!(theory.bank.size(read) > 20_000_000);
    // The same with a fault at its very end.
    let fault = parse_question(&mut theory, "large", &format!("{text} * w"), None).unwrap_err();
    assert!(fault.message.contains("`w` was never declared"));
    assert!(fault.render(false, 80).len() < 3000);
    // One name that long.
    let name = "n".repeat(50_000_000);
    let fault = parse_question(&mut theory, "large", &name, None).unwrap_err();
    assert!(fault.message.len() < 100 && fault.render(true, 80).len() < 20_000);
    let fault = theory.declare(&format!("constant {name}"), "large", &NoLoader);
    assert!(fault.unwrap_err()[0].message.contains("256 bytes"));
}

#[test]
fn a_law_a_million_levels_deep_is_kept_and_so_is_a_derived_rule() {
    let mut theory = theory();
    let law = format!(
        "law deep: {}x{} = x",
        "i(".repeat(MILLION),
        ")".repeat(MILLION)
    );
    theory.declare(&law, "large", &NoLoader).unwrap();
    let (left, right) = (theory.laws[0].left, theory.laws[0].right);
    let rule = Derived {
        number: 1,
        left,
        right,
        oriented: true,
        retired: false,
        record: Record {
            origin: Origin::Law("deep".into()),
            left: vec![],
            right: vec![],
            swapped: false,
        },
        line: LineId(0),
    };
    set_derived(&mut theory, vec![rule]);
    let saved = theory.document.text();
    let again = read_theory("large", &saved, &NoLoader).unwrap_or_else(|_| panic!());
    assert!(again.refused.is_empty());
    assert_eq!(again.bank.size(again.derived[0].left) as usize, MILLION + 1);
    assert_eq!(again.document.text(), saved);
}

#[test]
fn a_term_that_doubles_a_hundred_times_is_cut() {
    let mut theory = theory();
    let mut top = term(&mut theory, "x");
    let symbol = theory
        .signature
        .meaning("*")
        .and_then(|m| m.symbol)
        .unwrap();
    for _ in 0..100 {
        top = theory.bank.apply(symbol, &[top, top]);
    }
    let names = TheoryNames(&theory.signature);
    let printed = Printer::new(&names)
        .limit(500)
        .print(&theory.bank, top, None);
    assert!(printed.text.len() < 600);
    assert!(
        printed
            .text
            .ends_with("… (more than 4 billion symbols left out)")
    );
    let small = term(&mut theory, "x * x * x * x");
    let names = TheoryNames(&theory.signature);
    let printed = Printer::new(&names)
        .limit(5)
        .print(&theory.bank, small, None);
    assert_eq!(printed.text, "x * x … (4 symbols left out)".to_owned());
    assert_eq!(printed.missing, 4);
    assert_eq!(wrap(&printed, 4, 2).0.lines().next(), Some("x *"));
}
