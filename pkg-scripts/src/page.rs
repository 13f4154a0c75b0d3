//! Puts the one self-contained file together: `dist/levelwise.html`.
//!
//! `www/index.html` has four marks where its parts go. The engine, the worker, the examples and the licence notices
//! are data blocks, which a browser does not execute; only the main script and the style are code, and the
//! policy names the hash of each, so that a file that was changed on its way does not run at all.

use crate::engine::{self, ENGINE, Module};
use crate::project::{Project, contents_of, files_under, read, read_text, run, write};
use crate::{notices, toolchain};
use anyhow::{Context, Result, bail, ensure};
use base64::{Engine as _, engine::general_purpose::STANDARD as BASE64};
use flate2::{Compression, write::GzEncoder};
use serde_json::{Value, json};
use sha2::{Digest, Sha256};
use std::collections::BTreeSet;
use std::io::Write;
use std::path::Path;
use std::process::Command;
use std::time::Instant;

/// How much work goes into a small and fast page.
#[derive(Clone, Copy, PartialEq)]
pub enum Finish {
    /// Quick to make, for trying things out: neither optimised nor minified.
    Fast,
    /// What is handed out.
    Release,
}

impl Finish {
    pub fn name(self) -> &'static str {
        match self {
            Finish::Fast => "fast",
            Finish::Release => "release",
        }
    }
}

/// What a build made, and how large it is.
pub struct Built {
    pub examples: Vec<String>,
    wasm: Size,
    html: Size,
}

struct Size {
    raw: usize,
    gzip: usize,
}

impl Size {
    fn of(bytes: &[u8]) -> Result<Size> {
        Ok(Size { raw: bytes.len(), gzip: gzip(bytes)?.len() })
    }
}

impl Built {
    /// Prints the sizes; always true, for the command's sake.
    pub fn print_sizes(&self) -> bool {
        println!("{:<24} {:>12} {:>12}", "size in bytes", "raw", "gzip");
        for (name, size) in [("engine.wasm", &self.wasm), ("dist/levelwise.html", &self.html)] {
            println!("{name:<24} {:>12} {:>12}", size.raw, size.gzip);
        }
        true
    }
}

/// Builds what has changed and writes the page.
pub fn build(project: &Project, finish: Finish) -> Result<Built> {
    let start = Instant::now();
    let timed = |what: &str| println!("{:>8.1} s  {what}", start.elapsed().as_secs_f64());
    toolchain::page_libraries(project)?;
    timed("the page's libraries are there");
    let metadata = engine::metadata(project)?;
    let engine = engine::build(project, &metadata, ENGINE, finish)?;
    timed("the engine is built");
    let scripts = bundle(project, &engine, finish)?;
    timed("the scripts are bundled");
    let examples = examples(project)?;
    let notices = notices::collect(project, &metadata, &scripts.libraries)?;
    let html = assemble(project, &engine, &scripts, &examples, &notices)?;
    let path = project.html();
    if std::fs::read(&path).ok().as_deref() != Some(html.as_bytes()) {
        write(&path, &html)?;
    }
    timed("dist/levelwise.html is written");
    Ok(Built {
        examples: examples.iter().filter_map(|example| Some(example["name"].as_str()?.to_owned())).collect(),
        wasm: Size::of(&engine.wasm)?,
        html: Size::of(html.as_bytes())?,
    })
}

struct Scripts {
    main: String,
    worker: String,
    /// The bundled files that are not ours.
    libraries: BTreeSet<String>,
}

