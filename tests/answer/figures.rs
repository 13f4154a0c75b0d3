//! Figures: well-formed, harmless, bounded, and without a coordinate that is no number, whatever comes in.

use super::markup::assert_harmless;
use levelwise::answer::figure::*;
use levelwise::answer::{Answer, Figure, html, text};
use proptest::prelude::*;

fn row(label: &str, estimate: f64, lower: f64, upper: f64, mark: Mark) -> IntervalRow {
    IntervalRow { label: label.to_owned(), estimate, interval: Some(Span { lower, upper }), mark }
}

/// The drawing, read as XML: fails where it is not well-formed.
fn read(figure: &Figure) -> roxmltree::Document<'_> {
    let document =
        roxmltree::Document::parse(figure.svg()).unwrap_or_else(|e| panic!("{e} in {}", figure.svg()));
    assert_eq!(document.root_element().tag_name().namespace(), Some("http://www.w3.org/2000/svg"));
    document
}

fn texts(figure: &Figure) -> Vec<String> {
    let document = read(figure);
    let words = document.descendants().filter(|n| n.has_tag_name("text"));
    words.map(|n| n.children().filter(|c| c.is_text()).filter_map(|c| c.text()).collect()).collect()
}

fn height(figure: &Figure) -> f64 {
    read(figure).root_element().attribute("height").unwrap().parse().unwrap()
}

fn count(figure: &Figure, class: &str) -> usize {
    let document = read(figure);
    document.descendants().filter(|n| n.attribute("class") == Some(class)).count()
}

fn sample_intervals() -> Intervals {
    Intervals {
        title: "Differences in words recalled".into(),
        axis: "Difference in words recalled".into(),
        bars: "Bars: simultaneous 95 % intervals (Tukey).".into(),
        solid: "adjusted p at most 0.05".into(),
        hollow: "adjusted p above 0.05".into(),
        reference: Some(0.0),
        margins: Vec::new(),
        rows: vec![
            row("15 min \u{2212} none", 2.5, 0.4, 4.6, Mark::Solid),
            row("30 min \u{2212} none", 1.0, -1.1, 3.1, Mark::Hollow),
            row("45 min \u{2212} none", 3.0, 0.9, f64::INFINITY, Mark::Solid),
        ],
    }
}

#[test]
fn an_interval_figure_shows_marks_limits_and_what_the_bars_are() {
    let figure = intervals(&sample_intervals());
    // One mark a row and one in the key.
    assert_eq!((count(&figure, "a-solid"), count(&figure, "a-hollow")), (3, 2));
    let words = texts(&figure);
    for expected in [
        "Bars: simultaneous 95 % intervals (Tukey).",
        "adjusted p at most 0.05",
        "15 min \u{2212} none",
        "Difference in words recalled",
    ] {
        assert!(words.iter().any(|w| w == expected), "{expected} in {words:?}");
    }
    assert!(
        figure
            .description
            .contains("15 min \u{2212} none: 2.5, interval 0.4 to 4.6; adjusted p at most 0.05."),
        "{}",
        figure.description
    );
    assert!(
        figure.description.contains("45 min \u{2212} none: 3.0, interval at least 0.9"),
        "{}",
        figure.description
    );
    let arrows = read(&figure).descendants().filter(|n| n.has_tag_name("path")).count();
    assert_eq!(arrows, 1, "one side without a limit, one arrow");
}

#[test]
fn a_row_without_an_interval_shows_its_estimate_alone() {
    let mut spec = sample_intervals();
    spec.rows.iter_mut().for_each(|row| row.interval = None);
    let figure = intervals(&spec);
    assert_eq!(count(&figure, "a-line"), 0);
    assert_eq!((count(&figure, "a-solid"), count(&figure, "a-hollow")), (3, 2));
}

