//! Estimates with their intervals, one row each, against a line that means "no difference".

use super::axis::{Axis, Direction, Place};
use super::drawing::{Anchor, Drawing, Fill, SMALL, Stroke, TEXT, WIDTH, Words};
use super::{Span, in_words, label, precision_of, with_room_for_arrows};
use crate::answer::{Figure, number};

/// More rows than this are not drawn; the figure says so.
const MOST_ROWS: usize = 800;

/// The widest that labels may be; longer ones are wrapped or shortened.
const LABELS: f64 = 156.0;

/// Up to this many rows each has its mark and its label.
const ROOMY_ROWS: usize = 100;

/// What [`intervals`] draws.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Intervals {
    pub title: String,
    /// The quantity with its unit: "Difference in words recalled (words)".
    pub axis: String,
    /// What the bars are, said inside the figure: "Bars: simultaneous 95 % intervals (Tukey)".
    pub bars: String,
    /// What a solid and a hollow mark mean; both empty where all rows are alike.
    pub solid: String,
    pub hollow: String,
    /// Where the line of no difference stands.
    pub reference: Option<f64>,
    /// Margins that a claim must stay inside: dashed lines, named in the figure.
    pub margins: Vec<f64>,
    pub rows: Vec<IntervalRow>,
}

/// One row of [`Intervals`].
#[derive(Debug, Clone, PartialEq)]
pub struct IntervalRow {
    pub label: String,
    pub estimate: f64,
    /// None where the procedure has no interval: the estimate stands alone.
    pub interval: Option<Span>,
    pub mark: Mark,
}

/// The shape of a row's mark. Its meaning is in [`Intervals::solid`] and [`Intervals::hollow`].
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Mark {
    #[default]
    Solid,
    Hollow,
}

/// How the rows share the height.
struct Layout {
    top: f64,
    pitch: f64,
    rows: usize,
    left: f64,
}

/// The figure of estimates with their intervals.
///
/// The axis covers every limit and the reference. A side without a limit ends in an arrow at the edge. Up to 100 rows
/// have a label each; beyond that rows are thin lines, every few rows are labelled (the others show theirs on pointing), and a
/// solid row is also flagged at the right edge. Beyond 800 rows the rest is left out and the figure says so.
pub fn intervals(spec: &Intervals) -> Figure {
    let rows: Vec<IntervalRow> = spec.rows.iter().take(MOST_ROWS).map(usable).collect();
    let mut drawing = Drawing::default();
    let dense = rows.len() > ROOMY_ROWS;
    let top = key(&mut drawing, spec, dense) + 4.0;
    let layout = layout(&rows, top);
    let bottom = layout.top + layout.pitch * layout.rows as f64;
    let place = Place { from: layout.left, to: WIDTH - 14.0, text_size: SMALL, direction: Direction::Across };
    let numbers =
        rows.iter().flat_map(|row| row.interval.into_iter().flat_map(Span::limits).chain([row.estimate]));
    let spans = rows.iter().filter_map(|row| row.interval);
    let axis = Axis::covering(
        with_room_for_arrows(numbers.chain(spec.reference).chain(spec.margins.iter().copied()), spans),
        place,
    );
    for tick in &axis.ticks {
        let x = axis.place(tick.value);
        drawing.line(x, layout.top, x, bottom, Stroke::Grid);
        drawing.text(x, bottom + 18.0, &tick.label, Anchor::Middle, Words::Small);
    }
    drawing.line(layout.left, bottom, WIDTH - 14.0, bottom, Stroke::Axis);
    if let Some(reference) = spec.reference.filter(|r| r.is_finite()) {
        let x = axis.place(reference);
        drawing.line(x, layout.top - 4.0, x, bottom + 4.0, Stroke::Zero);
    }
    for margin in spec.margins.iter().filter(|margin| margin.is_finite()) {
        let x = axis.place(*margin);
        drawing.line(x, layout.top - 4.0, x, bottom + 4.0, Stroke::Guide);
    }
    for (place, row) in rows.iter().enumerate() {
        let y = layout.top + layout.pitch * (place as f64 + 0.5);
        if dense {
            dense_row(&mut drawing, &axis, row, y, &layout, place);
        } else {
            roomy_row(&mut drawing, &axis, row, y, &layout);
        }
    }
    let end = axis_title(&mut drawing, &spec.axis, layout.left, bottom + 38.0);
    let description = describe(spec);
    let svg = drawing.finish(end, &format!("{}. {description}", spec.title));
    Figure::new(spec.title.clone(), description, svg)
}

