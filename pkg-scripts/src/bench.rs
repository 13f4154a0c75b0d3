//! Measures in a browser: `cargo pack bench`. The measuring itself is in `tests/benches`: `page.mjs` for the built page,
//! `numbers.mjs` for the numerics beside SciPy. The error rates are simulated natively, by `error_rates`.

use crate::engine::{self, NUMBERS};
use crate::page::{self, Finish};
use crate::project::{Project, run};
use crate::toolchain;
use anyhow::Result;
use std::process::Command;

/// Builds the page, prints its sizes and a table of times.
pub fn page(project: &Project) -> Result<bool> {
    page::build(project, Finish::Release)?.print_sizes();
    println!();
    run(script(project, "page.mjs")?.env("LEVELWISE_HTML", project.html()))?;
    Ok(true)
}

/// Builds the module of `tests/numbers` and prints its times beside SciPy's, which is installed for this alone.
pub fn numbers(project: &Project) -> Result<bool> {
    toolchain::page_libraries(project)?;
    engine::build(project, &engine::metadata(project)?, NUMBERS, Finish::Release)?;
    let mut command = script(project, "numbers.mjs")?;
    if let Some(python) = toolchain::scipy(project) {
        command.env("LEVELWISE_SCIPY", python);
    }
    run(command.envs(NUMBERS.variables(project)))?;
    Ok(true)
}

/// Simulates the error rates of the comparisons, which takes long and needs no browser.
pub fn rates(project: &Project) -> Result<bool> {
    let mut command = Command::new(toolchain::cargo());
    run(command.current_dir(&project.root).args(["bench", "--bench", "error_rates"]))?;
    Ok(true)
}

fn script(project: &Project, name: &str) -> Result<Command> {
    let mut command = Command::new("node");
    command.current_dir(&project.root).arg(format!("tests/benches/{name}"));
    command.env("CHROMIUM", toolchain::browser()?);
    Ok(command)
}
