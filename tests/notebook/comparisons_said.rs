//! How a comparisons cell reads: its sentence in every combination, what its figures are called, its notes and its plan.
//!
//! The blood counts are those of `given.rs`.

use super::given::{blood_counts, evaluated, shown, study};
use levelwise::answer::{Block, Figure};
use levelwise::notebook::engine::Engine;
use levelwise::notebook::outcome::Outcome;
use levelwise::notebook::sentence;
use levelwise::study::{Study, Variances};

fn ask(rest: &str) -> String {
    format!("kind = \"comparisons\"\nstudy = \"blood\"\n{rest}")
}

fn controlled() -> Study {
    let mut study = blood_counts(Variances::Equal);
    study.levels.control = Some(0);
    study
}

fn first_figure(outcome: &Outcome) -> &Figure {
    let figure = |block: &'_ Block| matches!(block, Block::Figure(_));
    match outcome.answer.blocks.iter().find(|block| figure(block)) {
        Some(Block::Figure(figure)) => figure,
        _ => panic!("no figure"),
    }
}

/// The sentence of a comparisons cell that reads from a small study.
fn sentence_of(variances: &str, rest: &str) -> String {
    let table = "g,y\\na,1\\na,2\\na,4\\nb,3\\nb,5\\nb,6\\nc,7\\nc,9\\nc,8";
    let text = format!(
        "levelwise = 1\n\n[[cell]]\nkind = \"data\"\nname = \"d\"\ntable = \"{table}\"\n\n[[cell]]\nkind = \"study\"\nname = \"s\"\ndata = \"d\"\noutcome = \"y\"\ngroups = \"g\"\nlevels = [\"a\", \"b\", \"c\"]\ncontrol = \"a\"\nvariances = \"{variances}\"\n\n[[cell]]\nkind = \"comparisons\"\nstudy = \"s\"\n{rest}\n"
    );
    let mut engine = Engine::new();
    engine.open(&text).expect("a notebook");
    engine.settle();
    let id = *engine.order().last().expect("three cells");
    sentence::in_words(&engine.cell(id).expect("the cell").sentence)
}

#[test]
fn the_sentence_says_what_is_in_force_where_nothing_is_chosen() {
    let cases = [
        (
            "equal",
            "",
            "Compare all pairs of s by means for a difference, keeping the error at 0.05 with Tukey and looking in either direction; beside it: nothing. Effects in SDs of all levels.",
        ),
        (
            "unequal",
            "family = \"each against control\"",
            "Compare each against the control of s by means for a difference, keeping the error at 0.05 with Holm and looking in either direction; beside it: nothing. Effects in SDs of the levels compared.",
        ),
        (
            "equal",
            "basis = \"ranks\"",
            "Compare all pairs of s by ranks, ranking each pair by itself, keeping the error at 0.05 with Steel-Dwass and looking in either direction; beside it: nothing.",
        ),
        (
            "equal",
            "family = \"polynomial\"\nbasis = \"ranks\"",
            "Compare polynomial trends of s by ranks, ranking all levels together, keeping the error at 0.05 with Holm and looking in either direction; beside it: nothing.",
        ),
        // Equivalence looks to both sides by itself: there is nothing to choose.
        (
            "equal",
            "family = \"neighbours\"\nclaim = \"equivalence\"\nmargin = [2]",
            "Compare neighbours of s by means for equivalence within margins of 2, keeping the error at 0.05 with Holm; beside it: nothing. Effects in SDs of all levels.",
        ),
        (
            "equal",
            "family = \"each against the earlier\"\nadjust = \"graph\"",
            "Compare each against the earlier ones of s by means for a difference, keeping the error at 0.05 with a graph of weights in the order as listed, starting with equal shares and passing them on: to all others equally and looking in either direction; beside it: nothing. Effects in SDs of all levels.",
        ),
    ];
    for (variances, rest, expected) in cases {
        assert_eq!(sentence_of(variances, rest), expected, "{rest}");
    }
}

