//! How many contrasts of a set are linearly independent.

/// The rank of the matrix whose rows are `rows`: at most the number of levels less one for contrasts.
///
/// Gaussian elimination with complete pivoting on rows scaled to a largest entry of 1; what is below 1e-9 then
/// counts as zero.
pub fn rank(rows: &[Vec<f64>]) -> usize {
    let largest = |row: &[f64]| row.iter().fold(0.0_f64, |most, value| most.max(value.abs()));
    let mut rows: Vec<Vec<f64>> = rows
        .iter()
        .filter(|row| largest(row) > 0.0)
        .map(|row| row.iter().map(|value| value / largest(row)).collect())
        .collect();
    let mut rank = 0;
    while let Some((pivot_row, pivot_column)) = pivot(&rows[rank..]).map(|(r, c)| (r + rank, c)) {
        rows.swap(rank, pivot_row);
        let (done, below) = rows.split_at_mut(rank + 1);
        let top = &done[rank];
        for row in below {
            let factor = row[pivot_column] / top[pivot_column];
            row.iter_mut().zip(top).for_each(|(value, above)| *value -= factor * above);
            row[pivot_column] = 0.0;
        }
        rank += 1;
    }
    rank
}

/// Row and column of the largest entry, unless all are as good as zero.
fn pivot(rows: &[Vec<f64>]) -> Option<(usize, usize)> {
    let entries = rows
        .iter()
        .enumerate()
        .flat_map(|(r, row)| row.iter().enumerate().map(move |(c, v)| (r, c, v.abs())));
    let (row, column, size) = entries.max_by(|one, other| one.2.total_cmp(&other.2))?;
    (size > 1e-9).then_some((row, column))
}

#[cfg(test)]
mod tests {
    use super::rank;

    #[test]
    fn dependent_rows_do_not_count() {
        let pairs = vec![vec![-1.0, 1.0, 0.0], vec![-1.0, 0.0, 1.0], vec![0.0, -1.0, 1.0]];
        assert_eq!(rank(&pairs), 2);
        assert_eq!(rank(&[vec![0.0, 0.0]]), 0);
        assert_eq!(rank(&[]), 0);
        assert_eq!(rank(&[vec![1e6, -1e6], vec![-1e-6, 1e-6]]), 1);
    }
}
