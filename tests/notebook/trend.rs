//! Trends as cells. The numbers are those of the invented dose set, worked independently for this project (see
//! `tests/reference/trend.rs`).

use super::given::{evaluated, shown, study, summarised};
use levelwise::answer::Block;
use levelwise::notebook::outcome::Outcome;
use levelwise::study::{Observed, Study, Variances};

fn doses(variances: Variances) -> Study {
    let mut study = study(
        &[
            ("none", &[12.0, 15.0, 14.0, 11.0, 13.0, 13.0]),
            ("10 mg", &[14.0, 16.0, 15.0, 13.0, 17.0]),
            ("30 mg", &[18.0, 17.0, 15.0, 19.0, 16.0]),
            ("100 mg", &[19.0, 21.0, 18.0, 22.0]),
        ],
        variances,
    );
    study.levels.scores = Some(vec![0.0, 10.0, 30.0, 100.0]);
    study
}

fn ask(rest: &str) -> String {
    format!("kind = \"trend\"\nstudy = \"doses\"\n{rest}")
}

fn settled(rest: &str, study: Study) -> Outcome {
    let outcome = evaluated(&ask(rest), study);
    assert!(outcome.diagnostics.is_empty() && !outcome.waiting, "{:?}", outcome.diagnostics);
    outcome
}

fn problem(rest: &str, study: Study) -> (String, String) {
    let text = ask(rest);
    let outcome = evaluated(&text, study);
    let [only] = outcome.diagnostics.as_slice() else {
        panic!("one diagnostic, not {:?}", outcome.diagnostics)
    };
    (only.message.clone(), text[only.span.clone()].to_string())
}

fn near(found: &serde_json::Value, expected: f64) {
    let found = found.as_f64().unwrap();
    assert!((found - expected).abs() <= 5.05e-7, "{found}, expected {expected}");
}

#[test]
fn every_degree_that_the_levels_allow_is_answered_from_the_real_scores() {
    let outcome = settled("", doses(Variances::Equal));
    let rows = &outcome.results["rows"];
    near(&rows[0]["ss"], 114.725926);
    near(&rows[0]["t"], 6.774243);
    near(&rows[0]["slope"], 0.0651852);
    near(&rows[1]["p"], 0.0415145);
    near(&rows[2]["p"], 0.580749);
    assert_eq!(outcome.results["degree"], 3);
    assert!(outcome.results.get("lack_of_fit").is_none(), "a cubic through four means leaves nothing over");
    near(&outcome.results["lack_of_fit_by_degree"][0]["F"], 2.614815);
    assert_eq!(outcome.in_force["degree"], "3");
    assert_eq!(outcome.in_force["scores"], "0, 10, 30, 100");
}

#[test]
fn the_lack_of_fit_is_that_beyond_the_degree_asked_for() {
    let outcome = settled("degree = 1", doses(Variances::Equal));
    near(&outcome.results["lack_of_fit"]["F"], 2.614815);
    near(&outcome.results["lack_of_fit"]["p"], 0.104093);
    assert_eq!(outcome.results["lack_of_fit"]["df2"], 16.0);
    assert_eq!(outcome.answer.headline, "count follows the scores of drug: linear trend, rising (p < 0.001)");
    let writeup = outcome.answer.writeup.as_deref().unwrap();
    assert!(writeup.contains("Linear trend: coefficient 0.065 (95\u{a0}% interval 0.045 to 0.086), t(16) = 6.77, p < 0.001, 89.77\u{a0}% of the sum of squares"), "{writeup}");
    assert!(
        writeup.contains("Beyond degree 1: F(2, 16) = 2.61, p = 0.104; a departure is not shown."),
        "{writeup}"
    );
    let figures = outcome.answer.blocks.iter().filter(|block| matches!(block, Block::Figure(_))).count();
    assert_eq!(figures, 1);
}

#[test]
fn the_order_the_scores_and_the_coefficients_in_use_are_shown() {
    let text = shown(&settled("", doses(Variances::Equal)));
    for part in
        ["Order, scores (from the study) and contrast coefficients in use", "one bend", "two bends", "100 mg"]
    {
        assert!(text.contains(part), "{part} is not in {text}");
    }
    let own = shown(&settled("scores = [1, 2, 3, 4]", doses(Variances::Equal)));
    assert!(own.contains("scores (from this cell)"), "{own}");
}