#[test]
fn hundreds_of_intervals_keep_to_a_bounded_height_and_all_are_drawn() {
    let mut spec = sample_intervals();
    spec.rows = (0..780)
        .map(|i| {
            row(
                &format!("level {i} \u{2212} control"),
                f64::from(i),
                f64::from(i) - 9.0,
                f64::from(i) + 9.0,
                if i % 3 == 0 { Mark::Solid } else { Mark::Hollow },
            )
        })
        .collect();
    let figure = intervals(&spec);
    assert!(height(&figure) < 1800.0);
    let named = read(&figure).descendants().filter(|n| n.has_tag_name("g")).count();
    assert_eq!(named, 780);
    spec.rows.extend(spec.rows.clone());
    assert!(
        texts(&intervals(&spec))
            .iter()
            .any(|t| t == "Drawn are the first 800 of 1560 rows; the table has all.")
    );
}

#[test]
fn few_values_are_points_and_many_are_counts() {
    let group = |n: usize| Group {
        label: format!("{n} values"),
        values: (0..n).map(|i| libm::sin(i as f64) * 10.0 + 50.0).collect(),
        mean: Some(50.0),
        interval: Some(Span { lower: 48.0, upper: 52.0 }),
        letters: None,
    };
    let spec = |n| Groups {
        title: "Scores".into(),
        axis: "Score".into(),
        bars: "Bars: 95 % intervals of the mean.".into(),
        letters: String::new(),
        groups: vec![group(n), group(n / 2)],
    };
    let few = groups(&spec(100));
    assert_eq!(count(&few, "a-value"), 150);
    assert!(texts(&few).contains(&"Points: every value.".to_owned()));
    let many = groups(&spec(100_000));
    assert_eq!(count(&many, "a-value"), 2);
    assert!(many.svg().len() < 20_000, "{}", many.svg().len());
    assert!(
        texts(&many).iter().any(|t| t.starts_with("Shaded: where the 150\u{202f}000 values lie")),
        "{:?}",
        texts(&many)
    );
    let means_only = Groups { groups: vec![Group { values: Vec::new(), ..group(2) }], ..spec(2) };
    assert!(!texts(&groups(&means_only)).iter().any(|t| t.contains("value.")));
}

#[test]
fn margins_are_dashed_lines_and_are_named() {
    let figure = intervals(&Intervals { margins: vec![-1.5, 1.5], ..sample_intervals() });
    let document = read(&figure);
    let dashed = document.descendants().filter(|node| node.attribute("stroke-dasharray").is_some());
    assert_eq!(dashed.count(), 2);
    assert!(
        texts(&figure).contains(&"Dashed: margins \u{2212}1.5 and 1.5".to_owned()),
        "{:?}",
        texts(&figure)
    );
    assert!(figure.description.contains("Dashed: margins \u{2212}1.5 and 1.5."));
}

#[test]
fn letters_stand_at_the_right_of_their_group_and_are_explained() {
    let group = |label: &str, letters: &str| Group {
        label: label.into(),
        mean: Some(5.0),
        letters: Some(letters.into()),
        ..Group::default()
    };
    let spec = Groups {
        letters: "Levels that share a letter are not shown to differ.".into(),
        groups: vec![group("none", "a"), group("15 min", "ab")],
        ..Groups::default()
    };
    let figure = groups(&spec);
    assert!(
        ["a", "ab", spec.letters.as_str()]
            .iter()
            .all(|words| texts(&figure).iter().any(|text| text == words))
    );
    assert!(figure.description.contains("15 min: mean 5, letters ab."), "{}", figure.description);
}

#[test]
fn the_order_of_the_values_does_not_change_the_figure() {
    let mut spec = Groups {
        groups: vec![Group {
            label: "a".into(),
            values: vec![1.0, 1.01, 1.02, 5.0, 1.0],
            ..Group::default()
        }],
        ..Groups::default()
    };
    let before = groups(&spec);
    spec.groups[0].values.reverse();
    assert_eq!(groups(&spec), before);
}

