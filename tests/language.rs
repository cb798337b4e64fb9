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

#[test]
fn undeclared() {
    let d = fault("infix * 40 left\nlaw x * y = y * x");
    println!("{}", d.render(false, 80));
    println!("{}", d.render(false, 20));
    println!("{}", d.render(true, 40));
}
