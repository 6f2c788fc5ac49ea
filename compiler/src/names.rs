//! Names: which files belong together, what each name stands for, and in which
//! order items must be read so that each finds what it uses.
//!
//! Items of a sheet see each other in any order. Library files see only
//! library files, so a sheet cannot change the handbook by choosing a name.

mod references;

use crate::QuickMap;
use crate::codes;
use crate::library;
use crate::source::{Files, Origin, Source, Sources};
use pintle_syntax::ast::{Item, ItemKind};
use pintle_text::{Diagnostic, FileId, ItemId, LineIndex, Place, Span};
use smol_str::SmolStr;
use std::sync::Arc;

pub use references::references;

/// All items of a compilation with their names.
#[derive(Clone, Debug, Default)]
pub struct Sheet {
    /// The files; the sheet is the first.
    pub sources: Sources,
    /// Items in an order in which each comes after those that it uses.
    pub order: Vec<ItemId>,
    /// Items of a circle of definitions; they have no value.
    pub circular: Vec<ItemId>,
    own: QuickMap<SmolStr, ItemId>,
    imported: QuickMap<SmolStr, ItemId>,
    standard: QuickMap<SmolStr, ItemId>,
}

impl Sheet {
    /// The item with that id.
    pub fn item(&self, id: ItemId) -> Option<&Item> {
        self.sources.file(id.file)?.syntax.items.get(id.index as usize)
    }

    /// What `name` stands for in a file of that origin.
    pub fn lookup(&self, origin: Origin, name: &str) -> Option<ItemId> {
        let found = match origin {
            Origin::Standard => self.standard.get(name),
            _ => self.own.get(name).or_else(|| self.imported.get(name)),
        };
        found.copied()
    }

    /// A name of the standard library that the sheet has not brought in, with its file.
    pub fn not_imported(&self, name: &str) -> Option<&str> {
        let item = self.standard.get(name)?;
        self.sources.file(item.file).map(|source| source.path.as_str())
    }

    /// Names that a sheet can use, sorted.
    pub fn visible(&self, origin: Origin) -> Vec<&SmolStr> {
        let mut names: Vec<&SmolStr> = match origin {
            Origin::Standard => self.standard.keys().collect(),
            _ => self.own.keys().chain(self.imported.keys()).collect(),
        };
        names.sort();
        names.dedup();
        names
    }

    /// Origin of the file that holds `item`.
    pub fn origin(&self, item: ItemId) -> Origin {
        self.sources.file(item.file).map_or(Origin::Sheet, |source| source.origin)
    }

    /// Items of the sheet and of the files that it uses, in order of the text.
    pub fn own_items(&self) -> impl Iterator<Item = (ItemId, &Item)> {
        self.sources.files().iter().enumerate().filter(|(_, source)| source.origin != Origin::Standard).flat_map(
            |(file, source)| {
                source
                    .syntax
                    .items
                    .iter()
                    .enumerate()
                    .map(move |(index, item)| (ItemId { file: FileId(file as u32), index: index as u32 }, item))
            },
        )
    }
}

/// Reads a sheet's text and everything that it uses.
pub fn resolve(path: &str, text: Arc<str>, files: &dyn Files) -> (Sheet, Vec<Diagnostic>) {
    let mut sheet = Sheet::default();
    let mut acc = Vec::new();
    let (text, syntax) = match files.parsed(path).filter(|(known, _)| *known == text) {
        Some(parsed) => parsed,
        None => {
            let syntax = Arc::new(pintle_syntax::parse(&text));
            (text, syntax)
        }
    };
    sheet.sources.add(new_source(path.to_string(), Origin::Sheet, text, syntax));
    let imports = load(&mut sheet, files, &mut acc);
    declare(&mut sheet, &imports, &mut acc);
    order(&mut sheet, &mut acc);
    (sheet, acc)
}

/// Text and syntax of a file that a sheet uses, or why it cannot be read.
fn parsed(path: &str, files: &dyn Files) -> Result<(Arc<str>, Arc<pintle_syntax::ast::SourceFile>), String> {
    if let Some(parsed) = files.parsed(path) {
        return Ok(parsed);
    }
    let text: Arc<str> = String::from_utf8_lossy(&files.read(path)?).into();
    let syntax = Arc::new(pintle_syntax::parse(&text));
    Ok((text, syntax))
}

fn new_source(path: String, origin: Origin, text: Arc<str>, syntax: Arc<pintle_syntax::ast::SourceFile>) -> Source {
    let lines = Arc::new(LineIndex::new(&text));
    Source { path, origin, text, lines, syntax }
}

