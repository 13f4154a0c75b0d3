//! Comparisons cells beyond the plain ones: claims with margins, ranks, rearrangements, ordered hypotheses, letters, effect sizes,
//! decisions set beside, and the mistakes that can be made with them.
//!
//! The numbers are those of Dunnett's (1955) blood counts, worked independently for this project (see
//! `tests/reference/comparisons.rs`).

use super::given::{ask, blood_counts, controlled, evaluated, near, numbers, settled, shown, summarised};
use levelwise::study::{Better, Study, Variances};
use serde_json::Value;

/// The messages of all diagnostics, in order.
fn problems(rest: &str, study: Study) -> Vec<String> {
    evaluated(&ask(rest), study).diagnostics.into_iter().map(|problem| problem.message).collect()
}

#[test]
fn equivalence_is_two_one_sided_tests_with_the_interval_that_goes_with_them() {
    let one = "family = \"contrasts\"\ncontrasts = { a = \"A - control\" }\nadjust = \"none\"\n";
    let outcome =
        settled(&format!("{one}claim = \"equivalence\"\nmargin = [2.5]"), blood_counts(Variances::Equal));
    near(&numbers(&outcome, "p"), &[0.0156004], 5e-8);
    near(&numbers(&outcome, "t"), &[-2.439245], 5e-7);
    near(&numbers(&outcome, "lower"), &[-0.701743], 5e-7);
    near(&numbers(&outcome, "upper"), &[2.001743], 5e-7);
    let text = shown(&outcome);
    assert!(
        outcome.answer.headline.contains("equivalence within the margins is shown"),
        "{}",
        outcome.answer.headline
    );
    for part in
        ["tests of equivalence, margins -2.5 and 2.5", "90\u{a0}% interval", "equivalent within the margins"]
    {
        assert!(text.contains(part) || text.contains(&part.replace('-', "\u{2212}")), "{part} in {text}");
    }
    assert!(
        outcome
            .answer
            .cautions
            .iter()
            .any(|caution| caution.contains("fixed, with its reasons, before the data were seen"))
    );
    // Two unequal margins: the test against the nearer one decides.
    let uneven = settled(
        &format!("{one}claim = \"equivalence\"\nmargin = [-2.5, 0.7]"),
        blood_counts(Variances::Equal),
    );
    assert!(
        numbers(&uneven, "p")[0] > 0.4 && uneven.answer.headline.contains("is not shown"),
        "{}",
        uneven.answer.headline
    );
}

#[test]
fn bounds_of_an_ordered_procedure_agree_with_it() {
    let text = "family = \"each against control\"\nadjust = \"fixed sequence\"\nsides = \"greater\"\norder = [\"B - control\", \"A - control\"]";
    let outcome = settled(text, controlled(Variances::Equal));
    assert_eq!(outcome.results["intervals_disagree"], serde_json::json!([]));
}

#[test]
fn non_inferiority_takes_its_direction_from_the_study_and_its_bound_decides() {
    let mut study = controlled(Variances::Equal);
    study.better = Some(Better::Higher);
    let text = "family = \"each against control\"\nclaim = \"non-inferiority\"\nmargin = [1]";
    let outcome = settled(text, study.clone());
    assert_eq!(outcome.results["adjust"], "Dunnett");
    assert_eq!(outcome.results["sides"], "greater");
    for row in outcome.results["rows"].as_array().unwrap() {
        assert_eq!(row["rejected"].as_bool().unwrap(), row["lower"].as_f64().unwrap() > -1.0, "{row}");
        assert_eq!(row["upper"], "inf");
    }
    study.better = Some(Better::Lower);
    let lower = settled(text, study.clone());
    assert_eq!(lower.results["sides"], "less");
    study.better = None;
    assert!(
        problems(text, study)[0]
            .starts_with("Non-inferiority needs to know which direction is the good one.")
    );
}