#[test]
fn textbook_weights_and_separate_variances_are_named() {
    let equal = settled("weights = \"equal\"", doses(Variances::Equal));
    near(&equal.results["rows"][0]["ss"], 106.604735);
    near(&equal.results["rows"][1]["ss"], 11.950078);
    assert!(shown(&equal).contains("they do not add up"));
    let separate = settled("", doses(Variances::Unequal));
    assert!(shown(&separate).contains("separate variances"));
    assert!(separate.results["rows"][0]["df"].as_f64().unwrap() < 16.0);
}

#[test]
fn summaries_answer_as_the_raw_values_do() {
    for variances in [Variances::Equal, Variances::Unequal] {
        let raw = settled("", doses(variances));
        assert_eq!(raw.results, settled("", summarised(doses(variances))).results);
    }
}

#[test]
fn a_plan_shows_its_contrasts_and_waits() {
    let plan = Study { observed: Observed::Plan, account: Vec::new(), ..doses(Variances::Equal) };
    let outcome = evaluated(&ask("degree = 2"), plan);
    assert!(outcome.waiting && outcome.diagnostics.is_empty(), "{:?}", outcome.diagnostics);
    assert_eq!(outcome.answer.headline, "Planned: 2 trends over the scores 0, 10, 30, 100; waiting for data");
    assert_eq!(outcome.results["rows"][0]["coefficients"]["none"], -35.0);
}

#[test]
fn levels_without_scores_have_no_trend_and_the_order_in_use_is_said() {
    let mut without = doses(Variances::Equal);
    without.levels.scores = None;
    let (message, place) = problem("", without);
    assert_eq!(place, "\"doses\"");
    assert_eq!(
        message,
        "A trend needs a number for each level (its dose, its minutes), and the study has no scores. The order in use is \"none\", \"10 mg\", \"30 mg\", \"100 mg\". Their names suggest scores = [0, 10, 30, 100]: set them in the study, or here, if they are right."
    );
    let mut nameless = doses(Variances::Equal);
    nameless.levels.scores = None;
    nameless.levels.labels = ["none", "low", "middle", "high"].map(String::from).to_vec();
    assert!(
        problem("", nameless).0.ends_with("Set scores in the study, or here, such as scores = [0, 15, 30].")
    );
}

#[test]
fn scores_and_degrees_that_do_not_fit_are_said_at_their_place() {
    let equal = || doses(Variances::Equal);
    let cases = [
        (
            "scores = [0, 30, 10, 100]",
            "10",
            "strictly increasing in the order of the levels, but 10 follows 30",
        ),
        ("scores = [0, 0, 10, 100]", "0", "but 0 follows 0"),
        ("scores = [0, 10]", "[0, 10]", "2 scores are given for 4 levels"),
        (
            "degree = 4",
            "4",
            "4 levels allow a trend of degree 3 at most: one less than their number. A quartic trend needs 5 levels.",
        ),
        ("degree = 5", "5", "a whole number from 1 to 4"),
        ("degree = 0", "0", "a whole number from 1 to 4"),
        ("method = \"ranks\"", "\"ranks\"", "is not one of its choices"),
    ];
    for (rest, place, message) in cases {
        let (found, stands) = problem(rest, equal());
        assert!(found.contains(message), "{rest}: {found}");
        assert_eq!(stands, place, "{rest}: {found}");
    }
}

#[test]
fn a_trend_that_is_not_shown_is_not_called_flat() {
    let mut flat =
        study(&[("a", &[1.0, 2.0, 3.0]), ("b", &[1.1, 2.0, 3.1]), ("c", &[1.2, 2.0, 2.9])], Variances::Equal);
    flat.levels.scores = Some(vec![0.0, 1.0, 2.0]);
    let outcome = settled("", flat);
    assert!(
        outcome
            .answer
            .headline
            .starts_with("A trend of count over the scores of drug is not shown up to degree 2")
    );
    for word in ["flat", "no effect", "are equal"] {
        assert!(!shown(&outcome).contains(word));
    }
}

