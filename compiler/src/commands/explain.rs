//! `pintle explain FILE NAME`.

use super::specs::Flag;
use super::{Context, Output, exit, json_text, view};
use pintle::render::explain::{self, Members, UnknownName};
use pintle::render::page::printable;

/// At most this many names are offered.
const MOST: usize = 40;

pub(super) fn run(context: &Context<'_>) -> Output {
    let compilation = match context.compile(context.word(0)) {
        Ok(compilation) => compilation,
        Err(output) => return output,
    };
    let stderr = context.diagnostics(&compilation);
    let name = context.word(1);
    let view = view(&compilation);
    let explained = match context.has(Flag::Json) {
        true => explain::json(&view, name).map(|object| json_text(&object)),
        false => explain::explain(&view, name, context.out_colour()),
    };
    match explained {
        Ok(stdout) => Output { stdout, stderr, code: context.code(&compilation) },
        Err(unknown) => {
            let message = format!("error: no value is named `{}`{}\n", printable(name), hint(&unknown));
            Output { stdout: String::new(), stderr: stderr + &message, code: exit::USAGE }
        }
    }
}

fn hint(unknown: &UnknownName) -> String {
    match (unknown.members, unknown.nearest.as_slice()) {
        (_, []) => "; `pintle solve FILE --csv` lists all names".into(),
        (Members::OfTheThing, names) => {
            let mut lines: Vec<String> = names.iter().take(MOST).map(|name| format!("  {name}")).collect();
            if names.len() > MOST {
                lines.push(format!("  and {} more", names.len() - MOST));
            }
            format!(" alone; it has\n{}", lines.join("\n"))
        }
        (Members::SpeltAlike, names) => {
            let quoted: Vec<String> = names.iter().map(|name| format!("`{name}`")).collect();
            format!("; did you mean {}?", quoted.join(" or "))
        }
    }
}