#[test]
fn a_margin_of_the_wrong_sign_or_number_is_said() {
    let of = |rest: &str| problems(rest, blood_counts(Variances::Equal)).join(" | ");
    let cases = [
        (
            "claim = \"non-inferiority\"\nsides = \"greater\"\nmargin = [-1]",
            "The margin is -1; it is a size and must be above 0.",
        ),
        (
            "claim = \"non-inferiority\"\nsides = \"greater\"\nmargin = [1, 2]",
            "has one margin, and 2 are written",
        ),
        ("claim = \"equivalence\"\nmargin = [0]", "The margin is 0; it is a size and must be above 0."),
        (
            "claim = \"equivalence\"\nmargin = [0.5, 1]",
            "The margins are 0.5 and 1; the first must be below 0 and the second above.",
        ),
        ("claim = \"equivalence\"", "This claim needs a margin"),
        (
            "claim = \"equivalence\"\nmargin = [1]\nsides = \"less\"",
            "Equivalence looks to both sides by itself.",
        ),
        ("margin = [1]", "A margin is written, but the claim is a difference."),
        (
            "claim = \"equivalence\"\nmargin = [1]\nadjust = \"Tukey\"",
            "tests for differences, and the claim is equivalence",
        ),
        (
            "claim = \"equivalence\"\nmargin = [1]\nbasis = \"ranks\"",
            "A margin is a difference of means, and the basis is \"ranks\".",
        ),
    ];
    for (rest, expected) in cases {
        assert!(of(rest).contains(expected), "{rest}: {}", of(rest));
    }
}

#[test]
fn ranks_of_all_pairs_are_steel_and_dwass_and_dunns_with_joint_ranks() {
    let outcome = settled("basis = \"ranks\"", blood_counts(Variances::Unequal));
    assert_eq!(outcome.results["adjust"], "Steel-Dwass");
    near(&numbers(&outcome, "statistic"), &[1.066004, 2.373464, 1.714643], 5e-7);
    near(&numbers(&outcome, "p_adjusted"), &[0.535247, 0.0463509, 0.199646], 5e-7);
    near(&numbers(&outcome, "superiority")[1..2], &[0.933333], 5e-7);
    let joint = settled(
        "basis = \"ranks\"\nranking = \"joint\"\nadjust = \"none\"",
        blood_counts(Variances::Unequal),
    );
    near(&numbers(&joint, "t"), &[0.866025, 2.584921, 1.500000], 5e-7);
    near(&numbers(&joint, "p"), &[0.386476, 0.00974012, 0.133614], 5e-7);
    let steel =
        settled("family = \"each against control\"\nbasis = \"ranks\"", controlled(Variances::Unequal));
    assert_eq!(steel.results["adjust"], "Steel");
    near(&numbers(&steel, "p_adjusted"), &[0.472416, 0.0338711], 5e-7);
    let text = shown(&steel);
    for part in [
        "rank sums of the two levels compared",
        "Shift",
        "superiority",
        "With groups smaller than 6 it misses differences",
    ] {
        assert!(text.contains(part), "{part} in {text}");
    }
}

#[test]
fn small_untied_groups_are_counted_and_their_shift_has_the_interval_of_the_same_test() {
    let outcome = settled("basis = \"ranks\"\nadjust = \"Bonferroni\"", blood_counts(Variances::Unequal));
    for row in outcome.results["rows"].as_array().unwrap() {
        assert_eq!(row["p_counted"], true);
        let bound = |key: &str| {
            row[key].as_f64().unwrap_or(if key == "lower" { f64::NEG_INFINITY } else { f64::INFINITY })
        };
        assert_eq!(row["rejected"].as_bool().unwrap(), bound("lower") > 0.0 || bound("upper") < 0.0, "{row}");
    }
    // 12.80 9.68 12.16 9.20 10.55 against 7.40 8.50 7.20 8.24 9.84 8.32: only 9.68 and 9.20 lie below 9.84.
    let expected = 2.0 * 4.0 / 462.0;
    near(&numbers(&outcome, "p")[1..2], &[expected], 1e-12);
    assert!(shown(&outcome).contains("The raw p-values are counted exactly."));
}

