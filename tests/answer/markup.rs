//! HTML, notes, plain text, delimited text and the saved report.

use levelwise::answer::report::{CAUTION, Content, Report, STYLE, Section, document};
use levelwise::answer::{Answer, Cell, Row, Table, delimited, html, note, text};
use proptest::prelude::*;

fn sample() -> Answer {
    let table = Table::new("Welch t tests, adjusted by Holm")
        .text_column("Comparison")
        .number_column("Difference")
        .number_column("Interval")
        .row(Row::new([Cell::text("b \u{2212} a"), Cell::number("1.25", 1.2512), Cell::absent()]).strong())
        .row(Row::new([
            Cell::text("c \u{2212} a"),
            Cell::number("\u{2212}0.40", -0.4),
            Cell::text("[\u{2212}1.0, 0.2]"),
        ]))
        .note("Holm's procedure has no simultaneous intervals.");
    Answer::new("One of 2 comparisons is significant")
        .with_table(table)
        .with_text("First.\n\nSecond.")
        .with_note("A *note*.")
        .with_writeup("The difference was 1.25, p = 0.012.")
        .with_caution("Level \"a\" has 3 observations.")
}

#[test]
fn an_answer_becomes_accessible_html() {
    let markup = html::answer(&sample());
    for expected in [
        "<p class=\"a-headline\">One of 2 comparisons is significant</p>",
        "<div class=\"a-scroll\" role=\"region\" tabindex=\"0\" aria-label=\"Table: Welch t tests, adjusted by Holm\">",
        "<caption><span class=\"a-caption\">Welch t tests, adjusted by Holm</span></caption>",
        "<th scope=\"col\">Comparison</th><th scope=\"col\" class=\"a-n\">Difference</th>",
        "<tr class=\"a-strong\"><th scope=\"row\" class=\"a-short\">b \u{2212} a</th><td class=\"a-n\">1.25</td>",
        "<span class=\"a-absent\" aria-hidden=\"true\">–</span><span class=\"a-unseen\">not available</span>",
        "<p class=\"a-below\">Holm's procedure has no simultaneous intervals.</p>",
        "<p class=\"a-text\">First.</p><p class=\"a-text\">Second.</p>",
        "<div class=\"a-note\"><p>A <em>note</em>.</p>",
        "<section class=\"a-writeup\" aria-label=\"Write-up\"><p>The difference was 1.25, p\u{a0}=\u{a0}0.012.</p></section>",
        "<li>Level &quot;a&quot; has 3 observations.</li>",
    ] {
        assert!(markup.contains(expected), "{expected}\nis not in\n{markup}");
    }
}

#[test]
fn an_answer_becomes_aligned_text() {
    let expected = "\
One of 2 comparisons is significant

Welch t tests, adjusted by Holm
Comparison  Difference     Interval
-----------------------------------
b \u{2212} a             1.25          n/a
c \u{2212} a            \u{2212}0.40  [\u{2212}1.0, 0.2]
Holm's procedure has no simultaneous intervals.

First.

Second.

A *note*.

Write-up:
  The difference was 1.25, p = 0.012.

Cautions:
- Level \"a\" has 3 observations.
";
    assert_eq!(text::answer(&sample(), 80), expected);
}

#[test]
fn a_wide_table_wraps_its_words_and_never_its_numbers() {
    let table = Table::new("Means")
        .text_column("Level of training")
        .number_column("Mean words recalled")
        .row([Cell::text("thirty minutes of spaced training each morning"), Cell::text("12345.678")]);
    let shown = text::table(&table, 34);
    assert_eq!(
        shown,
        "Means\n\
         Level of        Mean words\n\
         training          recalled\n\
         --------------------------\n\
         thirty minutes   12345.678\n\
         of spaced\n\
         training each\n\
         morning\n"
    );
}

#[test]
fn delimited_text_has_full_precision_and_defuses_formulas() {
    let table = Table::new("Means")
        .text_column("Level")
        .number_column("Mean")
        .number_column("Interval")
        .row([
            Cell::text("say \"hi\", twice"),
            Cell::number("0.33", 1.0 / 3.0),
            Cell::text("[\u{2212}1.0, 0.2]"),
        ])
        .row([Cell::text("=1+1"), Cell::number("\u{2212}∞", f64::NEG_INFINITY), Cell::absent()])
        .row([Cell::text("-15"), Cell::text("\u{2212}2")]);
    assert_eq!(
        delimited::table(&table),
        "Level,Mean,Interval\r\n\
         \"say \"\"hi\"\", twice\",0.3333333333333333,\"[-1.0, 0.2]\"\r\n\
         '=1+1,-inf,\r\n\
         -15,-2,\r\n"
    );
}

