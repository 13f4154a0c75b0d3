//! One table of points, computed natively and in a browser: the two must agree.
//!
//! [`table::Table`] holds the value of every public function of `levelwise::numerics` over a fixed grid of arguments, and
//! every number in the answers of the example notebooks. The program `levelwise-numbers` prints it; compiled for
//! WebAssembly, [`browser::table`] returns the same text. `tests/web/numbers.test.mjs` compares the two line by line;
//! `tests/coverage.rs` here fails when a public function has no point. [`jobs`] is what `cargo pack bench` times.

#[cfg(target_arch = "wasm32")]
pub mod browser;
pub mod jobs;
mod points;
pub mod table;
