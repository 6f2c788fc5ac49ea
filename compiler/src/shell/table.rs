//! Listings of what the language and its library offer.

use pintle::library;
use pintle_syntax::ast::{Cite, Clauses, Definition, ItemKind, Parameter};

/// Rows of `list WHAT`; None for another word.
pub fn listing(what: &str) -> Option<Vec<Vec<String>>> {
    let mut rows: Vec<Vec<String>> = Vec::new();
    match what {
        "units" => {
            for unit in pintle_units::all() {
                let symbols: Vec<&str> =
                    std::iter::once(&unit.symbol).chain(&unit.aliases).map(|it| it.as_str()).collect();
                rows.push(vec![symbols.join(", "), unit.words.to_string(), unit.source.to_string()]);
            }
        }
        "kinds" => {
            for kind in pintle_units::Kind::all() {
                let kind = kind.kind;
                rows.push(vec![
                    kind.name().into(),
                    kind.symbol().into(),
                    kind.display_unit().text.to_string(),
                    kind.words().into(),
                ]);
            }
        }
        "shapes" | "materials" | "functions" => {
            if what == "functions" {
                for (name, words) in pintle::lower::FUNCTIONS {
                    rows.push(vec![(*name).into(), (*words).into()]);
                }
            }
            if what == "shapes" {
                rows.push(vec![
                    "turned(profile)".into(),
                    "built in: polygon of (axial, radial) points, revolved".into(),
                ]);
                rows.push(vec![
                    "extruded(outline, holes, length)".into(),
                    "built in: polygon of (y, z) points along x".into(),
                ]);
                rows.push(vec!["mesh(file, unit)".into(), "built in: closed STL surface".into()]);
                rows.push(vec![
                    "measured(mass, inertia, ...)".into(),
                    "built in: as measured or from a data sheet".into(),
                ]);
            }
            for part in library::STANDARD {
                let Some((text, syntax)) = library::parsed(part.name) else { continue };
                for item in &syntax.items {
                    let source = cite(&item.clauses);
                    match (&item.kind, what) {
                        (ItemKind::Shape { name, parameters, .. }, "shapes") => {
                            rows.push(vec![signature(&name.text, parameters), source]);
                        }
                        (ItemKind::Formula { name, parameters, .. }, "functions") => {
                            rows.push(vec![signature(&name.text, parameters), format!("std.{}: {source}", part.name)]);
                        }
                        (ItemKind::Material { name, fields }, "materials") => {
                            let values: Vec<String> = fields
                                .iter()
                                .filter_map(|field| match &field.value {
                                    Some(Definition::Value(value)) => {
                                        let start = (item.offset + value.span.start) as usize;
                                        let end = (item.offset + value.span.end) as usize;
                                        Some(format!(
                                            "{} {}",
                                            field.path.segments.first()?.name.text,
                                            text.get(start..end)?
                                        ))
                                    }
                                    _ => None,
                                })
                                .collect();
                            rows.push(vec![name.text.to_string(), values.join(", "), source]);
                        }
                        _ => {}
                    }
                }
            }
        }
        _ => return None,
    }
    Some(rows)
}

fn signature(name: &str, parameters: &[Parameter]) -> String {
    let list: Vec<String> = parameters
        .iter()
        .map(|it| match &it.kind {
            Some(kind) => format!("{} : {}", it.name.text, kind.text),
            None => it.name.text.to_string(),
        })
        .collect();
    format!("{name}({})", list.join(", "))
}

fn cite(clauses: &Clauses) -> String {
    match &clauses.cite {
        Some(Cite::Source(text)) => text.text.clone(),
        Some(Cite::Word(word)) => word.text.replace('_', " "),
        None => String::new(),
    }
}

/// Rows with their first cells aligned; wide first cells stand on a line of their own.
pub fn columns(rows: &[Vec<String>]) -> String {
    let width = rows
        .iter()
        .filter_map(|row| row.first())
        .map(|cell| cell.chars().count())
        .filter(|&n| n <= 28)
        .max()
        .unwrap_or(0);
    let mut out = String::new();
    for row in rows {
        let Some((first, rest)) = row.split_first() else { continue };
        let rest: Vec<&str> = rest.iter().map(String::as_str).filter(|cell| !cell.is_empty()).collect();
        if first.chars().count() > width {
            out.push_str(&format!("{first}\n{:width$}  {}\n", "", rest.join("; ")));
        } else {
            let pad = width - first.chars().count();
            out.push_str(&format!("{first}{:pad$}  {}\n", "", rest.join("; ")));
        }
    }
    out
}
