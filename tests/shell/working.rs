//! Long work: the live line and Ctrl-C; narrow terminals.

use super::terminal::{CTRL_C, Terminal};

/// With idempotence and associativity over free variables the rules of bands do not come to an
/// end.
fn endless(home: &std::path::Path, columns: u16) -> Terminal {
    let mut terminal = Terminal::open(home, columns, &["band"]);
    terminal.line("complete");
    terminal
}

#[test]
fn ctrl_c_stops_and_everything_is_kept() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = endless(home.path(), 80);
    terminal.see("pairs/s");
    terminal.see(" rules · ");
    terminal.keys(CTRL_C);
    terminal.see("stopped by Ctrl-C");
    terminal.prompt();
    assert!(
        !terminal.contents().contains("pairs/s"),
        "the live line is gone"
    );
    terminal.line("rules");
    terminal.see("; not complete");
    terminal.line("x * x = x");
    terminal.see("equal        answer 1");
    terminal.line("prove x * y = y * x within 10m");
    terminal.see("looking for a proof");
    terminal.keys(CTRL_C);
    terminal.see("undecided    answer 2 · stopped by Ctrl-C");
    terminal.line("quit");
    assert_eq!(terminal.end(), 0);
}

#[test]
fn there_is_no_live_line_when_plain() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &["band", "--plain"]);
    terminal.line("complete within 1s");
    terminal.see("the time was used up");
    assert!(!terminal.all().contains("pairs/s"));
}

#[test]
fn twenty_columns_are_enough() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = endless(home.path(), 20);
    terminal.until("the live line", |screen| {
        let mut rows = screen.lines();
        rows.any(|row| row.starts_with("complet") && row.contains(" s"))
    });
    terminal.keys(CTRL_C);
    terminal.see("Ctrl-C");
    terminal.prompt();
    terminal.line("open group");
    terminal.see("group>");
    for line in [
        "complete",
        "i(x * (y * z)) = i(z) * (i(y) * i(x))",
        "x * y = y * x",
        "i(x * (y * (x * y)))",
        "trace i(x * (y * (x * y)))",
        "check",
        "proof 1",
        "rules",
        "laws",
        "status",
        "answers",
        "theories",
        "help",
        "help law",
        "nonsense * (y * (x * y))",
        "drop nothing-of-this-name",
    ] {
        terminal.line(line);
    }
    terminal.line("budget");
    terminal.see("ask");
    terminal.line("quit");
    assert_eq!(terminal.end(), 0);
    assert!(!terminal.all().contains("fault of the program"));
}
