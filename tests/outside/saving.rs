//! Saving and opening: nothing changes, and no line that was tampered with is believed.

use crate::common::{Random, alone, complete_within, session, theory_files};
use equable::session::{Library, Opened, Session};
use equable::theory::{Derived, Origin};
use std::collections::BTreeSet;
use std::path::Path;
use std::time::Duration;

fn open(path: &Path) -> Opened {
    let name = path.to_str().expect("UTF-8");
    Session::open(name, Library::default()).unwrap_or_else(|fault| panic!("{name}: {fault:?}"))
}

fn derived_lines(text: &str) -> Vec<usize> {
    let numbered = text.lines().enumerate();
    let derived = numbered.filter(|(_, line)| line.starts_with("derived "));
    derived.map(|(place, _)| place).collect()
}

/// Completes for a while, saves, opens and saves again.
fn comes_back(file: &Path, within: Duration) {
    let folder = tempfile::tempdir().expect("a folder");
    let mut first = open(file).session;
    complete_within(&mut first, within);
    let [saved, again] = ["first.theory", "second.theory"].map(|name| folder.path().join(name));
    first.save(Some(&saved)).expect("saved");
    let text = std::fs::read_to_string(&saved).expect("UTF-8");

    let mut second = open(&saved);
    assert!(
        second.refused.is_empty(),
        "{file:?}: {}",
        second.refused[0].render(false, 80)
    );
    assert_eq!(second.derived, derived_lines(&text).len(), "{file:?}");
    assert_eq!(second.session.theory().document.text(), text, "{file:?}");
    assert!(!second.session.is_changed(), "{file:?}");
    let texts = |session: &Session| -> BTreeSet<String> {
        session.rules().into_iter().map(|rule| rule.text).collect()
    };
    assert_eq!(texts(&second.session), texts(&first), "{file:?}");
    assert_eq!(second.session.laws(), first.laws(), "{file:?}");
    assert_eq!(second.session.claims(), first.claims(), "{file:?}");
    second.session.save(Some(&again)).expect("saved");
    let bytes = std::fs::read(&again).expect("it was saved");
    assert!(
        bytes == text.as_bytes(),
        "{file:?} changes when it is opened and saved"
    );
    // What was in the file before it was completed is there, in its order.
    let mut lines = text.lines();
    for line in std::fs::read_to_string(file).expect("UTF-8").lines() {
        let kept = lines.any(|other| other == line);
        assert!(kept, "{file:?}: lost or moved: {line}");
    }
}

#[test]
fn theories_come_back_as_they_were() {
    for file in theory_files().iter().step_by(2) {
        comes_back(file, Duration::from_secs(1));
    }
}

#[test]
fn theories_come_back_as_they_were_too() {
    for file in theory_files().iter().skip(1).step_by(2) {
        comes_back(file, Duration::from_secs(1));
    }
}

/// A theory that was completed for a while, as text, with what was derived.
struct Saved {
    text: String,
    derived: Vec<Derived>,
    laws: usize,
    claims: usize,
    /// The equations of the derived lines, and of the active rules.
    equations: BTreeSet<String>,
}

impl Saved {
    fn new(mut session: Session, within: Duration) -> Self {
        complete_within(&mut session, within);
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join("saved.theory");
        session.save(Some(&path)).expect("saved");
        let text = std::fs::read_to_string(&path).expect("UTF-8");
        let lines = derived_lines(&text);
        let lines = lines
            .into_iter()
            .map(|place| text.lines().nth(place).expect("a line"));
        Saved {
            equations: lines.map(equation).collect(),
            derived: session.theory().derived.clone(),
            laws: session.theory().laws.len(),
            claims: session.theory().claims.len(),
            text,
        }
    }

    fn named(name: &str, within: Duration) -> Self {
        let opened = Session::open(name, Library::default());
        Saved::new(opened.unwrap_or_else(|_| panic!("{name}")).session, within)
    }

    /// The text with one line changed or, with nothing in its place, taken out; opened.
    fn open_with(&self, place: usize, line: Option<&str>) -> Opened {
        let lines = self.text.lines().enumerate();
        let text: String = lines
            .filter_map(|(n, old)| if n == place { line } else { Some(old) })
            .flat_map(|line| [line, "\n"])
            .collect();
        let folder = tempfile::tempdir().expect("a folder");
        let path = folder.path().join("tampered.theory");
        std::fs::write(&path, &text).expect("written");
        let opened = open(&path);
        let theory = opened.session.theory();
        assert_eq!(theory.document.text(), text, "the text is kept as it is");
        assert_eq!(theory.laws.len(), self.laws, "{line:?}");
        assert_eq!(theory.claims.len(), self.claims, "{line:?}");
        let told = opened.derived + opened.refused.len();
        assert_eq!(
            told,
            derived_lines(&text).len(),
            "{line:?}: each line is taken or refused"
        );
        opened
    }

    /// The derived rules that rest on one of them, itself included, by their places.
    fn resting_on(&self, place: usize) -> BTreeSet<usize> {
        let mut numbers = BTreeSet::from([self.derived[place].number]);
        let mut found = BTreeSet::from([place]);
        for (later, rule) in self.derived.iter().enumerate().skip(place + 1) {
            if uses(rule).iter().any(|number| numbers.contains(number)) {
                numbers.insert(rule.number);
                found.insert(later);
            }
        }
        found
    }
}

