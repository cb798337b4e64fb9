//! `simplify`, `simplify strong`, `simplify chosen prime on`

use super::{Command, Group, Operand};
use crate::engine::{Arrow, Arrows, Cell, Technique};
use crate::language::{Fault, nearest};
use crate::session::Simplifying;
use crate::shell::desk::Shell;
use crate::shell::layout::{fold, fold_hanging, pad};
use crate::shell::line::Line;
use crate::shell::problem::Problem;
use crate::shell::quantity::{number, show_duration};
use crate::shell::screen::{Ink, Look};
use std::ops::Range;
use std::time::Duration;

/// The command.
pub const COMMAND: Command = Command {
    word: "simplify",
    group: Group::Working,
    forms: &[
        ("simplify", "which technique simplifies or deletes what"),
        ("simplify strong", "plain, usual, strong or everything"),
        ("simplify chosen prime on", "one technique on or off"),
        ("simplify auto", "leave it to the program"),
    ],
    page: "Laws make rules, rules overlap, and each overlap makes a new pair of terms, which waits \
           until it is chosen; if it does not join by then, it becomes a new rule. The table says \
           which technique deletes or simplifies what, and when: new pairs when they are formed \
           and when they are chosen, new pairs of one rule by each other (siblings), active rules \
           by a new one, and waiting pairs by the active rules. Beside each technique stand how \
           many of the pairs or rules that it was tried on it has deleted or simplified, and its \
           share of the time.\n\
           rewriting: to normal form; a pair with one normal form is gone. instance: of an \
           equation that is kept. ac: equal but for associativity and commutativity. connected: \
           by steps below the term that both rules rewrite (Bachmair and Dershowitz 1988). ground: \
           joins for every order of its variables (Martin and Nipkow 1990). prime: only pairs are \
           kept in which nothing below the place of the inner rule can be rewritten (Kapur, Musser \
           and Narendran 1988). orphans: a rule that the pair comes from is retired. Waiting pairs \
           are rewritten from time to time, the best ones, to be weighed again.\n\
           plain is rewriting alone, usual what the program does by itself, strong every criterion \
           when a pair is chosen and equal siblings once, everything all that can be on, which \
           often costs more than it saves. No setting makes an answer wrong; some find it sooner. Left to itself the program \
           uses the table called usual where it looks for a complete set of rules.",
    example: "open group\ncomplete\nsimplify\nsimplify chosen prime on\nsimplify strong\nsimplify auto",
    operand: Operand::Words,
    run,
};

/// The word of an arrow, and what it is.
const ARROWS: [(&str, &str); Arrow::ALL.len()] = [
    ("formed", "new pairs by active rules, when they are formed"),
    ("chosen", "new pairs by active rules, when they are chosen"),
    ("siblings", "new pairs by each other"),
    ("queued", "new pairs by waiting pairs"),
    ("active", "active rules by a new one"),
    ("waiting", "waiting pairs by active rules"),
];

const TECHNIQUES: [&str; Technique::ALL.len()] = [
    "rewriting",
    "instance",
    "ac",
    "connected",
    "ground",
    "prime",
    "orphans",
];

fn run(shell: &mut Shell, mut line: Line<'_>) -> Result<(), Problem> {
    let Some((word, range)) = line.word() else {
        let text = show(&shell.session.simplifying(), shell.look());
        shell.out(&text);
        return Ok(());
    };
    let preset = Arrows::PRESETS.iter().find(|(name, _)| *name == word);
    let arrows = match preset {
        Some((_, arrows)) => Some(*arrows),
        None if word == "auto" => None,
        None => Some(one_cell(shell, &mut line, word, range)?),
    };
    line.end()?;
    shell.session.set_arrows(arrows, line.text.trim());
    Ok(())
}

/// Reads `ARROW TECHNIQUE on`; the arrow has been read.
fn one_cell(
    shell: &Shell,
    line: &mut Line<'_>,
    word: &str,
    range: Range<usize>,
) -> Result<Arrows, Problem> {
    let arrows = ARROWS.map(|(name, _)| name);
    let presets = Arrows::PRESETS.map(|(name, _)| name);
    let Some(arrow) = arrows.iter().position(|name| *name == word) else {
        let all = arrows.iter().chain(&presets).chain(&["auto"]);
        let fault = Fault::new(range, format!("simplify knows no {word}"));
        return Err(line.problem(unknown(fault, word, &all.copied().collect::<Vec<_>>())));
    };
    let arrow = Arrow::ALL[arrow];
    let (word, range) = next(line, &format!("simplify {word} instance on"))?;
    let Some(technique) = TECHNIQUES.iter().position(|name| *name == word) else {
        let fault = Fault::new(range, format!("there is no technique {word}"));
        return Err(line.problem(unknown(fault, word, &TECHNIQUES)));
    };
    let technique = Technique::ALL[technique];
    let technique_range = range;
    let (word, range) = next(line, "simplify chosen instance on")?;
    let now = shell.session.simplifying().arrows;
    let changed = match word {
        "on" => now.with(arrow, technique),
        "off" => now.without(arrow, technique),
        _ => {
            let fault = Fault::new(range, "on or off is expected here");
            return Err(line.problem(fault.help("simplify alone shows what is on now")));
        }
    };
    let whole = technique_range.start..range.end;
    match (Arrows::cell(arrow, technique), word) {
        (Cell::Impossible, "on") => {
            let fault = Fault::new(whole, "this cannot be done here");
            Err(line.problem(fault.help(why_not(arrow))))
        }
        (Cell::Always, "off") => {
            let fault = Fault::new(whole, "this is always done");
            Err(line.problem(fault.help("pairs are weighed, and rules made, in normal form")))
        }
        _ => Ok(changed),
    }
}