/// Follows `use` lines; gives the names of the standard files brought in.
fn load(sheet: &mut Sheet, files: &dyn Files, acc: &mut Vec<Diagnostic>) -> Vec<&'static str> {
    let mut imports = vec![library::PRELUDE];
    let mut next = 0;
    while next < sheet.sources.files().len() {
        let file = FileId(next as u32);
        next += 1;
        let Some(source) = sheet.sources.file(file).cloned() else { continue };
        for (index, item) in source.syntax.items.iter().enumerate() {
            let ItemKind::Use { path } = &item.kind else { continue };
            let place = Place { item: ItemId { file, index: index as u32 }, span: path.span };
            let wanted = path.text.as_str();
            if let Some(name) = wanted.strip_prefix("std.") {
                match library::STANDARD.iter().find(|it| it.name == name) {
                    Some(standard) => imports.push(standard.name),
                    None => {
                        let names: Vec<&str> = library::STANDARD.iter().map(|it| it.name).collect();
                        acc.push(
                            Diagnostic::new(
                                codes::UNKNOWN_LIBRARY,
                                place,
                                format!("the standard library has no part `{name}`"),
                            )
                            .with_help(format!("its parts are {}", names.join(", "))),
                        );
                    }
                }
            } else if wanted.starts_with("./") || wanted.starts_with("../") {
                let path = beside(&source.path, wanted);
                if sheet.sources.files().iter().any(|it| it.path == path) {
                    continue;
                }
                match parsed(&path, files) {
                    Ok((text, syntax)) => {
                        sheet.sources.add(new_source(path, Origin::Used, text, syntax));
                    }
                    Err(why) => acc.push(
                        Diagnostic::new(
                            codes::UNREADABLE_FILE,
                            place,
                            format!("cannot read `{path}`, which this line uses: {why}"),
                        )
                        .with_help("the path counts from the folder of this file, without the ending `.pintle`"),
                    ),
                }
            } else {
                acc.push(
                    Diagnostic::new(
                        codes::NOT_SUPPORTED_YET,
                        place,
                        format!("`{wanted}` names a shared library, which is not supported yet"),
                    )
                    .with_help("use a file by its path (`use ./parts/drum`) or a part of the standard library (`use std.shapes`)"),
                );
            }
        }
    }
    imports
}

/// The path of `wanted`, read from the file at `from`.
fn beside(from: &str, wanted: &str) -> String {
    let mut parts: Vec<&str> = from.split('/').collect();
    parts.pop();
    for part in wanted.split('/') {
        match part {
            "." | "" => {}
            ".." if parts.last().is_some_and(|last| *last != ".." && !last.is_empty()) => {
                parts.pop();
            }
            part => parts.push(part),
        }
    }
    let path = parts.join("/");
    if path.ends_with(".pintle") { path } else { format!("{path}.pintle") }
}

fn declare(sheet: &mut Sheet, imports: &[&str], acc: &mut Vec<Diagnostic>) {
    for standard in library::STANDARD {
        let parsed = library::parsed(standard.name);
        let Some((text, syntax)) = parsed else { continue };
        let file = sheet.sources.add(new_source(
            format!("std/{}.pintle", standard.name),
            Origin::Standard,
            text,
            syntax.clone(),
        ));
        for (index, item) in syntax.items.iter().enumerate() {
            if let Some(name) = defined_name(item) {
                let id = ItemId { file, index: index as u32 };
                sheet.standard.entry(name.text.clone()).or_insert(id);
                if imports.contains(&standard.name) {
                    sheet.imported.entry(name.text.clone()).or_insert(id);
                }
            }
        }
    }
    let mut defined: Vec<(SmolStr, ItemId, Span)> = Vec::new();
    for (id, item) in sheet.own_items() {
        if let Some(name) = defined_name(item) {
            defined.push((name.text.clone(), id, name.span));
        }
    }
    let mut first: QuickMap<SmolStr, Place> = QuickMap::default();
    for (name, item, span) in defined {
        let place = Place { item, span };
        if let Some(&earlier) = first.get(&name) {
            acc.push(
                Diagnostic::new(codes::DUPLICATE_NAME, place, format!("`{name}` is defined twice"))
                    .with_note("second definition")
                    .with_label(earlier, "first definition")
                    .with_help("rename one of them; only the first is used"),
            );
            continue;
        }
        first.insert(name.clone(), place);
        sheet.own.insert(name, item);
    }
}

