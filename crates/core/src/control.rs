//! Control over long work: progress and cancellation, and the memory limit
//! that is asked before anything large is allocated.

use std::sync::atomic::{AtomicU64, Ordering};

use crate::error::Error;

/// Watches over a long computation: it hears of progress and may call a halt.
pub trait Control: Sync {
    /// Whether the caller wants the work to stop; asked often, so it must be cheap.
    fn cancelled(&self) -> bool {
        false
    }
    /// Told now and then that `done` of `total` pieces are finished.
    fn progress(&self, done: usize, total: usize) {
        let _ = (done, total);
    }
}

/// A [`Control`] that watches nothing.
#[derive(Debug, Clone, Copy, Default)]
pub struct Unwatched;

impl Control for Unwatched {}

/// Ends the work if the caller asked for it.
///
/// # Errors
/// [`Error::Cancelled`].
pub fn go_on(control: &dyn Control) -> Result<(), Error> {
    if control.cancelled() { Err(Error::Cancelled) } else { Ok(()) }
}

/// 0 stands for "not set": half of what is free at the time of asking.
static MEMORY_LIMIT_BYTES: AtomicU64 = AtomicU64::new(0);

/// Sets the memory that one answer may take; `None` returns to the default,
/// half of what is free.
pub fn set_memory_limit_bytes(limit_bytes: Option<u64>) {
    MEMORY_LIMIT_BYTES.store(limit_bytes.unwrap_or(0), Ordering::Relaxed);
}

/// The memory that one answer may take, in bytes.
#[must_use]
pub fn memory_limit_bytes() -> u64 {
    match MEMORY_LIMIT_BYTES.load(Ordering::Relaxed) {
        0 => free_bytes() / 2,
        set => set,
    }
}

/// Taken for free memory where the system does not tell, in bytes.
const UNKNOWN_FREE_BYTES: u64 = 2 << 30;

fn free_bytes() -> u64 {
    let Ok(mut system) = sysinfo::System::new() else {
        return UNKNOWN_FREE_BYTES;
    };
    system.refresh_memory();
    let free = system.available_memory();
    let free = system.cgroup_limits().map_or(free, |limits| limits.free_memory.min(free));
    if free == 0 { UNKNOWN_FREE_BYTES } else { free }
}

/// `count` zeros, for an answer that [`allow_numbers`] has let pass.
///
/// # Errors
/// [`Error::MemoryOverLimit`] if the system has less than the limit promises.
pub fn zeros(count: usize) -> Result<Vec<f64>, Error> {
    let mut values = Vec::new();
    values.try_reserve_exact(count).map_err(|_| {
        #[allow(clippy::cast_precision_loss)]
        let asked_bytes = count as f64 * 8.0;
        #[allow(clippy::cast_precision_loss)]
        let limit_bytes = (memory_limit_bytes() as f64).min(asked_bytes);
        Error::MemoryOverLimit { asked_bytes, limit_bytes }
    })?;
    values.resize(count, 0.0);
    Ok(values)
}

/// Below this an answer is never worth asking the system about, in bytes.
const ALWAYS_ALLOWED_BYTES: f64 = 16.0 * 1024.0 * 1024.0;

/// Refuses an answer of `count` numbers of `bytes_each` before it is allocated.
///
/// # Errors
/// [`Error::MemoryOverLimit`].
pub fn allow_numbers(count: &[usize], bytes_each: usize) -> Result<(), Error> {
    // In floating point, so that the product of absurd counts cannot wrap.
    #[allow(clippy::cast_precision_loss)]
    let asked_bytes = count.iter().map(|n| *n as f64).product::<f64>() * bytes_each as f64;
    let limit_set = MEMORY_LIMIT_BYTES.load(Ordering::Relaxed) != 0;
    if asked_bytes <= ALWAYS_ALLOWED_BYTES && !limit_set {
        return Ok(());
    }
    #[allow(clippy::cast_precision_loss)]
    let limit_bytes = memory_limit_bytes() as f64;
    if asked_bytes > limit_bytes {
        return Err(Error::MemoryOverLimit { asked_bytes, limit_bytes });
    }
    Ok(())
}
