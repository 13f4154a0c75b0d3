//! Groups that share a letter: a display of all pairs in which two levels share a letter exactly when the pair is not
//! shown to differ.
//!
//! Insert and absorb: it starts with one column that holds every level; for a pair that differs, each column that holds
//! both is replaced by two copies, one without either; a column that another contains is absorbed. Here the pairs are
//! inserted level by level, all pairs of a level with the ones before it at once, which comes to the same columns. In
//! this order there are never more columns, after a level is done, than at the end: each column so far
//! is a part of a different one of the final columns.
//!
//! The display exists for every pattern of decisions, also for those that are no intervals of the ordered means
//! (unequal group sizes or variances). To share a letter is no evidence of equality.
//!
//! Reference: Piepho (2004), J. Comput. Graph. Stat. 13, 456–466.

/// The names from "a" to "z" and from "aa" to "zz": 26 + 26². A display with more columns helps nobody, and some
/// patterns need 3^(k/3) of them (Moon and Moser 1965, Israel J. Math. 3, 23–28).
const MOST_COLUMNS: usize = 702;

/// Which levels share which letters.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Letters {
    /// The levels of each letter, in ascending order; the first column is "a".
    pub columns: Vec<Vec<usize>>,
    /// The letters of each level: "ab". With more than 26 columns letters can be pairs, and spaces stand between
    /// them: "a b aa".
    pub of_level: Vec<String>,
}

/// A display that would need too many letters to be read.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error(
    "the decisions on all pairs of {levels} levels need more than {MOST_COLUMNS} letters; read them from the table of pairs"
)]
pub struct TooManyLetters {
    pub levels: usize,
}

/// The letters of `k` levels, where `differs(i, j)` for i < j says whether the pair is shown to differ.
///
/// Columns are lettered by their largest mean, the largest of all first; where that ties, by the next ones. Levels
/// with equal means count in their given order. Nothing but the order of the letters depends on the means.
///
/// # Errors
/// [`TooManyLetters`] for more than 702 columns.
///
/// # Panics
/// If there are not as many means as levels.
///
/// # Source
/// Piepho (2004), the insert-and-absorb algorithm.
///
/// # Example
/// ```
/// # use levelwise::methods::multiplicity::letters;
/// // Only the outer two of three levels differ.
/// let shown = letters(3, &[7.0, 6.0, 5.0], |i, j| (i, j) == (0, 2))?;
/// assert_eq!(shown.of_level, ["a", "ab", "b"]);
/// # Ok::<(), levelwise::methods::multiplicity::TooManyLetters>(())
/// ```
pub fn letters(
    k: usize,
    means: &[f64],
    differs: impl Fn(usize, usize) -> bool,
) -> Result<Letters, TooManyLetters> {
    assert_eq!(means.len(), k, "one mean a level");
    let mut columns: Vec<Members> = Vec::new();
    for level in 0..k {
        let mut apart = Members::none(k);
        (0..level).filter(|earlier| differs(*earlier, level)).for_each(|earlier| apart.add(earlier));
        insert(&mut columns, level, &apart);
        if columns.len() > MOST_COLUMNS {
            return Err(TooManyLetters { levels: k });
        }
    }
    Ok(lettered(k, means, &columns))
}

/// Inserts the pairs of `level` with the levels of `apart`, from which it differs.
fn insert(columns: &mut Vec<Members>, level: usize, apart: &Members) {
    let mut with = Vec::new();
    let mut without = Vec::new();
    if columns.is_empty() {
        with.push(Members::none(apart.size()));
    }
    for column in columns.drain(..) {
        if column.meets(apart) {
            with.push(column.less(apart));
            without.push(column);
        } else {
            with.push(column);
        }
    }
    // Of the columns with this level only those count that no other one contains; equal ones once. Larger ones first:
    // none can be contained in a later one.
    with.sort_by_key(|column| std::cmp::Reverse(column.count()));
    for mut column in with {
        if !columns.iter().any(|kept| kept.contains(&column)) {
            column.add(level);
            columns.push(column);
        }
    }
    // Columns without the level contained one another before no more than now.
    columns.append(&mut without);
}

fn lettered(k: usize, means: &[f64], columns: &[Members]) -> Letters {
    let mut by_mean: Vec<usize> = (0..k).collect();
    by_mean.sort_by(|i, j| means[*j].total_cmp(&means[*i]));
    // Each column as its members' ranks, the largest mean first.
    let mut ranked: Vec<Vec<usize>> =
        columns.iter().map(|column| (0..k).filter(|rank| column.has(by_mean[*rank])).collect()).collect();
    ranked.sort();
    let mut of_level = vec![String::new(); k];
    for (place, column) in ranked.iter().enumerate() {
        for rank in column {
            let text = &mut of_level[by_mean[*rank]];
            if ranked.len() > 26 && !text.is_empty() {
                text.push(' ');
            }
            text.push_str(&letter(place));
        }
    }
    let columns = ranked.into_iter().map(|column| {
        let mut levels: Vec<usize> = column.into_iter().map(|rank| by_mean[rank]).collect();
        levels.sort_unstable();
        levels
    });
    Letters { columns: columns.collect(), of_level }
}

/// "a" to "z", then "aa", "ab" and so on up to "zz".
fn letter(place: usize) -> String {
    let one = |i: usize| char::from(b'a' + (i % 26) as u8);
    if place < 26 { one(place).to_string() } else { [one(place / 26 - 1), one(place)].iter().collect() }
}

/// A set of levels, one bit each.
#[derive(Clone)]
struct Members {
    words: Vec<u64>,
}

impl Members {
    fn none(levels: usize) -> Self {
        Self { words: vec![0; levels.div_ceil(64)] }
    }

    /// How many levels there is room for.
    fn size(&self) -> usize {
        self.words.len() * 64
    }

    fn add(&mut self, level: usize) {
        self.words[level / 64] |= 1 << (level % 64);
    }

    fn has(&self, level: usize) -> bool {
        self.words[level / 64] >> (level % 64) & 1 == 1
    }

    fn count(&self) -> u32 {
        self.words.iter().map(|word| word.count_ones()).sum()
    }

    fn meets(&self, other: &Self) -> bool {
        self.words.iter().zip(&other.words).any(|(one, other)| one & other != 0)
    }

    fn contains(&self, other: &Self) -> bool {
        self.words.iter().zip(&other.words).all(|(one, other)| other & !one == 0)
    }

    fn less(&self, other: &Self) -> Self {
        Self { words: self.words.iter().zip(&other.words).map(|(one, other)| one & !other).collect() }
    }
}

#[cfg(test)]
mod tests {
    use super::letter;

    #[test]
    fn letters_go_on_in_pairs() {
        let named: Vec<String> = [0, 25, 26, 27, 51, 52, 701].map(letter).to_vec();
        assert_eq!(named, ["a", "z", "aa", "ab", "az", "ba", "zz"]);
    }
}
