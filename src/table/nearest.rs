//! The known name most like a mistyped one.

/// The name most like `typed` among `known`; `None` where nothing comes near enough to be worth suggesting.
///
/// Likeness is the number of letters to insert, remove, replace or swap with their neighbour (restricted
/// Damerau-Levenshtein distance), with upper and lower case taken as equal; at most a third of the letters may differ, and one
/// always may. The first of equally near names wins.
pub fn nearest<'a>(typed: &str, known: impl IntoIterator<Item = &'a str>) -> Option<&'a str> {
    let wanted = letters(typed);
    let allowed = (wanted.len() / 3).max(1);
    let mut best: Option<(usize, &str)> = None;
    for name in known {
        let distance = distance(&wanted, &letters(name));
        if distance <= allowed && best.is_none_or(|(least, _)| distance < least) {
            best = Some((distance, name));
        }
    }
    best.map(|(_, name)| name)
}

/// Long texts are cut: nobody mistypes a name of 200 letters, and the work grows with the square.
fn letters(text: &str) -> Vec<char> {
    text.trim().chars().take(200).flat_map(char::to_lowercase).collect()
}

fn distance(one: &[char], two: &[char]) -> usize {
    let mut before: Vec<usize> = Vec::new();
    let mut above: Vec<usize> = (0..=two.len()).collect();
    for i in 1..=one.len() {
        let mut row = vec![i];
        for j in 1..=two.len() {
            let replace = above[j - 1] + usize::from(one[i - 1] != two[j - 1]);
            let mut least = replace.min(above[j] + 1).min(row[j - 1] + 1);
            if i > 1 && j > 1 && one[i - 1] == two[j - 2] && one[i - 2] == two[j - 1] {
                least = least.min(before[j - 2] + 1);
            }
            row.push(least);
        }
        before = std::mem::replace(&mut above, row);
    }
    above[two.len()]
}

#[cfg(test)]
mod tests {
    use super::nearest;

    #[test]
    fn slips_of_the_hand_find_the_name() {
        let known = ["score", "group", "time taken"];
        assert_eq!(nearest("scroe", known), Some("score"));
        assert_eq!(nearest("Groups", known), Some("group"));
        assert_eq!(nearest("time_taken", known), Some("time taken"));
        assert_eq!(nearest("weight", known), None);
        assert_eq!(nearest("", known), None);
        assert_eq!(nearest("x", []), None);
    }
}