/// The numbers of the rules that a record uses.
fn uses(rule: &Derived) -> Vec<u32> {
    let record = &rule.record;
    let steps = record
        .left
        .iter()
        .chain(&record.right)
        .map(|step| step.by.rule);
    let origin = match &record.origin {
        Origin::Law(_) => vec![],
        Origin::Rule(number) => vec![*number],
        Origin::Overlap { outer, inner, .. } => vec![outer.rule, inner.rule],
    };
    steps.chain(origin).collect()
}

/// The equation of a derived line, as text, whichever way it may be used.
fn equation(line: &str) -> String {
    let (number, _) = line
        .strip_prefix("derived ")
        .expect("such a line")
        .split_once(' ')
        .expect("a space");
    let after = if number.ends_with(':') { ": " } else { "): " };
    let (_, rest) = line.split_once(after).expect("a colon");
    let (equation, _) = rest.rsplit_once(" : ").expect("a record");
    equation.replace(" -> ", " = ")
}

/// One token of a derived line, behind its number, changed, left out or doubled.
fn tampered(line: &str, random: &mut Random) -> String {
    let mut tokens: Vec<String> = Vec::new();
    let mut before = None;
    for sign in line.chars() {
        let kind = (sign.is_alphanumeric(), sign.is_whitespace());
        match tokens.last_mut() {
            Some(last) if before == Some(kind) && kind != (false, false) => last.push(sign),
            _ => tokens.push(sign.into()),
        }
        before = Some(kind);
    }
    // `derived`, a space and the number stay.
    let place = 3 + random.below(tokens.len() - 3);
    let other = tokens[3 + random.below(tokens.len() - 3)].clone();
    match tokens[place].parse::<u32>() {
        Ok(number) if random.below(3) > 0 => {
            let near = [number + 1, number.saturating_sub(1), number / 2, 0];
            tokens[place] = random.one_of(&near).to_string();
        }
        _ => match random.below(3) {
            0 => tokens[place] = other,
            1 => drop(tokens.remove(place)),
            _ => {
                let doubled = tokens[place].clone();
                tokens.insert(place, doubled);
            }
        },
    }
    tokens.concat()
}

fn examples() -> Vec<Saved> {
    let short = Duration::from_millis(100);
    let complete = Duration::from_secs(5);
    let saved = vec![
        Saved::named("group", complete),
        Saved::named("loop", complete),
        Saved::named("boolean_ring", complete),
        Saved::named("triangle_2_3_4", complete),
        Saved::named("lattice", short),
        // Sorts, so that some lines say those of their variables; not complete.
        Saved::new(
            session(
                "sort A B\nfunction f : A A -> B\nfunction g : B -> A\ninfix * 40 left : A A -> A\n\
                 variable x y z : A\nlaw (x * y) * z = x * (y * z)\nlaw g(f(x, x)) = x\n\
                 law f(x, y * x) = f(y, x)\nlaw x * x = g(f(x, x))\n",
            ),
            short,
        ),
    ];
    assert!(saved.iter().all(|saved| saved.derived.len() > 5));
    saved
}

#[test]
fn a_line_that_was_tampered_with_is_refused_or_says_the_same() {
    let mut random = Random(0xbad);
    let (mut refused, mut taken) = (0, 0);
    for saved in examples() {
        let lines = derived_lines(&saved.text);
        for _ in 0..120 {
            let which = random.below(lines.len().min(60));
            let line = saved.text.lines().nth(lines[which]).expect("a line");
            let changed = tampered(line, &mut random);
            let mut opened = saved.open_with(lines[which], Some(&changed));
            let resting = saved.resting_on(which).len();
            assert!(
                opened.refused.len() <= resting,
                "{changed}: {} refused, {resting} rest on it, {}",
                opened.refused.len(),
                opened.refused[0].render(false, 80)
            );
            for rule in opened.session.rules() {
                let equation = rule.text.replace(" -> ", " = ");
                let known = saved.equations.contains(&equation);
                assert!(
                    known,
                    "{line}\nwas changed to\n{changed}\nand gives {equation}"
                );
            }
            refused += usize::from(!opened.refused.is_empty());
            taken += usize::from(opened.refused.is_empty());
            // The session can be used, whatever was refused.
            let work = Duration::from_millis(5);
            let completion = alone(|control| opened.session.complete(Some(work), control));
            assert!(completion.expect("an order").fault.is_none(), "{changed}");
        }
    }
    assert!(
        refused > 100 && taken > 10,
        "{refused} refused, {taken} taken"
    );
}

#[test]
fn rules_that_rest_on_a_missing_line_are_refused_and_no_others() {
    for saved in examples() {
        let lines = derived_lines(&saved.text);
        for (which, place) in lines.iter().enumerate().take(40) {
            let opened = saved.open_with(*place, None);
            let resting = saved.resting_on(which).len() - 1;
            assert_eq!(opened.refused.len(), resting, "without line {}", place + 1);
            assert_eq!(opened.derived, lines.len() - 1 - resting);
        }
    }
}

#[test]
fn a_law_that_was_changed_takes_its_rules_with_it() {
    let saved = Saved::named("group", Duration::from_secs(5));
    let text = saved
        .text
        .replace("law left-unit: e * x = x", "law left-unit: e * x = e");
    assert_ne!(text, saved.text);
    let folder = tempfile::tempdir().expect("a folder");
    let path = folder.path().join("changed.theory");
    std::fs::write(&path, text).expect("written");
    let opened = open(&path);
    let unit = saved
        .derived
        .iter()
        .position(|rule| rule.record.origin == Origin::Law("left-unit".to_owned()));
    let resting = saved.resting_on(unit.expect("a rule is that law")).len();
    assert_eq!(opened.refused.len(), resting);
}
