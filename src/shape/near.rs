//! The known word written most like an unknown one.

/// Known words that are listed when none is near.
const MOST_LISTED: usize = 24;

/// The nearest of `known`, if it is near enough to be what was meant.
pub(super) fn nearest<'a>(word: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    // Only short words are compared: the distance costs the product of the lengths.
    if word.chars().count() > 60 {
        return None;
    }
    let lower = word.to_lowercase();
    known
        .into_iter()
        .map(|k| {
            let distance = strsim::damerau_levenshtein(&lower, &k.to_lowercase());
            let begins =
                lower.len() >= 3 && k.len() >= 3 && (k.starts_with(&lower) || lower.starts_with(k));
            (if begins { distance.min(2) } else { distance }, k)
        })
        .filter(|&(distance, k)| distance <= 1 + k.chars().count().max(lower.chars().count()) / 4)
        .min_by_key(|n| n.0)
        .map(|n| n.1)
}

/// "did you mean `x`?", or the list of what is known.
pub(super) fn remedy(word: &str, known: &[&str], none: &str) -> String {
    match nearest(word, known.iter().copied()) {
        Some(k) => format!("did you mean `{k}`?"),
        None if known.is_empty() => none.to_owned(),
        None if known.len() > MOST_LISTED => {
            format!("known here: {}, …", known[..MOST_LISTED].join(", "))
        }
        None => format!("known here: {}", known.join(", ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slips_are_forgiven_and_strangers_are_not() {
        let known = ["radius", "centre", "half_axes", "accuracy"];
        assert_eq!(nearest("raduis", known), Some("radius"));
        assert_eq!(nearest("center", known), Some("centre"));
        assert_eq!(nearest("Radius", known), Some("radius"));
        assert_eq!(nearest("acc", known), Some("accuracy"));
        assert_eq!(nearest("banana", known), None);
        assert_eq!(nearest(&"x".repeat(100_000), known), None);
    }
}