fn unknown(fault: Fault, word: &str, known: &[&str]) -> Fault {
    let fault = match nearest(word, known.iter().copied()) {
        Some(near) => fault.help(format!("did you mean {near}?")),
        None => fault,
    };
    fault.help(format!("it knows {}", known.join(", ")))
}

fn next<'t>(line: &mut Line<'t>, example: &str) -> Result<(&'t str, Range<usize>), Problem> {
    line.word().ok_or_else(|| {
        let fault = Fault::new(line.rest_range(), "the line ends too soon");
        line.problem(fault.help(format!("write it like {example}")))
    })
}

fn why_not(arrow: Arrow) -> &'static str {
    match arrow {
        Arrow::Formed | Arrow::Chosen => {
            "both rules of such a pair are active; orphans are looked for among the waiting pairs"
        }
        Arrow::Siblings => "new pairs are only compared with each other: instance",
        Arrow::Queued => "waiting pairs are kept as recipes, not as terms",
        Arrow::Active => {
            "active rules are rewritten, or deleted as instances; the rest is for pairs"
        }
        Arrow::Waiting => {
            "waiting pairs are rewritten or orphans; the rest is done when one is chosen"
        }
    }
}

/// From so many columns on, the numbers stand in columns of their own.
const WIDE: usize = 64;

fn show(now: &Simplifying, look: Look) -> String {
    let named = Arrows::PRESETS
        .iter()
        .find(|(_, table)| *table == now.arrows);
    let name = named.map_or("a table of your own", |(name, _)| name);
    let mut text = if now.stated {
        fold(name, look.width, 0)
    } else {
        fold(&format!("auto: {name}"), look.width, 0)
    };
    for (arrow, (word, meaning)) in Arrow::ALL.into_iter().zip(ARROWS) {
        let heading = fold_hanging(&format!("{word}: {meaning}"), look.width, 0, 4);
        for line in heading.lines() {
            text += &format!("{}\n", look.ink(Ink::Strong, line));
        }
        let before = text.len();
        for (technique, name) in Technique::ALL.into_iter().zip(TECHNIQUES) {
            let tally = now.tallies.of(arrow, technique);
            let state = match Arrows::cell(arrow, technique) {
                Cell::Impossible => continue,
                Cell::Always => "always",
                Cell::Optional if now.arrows.has(arrow, technique) => "on",
                Cell::Optional => "off",
            };
            let share = share(tally.cost(), now.worked);
            text += &row(name, state, [tally.deleted, tally.asked], &share, look);
        }
        if text.len() == before {
            text += &fold(&format!("– ({})", why_not(arrow)), look.width, 2);
        }
    }
    if now.worked > Duration::ZERO {
        let time = show_duration(now.worked);
        let note = format!(
            "Deleted or simplified, of those that it was tried on; then the share of the {time} \
             that the engines have worked."
        );
        text += &fold(&note, look.width, 0);
    }
    if !now.stated && now.helpers {
        let note =
            "Engines that only look for a proof of the last question had tables of their own.";
        text += &fold(note, look.width, 0);
    }
    text
}

fn row(name: &str, state: &str, [deleted, asked]: [u64; 2], share: &str, look: Look) -> String {
    let cell = format!("  {} {}", pad(name, 10), pad(state, 7));
    if asked == 0 {
        return fold(cell.trim(), look.width, 2);
    }
    let deleted = format!("{} of {}", number(deleted), number(asked));
    if look.width >= WIDE {
        return format!("{cell} {deleted:>26} {share:>13}\n");
    }
    let cell = fold(&format!("{name} {state}"), look.width, 2);
    cell + &fold(&format!("{deleted}, {share}"), look.width, 6)
}

/// The share of a time in another one.
fn share(part: Duration, whole: Duration) -> String {
    let percent = 100.0 * part.as_secs_f64() / whole.as_secs_f64().max(f64::MIN_POSITIVE);
    if percent < 0.1 {
        "under 0.1 %".to_owned()
    } else if percent < 9.95 {
        format!("{percent:.1} %")
    } else {
        format!("{:.0} %", percent.min(100.0))
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::engine::Tallies;
    use crate::shell::layout::columns;

    #[test]
    fn the_table_fits_narrow_screens() {
        let now = Simplifying {
            arrows: Arrows::USUAL,
            stated: false,
            tallies: Tallies::default(),
            worked: Duration::from_secs(3),
            helpers: true,
        };
        for width in [40, 64, 80] {
            let look = Look {
                color: false,
                width,
            };
            let mut text = show(&now, look);
            let counts = [12_345_678, 123_456_789];
            text += &row("connected", "always", counts, "under 0.1 %", look);
            for line in text.lines() {
                assert!(columns(line) <= width, "{width}: {line}");
            }
        }
        show(
            &now,
            Look {
                color: false,
                width: 1,
            },
        );
    }

    #[test]
    fn shares_are_read_easily() {
        let of = |part| share(Duration::from_micros(part), Duration::from_millis(1));
        assert_eq!(of(0), "under 0.1 %");
        assert_eq!(of(12), "1.2 %");
        assert_eq!(of(415), "42 %");
        assert_eq!(share(Duration::ZERO, Duration::ZERO), "under 0.1 %");
    }
}