#[test]
fn a_note_is_common_mark_without_html_addresses_or_images() {
    let cases = [
        ("# Plan\n\n- one\n- two", "<h3>Plan</h3>\n<ul>\n<li>one</li>\n<li>two</li>\n</ul>\n"),
        ("<script>alert(1)</script>", "<p>&lt;script&gt;alert(1)&lt;/script&gt;</p>\n"),
        ("a <i>b</i>", "<p>a &lt;i&gt;b&lt;/i&gt;</p>\n"),
        ("[text](javascript:alert(1))", "<p>text (javascript:alert(1))</p>\n"),
        ("<https://example.org/a>", "<p>https://example.org/a</p>\n"),
        ("![a *bar* chart](x.png)", "<p>a <em>bar</em> chart</p>\n"),
        ("```rust x=\"y\"\nlet a;\n```", "<pre><code>let a;\n</code></pre>\n"),
        ("3. three", "<ol start=\"3\">\n<li>three</li>\n</ol>\n"),
    ];
    for (source, expected) in cases {
        assert_eq!(note::to_html(source), expected, "{source}");
    }
}

#[test]
fn a_report_is_one_document_under_a_policy_that_allows_only_its_own_style() {
    let answer = sample();
    let report = document(&Report {
        title: "Trial & error",
        date: Some("1 December 2026"),
        sections: vec![
            Section { name: None, sentence: "", content: Content::Note("Invented data.") },
            Section {
                name: Some("pairs"),
                sentence: "Compare all pairs.",
                content: Content::Answer(&answer),
            },
            Section {
                name: None,
                sentence: "Size it.",
                content: Content::Unanswered(vec!["Field \"sd\" is missing."]),
            },
        ],
    });
    assert!(report.starts_with("<!DOCTYPE html><html lang=\"en\"><head><meta charset=\"utf-8\"><meta http-equiv=\"Content-Security-Policy\""));
    assert!(report.contains("default-src 'none'; style-src 'sha256-"));
    assert!(report.contains(&format!("<style>{STYLE}</style>")));
    for expected in [
        "<h1>Trial &amp; error</h1>",
        "1 December 2026",
        "Invented data.",
        "Compare all pairs.",
        "No answer",
        "Field &quot;sd&quot; is missing.",
        CAUTION,
        "Level &quot;a&quot; has 3",
    ] {
        assert!(report.contains(expected), "{expected}");
    }
    assert!(!STYLE.contains("</") && !STYLE.contains("url(") && !STYLE.contains("@import"));
    let undated = document(&Report { title: " ", date: None, sections: Vec::new() });
    assert!(undated.contains("<title>Report</title>") && !undated.contains("class=\"a-date\""));
}

/// Relative luminance contrast as WCAG 2.2 defines it (section "contrast ratio" of its glossary).
fn contrast(a: &str, b: &str) -> f64 {
    let luminance = |colour: &str| {
        let digits = colour.trim_start_matches('#');
        let whole =
            if digits.len() == 3 { digits.chars().flat_map(|c| [c, c]).collect() } else { digits.to_owned() };
        let channel = |i: usize| {
            let c = f64::from(u8::from_str_radix(&whole[2 * i..2 * i + 2], 16).unwrap()) / 255.0;
            if c <= 0.04045 { c / 12.92 } else { libm::pow((c + 0.055) / 1.055, 2.4) }
        };
        0.2126 * channel(0) + 0.7152 * channel(1) + 0.0722 * channel(2)
    };
    let (a, b) = (luminance(a), luminance(b));
    (a.max(b) + 0.05) / (a.min(b) + 0.05)
}

#[test]
fn text_has_a_contrast_of_at_least_four_and_a_half_in_every_theme() {
    assert!(
        (contrast("#fff", "#000") - 21.0).abs() < 1e-9
            && (contrast("#777777", "#ffffff") - 4.48).abs() < 0.005
    );
    let themes: Vec<&str> = STYLE.split("--a-paper:").skip(1).collect();
    assert_eq!(themes.len(), 5, "light, dark by wish, dark, light, print");
    for theme in themes {
        let theme = format!("--a-paper:{theme}");
        let colour = |name: &str| {
            let (_, rest) = theme.split_once(&format!("--a-{name}:")).unwrap();
            rest.split_once(';').unwrap().0.trim().to_owned()
        };
        for ground in ["paper", "raised", "second-ground"] {
            for ink in ["ink", "soft", "accent", "second"] {
                let ratio = contrast(&colour(ink), &colour(ground));
                assert!(ratio >= 4.5, "{ink} {} on {ground} {}: {ratio:.2}", colour(ink), colour(ground));
            }
        }
    }
}