#[test]
fn groups_too_small_to_be_significant_at_all_are_said() {
    let tiny = super::given::study(
        &[("a", &[1.0, 2.0, 3.0]), ("b", &[4.0, 5.0, 6.5]), ("c", &[7.0, 8.0, 9.0])],
        Variances::Unequal,
    );
    let outcome = settled("basis = \"ranks\"\nadjust = \"Holm\"", tiny);
    let expected = "3 comparisons have too few values to be significant whatever they are: the smallest p-value that the sizes of b \u{2212} a allow is 0.100, and its level is 0.0167.";
    assert!(
        outcome.answer.cautions.iter().any(|caution| caution == expected),
        "{:?}",
        outcome.answer.cautions
    );
}

#[test]
fn groups_of_one_row_and_without_variation_are_named_where_a_variance_of_their_own_is_needed() {
    let study = |values: &[f64], variances| {
        super::given::study(&[("a", &[1.0, 2.0, 3.0]), ("b", values), ("c", &[7.0, 8.0, 9.5])], variances)
    };
    let of = |rest: &str, values: &[f64], variances| problems(rest, study(values, variances)).join(" | ");
    for adjust in ["Games-Howell", "Dunnett T3", "Holm", "max-t"] {
        let rest = format!("adjust = \"{adjust}\"");
        assert!(of(&rest, &[5.0], Variances::Unequal).contains("level \"b\" has 1 observation"));
        assert!(of(&rest, &[5.0, 5.0], Variances::Unequal).contains("level \"b\" has no variation"));
        let pooled = if adjust.contains("T3") || adjust.contains("Howell") {
            "adjust = \"Tukey\""
        } else {
            rest.as_str()
        };
        assert_eq!(of(pooled, &[5.0], Variances::Equal), "");
        let flat = settled(pooled, study(&[5.0, 5.0], Variances::Equal));
        assert!(
            flat.answer
                .cautions
                .iter()
                .any(|caution| caution.contains("\"b\" (n = 2, all values equal) has no spread of its own")),
            "{:?}",
            flat.answer.cautions
        );
    }
    // Ranks need no variance of any level.
    assert_eq!(of("basis = \"ranks\"", &[5.0], Variances::Unequal), "");
    let tied = super::given::study(
        &[("a", &[1.0, 1.0]), ("b", &[1.0, 1.0]), ("c", &[2.0, 3.0])],
        Variances::Unequal,
    );
    assert!(
        problems("basis = \"ranks\"", tied)[0]
            .contains("comparison \"b - a\" cannot be ranked: all values of groups 1 and 2 are equal")
    );
}

#[test]
fn a_family_of_one_is_one_test_under_every_procedure_that_suits() {
    let one = "family = \"contrasts\"\ncontrasts = { a = \"A - control\" }\n";
    for adjust in [
        "none",
        "Bonferroni",
        "Sidak",
        "Holm",
        "Hommel",
        "max-t",
        "step-down max-t",
        "fixed sequence",
        "graph",
        "fallback",
    ] {
        let outcome = settled(&format!("{one}adjust = \"{adjust}\""), blood_counts(Variances::Equal));
        near(&numbers(&outcome, "p_adjusted"), &[0.408217], 5e-7);
    }
}

#[test]
fn contrasts_that_depend_on_each_other_are_decided_all_the_same_and_said() {
    let twice = "family = \"contrasts\"\ncontrasts = { a = \"A - control\", b = \"2*A - 2*control\", c = \"control - A\" }\n";
    for adjust in ["max-t", "step-down max-t", "Holm"] {
        let outcome = settled(&format!("{twice}adjust = \"{adjust}\""), blood_counts(Variances::Equal));
        assert!(
            shown(&outcome).contains("carry 1 independent questions")
                || shown(&outcome).contains("carry 1 independent question"),
            "{}",
            shown(&outcome)
        );
        if adjust != "Holm" {
            // One question asked three times is one test.
            near(&numbers(&outcome, "p_adjusted"), &[0.408217; 3], 5e-6);
        }
    }
}

