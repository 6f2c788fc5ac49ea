//! The editor grammars know exactly the words that the language knows.

use pintle_syntax::{Role, keywords};
use std::collections::BTreeSet;

const FOLDER: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/../editor-support");

fn read(file: &str) -> String {
    std::fs::read_to_string(format!("{FOLDER}/{file}")).expect("a file of the editor support")
}

fn words(role: Role) -> BTreeSet<String> {
    keywords().iter().filter(|it| it.role == role).map(|it| it.word.to_string()).collect()
}

/// The words between two marks of a file, whatever stands between the words.
#[track_caller]
fn words_between(text: &str, from: &str, to: &str) -> BTreeSet<String> {
    let (_, rest) = text.split_once(from).unwrap_or_else(|| panic!("{from:?} is not there"));
    let (list, _) = rest.split_once(to).unwrap_or_else(|| panic!("{to:?} is not behind {from:?}"));
    let list = list.replace("<item>", " ").replace("</item>", " ");
    list.split(|c: char| !c.is_alphanumeric() && c != '_').filter(|it| !it.is_empty()).map(String::from).collect()
}

#[track_caller]
fn check_list(file: &str, role: Role, from: &str, to: &str) {
    let (found, expected) = (words_between(&read(file), from, to), words(role));
    let missing: Vec<_> = expected.difference(&found).collect();
    let unknown: Vec<_> = found.difference(&expected).collect();
    let whole: Vec<_> = expected.iter().map(String::as_str).collect();
    assert!(
        missing.is_empty() && unknown.is_empty(),
        "{file}: {role:?} words missing {missing:?}, unknown {unknown:?}; the list is\n{}\n{}",
        whole.join("|"),
        whole.join(" "),
    );
}

#[test]
fn vim_knows_the_keywords() {
    let file = "nvim/syntax/pintle.vim";
    check_list(file, Role::Item, "\\zs\\%(", "\\)\\>");
    check_list(file, Role::Line, "\\.\\@1<!\\<\\%(", "\\)\\>");
}

#[test]
fn emacs_knows_the_keywords() {
    check_list("emacs/pintle-mode.el", Role::Item, "(defconst pintle-item-keywords\n  '(", ")");
    check_list("emacs/pintle-mode.el", Role::Line, "(defconst pintle-line-keywords\n  '(", ")");
}

#[test]
fn kate_knows_the_keywords() {
    check_list("kate/pintle.xml", Role::Item, "<list name=\"items\">", "</list>");
    check_list("kate/pintle.xml", Role::Line, "<list name=\"lines\">", "</list>");
}

#[test]
fn the_textmate_grammar_knows_the_keywords() {
    let text = read("vscode/syntaxes/pintle.tmLanguage.json");
    let grammar: serde_json::Value = serde_json::from_str(&text).expect("JSON");
    for (name, role) in [("item", Role::Item), ("line", Role::Line)] {
        let pattern = grammar["repository"][name]["match"].as_str().expect("a pattern");
        assert_eq!(words_between(pattern, "(?:", ")"), words(role), "{name}");
    }
}

#[test]
fn helix_and_vscode_name_the_server() {
    assert!(read("helix/languages.toml").contains("command = \"pintle-server\""));
    let package: serde_json::Value = serde_json::from_str(&read("vscode/package.json")).expect("JSON");
    assert_eq!(package["contributes"]["grammars"][0]["path"], "./syntaxes/pintle.tmLanguage.json");
    assert_eq!(package["contributes"]["configuration"]["properties"]["pintle.server.path"]["default"], "pintle-server");
    assert_eq!(package["version"], env!("CARGO_PKG_VERSION"));
}
