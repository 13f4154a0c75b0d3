//! What the method is called, in full and in short, and how a decision is said.

use super::asked::Asked;
use crate::answer::number;
use crate::methods::contrasts::Set;
use crate::methods::multiplicity::{
    Adjust, Basis, Claim, ComparisonRow, Comparisons, ErrorRate, Family, IntervalKind, PValueMethod, Ranking,
    Sides,
};
use crate::study::{DegreesOfFreedom, Estimates, Study, Variances};

/// The procedure as people write it.
pub fn procedure(adjust: Adjust) -> &'static str {
    match adjust {
        Adjust::Scheffe => "Scheffé",
        Adjust::PValues(PValueMethod::Sidak) => "Šidák",
        Adjust::PValues(PValueMethod::HolmSidak) => "Holm-Šidák",
        Adjust::PValues(PValueMethod::None) => "no adjustment",
        Adjust::Graph => "graphical procedure",
        Adjust::Fallback => "fallback procedure",
        other => other.name(),
    }
}

/// The procedure at the head of a sentence: "Holm", "The graphical procedure".
pub fn procedure_as_subject(adjust: Adjust) -> String {
    match adjust {
        Adjust::FixedSequence => "A fixed sequence".to_string(),
        Adjust::Fallback | Adjust::Graph => format!("The {}", procedure(adjust)),
        Adjust::LeastSignificantDifference => "The least significant difference".to_string(),
        Adjust::MaxT | Adjust::StepDownMaxT | Adjust::StepDownDunnett => {
            format!("The {} procedure", procedure(adjust))
        }
        Adjust::PValues(PValueMethod::None) => "No adjustment".to_string(),
        other => procedure(other).to_string(),
    }
}

/// The procedure with what it rests on: "Tukey-Kramer, unequal group sizes".
pub fn procedure_in_full(adjust: Adjust, n: &[usize]) -> String {
    let same_size = n.windows(2).all(|pair| pair[0] == pair[1]);
    let full = match adjust {
        Adjust::Tukey if same_size => "Tukey's procedure (studentized range)",
        Adjust::Tukey => "the Tukey-Kramer procedure (studentized range, unequal group sizes)",
        Adjust::NewmanKeuls => {
            "the Newman-Keuls procedure (studentized ranges of ordered means, step by step)"
        }
        Adjust::RyanEinotGabrielWelsch => {
            "the Ryan-Einot-Gabriel-Welsch procedure (studentized ranges of ordered means, step by step)"
        }
        Adjust::LeastSignificantDifference => {
            "Fisher's least significant difference (behind the overall F test)"
        }
        Adjust::GamesHowell => {
            "the Games-Howell procedure (studentized range, own variances and df per pair)"
        }
        Adjust::TamhaneT2 => "Tamhane's T2 (Šidák's level for Welch's t tests)",
        Adjust::DunnettT3 => "Dunnett's T3 (studentized maximum modulus, own variances and df per pair)",
        Adjust::DunnettC => "Dunnett's C (studentized ranges weighted by the variances)",
        Adjust::Dunnett => "Dunnett's single-step procedure (exact for these group sizes)",
        Adjust::StepDownDunnett => "the step-down Dunnett procedure (exact for these group sizes)",
        Adjust::MaxT => "the single-step max-t procedure (joint distribution of the t statistics)",
        Adjust::StepDownMaxT => "the step-down max-t procedure",
        Adjust::Scheffe => "Scheffé's procedure (any contrast)",
        Adjust::Steel => "Steel's procedure (ranks against a control, large-sample)",
        Adjust::SteelDwass => "the Steel-Dwass procedure (ranks pair by pair, large-sample)",
        Adjust::FixedSequence => "a fixed sequence in the declared order",
        Adjust::Fallback => "the fallback procedure in the declared order",
        Adjust::Graph => "the graphical procedure with the declared weights and transitions",
        Adjust::PValues(PValueMethod::None) => "no adjustment",
        Adjust::PValues(PValueMethod::Holm) => "Holm's step-down procedure",
        Adjust::PValues(PValueMethod::HolmSidak) => "the Holm-Šidák step-down procedure",
        Adjust::PValues(PValueMethod::Hochberg) => "Hochberg's step-up procedure",
        Adjust::PValues(PValueMethod::Hommel) => "Hommel's procedure",
        Adjust::PValues(PValueMethod::Bonferroni) => "the Bonferroni procedure",
        Adjust::PValues(PValueMethod::Sidak) => "the Šidák procedure",
        Adjust::PValues(PValueMethod::BenjaminiHochberg) => "the Benjamini-Hochberg procedure",
        Adjust::PValues(PValueMethod::BenjaminiYekutieli) => "the Benjamini-Yekutieli procedure",
    };
    full.to_string()
}

