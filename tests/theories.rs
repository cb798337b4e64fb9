//! The claims of every theory that the program carries.

use equable::session::{Control, Library, Session, Verdict};
use equable::theory::Expected;
use std::sync::Arc;
use std::time::Duration;

/// Every claim is settled as it is stated: by a proof, by an algebra, or by a complete rule set;
/// and the checker accepts all evidence.
#[test]
fn claims_are_settled_as_they_are_stated() {
    for listed in Library::default().list() {
        let opened = Session::open(&listed.name, Library::default());
        let mut session = opened
            .unwrap_or_else(|_| panic!("{} opens", listed.name))
            .session;
        let claims = session.theory().claims.clone();
        for claim in claims {
            let mut control = Control {
                stop: Arc::default(),
                watch: &mut |_| (),
            };
            let within = Duration::from_secs(60);
            let answer = session.ask(claim.left, claim.right, within, &mut control);
            let answer = answer.unwrap_or_else(|fault| panic!("{}: {fault:?}", listed.name));
            let about = format!("{}: {} {:?}", listed.name, answer.question, answer.frontier);
            assert!(
                answer.fault.is_none(),
                "{about} {:?}",
                answer.fault.as_ref().map(|f| &f.0)
            );
            match claim.expected {
                Expected::Equal => assert_eq!(answer.verdict, Verdict::Equal, "{about}"),
                Expected::NotEqual => assert_eq!(answer.verdict, Verdict::NotEqual, "{about}"),
            }
        }
    }
}
