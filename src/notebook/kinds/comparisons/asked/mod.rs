//! Reads a comparisons ask against the study that it names.

mod claim;
mod members;
mod order;
mod procedure;

use crate::methods::contrasts::{Contrast, Set};
use crate::methods::multiplicity::{
    Adjust, Basis, Claim, Family, Order, Resampling, Setting, Sides, Standardise,
};
use crate::notebook::ask::{Ask, Reader};
use crate::notebook::diagnostics::Diagnostic;
use crate::notebook::kinds::resampling::resampling;
use crate::study::{Study, Variances};
use members::{Members, members};

/// The error rate where neither the cell nor a study says one.
const ALPHA: f64 = 0.05;

/// A comparisons ask that can be answered.
#[derive(Debug, Clone)]
pub struct Asked {
    pub family: Family,
    /// The family as the ask chooses it.
    pub family_name: &'static str,
    pub contrasts: Vec<Contrast>,
    /// Named p-values; `Some` exactly when the family is given p-values.
    pub given: Option<Vec<(String, f64)>>,
    pub basis: Basis,
    pub adjust: Adjust,
    pub also: Vec<Adjust>,
    pub sides: Sides,
    pub claim: Claim,
    /// Order, weights and transitions, for the procedures that have them.
    pub order: Option<Order>,
    /// Which standard deviation standardises; `None` for the one that fits the variances.
    pub standardise: Option<Standardise>,
    pub resampling: Resampling,
    pub alpha: f64,
    /// Confidence of the intervals.
    pub confidence: f64,
    /// Fields that are written but not used by what is asked, with what does not use them.
    pub unused: Vec<(&'static str, String)>,
}

impl Asked {
    /// What the comparisons, or the given p-values, are called.
    pub fn names(&self) -> Vec<String> {
        match &self.given {
            Some(given) => given.iter().map(|(name, _)| name.clone()).collect(),
            None => self.contrasts.iter().map(|contrast| contrast.name.clone()).collect(),
        }
    }

    /// The ask, with every default filled in.
    ///
    /// # Errors
    /// What must be mended.
    pub fn of(ask: &Ask, study: Option<&Study>) -> Result<Self, Vec<Diagnostic>> {
        let mut reader = ask.reader();
        let family_name = family_name(&mut reader);
        let alpha = reader.number("alpha").or(study.map(|study| study.alpha)).unwrap_or(ALPHA);
        let confidence = match study {
            // A confidence that the study sets apart from its error rate is meant; else intervals agree with decisions.
            Some(study) if (study.confidence - (1.0 - study.alpha)).abs() > 1e-12 => study.confidence,
            _ => 1.0 - alpha,
        };
        let members = members(&mut reader, family_name, study);
        let family = members.as_ref().map_or(Family::Given, |members| members.family);
        let (claim, sides) = claim::claim(&mut reader, study);
        let known = members.is_some();
        let Members { contrasts, given, .. } =
            members.unwrap_or(Members { family, contrasts: Vec::new(), given: None });
        let basis = procedure::basis(&mut reader, family, &contrasts, claim);
        let variances = study.map_or(Variances::Equal, |study| study.variances);
        let setting = Setting { family, basis, variances, sides, claim };
        let adjust = procedure::adjust(&mut reader, &setting, known);
        let also = procedure::also(&mut reader, &setting, adjust);
        let names: Vec<&str> = match &given {
            Some(given) => given.iter().map(|(name, _)| name.as_str()).collect(),
            None => contrasts.iter().map(|contrast| contrast.name.as_str()).collect(),
        };
        let order = if known { order::order(&mut reader, adjust, &names) } else { None };
        let standardise = match reader.choice("standardise") {
            Some("all levels") => Some(Standardise::AllLevels),
            Some(_) => Some(Standardise::LevelsCompared),
            None => None,
        };
        let resampling = resampling(&mut reader);
        let unused = unused(ask, family_name, &setting, adjust);
        reader.finish(Self {
            family,
            family_name,
            contrasts,
            given,
            basis,
            adjust,
            also,
            sides,
            claim,
            order,
            standardise,
            resampling,
            alpha,
            confidence,
            unused,
        })
    }
}

fn family_name(reader: &mut Reader) -> &'static str {
    let ask = reader.ask();
    if !ask.given("family") && (ask.given("contrasts") || ask.given("given")) {
        let (field, family) = match ask.given("contrasts") {
            true => ("contrasts", "contrasts"),
            false => ("given", "given p-values"),
        };
        let message = format!("\"{field}\" is written, but no family is chosen. Add family = \"{family}\".");
        reader.problem(field, message);
        return family;
    }
    reader.choice("family").unwrap_or("all pairs")
}

/// Fields that are written but that what is asked does not use.
fn unused(ask: &Ask, family: &str, setting: &Setting, adjust: Adjust) -> Vec<(&'static str, String)> {
    let by_family = format!("the family \"{family}\"");
    let by_basis = format!("the basis \"{}\"", setting.basis.word());
    let by_adjust = format!("the adjustment \"{}\"", adjust.name());
    let given = setting.family == Family::Given;
    let weighted = matches!(adjust, Adjust::Fallback | Adjust::Graph);
    let means = setting.basis == Basis::Means;
    let candidates = [
        ("contrasts", family == "contrasts", &by_family),
        ("given", given, &by_family),
        ("sides", !given, &by_family),
        ("basis", !given, &by_family),
        ("claim", !given, &by_family),
        ("standardise", !given, &by_family),
        ("standardise", given || means, &by_basis),
        ("ranking", matches!(setting.basis, Basis::Ranks(_)), &by_basis),
        ("repeats", setting.basis == Basis::Permutation, &by_basis),
        ("seed", setting.basis == Basis::Permutation, &by_basis),
        ("order", adjust.ordered(), &by_adjust),
        ("weights", weighted, &by_adjust),
        ("transitions", adjust == Adjust::Graph, &by_adjust),
    ];
    let left = candidates.iter().filter(|(field, used, _)| !used && ask.given(field));
    left.map(|(field, _, by)| (*field, (*by).clone())).collect()
}

/// Whether every comparison is between two levels.
fn all_pairs_of_levels(family: Family, contrasts: &[Contrast]) -> bool {
    let two = |contrast: &Contrast| contrast.coefficients.iter().filter(|c| **c != 0.0).count() == 2;
    match family {
        Family::Set(Set::AllPairs | Set::AgainstControl(_) | Set::Neighbours) => true,
        _ => contrasts.iter().all(two),
    }
}