#[test]
fn rearrangements_are_counted_or_drawn_from_their_seed() {
    let outcome = settled("basis = \"permutation\"", blood_counts(Variances::Equal));
    assert_eq!(outcome.results["adjust"], "step-down max-t");
    assert_eq!(outcome.results["rearranged"]["counted"], true);
    assert!(shown(&outcome).contains("were counted; the p-values are exact"), "{}", shown(&outcome));
    assert!(
        numbers(&outcome, "p_adjusted")
            .iter()
            .zip(numbers(&outcome, "p"))
            .all(|(adjusted, raw)| *adjusted >= raw)
    );
    let holm = settled("basis = \"permutation\"\nadjust = \"Holm\"", blood_counts(Variances::Equal));
    near(&numbers(&holm, "p"), &numbers(&outcome, "p"), 1e-15);
    let values = |shift: f64| (0..14).map(|i| libm::sin(f64::from(i) * 7.3) + shift).collect::<Vec<f64>>();
    let (a, b, c) = (values(0.0), values(0.3), values(0.9));
    let many = || super::given::study(&[("a", &a), ("b", &b), ("c", &c)], Variances::Equal);
    let drawn = settled("basis = \"permutation\"\nrepeats = 2000\nseed = 7", many());
    assert!(shown(&drawn).contains("2000 drawn from seed 7"), "{}", shown(&drawn));
    let again = settled("basis = \"permutation\"\nrepeats = 2000\nseed = 7", many());
    assert_eq!(drawn.results, again.results);
    let other = settled("basis = \"permutation\"\nrepeats = 2000\nseed = 8", many());
    assert_ne!(drawn.results["rows"], other.results["rows"]);
}

#[test]
fn more_partitions_than_can_be_gone_through_are_refused_with_holm() {
    let names: Vec<String> = (0..9).map(|i| format!("g{i}")).collect();
    let values: Vec<Vec<f64>> =
        (0..9).map(|i| vec![f64::from(i), f64::from(i) + 1.5, f64::from(i) + 2.0]).collect();
    let groups: Vec<(&str, &[f64])> =
        names.iter().zip(&values).map(|(name, values)| (name.as_str(), values.as_slice())).collect();
    let found = problems("basis = \"permutation\"", super::given::study(&groups, Variances::Equal));
    assert!(
        found[0].contains(
            "Holm's adjustment of the permutation p-value of each comparison by itself holds for any family"
        ),
        "{found:?}"
    );
    let holm = settled(
        "basis = \"permutation\"\nadjust = \"Holm\"\nrepeats = 200",
        super::given::study(&groups, Variances::Equal),
    );
    assert_eq!(holm.results["rows"].as_array().unwrap().len(), 36);
}

#[test]
fn stepping_down_through_very_many_pairs_is_refused_with_what_to_choose() {
    let names: Vec<String> = (0..16).map(|i| format!("g{i}")).collect();
    let values: Vec<Vec<f64>> =
        (0..16).map(|i| vec![f64::from(i), f64::from(i) + 1.5, f64::from(i) + 2.0]).collect();
    let groups: Vec<(&str, &[f64])> =
        names.iter().zip(&values).map(|(name, values)| (name.as_str(), values.as_slice())).collect();
    let study = || super::given::study(&groups, Variances::Equal);
    let found = problems("adjust = \"step-down max-t\"", study());
    assert!(found[0].contains("120 comparisons would take too long: at most 105 are gone through. Choose max-t, which takes one step, or Holm."), "{found:?}");
    let single = settled("adjust = \"max-t\"", study());
    assert_eq!(single.results["rows"].as_array().unwrap().len(), 120);
    // Against a control every step is quick.
    let mut controlled = study();
    controlled.levels.control = Some(0);
    settled("family = \"each against control\"\nadjust = \"step-down max-t\"", controlled);
}

#[test]
fn two_contrasts_whose_names_differ_by_spaces_alone_are_said() {
    let twice = "family = \"contrasts\"\ncontrasts = { a = \"A - control\", \"a \" = \"B - control\" }";
    assert_eq!(
        problems(twice, blood_counts(Variances::Equal)),
        [
            "contrasts: two have the name \"a\" once the spaces around it are left out. Give each a name of its own."
        ]
    );
    let given = "family = \"given p-values\"\ngiven = { a = 0.1, \" a\" = 0.2 }";
    assert!(problems(given, blood_counts(Variances::Equal))[0].starts_with("given: two have the name \"a\""));
}

