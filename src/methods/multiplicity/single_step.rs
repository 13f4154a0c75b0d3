//! Procedures that judge every comparison by itself: adjusted p-values and critical values of a family's tests.

use super::compare::Request;
use super::row_test::Test;
use super::setting::{Family, Sides};
use super::unequal::{Pairs, Separate};
use super::{Adjust, CannotCompare, control, range, ranks, scheffe};
use crate::methods::contrasts::Set;
use crate::numerics::OutOfDomain;
use crate::numerics::distributions::studentized_range;

/// A single-step procedure, made ready for one family.
pub(super) trait SingleStep {
    /// Adjusted p-values of the tests, in their order.
    fn adjusted_p(&mut self, tests: &[Test]) -> Result<Vec<f64>, OutOfDomain>;

    /// The number of standard errors of each test that true hypotheses exceed anywhere in the family with probability
    /// `outside`.
    fn critical(&mut self, outside: f64, tests: &[Test]) -> Result<Vec<f64>, OutOfDomain>;

    /// Bound on the relative error of the adjusted p-values where they are integrated.
    fn relative_error(&self) -> Option<f64>;
}

/// The single-step procedure `adjust`, which suits the request and does not take long.
pub(super) fn ready(request: &Request, adjust: Adjust) -> Result<Box<dyn SingleStep>, CannotCompare> {
    let levels = request.labels.len();
    let control = match request.family {
        Family::Set(Set::AgainstControl(at)) => Some(at),
        _ => None,
    };
    let sides = request.sides;
    Ok(match (adjust, control) {
        (Adjust::Scheffe, _) => Box::new(AnyContrast { levels }),
        (Adjust::Dunnett, Some(at)) => {
            Box::new(Control { loadings: control::loadings(request.estimates()?, at), sides })
        }
        (Adjust::Steel, Some(at)) => {
            let n: Vec<usize> =
                request.sample.ok_or(CannotCompare::NoValues("ranks"))?.groups.iter().map(Vec::len).collect();
            let others: Vec<usize> = (0..n.len()).filter(|i| *i != at).map(|i| n[i]).collect();
            Box::new(Control { loadings: ranks::steel_loadings(n[at], &others)?, sides })
        }
        (Adjust::TamhaneT2, _) => Box::new(OwnVariances::of(request, Separate::TamhaneT2)?),
        (Adjust::DunnettT3, _) => Box::new(OwnVariances::of(request, Separate::DunnettT3)?),
        (Adjust::DunnettC, _) => Box::new(OwnVariances::of(request, Separate::DunnettC)?),
        _ => Box::new(Range { of_all: studentized_range::Family::new(levels)? }),
    })
}

/// One value a test; tests in a row that share their df share it, since finding it is the costly part.
fn once_a_df(
    tests: &[Test],
    mut value: impl FnMut(f64) -> Result<f64, OutOfDomain>,
) -> Result<Vec<f64>, OutOfDomain> {
    let mut last: Option<(f64, f64)> = None;
    let mut values = Vec::with_capacity(tests.len());
    for test in tests {
        let found = match last.filter(|(df, _)| *df == test.df) {
            Some((_, known)) => known,
            None => value(test.df)?,
        };
        last = Some((test.df, found));
        values.push(found);
    }
    Ok(values)
}

/// Tukey and Kramer; Games and Howell where each test has its own df; Steel and Dwass with infinite df.
struct Range {
    of_all: studentized_range::Family,
}

impl SingleStep for Range {
    fn adjusted_p(&mut self, tests: &[Test]) -> Result<Vec<f64>, OutOfDomain> {
        tests.iter().map(|test| range::adjusted_p(test.t, &mut self.of_all, test.df)).collect()
    }

    fn critical(&mut self, outside: f64, tests: &[Test]) -> Result<Vec<f64>, OutOfDomain> {
        once_a_df(
            tests,
            |df| Ok(range::critical_q(outside, &mut self.of_all, df)? / std::f64::consts::SQRT_2),
        )
    }

    fn relative_error(&self) -> Option<f64> {
        Some(range::RELATIVE_ERROR)
    }
}

/// Dunnett, and Steel with the loadings of ranks.
struct Control {
    loadings: Vec<f64>,
    sides: Sides,
}

impl SingleStep for Control {
    fn adjusted_p(&mut self, tests: &[Test]) -> Result<Vec<f64>, OutOfDomain> {
        tests.iter().map(|test| control::adjusted_p(test.t, &self.loadings, test.df, self.sides)).collect()
    }

    fn critical(&mut self, outside: f64, tests: &[Test]) -> Result<Vec<f64>, OutOfDomain> {
        once_a_df(tests, |df| control::critical(outside, &self.loadings, df, self.sides))
    }

    fn relative_error(&self) -> Option<f64> {
        Some(control::RELATIVE_ERROR)
    }
}

/// Scheffé.
struct AnyContrast {
    levels: usize,
}

impl SingleStep for AnyContrast {
    fn adjusted_p(&mut self, tests: &[Test]) -> Result<Vec<f64>, OutOfDomain> {
        tests.iter().map(|test| scheffe::adjusted_p(test.t, self.levels, test.df)).collect()
    }

    fn critical(&mut self, outside: f64, tests: &[Test]) -> Result<Vec<f64>, OutOfDomain> {
        once_a_df(tests, |df| scheffe::critical(outside, self.levels, df))
    }

    fn relative_error(&self) -> Option<f64> {
        None
    }
}

/// Tamhane's T2, Dunnett's T3 and C: all pairs in the order of the ready set.
struct OwnVariances {
    pairs: Pairs,
    which: Separate,
}

impl OwnVariances {
    fn of(request: &Request, which: Separate) -> Result<Self, CannotCompare> {
        Ok(Self { pairs: Pairs::of(request.estimates()?)?, which })
    }
}

impl SingleStep for OwnVariances {
    fn adjusted_p(&mut self, _: &[Test]) -> Result<Vec<f64>, OutOfDomain> {
        self.pairs.adjusted_p(self.which)
    }

    fn critical(&mut self, outside: f64, _: &[Test]) -> Result<Vec<f64>, OutOfDomain> {
        self.pairs.critical(self.which, outside)
    }

    fn relative_error(&self) -> Option<f64> {
        match self.which {
            Separate::TamhaneT2 => None,
            Separate::DunnettT3 | Separate::DunnettC => Some(1e-11),
        }
    }
}
