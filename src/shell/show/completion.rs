//! How a completion went.

use crate::session::Completion;
use crate::shell::layout::{fold, fold_hanging, heading};
use crate::shell::problem::stop_text;
use crate::shell::quantity::{count, number, show_duration};
use crate::shell::screen::{Ink, Look};
use crate::shell::show::Place;

/// A completion: the outcome, then the order and why it was chosen.
pub fn completion(done: &Completion, look: Look, place: Place) -> String {
    let mut facts = vec![count(done.rules, "rule")];
    let pairs = usize::try_from(done.pairs).unwrap_or(usize::MAX);
    facts.push(count(pairs, "pair"));
    if done.complete {
        facts.push("checked".to_owned());
    } else if let Some(stopped) = done.stopped {
        facts.push(stop_text(stopped).to_owned());
    }
    facts.push(show_duration(done.elapsed));
    let (ink, word) = if done.complete {
        (Ink::Good, "complete")
    } else {
        (Ink::Open, "not complete")
    };
    let mut text = heading(look, ink, word, &facts);
    let unoriented = done.rules.saturating_sub(done.oriented);
    if done.complete && done.ordered {
        let ordered = format!(
            "{} used both ways, where that makes a term smaller; every equation is decided all the same",
            if unoriented == 1 {
                "1 equation is".to_owned()
            } else {
                format!("{} equations are", number(unoriented as u128))
            }
        );
        text += &fold(&ordered, look.width, 4);
    }
    if !done.complete && done.waiting > 0 {
        let wait = if done.waiting == 1 {
            "1 pair waits".to_owned()
        } else {
            format!("{} pairs wait", number(done.waiting as u128))
        };
        let wait = match place {
            Place::Shell => {
                format!("{wait}; everything found is kept, and complete goes on from here")
            }
            Place::Batch => wait,
        };
        text += &fold(&wait, look.width, 4);
    }
    if let Some(remark) = &done.remark {
        text += &fold(remark, look.width, 4);
    }
    text + &order_lines(&done.order, &done.why, done.orders, look)
}

/// The order, as a line to type, and why it is this one.
fn order_lines(order: &str, why: &str, orders: usize, look: Look) -> String {
    let mut text = fold_hanging(order, look.width, 4, 8);
    let mut why = why.to_owned();
    if orders > 1 && why.is_empty() {
        why = format!("the best of {} orders", number(orders as u128));
    }
    if !why.is_empty() {
        text += &fold(&why, look.width, 4);
    }
    text
}