/// The name that other items can use for `item`.
pub fn defined_name(item: &Item) -> Option<&pintle_syntax::ast::Name> {
    match &item.kind {
        ItemKind::Wanted(wanted) => match wanted.path.segments.as_slice() {
            [segment] => Some(&segment.name),
            _ => None,
        },
        _ => item.name(),
    }
}

/// Topological order by a loop, not recursion: a sheet may chain thousands of lines.
fn order(sheet: &mut Sheet, acc: &mut Vec<Diagnostic>) {
    #[derive(Clone, Copy, PartialEq)]
    enum Mark {
        Open,
        Done,
    }
    let mut marks: QuickMap<ItemId, Mark> = QuickMap::default();
    let mut result = Vec::new();
    let mut circular = Vec::new();
    let roots: Vec<ItemId> = sheet.own_items().map(|(id, _)| id).collect();
    for root in roots {
        if marks.contains_key(&root) {
            continue;
        }
        let mut stack = vec![(root, used_items(sheet, root), 0)];
        marks.insert(root, Mark::Open);
        while let Some((id, uses, at)) = stack.last_mut() {
            if let Some(&(next, _)) = uses.get(*at) {
                *at += 1;
                match marks.get(&next) {
                    None => {
                        marks.insert(next, Mark::Open);
                        let uses = used_items(sheet, next);
                        stack.push((next, uses, 0));
                    }
                    Some(Mark::Open) => {
                        let from = stack.iter().position(|(id, _, _)| *id == next).unwrap_or(0);
                        report_circle(sheet, &stack[from..], acc);
                        circular.extend(stack[from..].iter().map(|(id, _, _)| *id));
                    }
                    Some(Mark::Done) => {}
                }
            } else {
                marks.insert(*id, Mark::Done);
                result.push(*id);
                stack.pop();
            }
        }
    }
    circular.sort();
    circular.dedup();
    sheet.order = result;
    sheet.circular = circular;
}

type Visit = (ItemId, Vec<(ItemId, Span)>, usize);

/// Items that `id` needs before it, each with the place of the name.
fn used_items(sheet: &Sheet, id: ItemId) -> Vec<(ItemId, Span)> {
    let Some(item) = sheet.item(id) else { return Vec::new() };
    let origin = sheet.origin(id);
    let mut uses: Vec<(ItemId, Span)> = Vec::new();
    references(item, &mut |name, span| {
        if let Some(used) = sheet.lookup(origin, name)
            && !uses.iter().any(|(known, _)| *known == used)
        {
            uses.push((used, span));
        }
    });
    uses
}

fn report_circle(sheet: &Sheet, circle: &[Visit], acc: &mut Vec<Diagnostic>) {
    let name = |id: ItemId| sheet.item(id).and_then(defined_name).map_or("?", |name| name.text.as_str());
    let Some(&(first, ..)) = circle.first() else { return };
    let mut words: Vec<&str> = circle.iter().map(|(id, ..)| name(*id)).collect();
    words.push(name(first));
    // Start the report where the circle closes: at the first item's use of the second.
    let place_of = |(id, uses, at): &Visit| Place {
        item: *id,
        span: uses.get(at.saturating_sub(1)).map_or(Span::default(), |(_, span)| *span),
    };
    let mut diagnostic = Diagnostic::new(
        codes::CIRCULAR_DEFINITION,
        place_of(&circle[0]),
        format!("circular definition: {}", words.join(" -> ")),
    );
    for (at, visit) in circle.iter().enumerate() {
        let next = words.get(at + 1).copied().unwrap_or("?");
        let text = format!("`{}` needs `{next}`", words[at]);
        if at == 0 {
            diagnostic = diagnostic.with_note(text);
        } else if at < 8 {
            diagnostic = diagnostic.with_label(place_of(visit), text);
        }
    }
    acc.push(diagnostic.with_help(
        "give one of them a value of its own, or make it an unknown: `wanted NAME within LOW .. HIGH where LEFT == RIGHT`",
    ));
}

#[cfg(test)]
mod tests {
    use super::beside;

    #[test]
    fn paths_count_from_the_using_file() {
        assert_eq!(beside("sheets/winch.pintle", "./parts/drum"), "sheets/parts/drum.pintle");
        assert_eq!(beside("winch.pintle", "./drum"), "drum.pintle");
        assert_eq!(beside("a/b/c.pintle", "../d"), "a/d.pintle");
        assert_eq!(beside("c.pintle", "../d"), "../d.pintle");
    }
}
