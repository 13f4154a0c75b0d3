//! Summary cells: groups known only by size, mean and standard deviation. The numbers are invented.

use super::expect::{check, named, results, settled};
use serde_json::json;

const GROUPS: &str = r#"levelwise = 1
[[cell]]
kind = "summary"
name = "published"
groups = [
  { level = "none", n = 12, mean = 1_000.5, sd = 2.5 },
  { level = "drill", n = 10, mean = -3, sd = 1e-1 },
  { level = "one", n = 1, mean = 4, sd = 0 },
]
"#;

#[test]
fn groups_are_taken_as_typed() {
    let engine = settled(GROUPS);
    assert_eq!(
        results(&engine, "published"),
        json!({ "groups": [
            { "level": "none", "n": 12, "mean": 1000.5, "sd": 2.5 },
            { "level": "drill", "n": 10, "mean": -3.0, "sd": 0.1 },
            { "level": "one", "n": 1, "mean": 4.0 },
        ] })
    );
    assert_eq!(
        named(&engine, "published").headline,
        "3 groups with 23 observations, known by size, mean and SD."
    );
}

#[test]
fn groups_that_cannot_be_are_named() {
    check(
        r#"levelwise = 1
[[cell]]
kind = "summary" # ! The field "groups" is missing
[[cell]]
kind = "summary"
groups = [] # ! groups: the list is empty
[[cell]]
kind = "summary"
groups = [
  { level = "a", n = 0, mean = 1, sd = 1 }, # ! Level "a": n is 0, but a whole number from 1 up is needed.
  { level = "b", n = 2.5, mean = 1, sd = 1 }, # ! Level "b": n is 2.5, but a whole number from 1 up is needed.
  { level = "d", n = 5, mean = 1, sd = -2 }, # ! Level "d": sd is -2, but a number from 0 up is needed.
  { level = "e", n = 5, mean = inf, sd = 1 }, # ! Level "e": the mean "inf" is not a number. Write a number with a decimal point.
  { level = "f", n = 5, mean = "12,5", sd = 1 }, # ! Level "f": the mean "12,5" is not a number.
  { level = "g", n = 5, mean = "1e400", sd = 1 }, # ! Level "g": the mean "1e400" is too large
  { level = "h", n = 5, mean = 1, sd = nan }, # ! Level "h": the sd "nan" is not a number.
  { level = "i", n = 1, mean = 1, sd = 2 }, # ! Level "i" has 1 observation and so no standard deviation. Write sd = 0 for it.
  { level = "j", n = 5, mean = 1, sd = 1e200 }, # ! Level "j": sd is 1e200, which cannot be squared. Change the unit of the outcome.
  { level = "", n = 5, mean = 1, sd = 1 }, # ! a level has no name
  { level = "k", n = 5, mean = 1, sd = 1 },
  { level = "k", n = 5, mean = 1, sd = 1 }, # ! the level "k" is there twice
  { level = "l", n = 5, mean = 1 }, # ! "sd" is missing
]
"#,
    );
}

/// Cells on a summary or a table of the same three levels, of which "c" does not vary.
fn with_a_constant_level(data: &str, variances: &str) -> String {
    format!(
        "levelwise = 1\n[[cell]]\n{data}\nname = \"given\"\n[[cell]]\nkind = \"study\"\nname = \"trial\"\ndata = \"given\"\noutcome = \"y\"\ngroups = \"g\"\nlevels = [\"a\", \"b\", \"c\"]\nvariances = \"{variances}\"\n[[cell]]\nkind = \"comparisons\"\nname = \"pairs\"\nstudy = \"trial\"\n"
    )
}

#[test]
fn a_level_that_does_not_vary_is_treated_as_in_a_table_of_its_values() {
    let typed = "kind = \"summary\"\ngroups = [{ level = \"a\", n = 3, mean = 2, sd = 1 }, { level = \"b\", n = 3, mean = 4, sd = 2 }, { level = \"c\", n = 2, mean = 5, sd = 0 }]";
    let table = "kind = \"data\"\ntable = \"g,y\\na,1\\na,2\\na,3\\nb,2\\nb,4\\nb,6\\nc,5\\nc,5\\n\"";
    let answer = |data| results(&settled(&with_a_constant_level(data, "equal")), "pairs");
    assert_eq!(answer(typed), answer(table));
    let refused = |data| {
        let engine = settled(&with_a_constant_level(data, "unequal"));
        named(&engine, "pairs").diagnostics.first().map(|problem| problem.message.clone())
    };
    assert!(refused(typed).is_some_and(|message| message.contains("level \"c\" has no variation")));
    assert_eq!(refused(typed), refused(table));
}
