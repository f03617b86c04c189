//! The nearest known word to one that is not known, for "did you mean" hints.

/// The candidate nearest to `word`, if one is near enough to be a likely slip of the keyboard.
///
/// Case and the choice between `_`, `-` and a space do not count as a difference, and about one
/// wrong letter in three is allowed. Of several equally near the first is taken.
#[must_use]
pub fn nearest<'a>(word: &str, candidates: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let word = fold(word);
    let allowed = (word.len() / 3).max(1);
    let mut best: Option<(usize, &str)> = None;
    for candidate in candidates {
        let away = distance(&word, &fold(candidate));
        if away <= allowed && best.is_none_or(|(least, _)| away < least) {
            best = Some((away, candidate));
        }
    }
    best.map(|(_, candidate)| candidate)
}

/// Longest word compared; what is longer is no slip of a known one.
const LONGEST: usize = 64;

fn fold(word: &str) -> Vec<char> {
    let plain = |c: char| if matches!(c, '-' | ' ') { '_' } else { c.to_ascii_lowercase() };
    word.chars().take(LONGEST).map(plain).collect()
}

/// Edit distance in which a swap of two neighbours counts once (optimal string alignment).
fn distance(a: &[char], b: &[char]) -> usize {
    let mut before: Vec<usize> = Vec::new();
    let mut above: Vec<usize> = (0..=b.len()).collect();
    for (i, &from) in a.iter().enumerate() {
        let mut row = vec![i + 1];
        for (j, &to) in b.iter().enumerate() {
            let replaced = above[j] + usize::from(from != to);
            let mut least = replaced.min(above[j + 1] + 1).min(row[j] + 1);
            if i > 0 && j > 0 && from == b[j - 1] && a[i - 1] == to {
                least = least.min(before[j - 1] + 1);
            }
            row.push(least);
        }
        before = std::mem::replace(&mut above, row);
    }
    above[b.len()]
}

#[cfg(test)]
mod tests {
    use super::nearest;

    const KEYS: [&str; 5] = ["diameter", "height", "bottom", "corrosion_rate", "at"];

    #[test]
    fn a_slip_finds_its_word() {
        assert_eq!(nearest("diamter", KEYS), Some("diameter"));
        assert_eq!(nearest("hieght", KEYS), Some("height"));
        assert_eq!(nearest("Corrosion-Rate", KEYS), Some("corrosion_rate"));
        assert_eq!(nearest("ta", KEYS), Some("at"));
    }

    #[test]
    fn a_stranger_finds_nothing() {
        assert_eq!(nearest("colour", KEYS), None);
        assert_eq!(nearest("", KEYS), None);
        assert_eq!(nearest(&"x".repeat(10_000), KEYS), None);
    }
}
