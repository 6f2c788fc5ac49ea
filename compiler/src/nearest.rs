//! The names nearest to a misspelt one.

/// Up to three of `names` that are close to `word`, nearest first.
pub fn nearest<'n>(word: &str, names: impl IntoIterator<Item = &'n str>) -> Vec<&'n str> {
    let limit = match word.chars().count() {
        0..=2 => 1,
        3..=5 => 2,
        _ => 3,
    };
    let lower = word.to_lowercase();
    let mut close: Vec<(usize, &str)> = names
        .into_iter()
        .filter_map(|name| {
            let distance = if name.to_lowercase() == lower { 0 } else { distance(word, name, limit)? };
            (distance <= limit && distance < word.chars().count().max(1)).then_some((distance, name))
        })
        .collect();
    close.sort();
    close.dedup();
    close.into_iter().take(3).map(|(_, name)| name).collect()
}

/// "did you mean `a` or `b`?", or None.
pub fn did_you_mean<'n>(word: &str, names: impl IntoIterator<Item = &'n str>) -> Option<String> {
    let close = nearest(word, names);
    let quoted: Vec<String> = close.iter().map(|name| format!("`{name}`")).collect();
    match quoted.as_slice() {
        [] => None,
        [one] => Some(format!("did you mean {one}?")),
        [rest @ .., last] => Some(format!("did you mean {} or {last}?", rest.join(", "))),
    }
}

/// Edits (insert, drop, replace, swap neighbours) between two words, given up past `limit`.
fn distance(a: &str, b: &str, limit: usize) -> Option<usize> {
    let a: Vec<char> = a.chars().collect();
    let b: Vec<char> = b.chars().collect();
    if a.len().abs_diff(b.len()) > limit {
        return None;
    }
    let mut before: Vec<usize> = Vec::new();
    let mut last: Vec<usize> = (0..=b.len()).collect();
    for i in 1..=a.len() {
        let mut row = vec![i; b.len() + 1];
        for j in 1..=b.len() {
            let cost = usize::from(a[i - 1] != b[j - 1]);
            row[j] = (last[j] + 1).min(row[j - 1] + 1).min(last[j - 1] + cost);
            if i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1] {
                row[j] = row[j].min(before[j - 2] + 1);
            }
        }
        before = std::mem::replace(&mut last, row);
    }
    last.last().copied().filter(|&found| found <= limit)
}

#[cfg(test)]
mod tests {
    use super::nearest;

    #[test]
    fn close_names_come_first() {
        assert_eq!(nearest("outer_diamter", ["inner_diameter", "outer_diameter"]), ["outer_diameter"]);
        assert_eq!(nearest("Drum", ["drum", "dram"]), ["drum", "dram"]);
        assert!(nearest("xyz", ["flange"]).is_empty());
    }
}
