//! Two open data sets, from the table's text through the notebook to the full-precision results, against an
//! independent computation. Sources, terms and how the expected values were made: `data/open/README.md`.
//!
//! Exact rationals with 40-digit tails stand behind F, Welch's F, Kruskal-Wallis and the effect sizes: trusted to all digits.
//! Tukey-Kramer and Games-Howell p-values come from a general-purpose library with an absolute error of about
//! 1e-14; adjusted p-values from another, in double precision.

use super::cases::{number, relative_error};
use levelwise::notebook::engine::Engine;
use levelwise::notebook::results;
use serde_json::Value;

const HERE: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/tests/reference/data/open");

struct Case {
    name: &'static str,
    outcome: &'static str,
}

const CASES: [Case; 2] =
    [Case { name: "penguins", outcome: "body_mass_g" }, Case { name: "iris", outcome: "sepal_length_cm" }];

fn read(file: &str) -> String {
    std::fs::read_to_string(format!("{HERE}/{file}")).expect("a file of the repository")
}

/// The results of every cell of a notebook that asks everything of the data set.
fn answers(case: &Case) -> impl Fn(&str) -> Value {
    let study = |name: &str, variances: &str| {
        let outcome = case.outcome;
        format!(
            "[[cell]]\nkind = \"study\"\nname = \"{name}\"\ndata = \"table\"\noutcome = \"{outcome}\"\ngroups = \"species\"\nvariances = \"{variances}\"\n"
        )
    };
    let ask = |kind: &str, name: &str, study: &str, rest: &str| {
        format!("[[cell]]\nkind = \"{kind}\"\nname = \"{name}\"\nstudy = \"{study}\"\n{rest}\n")
    };
    let table = read(&format!("{}.csv", case.name));
    let notebook = [
        format!("levelwise = 1\n[[cell]]\nkind = \"data\"\nname = \"table\"\ntable = '''\n{table}'''\n"),
        study("pooled", "equal"),
        study("separate", "unequal"),
        ask("overall", "one-way", "pooled", ""),
        ask("overall", "Welch", "separate", ""),
        ask("overall", "ranks", "pooled", "test = \"ranks\""),
        ask("profile", "groups", "pooled", ""),
        ask("comparisons", "pairs", "pooled", "also = [\"Holm\", \"Bonferroni\", \"Hochberg\"]"),
        ask("comparisons", "separate pairs", "separate", ""),
    ];
    let mut engine = Engine::new();
    engine.open(&notebook.concat()).expect("a notebook");
    engine.settle();
    let all = results::results(&engine);
    move |name| {
        let cells = all["cells"].as_array().expect("cells");
        let cell = cells.iter().find(|cell| cell["name"] == name).expect("a cell of that name");
        assert_eq!(cell["condition"], "settled", "{name}: {}", cell["diagnostics"]);
        cell["results"].clone()
    }
}

fn agree(what: &str, computed: &Value, expected: &Value, allowed: f64) {
    let error = relative_error(number(computed), number(expected));
    assert!(error <= allowed, "{what}: {computed} against {expected}, relative error {error:e}");
}

fn expected() -> Value {
    serde_json::from_str(&read("expected.json")).expect("JSON")
}

#[test]
fn overall_tests_of_the_open_data_sets_agree_with_exact_arithmetic() {
    for case in CASES {
        let (answer, expected) = (answers(&case), &expected()[case.name]);
        let (one_way, welch, ranks) = (answer("one-way"), answer("Welch"), answer("ranks"));
        for key in ["F", "ss_between", "ss_within", "df2", "p"] {
            agree(key, &one_way[key], &expected["anova"][key], 1e-12);
        }
        for key in ["F", "df2", "p"] {
            agree(key, &welch[key], &expected["welch"][key], 1e-11);
        }
        for key in ["H", "p"] {
            agree(key, &ranks[key], &expected["kruskal_wallis"][key], 1e-12);
        }
        for key in ["eta_squared", "omega_squared"] {
            agree(key, &one_way[key]["estimate"], &expected[key], 1e-13);
        }
    }
}

#[test]
fn groups_of_the_open_data_sets_agree_with_exact_arithmetic() {
    for case in CASES {
        let (groups, expected) = (answers(&case)("groups"), &expected()[case.name]);
        for (index, level) in expected["levels"].as_array().expect("levels").iter().enumerate() {
            let group = &groups["groups"][index];
            assert_eq!(&group["level"], level);
            assert_eq!(group["n"], expected["n"][index]);
            agree("mean", &group["mean"], &expected["mean"][index], 1e-14);
            agree("sd", &group["sd"], &expected["sd"][index], 1e-14);
        }
    }
}

#[test]
fn every_pair_of_the_open_data_sets_agrees_with_general_purpose_libraries() {
    for case in CASES {
        let answer = answers(&case);
        let (pooled, separate, expected) =
            (answer("pairs"), answer("separate pairs"), &expected()[case.name]);
        for (index, pair) in expected["pairs"].as_array().expect("pairs").iter().enumerate() {
            let (row, other) = (&pooled["rows"][index], &separate["rows"][index]);
            let names = [&pair["pair"][1], &pair["pair"][0]].map(|name| name.as_str().expect("a name"));
            assert_eq!(row["name"], format!("{} - {}", names[0], names[1]));
            agree("difference", &row["estimate"], &pair["difference"], 1e-12);
            agree("p", &row["p"], &pair["p"], 1e-11);
            for key in ["Holm", "Bonferroni", "Hochberg"] {
                agree(key, &row["also"][key], &pair[key.to_lowercase()], 1e-11);
            }
            for (key, computed) in [("tukey", row), ("games_howell", other)] {
                let error = (number(&computed["p_adjusted"]) - number(&pair[key])).abs();
                assert!(error < 1e-12, "{key} of {pair}: off by {error:e}");
            }
        }
    }
}
