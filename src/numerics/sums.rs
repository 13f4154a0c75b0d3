//! Sums that keep what plain addition loses.

/// Sum of `values` by Neumaier's compensated summation.
///
/// # Accuracy
/// The error is at most about 2 units in the last place of the sum plus n² ε² times the sum of magnitudes: as
/// if summed in twice the working precision and rounded once.
///
/// # Source
/// Neumaier (1974), Z. Angew. Math. Mech. 54, 39–51, algorithm IV.
pub fn sum(values: impl IntoIterator<Item = f64>) -> f64 {
    let (mut total, mut lost) = (0.0_f64, 0.0_f64);
    for value in values {
        let next = total + value;
        lost += if total.abs() >= value.abs() { (total - next) + value } else { (value - next) + total };
        total = next;
    }
    // Beyond the range of numbers the compensation is no number any more.
    if total.is_finite() { total + lost } else { total }
}
