//! A guess at what was meant, by edit distance.

/// Insertions, deletions, replacements and swaps of neighbours between two words (Damerau 1964, restricted).
pub(super) fn distance(a: &str, b: &str) -> usize {
    let a: Vec<char> = a.chars().take(64).collect();
    let b: Vec<char> = b.chars().take(64).collect();
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
    last[b.len()]
}

/// The most similar of `known`, if one is similar enough to be worth a word.
pub(super) fn guess<'k>(word: &str, known: impl IntoIterator<Item = &'k str>) -> Option<&'k str> {
    let plain = |text: &str| text.to_lowercase().replace(['_', '-', ' '], "");
    let wanted = plain(word);
    known
        .into_iter()
        .filter_map(|candidate| {
            let offered = plain(candidate);
            let apart = distance(&wanted, &offered);
            let part =
                wanted.len() >= 4 && offered.len() >= 4 && (offered.contains(&wanted) || wanted.contains(&offered));
            let near = apart <= (wanted.chars().count().max(offered.chars().count()) / 3).max(1);
            (near || part).then_some((apart, candidate))
        })
        .min_by_key(|(apart, _)| *apart)
        .map(|(_, candidate)| candidate)
}