/// "family-wise error 5 %".
pub fn error_rate(adjust: Adjust, alpha: f64) -> String {
    let level = number::percent(alpha);
    match adjust.error_rate() {
        ErrorRate::FamilyWise => format!("family-wise error {level}"),
        ErrorRate::AllAlikeOnly => format!("family-wise error {level} only while all levels are alike"),
        ErrorRate::FalseDiscovery => format!("false discovery rate {level}"),
        ErrorRate::PerComparison => format!("error per comparison {level}"),
    }
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
        Family::Set(Set::Polynomial) => format!("polynomial contrasts of {factor}"),
        Family::Contrasts => format!("contrasts of {factor}"),
        Family::Given => "given p-values".to_string(),
    }
}

/// The test and its error term: "t tests with one SD pooled over all 4 levels (df 16)".
pub fn tests(basis: Basis, variances: Variances, estimates: Option<&Estimates>, k: usize) -> String {
    match basis {
        Basis::Means => t_tests(variances, estimates, k),
        Basis::Ranks(Ranking::Joint) => {
            format!("ranks of all {k} levels together (Dunn, corrected for ties)")
        }
        Basis::Ranks(Ranking::PairByPair) => {
            "rank sums of the two levels compared (corrected for ties)".to_string()
        }
        Basis::Permutation => format!("rearrangements of the values, {}", t_tests(variances, None, k)),
    }
}

fn t_tests(variances: Variances, estimates: Option<&Estimates>, k: usize) -> String {
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

/// "two-sided"; with a claim its margins.
pub fn sides(sides: Sides, claim: Claim) -> String {
    let side = match sides {
        Sides::Both => "two-sided",
        Sides::Greater => "one-sided (greater)",
        Sides::Less => "one-sided (less)",
    };
    match claim {
        Claim::Difference => side.to_string(),
        Claim::NonInferiority { margin } => {
            format!("{side}, non-inferiority with a margin of {}", number::plain(margin))
        }
        Claim::Equivalence { lower, upper } => {
            format!(
                "two one-sided tests of equivalence, margins {} and {}",
                number::plain(lower),
                number::plain(upper)
            )
        }
    }
}

/// "1 comparison", "6 comparisons".
pub fn comparisons(count: usize) -> String {
    format!("{} comparison{}", number::count(count), if count == 1 { "" } else { "s" })
}

/// What the intervals are: "simultaneous 95 % interval".
pub fn interval(result: &Comparisons) -> String {
    let outside = 1.0 - result.confidence;
    let one = if result.claim.is_equivalence() { 1.0 - 2.0 * outside } else { result.confidence };
    let level = number::percent(one);
    if result.family_size == 1 && !matches!(result.interval_kind, IntervalKind::None) {
        return format!("{level} interval");
    }
    match result.interval_kind {
        IntervalKind::Simultaneous => format!("simultaneous {level} interval"),
        IntervalKind::SimultaneousBy(by) => format!("{level} interval, simultaneous by {}", procedure(by)),
        IntervalKind::Compatible => format!("{level} bound that goes with the decisions"),
        IntervalKind::PerComparison => format!("{level} interval of this comparison alone"),
        IntervalKind::None => "interval".to_string(),
    }
}

/// A row's name as shown: in ready sets the minus between two levels is a real one.
pub fn row_name(name: &str, family: Family) -> String {
    match family {
        Family::Set(_) => name.replacen(" - ", " \u{2212} ", 1),
        _ => name.to_string(),
    }
}

/// What a comparison shows where its hypothesis is rejected.
pub fn shown(claim: Claim) -> &'static str {
    match claim {
        Claim::Difference => "a difference",
        Claim::NonInferiority { .. } => "no loss beyond the margin",
        Claim::Equivalence { .. } => "equivalence within the margins",
    }
}

/// The decision on a row, in words.
pub fn decision(row: &ComparisonRow, sides: Sides, claim: Claim) -> &'static str {
    match (claim, row.rejected, sides) {
        (Claim::NonInferiority { .. }, true, _) => "no worse than the margin",
        (Claim::NonInferiority { .. }, false, _) => "not shown to be no worse",
        (Claim::Equivalence { .. }, true, _) => "equivalent within the margins",
        (Claim::Equivalence { .. }, false, _) => "equivalence not shown",
        (_, true, _) if row.estimate > 0.0 || (row.estimate == 0.0 && row.t > 0.0) => "differs: greater",
        (_, true, _) => "differs: less",
        (_, false, Sides::Both) => "not shown to differ",
        (_, false, Sides::Greater) => "not shown to be greater",
        (_, false, Sides::Less) => "not shown to be less",
    }
}

/// What a row's estimate is.
pub fn estimate(basis: Basis, family: Family) -> &'static str {
    match (basis, family) {
        (Basis::Ranks(Ranking::Joint), _) => "difference of mean ranks",
        (Basis::Ranks(Ranking::PairByPair), _) => "shift",
        (_, Family::Contrasts | Family::Set(Set::Polynomial)) => "estimate",
        _ => "difference",
    }
}

/// What several rows' estimates are.
pub fn estimates(one: &'static str) -> &'static str {
    match one {
        "difference of mean ranks" => "differences of mean ranks",
        "shift" => "shifts",
        "estimate" => "estimates",
        _ => "differences",
    }
}
