//! The claims of every theory that the program carries.

use equable::session::{Control, Library, Session, Verdict};
use std::sync::Arc;
use std::time::Duration;

#[test]
fn no_claim_is_answered_the_wrong_way() {
    let folder = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("theories");
    let mut files: Vec<_> = std::fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .collect();
    files.sort();
    for file in files {
        let begun = std::time::Instant::now();
        let opened = Session::open(file.to_str().unwrap(), Library::default());
        let mut session = opened.unwrap_or_else(|_| panic!("{file:?} opens")).session;
        let mut control = Control {
            stop: Arc::default(),
            watch: &mut |_| (),
        };
        let within = Duration::from_secs(2);
        let results = session.check(within, &mut control, &mut |result| {
            let answer = &result.answer;
            assert_ne!(
                result.is_as_claimed(),
                Some(false),
                "{file:?}: {}",
                result.text
            );
            assert!(answer.fault.is_none(), "{file:?}: {}", result.text);
            if answer.verdict == Verdict::Undecided {
                println!("  undecided: {} {:?}", result.text, answer.frontier);
            }
        });
        let results = results.unwrap_or_else(|fault| panic!("{file:?}: {fault:?}"));
        println!(
            "{:?} {} claims {:?} {:?}",
            file.file_name().unwrap(),
            results.len(),
            begun.elapsed(),
            session.status().complete
        );
    }
}