#[test]
fn levels_stand_at_their_scores_and_their_labels_do_not_overlap() {
    let scores = [0.0, 1.0, 2.0, 15.0, 60.0];
    let spec = Trend {
        title: "Trend".into(),
        x_axis: "Training (minutes)".into(),
        y_axis: "Words recalled".into(),
        bars: "Bars: 95 % intervals.".into(),
        curve_words: "Curve: quadratic.".into(),
        points: scores
            .iter()
            .map(|&x| TrendPoint { label: format!("{x} minutes"), x, mean: x / 10.0, interval: None })
            .collect(),
        curve: (0..=60).map(|x| Point { x: f64::from(x), y: f64::from(x) / 10.0 }).collect(),
    };
    let figure = trend(&spec);
    let document = read(&figure);
    let number = |n: roxmltree::Node<'_, '_>, name: &str| n.attribute(name).unwrap().parse::<f64>().unwrap();
    let x: Vec<f64> = document
        .descendants()
        .filter(|n| n.attribute("class") == Some("a-solid"))
        .map(|n| number(n, "cx"))
        .collect();
    for (i, score) in scores.iter().enumerate() {
        let share = (x[i] - x[0]) / (x[4] - x[0]);
        assert!((share - score / 60.0).abs() < 1e-3, "level {i} stands at {share}");
    }
    let labels: Vec<_> = document
        .descendants()
        .filter(|n| n.has_tag_name("text") && n.text().is_some_and(|t| t.ends_with("minutes")))
        .map(|n| (number(n, "x"), number(n, "y"), n.text().unwrap().len() as f64 * 7.0))
        .collect();
    assert!(labels.len() >= 4);
    for (i, a) in labels.iter().enumerate() {
        for b in &labels[..i] {
            assert!(a.1 != b.1 || (a.0 - b.0).abs() > (a.2 + b.2) / 2.0, "{a:?} and {b:?}");
        }
    }
}

#[test]
fn a_power_curve_shows_its_target_and_the_chosen_point() {
    let figure = curve(&sample_curve());
    let words = texts(&figure);
    for expected in ["Power", "Observations per group", "target 0.8", "5 per group: power 0.83"] {
        assert!(words.iter().any(|w| w == expected), "{expected} in {words:?}");
    }
    assert_eq!(count(&figure, "a-chosen"), 1);
    assert!(figure.description.contains("5 per group: power 0.83"));
}

fn sample_curve() -> Curve {
    Curve {
        title: "Power against sample size".into(),
        x_axis: "Observations per group".into(),
        y_axis: "Power".into(),
        points: (2..=12)
            .map(|n| Point { x: f64::from(n), y: 1.0 - libm::exp(-f64::from(n) / 3.0) })
            .collect(),
        y_range: Some(Span { lower: 0.0, upper: 1.0 }),
        target: Some(0.8),
        target_words: "target 0.8".into(),
        chosen: Some(Point { x: 5.0, y: 0.83 }),
        chosen_words: "5 per group: power 0.83".into(),
    }
}

fn node(label: &str, weight: Option<f64>, mark: Mark) -> NetworkNode {
    NetworkNode { label: label.to_owned(), weight, mark }
}

/// Two doses on two outcomes: one rejected, and with it its weight gone.
fn sample_network() -> Network {
    let arrow = |from, to, share| NetworkArrow { from, to, share };
    Network {
        title: "Graph of the hypotheses".into(),
        words: "The graph when it stops.".into(),
        solid: "rejected".into(),
        hollow: "retained".into(),
        nodes: vec![
            node("high: pain", None, Mark::Solid),
            node("low: pain", Some(0.75), Mark::Hollow),
            node("high: function", Some(0.25), Mark::Hollow),
            node("low: function", Some(0.0), Mark::Hollow),
        ],
        arrows: vec![
            arrow(1, 2, 1.0 / 3.0),
            arrow(1, 3, 2.0 / 3.0),
            arrow(2, 1, 1.0),
            arrow(3, 1, 0.9999),
            arrow(3, 2, 0.0001),
        ],
    }
}

