//! House rules of the library: each item has a source, is used by some test, and stands in SOURCES.md where it is a value.

mod common;

use std::path::PathBuf;

/// An item of the library: its keyword, name and text up to the next item.
struct Item {
    keyword: String,
    name: String,
    text: String,
}

fn items() -> Vec<Item> {
    let mut items: Vec<Item> = Vec::new();
    for path in common::files(&common::folder().join("../stdlib"), "pintle") {
        let mut open = false;
        for line in common::read(&path).lines() {
            let (keyword, rest) = line.split_once(' ').unwrap_or((line, ""));
            if matches!(keyword, "shape" | "formula" | "material") {
                let name = rest.split(|c: char| !(c.is_alphanumeric() || c == '_')).next().unwrap_or("");
                items.push(Item { keyword: keyword.into(), name: name.into(), text: String::new() });
                open = true;
            } else if line.starts_with('|') {
                open = false;
            }
            if open && let Some(item) = items.last_mut() {
                item.text.push_str(line);
                item.text.push('\n');
            }
        }
    }
    items
}

fn texts(folder: &str, ending: &str) -> String {
    let folder: PathBuf = common::folder().join(folder);
    common::files(&folder, ending).iter().map(|path| common::read(path)).collect()
}

#[test]
fn every_item_states_its_source() {
    let faults: Vec<String> = items()
        .iter()
        .filter(|it| !it.text.contains("cite "))
        .map(|it| format!("{} {}", it.keyword, it.name))
        .collect();
    common::report(&faults, items().len());
}

#[test]
fn every_item_is_used_by_a_test() {
    let used = texts("suites", "md") + &texts("scenarios", "pintle") + &texts("checks/sheets", "pintle");
    let words: std::collections::BTreeSet<&str> = used.split(|c: char| !(c.is_alphanumeric() || c == '_')).collect();
    let faults: Vec<String> = items()
        .iter()
        .filter(|it| !words.contains(it.name.as_str()))
        .map(|it| format!("{} {}", it.keyword, it.name))
        .collect();
    common::report(&faults, items().len());
}

#[test]
fn every_material_stands_in_the_list_of_sources() {
    let sources = common::read(&common::folder().join("../stdlib/SOURCES.md"));
    let materials: Vec<Item> = items().into_iter().filter(|it| it.keyword == "material").collect();
    let faults: Vec<String> =
        materials.iter().filter(|it| !sources.contains(&format!("`{}`", it.name))).map(|it| it.name.clone()).collect();
    common::report(&faults, materials.len());
}

#[test]
fn every_file_opens_with_its_documentation() {
    let files = common::files(&common::folder().join("../stdlib"), "pintle");
    let faults: Vec<String> = files
        .iter()
        .filter(|path| !common::read(path).starts_with("| # "))
        .map(|path| path.display().to_string())
        .collect();
    common::report(&faults, files.len());
}
