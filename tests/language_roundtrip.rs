//! Print, then read: the same term, for random signatures and terms.

use equable::language::{
    NoLoader, Printer, Question, TheoryNames, parse_question, print_derived, print_order,
    quote_symbol, read_theory, set_derived, set_order, wrap,
};
use equable::order::{OrderKind, OrderSetting};
use equable::term::{Bank, Sort, Symbol, TermId, Variable, preorder, renumber, subterm_at};
use equable::theory::{
    Derived, Fixity, LineId, Origin, Record, RecordStep, Side, Signature, Theory, Use,
};
use proptest::prelude::*;

/// What one symbol of a random signature is.
#[derive(Clone, Debug)]
struct Choice {
    fixity: u8,
    strength: u8,
    side: u8,
    sorts: [u8; 3],
}

fn choice() -> impl Strategy<Value = Choice> {
    (0u8..7, 0u8..4, 0u8..3, any::<[u8; 3]>()).prop_map(|(fixity, strength, side, sorts)| Choice {
        fixity,
        strength: strength * 25,
        side,
        sorts,
    })
}

/// Names and signs that could run into each other, need quotes, or look like something else.
const NAMES: &[&str] = &[
    "*", "-", "--", "+", "'", "''", "mod", "not", "f", "g", "0", "10", "law", "is", "a b", "=",
    "->", "::", "=>", "≠", "∅", "é", ";", "/", "#", "+#", "?", "·", "_", "x1", "left", "~", "~~",
    "it", "⊓⊔", "-x", "1", "by", "at", "!",
];

/// A theory with `sorts` sorts, the chosen symbols, and one constant and two variables a sort. The
/// text is what is tested, so declarations go through it as well.
fn theory(sorts: usize, choices: &[Choice], names: &[usize]) -> Theory {
    let sort = |n: u8| format!("S{}", n as usize % sorts);
    let mut text = String::new();
    if sorts > 1 {
        text += &format!(
            "sort {}\n",
            (0..sorts as u8).map(sort).collect::<Vec<_>>().join(" ")
        );
    }
    let typed = |list: &[u8]| {
        let (result, arguments) = list.split_last().unwrap();
        if sorts == 1 {
            return String::new();
        }
        let names: Vec<String> = arguments.iter().map(|s| sort(*s)).collect();
        let arrow = if names.is_empty() {
            String::new()
        } else {
            names.join(" ") + " -> "
        };
        format!(" : {arrow}{}", sort(*result))
    };
    for s in 0..sorts as u8 {
        text += &format!(
            "constant c{s}{}\nvariable u{s} v{s}{}\n",
            typed(&[s]),
            typed(&[s])
        );
    }
    let mut used = Vec::new();
    for (choice, name) in choices.iter().zip(names) {
        let name = NAMES[name % NAMES.len()];
        let again = used.contains(&name);
        used.push(name);
        let (strength, [a, b, c]) = (choice.strength, choice.sorts);
        let quoted = quote_symbol(name);
        let side = ["left", "right", "none"][choice.side as usize];
        // The second use of a name makes it prefix as well as infix, if it can.
        let line = match choice.fixity {
            _ if again => format!("prefix {quoted} {strength}{}", typed(&[a, b])),
            0 | 1 | 6 => format!("infix {quoted} {strength} {side}{}", typed(&[a, b, c])),
            2 => format!("prefix {quoted} {strength}{}", typed(&[a, b])),
            3 => format!("postfix {quoted} {strength}{}", typed(&[a, b])),
            4 => format!("constant {quoted}{}", typed(&[a])),
            _ if sorts == 1 => format!("function {quoted} 2"),
            _ => format!("function {quoted}{}", typed(&[a, b, c])),
        };
        let before = format!("{text}{line}\n");
        match read_theory("random", &before, &NoLoader) {
            Ok(_) => text = before,
            Err(faults) => assert!(again, "{}", faults[0].render(false, 80)),
        }
    }
    read_theory("random", &text, &NoLoader).unwrap_or_else(|f| panic!("{}", f[0].render(false, 80)))
}

