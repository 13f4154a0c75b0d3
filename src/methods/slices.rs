//! Work that takes longer than a moment is a value that advances by one slice at a time: its owner hears how far it
//! is after each, and stops it by dropping it.

/// Where a piece of long work stands after a slice.
#[derive(Debug, Clone, PartialEq)]
pub enum Advance<T> {
    Working(Progress),
    Done(T),
}

/// How far a piece of long work is.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Progress {
    /// The part that is done, from 0 to 1.
    pub done: f64,
    /// The number that is being worked out, as it stands, with its standard error.
    pub estimate: Option<(f64, f64)>,
}

/// Long work. The same result comes out for every way of calling it, since nothing in it depends on the clock.
pub trait InSlices {
    type Result;

    /// One slice, of a few milliseconds: see the implementation. Not to be called again after `Done`.
    fn advance(&mut self) -> Advance<Self::Result>;

    /// Advances to the end.
    fn finish(mut self) -> Self::Result
    where
        Self: Sized,
    {
        loop {
            if let Advance::Done(result) = self.advance() {
                return result;
            }
        }
    }
}
