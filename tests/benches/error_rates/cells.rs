//! What is simulated: four groups of normal values, whose true means, spreads and sizes are known.

use levelwise::methods::contrasts::{Contrast, Set, ready_set};
use levelwise::methods::multiplicity::{Claim, Sides};
use levelwise::numerics::random::Streams;
use levelwise::study::Sample;

const SEED: u64 = 20_260_401;

/// How far levels that differ are apart, in standard deviations of the least certain mean: so far that their
/// difference is found for certain, which is where a gate or a step that protects too little lets errors through.
const APART: f64 = 10.0;

/// Sizes and spreads, in the order of the levels.
#[derive(Debug, Clone, Copy)]
pub struct Design {
    pub n: [usize; 4],
    pub sd: [f64; 4],
}

const EQUAL_N: [usize; 4] = [10; 4];
const UNEQUAL_N: [usize; 4] = [5, 10, 15, 20];
const EQUAL_SD: [f64; 4] = [1.0; 4];
/// The smallest groups have the largest spread: the direction in which a pooled error term is too small.
const UNEQUAL_SD: [f64; 4] = [2.0, 1.4, 1.0, 1.0];

/// The designs, in the order of the table's columns.
pub const DESIGNS: [Design; 4] = [
    Design { n: EQUAL_N, sd: EQUAL_SD },
    Design { n: UNEQUAL_N, sd: EQUAL_SD },
    Design { n: EQUAL_N, sd: UNEQUAL_SD },
    Design { n: UNEQUAL_N, sd: UNEQUAL_SD },
];

/// As [`DESIGNS`], but with groups of 11: the rearrangements of two groups of 10 are all counted, which takes forty times
/// as long as to draw some.
pub const PERMUTATION_DESIGNS: [Design; 4] = {
    let mut designs = DESIGNS;
    designs[0].n = [11; 4];
    designs[2].n = [11; 4];
    designs
};

/// Groups smaller than the procedures for unequal spreads are made for.
pub const SMALL_DESIGNS: [Design; 4] = [
    Design { n: [4; 4], sd: EQUAL_SD },
    Design { n: [6; 4], sd: EQUAL_SD },
    Design { n: [4; 4], sd: [3.0, 2.0, 1.5, 1.0] },
    Design { n: [3, 5, 8, 12], sd: [3.0, 2.0, 1.5, 1.0] },
];

/// Pairs of levels of one distribution beside pairs of another spread.
pub const SPREAD_DESIGNS: [Design; 4] = [
    Design { n: [10; 4], sd: [1.0, 1.0, 4.0, 4.0] },
    Design { n: [10, 10, 20, 20], sd: [1.0, 1.0, 4.0, 4.0] },
    Design { n: [10, 10, 20, 20], sd: [4.0, 4.0, 1.0, 1.0] },
    Design { n: [10, 10, 40, 40], sd: [4.0, 4.0, 1.0, 1.0] },
];

/// What the levels are truly like.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Truth {
    /// All levels have one mean.
    AllAlike,
    /// The first two levels have one mean and the last two another.
    TwoAndTwo,
    /// The last level has a mean of its own, the others have one.
    OneApart,
    /// All levels have one mean, and a hypothesis is true where the levels compared have one spread as well.
    SpreadsApart,
    /// Every contrast lies on the border of what is claimed.
    AtTheMargin,
}

impl Truth {
    /// One at which some hypotheses are false and as many as possible are true that do not hang together.
    pub fn partial(set: Set) -> Self {
        match set {
            Set::AllPairs => Self::TwoAndTwo,
            _ => Self::OneApart,
        }
    }
}

/// What is asked of the family.
#[derive(Debug, Clone, Copy)]
pub struct Question {
    pub set: Set,
    pub claim: Claim,
    pub sides: Sides,
}

impl Question {
    pub fn differences(set: Set) -> Self {
        Self { set, claim: Claim::Difference, sides: Sides::Both }
    }
}

/// One column of a table.
#[derive(Debug, Clone)]
pub struct Cell {
    pub question: Question,
    pub design: Design,
    pub labels: Vec<String>,
    pub contrasts: Vec<Contrast>,
    /// For each contrast.
    pub hypothesis_is_true: Vec<bool>,
    means: [f64; 4],
    streams: Streams,
}

impl Cell {
    /// `column` keeps the random numbers of the columns of a table apart.
    pub fn new(question: Question, truth: Truth, design: Design, column: u64) -> Self {
        let labels: Vec<String> = ["A", "B", "C", "D"].map(str::to_string).to_vec();
        let contrasts = ready_set(question.set, &labels);
        let means = means(question, truth, design);
        let hypothesis_is_true = contrasts.iter().map(|c| is_true(c, truth, means, design)).collect();
        let purpose = match question.set {
            Set::AllPairs => "error rates, all pairs",
            _ => "error rates, control",
        };
        let streams = Streams::new(SEED + column, purpose);
        Self { question, design, labels, contrasts, hypothesis_is_true, means, streams }
    }

    /// The values of one trial, from the stream of this number.
    pub fn sample(&self, trial: u64) -> Sample {
        let mut stream = self.streams.stream(trial);
        let Design { n, sd } = self.design;
        let groups = (0..4).map(|i| (0..n[i]).map(|_| self.means[i] + sd[i] * stream.normal()).collect());
        Sample { origin: 0.0, groups: groups.collect() }
    }
}

fn means(question: Question, truth: Truth, design: Design) -> [f64; 4] {
    let of_mean = |i: usize| design.sd[i] / (design.n[i] as f64).sqrt();
    let far = APART * (0..4).map(of_mean).fold(0.0, f64::max);
    match truth {
        Truth::AllAlike | Truth::SpreadsApart => [0.0; 4],
        Truth::TwoAndTwo => [0.0, 0.0, far, far],
        Truth::OneApart => [0.0, 0.0, 0.0, far],
        Truth::AtTheMargin => {
            let border = match question.claim {
                Claim::Equivalence { upper, .. } => upper,
                claim => claim.null(question.sides),
            };
            [0.0, border, border, border]
        }
    }
}

fn is_true(contrast: &Contrast, truth: Truth, means: [f64; 4], design: Design) -> bool {
    let compared = || (0..4).filter(|i| contrast.coefficients[*i] != 0.0);
    let one = |values: [f64; 4]| {
        let mut values = compared().map(|i| values[i]);
        values.next().is_none_or(|first| values.all(|value| value == first))
    };
    match truth {
        Truth::AtTheMargin => true,
        Truth::SpreadsApart => one(means) && one(design.sd),
        _ => one(means),
    }
}