#[test]
fn ranks_and_rearrangements_of_a_summary_are_refused_with_what_suits() {
    for basis in ["ranks", "permutation"] {
        let found = problems(&format!("basis = \"{basis}\""), summarised(blood_counts(Variances::Equal)));
        assert_eq!(found.len(), 1);
        assert!(
            found[0].starts_with(&format!(
                "The basis \"{basis}\" needs every single value, and the study has only sizes, means and standard deviations. Choose basis = \"means\"; suitable there: \"Tukey\""
            )),
            "{found:?}"
        );
    }
}

#[test]
fn levels_that_share_a_letter_are_exactly_those_not_shown_to_differ() {
    let outcome = settled("", blood_counts(Variances::Equal));
    let letters = &outcome.results["letters"];
    // Only B and the control differ.
    assert_eq!(
        (&letters["B"], &letters["A"], &letters["control"]),
        (&Value::from("a"), &Value::from("ab"), &Value::from("b"))
    );
    let text = shown(&outcome);
    assert!(text.contains("Sharing a letter is not evidence of equality."), "{text}");
    // Only all pairs have letters, and only where both directions count.
    let control = settled("family = \"each against control\"", controlled(Variances::Equal));
    assert!(control.results.get("letters").is_none());
    let sided = settled("adjust = \"Holm\"\nsides = \"greater\"", blood_counts(Variances::Equal));
    assert!(sided.results.get("letters").is_none());
}

#[test]
fn the_headline_says_which_decisions_change_under_the_procedures_beside_it() {
    let outcome = settled("also = [\"none\", \"Scheffe\"]", blood_counts(Variances::Equal));
    assert!(
        outcome.answer.headline.ends_with("; 1 decision changes under no adjustment: B \u{2212} A"),
        "{}",
        outcome.answer.headline
    );
    let same = settled("also = [\"Holm\"]", blood_counts(Variances::Equal));
    assert!(same.answer.headline.ends_with("; Holm decides the same"), "{}", same.answer.headline);
    let text = shown(&outcome);
    assert!(text.contains("Tukey decides, as chosen") && text.contains("Decided otherwise by"), "{text}");
}

#[test]
fn every_effect_size_that_fits_stands_in_its_row() {
    let outcome = settled("family = \"each against control\"", controlled(Variances::Equal));
    near(&numbers(&outcome, "d"), &[0.553212, 2.236678], 5e-7);
    near(&numbers(&outcome, "g"), &[0.517774, 2.093401], 5e-7);
    near(&numbers(&outcome, "delta")[1..2], &[2.794922], 5e-7);
    near(&numbers(&outcome, "ratio"), &[8.9 / 8.25, 10.878 / 8.25], 1e-12);
    assert!(outcome.results["rows"][1]["ratio_lower"].as_f64().unwrap() > 1.0);
    let pair = settled(
        "family = \"each against control\"\nstandardise = \"levels compared\"",
        controlled(Variances::Equal),
    );
    near(&numbers(&pair, "d")[1..2], &[2.098362], 5e-7);
    assert!(shown(&pair).contains("the SD pooled over the levels compared"));
}

#[test]
fn what_the_design_could_detect_is_a_property_of_the_design() {
    let outcome = settled("", blood_counts(Variances::Equal));
    let detectable = numbers(&outcome, "detectable");
    let se = numbers(&outcome, "se");
    // One critical value and one df: the same number of standard errors in every row.
    near(&[detectable[0] / se[0], detectable[1] / se[1]], &[detectable[2] / se[2]; 2], 1e-9);
    assert!(shown(&outcome).contains(
        "a power computed from the observed difference would only repeat the p-value and is not given"
    ));
}

