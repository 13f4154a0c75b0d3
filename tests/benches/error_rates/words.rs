//! What the page says about its tables. The sentences hold for what was measured; who changes a procedure reads them again.

use crate::cells::{Design, Question, Truth};
use crate::offered::Ground;
use levelwise::methods::contrasts::Set;
use levelwise::methods::multiplicity::Claim;

pub const HEAD: &str = "\
# Error rates of the comparisons, simulated

Generated: `cargo pack bench rates` prints this page, `UPDATE_ERROR_RATES=1 cargo pack bench rates` writes it anew.

Every entry is the per cent of simulated trials in which at least one true hypothesis was rejected, with the family-wise error
asked for at 5 %. The bounds of its 95 % Monte Carlo interval (Wilson's) stand in brackets. An entry is marked **above** where
the interval lies wholly above 5: of entries whose rate is exactly 5, one in forty is marked by chance (the fixed sequence against a
control, with one apart and all sizes and spreads equal, is one: a single exact t test decides there). At 5 the standard error is
0.15 with 20,000 trials, 0.22 with 10,000, 0.4 with 3,000 and 0.5 with 2,000. Rows of one table share their trials (a row with
fewer has the first of them), so that the entries of a column go up and down together.

A trial draws four levels A, B, C and D of normal values. The head of a column says what is true, how many values each level
has, and their standard deviations (SD), in the order of the levels where they are not all the same. *All alike*: the four means
are equal. *Two and two*: A and B have one mean, C and D another. *One apart*: A, B and C have one mean and D another. Means that
differ are 10 standard errors of the least certain mean apart. In *against a control*, A is the control. All tests are two-sided
but those for margins. Trial i of a column uses stream i of the column's own random numbers: the page is the same on
every machine.

## What is promised, and what fails as it should

- **Kept whatever is true** (strong control), when the assumptions of the tests hold: all procedures but those of the next three points. Holm
  (1979) and Bonferroni need nothing beyond valid p-values, nor do the fixed sequence (Maurer, Hothorn and Lehmacher 1995), fallback
  (Wiens 2003) and graphs (Bretz, Maurer, Brannath and Posch 2009). Sidak, Holm-Sidak, Hochberg (1988) and Hommel (1988) need
  positive dependence, which is not guaranteed for all pairs; no failure is seen here. Tukey's procedure in Kramer's form is
  conservative for unequal sizes (Hayter 1984).
- **Kept only while all levels are alike**: Newman-Keuls and the least significant difference. With two and two alike each
  true pair is tested at 5 % by itself, which makes 1 - 0.95² = 9.75 %; with three alike and one apart the gate of the least
  significant difference stands open before three tests at 5 %.
- **Kept for the share of false findings, not for the chance of any**: Benjamini-Hochberg (1995) and Benjamini-Yekutieli (2001). The row
  *false discovery rate* is what they promise; where all levels are alike the two rates are the same.
- **Not kept at all**: `none`.
- **Kept when there is one standard deviation**: everything with one error term. With equal sizes and unequal spreads it is too small for
  the levels with the large spread, which therefore differ too readily; where the smallest levels have the largest spread, as in
  the last column, this is at its worst. No adjustment mends a wrong standard error: a variance for each level does.
- **Kept nearly**: everything with a variance for each level, since Welch's t only nearly has a t distribution. Games-Howell (1976)
  and the max-t procedures with Satterthwaite's degrees of freedom come out a little above 5 where sizes or spreads are unequal, and so
  do Holm's and the ordered procedures where all of alpha falls to one or two true hypotheses about a level of 5; Dunnett's T3 and C
  (1980) and Tamhane's T2 (1979) stay below. With a level of 3 that has the largest spread, only Dunnett's C still does (very small groups, below).
- **Kept for another hypothesis**: ranks and permutation test that levels have one *distribution*. Where the spreads differ that hypothesis
  is false, and a rejection is right; the columns with unequal SD say how often it would be wrong to read it as a difference of
  location. With each level's own variance in t, permutation comes near to keeping its rate for that as well.

";

pub const ALL_PAIRS: &str = "\
## All pairs

Two and two alike is where steps and gates that protect too little show it. Procedures that judge every pair by itself
(Tukey, Scheffe, Bonferroni and the like) have only two of six pairs left to go wrong there and stay far below 5.

";

pub const AGAINST_CONTROL: &str = "## Against a control\n\n";

pub const ONE_APART: &str = "\
## Three alike and one apart

For four levels this is the worst case of the least significant difference: the overall test is certain to be significant, and
three true pairs are tested at 5 % each. Newman-Keuls still judges the range of the three.

";

pub const SMALL: &str = "\
## Very small groups

What is offered for levels with a variance each, and ranks, where levels have 3 to 6 values (and up to 12 in the last of
the four designs). Equal sizes forgive much. Sizes of 3, 5, 8 and 12 with the largest spread in the smallest level are more than Welch's t
can bear: only Dunnett's C, which is conservative elsewhere, stays below 5. Rank sums of two levels of 4 cannot have an exact p-value
below 1/35, so that Holm's procedure finds nothing, nor does Steel and Dwass's, among six pairs of them.

";

pub const SPREADS: &str = "\
## Ranks of levels beside levels of another spread

All four levels have one mean; A and B have one distribution, and C and D another. Counted as wrong are only rejections of A
against B and of C against D. Ranked together, each of the two pairs is judged by the variance that ranks have when all levels are
alike: too large for the pair whose values lie close together, and too small for the pair with the larger spread when many values of the
others lie in its middle. Ranked pair by pair, other levels do not matter.

";

pub const MARGINS: &str = "\
## Margins

Three levels against a control, every true difference on the margin itself. *Not inferior*: one-sided, the difference is -1.
*Equivalent*: two one-sided tests (Schuirmann 1987), the difference is 3 and the margins are -3 and 3, far enough apart
that one of the two tests decides alone.

";

/// The head of a column.
pub fn column(truth: Truth, design: Design) -> String {
    let truth = match truth {
        Truth::AllAlike => "all alike",
        Truth::TwoAndTwo => "two and two",
        Truth::OneApart => "one apart",
        Truth::SpreadsApart => "alike in pairs",
        Truth::AtTheMargin => "at the margin",
    };
    format!("{truth}; n {}; SD {}", listed(design.n), listed(design.sd))
}

/// Four values with spaces between them, or the one that they all are.
fn listed<T: PartialEq + std::fmt::Display>(values: [T; 4]) -> String {
    if values.iter().all(|value| *value == values[0]) {
        return values[0].to_string();
    }
    values.map(|value| value.to_string()).join(" ")
}

/// The title of a table.
pub fn title(question: Question, ground: Ground) -> String {
    let family = match question.set {
        Set::AllPairs => "All pairs",
        _ => "Against a control",
    };
    let claim = match question.claim {
        Claim::Difference => String::new(),
        Claim::NonInferiority { margin } => format!(", not inferior by {margin}"),
        Claim::Equivalence { upper, .. } => format!(", equivalent within ±{upper}"),
    };
    format!("{family}{claim}: {}", ground.title)
}
