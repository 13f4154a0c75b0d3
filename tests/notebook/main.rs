//! Small notebooks and what they give: one file per kind. `expect` reads a notebook whose lines may end in
//! `# ! part of a message`: the diagnostics must stand on exactly those lines and say so.

mod bad_input;
mod comparisons;
mod comparisons_said;
mod data;
mod expect;
mod extremes;
mod given;
mod note;
mod overall;
mod power;
mod procedures;
mod profile;
mod study;
mod summary;
mod trend;