fn bundle(project: &Project, engine: &Module, finish: Finish) -> Result<Scripts> {
    let kind = finish.name();
    let www = project.www();
    let kept = |name: &str| project.kept(&format!("{name}-{kind}"));
    let glue_source = ENGINE.glue(project, finish);
    let outputs =
        [kept("glue.min.js"), kept("main.js"), kept("main.json"), kept("worker.js"), kept("worker.json")];
    let [glue, main, main_list, worker, worker_list] = &outputs;
    let sources = contents_of(&www, &|path| {
        let inside = path.strip_prefix(&www).unwrap_or(path);
        inside.starts_with("page") || inside.starts_with("worker") || inside.starts_with("package-lock.json")
    })?;
    project.step(&format!("bundle-{kind}"), &[&sources, engine.glue.as_bytes()], &outputs, || {
        // The glue keeps its top-level name, which is what the worker calls; so it is not bundled.
        run(esbuild(project, finish).arg(&glue_source).arg(outfile(glue)))?;
        for (entry, output, list) in
            [("page/main.js", main, main_list), ("worker/main.js", worker, worker_list)]
        {
            run(esbuild(project, finish)
                .args([entry, "--bundle", "--format=iife"])
                .arg(outfile(output))
                .arg(format!("--metafile={}", list.display())))?;
        }
        Ok(())
    })?;
    let mut libraries = BTreeSet::new();
    for list in [main_list, worker_list] {
        let list: Value = serde_json::from_str(&read_text(list)?)?;
        let inputs = list["inputs"].as_object().context("the bundler lists no inputs")?;
        libraries.extend(inputs.keys().filter(|name| name.contains("node_modules/")).cloned());
    }
    Ok(Scripts { main: read_text(main)?, worker: read_text(glue)? + "\n" + &read_text(worker)?, libraries })
}

fn esbuild(project: &Project, finish: Finish) -> Command {
    let mut command = Command::new("node");
    command.current_dir(project.www()).arg("node_modules/esbuild/bin/esbuild");
    // The notices stand in full in a block of their own, so the scripts need not repeat parts of them.
    command.args(["--log-level=warning", "--charset=utf8", "--legal-comments=none", "--target=es2022"]);
    if finish == Finish::Release {
        command.arg("--minify");
    }
    command
}

fn outfile(path: &Path) -> String {
    format!("--outfile={}", path.display())
}

/// The example notebooks: name, title and text of each, by file name, those with raw data before those without: the first
/// one is what a newcomer is shown.
fn examples(project: &Project) -> Result<Vec<Value>> {
    let mut all = Vec::new();
    for path in files_under(&project.www().join("examples"))? {
        let file = path.file_name().unwrap_or_default().to_string_lossy().into_owned();
        let Some(name) = file.strip_suffix(".levelwise.toml") else { continue };
        let text = read_text(&path)?;
        all.push(json!({ "name": name, "title": title_of(&text).unwrap_or(name), "text": text }));
    }
    all.sort_by_key(|example| !example["text"].as_str().is_some_and(|text| text.contains("kind = \"data\"")));
    Ok(all)
}

/// The first heading of a notebook's notes.
fn title_of(text: &str) -> Option<&str> {
    text.lines().find_map(|line| {
        let line = line.trim().trim_start_matches("text = ").trim_matches(['"', '\'']);
        line.strip_prefix("# ").map(|title| title.trim().trim_matches(['"', '\'']))
    })
}

fn assemble(
    project: &Project,
    engine: &Module,
    scripts: &Scripts,
    examples: &[Value],
    notices: &str,
) -> Result<String> {
    let style = style(project)?;
    let main = inside_script(&scripts.main);
    ensure!(!main.contains(['\r', '\0']), "the main script has characters that a browser would change");
    let blocks = [
        block("engine", "application/octet-stream", &BASE64.encode(gzip(&engine.wasm)?)),
        block("worker", "text/plain", &inside_script(&scripts.worker)),
        block("examples", "application/octet-stream", &BASE64.encode(serde_json::to_vec(examples)?)),
        block("licences", "text/plain", &inside_script(notices)),
    ];
    // An empty icon, or the browser would ask the server for one.
    let head = format!("{}\n<link rel=\"icon\" href=\"data:,\">", policy(&main, &style));
    let html = read_text(&project.www().join("index.html"))?;
    let html = fill(&html, "policy", &head)?;
    let html = fill(&html, "style", &format!("<style>{style}</style>"))?;
    let html = fill(&html, "blocks", &blocks.join("\n"))?;
    fill(&html, "script", &format!("<script>{main}</script>"))
}

