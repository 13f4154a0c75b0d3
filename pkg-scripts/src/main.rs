//! The helper behind `cargo pack`: builds the one self-contained page, serves it, runs every check and measures.
//!
//! One file per concern: `toolchain` finds what a fresh machine lacks, `engine` makes the WebAssembly module,
//! `page` puts the single file together, `notices` gathers the licences it must carry, `serve`, `checks` and
//! `bench` use it. `project` knows where things are and which steps may be left out.

mod bench;
mod checks;
mod engine;
mod notices;
mod page;
mod project;
mod serve;
mod toolchain;

use anyhow::{Result, bail};
use std::process::ExitCode;

const USAGE: &str = "cargo pack COMMAND

  serve [--port N]   build what is missing and serve the tool, an example open, on this machine only
  build [--fast]     write dist/levelwise.html, the one self-contained file
                     (--fast: not optimised and not minified, for trying things out)
  test               run every check there is
  bench              measure in a browser: the built page's speed and sizes, and the numerics beside SciPy
  bench page         the first of the two alone
  bench numbers      the second of the two alone
  bench rates        simulate the error rates of the comparisons (long; no part of the other two)";

fn main() -> ExitCode {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    match carry_out(&arguments) {
        Ok(true) => ExitCode::SUCCESS,
        Ok(false) => ExitCode::FAILURE,
        Err(error) => {
            eprintln!("cargo pack: {error:#}");
            ExitCode::FAILURE
        }
    }
}

/// Whether the command did what it is for: `test` that found a failure answers false.
fn carry_out(arguments: &[String]) -> Result<bool> {
    let words: Vec<&str> = arguments.iter().map(String::as_str).collect();
    let project = project::Project::here()?;
    match words.as_slice() {
        ["build"] => page::build(&project, page::Finish::Release).map(|built| built.print_sizes()),
        ["build", "--fast"] => page::build(&project, page::Finish::Fast).map(|built| built.print_sizes()),
        ["serve"] => serve::serve(&project, None),
        ["serve", "--port", port] => match port.parse() {
            Ok(port) => serve::serve(&project, Some(port)),
            Err(_) => bail!("\"{port}\" is not a port. Give a number from 1 to 65535."),
        },
        ["test"] => checks::run_all(&project),
        ["bench"] => Ok(bench::page(&project)? && bench::numbers(&project)?),
        ["bench", "page"] => bench::page(&project),
        ["bench", "numbers"] => bench::numbers(&project),
        ["bench", "rates"] => bench::rates(&project),
        [] | ["help" | "--help" | "-h"] => {
            println!("{USAGE}");
            Ok(true)
        }
        _ => bail!("\"{}\" is not a command.\n\n{USAGE}", words.join(" ")),
    }
}
