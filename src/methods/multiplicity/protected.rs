//! The protected least significant difference (Fisher 1935): pairs by their own t tests, after a significant overall F.
//!
//! The adjusted p-value of a pair is the larger of its own and that of the overall test: both must be at most alpha. The
//! family-wise error is controlled strongly for three levels only, where the overall test is the closed test of the
//! only intersection there is. With more, once some means differ so clearly that F is always significant, the others are
//! compared without any protection: the error of m true pairs that remain is that of m unadjusted tests (Hayter 1986,
//! J. Amer. Statist. Assoc. 81, 1000-1004, has its largest values). Offered for reading older work.

/// The adjusted p-values, in the order of `raw`: each the smallest level at which the overall test and the pair's own
/// test both reject.
pub fn adjusted(overall_p: f64, raw: &[f64]) -> Vec<f64> {
    raw.iter().map(|p| p.max(overall_p)).collect()
}