#[test]
fn ordered_hypotheses_follow_their_order_weights_and_transitions() {
    let control = "family = \"each against control\"\n";
    let study = || controlled(Variances::Equal);
    // Raw p-values: A .408217, B .00307063.
    let listed = settled(&format!("{control}adjust = \"fixed sequence\""), study());
    near(&numbers(&listed, "p_adjusted"), &[0.408217, 0.408217], 5e-7);
    let turned = settled(
        &format!("{control}adjust = \"fixed sequence\"\norder = [\"B - control\", \"A \u{2212} control\"]"),
        study(),
    );
    near(&numbers(&turned, "p_adjusted"), &[0.408217, 0.00307063], 5e-7);
    let fallback = settled(
        &format!(
            "{control}adjust = \"fallback\"\nweights = {{ \"A - control\" = 0.2, \"B - control\" = 0.8 }}"
        ),
        study(),
    );
    near(&numbers(&fallback, "p_adjusted"), &[1.0, 0.00307063 / 0.8], 5e-7);
    let graph = settled(
        &format!(
            "{control}adjust = \"graph\"\nweights = {{ \"B - control\" = 1 }}\ntransitions = [{{ from = \"B - control\", to = \"A - control\", share = 1 }}]"
        ),
        study(),
    );
    near(&numbers(&graph, "p_adjusted"), &[0.408217, 0.00307063], 5e-7);
    assert_eq!(graph.results["path"]["steps"][0]["rejected"], "B - control");
    // Without weights and transitions the graph is Holm's.
    let plain = settled(&format!("{control}adjust = \"graph\""), study());
    let holm = settled(&format!("{control}adjust = \"Holm\""), study());
    near(&numbers(&plain, "p_adjusted"), &numbers(&holm, "p_adjusted"), 1e-15);
    let given = evaluated(
        "kind = \"comparisons\"\nfamily = \"given p-values\"\ngiven = { first = 0.03, second = 0.01 }\nadjust = \"fixed sequence\"",
        study(),
    );
    near(&numbers(&given, "p_adjusted"), &[0.03, 0.03], 1e-15);
}

#[test]
fn a_graph_that_cannot_be_is_said_at_its_weights_or_transitions() {
    let of = |rest: &str| {
        problems(
            &format!("family = \"each against control\"\nadjust = \"graph\"\n{rest}"),
            controlled(Variances::Equal),
        )
        .join(" | ")
    };
    let step =
        |from: &str, to: &str, share: f64| format!("{{ from = \"{from}\", to = \"{to}\", share = {share} }}");
    let (a, b) = ("A - control", "B - control");
    let weights = |one: f64, two: f64| format!("weights = {{ \"{a}\" = {one}, \"{b}\" = {two} }}\n");
    let cases = [
        (
            weights(0.6, 0.6),
            "weights: they sum to 1.2; together they may be at most 1, the whole error rate.",
        ),
        (weights(-0.1, 0.6), "weights: \"A - control\" has -0.1; a share of the error rate is from 0 to 1."),
        (
            "weights = { \"C - control\" = 1 }".to_string(),
            "weights: \"C - control\" is no comparison of this family; they are \"A - control\" and \"B - control\".",
        ),
        (format!("transitions = [{}]", step(a, b, 1.0)), "Transitions are written, but no weights."),
        (
            format!("{}transitions = [{}, {}]", weights(0.5, 0.5), step(a, b, 0.7), step(a, b, 0.7)),
            "transitions: from \"A - control\" to \"B - control\" goes 1.4; a share is from 0 to 1.",
        ),
        (
            format!("{}transitions = [{}]", weights(0.5, 0.5), step(a, a, 0.5)),
            "transitions: \"A - control\" passes a share to itself.",
        ),
        (
            format!("{}transitions = [{}]", weights(0.5, 0.5), step(a, "no one", 0.5)),
            "transitions: \"no one\" is no comparison of this family",
        ),
        (
            "order = [\"A - control\"]".to_string(),
            "order: 1 of the 2 comparisons are named; \"B - control\" still needs a place.",
        ),
        (
            "order = [\"A - control\", \"A - control\"]".to_string(),
            "order: \"A - control\" stands there twice.",
        ),
    ];
    for (rest, expected) in cases {
        assert!(of(&rest).contains(expected), "{rest}: {}", of(&rest));
    }
    // A third comparison, so that shares of one can sum to more than 1.
    let three = "family = \"all pairs\"\nadjust = \"graph\"\nweights = { \"A - control\" = 1 }\ntransitions = [{ from = \"A - control\", to = \"B - control\", share = 0.7 }, { from = \"A - control\", to = \"B - A\", share = 0.7 }]";
    assert_eq!(
        problems(three, blood_counts(Variances::Equal)),
        [
            "transitions: \"A - control\" passes on 1.4 of its share; from one comparison they may sum to at most 1."
        ]
    );
}