#[test]
fn what_does_not_go_together_stays_in_the_sentence_to_be_changed_there() {
    let wrong = sentence_of("equal", "claim = \"equivalence\"\nmargin = [2]\nsides = \"less\"");
    assert!(wrong.contains("and looking only downwards"), "{wrong}");
    let wrong = sentence_of("equal", "claim = \"equivalence\"\nmargin = [2]\nbasis = \"ranks\"");
    assert!(wrong.contains("for equivalence within margins of 2"), "{wrong}");
}

#[test]
fn figures_and_notes_say_what_the_numbers_are_of() {
    let joint = evaluated(&ask("basis = \"ranks\"\nranking = \"joint\""), blood_counts(Variances::Equal));
    assert_eq!(first_figure(&joint).title, "Differences of mean ranks of count");
    let text = ask("claim = \"non-inferiority\"\nsides = \"less\"\nmargin = [0.5]");
    let inferior = shown(&evaluated(&text, blood_counts(Variances::Equal)));
    assert!(
        inferior.contains("t and p test the difference against the margin, 0.5, instead of zero."),
        "{inferior}"
    );
    let text = ask("claim = \"equivalence\"\nmargin = [0.5]");
    let equivalent = shown(&evaluated(&text, blood_counts(Variances::Equal)));
    assert!(equivalent.contains("t and p are those of the test with the larger p."), "{equivalent}");
}

#[test]
fn a_write_up_says_how_many_rearrangements_it_rests_on_and_what_its_intervals_are() {
    let outcome = evaluated(&ask("basis = \"permutation\""), blood_counts(Variances::Equal));
    let writeup = outcome.answer.writeup.clone().unwrap();
    for part in
        ["All rearrangements within", "were counted", "its interval of 95\u{a0}% for the comparison alone"]
    {
        assert!(writeup.contains(part), "{part} in {writeup}");
    }
}

#[test]
fn a_procedure_in_steps_begins_its_caution_as_a_sentence() {
    let text = ask(
        "family = \"each against control\"\nadjust = \"fixed sequence\"\norder = [\"B - control\", \"A - control\"]\nalso = [\"Holm\"]",
    );
    let outcome = evaluated(&text, controlled());
    let all = format!("{}{}", shown(&outcome), outcome.answer.cautions.join(" "));
    assert!(all.contains("A fixed sequence decides, as chosen"), "{all}");
}

#[test]
fn the_graph_of_a_plan_is_drawn_before_there_are_data() {
    let text = "levelwise = 1\n\n[[cell]]\nkind = \"study\"\nname = \"s\"\noutcome = \"y\"\ngroups = \"g\"\nlevels = [\"a\", \"b\", \"c\"]\ncontrol = \"a\"\n\n[[cell]]\nkind = \"comparisons\"\nstudy = \"s\"\nfamily = \"each against control\"\nadjust = \"fallback\"\n";
    let mut engine = Engine::new();
    engine.open(text).expect("a notebook");
    engine.settle();
    let id = *engine.order().last().expect("two cells");
    let cell = engine.cell(id).expect("the cell");
    let figure = first_figure(cell.outcome.expect("a plan"));
    assert_eq!(figure.title, "The graph as declared");
    assert!(figure.description.contains("b \u{2212} a: weight 0.5"), "{}", figure.description);
    assert!(!figure.description.contains("rejected;"), "{}", figure.description);
}

fn cautions(rest: &str, study: Study) -> String {
    evaluated(&ask(rest), study).answer.cautions.join(" | ")
}

#[test]
fn contrasts_that_ask_the_same_are_named() {
    let set = |lines: &str| {
        cautions(
            &format!("family = \"contrasts\"\ncontrasts = {{ {lines} }}"),
            blood_counts(Variances::Equal),
        )
    };
    let same =
        set("one = \"A - control\", two = \"control - A\", three = \"2*A - 2*control\", four = \"B - A\"");
    assert!(
        same.contains("\"one\", \"two\" and \"three\" are multiples of each other and ask the same; each counts in the family of 4."),
        "{same}"
    );
    let apart = set("one = \"A - control\", two = \"B - control\"");
    assert!(!apart.contains("multiples"), "{apart}");
}

