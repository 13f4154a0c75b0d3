//! The procedures, what each is called, and which of them suit a family.

use super::p_values::PValueMethod;
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
    GamesHowell,
    Dunnett,
    Scheffe,
}

/// All procedures, in the order in which they are offered.
pub const ALL: [Adjust; 13] = [
    Adjust::Tukey,
    Adjust::GamesHowell,
    Adjust::Dunnett,
    Adjust::PValues(PValueMethod::Holm),
    Adjust::PValues(PValueMethod::HolmSidak),
    Adjust::PValues(PValueMethod::Hochberg),
    Adjust::PValues(PValueMethod::Hommel),
    Adjust::PValues(PValueMethod::Bonferroni),
    Adjust::PValues(PValueMethod::Sidak),
    Adjust::Scheffe,
    Adjust::PValues(PValueMethod::BenjaminiHochberg),
    Adjust::PValues(PValueMethod::BenjaminiYekutieli),
    Adjust::PValues(PValueMethod::None),
];

/// Which deviations from no difference count.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Sides {
    Both,
    /// The contrast is greater than zero.
    Greater,
    /// The contrast is less than zero.
    Less,
}

/// The set of comparisons over which the error is controlled.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "snake_case")]
pub enum Family {
    Set(Set),
    /// Contrasts that the person wrote.
    Contrasts,
    /// p-values from elsewhere.
    Given,
}

/// What a procedure's error rate is over the family.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum ErrorRate {
    PerComparison,
    FamilyWise,
    FalseDiscovery,
}

impl Adjust {
    /// The name by which an ask chooses the procedure and an answer names it.
    pub fn name(self) -> &'static str {
        match self {
            Self::Tukey => "Tukey",
            Self::GamesHowell => "Games-Howell",
            Self::Dunnett => "Dunnett",
            Self::Scheffe => "Scheffe",
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
            _ => ErrorRate::FamilyWise,
        }
    }

    /// Whether every comparison is judged by itself, so that an interval says the same as the test.
    pub fn single_step(self) -> bool {
        match self {
            Self::PValues(method) => {
                matches!(method, PValueMethod::None | PValueMethod::Bonferroni | PValueMethod::Sidak)
            }
            _ => true,
        }
    }

    /// Why the procedure does not suit, as a sentence; `None` where it does.
    pub fn unsuitable(self, family: Family, variances: Variances, sides: Sides) -> Option<&'static str> {
        let (equal, two_sided) = (variances == Variances::Equal, sides == Sides::Both);
        match self {
            Self::PValues(_) => None,
            _ if family == Family::Given => {
                Some("p-values from elsewhere can only be adjusted by themselves")
            }
            Self::Tukey if family != Family::Set(Set::AllPairs) => {
                Some("Tukey's procedure is for all pairs of levels, and this family is another one")
            }
            Self::Tukey if !equal => Some(
                "Tukey's procedure needs one standard deviation for all levels, and the study says unequal variances",
            ),
            Self::GamesHowell if family != Family::Set(Set::AllPairs) => Some(
                "Games and Howell's procedure is for all pairs of levels, and this family is another one",
            ),
            Self::GamesHowell if equal => Some(
                "Games and Howell's procedure gives each level its own variance, and the study says equal variances",
            ),
            Self::Dunnett if !matches!(family, Family::Set(Set::AgainstControl(_))) => {
                Some("Dunnett's procedure compares each level with a control, and this family is another one")
            }
            Self::Dunnett if !equal => Some(
                "Dunnett's procedure needs one standard deviation for all levels, and the study says unequal variances",
            ),
            Self::Scheffe if !equal => Some(
                "Scheffe's procedure needs one standard deviation for all levels, and the study says unequal variances",
            ),
            Self::Tukey if !two_sided => {
                Some("Tukey's procedure looks to both sides, and the comparisons are one-sided")
            }
            Self::GamesHowell if !two_sided => {
                Some("Games and Howell's procedure looks to both sides, and the comparisons are one-sided")
            }
            Self::Scheffe if !two_sided => {
                Some("Scheffe's procedure looks to both sides, and the comparisons are one-sided")
            }
            _ => None,
        }
    }
}

impl Serialize for Adjust {
    fn serialize<S: Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.serialize_str(self.name())
    }
}

/// The procedures that suit, in the order in which they are offered.
pub fn suitable(family: Family, variances: Variances, sides: Sides) -> Vec<Adjust> {
    ALL.into_iter().filter(|adjust| adjust.unsuitable(family, variances, sides).is_none()).collect()
}

/// The procedure that is used where none is chosen: exact for its family where there is one, else Holm's.
pub fn default_adjust(family: Family, variances: Variances, sides: Sides) -> Adjust {
    let own = match (family, variances) {
        (Family::Set(Set::AllPairs), Variances::Equal) => Adjust::Tukey,
        (Family::Set(Set::AllPairs), Variances::Unequal) => Adjust::GamesHowell,
        (Family::Set(Set::AgainstControl(_)), Variances::Equal) => Adjust::Dunnett,
        _ => Adjust::PValues(PValueMethod::Holm),
    };
    match own.unsuitable(family, variances, sides) {
        None => own,
        Some(_) => Adjust::PValues(PValueMethod::Holm),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_name_finds_its_procedure() {
        assert!(ALL.into_iter().all(|adjust| Adjust::from_name(adjust.name()) == Some(adjust)));
    }

    #[test]
    fn the_default_suits_every_family() {
        let sets = [
            Set::AllPairs,
            Set::AgainstControl(0),
            Set::Neighbours,
            Set::AgainstRest,
            Set::AgainstEarlier,
            Set::Polynomial,
        ];
        let families = sets.map(Family::Set).into_iter().chain([Family::Contrasts, Family::Given]);
        for family in families {
            for variances in [Variances::Equal, Variances::Unequal] {
                for sides in [Sides::Both, Sides::Greater, Sides::Less] {
                    let adjust = default_adjust(family, variances, sides);
                    assert!(
                        suitable(family, variances, sides).contains(&adjust),
                        "{family:?} {variances:?} {sides:?}"
                    );
                }
            }
        }
    }

    #[test]
    fn procedures_for_one_family_are_not_offered_for_another() {
        let offered = |family, variances| suitable(family, variances, Sides::Both);
        assert!(!offered(Family::Contrasts, Variances::Equal).contains(&Adjust::Tukey));
        assert!(!offered(Family::Set(Set::Neighbours), Variances::Equal).contains(&Adjust::Dunnett));
        assert!(!offered(Family::Set(Set::AllPairs), Variances::Unequal).contains(&Adjust::Tukey));
        assert!(!offered(Family::Set(Set::AllPairs), Variances::Equal).contains(&Adjust::GamesHowell));
        assert!(
            offered(Family::Given, Variances::Equal)
                .iter()
                .all(|adjust| matches!(adjust, Adjust::PValues(_)))
        );
    }
}
