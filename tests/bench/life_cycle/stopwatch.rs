//! Time that the thread itself spent on a processor, where the system tells it.

use std::time::Instant;

/// A stopwatch that stands still while other programs have the processor (Linux), or else one that
/// shows the time on the wall.
pub(crate) struct Stopwatch {
    wall: Instant,
    on_processor_ns: Option<u64>,
}

impl Stopwatch {
    /// Starts now.
    pub(crate) fn start() -> Self {
        Self { on_processor_ns: on_processor_ns(), wall: Instant::now() }
    }

    /// Seconds since the start.
    pub(crate) fn seconds(&self) -> f64 {
        match (self.on_processor_ns, on_processor_ns()) {
            // The system brings its count up to date every few milliseconds only.
            (Some(start), Some(now)) if now > start => (now - start) as f64 / 1e9,
            _ => self.wall.elapsed().as_secs_f64(),
        }
    }
}

/// What Linux counted for this thread: the first number of its `schedstat`.
fn on_processor_ns() -> Option<u64> {
    let stat = std::fs::read_to_string("/proc/thread-self/schedstat").ok()?;
    stat.split_whitespace().next()?.parse().ok()
}
