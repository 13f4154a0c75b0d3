//! The procedures, what each is called, and which of them suit what is asked.

use super::p_values::PValueMethod;
use super::setting::{Basis, Family, Ranking, Setting, Sides};
use crate::methods::contrasts::Set;
use crate::study::Variances;
use serde::{Serialize, Serializer};

/// A multiplicity procedure.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Adjust {
    /// p-values are adjusted by themselves.
    PValues(PValueMethod),
    /// Tukey's studentized range, in Kramer's form where group sizes differ.
    Tukey,
    NewmanKeuls,
    RyanEinotGabrielWelsch,
    /// Fisher's: each comparison by itself, but only when the overall F is significant.
    LeastSignificantDifference,
    GamesHowell,
    TamhaneT2,
    DunnettT3,
    DunnettC,
    Dunnett,
    StepDownDunnett,
    /// The joint distribution of the t statistics of any contrasts.
    MaxT,
    StepDownMaxT,
    Scheffe,
    Steel,
    SteelDwass,
    FixedSequence,
    Fallback,
    Graph,
}

/// All procedures, in the order in which they are offered.
pub const ALL: [Adjust; 27] = [
    Adjust::Tukey,
    Adjust::GamesHowell,
    Adjust::Dunnett,
    Adjust::SteelDwass,
    Adjust::Steel,
    Adjust::StepDownDunnett,
    Adjust::StepDownMaxT,
    Adjust::MaxT,
    Adjust::DunnettT3,
    Adjust::DunnettC,
    Adjust::TamhaneT2,
    Adjust::PValues(PValueMethod::Holm),
    Adjust::PValues(PValueMethod::HolmSidak),
    Adjust::PValues(PValueMethod::Hochberg),
    Adjust::PValues(PValueMethod::Hommel),
    Adjust::PValues(PValueMethod::Bonferroni),
    Adjust::PValues(PValueMethod::Sidak),
    Adjust::Scheffe,
    Adjust::FixedSequence,
    Adjust::Fallback,
    Adjust::Graph,
    Adjust::PValues(PValueMethod::BenjaminiHochberg),
    Adjust::PValues(PValueMethod::BenjaminiYekutieli),
    Adjust::RyanEinotGabrielWelsch,
    Adjust::NewmanKeuls,
    Adjust::LeastSignificantDifference,
    Adjust::PValues(PValueMethod::None),
];

/// What a procedure's error rate is over the family.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ErrorRate {
    PerComparison,
    /// Family-wise, but only while all levels are alike: once some differ, the rate is not kept among the others.
    AllAlikeOnly,
    FamilyWise,
    FalseDiscovery,
}

/// The only family that a procedure is for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum For {
    Any,
    AllPairs,
    Control,
}

/// What a procedure needs of what is asked.
struct Needs {
    family: For,
    /// What it compares: "means", "ranks" or either.
    bases: &'static [&'static str],
    variances: Option<Variances>,
    two_sided: bool,
}