/// A random term: the numbers choose, symbol by symbol.
fn term(signature: &Signature, bank: &mut Bank, seed: &[u16]) -> TermId {
    let mut pool: Vec<TermId> = Vec::new();
    for (index, _) in signature.variables().iter().enumerate() {
        let variable = signature.variable(index as u32);
        pool.push(bank.variable(variable));
    }
    for (index, symbol) in signature.symbols().iter().enumerate() {
        if symbol.arguments.is_empty() {
            pool.push(bank.apply(Symbol(index as u32), &[]));
        }
    }
    let mut last = pool[0];
    for pair in seed.chunks(2) {
        let index = pair[0] as usize % signature.symbols().len();
        let wanted = &signature.symbols()[index].arguments;
        let arguments: Vec<TermId> = wanted
            .iter()
            .enumerate()
            .map(|(place, sort)| {
                // Late terms are large: prefer them.
                let fit: Vec<TermId> = pool
                    .iter()
                    .copied()
                    .filter(|t| bank.sort(*t) == *sort)
                    .collect();
                let back = (pair[pair.len() - 1] as usize >> (4 * place)) % 5;
                fit[fit.len().saturating_sub(1 + back)]
            })
            .collect();
        last = bank.apply(Symbol(index as u32), &arguments);
        if bank.size(last) < 500 {
            pool.push(last);
        }
    }
    last
}