#[test]
fn a_graph_shows_its_nodes_weights_and_shares() {
    let figure = network(&sample_network());
    // One mark a node and one of each in the key.
    assert_eq!((count(&figure, "a-solid"), count(&figure, "a-hollow")), (2, 4));
    let words = texts(&figure);
    for expected in
        ["rejected", "low: pain", "weight 0.75", "weight 0", "0.333", "0.667", "1", ">0.999", "<0.001"]
    {
        assert!(words.iter().any(|w| w == expected), "{expected} in {words:?}");
    }
    assert_eq!(words.iter().filter(|w| w.starts_with("weight")).count(), 3);
    let named = read(&figure).descendants().filter(|n| n.has_tag_name("g")).count();
    assert_eq!(named, 5, "one group an arrow");
    for expected in [
        "A graph of 4 nodes. The graph when it stops. high: pain: rejected. low: pain: weight 0.75; retained.",
        "low: pain passes 0.333 to high: function. low: pain passes 0.667 to low: function.",
    ] {
        assert!(figure.description.contains(expected), "{}", figure.description);
    }
}

#[test]
fn arrows_that_all_pass_the_same_say_it_once() {
    let all = |n: usize| -> Network {
        let arrows = (0..n).flat_map(|from| (0..n).map(move |to| NetworkArrow { from, to, share: 0.5 }));
        let nodes = (0..n).map(|i| node(&format!("H{i}"), Some(0.1), Mark::Hollow)).collect();
        Network { nodes, arrows: arrows.collect(), ..sample_network() }
    };
    let figure = network(&all(3));
    assert!(texts(&figure).iter().any(|t| t == "Every arrow passes on the share 0.5 of the weight."));
    assert!(!texts(&figure).iter().any(|t| t == "0.5"));
    // There and back in one line.
    assert_eq!(read(&figure).descendants().filter(|n| n.has_tag_name("g")).count(), 3);
    let large = network(&all(13));
    assert_eq!(count(&large, "a-hollow"), 1, "the key alone");
    assert!(
        texts(&large).iter().any(|t| t == "A graph of 13 nodes is not drawn; the table has all of them.")
    );
    assert!(large.description.ends_with("It is not drawn; the table lists every node."));
}

/// Left, top, right and bottom of what words fill, with half of their size for a letter, which is less than most take.
fn filled(n: roxmltree::Node<'_, '_>) -> [f64; 4] {
    let number = |name: &str| n.attribute(name).map_or(0.0, |value| value.parse::<f64>().unwrap());
    let shown: String = n.children().filter(|c| c.is_text()).filter_map(|c| c.text()).collect();
    let width = 0.5 * number("font-size") * shown.chars().count() as f64;
    let left = match n.attribute("text-anchor") {
        Some("middle") => number("x") - width / 2.0,
        Some(_) => number("x") - width,
        None => number("x"),
    };
    [left, number("y") - 10.0, left + width, number("y") + 2.0]
}

#[test]
fn words_of_a_graph_cover_no_node_and_no_other_words_and_stay_inside() {
    for nodes in 1..=12 {
        let list =
            (0..nodes).map(|i| node(&format!("{i} minutes \u{2212} none at all"), Some(0.125), Mark::Hollow));
        let arrows = (0..nodes).flat_map(|from| {
            [1, 2, 5].map(|step| NetworkArrow { from, to: (from + step) % nodes, share: step as f64 / 8.0 })
        });
        let figure =
            network(&Network { nodes: list.collect(), arrows: arrows.collect(), ..sample_network() });
        let document = read(&figure);
        let words: Vec<[f64; 4]> =
            document.descendants().filter(|n| n.has_tag_name("text")).map(filled).collect();
        let circles = document.descendants().filter(|n| n.has_tag_name("circle")).map(|n| {
            let number = |name: &str| n.attribute(name).unwrap().parse::<f64>().unwrap();
            let (x, y, r) = (number("cx"), number("cy"), number("r"));
            [x - r, y - r, x + r, y + r]
        });
        let circles: Vec<[f64; 4]> = circles.collect();
        let meets = |a: &[f64; 4], b: &[f64; 4]| a[0] < b[2] && b[0] < a[2] && a[1] < b[3] && b[1] < a[3];
        for (i, word) in words.iter().enumerate() {
            assert!(word[0] >= 0.0 && word[2] <= 440.0 && word[3] <= height(&figure), "{nodes}: {word:?}");
            assert!(!circles.iter().any(|circle| meets(word, circle)), "{nodes} nodes: {word:?}");
            assert!(!words[..i].iter().any(|other| meets(word, other)), "{nodes} nodes: {word:?}");
        }
        for (i, circle) in circles.iter().enumerate() {
            assert!(!circles[..i].iter().any(|other| meets(circle, other)), "{nodes} nodes");
        }
    }
}

