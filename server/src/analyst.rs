//! The analysis thread: compiles the newest text of each document and hands
//! the outcome back to the state thread, which decides whether it still counts.

use crate::guard::panic_words;
use crate::log::Log;
use crate::lsp::Url;
use pintle::Compilation;
use pintle::analysis::Snapshot;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::{Arc, Condvar, Mutex, MutexGuard, PoisonError};
use std::time::Instant;

/// How a sheet is compiled: the snapshot, and the path in it.
pub type Compile = fn(&Snapshot, &str) -> Option<Compilation>;

/// One document to compile.
pub(crate) struct Job {
    pub uri: Url,
    pub path: String,
    pub snapshot: Snapshot,
    /// Number of the state of all texts that it belongs to.
    pub generation: u64,
}

/// What came of a job.
pub(crate) struct Analysed {
    pub uri: Url,
    pub generation: u64,
    /// Nothing where the compiler panicked.
    pub compilation: Option<Arc<Compilation>>,
}

/// Where jobs wait: one place for each document, a newer job displaces the older.
#[derive(Default)]
pub(crate) struct Mailbox {
    slots: Mutex<Slots>,
    wake: Condvar,
}

#[derive(Default)]
struct Slots {
    jobs: Vec<Job>,
    closed: bool,
}

impl Mailbox {
    /// Adds a job; the one added last is done first.
    pub fn put(&self, job: Job) {
        let mut slots = self.lock();
        slots.jobs.retain(|waiting| waiting.uri != job.uri);
        slots.jobs.push(job);
        self.wake.notify_one();
    }

    /// Takes out what waits for a document.
    pub fn withdraw(&self, uri: &Url) {
        self.lock().jobs.retain(|waiting| waiting.uri != *uri);
    }

    /// Ends the thread after its present job.
    pub fn close(&self) {
        self.lock().closed = true;
        self.wake.notify_one();
    }

    fn take(&self) -> Option<Job> {
        let mut slots = self.lock();
        loop {
            if slots.closed {
                return None;
            }
            if let Some(job) = slots.jobs.pop() {
                return Some(job);
            }
            slots = self.wake.wait(slots).unwrap_or_else(PoisonError::into_inner);
        }
    }

    fn lock(&self) -> MutexGuard<'_, Slots> {
        self.slots.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

/// Works until the mailbox is closed.
pub(crate) fn work(mailbox: &Mailbox, compile: Compile, report: impl Fn(Analysed), log: &Log) {
    while let Some(job) = mailbox.take() {
        let start = Instant::now();
        let compilation = match catch_unwind(AssertUnwindSafe(|| compile(&job.snapshot, &job.path))) {
            Ok(Some(compilation)) => Some(Arc::new(compilation)),
            // Closed in the snapshot: nobody asks any more.
            Ok(None) => continue,
            Err(panic) => {
                log.line(format_args!("panic while compiling {}: {}", job.path, panic_words(&*panic)));
                None
            }
        };
        let ms = start.elapsed().as_secs_f64() * 1e3;
        log.line(format_args!("compiled {} (state {}) in {ms:.1} ms", job.path, job.generation));
        report(Analysed { uri: job.uri, generation: job.generation, compilation });
    }
}