/// Pieces that would do harm if any of them reached the markup unescaped, and characters that XML forbids.
fn hostile() -> impl Strategy<Value = String> {
    let pieces = prop::sample::select(vec![
        "<script>",
        "</style>",
        "]]>",
        "<!--",
        "\"",
        "'",
        "&",
        "&#x3c;",
        " onload=x",
        " style=\"x\"",
        " id=a",
        "href=",
        "[a](b)",
        "![a](b)",
        "<a href=\"x\">",
        "```x\n",
        "# h {#id .c}",
        "\n\n",
        "\u{0}",
        "\u{1b}[31m",
        "\u{202e}",
        "\u{ffff}",
        "日本",
        "a",
        "|a|\n|:-:|\n",
        "[^1]",
        "<svg/onload=x>",
        "javascript:x",
        "= ",
        "-1",
    ]);
    prop::collection::vec(pieces, 0..8).prop_map(|pieces| pieces.concat())
}

/// Fails where markup holds anything but text, known elements and harmless attributes.
pub fn assert_harmless(markup: &str) {
    let mut rest = markup;
    while let Some(at) = rest.find('<') {
        let end = rest[at..].find('>').map(|e| at + e).unwrap_or_else(|| panic!("unclosed tag in {markup}"));
        let tag = &rest[at..=end];
        let outside_quotes: String = tag.split('"').step_by(2).collect();
        for forbidden in [
            "script", "style", "onload", "href", "src", "iframe", "<a ", "<img", "link", "form", "object",
            "base",
        ] {
            assert!(!outside_quotes.contains(forbidden), "{forbidden} in {tag}");
        }
        assert!(!outside_quotes.split_whitespace().any(|word| word.starts_with("id=")), "id in {tag}");
        rest = &rest[end + 1..];
    }
    assert!(
        !markup.chars().any(|c| c.is_control() && c != '\n' && c != '\t'),
        "a control character in {markup:?}"
    );
}

proptest! {
    #[test]
    fn hostile_text_stays_text(parts in prop::collection::vec(hostile(), 8)) {
        let table = Table::new(&parts[0]).text_column(&parts[1]).number_column(&parts[2])
            .row([Cell::text(&parts[3]), Cell::text(&parts[4])]).note(&parts[5]);
        let answer = Answer::new(&parts[5]).with_table(table.clone()).with_text(&parts[6]).with_note(&parts[7])
            .with_writeup(&parts[0]).with_caution(&parts[1]);
        assert_harmless(&html::answer(&answer));
        assert_harmless(&note::to_html(&parts.concat()));
        let shown = text::answer(&answer, 60);
        prop_assert!(!shown.chars().any(|c| c.is_control() && c != '\n'), "{:?}", shown);
        prop_assert!(delimited::table(&table).lines().count() == 2);
        let report = document(&Report { title: &parts[2], date: Some(&parts[3]), sections: vec![
            Section { name: Some(&parts[4]), sentence: &parts[5], content: Content::Answer(&answer) },
            Section { name: None, sentence: "", content: Content::Unanswered(vec![&parts[6]]) },
        ] });
        let (_, body) = report.split_once("<body").unwrap();
        assert_harmless(&format!("<body{body}"));
    }

    #[test]
    fn text_lines_keep_to_the_width(words in "[a-zA-Z日本 ]{0,200}", width in 20..100usize) {
        let shown = text::answer(&Answer::new(&words).with_text(&words).with_caution(&words), width);
        for line in shown.lines() {
            prop_assert!(line.chars().count() <= width, "{line}");
        }
    }
}

#[test]
fn a_symbol_stays_with_its_value_and_an_interval_is_one_piece() {
    let table = Table::new("Means")
        .text_column("Level")
        .number_column("Interval")
        .row(Row::new([Cell::text("a (n = 14)"), Cell::text("[1.0, 2.0]")]));
    let page = html::answer(&Answer::new("It rises (p < 0.001), a = b stays").with_table(table));
    assert!(page.contains("(p\u{a0}&lt;\u{a0}0.001), a = b stays"), "{page}");
    assert!(page.contains("a (n\u{a0}=\u{a0}14)"), "{page}");
    assert!(page.contains("<td class=\"a-n a-whole\">[1.0, 2.0]</td>"), "{page}");
}
