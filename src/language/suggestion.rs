//! The word that was probably meant.

/// The candidate nearest to a word, if it is near enough to be a slip of the pen.
pub fn nearest<'a>(word: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let word = plain(&word.chars().take(80).collect::<String>());
    let most = (word.chars().count() / 3).clamp(1, 3);
    candidates
        .into_iter()
        .map(|candidate| {
            (
                strsim::damerau_levenshtein(&word, &plain(candidate)),
                candidate,
            )
        })
        .filter(|(distance, _)| *distance <= most)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, candidate)| candidate)
}

/// Case, hyphens, blanks and underscores do not matter for a likeness.
fn plain(word: &str) -> String {
    word.chars()
        .map(|c| {
            if matches!(c, '-' | ' ') {
                '_'
            } else {
                c.to_ascii_lowercase()
            }
        })
        .collect()
}

/// `a`, `b` or `c`.
pub fn one_of(words: &[&str]) -> String {
    match words {
        [] => String::new(),
        [only] => format!("`{only}`"),
        [before @ .., last] => {
            let before: Vec<String> = before.iter().map(|word| format!("`{word}`")).collect();
            format!("{} or `{last}`", before.join(", "))
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn finds_slips_and_nothing_else() {
        let keys = ["sample_size", "alpha", "family", "null_subset"];
        assert_eq!(nearest("sampel-size", keys), Some("sample_size"));
        assert_eq!(nearest("Alpha", keys), Some("alpha"));
        assert_eq!(nearest("outcomes", keys), None);
    }
}
