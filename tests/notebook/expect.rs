//! Helpers: settle a notebook, look a cell up, compare diagnostics with those expected on their lines.

use levelwise::notebook::diagnostics::position;
use levelwise::notebook::engine::{CellView, Condition, Engine};
use serde_json::Value;

/// The engine with the notebook settled.
pub fn settled(notebook: &str) -> Engine {
    let mut engine = Engine::new();
    engine.open(notebook).expect("a notebook");
    engine.settle();
    engine
}

/// The cell at a place, counted from 0.
pub fn cell(engine: &Engine, place: usize) -> CellView<'_> {
    engine.cell(engine.order()[place]).expect("a cell")
}

/// The cell of that name.
pub fn named<'a>(engine: &'a Engine, name: &str) -> CellView<'a> {
    let cells = engine.order().into_iter().filter_map(|id| engine.cell(id));
    cells
        .into_iter()
        .find(|cell| cell.name == Some(name))
        .unwrap_or_else(|| panic!("no cell is called {name}"))
}

/// The results of the cell of that name, which must be settled.
pub fn results(engine: &Engine, name: &str) -> Value {
    let cell = named(engine, name);
    assert_eq!(cell.condition, Condition::Settled, "{name}: {:?}", cell.diagnostics);
    cell.outcome.expect("an outcome").results.clone()
}

/// Checks every diagnostic of `notebook` against its comments: a line that ends in `# ! text` must have a
/// diagnostic that contains the text; every other line must have none. Returns the engine for more.
pub fn check(notebook: &str) -> Engine {
    let engine = settled(notebook);
    let mut found: Vec<(usize, String)> = Vec::new();
    for id in engine.order() {
        let cell = engine.cell(id).expect("a cell");
        for problem in cell.diagnostics {
            let line = engine.line(id) + position(cell.text, problem.span.start).0 - 1;
            found.push((line, problem.message.clone()));
        }
    }
    for (index, line) in notebook.lines().enumerate() {
        let Some((_, expected)) = line.split_once("# ! ") else { continue };
        let at =
            found.iter().position(|(line, message)| *line == index + 1 && message.contains(expected.trim()));
        match at {
            Some(at) => drop(found.remove(at)),
            None => {
                panic!("line {}: no diagnostic says \"{}\"; found {found:#?}", index + 1, expected.trim())
            }
        }
    }
    assert!(found.is_empty(), "unexpected diagnostics: {found:#?}");
    engine
}
