//! Levelwise compares groups on a measured outcome. One crate in layers; imports go only downwards:
//! `numerics` and `answer` on the ground floor, then `table`, `study`, `methods`, `notebook`, `web`.

pub mod answer;
pub mod methods;
pub mod notebook;
pub mod numerics;
pub mod study;
pub mod table;
#[cfg(target_arch = "wasm32")]
pub mod web;
