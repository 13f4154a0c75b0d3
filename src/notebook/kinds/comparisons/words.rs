//! What the method is called, in full and in short, and how a decision is said.

use super::asked::Asked;
use crate::answer::number;
use crate::methods::contrasts::Set;
use crate::methods::multiplicity::{
    Adjust, ComparisonRow, Comparisons, ErrorRate, Family, IntervalKind, PValueMethod, Sides,
};
use crate::study::{DegreesOfFreedom, Estimates, Study, Variances};

/// The procedure as people write it.
pub fn procedure(adjust: Adjust) -> &'static str {
    match adjust {
        Adjust::Tukey => "Tukey",
        Adjust::GamesHowell => "Games-Howell",
        Adjust::Dunnett => "Dunnett",
        Adjust::Scheffe => "Scheffé",
        Adjust::PValues(PValueMethod::Sidak) => "Šidák",
        Adjust::PValues(PValueMethod::HolmSidak) => "Holm-Šidák",
        Adjust::PValues(PValueMethod::None) => "no adjustment",
        other => other.name(),
    }
}

/// The procedure with what it rests on: "Tukey-Kramer, unequal group sizes".
pub fn procedure_in_full(adjust: Adjust, n: &[usize]) -> String {
    let same_size = n.windows(2).all(|pair| pair[0] == pair[1]);
    match adjust {
        Adjust::Tukey if same_size => "Tukey's procedure (studentized range)".to_string(),
        Adjust::Tukey => "the Tukey-Kramer procedure (studentized range, unequal group sizes)".to_string(),
        Adjust::GamesHowell => {
            "the Games-Howell procedure (studentized range, own variances and df per pair)".to_string()
        }
        Adjust::Dunnett => "Dunnett's single-step procedure (exact for these group sizes)".to_string(),
        Adjust::Scheffe => "Scheffé's procedure (any contrast)".to_string(),
        Adjust::PValues(PValueMethod::None) => "no adjustment".to_string(),
        Adjust::PValues(PValueMethod::Holm) => "Holm's step-down procedure".to_string(),
        Adjust::PValues(PValueMethod::HolmSidak) => "the Holm-Šidák step-down procedure".to_string(),
        Adjust::PValues(PValueMethod::Hochberg) => "Hochberg's step-up procedure".to_string(),
        Adjust::PValues(PValueMethod::Hommel) => "Hommel's procedure".to_string(),
        Adjust::PValues(PValueMethod::Bonferroni) => "the Bonferroni procedure".to_string(),
        Adjust::PValues(PValueMethod::Sidak) => "the Šidák procedure".to_string(),
        Adjust::PValues(PValueMethod::BenjaminiHochberg) => "the Benjamini-Hochberg procedure".to_string(),
        Adjust::PValues(PValueMethod::BenjaminiYekutieli) => "the Benjamini-Yekutieli procedure".to_string(),
    }
}

/// "family-wise error 5 %".
pub fn error_rate(adjust: Adjust, alpha: f64) -> String {
    let what = match adjust.error_rate() {
        ErrorRate::FamilyWise => "family-wise error",
        ErrorRate::FalseDiscovery => "false discovery rate",
        ErrorRate::PerComparison => "error per comparison",
    };
    format!("{what} {}", number::percent(alpha))
}

/// "all pairs of training": what the family is.
pub fn family(asked: &Asked, study: &Study) -> String {
    let factor = &study.factor;
    match asked.family {
        Family::Set(Set::AgainstControl(control)) => {
            format!("each level of {factor} against {}", study.levels.labels[control])
        }
        Family::Set(Set::AllPairs) => format!("all pairs of {factor}"),
        Family::Set(Set::Neighbours) => format!("neighbouring levels of {factor}"),
        Family::Set(Set::AgainstRest) => format!("each level of {factor} against the mean of the others"),
        Family::Set(Set::AgainstEarlier) => {
            format!("each level of {factor} against the mean of the earlier ones")
        }
        Family::Set(Set::Polynomial) => format!("polynomial trends over the order of {factor}"),
        Family::Contrasts => format!("contrasts of {factor}"),
        Family::Given => "given p-values".to_string(),
    }
}

/// The test and its error term: "t tests with one SD pooled over all 4 levels (df 16)".
pub fn error_term(variances: Variances, estimates: Option<&Estimates>, k: usize) -> String {
    match (variances, estimates.map(|estimates| &estimates.df)) {
        (Variances::Equal, Some(DegreesOfFreedom::Common(df))) => {
            format!("t tests with one SD pooled over all {k} levels (df {})", number::df(*df))
        }
        (Variances::Equal, _) => format!("t tests with one SD pooled over all {k} levels"),
        (Variances::Unequal, _) => {
            "Welch's t tests (own variance of each level, Satterthwaite's df per row)".to_string()
        }
    }
}

/// "two-sided".
pub fn sides(sides: Sides) -> &'static str {
    match sides {
        Sides::Both => "two-sided",
        Sides::Greater => "one-sided (greater)",
        Sides::Less => "one-sided (less)",
    }
}

/// "1 comparison", "6 comparisons".
pub fn comparisons(count: usize) -> String {
    format!("{} comparison{}", number::count(count), if count == 1 { "" } else { "s" })
}

/// What the intervals are: "simultaneous 95 % interval".
pub fn interval(result: &Comparisons) -> String {
    let level = number::percent(result.confidence);
    if result.family_size == 1 {
        return format!("{level} interval");
    }
    match result.interval_kind {
        IntervalKind::Simultaneous => format!("simultaneous {level} interval"),
        IntervalKind::SimultaneousBy(method) => {
            format!("{level} interval, simultaneous by {}", procedure(Adjust::PValues(method)))
        }
        IntervalKind::PerComparison => format!("{level} interval of this comparison alone"),
    }
}

/// A row's name as shown: in ready sets the minus between two levels is a real one.
pub fn row_name(name: &str, family: Family) -> String {
    match family {
        Family::Set(_) => name.replacen(" - ", " \u{2212} ", 1),
        _ => name.to_string(),
    }
}

/// The decision on a row, in words.
pub fn decision(row: &ComparisonRow, sides: Sides) -> &'static str {
    match (row.rejected, sides) {
        (true, _) if row.estimate > 0.0 => "differs: greater",
        (true, _) => "differs: less",
        (false, Sides::Both) => "not shown to differ",
        (false, Sides::Greater) => "not shown to be greater",
        (false, Sides::Less) => "not shown to be less",
    }
}