#[test]
fn one_value_and_values_that_are_all_equal_borrow_their_spread_in_plain_words() {
    let one = study(&[("a", &[1.2, 1.5, 1.1]), ("b", &[2.0, 2.6, 2.2]), ("c", &[3.1])], Variances::Equal);
    let said = cautions("", one);
    assert!(
        said.contains("\"c\" (n = 1) has no spread of its own: that of the other levels is taken for it."),
        "{said}"
    );
    let flat =
        study(&[("a", &[1.2, 1.5, 1.1]), ("b", &[2.0, 2.0, 2.0]), ("c", &[3.1, 3.3, 2.7])], Variances::Equal);
    let said = cautions("", flat);
    assert!(said.contains("\"b\" (n = 3, all values equal) has no spread of its own"), "{said}");
    assert!(!said.contains("far above"), "{said}");
}

#[test]
fn rearrangements_that_cannot_show_anything_are_said_before_they_are_believed() {
    // 3 and 3 values: 20 arrangements, two of them most extreme; the smallest p is 0.1.
    let small = study(&[("a", &[1.0, 2.0, 3.0]), ("b", &[11.0, 12.0, 13.5])], Variances::Equal);
    let said = cautions("basis = \"permutation\"", small.clone());
    assert!(
        said.contains(
            "No values could show anything here: the smallest adjusted p that 3 and 3 values allow is 0.100."
        ),
        "{said}"
    );
    // To one side only one of them is: 0.05, which is enough.
    let said = cautions("basis = \"permutation\"\nsides = \"greater\"", small);
    assert!(!said.contains("No values"), "{said}");
    // 15 comparisons, and p cannot be below 1 / 101.
    let values: Vec<Vec<f64>> =
        (0..6).map(|i| (0..12).map(|j| f64::from(i * 40 + (j * 7) % 12)).collect()).collect();
    let names = ["a", "b", "c", "d", "e", "f"];
    let groups: Vec<(&str, &[f64])> = names.iter().zip(&values).map(|(n, v)| (*n, v.as_slice())).collect();
    let large = study(&groups, Variances::Equal);
    let said = cautions("basis = \"permutation\"\nadjust = \"Holm\"\nrepeats = 100", large.clone());
    assert!(
        said.contains("No values could show anything here: with 100 repeats the smallest adjusted p is 0.149. Set repeats to 300 or more."),
        "{said}"
    );
    let said = cautions("basis = \"permutation\"\nadjust = \"Holm\"\nrepeats = 300", large);
    assert!(!said.contains("No values"), "{said}");
}

#[test]
fn an_order_is_offered_by_name_and_a_comparison_that_no_share_can_reach_is_said() {
    let text = ask("family = \"each against control\"\nadjust = \"graph\"");
    let outcome = evaluated(&text, controlled());
    assert_eq!(outcome.choices["order"], ["A - control", "B - control"]);
    assert!(!outcome.answer.cautions.join(" ").contains("never tested"));
    let text = format!("{text}\nweights = {{ \"B - control\" = 1 }}");
    let lonely =
        format!("{text}\ntransitions = [{{ from = \"A - control\", to = \"B - control\", share = 1 }}]");
    let said = evaluated(&lonely, controlled()).answer.cautions.join(" ");
    assert!(
        said.contains("A \u{2212} control starts with no share of the error rate, and no transition can bring it one: never tested, whatever the others show."),
        "{said}"
    );
    let passed =
        format!("{text}\ntransitions = [{{ from = \"B - control\", to = \"A - control\", share = 0.5 }}]");
    assert!(!evaluated(&passed, controlled()).answer.cautions.join(" ").contains("never tested"));
}
