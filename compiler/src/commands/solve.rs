//! `pintle solve FILE`.

use super::specs::Flag;
use super::{Context, Output, json_text, view};
use pintle::render::text::{self, Detail};
use pintle::render::{csv, json};

/// Results to standard output, diagnostics to standard error; results also where there are errors.
pub(super) fn run(context: &Context<'_>) -> Output {
    let compilation = match context.compile(context.word(0)) {
        Ok(compilation) => compilation,
        Err(output) => return output,
    };
    let view = view(&compilation);
    let stdout = if context.has(Flag::Json) {
        json_text(&json::solve(&view))
    } else if context.has(Flag::Csv) {
        csv::solve(&view)
    } else {
        let detail = if context.has(Flag::Quiet) { Detail::Verdicts } else { Detail::Full };
        text::solve(&view, detail, context.out_colour())
    };
    Output { stdout, stderr: context.diagnostics(&compilation), code: context.code(&compilation) }
}
