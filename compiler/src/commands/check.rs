//! `pintle check PATH...`: verdicts of many sheets, one line each.

use super::specs::Flag;
use super::{Context, Output, exit, json_text, paths, view};
use pintle::Compilation;
use pintle::render::page::{Paint, painted, printable};
use pintle::render::verdicts::{self, Count, Outcome};
use pintle::render::{diagnostics, json};
use pintle_text::Severity;
use serde_json::{Value, json};

pub(super) fn run(context: &Context<'_>) -> Output {
    let mut output = Output::default();
    let mut codes = Vec::new();
    let mut files = Vec::new();
    let mut unreadable = Vec::new();
    let found = paths::sheets(&context.arguments.words);
    for (path, why) in found.unreadable {
        output.stderr.push_str(&format!("error: {} {why}\n", printable(&path)));
        unreadable.push(json!({"file": path, "why": why}));
        codes.push(exit::FILE);
    }
    for path in &found.files {
        let compilation = match context.compile(path) {
            Ok(compilation) => compilation,
            Err(failed) => {
                unreadable.push(json!({"file": path, "why": failed.stderr.trim_end()}));
                output.stderr.push_str(&failed.stderr);
                codes.push(failed.code);
                continue;
            }
        };
        let code = context.code(&compilation);
        codes.push(code);
        let reported = diagnostics::concise(&compilation.diagnostics, &compilation.sources, context.err_colour());
        output.stderr.push_str(&reported);
        if context.has(Flag::Json) {
            files.push(object(path, code, &compilation));
        } else if code != exit::SOUND || !context.has(Flag::Quiet) {
            output.stdout.push_str(&line(context, path, &compilation));
        }
    }
    if context.has(Flag::Json) {
        let version = env!("CARGO_PKG_VERSION");
        let all = json!({"schema": json::SCHEMA, "pintle": version, "files": files, "unreadable": unreadable});
        output.stdout = json_text(&all);
    } else if codes.len() > 1 && !context.has(Flag::Quiet) {
        output.stdout.push_str(&summary(&codes));
    }
    output.code = gravest(&codes);
    output
}

/// Of several exit codes the one that counts: what could not be done at all
/// first, then errors before limits that are not met before what is open.
fn gravest(codes: &[u8]) -> u8 {
    let order = [exit::FAULT, exit::FILE, exit::ERRORS, exit::NOT_MET, exit::OPEN];
    order.into_iter().find(|code| codes.contains(code)).unwrap_or(exit::SOUND)
}

/// `winch.pintle: 2 errors; 3 limits met, 1 not met`.
fn line(context: &Context<'_>, path: &str, compilation: &Compilation) -> String {
    let count = compilation.results.all_cases().map(Count::of).fold(Count::default(), Count::plus);
    let outcome = context.outcome(compilation);
    let errors = match verdicts::n_reported(&view(compilation), Severity::Error) {
        0 => String::new(),
        1 => "1 error; ".into(),
        n => format!("{n} errors; "),
    };
    // Limits say why a sheet is open or not sound, unless it is a value or a second route.
    let limits_say_it = count.total() > count.met;
    let more = match outcome {
        Outcome::Open if !limits_say_it => "; a value is undecided",
        Outcome::NotMet if count.not_met == 0 => "; a second route disagrees",
        _ => "",
    };
    let paint = match outcome {
        Outcome::Sound => Paint::Good,
        Outcome::Errors | Outcome::NotMet => Paint::Bad,
        Outcome::Open => Paint::Open,
    };
    let verdicts =
        if outcome == Outcome::Errors && count.total() == 0 { verdicts::NONE_JUDGED.into() } else { count.words() };
    let words = format!("{errors}{verdicts}{more}");
    format!("{}: {}\n", printable(path), painted(&words, paint, context.out_colour()))
}

fn summary(codes: &[u8]) -> String {
    let n = |code: u8| codes.iter().filter(|it| **it == code).count();
    let mut parts = vec![format!("{} sound", n(exit::SOUND))];
    for (code, words) in [
        (exit::ERRORS, "with errors"),
        (exit::NOT_MET, "with limits not met"),
        (exit::OPEN, "open"),
        (exit::FILE, "unreadable"),
        (exit::FAULT, "with a fault of the program"),
    ] {
        if n(code) > 0 {
            parts.push(format!("{} {words}", n(code)));
        }
    }
    format!("{} paths: {}\n", codes.len(), parts.join(", "))
}

fn object(path: &str, code: u8, compilation: &Compilation) -> Value {
    json!({
        "file": path,
        "exit": code,
        "limits": json::limits(&view(compilation)),
        "diagnostics": json::diagnostics(&compilation.diagnostics, &compilation.sources),
    })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_gravest_code_counts() {
        assert_eq!(gravest(&[]), 0);
        assert_eq!(gravest(&[0, 3]), 3);
        assert_eq!(gravest(&[3, 1, 0]), 1);
        assert_eq!(gravest(&[1, 2, 3]), 2);
        assert_eq!(gravest(&[2, 66, 1]), 66);
    }
}
