//! The headless program: the same engine without a page.

use levelwise::notebook::diagnostics::position;
use levelwise::notebook::engine::Engine;
use levelwise::notebook::{report, results};
use levelwise::table::encoding;
use std::io::Write;
use std::process::ExitCode;

const USAGE: &str = "\
levelwise answer NOTEBOOK [--json]     every cell's answer, as text or as JSON with full-precision numbers
levelwise report NOTEBOOK -o OUT.html  the self-contained report

Exit status: 0 when no cell needs mending, 1 when one does (what to mend goes to standard error as
NOTEBOOK:line:column: message), 2 when the file cannot be read as a notebook.";

/// Width of the plain text answers, in characters.
const WIDTH: usize = 110;

fn main() -> ExitCode {
    let arguments: Vec<String> = std::env::args().skip(1).collect();
    let words: Vec<&str> = arguments.iter().map(String::as_str).collect();
    let done = match words[..] {
        ["answer", notebook] => answer(notebook, false),
        ["answer", notebook, "--json"] | ["answer", "--json", notebook] => answer(notebook, true),
        ["report", notebook, "-o", out] | ["report", "-o", out, notebook] => save_report(notebook, out),
        ["--help" | "-h" | "help"] => print(&format!("{USAGE}\n")),
        ["--version"] => print(&format!("levelwise {}\n", env!("CARGO_PKG_VERSION"))),
        _ => Err(format!("levelwise: these words are not understood.\n\n{USAGE}")),
    };
    match done {
        Ok(true) => ExitCode::SUCCESS,
        Ok(false) => ExitCode::from(1),
        Err(message) => {
            eprintln!("{message}");
            ExitCode::from(2)
        }
    }
}

/// Prints; whoever reads may stop reading early, which is no failure.
fn print(text: &str) -> Result<bool, String> {
    match std::io::stdout().write_all(text.as_bytes()) {
        Err(error) if error.kind() != std::io::ErrorKind::BrokenPipe => {
            Err(format!("standard output: {error}"))
        }
        _ => Ok(true),
    }
}

/// Prints the answers; true when no cell needs mending.
fn answer(notebook: &str, as_json: bool) -> Result<bool, String> {
    let engine = settled(notebook)?;
    if as_json {
        let json = serde_json::to_string_pretty(&results::results(&engine))
            .map_err(|error| format!("{notebook}: {error}"))?;
        print(&format!("{json}\n"))?;
    } else {
        print(&report::plain(&engine, WIDTH))?;
    }
    Ok(complain(notebook, &engine))
}

/// Writes the report; true when no cell needs mending.
fn save_report(notebook: &str, out: &str) -> Result<bool, String> {
    let engine = settled(notebook)?;
    std::fs::write(out, report::document(&engine, None))
        .map_err(|error| format!("{out}: cannot be written: {error}"))?;
    Ok(complain(notebook, &engine))
}

fn settled(notebook: &str) -> Result<Engine, String> {
    let bytes = std::fs::read(notebook).map_err(|error| format!("{notebook}: cannot be read: {error}"))?;
    let mut engine = Engine::new();
    engine.open(&encoding::to_text(&bytes)).map_err(|message| format!("{notebook}: {message}"))?;
    engine.settle();
    Ok(engine)
}

/// Says what must be mended; true when there is nothing.
fn complain(notebook: &str, engine: &Engine) -> bool {
    let mut well = true;
    if let Some(notice) = engine.notice() {
        eprintln!("{notebook}:1:1: {notice}");
        well = false;
    }
    for cell in engine.order().into_iter().filter_map(|id| engine.cell(id)) {
        for problem in cell.diagnostics {
            let (line, column) = position(cell.text, problem.span.start);
            eprintln!("{notebook}:{}:{column}: {}", engine.line(cell.id) + line - 1, problem.message);
            well = false;
        }
    }
    well
}
