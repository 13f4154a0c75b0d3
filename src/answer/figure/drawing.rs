//! The few shapes that figures are made of, each with a class for the style sheet and the same look as attributes.

use super::label;
use crate::answer::html::Shown;
use maud::{Markup, PreEscaped, Render, html};

/// Width of every drawing in its own units. Narrow, so that text stays readable where the figure is shown at the
/// width of a telephone.
pub const WIDTH: f64 = 440.0;

/// Text sizes in units of the drawing.
pub const TEXT: f64 = 14.0;
pub const SMALL: f64 = 12.5;

const FONTS: &str = "system-ui, 'Segoe UI', Roboto, 'Helvetica Neue', Arial, sans-serif";

/// The colours of a drawing that stands alone; in the page the style sheet replaces them. See `answer.css`.
const INK: &str = "#1d2731";
const SOFT: &str = "#56636e";
const RULE: &str = "#dbe0e3";
const ACCENT: &str = "#0d6472";
const SECOND: &str = "#96480b";
const PAPER: &str = "#ffffff";

/// A drawing in the making.
#[derive(Default)]
pub struct Drawing {
    markup: String,
}

/// What a line is for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Stroke {
    Grid,
    Axis,
    /// The value that means "no difference".
    Zero,
    Interval,
    /// An interval in a figure too dense for marks.
    Fine,
    FineQuiet,
    Curve,
    /// A target or a projection onto an axis: dashed.
    Guide,
}

/// What a mark or an area is for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Fill {
    Solid,
    Hollow,
    /// One observed value among many.
    Value,
    /// How many values lie here.
    Shade,
    /// The one point that the figure is about.
    Chosen,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Anchor {
    Start,
    Middle,
    End,
}

#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Words {
    Label,
    Small,
    /// Said about the one point that the figure is about.
    Chosen,
}

impl Drawing {
    pub fn line(&mut self, x1: f64, y1: f64, x2: f64, y2: f64, stroke: Stroke) {
        let (class, colour, width, dash) = look(stroke);
        self.push(html! {
            line class=(class) x1=(At(x1)) y1=(At(y1)) x2=(At(x2)) y2=(At(y2)) stroke=(colour) stroke-width=(width) stroke-dasharray=[dash] {}
        });
    }

    /// A line through points.
    pub fn polyline(&mut self, points: impl Iterator<Item = (f64, f64)>, stroke: Stroke) {
        let (class, colour, width, dash) = look(stroke);
        let mut list = String::new();
        for (x, y) in points {
            if !list.is_empty() {
                list.push(' ');
            }
            At(x).render_to(&mut list);
            list.push(',');
            At(y).render_to(&mut list);
        }
        self.push(html! {
            polyline class=(class) points=(list) fill="none" stroke=(colour) stroke-width=(width) stroke-linejoin="round" stroke-dasharray=[dash] {}
        });
    }

    pub fn circle(&mut self, x: f64, y: f64, r: f64, fill: Fill) {
        let (class, colour, edge, opacity) = paint(fill);
        let width = edge.map(|_| "1.8");
        self.push(html! {
            circle class=(class) cx=(At(x)) cy=(At(y)) r=(At(r)) fill=(colour) fill-opacity=[opacity] stroke=[edge] stroke-width=[width] {}
        });
    }

    /// Upright bars standing on `base`, as one shape: (left, top, width) each.
    pub fn bars(&mut self, base: f64, bars: impl Iterator<Item = (f64, f64, f64)>, fill: Fill) {
        let (class, colour, _, opacity) = paint(fill);
        let mut path = String::new();
        for (left, top, width) in bars {
            path.push('M');
            At(left).render_to(&mut path);
            path.push(' ');
            At(base).render_to(&mut path);
            path.push('V');
            At(top).render_to(&mut path);
            path.push('h');
            At(width).render_to(&mut path);
            path.push('V');
            At(base).render_to(&mut path);
            path.push('z');
        }
        self.push(html! { path class=(class) d=(path) fill=(colour) fill-opacity=[opacity] {} });
    }

    /// An arrow head at (`x`, `y`) that points to the left (-1) or the right (1).
    pub fn arrow(&mut self, x: f64, y: f64, direction: f64) {
        let mut path = String::from("M");
        for (i, (dx, dy)) in [(-7.0, -4.5), (0.0, 0.0), (-7.0, 4.5)].into_iter().enumerate() {
            if i > 0 {
                path.push('L');
            }
            At(x + dx * direction).render_to(&mut path);
            path.push(' ');
            At(y + dy).render_to(&mut path);
        }
        let (class, colour, width, _) = look(Stroke::Interval);
        self.push(html! { path class=(class) d=(path) fill="none" stroke=(colour) stroke-width=(width) {} });
    }

