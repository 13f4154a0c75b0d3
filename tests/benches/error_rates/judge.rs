//! The decisions of one trial.

use crate::cells::Cell;
use crate::offered::{Ground, Row, p_value_method};
use levelwise::methods::multiplicity::{
    Adjust, Basis, CannotCompare, ComparisonRow, Family, PValueMethod, Request, Resampling, compare, p_values,
};
use levelwise::study::{Estimates, NoEstimates, Sample};

pub const ALPHA: f64 = 0.05;

/// Why a trial has no decision.
#[derive(Debug, thiserror::Error)]
pub enum NoTrial {
    #[error("{0}")]
    Estimates(#[from] NoEstimates),
    #[error("{0}")]
    Compare(#[from] CannotCompare),
}

/// The data of one trial on one ground, with the raw p-values that all procedures for p-values share.
pub struct Trial<'a> {
    cell: &'a Cell,
    ground: Ground,
    number: u64,
    sample: &'a Sample,
    estimates: Estimates,
    raw: Option<Vec<f64>>,
}

impl<'a> Trial<'a> {
    /// # Errors
    /// [`NoTrial`] where the values give no estimates.
    pub fn new(cell: &'a Cell, ground: Ground, number: u64, sample: &'a Sample) -> Result<Self, NoTrial> {
        let estimates = Estimates::one_way(&cell.labels, &sample.summary(), ground.variances)?;
        Ok(Self { cell, ground, number, sample, estimates, raw: None })
    }

    /// The adjusted p-values of `row`; `None` where it is certain without them that no true hypothesis is rejected.
    ///
    /// Procedures for p-values start from the raw ones, found once; in the first trial of each cell the long way through
    /// [`compare`] must come to the same. The other procedures on means, which take long, are spared where no true hypothesis
    /// has a raw p-value of alpha or less: an adjusted p-value is never below its raw one.
    ///
    /// # Errors
    /// [`NoTrial`] where the procedure does not decide.
    pub fn adjusted(&mut self, row: &Row) -> Result<Option<Vec<f64>>, NoTrial> {
        if row.adjust.takes_p_values() {
            return self.by_p_values(row).map(Some);
        }
        if self.ground.basis == Basis::Means && self.number > 0 {
            let cell = self.cell;
            let mut raw = self.raw(row)?.iter().zip(&cell.hypothesis_is_true);
            if !raw.any(|(p, is_true)| *is_true && *p <= ALPHA) {
                return Ok(None);
            }
        }
        let rows = self.compared(row)?;
        if self.ground.basis == Basis::Permutation {
            self.raw = Some(rows.iter().map(|row| row.p).collect());
        }
        Ok(Some(rows.iter().map(|row| row.p_adjusted).collect()))
    }

    fn by_p_values(&mut self, row: &Row) -> Result<Vec<f64>, NoTrial> {
        let adjusted = from_raw(self.raw(row)?, row)?;
        if self.number == 0 {
            let long_way: Vec<f64> = self.compared(row)?.iter().map(|row| row.p_adjusted).collect();
            assert_eq!(adjusted, long_way, "{}: two ways to one decision", row.name);
        }
        Ok(adjusted)
    }

    /// The p-value of each comparison by itself.
    fn raw(&mut self, row: &Row) -> Result<&[f64], NoTrial> {
        if self.raw.is_none() {
            let row = Row { adjust: Adjust::PValues(PValueMethod::None), order: None, ..row.clone() };
            self.raw = Some(self.compared(&row)?.iter().map(|row| row.p).collect());
        }
        Ok(self.raw.as_deref().unwrap_or_default())
    }

    fn compared(&self, row: &Row) -> Result<Vec<ComparisonRow>, NoTrial> {
        let question = self.cell.question;
        let family = Family::Set(question.set);
        let request = Request {
            sample: Some(self.sample),
            basis: self.ground.basis,
            sides: question.sides,
            claim: question.claim,
            order: row.order.as_ref(),
            resampling: Resampling { repeats: self.ground.repeats, seed: self.number },
            alpha: ALPHA,
            ..Request::of_means(&self.estimates, &self.cell.contrasts, family, row.adjust)
        };
        Ok(compare(&request)?.rows)
    }
}

fn from_raw(raw: &[f64], row: &Row) -> Result<Vec<f64>, CannotCompare> {
    if let Some(method) = p_value_method(row.adjust) {
        return Ok(p_values::adjusted(raw, method));
    }
    let order = row.order.as_ref().ok_or(CannotCompare::NoOrder)?;
    let placed: Vec<f64> = order.places.iter().map(|place| raw[*place]).collect();
    let decided = order.graph.decide(&placed, ALPHA)?;
    let mut adjusted = vec![1.0; raw.len()];
    order.places.iter().zip(decided.adjusted).for_each(|(place, p)| adjusted[*place] = p);
    Ok(adjusted)
}