#[test]
fn arrows_pass_by_every_node_but_their_own() {
    for nodes in 3..=12 {
        let list = (0..nodes).map(|i| node(&format!("{i}"), Some(0.125), Mark::Hollow));
        let pairs = (0..nodes).flat_map(|from| (0..nodes).map(move |to| (from, to)));
        let arrows = pairs.map(|(from, to)| NetworkArrow { from, to, share: 1.0 / (from + to + 2) as f64 });
        let spec = Network {
            nodes: list.collect(),
            arrows: arrows.collect(),
            solid: String::new(),
            hollow: String::new(),
            ..sample_network()
        };
        let figure = network(&spec);
        let document = read(&figure);
        let circles = document.descendants().filter(|n| n.has_tag_name("circle"));
        let circles: Vec<[f64; 3]> = circles
            .map(|n| ["cx", "cy", "r"].map(|name| n.attribute(name).unwrap().parse::<f64>().unwrap()))
            .collect();
        assert_eq!(circles.len(), nodes);
        let lines = document.descendants().filter(|n| n.has_tag_name("polyline"));
        for point in lines.flat_map(|n| n.attribute("points").unwrap().split(' ')) {
            let (x, y) = point.split_once(',').unwrap();
            let (x, y): (f64, f64) = (x.parse().unwrap(), y.parse().unwrap());
            for [cx, cy, r] in &circles {
                assert!(libm::hypot(x - cx, y - cy) > r + 0.5, "{nodes} nodes: {x}, {y} and {cx}, {cy}");
            }
        }
    }
}

#[test]
fn a_figure_stands_in_an_answer_with_its_text_alternative() {
    let answer = Answer::new("Done").with_figure(intervals(&sample_intervals()));
    let markup = html::answer(&answer);
    assert!(
        markup
            .contains("<figcaption class=\"a-title\">Differences in words recalled</figcaption><svg xmlns=")
    );
    assert!(markup.contains("role=\"img\" aria-label=\"Differences in words recalled. "));
    assert!(text::answer(&answer, 90).contains("[Figure: Differences in words recalled]"));
}

#[test]
fn a_figure_of_nothing_is_still_a_figure() {
    for figure in [
        intervals(&Intervals::default()),
        groups(&Groups::default()),
        trend(&Trend::default()),
        curve(&Curve::default()),
        network(&Network::default()),
    ] {
        read(&figure);
    }
}

/// Any number at all, the awkward ones often.
fn number() -> impl Strategy<Value = f64> {
    prop_oneof![
        any::<f64>(),
        -100.0..100.0f64,
        prop::sample::select(vec![
            0.0,
            -0.0,
            f64::NAN,
            f64::INFINITY,
            f64::NEG_INFINITY,
            f64::MAX,
            f64::MIN,
            f64::MIN_POSITIVE,
            5e-324,
            1e12,
            1e15 + 0.5
        ]),
    ]
}

fn words() -> impl Strategy<Value = String> {
    prop::sample::select(vec![
        "",
        "a",
        "<script>",
        "\"><svg onload=x>",
        "a&b",
        "\u{0}\u{b}\u{ffff}",
        "日本語の長い名前がここにあります",
        "a very long label that has many words in it and goes on",
        "]]>",
    ])
    .prop_map(str::to_owned)
}

