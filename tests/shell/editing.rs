//! Typing: Tab, history, continuation lines, paste.

use super::terminal::{CTRL_C, CTRL_D, Terminal, UP};

#[test]
fn a_question_is_answered() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.line("open group");
    terminal.see("3 laws");
    terminal.line("x * i(x) = e");
    terminal.see("equal        answer 1 · proof checked");
    terminal.see("group>");
    assert!(
        terminal.all().contains("\x1b[32;1m") || terminal.all().contains("\x1b[1"),
        "colours"
    );
    terminal.line("quit");
    assert_eq!(terminal.end(), 0);
}

#[test]
fn tab_completes_commands_symbols_laws_and_theories() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.prompt();
    terminal.keys("open kurat\t\r");
    terminal.see("kuratowski>");
    terminal.line("new gauges");
    terminal.see("gauges>");
    terminal.line("constant harbour fleet");
    terminal.prompt();
    terminal.keys("law lay\t: harb\t = fle\t\r");
    terminal.prompt();
    terminal.keys("harb\t = fleet\r");
    terminal.see("equal        answer 1");
    terminal.prompt();
    terminal.keys("law same-place: harbour = fleet\r");
    terminal.prompt();
    terminal.keys("drop same\t\r");
    terminal.prompt();
    terminal.keys("compl\t wi\t 2s\r");
    terminal.see("complete     ");
    terminal.prompt();
    terminal.keys("help proper\t\r");
    terminal.see("The words: associative");
    terminal.line("laws");
    terminal.prompt();
    assert!(
        !terminal
            .contents()
            .lines()
            .any(|line| line.starts_with("same-place "))
    );
}

#[test]
fn the_history_is_kept_for_the_next_session() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.line("budget ask 7s");
    terminal.line("");
    terminal.line("status");
    terminal.line("status");
    terminal.line("quit");
    assert_eq!(terminal.end(), 0);
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.prompt();
    // The last line was quit; the two lines before it were the same, and are kept once.
    terminal.keys(&UP.repeat(3));
    terminal.see("> budget ask 7s");
    terminal.keys("\r");
    terminal.line("budget");
    terminal.see("ask        7 s");
}

#[test]
fn a_history_that_cannot_be_kept_costs_one_remark() {
    let home = tempfile::tempdir().unwrap();
    let variables = [("XDG_STATE_HOME", "/dev/null/nowhere")];
    let mut terminal = Terminal::open_with(home.path(), 80, &[], &variables);
    terminal.see("what you type is not remembered");
    terminal.line("quit");
    assert_eq!(terminal.end(), 0);
}

#[test]
fn a_statement_goes_on_while_a_bracket_is_open() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &["group"]);
    terminal.line("(x *");
    terminal.see("     … ");
    terminal.keys("i(x)) =\r");
    terminal.keys("e\r");
    terminal.see("equal        answer 1");
    terminal.line("(x *");
    terminal.until("the second statement", |screen| {
        screen.matches("> (x *").count() == 2
    });
    terminal.until("its continuation", |screen| {
        screen.trim_end().ends_with('…')
    });
    terminal.keys(CTRL_C);
    terminal.line("e = e");
    terminal.see("equal        answer 2");
    terminal.line("quit");
    assert_eq!(terminal.end(), 0);
}

#[test]
fn several_lines_can_be_pasted() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.prompt();
    terminal.keys("\x1b[200~constant a b\nlaw same: a = b\nb = a\x1b[201~\r");
    terminal.see("equal        answer 1");
    terminal.line("laws");
    terminal.see("same   a = b");
}

#[test]
fn ctrl_c_clears_the_line_and_ctrl_d_leaves() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.prompt();
    terminal.keys("nonsense");
    terminal.see("> nonsense");
    terminal.keys(CTRL_C);
    terminal.prompt();
    assert!(!terminal.all().contains("Error"));
    terminal.keys(CTRL_D);
    assert_eq!(terminal.end(), 0);
}

#[test]
fn hints_say_what_can_follow() {
    let home = tempfile::tempdir().unwrap();
    let mut terminal = Terminal::open(home.path(), 80, &[]);
    terminal.prompt();
    terminal.keys("complete");
    terminal.see("> complete within 30s");
    terminal.keys("\r");
    terminal.see("complete     0 rules");
    // Without colours a hint could not be told from what was typed.
    let mut terminal = Terminal::open(home.path(), 80, &["--plain"]);
    terminal.prompt();
    terminal.keys("complete");
    terminal.see("> complete");
    terminal.keys("\r");
    terminal.see("complete     0 rules");
    assert!(!terminal.contents().contains("within 30s"));
    assert!(!terminal.all().contains("\x1b[1"), "no colours");
}
