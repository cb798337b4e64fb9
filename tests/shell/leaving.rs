//! Nothing is lost silently.

use super::terminal::{CTRL_D, Terminal};

#[test]
fn changes_are_asked_about_once() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.line("new gauges");
    terminal.line("constant harbour");
    terminal.line("quit");
    terminal.see("gauges has changes that are not saved.");
    terminal.keys("back\r");
    terminal.see("the theory stays open");
    // There is no file yet, so that yes cannot be done, and nothing is lost.
    terminal.line("open group");
    terminal.see("no, or back: ");
    terminal.until("a second question", |screen| {
        screen.matches("gauges has changes").count() == 2
    });
    terminal.keys("yes\r");
    terminal.see("save gauges.theory");
    terminal.line("save here.theory");
    terminal.see("saved to here.theory");
    terminal.line("open group");
    terminal.see("group>");
    terminal.line("open here.theory");
    terminal.see("1 symbol");
    terminal.line("constant fleet");
    terminal.prompt();
    terminal.keys(CTRL_D);
    terminal.until("a third question", |screen| {
        screen.matches("gauges has changes").count() == 3
    });
    terminal.keys("y\r");
    assert_eq!(terminal.end(), 0);
    let kept = std::fs::read_to_string(home.path().join("here.theory")).unwrap();
    assert_eq!(kept, "theory gauges\nconstant harbour\nconstant fleet\n");
}

#[test]
fn another_file_is_not_replaced_unasked() {
    let home = tempfile::tempdir().unwrap();
    let other = home.path().join("other.theory");
    std::fs::write(&other, "constant b\n").unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.line("constant a");
    terminal.line("save other.theory");
    terminal.see("Replace it?");
    terminal.keys("no\r");
    terminal.see("Nothing was written.");
    assert_eq!(std::fs::read_to_string(&other).unwrap(), "constant b\n");
    terminal.line("save other.theory");
    terminal.until("the question again", |screen| {
        screen.matches("Replace it?").count() == 2
    });
    terminal.keys("yes\r");
    terminal.see("saved to");
    assert_eq!(std::fs::read_to_string(&other).unwrap(), "constant a\n");
}

/// Told to end while it waits for a key, the program gives the terminal back as it was.
#[cfg(unix)]
#[test]
fn the_terminal_is_given_back() {
    let home = tempfile::tempdir().unwrap();
    for signal in ["-TERM", "-HUP"] {
        let mut terminal = Terminal::open(home.path(), 80, &[]);
        terminal.prompt();
        let process = terminal.process().to_string();
        let sent = std::process::Command::new("kill")
            .args([signal, &process])
            .status();
        assert!(sent.unwrap().success());
        let expected = if signal == "-TERM" { 128 + 15 } else { 128 + 1 };
        assert_eq!(terminal.end(), expected);
    }
}
