//! What the server writes about itself: lines in a file, or nothing.

use std::fmt::Arguments;
use std::fs::File;
use std::io::Write;
use std::sync::{Arc, Mutex, PoisonError};
use std::time::Instant;

/// A log that may be written from any thread. Cheap to clone.
#[derive(Clone, Debug)]
pub struct Log {
    file: Option<Arc<Mutex<File>>>,
    start: Instant,
}

impl Log {
    /// Writes nowhere.
    pub fn nowhere() -> Log {
        Log { file: None, start: Instant::now() }
    }

    /// Writes a new file.
    pub fn to_file(path: &std::path::Path) -> std::io::Result<Log> {
        Ok(Log { file: Some(Arc::new(Mutex::new(File::create(path)?))), start: Instant::now() })
    }

    /// Adds a line, with the seconds since the start in front.
    pub fn line(&self, words: Arguments<'_>) {
        if let Some(file) = &self.file {
            let mut file = file.lock().unwrap_or_else(PoisonError::into_inner);
            // A full disk must not stop the server.
            let _ = writeln!(file, "{:10.3} {words}", self.start.elapsed().as_secs_f64());
        }
    }
}
