//! The name that a misspelt word stands for.

use super::path::short;

/// The candidate that `word` most likely stands for, or `None` if none is close.
///
/// Close means at most one slip for three letters (Damerau-Levenshtein distance; at least one slip
/// is always allowed). Capitals, hyphens, spaces and underscores count as equal.
pub fn nearest<'a>(word: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    /// Longer words are no slip of the pen, and their distance takes long to compute.
    const LONGEST: usize = 64;
    let plain = |text: &str| text.to_lowercase().replace(['-', ' '], "_");
    if word.len() > LONGEST {
        return None;
    }
    let wanted = plain(word);
    let most = (wanted.chars().count() / 3).max(1);
    candidates
        .into_iter()
        .filter(|candidate| candidate.len() <= LONGEST)
        .map(|candidate| (strsim::damerau_levenshtein(&wanted, &plain(candidate)), candidate))
        .filter(|(distance, _)| *distance <= most)
        .min_by_key(|(distance, _)| *distance)
        .map(|(_, candidate)| candidate)
}

/// "did you mean …?" for the nearest candidate, else the list of them, else `None`.
pub fn did_you_mean<'a>(word: &str, candidates: impl IntoIterator<Item = &'a str> + Clone) -> Option<String> {
    match nearest(word, candidates.clone()) {
        Some(found) => Some(format!("did you mean `{}`?", short(found))),
        None => known(candidates).map(|list| format!("known here: {list}")),
    }
}

/// Up to thirty names in backticks, or `None` if there is none.
pub fn known<'a>(names: impl IntoIterator<Item = &'a str>) -> Option<String> {
    const MOST: usize = 30;
    let mut names = names.into_iter();
    let shown: Vec<String> = names.by_ref().take(MOST).map(|name| format!("`{}`", short(name))).collect();
    let more = match names.count() {
        0 => String::new(),
        more => format!(" and {more} more"),
    };
    (!shown.is_empty()).then(|| shown.join(", ") + &more)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn nearest_takes_slips_and_refuses_other_words() {
        let keys = ["thrusters", "wheels", "mission", "tank"];
        assert_eq!(nearest("thrsters", keys), Some("thrusters"));
        assert_eq!(nearest("Wheels", keys), Some("wheels"));
        assert_eq!(nearest("tnak", keys), Some("tank")); // one swap is one slip
        assert_eq!(nearest("battery", keys), None);
        assert_eq!(nearest("A3", ["A1", "B2"]), Some("A1"));
        assert_eq!(nearest(&"thrusters".repeat(100_000), keys), None);
    }

    #[test]
    fn names_are_listed_to_a_limit() {
        assert_eq!(known([]), None);
        assert_eq!(known(["a", "b"]).as_deref(), Some("`a`, `b`"));
        assert!(known(["a"; 33]).unwrap().ends_with(" and 3 more"));
    }
}
