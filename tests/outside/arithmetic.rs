//! Functions on numbers and lists, against Rust's own.

use crate::common::{Random, complete, normal, term};
use equable::session::{Library, Session};

fn natural() -> Session {
    let opened = Session::open("natural", Library::default());
    opened
        .unwrap_or_else(|_| panic!("it is inside the program"))
        .session
}

fn numeral(n: usize) -> String {
    format!("{}0{}", "s(".repeat(n), ")".repeat(n))
}

/// A random expression, as text and as a number.
fn expression(random: &mut Random, size: usize) -> (String, usize) {
    if size == 0 {
        let n = random.below(5);
        return (numeral(n), n);
    }
    let own = random.below(size);
    let (left, a) = expression(random, own);
    let (right, b) = expression(random, size - 1 - own);
    match random.below(4) {
        0 if a * b <= 400 => (format!("({left}) * ({right})"), a * b),
        1 => (format!("double({left})"), 2 * a),
        2 => (format!("s({left})"), a + 1),
        _ => (format!("({left}) + ({right})"), a + b),
    }
}

#[test]
fn peano_arithmetic_and_machine_integers() {
    let mut session = natural();
    let mut random = Random(0x5eed);
    // With the laws alone, and when they are complete.
    for round in 0..2 {
        for case in 0..150 {
            let (text, value) = expression(&mut random, 1 + case % 9);
            assert_eq!(
                normal(&mut session, &text),
                numeral(value),
                "{round}: {text}"
            );
        }
        complete(&mut session);
    }
}

#[test]
fn a_larger_product() {
    let mut session = natural();
    let text = format!("{} * {}", numeral(41), numeral(73));
    assert_eq!(normal(&mut session, &text), numeral(41 * 73));
}

fn list(items: &[usize]) -> String {
    let items: String = items.iter().map(|n| format!("d{n} :: ")).collect();
    format!("{items}nil")
}

fn lists() -> Session {
    let opened = Session::open("list", Library::default());
    let mut session = opened
        .unwrap_or_else(|_| panic!("it is inside the program"))
        .session;
    for digit in 0..10 {
        let line = format!("constant d{digit} : Item");
        session.declare(&line).expect("a free name");
    }
    session
}

/// A random expression, as text and as a vector.
fn list_expression(random: &mut Random, size: usize) -> (String, Vec<usize>) {
    if size == 0 {
        let items: Vec<usize> = (0..random.below(6)).map(|_| random.below(10)).collect();
        return (format!("({})", list(&items)), items);
    }
    let own = random.below(size);
    let (left, mut a) = list_expression(random, own);
    match random.below(3) {
        0 => {
            a.reverse();
            (format!("reverse({left})"), a)
        }
        1 => {
            let item = random.below(10);
            a.insert(0, item);
            (format!("(d{item} :: {left})"), a)
        }
        _ => {
            let (right, b) = list_expression(random, size - 1 - own);
            a.extend(b);
            (format!("({left} ++ {right})"), a)
        }
    }
}

#[test]
fn lists_and_vectors() {
    let mut session = lists();
    let mut random = Random(0xfeed);
    for round in 0..2 {
        for case in 0..150 {
            let (text, value) = list_expression(&mut random, 1 + case % 9);
            let expected = list(&value);
            assert_eq!(normal(&mut session, &text), expected, "{round}: {text}");
        }
        complete(&mut session);
    }
}

#[test]
fn a_long_list_is_reversed() {
    let mut session = lists();
    let mut random = Random(0xace);
    let mut items: Vec<usize> = (0..1_000).map(|_| random.below(10)).collect();
    let text = format!("reverse({})", list(&items));
    let found = normal(&mut session, &text);
    items.reverse();
    assert_eq!(found, list(&items));
    // And once more, backwards, from the table that the first one has filled.
    let back = normal(&mut session, &format!("reverse({found})"));
    items.reverse();
    assert_eq!(back, list(&items));
    let whole = term(&mut session, &back);
    assert_eq!(session.theory().bank.size(whole), 2_001);
}
