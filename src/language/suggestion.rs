//! The word that was probably meant, and words quoted in messages.

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

/// A piece of the plan quoted in a message, cut to a length a terminal can bear.
pub fn shown(text: &str) -> String {
    const MOST: usize = 60;
    if text.chars().count() <= MOST {
        text.to_owned()
    } else {
        let head: String = text.chars().take(MOST).collect();
        format!("{head}…")
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