#[test]
fn a_line_that_rises_but_does_not_fit_is_cautioned() {
    let mut bent = study(&[("a", &[0.0, 1.0]), ("b", &[9.0, 10.0]), ("c", &[10.0, 11.0])], Variances::Equal);
    bent.levels.scores = Some(vec![0.0, 1.0, 2.0]);
    let outcome = settled("degree = 1", bent);
    assert!(
        outcome.answer.cautions.iter().any(|caution| caution.contains("but not in a straight line")),
        "{:?}",
        outcome.answer.cautions
    );
}

#[test]
fn a_curve_that_must_pass_through_every_mean_says_so() {
    let figure = |outcome: &Outcome| {
        let found = outcome.answer.blocks.iter().find_map(|block| match block {
            Block::Figure(figure) => Some(figure.svg().to_string()),
            _ => None,
        });
        found.expect("a figure")
    };
    // Values with hardly any spread inside the groups: all three degrees are shown, the curve is a cubic through four means.
    let close = |mean: f64| [mean - 0.01, mean, mean + 0.01];
    let groups = [("a", close(1.0)), ("b", close(4.0)), ("c", close(2.0)), ("d", close(7.0))];
    let mut exact = study(&groups.each_ref().map(|(level, values)| (*level, &values[..])), Variances::Equal);
    exact.levels.scores = Some(vec![0.0, 1.0, 2.0, 4.0]);
    let text = figure(&settled("", exact.clone())).replace('\n', " ");
    assert!(text.contains("passes"), "{text}");
    assert!(!figure(&settled("degree = 1\n", exact)).contains("passes"));
}

#[test]
fn ranks_against_the_order_need_no_scores_and_are_counted_where_they_can_be() {
    let mut without = doses(Variances::Equal);
    without.levels.scores = None;
    let outcome = settled("method = \"ordered ranks\"", without);
    // J, its expectation, variance and z: methods of Jonckheere (1954) with ties, worked independently for this project.
    near(&outcome.results["J"], 137.0);
    near(&outcome.results["mean"], 74.5);
    near(&outcome.results["variance"], 217.439620);
    near(&outcome.results["z"], 4.238485);
    assert!(
        outcome.answer.headline.starts_with("count rises with the order of drug (Jonckheere-Terpstra, p <"),
        "{}",
        outcome.answer.headline
    );
    let text = super::given::shown(&outcome);
    for part in ["the order \"none\", \"10 mg\"", "two-sided", "Mean, monotone", "Place in the order of drug"]
    {
        assert!(text.contains(part), "{part} in {text}");
    }
    let falling = settled("method = \"ordered ranks\"\ndirection = \"falling\"", doses(Variances::Equal));
    assert!(falling.answer.headline.starts_with("A trend of count with the order of drug is not shown"));
    assert!(falling.results["p"].as_f64().unwrap() > 0.999);
}

#[test]
fn rearranged_p_values_of_ranks_have_their_seed_and_error() {
    let ask = "method = \"ordered ranks\"\np_values = \"rearranged\"\nrepeats = 2000\nseed = 5";
    let outcome = settled(ask, doses(Variances::Equal));
    assert!(super::given::shown(&outcome).contains("2000 random rearrangements from seed 5"));
    let p = outcome.results["p"].as_f64().unwrap();
    assert!((1.0 / 2001.0..0.01).contains(&p) && outcome.results["exact"] == false, "{p}");
    assert_eq!(settled(ask, doses(Variances::Equal)).results, outcome.results);
}

#[test]
fn ranks_of_a_summary_and_of_nothing_but_ties_are_refused() {
    let (message, _) =
        problem("method = \"ordered ranks\"", super::given::summarised(doses(Variances::Equal)));
    assert_eq!(
        message,
        "Ranks need every single value, and the study has only sizes, means and standard deviations. Choose method = \"polynomial\"."
    );
    let tied = super::given::study(&[("low", &[1.0, 1.0]), ("high", &[1.0, 1.0])], Variances::Equal);
    assert!(
        problem("method = \"ordered ranks\"", tied)
            .0
            .starts_with("The order of the levels (\"low\", \"high\") cannot be tested by ranks: ")
    );
}

