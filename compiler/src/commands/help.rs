//! The help, written from the same tables that the command line is read by.

use super::specs::{COMMANDS, Command, Flag, Spec, Takes};
use pintle::render::Colour;
use pintle::render::page::{Align, Page, Paint, Table};

/// Help on one command, or on all.
pub fn text(about: Option<&Spec>) -> String {
    match about {
        Some(spec) => command(spec),
        None => overview(),
    }
}

fn overview() -> String {
    let mut page = Page::new(Colour::Off);
    page.text_block(0, 0, "pintle: calculation sheets for rotating assemblies, checked and solved", Paint::Plain);
    page.heading("Commands");
    let mut table = Table::new(2, &[Align::Left, Align::Left]);
    for spec in COMMANDS {
        // `list` has more words than fit beside the others.
        let usage = match spec.command {
            Command::Later(_) => "",
            Command::List => "TOPIC [WORD]",
            _ => spec.usage,
        };
        table.row(vec![format!("{} {usage}", spec.name).trim_end().into(), spec.summary.into()]);
    }
    table.write(&mut page);
    flags(&mut page, &Flag::ALL);
    exit_codes(&mut page);
    page.blank();
    page.text_block(0, 0, "`pintle COMMAND --help` says more about one command.", Paint::Plain);
    page.text()
}

fn command(spec: &Spec) -> String {
    let mut page = Page::new(Colour::Off);
    page.text_block(0, 2, &format!("pintle {} {}", spec.name, spec.usage), Paint::Plain);
    page.blank();
    page.text_block(0, 0, spec.summary, Paint::Plain);
    if !spec.flags.is_empty() {
        flags(&mut page, spec.flags);
        exit_codes(&mut page);
    }
    page.text()
}

fn flags(page: &mut Page, flags: &[Flag]) {
    page.heading("Flags");
    let mut table = Table::new(2, &[Align::Left, Align::Left]);
    for flag in flags {
        let value = match flag.takes() {
            Takes::Nothing => String::new(),
            Takes::OneOf([one]) => format!(" {one}"),
            Takes::OneOf(_) => " WHEN".into(),
            Takes::Number => " N".into(),
        };
        table.row(vec![format!("{}{value}", flag.name()).into(), flag.words().into()]);
    }
    table.row(vec!["--help".into(), "this help, or that of a command".into()]);
    table.row(vec!["--version".into(), "the version".into()]);
    table.write(page);
}

fn exit_codes(page: &mut Page) {
    page.heading("Exit codes");
    let mut table = Table::new(2, &[Align::Right, Align::Left]);
    for (code, words) in [
        ("0", "compiled, every limit met"),
        ("1", "a limit is not met, or `format --check` found a difference"),
        ("2", "the sheet has errors"),
        ("3", "a limit or unknown is undecided, or a limit is met at nominal only"),
        ("64", "the command line is wrong"),
        ("66", "a file cannot be read"),
        ("70", "a fault of the program itself; the message says what to report"),
    ] {
        table.row(vec![code.into(), words.into()]);
    }
    table.write(page);
}

#[cfg(test)]
mod tests {
    use super::*;
    use pintle::render::page::{WIDTH, width};

    #[test]
    fn help_fits_the_page_and_names_everything() {
        let all = text(None);
        for spec in COMMANDS {
            assert!(all.contains(spec.name));
            let own = text(Some(spec));
            assert!(own.starts_with(&format!("pintle {} ", spec.name)), "{own}");
            for line in own.lines().chain(all.lines()) {
                assert!(width(line) <= WIDTH, "{line}");
            }
        }
        for flag in Flag::ALL {
            assert!(all.contains(flag.name()));
        }
    }
}
