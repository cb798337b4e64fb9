//! Ctrl-C, and being told to leave.
//!
//! While something is being worked out, Ctrl-C sets a flag that the work looks at. At other times
//! it ends a batch command at once; in the shell the line editor gets it as a key. SIGTERM and
//! SIGHUP stop the work and leave the shell orderly, also while it waits for a key.

use signal_hook::consts::{SIGHUP, SIGINT, SIGTERM};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, Mutex};

/// The flags that signals set.
#[derive(Clone)]
pub struct Signals {
    stop: Arc<AtomicBool>,
    leave: Arc<AtomicBool>,
    /// Is nothing being worked out, so that Ctrl-C may end the program?
    idle: Arc<AtomicBool>,
    /// Does the shell wait for a key?
    waiting: Arc<AtomicBool>,
    /// What to do before the program ends while it waits for a key.
    farewell: Farewell,
}

/// Something to do when the program is told to leave.
type Farewell = Arc<Mutex<Option<Box<dyn FnMut() + Send>>>>;

impl Signals {
    /// Registers for a batch command: Ctrl-C stops the work, or ends the program if there is none.
    pub fn batch() -> Signals {
        let signals = Signals::new();
        let status = i32::from(super::status::INTERRUPTED);
        // Without handlers Ctrl-C just ends the program, which is all right.
        let _ =
            signal_hook::flag::register_conditional_shutdown(SIGINT, status, signals.idle.clone());
        let _ = signal_hook::flag::register(SIGINT, signals.stop.clone());
        signals
    }

    /// Registers for the shell: Ctrl-C stops the work, and never ends the program.
    pub fn shell() -> Signals {
        let signals = Signals::new();
        let _ = signal_hook::flag::register(SIGINT, signals.stop.clone());
        let told = signals.clone();
        if let Ok(mut arriving) = signal_hook::iterator::Signals::new([SIGTERM, SIGHUP]) {
            std::thread::spawn(move || {
                for signal in arriving.forever() {
                    told.leave_now(signal);
                }
            });
        }
        signals
    }

    fn new() -> Signals {
        Signals {
            stop: Arc::default(),
            leave: Arc::default(),
            idle: Arc::new(AtomicBool::new(true)),
            waiting: Arc::default(),
            farewell: Arc::default(),
        }
    }

    /// In the thread that waits for signals.
    fn leave_now(&self, signal: i32) {
        self.leave.store(true, Ordering::SeqCst);
        self.stop.store(true, Ordering::SeqCst);
        if self.waiting.load(Ordering::SeqCst) {
            if let Ok(mut farewell) = self.farewell.lock()
                && let Some(farewell) = farewell.as_mut()
            {
                farewell();
            }
            std::process::exit(128 + signal);
        }
    }

    /// Says what to do before the program ends while it waits for a key.
    pub fn set_farewell(&self, farewell: Box<dyn FnMut() + Send>) {
        if let Ok(mut place) = self.farewell.lock() {
            *place = Some(farewell);
        }
    }

    /// Work begins.
    pub fn begin_work(&self) {
        self.idle.store(false, Ordering::SeqCst);
        // What was pressed before was meant for something else.
        self.stop.store(self.is_leaving(), Ordering::SeqCst);
    }

    /// Work has ended. Was it stopped by Ctrl-C?
    pub fn end_work(&self) -> bool {
        self.idle.store(true, Ordering::SeqCst);
        self.stop.load(Ordering::SeqCst)
    }

    /// The flag that stops the work.
    pub fn stop(&self) -> Arc<AtomicBool> {
        self.stop.clone()
    }

    /// The shell waits for a key, or no longer does.
    pub fn set_waiting(&self, waiting: bool) {
        self.waiting.store(waiting, Ordering::SeqCst);
    }

    /// Has the program been told to leave?
    pub fn is_leaving(&self) -> bool {
        self.leave.load(Ordering::SeqCst)
    }
}
