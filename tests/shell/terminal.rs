//! A terminal of a chosen size with the program in it.

use portable_pty::{Child, CommandBuilder, MasterPty, PtySize, native_pty_system};
use std::io::{Read, Write};
use std::num::NonZero;
use std::path::Path;
use std::sync::{Arc, Mutex};
use std::time::{Duration, Instant};

pub const CTRL_C: &str = "\x03";
pub const CTRL_D: &str = "\x04";
pub const UP: &str = "\x1b[A";

/// The program in a terminal.
pub struct Terminal {
    screen: Arc<Mutex<vt100::Parser>>,
    /// All that the program has written.
    written: Arc<Mutex<Vec<u8>>>,
    keys: Box<dyn Write + Send>,
    child: Box<dyn Child + Send + Sync>,
    _master: Box<dyn MasterPty + Send>,
}

/// Only for a program that hangs: no test waits so long otherwise.
const PATIENCE: Duration = Duration::from_secs(60);

impl Terminal {
    /// Starts the program with `home` as its home and working folder.
    pub fn open(home: &Path, columns: u16, arguments: &[&str]) -> Terminal {
        Terminal::open_with(home, columns, arguments, &[])
    }

    pub fn open_with(
        home: &Path,
        columns: u16,
        arguments: &[&str],
        variables: &[(&str, &str)],
    ) -> Terminal {
        let size = PtySize {
            rows: 40,
            cols: columns,
            pixel_width: 0,
            pixel_height: 0,
        };
        let pair = native_pty_system()
            .openpty(size)
            .expect("a pseudo-terminal");
        let mut command = CommandBuilder::new(env!("CARGO_BIN_EXE_equable"));
        command.args(arguments);
        command.cwd(home);
        command.env_clear();
        command.env("HOME", home);
        command.env("TERM", "xterm-256color");
        for (name, value) in variables {
            command.env(name, value);
        }
        let child = pair
            .slave
            .spawn_command(command)
            .expect("the program starts");
        let side = |length| NonZero::new(length).expect("a screen has a size");
        let parser = vt100::Parser::new(side(40), side(columns), 1000);
        let screen = Arc::new(Mutex::new(parser));
        let written = Arc::new(Mutex::new(Vec::new()));
        let mut output = pair.master.try_clone_reader().expect("the output");
        let (to_screen, to_written) = (screen.clone(), written.clone());
        std::thread::spawn(move || {
            let mut bytes = [0; 4096];
            while let Ok(count @ 1..) = output.read(&mut bytes) {
                to_screen.lock().unwrap().process(&bytes[..count]);
                to_written
                    .lock()
                    .unwrap()
                    .extend_from_slice(&bytes[..count]);
            }
        });
        Terminal {
            screen,
            written,
            keys: pair.master.take_writer().expect("the keys"),
            child,
            _master: pair.master,
        }
    }

    /// Presses keys.
    pub fn keys(&mut self, keys: &str) {
        self.keys.write_all(keys.as_bytes()).expect("keys");
        self.keys.flush().expect("keys");
    }

    /// Types a line when the prompt is there.
    pub fn line(&mut self, line: &str) {
        self.prompt();
        // The editor drops what is typed before it is ready, which the prompt on the screen does
        // not tell; a person would type it again.
        for _ in 0..5 {
            std::thread::sleep(Duration::from_millis(100));
            self.keys(line);
            let begun = Instant::now();
            while self.is_at_prompt() && begun.elapsed() < Duration::from_secs(1) {
                std::thread::sleep(Duration::from_millis(5));
            }
            if line.is_empty() || !self.is_at_prompt() {
                break;
            }
        }
        self.keys("\r");
    }

    /// Waits until a prompt without anything behind it is the last line.
    pub fn prompt(&self) {
        self.until("a prompt", ends_with_prompt);
    }

    fn is_at_prompt(&self) -> bool {
        ends_with_prompt(&self.contents())
    }

    /// What stands on the screen.
    pub fn contents(&self) -> String {
        self.screen.lock().unwrap().screen().contents()
    }

    /// All that was written, as text.
    pub fn all(&self) -> String {
        String::from_utf8_lossy(&self.written.lock().unwrap()).into_owned()
    }

    /// Waits until this stands on the screen.
    pub fn see(&self, text: &str) {
        self.until(text, |screen| screen.contains(text));
    }

    /// Waits until the screen is so.
    pub fn until(&self, what: &str, is_so: impl Fn(&str) -> bool) {
        let begun = Instant::now();
        loop {
            let contents = self.contents();
            if is_so(&contents) {
                return;
            }
            assert!(begun.elapsed() < PATIENCE, "no {what} in:\n{contents}");
            std::thread::sleep(Duration::from_millis(5));
        }
    }

    pub fn process(&self) -> u32 {
        self.child.process_id().expect("it runs")
    }

    /// Waits for the end; gives the exit status.
    pub fn end(&mut self) -> u32 {
        let begun = Instant::now();
        loop {
            if let Some(status) = self.child.try_wait().expect("it can be waited for") {
                return status.exit_code();
            }
            assert!(begun.elapsed() < PATIENCE, "no end:\n{}", self.contents());
            std::thread::sleep(Duration::from_millis(5));
        }
    }
}

fn ends_with_prompt(screen: &str) -> bool {
    let last = screen.trim_end().lines().last().unwrap_or_default();
    last.ends_with('>')
}

impl Drop for Terminal {
    fn drop(&mut self) {
        // It has ended already unless the test failed.
        let _ = self.child.kill();
    }
}