impl Adjust {
    /// The name by which an ask chooses the procedure and an answer names it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Tukey => "Tukey",
            Self::NewmanKeuls => "Newman-Keuls",
            Self::RyanEinotGabrielWelsch => "Ryan-Einot-Gabriel-Welsch",
            Self::LeastSignificantDifference => "least significant difference",
            Self::GamesHowell => "Games-Howell",
            Self::TamhaneT2 => "Tamhane T2",
            Self::DunnettT3 => "Dunnett T3",
            Self::DunnettC => "Dunnett C",
            Self::Dunnett => "Dunnett",
            Self::StepDownDunnett => "step-down Dunnett",
            Self::MaxT => "max-t",
            Self::StepDownMaxT => "step-down max-t",
            Self::Scheffe => "Scheffe",
            Self::Steel => "Steel",
            Self::SteelDwass => "Steel-Dwass",
            Self::FixedSequence => "fixed sequence",
            Self::Fallback => "fallback",
            Self::Graph => "graph",
            Self::PValues(method) => match method {
                PValueMethod::None => "none",
                PValueMethod::Bonferroni => "Bonferroni",
                PValueMethod::Sidak => "Sidak",
                PValueMethod::Holm => "Holm",
                PValueMethod::HolmSidak => "Holm-Sidak",
                PValueMethod::Hochberg => "Hochberg",
                PValueMethod::Hommel => "Hommel",
                PValueMethod::BenjaminiHochberg => "Benjamini-Hochberg",
                PValueMethod::BenjaminiYekutieli => "Benjamini-Yekutieli",
            },
        }
    }

    /// The procedure as the subject of a sentence.
    fn subject(self) -> &'static str {
        match self {
            Self::Tukey => "Tukey's procedure",
            Self::NewmanKeuls => "the Newman-Keuls procedure",
            Self::RyanEinotGabrielWelsch => "the Ryan-Einot-Gabriel-Welsch procedure",
            Self::LeastSignificantDifference => "the least significant difference",
            Self::GamesHowell => "Games and Howell's procedure",
            Self::TamhaneT2 => "Tamhane's T2",
            Self::DunnettT3 => "Dunnett's T3",
            Self::DunnettC => "Dunnett's C",
            Self::Dunnett => "Dunnett's procedure",
            Self::StepDownDunnett => "Dunnett's step-down procedure",
            Self::MaxT => "the max-t procedure",
            Self::StepDownMaxT => "the step-down max-t procedure",
            Self::Scheffe => "Scheffe's procedure",
            Self::Steel => "Steel's procedure",
            Self::SteelDwass => "the Steel-Dwass procedure",
            Self::FixedSequence => "the fixed sequence",
            Self::Fallback => "the fallback procedure",
            Self::Graph => "the graphical procedure",
            Self::PValues(_) => "the adjustment",
        }
    }

    /// The procedure called `name`.
    pub fn from_name(name: &str) -> Option<Self> {
        ALL.into_iter().find(|adjust| adjust.name() == name)
    }

    /// What is controlled over the family.
    pub fn error_rate(self) -> ErrorRate {
        match self {
            Self::PValues(PValueMethod::None) => ErrorRate::PerComparison,
            Self::PValues(PValueMethod::BenjaminiHochberg | PValueMethod::BenjaminiYekutieli) => {
                ErrorRate::FalseDiscovery
            }
            Self::NewmanKeuls | Self::LeastSignificantDifference => ErrorRate::AllAlikeOnly,
            _ => ErrorRate::FamilyWise,
        }
    }

    /// Whether every comparison is judged by itself, so that an interval says the same as the test.
    pub fn single_step(self) -> bool {
        match self {
            Self::PValues(method) => {
                matches!(method, PValueMethod::None | PValueMethod::Bonferroni | PValueMethod::Sidak)
            }
            Self::NewmanKeuls
            | Self::RyanEinotGabrielWelsch
            | Self::LeastSignificantDifference
            | Self::StepDownDunnett
            | Self::StepDownMaxT
            | Self::FixedSequence
            | Self::Fallback
            | Self::Graph => false,
            _ => true,
        }
    }

    /// Whether the comparisons are tested in a declared order, with weights that pass on.
    pub fn ordered(self) -> bool {
        matches!(self, Self::FixedSequence | Self::Fallback | Self::Graph)
    }

    /// Whether nothing but the p-values enters, so that any p-values will do.
    pub fn takes_p_values(self) -> bool {
        matches!(self, Self::PValues(_)) || self.ordered()
    }

    fn needs(self) -> Needs {
        let (equal, unequal) = (Some(Variances::Equal), Some(Variances::Unequal));
        let means = |family, variances, two_sided| Needs { family, bases: &["means"], variances, two_sided };
        let ranks = |family, two_sided| Needs { family, bases: &["ranks"], variances: None, two_sided };
        match self {
            Self::Tukey
            | Self::NewmanKeuls
            | Self::RyanEinotGabrielWelsch
            | Self::LeastSignificantDifference => means(For::AllPairs, equal, true),
            Self::GamesHowell | Self::TamhaneT2 | Self::DunnettT3 | Self::DunnettC => {
                means(For::AllPairs, unequal, true)
            }
            Self::Dunnett | Self::StepDownDunnett => means(For::Control, equal, false),
            Self::MaxT => means(For::Any, None, false),
            Self::StepDownMaxT => Needs {
                family: For::Any,
                bases: &["means", "permutation"],
                variances: None,
                two_sided: false,
            },
            Self::Scheffe => means(For::Any, equal, true),
            Self::Steel => ranks(For::Control, false),
            Self::SteelDwass => ranks(For::AllPairs, true),
            Self::PValues(_) | Self::FixedSequence | Self::Fallback | Self::Graph => Needs {
                family: For::Any,
                bases: &["means", "ranks", "permutation"],
                variances: None,
                two_sided: false,
            },
        }
    }

    /// Why the procedure does not suit, as a clause; `None` where it does.
    pub fn unsuitable(self, setting: &Setting) -> Option<String> {
        let (needs, who) = (self.needs(), self.subject());
        let another = "and this family is another one";
        if setting.family == Family::Given {
            let reason = "p-values from elsewhere can only be adjusted by themselves";
            return (!self.takes_p_values()).then(|| reason.to_string());
        }
        if !needs.bases.contains(&setting.basis.word()) {
            let compares = if needs.bases == ["ranks"] { "ranks" } else { "means" };
            return Some(format!("{who} compares {compares}, and the basis is {}", setting.basis.in_words()));
        }
        if matches!(self, Self::Steel | Self::SteelDwass) && setting.basis == Basis::Ranks(Ranking::Joint) {
            return Some(format!(
                "{who} ranks the two levels of a comparison by themselves, and the ranking is joint"
            ));
        }
        match (needs.family, setting.family) {
            (For::AllPairs, family) if family != Family::Set(Set::AllPairs) => {
                return Some(format!("{who} is for all pairs of levels, {another}"));
            }
            (For::Control, family) if !matches!(family, Family::Set(Set::AgainstControl(_))) => {
                return Some(format!("{who} compares each level with a control, {another}"));
            }
            _ => {}
        }
        match needs.variances {
            Some(Variances::Equal) if setting.variances != Variances::Equal => {
                let reason =
                    "needs one standard deviation for all levels, and the study says unequal variances";
                return Some(format!("{who} {reason}"));
            }
            Some(Variances::Unequal) if setting.variances != Variances::Unequal => {
                let reason = "gives each level its own variance, and the study says equal variances";
                return Some(format!("{who} {reason}"));
            }
            _ => {}
        }
        if setting.claim.is_equivalence() && !self.takes_p_values() {
            return Some(format!("{who} tests for differences, and the claim is equivalence"));
        }
        (needs.two_sided && setting.sides != Sides::Both)
            .then(|| format!("{who} looks to both sides, and the comparisons are one-sided"))
    }
}

