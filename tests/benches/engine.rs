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
    change_alpha(bencher, &mut engine, cell);
}

/// A comparisons cell over 40 groups of 50, asked in one way.
struct Asked {
    name: &'static str,
    variances: &'static str,
    ask: &'static str,
}

impl std::fmt::Display for Asked {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.write_str(self.name)
    }
}

const fn asked(name: &'static str, variances: &'static str, ask: &'static str) -> Asked {
    Asked { name, variances, ask }
}

/// Every procedure that needs no simulation. All have 780 pairs but those against a control, which have 39 comparisons.
const FORTY_GROUPS: [Asked; 25] = [
    asked("Tukey", "equal", "adjust = \"Tukey\""),
    asked("Scheffe", "equal", "adjust = \"Scheffe\""),
    asked("Newman-Keuls", "equal", "adjust = \"Newman-Keuls\""),
    asked("Ryan-Einot-Gabriel-Welsch", "equal", "adjust = \"Ryan-Einot-Gabriel-Welsch\""),
    asked("least significant difference", "equal", "adjust = \"least significant difference\""),
    asked("max-t, equal sizes", "equal", "adjust = \"max-t\""),
    asked("Bonferroni", "equal", "adjust = \"Bonferroni\""),
    asked("Holm", "equal", "adjust = \"Holm\""),
    asked("Hommel", "equal", "adjust = \"Hommel\""),
    asked("Benjamini-Yekutieli", "equal", "adjust = \"Benjamini-Yekutieli\""),
    asked("fixed sequence", "equal", "adjust = \"fixed sequence\""),
    asked("fallback", "equal", "adjust = \"fallback\""),
    asked("graph", "equal", "adjust = \"graph\""),
    asked("equivalence, Holm", "equal", "adjust = \"Holm\"\nclaim = \"equivalence\"\nmargin = [3]"),
    asked("Games-Howell", "unequal", "adjust = \"Games-Howell\""),
    asked("Tamhane T2", "unequal", "adjust = \"Tamhane T2\""),
    asked("Dunnett T3", "unequal", "adjust = \"Dunnett T3\""),
    asked("Dunnett C", "unequal", "adjust = \"Dunnett C\""),
    asked("Welch, Holm", "unequal", "adjust = \"Holm\""),
    asked("Steel-Dwass", "unequal", "basis = \"ranks\"\nadjust = \"Steel-Dwass\""),
    asked("rank sums, Holm", "unequal", "basis = \"ranks\"\nadjust = \"Holm\""),
    asked("Dunn, Holm", "unequal", "basis = \"ranks\"\nranking = \"joint\"\nadjust = \"Holm\""),
    asked("Dunnett", "equal", "family = \"each against control\"\nadjust = \"Dunnett\""),
    asked("step-down Dunnett", "equal", "family = \"each against control\"\nadjust = \"step-down Dunnett\""),
    asked("Steel", "equal", "family = \"each against control\"\nbasis = \"ranks\""),
];

/// From a changed blank of the cell to its answer: decisions, effect sizes, letters, tables and figures.
#[divan::bench(args = FORTY_GROUPS, sample_count = 15)]
fn compare_forty_groups(bencher: divan::Bencher, asked: &Asked) {
    let mut table = String::from("group,score\n");
    for row in 0..2000 {
        let (group, noise) = (row % 40, (row * 7919 + 104_729) % 1009);
        table.push_str(&format!("g{group},{}.{}\n", 20 + group / 8 + noise * (1 + group % 3) / 50, row % 10));
    }
    let study = format!(
        "kind = \"study\"\nname = \"s\"\ndata = \"d\"\noutcome = \"score\"\ngroups = \"group\"\ncontrol = \"g0\"\nvariances = \"{}\"\n",
        asked.variances
    );
    let text = format!(
        "levelwise = 1\n[[cell]]\nkind = \"data\"\nname = \"d\"\ntable = '''\n{table}'''\n[[cell]]\n{study}[[cell]]\nkind = \"comparisons\"\nstudy = \"s\"\n{}\n",
        asked.ask
    );
    let mut engine = Engine::new();
    engine.open(&text).expect("a notebook");
    engine.settle();
    let cell = engine.order()[2];
    change_alpha(bencher, &mut engine, cell);
    assert!(engine.cell(cell).is_some_and(|cell| cell.diagnostics.is_empty()), "{}", asked.name);
}

/// Another error rate in the cell each time, so that no kept answer is found, and everything settled.
fn change_alpha(bencher: divan::Bencher, engine: &mut Engine, cell: u32) {
    let mut value = 0;
    bencher.bench_local(|| {
        value += 1;
        engine
            .apply(Edit::Field { cell, field: "alpha".into(), value: format!("0.05{value:05}") })
            .expect("accepted");
        engine.settle();
    });
}
