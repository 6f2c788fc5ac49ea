//! `pintle format PATH... [--check]`.

use super::specs::Flag;
use super::{Context, Output, exit, json_text, paths};
use pintle::render::json::SCHEMA;
use pintle::render::page::printable;
use serde_json::{Value, json};

/// Whether files are changed.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Mode {
    Write,
    Look,
}

pub(super) fn run(context: &Context<'_>) -> Output {
    let mut output = Output::default();
    let mode = if context.has(Flag::Check) { Mode::Look } else { Mode::Write };
    let found = paths::sheets(&context.arguments.words);
    let mut failed = found.unreadable;
    let mut differ = Vec::new();
    for path in &found.files {
        match one(path, mode) {
            Ok(Layout::Same) => {}
            Ok(Layout::Differs) => differ.push(path.as_str()),
            Err(why) => failed.push((path.clone(), why)),
        }
    }
    if context.has(Flag::Json) {
        let unreadable: Vec<Value> = failed.iter().map(|(path, why)| json!({"file": path, "why": why})).collect();
        let key = if mode == Mode::Look { "differs" } else { "formatted" };
        output.stdout = json_text(&json!({"schema": SCHEMA, key: &differ, "unreadable": unreadable}));
    } else if !context.has(Flag::Quiet) {
        let words = if mode == Mode::Look { "layout differs" } else { "formatted" };
        output.stdout = differ.iter().map(|path| format!("{}: {words}\n", printable(path))).collect();
    }
    for (path, why) in &failed {
        output.stderr.push_str(&format!("error: {} {why}\n", printable(path)));
    }
    output.code = match mode {
        _ if !failed.is_empty() => exit::FILE,
        Mode::Look if !differ.is_empty() => exit::NOT_MET,
        _ => exit::SOUND,
    };
    output
}

enum Layout {
    Same,
    Differs,
}

fn one(path: &str, mode: Mode) -> Result<Layout, String> {
    let bytes = std::fs::read(path).map_err(|error| format!("cannot be read: {error}"))?;
    let text = String::from_utf8(bytes).map_err(|_| "cannot be read: it is not UTF-8 text".to_string())?;
    let formatted = pintle_syntax::format(&text);
    if formatted == text {
        return Ok(Layout::Same);
    }
    if mode == Mode::Write {
        std::fs::write(path, formatted).map_err(|error| format!("cannot be written: {error}"))?;
    }
    Ok(Layout::Differs)
}
