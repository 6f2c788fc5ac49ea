//! From files and folders on the command line to the sheets in them.

use std::collections::HashSet;
use std::path::{Path, PathBuf};

/// Folders nested deeper than this are not entered.
const DEPTH: usize = 64;

/// What was found.
#[derive(Debug, Default)]
pub(super) struct Found {
    /// Files in order: of the command line, inside folders of their names.
    pub files: Vec<String>,
    /// What cannot be read or holds no sheet, with what is wrong.
    pub unreadable: Vec<(String, String)>,
}

/// Files as they are; of folders every `.pintle` file below them. Folders whose
/// name begins with a point are left out, links to folders are not followed.
pub(super) fn sheets(words: &[String]) -> Found {
    let mut found = Found::default();
    for word in words {
        let path = Path::new(word);
        if !path.is_dir() {
            found.files.push(word.clone());
            continue;
        }
        let before = found.files.len() + found.unreadable.len();
        folder(path, &mut found);
        if found.files.len() + found.unreadable.len() == before {
            found.unreadable.push((word.clone(), "holds no .pintle file".into()));
        }
    }
    let mut seen = HashSet::new();
    found.files.retain(|file| seen.insert(file.clone()));
    found
}

fn folder(top: &Path, found: &mut Found) {
    let mut open: Vec<(PathBuf, usize)> = vec![(top.into(), 0)];
    let mut files = Vec::new();
    while let Some((path, depth)) = open.pop() {
        let entries = match std::fs::read_dir(&path) {
            Ok(entries) => entries,
            Err(error) => {
                found.unreadable.push((path.to_string_lossy().into_owned(), format!("cannot be read: {error}")));
                continue;
            }
        };
        for entry in entries.flatten() {
            let Ok(kind) = entry.file_type() else { continue };
            let path = entry.path();
            let hidden = entry.file_name().to_string_lossy().starts_with('.');
            if kind.is_dir() && !hidden && depth < DEPTH {
                open.push((path, depth + 1));
            } else if !kind.is_dir() && path.extension().is_some_and(|it| it == "pintle") && path.is_file() {
                files.push(path);
            }
        }
    }
    files.sort();
    found.files.extend(files.into_iter().map(|path| path.to_string_lossy().into_owned()));
}