fn reread(theory: &mut Theory, text: &str) -> Result<TermId, TestCaseError> {
    match parse_question(theory, "random", text, None) {
        Ok(Question::Term(term)) => Ok(term),
        Ok(_) => Err(TestCaseError::fail(format!("no term: {text}"))),
        Err(fault) => Err(TestCaseError::fail(fault.render(false, 200))),
    }
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn print_then_read_gives_the_same_term(
        sorts in 1usize..3,
        choices in prop::collection::vec(choice(), 1..9),
        names in prop::collection::vec(any::<usize>(), 9),
        seed in prop::collection::vec(any::<u16>(), 1..40),
        width in 1usize..60,
        which in any::<prop::sample::Index>(),
    ) {
        let mut theory = theory(sorts, &choices, &names);
        let term = term(&theory.signature, &mut theory.bank, &seed);
        let names = TheoryNames(&theory.signature);
        let printer = Printer::new(&names);
        let printed = printer.print(&theory.bank, term, None);
        prop_assert_eq!(printed.missing, 0);
        let (folded, _) = wrap(&printed, width, 4);
        let text = printed.text.clone();
        let places = preorder(&theory.bank, term);
        let (place, subterm) = which.get(&places).clone();
        let marked = printer.print(&theory.bank, term, Some(&place));
        let (wrapped, moved) = wrap(&marked, width, 4);
        // With a bracket in front no sign is taken for a remark or a question.
        prop_assert_eq!(reread(&mut theory, &format!("({text})"))?, term, "{}", text);
        prop_assert_eq!(reread(&mut theory, &format!("({folded})"))?, term, "{}", folded);
        prop_assert_eq!(&marked.text, &text);
        let inside = &text[marked.highlight.unwrap()];
        prop_assert_eq!(reread(&mut theory, &format!("({inside})"))?, subterm, "{}", inside);
        let inside = wrapped[moved.unwrap()].to_owned();
        prop_assert_eq!(reread(&mut theory, &format!("({inside})"))?, subterm, "{}", inside);
    }

    #[test]
    fn no_bracket_can_be_taken_away(
        choices in prop::collection::vec(choice(), 1..9),
        seed in prop::collection::vec(any::<u16>(), 1..12),
    ) {
        // Names that cannot run into each other: only brackets decide.
        let mut theory = theory(1, &choices, &[0, 3, 31, 17, 27, 34, 22, 5, 39]);
        let term = term(&theory.signature, &mut theory.bank, &seed);
        let names = TheoryNames(&theory.signature);
        let text = Printer::new(&names).term(&theory.bank, term);
        let mut open = Vec::new();
        for (at, c) in text.char_indices() {
            if c == '(' {
                open.push(at);
            } else if c == ')' {
                let from = open.pop().unwrap();
                // The brackets of a call follow a name.
                let called = text[..from].ends_with(|c: char| !c.is_whitespace() && c != '(' && !"'-~·!".contains(c))
                    || text[..from].chars().last().is_some_and(|_| is_function(&theory, &text[..from]));
                if called {
                    continue;
                }
                let without = format!("{} {} {}", &text[..from], &text[from + 1..at], &text[at + 1..]);
                let other = parse_question(&mut theory, "random", &without, None);
                prop_assert_ne!(other.ok(), Some(Question::Term(term)), "{} and {}", text, without);
            }
        }
    }

    #[test]
    fn derived_rules_and_orders_round_trip(
        sorts in 1usize..3,
        choices in prop::collection::vec(choice(), 1..9),
        names in prop::collection::vec(any::<usize>(), 9),
        seeds in prop::collection::vec(prop::collection::vec(any::<u16>(), 1..20), 2..8),
        numbers in prop::collection::vec(any::<u32>(), 8),
        shuffle in any::<u64>(),
    ) {
        let mut theory = theory(sorts, &choices, &names);
        let mut rules: Vec<Derived> = Vec::new();
        for (seed, number) in seeds.iter().zip(&numbers) {
            let left = term(&theory.signature, &mut theory.bank, seed);
            let right = term(&theory.signature, &mut theory.bank, &seed[..seed.len() / 2]);
            if theory.bank.sort(left) != theory.bank.sort(right) || rules.iter().any(|r| r.number == *number) {
                continue;
            }
            // More variables than the theory declares, so that some have made-up names.
            let ([left, right], _) = renumber(&mut theory.bank, [left, right]);
            let (left, right) = spread(&mut theory.bank, left, right);
            rules.push(derived(left, right, *number));
        }
        let mut setting = OrderSetting {
            kind: if shuffle & 1 == 0 { OrderKind::Kbo } else { OrderKind::Lpo },
            precedence: Vec::new(),
            weights: Vec::new(),
            variable_weight: 1,
        };
        for index in 0..theory.signature.symbols().len() {
            if shuffle >> (index + 1) & 1 == 1 {
                setting.precedence.insert(0, Symbol(index as u32));
                if setting.kind == OrderKind::Kbo {
                    setting.weights.push((Symbol(index as u32), index as u32));
                    setting.variable_weight = 2;
                }
            }
        }
        set_order(&mut theory, Some(setting.clone()));
        set_derived(&mut theory, rules.clone());
        let saved = theory.document.text();
        let again = read_theory("random", &saved, &NoLoader);
        let mut again = again.map_err(|f| TestCaseError::fail(f[0].render(false, 200)))?;
        prop_assert!(again.refused.is_empty(), "{}", again.refusals()[0].render(false, 200));
        prop_assert_eq!(again.order.as_ref(), Some(&setting), "{}", print_order(&theory.signature, &setting));
        prop_assert_eq!(again.derived.len(), rules.len());
        for (old, new) in theory.derived.iter().zip(&again.derived) {
            let (before, after) = (
                print_derived(&theory.signature, &theory.bank, old),
                print_derived(&again.signature, &again.bank, new),
            );
            prop_assert_eq!(before, after);
            prop_assert_eq!(&old.record, &new.record);
            prop_assert_eq!(shape(&theory.bank, old.left), shape(&again.bank, new.left));
            prop_assert_eq!(shape(&theory.bank, old.right), shape(&again.bank, new.right));
        }
        let same = again.derived.clone();
        set_derived(&mut again, same);
        prop_assert_eq!(again.document.text(), saved);
    }

    #[test]
    fn any_text_at_all_is_read_or_refused(text in "\\PC{0,60}", lines in prop::collection::vec("(law|claim|constant|infix|rule|define|variable|order|derived|use|note|sort|function)? ?[-a-c*+='():,\"#> 0-9]{0,20}", 0..6)) {
        let all = format!("{text}\n{}", lines.join("\n"));
        let group = "infix * 40 left\nprefix - 60\ninfix - 30 left\nfunction f 1\nvariable a b\nconstant c\n";
        for text in [all.clone(), format!("{group}{all}")] {
            match read_theory("random", &text, &NoLoader) {
                Ok(theory) => prop_assert_eq!(theory.document.text(), text),
                Err(faults) => {
                    for fault in faults {
                        let lines = text.split('\n').count();
                        prop_assert!(fault.line <= lines && fault.line > 0, "{}", fault);
                        prop_assert!(!fault.help.is_empty(), "{}", fault);
                        for width in [20, 80] {
                            let drawn = fault.render(false, width);
                            prop_assert!(drawn.contains(&format!("random:{}:{}", fault.line, fault.column)), "{}", drawn);
                        }
                    }
                }
            }
        }
    }
}