/// The page with `text` in the place of the mark; the mark stands there exactly once.
fn fill(html: &str, mark: &str, text: &str) -> Result<String> {
    let comment = format!("<!-- pack:{mark} -->");
    match html.match_indices(&comment).count() {
        1 => Ok(html.replacen(&comment, text, 1)),
        n => bail!("www/index.html has the mark {comment} {n} times; it needs it once"),
    }
}

/// The policy that makes every connection impossible, with the hashes of the only code that may run.
fn policy(main: &str, style: &str) -> String {
    let directives = [
        "default-src 'none'".to_owned(),
        format!("script-src '{}' 'wasm-unsafe-eval'", hash(main)),
        "worker-src blob:".to_owned(),
        "connect-src 'none'".to_owned(),
        format!("style-src '{}'", hash(style)),
        "img-src data: blob:".to_owned(),
        "font-src 'none'; object-src 'none'; frame-src 'none'".to_owned(),
        "form-action 'none'; base-uri 'none'".to_owned(),
        "require-trusted-types-for 'script'; trusted-types app".to_owned(),
    ];
    format!("<meta http-equiv=\"Content-Security-Policy\" content=\"{}\">", directives.join("; "))
}

fn hash(text: &str) -> String {
    format!("sha256-{}", BASE64.encode(Sha256::digest(text.as_bytes())))
}

fn style(project: &Project) -> Result<String> {
    let parts = [project.www().join("style.css"), project.root.join("src/answer/answer.css")];
    let mut style = String::new();
    for path in parts.iter().filter(|path| path.exists()) {
        style.push_str(&String::from_utf8(read(path)?)?.replace('\r', ""));
    }
    ensure!(
        !style.to_lowercase().contains("</style"),
        "a style sheet must not hold the end of the style element"
    );
    Ok(style)
}

fn block(id: &str, kind: &str, text: &str) -> String {
    format!("<script type=\"{kind}\" id=\"{id}\">{text}</script>")
}

/// JavaScript or plain text that can stand in a script element without ending it: what would end it, or open a
/// comment that hides the end, gets a backslash, which changes nothing inside a JavaScript string.
fn inside_script(text: &str) -> String {
    let mut safe = String::with_capacity(text.len());
    let mut rest = text;
    while let Some(at) = rest.find('<') {
        safe.push_str(&rest[..=at]);
        rest = &rest[at + 1..];
        let starts =
            |word: &str| rest.get(..word.len()).is_some_and(|start| start.eq_ignore_ascii_case(word));
        if starts("/script") || starts("!--") {
            safe.push('\\');
        }
    }
    safe.push_str(rest);
    safe
}

pub fn gzip(bytes: &[u8]) -> Result<Vec<u8>> {
    let mut encoder = GzEncoder::new(Vec::new(), Compression::best());
    encoder.write_all(bytes)?;
    Ok(encoder.finish()?)
}

#[cfg(test)]
mod tests {
    use super::{fill, inside_script, title_of};

    #[test]
    fn nothing_inside_a_script_can_end_it() {
        assert_eq!(inside_script("a='</script>'"), "a='<\\/script>'");
        assert_eq!(
            inside_script("a='</ScRiPt '; b='<!-- <script'; c=1<d"),
            "a='<\\/ScRiPt '; b='<\\!-- <script'; c=1<d"
        );
        assert_eq!(inside_script("ends in <"), "ends in <");
        assert_eq!(inside_script("<é</p>"), "<é</p>");
    }

    #[test]
    fn a_mark_that_is_missing_or_doubled_is_refused() {
        assert_eq!(fill("a <!-- pack:x --> b", "x", "$1").unwrap(), "a $1 b");
        assert!(fill("a b", "x", "y").is_err());
        assert!(fill("<!-- pack:x --><!-- pack:x -->", "x", "y").is_err());
    }

    #[test]
    fn the_title_of_an_example_is_the_first_heading() {
        assert_eq!(
            title_of("[[cell]]\ntext = \"\"\"\n# Practice and recall\nText\n\"\"\""),
            Some("Practice and recall")
        );
        assert_eq!(title_of("text = \"# Short\""), Some("Short"));
        assert_eq!(title_of("kind = \"note\""), None);
    }
}
