//! Checks against values from outside, one file per distribution or procedure. Each file's head names its
//! source; `data/` holds the longer tables with theirs.

mod accuracy;
mod adjustments;
mod cases;
mod central;
mod nist_strd;
mod properties;
