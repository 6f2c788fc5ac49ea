//! Prints the faults of a sheet read from standard input: a look at messages.
//! With `--items`, the items too; with `--format`, the text in canonical layout.

use std::io::Read;

use pintle_syntax::ast::{Item, ItemKind};
use pintle_text::LineIndex;

fn main() -> std::io::Result<()> {
    let mut text = String::new();
    std::io::stdin().read_to_string(&mut text)?;
    let file = pintle_syntax::parse(&text);
    print_faults(&text, &LineIndex::new(&text), &file.items, 0);
    if std::env::args().any(|argument| argument == "--items") {
        println!("{:#?}", file.items);
    }
    if std::env::args().any(|argument| argument == "--format") {
        print!("{}", pintle_syntax::format(&text));
    }
    Ok(())
}

fn print_faults(text: &str, lines: &LineIndex, items: &[Item], origin: u32) {
    for item in items {
        let origin = origin + item.offset;
        for fault in &item.errors {
            let place = fault.place.shifted(origin);
            let (line, column) = lines.line_column(text, place.start);
            let under = text.get(place.range()).unwrap_or("");
            let fixes: Vec<&String> = fault.fixes.iter().map(|fix| &fix.title).collect();
            println!("{line}:{column} {} [{}] at {under:?} {:?} {fixes:?}", fault.message, fault.code.name, fault.help);
        }
        if let ItemKind::Component { items, .. } = &item.kind {
            print_faults(text, lines, items, origin);
        }
    }
}