#[test]
fn contrasts_show_how_they_split_the_sum_of_squares_for_these_sizes() {
    let of = |contrasts: &str| {
        settled(
            &format!("family = \"contrasts\"\ncontrasts = {{ {contrasts} }}"),
            blood_counts(Variances::Equal),
        )
    };
    let overlapping = of("treated = \"(A + B)/2 - control\", kind = \"B - A\"");
    let text = shown(&overlapping);
    assert!(text.contains("Not orthogonal for these group sizes: treated with kind"), "{text}");
    let orthogonal = of("treated = \"4/9*A + 5/9*B - control\", kind = \"B - A\"");
    let parts = &orthogonal.results["partition"]["parts"];
    near(&[parts[0]["ss"].as_f64().unwrap(), parts[1]["ss"].as_f64().unwrap()], &[11.011004, 8.694409], 5e-7);
    assert_eq!(orthogonal.results["partition"]["complete"], true);
    assert!(shown(&orthogonal).contains("their sums of squares add up to that between the groups"));
    let unequal = settled("family = \"neighbours\"", blood_counts(Variances::Unequal));
    assert!(shown(&unequal).contains("Coefficients of the contrasts"), "{}", shown(&unequal));
    let three = of("a = \"A - control\", b = \"B - control\", c = \"B - A\"");
    assert!(
        three.answer.cautions.iter().any(|caution| caution
            .starts_with("3 contrasts are more than the 2 degrees of freedom between 3 levels")),
        "{:?}",
        three.answer.cautions
    );
}

#[test]
fn ready_sets_of_earlier_levels_and_polynomials_are_families_too() {
    let earlier = settled("family = \"each against the earlier\"", blood_counts(Variances::Equal));
    assert_eq!(earlier.results["rows"].as_array().unwrap().len(), 2);
    assert!(
        shown(&earlier).contains("B \u{2212} earlier") || shown(&earlier).contains("B minus mean of"),
        "{}",
        shown(&earlier)
    );
    let polynomial = settled("family = \"polynomial\"", blood_counts(Variances::Equal));
    let names: Vec<&str> = polynomial.results["rows"]
        .as_array()
        .unwrap()
        .iter()
        .map(|row| row["name"].as_str().unwrap())
        .collect();
    assert_eq!(names, ["linear", "quadratic"]);
}

#[test]
fn procedures_for_reading_older_work_carry_what_they_do_not_control() {
    let four = || {
        super::given::study(
            &[
                ("a", &[1.0, 2.0, 3.0]),
                ("b", &[2.0, 3.0, 4.5]),
                ("c", &[4.0, 5.0, 6.0]),
                ("d", &[5.0, 6.5, 7.0]),
            ],
            Variances::Equal,
        )
    };
    let keuls = settled("adjust = \"Newman-Keuls\"", four());
    assert!(
        keuls.answer.cautions.iter().any(|caution| caution.contains(
            "with 2 well separated pairs of equal levels the chance of a false finding approaches 9.75\u{a0}%"
        )),
        "{:?}",
        keuls.answer.cautions
    );
    let least = settled("adjust = \"least significant difference\"", four());
    assert!(
        least
            .answer
            .cautions
            .iter()
            .any(|caution| caution.contains("does not control the family-wise error strongly"))
    );
    // Three alike behind an open gate: the range of three at the t test's critical value, 12.2 % in large samples.
    assert!(
        least
            .answer
            .cautions
            .iter()
            .any(|caution| caution.contains("among the other 3 is about 12.2\u{a0}%")),
        "{:?}",
        least.answer.cautions
    );
    assert!(shown(&least).contains("only while all levels are alike"));
    let screening = settled("adjust = \"Benjamini-Hochberg\"", four());
    assert!(screening.answer.cautions.iter().any(|caution| caution.contains("exploratory screening")));
}