    /// Words with their baseline at `y`.
    pub fn text(&mut self, x: f64, y: f64, text: &str, anchor: Anchor, words: Words) {
        self.titled(x, y, text, text, anchor, words);
    }

    /// Words that may be a short form of `whole`, which then shows on pointing.
    pub fn titled(&mut self, x: f64, y: f64, shown: &str, whole: &str, anchor: Anchor, words: Words) {
        let (class, colour, size) = match words {
            Words::Label => ("a-words", INK, TEXT),
            Words::Small => ("a-words a-soft", SOFT, SMALL),
            Words::Chosen => ("a-words a-second", SECOND, TEXT),
        };
        let anchor = match anchor {
            Anchor::Start => None,
            Anchor::Middle => Some("middle"),
            Anchor::End => Some("end"),
        };
        self.push(html! {
            text class=(class) x=(At(x)) y=(At(y)) fill=(colour) font-size=(At(size)) text-anchor=[anchor] {
                @if shown != whole { title { (Shown(whole)) } }
                (Shown(shown))
            }
        });
    }

    /// Small words from the left edge, wrapped to the drawing's width. Returns the baseline of the line that would follow.
    pub fn paragraph(&mut self, y: f64, text: &str) -> f64 {
        let lines = label::wrap(text, SMALL, WIDTH - 8.0, 4);
        for (i, line) in lines.iter().enumerate() {
            self.text(4.0, y + 17.0 * i as f64, line, Anchor::Start, Words::Small);
        }
        y + 17.0 * lines.len() as f64
    }

    /// A group of shapes that shows `title` on pointing.
    pub fn named(&mut self, title: &str, draw: impl FnOnce(&mut Drawing)) {
        let mut inner = Drawing::default();
        draw(&mut inner);
        self.push(html! { g { title { (Shown(title)) } (PreEscaped(inner.markup)) } });
    }

    /// The finished SVG element. `label` is its text alternative.
    pub fn finish(self, height: f64, label: &str) -> String {
        let view = format!("0 0 {WIDTH} {}", height.ceil());
        html! {
            svg xmlns="http://www.w3.org/2000/svg" class="a-drawing" viewBox=(view) width=(WIDTH) height=(height.ceil()) role="img"
                aria-label=(Shown(label)) font-family=(FONTS) {
                rect class="a-ground" width=(WIDTH) height=(height.ceil()) fill=(PAPER) {}
                (PreEscaped(self.markup))
            }
        }
        .into_string()
    }

    fn push(&mut self, markup: Markup) {
        self.markup.push_str(&markup.0);
    }
}

fn look(stroke: Stroke) -> (&'static str, &'static str, &'static str, Option<&'static str>) {
    match stroke {
        Stroke::Grid => ("a-grid", RULE, "1", None),
        Stroke::Axis => ("a-axis", SOFT, "1", None),
        Stroke::Zero => ("a-axis", SOFT, "1.6", None),
        Stroke::Interval => ("a-line", ACCENT, "2", None),
        Stroke::Fine => ("a-line", ACCENT, "1.4", None),
        Stroke::FineQuiet => ("a-axis", SOFT, "0.6", None),
        Stroke::Curve => ("a-second", SECOND, "2", None),
        Stroke::Guide => ("a-second", SECOND, "1.2", Some("5 4")),
    }
}

fn paint(fill: Fill) -> (&'static str, &'static str, Option<&'static str>, Option<&'static str>) {
    match fill {
        Fill::Solid => ("a-solid", ACCENT, Some(ACCENT), None),
        Fill::Hollow => ("a-hollow", PAPER, Some(ACCENT), None),
        Fill::Value => ("a-value", SOFT, None, Some("0.55")),
        Fill::Shade => ("a-value", SOFT, None, Some("0.4")),
        Fill::Chosen => ("a-chosen", SECOND, Some(SECOND), None),
    }
}

/// A coordinate: two decimals, inside a range that every program can draw, and a number whatever comes in.
struct At(f64);

impl Render for At {
    fn render_to(&self, buffer: &mut String) {
        let x = if self.0.is_finite() { self.0.clamp(-1e5, 1e5) } else { 0.0 };
        let text = format!("{x:.2}");
        let text = text.trim_end_matches('0').trim_end_matches('.');
        buffer.push_str(if text == "-0" { "0" } else { text });
    }
}
