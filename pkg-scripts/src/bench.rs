//! Measures the built page in a browser: `cargo pack bench`. The measuring itself is `tests/benches/page.mjs`.

use crate::page::{self, Finish};
use crate::project::{Project, run};
use crate::toolchain;
use anyhow::Result;
use std::process::Command;

/// Builds the page, prints its sizes and a table of times.
pub fn run_all(project: &Project) -> Result<bool> {
    page::build(project, Finish::Release)?.print_sizes();
    println!();
    run(Command::new("node")
        .current_dir(&project.root)
        .arg("tests/benches/page.mjs")
        .env("LEVELWISE_HTML", project.html())
        .env("CHROMIUM", toolchain::browser()?))?;
    Ok(true)
}
