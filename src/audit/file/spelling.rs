//! The nearest known word to a misspelt one.

/// Words longer than this are not compared.
const LONGEST: usize = 40;

/// The known word with the fewest insertions, deletions, replacements and exchanges of
/// neighbours, if they are at most a third of the word.
pub(super) fn nearest<'known>(word: &str, known: &[&'known str]) -> Option<&'known str> {
    let letters: Vec<char> = word.to_lowercase().chars().collect();
    if letters.len() > LONGEST {
        return None;
    }
    let limit = (letters.len() / 3).max(1);
    known
        .iter()
        .map(|&candidate| {
            (
                distance(&letters, &candidate.chars().collect::<Vec<_>>()),
                candidate,
            )
        })
        .min_by_key(|&(distance, _)| distance)
        .filter(|&(distance, _)| distance <= limit)
        .map(|(_, candidate)| candidate)
}

/// The restricted edit distance, row by row.
fn distance(left: &[char], right: &[char]) -> usize {
    let mut before = vec![0; right.len() + 1];
    let mut above: Vec<usize> = (0..=right.len()).collect();
    for row in 1..=left.len() {
        let mut current = vec![row; right.len() + 1];
        for column in 1..=right.len() {
            let differs = usize::from(left[row - 1] != right[column - 1]);
            let mut least = (above[column] + 1)
                .min(current[column - 1] + 1)
                .min(above[column - 1] + differs);
            let exchanged = row > 1
                && column > 1
                && left[row - 1] == right[column - 2]
                && left[row - 2] == right[column - 1];
            if exchanged {
                least = least.min(before[column - 2] + 1);
            }
            current[column] = least;
        }
        before = std::mem::replace(&mut above, current);
    }
    above[right.len()]
}

/// `a`, `b` and `c`, each in backquotes.
pub(super) fn list(words: &[&str]) -> String {
    let quoted: Vec<String> = words.iter().map(|word| format!("`{word}`")).collect();
    match quoted.split_last() {
        None => String::new(),
        Some((last, [])) => last.clone(),
        Some((last, others)) => format!("{} and {last}", others.join(", ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slips_of_the_keyboard_are_found_and_other_words_are_not() {
        let known = ["at_most", "absolute_part", "approximant", "of", "on"];
        assert_eq!(nearest("atmost", &known), Some("at_most"));
        assert_eq!(nearest("at_msot", &known), Some("at_most"));
        assert_eq!(nearest("Aproximant", &known), Some("approximant"));
        assert_eq!(nearest("tolerance", &known), None);
        assert_eq!(nearest(&"x".repeat(1000), &known), None);
        let far: Vec<char> = "kitten".chars().collect();
        assert_eq!(distance(&far, &"sitting".chars().collect::<Vec<_>>()), 3);
    }

    #[test]
    fn lists_read_as_sentences() {
        assert_eq!(list(&["a"]), "`a`");
        assert_eq!(list(&["a", "b", "c"]), "`a`, `b` and `c`");
    }
}
