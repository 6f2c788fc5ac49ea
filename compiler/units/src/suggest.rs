//! Nearest names by edit distance, case-blind differences first.
//!
//! It must never know what the names mean.

/// The names nearest to a misspelt one, best first, at most five.
pub fn nearest_of<'a>(name: &str, names: impl Iterator<Item = &'a str>) -> Vec<&'a str> {
    // A very long "name" is no misspelling of anything; the bound also keeps the work small.
    let length = name.chars().count();
    if length == 0 || length > 40 {
        return Vec::new();
    }
    let allowed = match length {
        1 => 0,
        2..=3 => 1,
        4..=7 => 2,
        _ => 3,
    };
    let lower = name.to_lowercase();
    let mut scored: Vec<(usize, &'a str)> = names
        .filter_map(|candidate| {
            if candidate.to_lowercase() == lower {
                return Some((0, candidate));
            }
            let cost = distance(name, candidate);
            (cost <= allowed).then_some((cost, candidate))
        })
        .collect();
    scored.sort();
    scored.dedup();
    scored.truncate(5);
    scored.into_iter().map(|(_, candidate)| candidate).collect()
}

/// Optimal string alignment distance: insertions, deletions, replacements and swaps of neighbours.
fn distance(a: &str, b: &str) -> usize {
    let a: Vec<char> = a.chars().collect();
    let b: Vec<char> = b.chars().collect();
    if a.len().abs_diff(b.len()) > 3 {
        return usize::MAX;
    }
    let mut before: Vec<usize> = vec![0; b.len() + 1];
    let mut row: Vec<usize> = (0..=b.len()).collect();
    for (i, x) in a.iter().enumerate() {
        let mut next = vec![i + 1; b.len() + 1];
        for (j, y) in b.iter().enumerate() {
            let replace = row[j] + usize::from(x != y);
            let mut best = replace.min(row[j + 1] + 1).min(next[j] + 1);
            if i > 0 && j > 0 && a[i] == b[j - 1] && a[i - 1] == b[j] {
                best = best.min(before[j - 1] + 1);
            }
            next[j + 1] = best;
        }
        before = std::mem::replace(&mut row, next);
    }
    row[b.len()]
}
