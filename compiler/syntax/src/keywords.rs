//! All words that mean something at certain places, for whoever colours or
//! completes them. The grammar reads `words`; the tests here keep both alike.

use crate::words;

/// Where a word is a keyword. Elsewhere it is a name.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Role {
    /// It begins an item, at the start of a line.
    Item,
    /// It stands in a line or begins one inside braces.
    Line,
}

/// A word with the place where it is a keyword.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Keyword {
    /// The word.
    pub word: &'static str,
    /// Where it is one; a word that is both begins an item.
    pub role: Role,
}

/// Words that only one construct reads.
const OTHERS: &[&str] =
    &["choose", "every", "incline", "less", "level", "offers", "require", "rest", "show", "stop", "vertical"];

/// Every keyword once, by place and then by the alphabet.
pub fn keywords() -> Vec<Keyword> {
    let item = |word: &&'static str| Keyword { word, role: Role::Item };
    let line = |word: &&'static str| Keyword { word, role: Role::Line };
    let lists = [words::CLAUSES, words::CONTINUING, words::LINKS, words::LEDGER_LINES, words::DIRECTIONS, OTHERS];
    let lines = lists.into_iter().flatten().filter(|word| !words::ITEMS.contains(word));
    let mut all: Vec<Keyword> = words::ITEMS.iter().map(item).chain(lines.map(line)).collect();
    all.sort_unstable_by_key(|it| (it.role, it.word));
    all.dedup();
    all
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::path::Path;

    /// Words that the grammar asks for but that are no keywords: field names
    /// and marks behind a number.
    const NO_KEYWORDS: &[&str] = &["path", "u", "in"];

    /// What stands in `word("...")` and `is_word("...")` in the sources under a folder.
    fn asked_for(folder: &Path, acc: &mut Vec<String>) {
        for entry in std::fs::read_dir(folder).expect("a folder").flatten() {
            let path = entry.path();
            if path.is_dir() {
                asked_for(&path, acc);
            } else if path.file_name().is_some_and(|name| name != "keywords.rs") {
                let text = std::fs::read_to_string(&path).expect("a source file");
                let behind = text.split("word(\"").skip(1);
                acc.extend(behind.filter_map(|rest| rest.split_once('"').map(|(word, _)| word.to_string())));
            }
        }
    }

    #[test]
    fn every_word_that_the_grammar_asks_for_is_a_keyword() {
        let mut asked = Vec::new();
        asked_for(&Path::new(env!("CARGO_MANIFEST_DIR")).join("src"), &mut asked);
        assert!(asked.len() > 30, "the grammar asks for words in another way: {asked:?}");
        let known = keywords();
        let missing: Vec<&String> = asked
            .iter()
            .filter(|word| !known.iter().any(|it| it.word == *word) && !NO_KEYWORDS.contains(&word.as_str()))
            .collect();
        assert!(missing.is_empty(), "{missing:?}");
    }

    #[test]
    fn each_keyword_stands_once() {
        let mut words: Vec<&str> = keywords().iter().map(|it| it.word).collect();
        let n = words.len();
        words.sort_unstable();
        words.dedup();
        assert_eq!(words.len(), n);
        assert!(keywords().contains(&Keyword { word: "given", role: Role::Item }));
        assert!(keywords().contains(&Keyword { word: "cite", role: Role::Line }));
    }
}
