//! How long the engine takes from an edit to the settled notebook, native. `cargo bench --bench engine`.

use levelwise::notebook::engine::{Edit, Engine};

fn main() {
    divan::main();
}

/// A notebook over a table of `rows` rows in five groups with values that differ from group to group.
fn notebook(rows: usize) -> String {
    let mut table = String::from("id,dose,score\n");
    for row in 0..rows {
        // A fixed scramble of the row number: the values only have to look like measurements.
        let noise = (row * 7919 + 104_729) % 1009;
        table.push_str(&format!("p{row},{} mg,{}.{}\n", row % 5 * 10, 20 + row % 5 + noise / 50, noise % 10));
    }
    let study = "kind = \"study\"\nname = \"s\"\ndata = \"d\"\noutcome = \"score\"\ngroups = \"dose\"\nscores = [0, 10, 20, 30, 40]\n";
    let asks = ["profile", "overall", "comparisons", "trend"]
        .map(|kind| format!("[[cell]]\nkind = \"{kind}\"\nstudy = \"s\"\n"));
    format!(
        "levelwise = 1\n[[cell]]\nkind = \"data\"\nname = \"d\"\ntable = '''\n{table}'''\n[[cell]]\n{study}{}",
        asks.concat()
    )
}

fn opened(rows: usize) -> Engine {
    let mut engine = Engine::new();
    engine.open(&notebook(rows)).expect("a notebook");
    engine.settle();
    engine
}

/// From a notebook's text to every answer.
#[divan::bench(args = [1_000, 100_000], sample_count = 15)]
fn open_and_settle(bencher: divan::Bencher, rows: usize) {
    let text = notebook(rows);
    bencher.bench(|| {
        let mut engine = Engine::new();
        engine.open(&text).expect("a notebook");
        engine.settle();
        engine
    });
}

/// From one changed value to every answer.
#[divan::bench(args = [1_000, 100_000], sample_count = 15)]
fn change_one_value(bencher: divan::Bencher, rows: usize) {
    let mut engine = opened(rows);
    let cell = engine.order()[0];
    let mut value = 0;
    bencher.bench_local(|| {
        value += 1;
        engine
            .apply(Edit::TableValue { cell, row: 3, column: 2, value: format!("{value}.5") })
            .expect("accepted");
        engine.settle();
    });
}

/// From one changed blank of a study to every answer.
#[divan::bench(args = [1_000, 100_000], sample_count = 15)]
fn change_the_error_rate(bencher: divan::Bencher, rows: usize) {
    let mut engine = opened(rows);
    let cell = engine.order()[1];
    let mut value = 0;
    bencher.bench_local(|| {
        value += 1;
        engine
            .apply(Edit::Field { cell, field: "alpha".into(), value: format!("0.05{value:05}") })
            .expect("accepted");
        engine.settle();
    });
}