/// Does the text end with the name of a function?
fn is_function(theory: &Theory, text: &str) -> bool {
    theory.signature.symbols().iter().any(|symbol| {
        symbol.fixity == Fixity::Plain
            && !symbol.arguments.is_empty()
            && text.ends_with(&quote_symbol(&symbol.name))
    })
}

/// The first side with a new variable for the second occurrence of each sort, so that there are
/// more variables than declared ones.
fn spread(bank: &mut Bank, left: TermId, right: TermId) -> (TermId, TermId) {
    let places = preorder(bank, left);
    let mut made = left;
    let mut next = 100;
    for (place, term) in places {
        if let Some(variable) = bank.as_variable(term)
            && subterm_at(bank, made, &place) == Some(term)
        {
            let index = next;
            next += 1;
            let fresh = bank.variable(Variable { index, ..variable });
            made = equable::term::replace_at(bank, made, &place, fresh);
        }
    }
    let ([left, right], _) = renumber(bank, [made, right]);
    (left, right)
}

fn derived(left: TermId, right: TermId, number: u32) -> Derived {
    let by = |rule: u32| Use {
        rule,
        backward: rule.is_multiple_of(2),
    };
    let step = |rule: u32| RecordStep {
        by: by(rule),
        at: (0..rule % 3).collect(),
    };
    let origin = match number % 3 {
        0 => Origin::Law(
            ["assoc", "+ associative", "left-unit", "rule"][number as usize / 3 % 4].into(),
        ),
        1 => Origin::Rule(number / 2),
        _ => Origin::Overlap {
            outer: by(number / 2),
            at: (0..number % 4).collect(),
            inner: by(7),
        },
    };
    Derived {
        number,
        left,
        right,
        oriented: number % 5 < 3,
        retired: number.is_multiple_of(7),
        record: Record {
            origin,
            left: (0..number % 3).map(step).collect(),
            right: (0..number % 4).map(step).collect(),
            swapped: number % 11 < 5,
        },
        line: LineId(0),
    }
}

/// A term as words in prefix order, to compare terms of two banks.
fn shape(bank: &Bank, term: TermId) -> Vec<String> {
    preorder(bank, term)
        .into_iter()
        .map(|(_, t)| format!("{:?}", bank.head(t)))
        .collect()
}

#[test]
fn sides_and_sorts_are_what_the_test_takes_them_for() {
    let choices = [Choice {
        fixity: 0,
        strength: 50,
        side: 1,
        sorts: [0, 1, 0],
    }];
    let theory = theory(2, &choices, &[0]);
    let star = &theory.signature.symbols()[2];
    assert_eq!(
        star.fixity,
        Fixity::Infix {
            strength: 50,
            side: Side::Right
        }
    );
    assert_eq!(
        (star.arguments.as_slice(), star.result),
        ([Sort(0), Sort(1)].as_slice(), Sort(0))
    );
}