/// A row whose interval can be drawn, or none.
fn usable(row: &IntervalRow) -> IntervalRow {
    IntervalRow { interval: row.interval.and_then(Span::usable), ..row.clone() }
}

/// The lines above the rows that say what is drawn. Returns where the rows may start.
fn key(drawing: &mut Drawing, spec: &Intervals, dense: bool) -> f64 {
    let mut y = 16.0;
    if !spec.solid.is_empty() || !spec.hollow.is_empty() {
        let mut x = 4.0;
        for (words, fill) in [(&spec.solid, Fill::Solid), (&spec.hollow, Fill::Hollow)] {
            if words.is_empty() {
                continue;
            }
            let shown = label::shorten(words, SMALL, WIDTH - 40.0);
            let width = 18.0 + label::width(&shown, SMALL) + 16.0;
            if x > 4.0 && x + width > WIDTH {
                (x, y) = (4.0, y + 19.0);
            }
            if dense {
                let stroke = if fill == Fill::Solid { Stroke::Fine } else { Stroke::FineQuiet };
                drawing.line(x, y - 4.5, x + 12.0, y - 4.5, stroke);
            } else {
                drawing.circle(x + 6.0, y - 4.5, 4.4, fill);
            }
            drawing.titled(x + 18.0, y, &shown, words, Anchor::Start, Words::Small);
            x += width;
        }
        y += 19.0;
    }
    if !spec.bars.is_empty() {
        y = drawing.paragraph(y, &spec.bars);
    }
    if !spec.margins.is_empty() {
        y = drawing.paragraph(y, &margins_in_words(spec));
    }
    if dense && !spec.solid.is_empty() {
        y = drawing.paragraph(y, "Solid rows are flagged at the right edge as well.");
    }
    if spec.rows.len() > MOST_ROWS {
        let all = number::count(spec.rows.len());
        y = drawing
            .paragraph(y, &format!("Drawn are the first {MOST_ROWS} of {all} rows; the table has all."));
    }
    y - 8.0
}

fn margins_in_words(spec: &Intervals) -> String {
    let each: Vec<String> = spec.margins.iter().map(|margin| number::plain(*margin)).collect();
    format!("Dashed: margin{} {}", if each.len() == 1 { "" } else { "s" }, each.join(" and "))
}

fn layout(rows: &[IntervalRow], top: f64) -> Layout {
    let widest = rows.iter().map(|row| label::width(&row.label, TEXT)).fold(0.0, f64::max);
    let gutter = widest.clamp(28.0, LABELS);
    let pitch = match rows.len() {
        0..=40 if widest > LABELS => 38.0,
        0..=40 => 27.0,
        41..=ROOMY_ROWS => 18.0,
        many => (1600.0 / many as f64).min(12.0),
    };
    Layout { top, pitch, rows: rows.len(), left: gutter + 20.0 }
}

fn roomy_row(drawing: &mut Drawing, axis: &Axis, row: &IntervalRow, y: f64, layout: &Layout) {
    let room = layout.left - 18.0;
    let lines = if layout.pitch > 30.0 { 2 } else { 1 };
    let lines = label::wrap(&row.label, TEXT, room, lines);
    let first = y + 5.0 - 8.0 * (lines.len() as f64 - 1.0);
    let whole = lines.join(" ") == row.label;
    for (i, line) in lines.iter().enumerate() {
        let full = if whole { line } else { &row.label };
        drawing.titled(layout.left - 14.0, first + 16.0 * i as f64, line, full, Anchor::End, Words::Label);
    }
    if let Some(span) = row.interval {
        bar(drawing, axis, span, y, Stroke::Interval);
        for (limit, edge, direction) in [(span.lower, axis.from(), -1.0), (span.upper, axis.to(), 1.0)] {
            if limit.is_finite() {
                let x = axis.place(limit);
                drawing.line(x, y - 4.0, x, y + 4.0, Stroke::Interval);
            } else {
                drawing.arrow(edge, y, direction);
            }
        }
    }
    if row.estimate.is_finite() {
        let fill = if row.mark == Mark::Solid { Fill::Solid } else { Fill::Hollow };
        drawing.circle(axis.place(row.estimate), y, 4.4, fill);
    }
}

