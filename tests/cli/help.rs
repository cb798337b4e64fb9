//! Help that is true: every word has a page, and every example can be typed as it stands.

use super::program::Place;
use equable::language::{DECLARATIONS, RESERVED};

fn words() -> Vec<&'static str> {
    let inner = ["when", "and", "within", "most", "is", "over"];
    let topics = ["questions", "names", "properties"];
    let reserved = RESERVED
        .iter()
        .copied()
        .filter(|word| !inner.contains(word));
    reserved.chain(topics).collect()
}

#[test]
fn examples_can_be_typed() {
    let place = Place::new();
    let input: String = words()
        .iter()
        .map(|word| format!("help {word}\n"))
        .collect();
    let ran = place.run(&[], input);
    let mut examples: Vec<String> = Vec::new();
    let mut inside = false;
    for line in ran.out.lines() {
        match line.strip_prefix("    ") {
            _ if line == "Example" => {
                inside = true;
                examples.push(String::new());
            }
            Some(typed) if inside => *examples.last_mut().unwrap() += &format!("{typed}\n"),
            _ => inside = false,
        }
    }
    assert!(examples.len() > 35, "{} examples", examples.len());
    for example in examples {
        let ran = Place::new().run(&[], &example);
        assert_eq!(ran.status, 0, "{example}{}{}", ran.out, ran.err);
    }
}

#[test]
fn every_word_is_explained_or_said_to_come_later() {
    let place = Place::new();
    for word in words() {
        let ran = place.run(&[], format!("help {word}\n"));
        if ran.status != 0 {
            assert!(ran.err.contains("does not have"), "{word}: {}", ran.err);
            assert!(!DECLARATIONS.contains(&word), "{word}");
        }
    }
}
