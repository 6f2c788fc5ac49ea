//! What the suites share: solving a sheet, reading expectations, and a unit table of their own.
//!
//! Expected values are turned into SI by the small table in `units`, not by the code under test.

// Each suite is a crate of its own and uses its part of this module.
#![allow(dead_code)]

pub mod expect;
pub mod sheet;
pub mod units;

use std::path::{Path, PathBuf};

/// The folder `tests` of the project.
pub fn folder() -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR"))
}

/// Files of `folder` with that ending, sorted by name; a folder without any is a fault of the suite.
#[track_caller]
pub fn files(folder: &Path, ending: &str) -> Vec<PathBuf> {
    let entries = std::fs::read_dir(folder).unwrap_or_else(|error| panic!("{}: {error}", folder.display()));
    let mut files: Vec<PathBuf> = entries
        .map(|entry| entry.expect("a readable folder").path())
        .filter(|path| path.extension().is_some_and(|found| found == ending))
        .collect();
    files.sort();
    assert!(!files.is_empty(), "no .{ending} files in {}", folder.display());
    files
}

/// The text of a file.
#[track_caller]
pub fn read(path: &Path) -> String {
    std::fs::read_to_string(path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// Whether two values agree: relatively, or absolutely near zero.
pub fn agrees(found: f64, expected: f64, relative: f64, absolute: f64) -> bool {
    (found - expected).abs() <= (relative * expected.abs()).max(absolute)
}

/// Fails with all that went wrong, so that one run shows every fault.
#[track_caller]
pub fn report(faults: &[String], checked: usize) {
    assert!(checked > 0, "nothing was checked");
    assert!(faults.is_empty(), "{} faults in {checked} checks:\n{}", faults.len(), faults.join("\n"));
}
