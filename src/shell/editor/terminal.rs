//! Giving the terminal back as it was.

/// Something that gives the terminal back in the state that it is in now.
#[cfg(unix)]
pub fn restorer() -> Box<dyn FnMut() + Send> {
    use rustix::termios::{OptionalActions, tcgetattr, tcsetattr};
    let state = tcgetattr(std::io::stdin()).ok();
    Box::new(move || {
        use std::io::Write;
        if let Some(state) = &state {
            // The terminal may have gone away, and then nothing needs to be given back.
            let _ = tcsetattr(std::io::stdin(), OptionalActions::Now, state);
        }
        // Pasted text is no longer marked, and the next prompt begins on a line of its own.
        let _ = std::io::stdout().write_all(b"\x1b[?2004l\r\n");
        let _ = std::io::stdout().flush();
    })
}

/// Something that gives the terminal back in the state that it is in now.
#[cfg(not(unix))]
pub fn restorer() -> Box<dyn FnMut() + Send> {
    Box::new(|| {})
}
