//! Every check there is, one after the other: `cargo pack test`.
//!
//! A stage that fails does not keep the later ones from running. The last line counts what passed and what failed;
//! a stage without a count of its own (formatting, lints, types, the build) counts as one.

use crate::engine::{self, NUMBERS};
use crate::page::{self, Finish};
use crate::project::{Project, files_under};
use crate::toolchain::{self, cargo};
use anyhow::{Context, Result};
use std::io::{BufRead, BufReader};
use std::process::{Command, Stdio};
use std::time::Instant;

#[derive(Default)]
struct Count {
    passed: u64,
    failed: u64,
}

/// Runs every stage; whether nothing failed.
pub fn run_all(project: &Project) -> Result<bool> {
    let start = Instant::now();
    let mut total = Count::default();
    let mut times = Vec::new();
    let mut stage = |name: &str, work: &dyn Fn() -> Result<Count>| {
        println!("\n== {name}");
        let start = Instant::now();
        let count = work().unwrap_or_else(|error| {
            println!("{error:#}");
            Count { passed: 0, failed: 1 }
        });
        let seconds = start.elapsed().as_secs_f64();
        times.push(format!("{seconds:>8.1} s  {name}: {} passed, {} failed", count.passed, count.failed));
        total.passed += count.passed;
        total.failed += count.failed;
    };
    stage("formatting", &|| one(in_root(project, &["fmt", "--all", "--check"])));
    stage("lints", &|| {
        one(in_root(project, &["clippy", "--quiet", "--workspace", "--all-targets", "--", "-D", "warnings"]))
    });
    stage("Rust tests and reference checks", &|| {
        counted(&mut in_root(project, &["test", "--workspace", "--no-fail-fast"]))
    });
    stage("the page's libraries", &|| {
        toolchain::page_libraries(project).map(|()| Count { passed: 1, failed: 0 })
    });
    for (whose, folder) in [("the page's scripts", "."), ("the browser tests", "../tests/web")] {
        stage(&format!("types of {whose}"), &|| {
            one(in_www(project, &["node_modules/typescript/bin/tsc", "-p", folder]))
        });
    }
    stage("unit tests of the page's scripts", &|| node_tests(project, "www/tests"));
    stage("the page", &|| {
        page::build(project, Finish::Release)?.print_sizes();
        Ok(Count { passed: 1, failed: 0 })
    });
    stage("the numbers' module", &|| {
        engine::build(project, &engine::metadata(project)?, NUMBERS, Finish::Release)?;
        Ok(Count { passed: 1, failed: 0 })
    });
    stage("the page in a browser", &|| node_tests(project, "tests/web"));
    println!("\n{}", times.join("\n"));
    println!("{:>8.1} s  in all\n", start.elapsed().as_secs_f64());
    println!("{} passed, {} failed", total.passed, total.failed);
    Ok(total.failed == 0)
}

fn in_root(project: &Project, arguments: &[&str]) -> Command {
    let mut command = Command::new(cargo());
    command.current_dir(&project.root).args(arguments);
    command
}

fn in_www(project: &Project, arguments: &[&str]) -> Command {
    let mut command = Command::new("node");
    command.current_dir(project.www()).args(arguments);
    command
}

/// A program that is one check.
fn one(mut command: Command) -> Result<Count> {
    let status = command.stdin(Stdio::null()).status()?;
    let passed = u64::from(status.success());
    Ok(Count { passed, failed: 1 - passed })
}

/// The test files of a folder, run by Node; those that drive a browser find it and the programs in the environment.
fn node_tests(project: &Project, folder: &str) -> Result<Count> {
    let files = files_under(&project.root.join(folder))?;
    let files: Vec<_> = files
        .iter()
        .filter(|path| {
            path.to_string_lossy().ends_with(".test.mjs") || path.to_string_lossy().ends_with(".test.js")
        })
        .collect();
    anyhow::ensure!(!files.is_empty(), "{folder} holds no file NAME.test.js");
    let mut command = Command::new("node");
    // One file at a time: a browser that is measured or timed out must not share the machine with another.
    command
        .current_dir(&project.root)
        .args(["--test", "--test-concurrency=1", "--test-reporter=spec"])
        .args(files);
    command.env("LEVELWISE_HTML", project.html());
    command.env("LEVELWISE_PROGRAM", project.target.join("debug/levelwise"));
    if folder == "tests/web" {
        command.env("CHROMIUM", toolchain::browser()?);
        command.envs(NUMBERS.variables(project));
        command.env("LEVELWISE_NUMBERS_PROGRAM", project.target.join("debug/levelwise-numbers"));
    }
    counted(&mut command)
}

/// A test runner whose output is shown as it comes and its closing lines added up. A runner that fails without
/// saying how many tests did counts as one failure.
fn counted(command: &mut Command) -> Result<Count> {
    let mut child = command
        .stdin(Stdio::null())
        .stdout(Stdio::piped())
        .spawn()
        .with_context(|| format!("cannot start {}", command.get_program().display()))?;
    let mut count = Count::default();
    for line in BufReader::new(child.stdout.take().context("no output to read")?).split(b'\n') {
        let line = String::from_utf8_lossy(&line?).into_owned();
        println!("{line}");
        let (passed, failed) = counts_in(&line);
        count.passed += passed;
        count.failed += failed;
    }
    if !child.wait()?.success() && count.failed == 0 {
        count.failed = 1;
    }
    Ok(count)
}

/// What a closing line of Cargo's or Node's test runner says: passed and failed.
fn counts_in(line: &str) -> (u64, u64) {
    let words: Vec<&str> = line.split([' ', ';']).filter(|word| !word.is_empty()).collect();
    let number = |word: &str| word.parse().unwrap_or(0);
    match words.as_slice() {
        // test result: ok. 12 passed; 0 failed; ...
        ["test", "result:", _, passed, "passed", failed, "failed", ..] => (number(passed), number(failed)),
        // ℹ pass 12
        ["ℹ" | "#", "pass", passed] => (number(passed), 0),
        ["ℹ" | "#", "fail" | "cancelled", failed] => (0, number(failed)),
        _ => (0, 0),
    }
}

#[cfg(test)]
mod tests {
    use super::counts_in;

    #[test]
    fn closing_lines_of_both_test_runners_are_counted() {
        let line = "test result: FAILED. 12 passed; 3 failed; 0 ignored; 0 measured; 0 filtered out; finished in 0.00s";
        assert_eq!(counts_in(line), (12, 3));
        assert_eq!(counts_in("ℹ pass 7"), (7, 0));
        assert_eq!(counts_in("ℹ fail 2"), (0, 2));
        assert_eq!(counts_in("test a_test ... ok"), (0, 0));
    }
}
