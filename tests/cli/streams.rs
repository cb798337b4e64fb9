//! Colours, and streams that are closed or full.

use super::program::{GROUP, Place, finish};
use std::process::Stdio;

const ESCAPE: char = '\x1b';

#[test]
fn a_pipe_gets_no_colours() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    let input = "open group.theory\ncomplete\nx * i(x) = e\nnonsense\nhelp law\nhelp\n";
    for plain in [&[][..], &["--plain"]] {
        let ran = place.run(plain, input);
        assert!(!ran.out.contains(ESCAPE), "{}", ran.out);
        assert!(!ran.err.contains(ESCAPE), "{}", ran.err);
    }
    let mut command = place.command(&[]);
    command.env("NO_COLOR", "1");
    let ran = finish(command, input.as_bytes());
    assert!(!ran.out.contains(ESCAPE) && !ran.err.contains(ESCAPE));
}

#[test]
fn a_reader_that_has_gone_away_is_no_fault() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    for arguments in [
        &["complete", "group.theory"][..],
        &["check", "group.theory", "--json"],
        &["ask", "group.theory", "x * i(x) = e"],
        &["--help"],
        &[],
    ] {
        let mut child = place
            .command(arguments)
            .stdin(Stdio::piped())
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .unwrap();
        drop(child.stdout.take());
        if let Some(mut stdin) = child.stdin.take() {
            use std::io::Write;
            let _ = stdin.write_all(b"help\nhelp\ntheories\n");
        }
        let output = child.wait_with_output().unwrap();
        let said = String::from_utf8_lossy(&output.stderr);
        assert_eq!(output.status.code(), Some(0), "{arguments:?}: {said}");
        assert_eq!(said, "", "{arguments:?}");
    }
}

#[cfg(target_os = "linux")]
#[test]
fn results_that_cannot_be_written_are_reported() {
    let place = Place::new();
    place.file("group.theory", GROUP);
    let full = std::fs::OpenOptions::new()
        .write(true)
        .open("/dev/full")
        .unwrap();
    let output = place
        .command(&["complete", "group.theory"])
        .stdout(full)
        .stderr(Stdio::piped())
        .output()
        .unwrap();
    assert_eq!(output.status.code(), Some(4));
    let said = String::from_utf8_lossy(&output.stderr);
    assert!(said.contains("the results cannot be written"), "{said}");
}

#[test]
fn lines_without_an_end_and_with_carriage_returns_are_read() {
    let place = Place::new();
    let ran = place.run(&[], "\u{feff}constant a\r\na = a\r\na");
    assert_eq!(ran.status, 0, "{}", ran.err);
    assert!(ran.out.contains("equal        answer 1"), "{}", ran.out);
}