#[test]
fn an_order_that_nobody_confirmed_is_asked_about() {
    let mut study = doses(Variances::Equal);
    study.levels.order_of_appearance = true;
    for method in ["polynomial", "ordered ranks"] {
        let outcome = settled(&format!("method = \"{method}\""), study.clone());
        assert!(
            outcome
                .answer
                .cautions
                .iter()
                .any(|caution| caution.contains("confirm it by writing levels in the study")),
            "{method}"
        );
    }
}

#[test]
fn three_scales_of_dose_are_one_family() {
    let outcome = settled("method = \"dose scales\"", doses(Variances::Equal));
    let rows = &outcome.results["rows"];
    // t and joint p: worked independently for this project (tests/reference/dose_tests.rs has the digits).
    near(&rows[0]["statistic"], 6.774243);
    near(&rows[1]["statistic"], 7.109834);
    near(&rows[2]["statistic"], 7.107742);
    assert!((rows[1]["p_adjusted"].as_f64().unwrap() - 4.0712e-6).abs() < 6e-11);
    near(&rows[2]["scores"]["none"], 1.753279);
    assert_eq!(outcome.results["strongest"], "ranks of the scores");
    let text = shown(&outcome);
    assert!(text.contains("A score of 0 has no logarithm: it stands at 1.7533 on that scale"), "{text}");
    assert!(
        outcome.answer.headline.contains("rising: most clearly in the ranks of the scores"),
        "{}",
        outcome.answer.headline
    );
    let mut below = doses(Variances::Equal);
    below.levels.scores = Some(vec![-1.0, 10.0, 30.0, 100.0]);
    assert!(
        problem("method = \"dose scales\"", below)
            .0
            .contains("The score -1 is negative and has no logarithm")
    );
}

#[test]
fn williams_finds_the_lowest_dose_that_differs_for_a_direction_that_is_said() {
    let outcome = settled("method = \"step contrasts\"\ndirection = \"rising\"", doses(Variances::Equal));
    // The means rise, so nothing is pooled and t is the plain one of each dose.
    let rows = &outcome.results["rows"];
    near(&rows[0]["statistic"], 2.088932);
    near(&rows[2]["statistic"], 6.858571);
    assert_eq!(outcome.results["lowest_effective"], "10 mg");
    assert!(
        outcome
            .answer
            .headline
            .starts_with("The lowest level of drug at which count differs from none is 10 mg (Williams"),
        "{}",
        outcome.answer.headline
    );
    let falling = settled("method = \"step contrasts\"\ndirection = \"falling\"", doses(Variances::Equal));
    assert!(
        falling.answer.headline.starts_with("No level of drug is shown to differ from none"),
        "{}",
        falling.answer.headline
    );
    assert!(
        problem("method = \"step contrasts\"", doses(Variances::Equal))
            .0
            .contains("Set direction = \"rising\" or \"falling\".")
    );
    let unequal = problem("method = \"step contrasts\"\ndirection = \"rising\"", doses(Variances::Unequal)).0;
    assert!(unequal.contains("the study says unequal variances"), "{unequal}");
    let mut last = doses(Variances::Equal);
    last.levels.control = Some(3);
    assert!(
        problem("method = \"step contrasts\"\ndirection = \"rising\"", last)
            .0
            .contains("Put the control first in the study's levels.")
    );
}

#[test]
fn scales_and_steps_have_plans() {
    for rest in [
        "method = \"dose scales\"",
        "method = \"step contrasts\"\ndirection = \"rising\"",
        "method = \"ordered ranks\"",
    ] {
        let plan = Study { observed: Observed::Plan, account: Vec::new(), ..doses(Variances::Equal) };
        let outcome = evaluated(&ask(rest), plan);
        assert!(
            outcome.waiting && outcome.answer.headline.starts_with("Planned: "),
            "{rest}: {}",
            outcome.answer.headline
        );
    }
}