fn dense_row(drawing: &mut Drawing, axis: &Axis, row: &IntervalRow, y: f64, layout: &Layout, place: usize) {
    let every = (15.0 / layout.pitch).ceil().max(1.0) as usize;
    if place.is_multiple_of(every) {
        let shown = label::shorten(&row.label, SMALL, layout.left - 18.0);
        drawing.titled(layout.left - 14.0, y + 4.5, &shown, &row.label, Anchor::End, Words::Small);
        drawing.line(layout.left - 11.0, y, layout.left - 3.0, y, Stroke::Grid);
    }
    drawing.named(&row.label, |drawing| {
        let solid = row.mark == Mark::Solid;
        if let Some(span) = row.interval {
            bar(drawing, axis, span, y, if solid { Stroke::Fine } else { Stroke::FineQuiet });
        }
        if row.estimate.is_finite() {
            let x = axis.place(row.estimate);
            drawing.line(x - 1.5, y, x + 1.5, y, Stroke::Interval);
        }
        if solid {
            drawing.line(WIDTH - 9.0, y, WIDTH - 3.0, y, Stroke::Fine);
        }
    });
}

fn bar(drawing: &mut Drawing, axis: &Axis, span: Span, y: f64, stroke: Stroke) {
    // An infinite limit is placed at the end of the axis.
    drawing.line(axis.place(span.lower), y, axis.place(span.upper), y, stroke);
}

/// The words below an axis. Returns the height that they end at.
pub fn axis_title(drawing: &mut Drawing, title: &str, left: f64, y: f64) -> f64 {
    let lines = label::wrap(title, TEXT, WIDTH - 16.0, 2);
    // Centred below its axis where there is room, and inside the drawing in any case.
    let half = lines.iter().map(|line| label::width(line, TEXT) / 2.0).fold(0.0, f64::max);
    let x = ((left + WIDTH - 14.0) / 2.0).min(WIDTH - 8.0 - half).max(8.0 + half);
    for (i, line) in lines.iter().enumerate() {
        drawing.titled(x, y + 17.0 * i as f64, line, title, Anchor::Middle, Words::Label);
    }
    y + 17.0 * lines.len() as f64 - 6.0
}

fn describe(spec: &Intervals) -> String {
    let estimates: Vec<f64> = spec.rows.iter().map(|r| r.estimate).collect();
    let precision = precision_of(&estimates, spec.rows.iter().map(|r| r.interval.and_then(Span::usable)));
    let mut sentences = vec![format!(
        "{} for {} {}",
        spec.axis,
        spec.rows.len(),
        if spec.rows.len() == 1 { "row" } else { "rows" }
    )];
    if !spec.bars.is_empty() {
        sentences.push(spec.bars.clone());
    }
    if !spec.margins.is_empty() {
        sentences.push(margins_in_words(spec));
    }
    if spec.rows.len() <= 12 {
        for row in &spec.rows {
            let meaning = if row.mark == Mark::Solid { &spec.solid } else { &spec.hollow };
            let tail = if meaning.is_empty() { String::new() } else { format!("; {meaning}") };
            let numbers = in_words(row.estimate, row.interval.and_then(Span::usable), precision);
            sentences.push(format!("{}: {numbers}{tail}", row.label));
        }
    } else {
        let solid = spec.rows.iter().filter(|r| r.mark == Mark::Solid).count();
        if !spec.solid.is_empty() {
            sentences.push(format!("{solid} of them: {}", spec.solid));
        }
        sentences.push("The table lists every row".to_owned());
    }
    sentences.iter().map(|s| format!("{}.", s.trim_end_matches('.'))).collect::<Vec<_>>().join(" ")
}
