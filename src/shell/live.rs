//! The one line that shows how far work is.

use super::layout::{columns, cut};
use super::quantity::{number, show_duration};
use crate::session::Progress;
use std::io::Write;
use std::time::{Duration, Instant};

/// Work that is done sooner shows nothing.
const PATIENCE: Duration = Duration::from_millis(500);
/// Between two drawings.
const PAUSE: Duration = Duration::from_millis(100);

/// The line, or nothing where there is no terminal.
pub struct Live {
    enabled: bool,
    begun: Instant,
    drawn: Option<Instant>,
}

impl Live {
    /// Work begins.
    pub fn new(enabled: bool) -> Live {
        Live {
            enabled,
            begun: Instant::now(),
            drawn: None,
        }
    }

    /// Draws the line, if it is time to.
    pub fn show(&mut self, progress: &Progress) {
        let now = Instant::now();
        let is_soon = self.drawn.is_some_and(|drawn| now - drawn < PAUSE);
        if !self.enabled || is_soon || now - self.begun < PATIENCE {
            return;
        }
        self.drawn = Some(now);
        let width = terminal_size::terminal_size().map_or(80, |(columns, _)| columns.0);
        // The last column stays free: some terminals go to the next line there.
        let line = line(progress, usize::from(width).saturating_sub(1));
        draw(&format!("\r\x1b[K{line}"));
    }

    /// Takes the line away.
    pub fn clear(&mut self) {
        if self.drawn.take().is_some() {
            draw("\r\x1b[K");
        }
    }
}

fn draw(text: &str) {
    let mut stream = std::io::stderr().lock();
    // A line of progress that cannot be drawn is not worth a word.
    let _ = stream.write_all(text.as_bytes());
    let _ = stream.flush();
}

/// As many facts as fit, the most important first.
fn line(progress: &Progress, width: usize) -> String {
    let elapsed = show_tenths(progress.elapsed);
    let doing = columns(&progress.doing) + 3;
    let elapsed = match progress.budget.map(show_duration) {
        Some(budget) if doing + columns(&elapsed) + 4 + columns(&budget) <= width => {
            format!("{elapsed} of {budget}")
        }
        _ => elapsed,
    };
    let seconds = progress.elapsed.as_secs_f64().max(0.001);
    let rate = (progress.formed as f64 / seconds) as u64;
    let facts = [
        elapsed,
        format!("{} rules", number(progress.rules as u128)),
        format!("{} waiting", number(progress.waiting as u128)),
        format!("{} pairs/s", number(rate)),
    ];
    let mut line = progress.doing.clone();
    for fact in facts {
        if columns(&line) + 3 + columns(&fact) > width {
            break;
        }
        line += &format!(" · {fact}");
    }
    cut(&line, width)
}

/// Seconds with one digit behind the point, so that the line does not jump.
fn show_tenths(time: Duration) -> String {
    if time.as_secs() < 60 {
        return format!("{:.1} s", time.as_secs_f64());
    }
    show_duration(Duration::from_secs(time.as_secs()))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_line_fits_every_width() {
        let progress = Progress {
            doing: "completing".to_owned(),
            elapsed: Duration::from_millis(3240),
            budget: Some(Duration::from_secs(60)),
            rules: 312,
            waiting: 4120,
            formed: 48_000,
        };
        let all = "completing · 3.2 s of 1 min · 312 rules · 4,120 waiting · 14,814 pairs/s";
        assert_eq!(line(&progress, 79), all);
        assert_eq!(line(&progress, 19), "completing · 3.2 s");
        for width in 0..90 {
            assert!(columns(&line(&progress, width)) <= width);
        }
    }
}
