//! Ctrl-C and SIGTERM: what is complete is reported, and a second time ends at once.

use std::sync::atomic::{AtomicBool, Ordering};

use super::output::complain;

/// Set once the user asks to stop.
static STOP: AtomicBool = AtomicBool::new(false);
/// Whether there is something to report by now.
static WORTH_IT: AtomicBool = AtomicBool::new(false);

/// Status of a run that was stopped, as shells count it: 128 and the number of SIGINT.
pub(super) const STATUS: u8 = 130;

/// Listens from now on; before lifetimes are flown there is nothing to report, and the first signal ends the program.
///
/// Returns the flag that is set when the user asks to stop.
pub(super) fn listen() -> &'static AtomicBool {
    // It fails only if a handler is set already: by an earlier call, which does the same.
    let _ = ctrlc::set_handler(|| {
        if !WORTH_IT.load(Ordering::Relaxed) || STOP.swap(true, Ordering::Relaxed) {
            #[expect(clippy::exit, reason = "the user asks for it, and no file is half written under its own name")]
            std::process::exit(i32::from(STATUS));
        }
        complain("stopping after the lifetimes under way; press again to end at once");
    });
    &STOP
}

/// From now on there is something to report.
pub(super) fn worth_it() {
    WORTH_IT.store(true, Ordering::Relaxed);
}
