//! A look at the clock from outside: a case that never ends is told from one that is slow.

use super::case::Case;
use std::process;
use std::sync::{Arc, Mutex};
use std::thread;
use std::time::{Duration, Instant};

/// Longer than this no small model may take.
pub const PATIENCE: Duration = Duration::from_secs(1);

/// After this time the run is given up: what takes so long may take for ever.
const END: Duration = Duration::from_secs(60);

/// How long this thread has been at work, where the system tells (Linux): other programs on the machine make a case take
/// longer, and no slower.
pub fn busy() -> Option<Duration> {
    let schedule = std::fs::read_to_string("/proc/thread-self/schedstat").ok()?;
    let nanoseconds = schedule.split_whitespace().next()?.parse().ok()?;
    Some(Duration::from_nanos(nanoseconds))
}

/// The case at hand and when it began.
type AtHand = Arc<Mutex<Option<(Instant, Case)>>>;

/// Watches the cases of a run.
pub struct Watch(AtHand);

impl Watch {
    /// Watches from now on.
    pub fn start() -> Self {
        let at_hand = AtHand::default();
        let watched = Arc::clone(&at_hand);
        thread::spawn(move || {
            loop {
                thread::sleep(Duration::from_secs(1));
                let guard = watched.lock().expect("nobody panics while the case changes");
                if let Some((begin, case)) = &*guard
                    && begin.elapsed() > END
                {
                    println!("{}: no end after {END:?}", case.save("no end").display());
                    process::exit(1);
                }
            }
        });
        Self(at_hand)
    }

    /// A case begins.
    pub fn begin(&self, case: &Case) {
        self.set(Some((Instant::now(), case.clone())));
    }

    /// The case is over.
    pub fn end(&self) {
        self.set(None);
    }

    fn set(&self, at_hand: Option<(Instant, Case)>) {
        *self.0.lock().expect("the watch never panics") = at_hand;
    }
}
