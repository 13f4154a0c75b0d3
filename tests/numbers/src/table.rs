//! The table: what was called with which arguments, and what came out.

use crate::points;
use levelwise::numerics::OutOfDomain;
use levelwise::numerics::distributions::multivariate_t::Answer;
use levelwise::numerics::distributions::rank_counts::InclusiveTails;
use levelwise::numerics::distributions::rank_counts::large_samples::{ChiSquaredTail, NormalTails};
use levelwise::numerics::quadrature::Estimate;
use levelwise::numerics::special::Tails;
use std::fmt::Debug;

/// One number.
#[derive(Debug, Clone)]
pub struct Point {
    /// The function, as in `student_t::sf`.
    pub function: &'static str,
    /// Its arguments, and which part of the result this is where there are several.
    pub arguments: String,
    /// What came out: a number, or why there is none.
    pub value: Result<f64, String>,
}

/// Points in a fixed order.
#[derive(Debug, Default)]
pub struct Table {
    pub points: Vec<Point>,
}

impl Table {
    /// All there is.
    pub fn complete() -> Table {
        let mut table = Table::default();
        points::central::add(&mut table);
        points::noncentral::add(&mut table);
        points::families::add(&mut table);
        points::counts::add(&mut table);
        points::foundations::add(&mut table);
        points::answers::add(&mut table);
        table
    }

    /// One line a point: the call, a space, and the 64 bits of the value in hexadecimal digits, or `!` and the reason.
    pub fn text(&self) -> String {
        let mut text = String::new();
        for Point { function, arguments, value } in &self.points {
            let value = match value {
                Ok(value) => format!("{:016x}", value.to_bits()),
                Err(reason) => format!("! {reason}"),
            };
            text.push_str(&format!("{function}({arguments}) {value}\n"));
        }
        text
    }

    /// Adds the numbers that `function` gave for `arguments`.
    pub fn add(&mut self, function: &'static str, arguments: &[&dyn Debug], result: impl Numbers) {
        let arguments = arguments.iter().map(|it| format!("{it:?}")).collect::<Vec<_>>().join(", ");
        match result.numbers() {
            Ok(parts) => {
                for (part, value) in parts {
                    let arguments =
                        if part.is_empty() { arguments.clone() } else { format!("{arguments}; {part}") };
                    self.points.push(Point { function, arguments, value: Ok(value) });
                }
            }
            Err(error) => self.points.push(Point { function, arguments, value: Err(error.to_string()) }),
        }
    }
}

/// Calls `module::function(arguments)` and adds what came out to the table under just that name.
macro_rules! point {
    ($table:expr, $module:ident::$function:ident($($argument:expr),* $(,)?)) => {
        $table.add(
            concat!(stringify!($module), "::", stringify!($function)),
            &[$(&$argument),*],
            $module::$function($($argument),*),
        )
    };
}
pub(crate) use point;

/// A result, taken apart into numbers.
pub trait Numbers {
    /// Each number with its name; a single number has none.
    ///
    /// # Errors
    /// The function's own.
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain>;
}

impl Numbers for f64 {
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain> {
        Ok(vec![("", self)])
    }
}

impl Numbers for Tails {
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain> {
        Ok(vec![("lower", self.lower), ("upper", self.upper), ("slope", self.slope)])
    }
}

impl Numbers for InclusiveTails {
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain> {
        Ok(vec![("lower", self.lower), ("upper", self.upper), ("point", self.point)])
    }
}

impl Numbers for NormalTails {
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain> {
        Ok(vec![("variance", self.variance), ("z", self.z), ("lower", self.lower), ("upper", self.upper)])
    }
}

impl Numbers for ChiSquaredTail {
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain> {
        Ok(vec![("h", self.h), ("correction", self.tie_correction), ("upper", self.upper)])
    }
}

impl Numbers for Answer {
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain> {
        Ok(vec![("value", self.value), ("error", self.error)])
    }
}

impl Numbers for Estimate {
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain> {
        Ok(vec![("value", self.value), ("error", self.error)])
    }
}

impl<T: Numbers> Numbers for Result<T, OutOfDomain> {
    fn numbers(self) -> Result<Vec<(&'static str, f64)>, OutOfDomain> {
        self?.numbers()
    }
}
