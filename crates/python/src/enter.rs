//! The one door for long work: it releases the GIL, works on our own threads,
//! listens for Ctrl-C, and turns errors into exceptions.
//!
//! Worker threads do not survive a `fork`. The pool remembers its process and
//! is built anew in a child, so that a forked worker computes instead of hanging.

use std::num::NonZero;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::mpsc::{RecvTimeoutError, channel};
use std::sync::{Arc, Mutex, PoisonError};
use std::time::Duration;

use fluxloom_core::control::Control;
use fluxloom_core::limits;
use fluxloom_plan::Error;
use pyo3::exceptions::PyRuntimeError;
use pyo3::prelude::*;
use rayon::{ThreadPool, ThreadPoolBuilder};

use crate::errors::raise;

/// How often Ctrl-C is looked for while work runs.
const LISTEN: Duration = Duration::from_millis(50);

struct Workers {
    process: u32,
    threads: usize,
    pool: Arc<ThreadPool>,
}

static WORKERS: Mutex<Option<Workers>> = Mutex::new(None);

/// A pool of `threads` threads (0: as `RAYON_NUM_THREADS` says, or one per core).
fn build(threads: usize) -> PyResult<Workers> {
    let count = if threads == 0 { default_threads() } else { threads };
    let pool = ThreadPoolBuilder::new()
        .num_threads(count)
        .thread_name(|k| format!("fluxloom-{k}"))
        .build()
        .map_err(|error| PyRuntimeError::new_err(error.to_string()))?;
    Ok(Workers { process: std::process::id(), threads, pool: Arc::new(pool) })
}

/// As `RAYON_NUM_THREADS` says if it is a number within the limit, else one per core.
fn default_threads() -> usize {
    let asked = std::env::var("RAYON_NUM_THREADS").ok().and_then(|text| text.parse::<u16>().ok());
    match asked {
        Some(count) if limits::THREADS.contains(f64::from(count)) => usize::from(count),
        _ => std::thread::available_parallelism().map_or(1, NonZero::get),
    }
}

fn pool() -> PyResult<Arc<ThreadPool>> {
    let mut workers = WORKERS.lock().unwrap_or_else(PoisonError::into_inner);
    match workers.as_ref() {
        Some(known) if known.process == std::process::id() => Ok(known.pool.clone()),
        other => {
            let built = build(other.map_or(0, |known| known.threads))?;
            let pool = built.pool.clone();
            // A pool of the parent process has no threads here; joining it would wait for ever.
            std::mem::forget(workers.replace(built));
            Ok(pool)
        }
    }
}

/// Sets the number of threads for all work to come.
pub fn set_threads(threads: usize) -> PyResult<()> {
    let built = build(threads)?;
    *WORKERS.lock().unwrap_or_else(PoisonError::into_inner) = Some(built);
    Ok(())
}

/// The number of threads that work is spread over.
pub fn threads() -> PyResult<usize> {
    Ok(pool()?.current_num_threads())
}

/// Tells the workers that Ctrl-C was pressed.
struct Listener<'a> {
    stop: &'a AtomicBool,
}

impl Control for Listener<'_> {
    fn cancelled(&self) -> bool {
        self.stop.load(Ordering::Relaxed)
    }
}

/// Runs long work with the GIL released; Ctrl-C ends it.
pub fn long<T, E, F>(py: Python<'_>, work: F) -> PyResult<T>
where
    T: Send,
    E: Into<Error> + Send,
    F: FnOnce(&dyn Control) -> Result<T, E> + Send,
{
    let pool = pool()?;
    let stop = AtomicBool::new(false);
    let outcome = py.detach(|| {
        let (sender, receiver) = channel();
        std::thread::scope(|scope| {
            let (pool, stop) = (&pool, &stop);
            let worker = scope.spawn(move || {
                let answer = pool.install(|| work(&Listener { stop }));
                // The listener may be gone only if it panicked; then nobody waits.
                let _ = sender.send(());
                answer
            });
            let mut interrupt = None;
            while let Err(RecvTimeoutError::Timeout) = receiver.recv_timeout(LISTEN) {
                if worker.is_finished() {
                    break;
                }
                if interrupt.is_none()
                    && let Err(signal) = Python::attach(|py| py.check_signals())
                {
                    interrupt = Some(signal);
                    stop.store(true, Ordering::Relaxed);
                }
            }
            (worker.join(), interrupt)
        })
    });
    match outcome {
        (_, Some(interrupt)) => Err(interrupt),
        (Ok(Ok(answer)), None) => Ok(answer),
        (Ok(Err(error)), None) => Err(raise(py, &error.into())),
        (Err(_), None) => Err(internal()),
    }
}

/// A panic is a fault of ours; as a plain exception it does not pass `except Exception`.
fn internal() -> PyErr {
    PyRuntimeError::new_err(
        "an internal computation failed; please report this with the input that led here",
    )
}

/// Runs short work with the GIL released.
pub fn short<T, E, F>(py: Python<'_>, work: F) -> PyResult<T>
where
    T: Send,
    E: Into<Error> + Send,
    F: FnOnce() -> Result<T, E> + Send,
{
    match py.detach(|| catch_unwind(AssertUnwindSafe(work))) {
        Ok(outcome) => outcome.map_err(|error| raise(py, &error.into())),
        Err(_) => Err(internal()),
    }
}