impl Basis {
    /// The basis as an ask chooses it.
    pub fn word(self) -> &'static str {
        match self {
            Self::Means => "means",
            Self::Ranks(_) => "ranks",
            Self::Permutation => "permutation",
        }
    }

    fn in_words(self) -> &'static str {
        match self {
            Self::Permutation => "permutation of the values",
            other => other.word(),
        }
    }
}

impl Serialize for Adjust {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.name())
    }
}

/// The procedures that suit, in the order in which they are offered.
pub fn suitable(setting: &Setting) -> Vec<Adjust> {
    ALL.into_iter().filter(|adjust| adjust.unsuitable(setting).is_none()).collect()
}

/// The procedure that is used where none is chosen: exact for its family where there is one, else Holm's.
pub fn default_adjust(setting: &Setting) -> Adjust {
    let own = match (setting.basis, setting.family, setting.variances) {
        (Basis::Permutation, ..) => Adjust::StepDownMaxT,
        (Basis::Ranks(Ranking::PairByPair), Family::Set(Set::AllPairs), _) => Adjust::SteelDwass,
        (Basis::Ranks(Ranking::PairByPair), Family::Set(Set::AgainstControl(_)), _) => Adjust::Steel,
        (Basis::Means, Family::Set(Set::AllPairs), Variances::Equal) => Adjust::Tukey,
        (Basis::Means, Family::Set(Set::AllPairs), Variances::Unequal) => Adjust::GamesHowell,
        (Basis::Means, Family::Set(Set::AgainstControl(_)), Variances::Equal) => Adjust::Dunnett,
        _ => Adjust::PValues(PValueMethod::Holm),
    };
    match own.unsuitable(setting) {
        None => own,
        Some(_) => Adjust::PValues(PValueMethod::Holm),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::methods::multiplicity::setting::Claim;

    fn settings() -> Vec<Setting> {
        let sets = [Set::AllPairs, Set::AgainstControl(0), Set::Neighbours, Set::AgainstRest];
        let families = sets.map(Family::Set).into_iter().chain([Family::Contrasts, Family::Given]);
        let bases = [
            Basis::Means,
            Basis::Ranks(Ranking::Joint),
            Basis::Ranks(Ranking::PairByPair),
            Basis::Permutation,
        ];
        let mut all = Vec::new();
        for family in families {
            for basis in bases {
                for variances in [Variances::Equal, Variances::Unequal] {
                    for sides in [Sides::Both, Sides::Greater, Sides::Less] {
                        for claim in [Claim::Difference, Claim::Equivalence { lower: -1.0, upper: 1.0 }] {
                            all.push(Setting { family, basis, variances, sides, claim });
                        }
                    }
                }
            }
        }
        all
    }

    fn offered(family: Family, variances: Variances) -> Vec<Adjust> {
        let (basis, sides, claim) = (Basis::Means, Sides::Both, Claim::Difference);
        suitable(&Setting { family, basis, variances, sides, claim })
    }

    #[test]
    fn every_name_finds_its_procedure() {
        assert!(ALL.into_iter().all(|adjust| Adjust::from_name(adjust.name()) == Some(adjust)));
    }

    #[test]
    fn the_default_suits_whatever_is_asked() {
        for setting in settings() {
            assert!(suitable(&setting).contains(&default_adjust(&setting)), "{setting:?}");
        }
    }

    #[test]
    fn every_procedure_suits_something() {
        for adjust in ALL {
            assert!(settings().iter().any(|setting| adjust.unsuitable(setting).is_none()), "{adjust:?}");
        }
    }

    #[test]
    fn procedures_for_one_family_are_not_offered_for_another() {
        assert!(!offered(Family::Contrasts, Variances::Equal).contains(&Adjust::Tukey));
        assert!(!offered(Family::Set(Set::Neighbours), Variances::Equal).contains(&Adjust::Dunnett));
        assert!(!offered(Family::Set(Set::AllPairs), Variances::Unequal).contains(&Adjust::Tukey));
        assert!(!offered(Family::Set(Set::AllPairs), Variances::Equal).contains(&Adjust::GamesHowell));
        assert!(offered(Family::Given, Variances::Equal).iter().all(|adjust| adjust.takes_p_values()));
    }
}
