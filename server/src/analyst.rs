//! The analysis thread: compiles the newest text of each document and hands
//! the outcome back to the state thread, which decides whether it still counts.
//!
//! A job that is added stops the one under way, in the middle of a search too:
//! of the same document that one is overtaken, of another it is put back and
//! begun again later, because what was edited last is what is looked at.

use crate::guard::panic_words;
use crate::log::Log;
use crate::lsp::Url;
use pintle::Compilation;
use pintle::analysis::Snapshot;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::{AtomicBool, Ordering};
use std::sync::{Arc, Condvar, Mutex, MutexGuard, PoisonError};
use std::time::Instant;

/// How a sheet is compiled: the snapshot, the path in it, and whether to give up.
pub type Compile = fn(&Snapshot, &str, &(dyn Fn() -> bool + Sync)) -> Option<Compilation>;

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
    running: Option<Running>,
    closed: bool,
}

/// The job under way.
struct Running {
    uri: Url,
    stop: Arc<AtomicBool>,
    /// Nobody waits for its outcome any more.
    withdrawn: bool,
}

impl Slots {
    /// Takes out what waits for a document; what is under way for it is stopped.
    fn withdraw(&mut self, uri: &Url) {
        self.jobs.retain(|waiting| waiting.uri != *uri);
        if let Some(running) = self.running.as_mut().filter(|it| it.uri == *uri) {
            running.stop.store(true, Ordering::Relaxed);
            running.withdrawn = true;
        }
    }

    fn stop(&self) {
        if let Some(running) = &self.running {
            running.stop.store(true, Ordering::Relaxed);
        }
    }
}

impl Mailbox {
    /// Adds a job; the one added last is done first.
    pub fn put(&self, job: Job) {
        let mut slots = self.lock();
        slots.withdraw(&job.uri);
        slots.stop();
        slots.jobs.push(job);
        self.wake.notify_one();
    }

    /// Takes out what waits for a document.
    pub fn withdraw(&self, uri: &Url) {
        self.lock().withdraw(uri);
    }

    /// Ends the thread; its present job is stopped.
    pub fn close(&self) {
        let mut slots = self.lock();
        slots.closed = true;
        slots.stop();
        self.wake.notify_one();
    }

    /// Waits for a job; with it comes the flag that stops it.
    fn take(&self) -> Option<(Job, Arc<AtomicBool>)> {
        let mut slots = self.lock();
        loop {
            if slots.closed {
                return None;
            }
            if let Some(job) = slots.jobs.pop() {
                let stop = Arc::new(AtomicBool::new(false));
                slots.running = Some(Running { uri: job.uri.clone(), stop: stop.clone(), withdrawn: false });
                return Some((job, stop));
            }
            slots = self.wake.wait(slots).unwrap_or_else(PoisonError::into_inner);
        }
    }

    /// The present job is at an end. One that was stopped for another's sake waits again.
    fn finish(&self, stopped: Option<Job>) {
        let mut slots = self.lock();
        let withdrawn = slots.running.take().is_none_or(|running| running.withdrawn);
        if let Some(job) = stopped.filter(|_| !withdrawn) {
            slots.jobs.insert(0, job);
        }
    }

    fn lock(&self) -> MutexGuard<'_, Slots> {
        self.slots.lock().unwrap_or_else(PoisonError::into_inner)
    }
}

/// Works until the mailbox is closed.
pub(crate) fn work(mailbox: &Mailbox, compile: Compile, report: impl Fn(Analysed), log: &Log) {
    while let Some((job, stop)) = mailbox.take() {
        let start = Instant::now();
        let cancel = || stop.load(Ordering::Relaxed);
        let compilation = match catch_unwind(AssertUnwindSafe(|| compile(&job.snapshot, &job.path, &cancel))) {
            Ok(Some(compilation)) => Some(Arc::new(compilation)),
            Ok(None) => {
                // Not stopped, it was not open in the snapshot: nobody asks any more.
                let stopped = cancel();
                let ms = start.elapsed().as_secs_f64() * 1e3;
                log.line(format_args!("stopped {} (state {}) after {ms:.1} ms", job.path, job.generation));
                mailbox.finish(stopped.then_some(job));
                continue;
            }
            Err(panic) => {
                log.line(format_args!("panic while compiling {}: {}", job.path, panic_words(&*panic)));
                None
            }
        };
        let ms = start.elapsed().as_secs_f64() * 1e3;
        mailbox.finish(None);
        log.line(format_args!("compiled {} (state {}) in {ms:.1} ms", job.path, job.generation));
        report(Analysed { uri: job.uri, generation: job.generation, compilation });
    }
}