fn span() -> impl Strategy<Value = Option<Span>> {
    prop::option::of((number(), number()).prop_map(|(lower, upper)| Span { lower, upper }))
}

fn assert_sound(figure: &Figure) {
    let document = read(figure);
    assert_harmless(figure.svg());
    for node in document.descendants().filter(|n| n.is_element()) {
        for attribute in node.attributes() {
            let is_geometry = [
                "x", "y", "x1", "x2", "y1", "y2", "cx", "cy", "r", "width", "height", "points", "d",
                "viewBox",
            ]
            .contains(&attribute.name());
            if is_geometry {
                let numbers = attribute
                    .value()
                    .split(|c: char| !(c.is_ascii_digit() || c == '.' || c == '-'))
                    .filter(|t| !t.is_empty());
                assert!(numbers.map(|t| t.parse::<f64>().unwrap()).all(f64::is_finite));
                assert!(
                    !attribute.value().contains("NaN") && !attribute.value().contains("inf"),
                    "{attribute:?}"
                );
            }
        }
    }
    assert!(height(figure) < 2500.0);
}

proptest! {
    #[test]
    fn any_numbers_give_a_sound_interval_figure(
        rows in prop::collection::vec((words(), number(), span(), any::<bool>()), 0..8), reference in prop::option::of(number()), title in words(),
    ) {
        let rows = rows.into_iter().map(|(label, estimate, interval, solid)| IntervalRow { label, estimate, interval, mark: if solid { Mark::Solid } else { Mark::Hollow } });
        assert_sound(&intervals(&Intervals { title: title.clone(), axis: title.clone(), bars: title.clone(), solid: title.clone(), hollow: title, reference, margins: Vec::new(), rows: rows.collect() }));
    }

    #[test]
    fn any_numbers_give_a_sound_group_figure(
        list in prop::collection::vec((words(), prop::collection::vec(number(), 0..30), prop::option::of(number()), span()), 0..6), repeat in 1..60usize, title in words(),
    ) {
        let list = list.into_iter().map(|(label, values, mean, interval)| Group { label, values: values.repeat(repeat), mean, interval, letters: None });
        assert_sound(&groups(&Groups { title: title.clone(), axis: title.clone(), bars: title, letters: String::new(), groups: list.collect() }));
    }

    #[test]
    fn any_numbers_give_a_sound_graph(
        list in prop::collection::vec((words(), prop::option::of(number()), any::<bool>()), 0..15),
        lines in prop::collection::vec((0..16usize, 0..16usize, number()), 0..30), title in words(),
    ) {
        let nodes = list.into_iter().map(|(label, weight, solid)| NetworkNode { label, weight, mark: if solid { Mark::Solid } else { Mark::Hollow } });
        let arrows = lines.into_iter().map(|(from, to, share)| NetworkArrow { from, to, share });
        assert_sound(&network(&Network { title: title.clone(), words: title.clone(), solid: title.clone(), hollow: title, nodes: nodes.collect(), arrows: arrows.collect() }));
    }

    #[test]
    fn any_numbers_give_a_sound_trend_and_curve(
        list in prop::collection::vec((words(), number(), number(), span()), 0..8), line in prop::collection::vec((number(), number()), 0..20), title in words(),
        range in span(), target in prop::option::of(number()), chosen in prop::option::of((number(), number())),
    ) {
        let line: Vec<Point> = line.into_iter().map(|(x, y)| Point { x, y }).collect();
        let points = list.into_iter().map(|(label, x, mean, interval)| TrendPoint { label, x, mean, interval });
        let shared = title.clone();
        assert_sound(&trend(&Trend { title: title.clone(), x_axis: title.clone(), y_axis: title.clone(), bars: title.clone(), curve_words: title.clone(), points: points.collect(), curve: line.clone() }));
        assert_sound(&curve(&Curve { title: title.clone(), x_axis: title.clone(), y_axis: title, points: line, y_range: range, target, target_words: shared.clone(), chosen: chosen.map(|(x, y)| Point { x, y }), chosen_words: shared }));
    }
}
