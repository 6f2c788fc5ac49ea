//! The words that mean something at certain places. None is reserved as a
//! name; each is read as a keyword only where its construct expects it.

/// Words that begin an item.
pub(crate) const ITEMS: &[&str] = &[
    "sheet",
    "library",
    "use",
    "given",
    "assume",
    "material",
    "body",
    "rotor",
    "load",
    "spring",
    "axis",
    "unit",
    "train",
    "brake",
    "clutch",
    "ledger",
    "run",
    "cycle",
    "vary",
    "curve",
    "wanted",
    "limit",
    "case",
    "confirm",
    "shape",
    "formula",
    "component",
    "part",
];

/// Words that cannot be a unit behind a number, because they go on with the line.
pub(crate) const CLAUSES: &[&str] = &[
    "within",
    "cite",
    "as",
    "because",
    "for",
    "when",
    "otherwise",
    "normal",
    "triangular",
    "arcsine",
    "uniform",
    "to",
    "from",
    "at",
    "down_path",
    "up_path",
    "forward",
    "back",
    "steps",
    "open",
    "confirmed",
    "under",
    "agrees",
    "and",
    "or",
    "not",
    "where",
    "about",
    "on",
    "over",
    "failing",
    "each",
    "of",
    "by",
    "along",
    "through",
    "apply",
    "release",
];

/// Words that name how a value is distributed over its set.
pub(crate) const DISTRIBUTIONS: &[&str] = &["normal", "triangular", "arcsine", "uniform"];

/// Words that continue the line above when a line begins with them.
pub(crate) const CONTINUING: &[&str] =
    &["cite", "because", "for", "and", "or", "where", "within", "under", "as", "about"];

/// Words that stand in for a source behind `cite`.
pub(crate) const CITE_WORDS: &[&str] = &["common_practice", "from_memory", "demo"];

/// The kinds of links of a train.
pub(crate) const LINKS: &[&str] = &["gear", "belt", "rope", "rack", "screw", "direct", "roll", "epicyclic"];

/// Words that begin a line of a ledger.
pub(crate) const LEDGER_LINES: &[&str] = &["start", "end", "travel", "spring", "gain", "lose", "wanted", "limit"];

/// The directions of a travel.
pub(crate) const DIRECTIONS: &[&str] = &["down_path", "up_path", "forward", "back"];

/// Words of earlier editions and the present ones.
pub(crate) const RENAMED: &[(&str, &str)] = &[
    ("find", "wanted"),
    ("balance", "ledger"),
    ("rule", "formula"),
    ("function", "formula"),
    ("assumption", "assume"),
];

/// The word of `list` nearest to `word`, if one is near enough to be meant.
pub(crate) fn nearest(word: &str, list: &[&'static str]) -> Option<&'static str> {
    let allowed = match word.chars().count() {
        0..=2 => return None,
        3..=4 => 1,
        _ => 2,
    };
    list.iter()
        .map(|candidate| (distance(word, candidate), *candidate))
        .filter(|(distance, _)| *distance <= allowed)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, candidate)| candidate)
}

/// Edits between two words: insertions, deletions, replacements and swaps of
/// neighbours (optimal string alignment). Long words are cut; they match nothing here.
fn distance(a: &str, b: &str) -> usize {
    let a: Vec<char> = a.chars().take(24).collect();
    let b: Vec<char> = b.chars().take(24).collect();
    let mut before: Vec<usize> = Vec::new();
    let mut above: Vec<usize> = (0..=b.len()).collect();
    for (i, ca) in a.iter().enumerate() {
        let mut row = vec![i + 1];
        for (j, cb) in b.iter().enumerate() {
            let replaced = above.get(j).copied().unwrap_or(0) + usize::from(ca != cb);
            let removed = above.get(j + 1).copied().unwrap_or(0) + 1;
            let added = row.last().copied().unwrap_or(0) + 1;
            let swapped = (i > 0 && j > 0 && a.get(i - 1) == Some(cb) && b.get(j - 1) == Some(ca))
                .then(|| before.get(j - 1).map(|d| d + 1))
                .flatten();
            let best = replaced.min(removed).min(added);
            row.push(swapped.map_or(best, |s| s.min(best)));
        }
        before = std::mem::replace(&mut above, row);
    }
    above.last().copied().unwrap_or(0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nearest_forgives_slips_and_swaps() {
        assert_eq!(nearest("givne", ITEMS), Some("given"));
        assert_eq!(nearest("marterial", ITEMS), Some("material"));
        assert_eq!(nearest("bdoy", ITEMS), Some("body"));
        assert_eq!(nearest("xyz", ITEMS), None);
        assert_eq!(nearest("ab", ITEMS), None);
    }
}
