//! The noncentrality that an observed statistic points to, `None` where there is none to be had.

/// The noncentrality of t on `df` under which a value up to `t` has probability `lower_p`.
///
/// The noncentral t is not there yet, so there is none; the intervals are left out until it is.
pub(super) fn of_t(_t: f64, _df: f64, _lower_p: f64) -> Option<f64> {
    None
}

/// The noncentrality of F under which a value up to `f` has probability `lower_p`.
///
/// The noncentral F is not there yet, so there is none; the intervals are left out until it is.
pub(super) fn of_f(_f: f64, _df1: f64, _df2: f64, _lower_p: f64) -> Option<f64> {
    None
}
