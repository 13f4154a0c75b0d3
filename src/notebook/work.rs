//! What evaluating a cell comes to: an outcome at once, or work that takes longer than a moment and is done in slices.

use super::outcome::Outcome;
use crate::methods::slices::{Advance, InSlices, Progress};
use std::fmt;

/// What evaluating a cell comes to.
#[derive(Debug)]
pub enum Evaluation {
    Now(Box<Outcome>),
    Long(Box<dyn Work>),
}

/// Long work towards a cell's outcome, the same one for every slicing. Dropping it stops it.
pub trait Work: fmt::Debug + Send {
    /// One slice, of a few milliseconds. Not to be called again after `Done`.
    fn advance(&mut self) -> Advance<Outcome>;

    /// The line that the cell shows meanwhile: a sentence that says how far the work is and, where there is one, the number that is
    /// being worked out with its standard error.
    fn line(&self, progress: &Progress) -> String;
}

impl Evaluation {
    /// Work of `methods` as the work of a cell: `line` says in a sentence how far it is, `lay_out` makes the cell's outcome of its
    /// result.
    pub fn long<W, L, O>(work: W, line: L, lay_out: O) -> Self
    where
        W: InSlices + fmt::Debug + Send + 'static,
        L: Fn(&Progress) -> String + Send + 'static,
        O: FnOnce(W::Result) -> Outcome + Send + 'static,
    {
        Evaluation::Long(Box::new(Laid { work, line, lay_out: Some(lay_out) }))
    }

    /// The outcome, whatever time it takes.
    pub fn finish(self) -> Outcome {
        match self {
            Evaluation::Now(outcome) => *outcome,
            Evaluation::Long(mut work) => loop {
                if let Advance::Done(outcome) = work.advance() {
                    return outcome;
                }
            },
        }
    }
}

impl From<Outcome> for Evaluation {
    fn from(outcome: Outcome) -> Self {
        Evaluation::Now(Box::new(outcome))
    }
}

/// See [`Evaluation::long`].
struct Laid<W, L, O> {
    work: W,
    line: L,
    /// Taken at the end.
    lay_out: Option<O>,
}

impl<W: fmt::Debug, L, O> fmt::Debug for Laid<W, L, O> {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.debug_tuple("Laid").field(&self.work).finish()
    }
}

impl<W, L, O> Work for Laid<W, L, O>
where
    W: InSlices + fmt::Debug + Send,
    L: Fn(&Progress) -> String + Send,
    O: FnOnce(W::Result) -> Outcome + Send,
{
    fn advance(&mut self) -> Advance<Outcome> {
        match self.work.advance() {
            Advance::Working(progress) => Advance::Working(progress),
            Advance::Done(result) => {
                Advance::Done(self.lay_out.take().map(|lay_out| lay_out(result)).unwrap_or_default())
            }
        }
    }

    fn line(&self, progress: &Progress) -> String {
        (self.line)(progress)
    }
}
