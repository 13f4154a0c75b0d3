//! The notebook: a document of cells, what each cell may ask, which cell reads from which, and the engine that
//! keeps the answers current. `kinds/` holds one file per cell kind: it reads the ask, calls the methods and
//! lays out the answer. Nothing here knows a browser.

pub mod ask;
pub mod diagnostics;
pub mod document;
pub mod edit;
pub mod engine;
pub mod fields;
pub mod graph;
pub mod history;
pub mod kept;
pub mod kinds;
pub mod outcome;
pub mod report;
pub mod results;
pub mod sentence;
pub mod work;
