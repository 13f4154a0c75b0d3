//! Weighted nodes and what each passes on along its arrows: the graph of an ordered or graphical procedure.

use super::Mark;
use super::drawing::{Anchor, Drawing, Fill, SMALL, Stroke, TEXT, WIDTH, Words};
use super::{Point, label};
use crate::answer::number::{self, Precision};
use crate::answer::{Figure, number::NOT_AVAILABLE};
use std::f64::consts::PI;

/// More nodes than this are not drawn: their arrows would cover each other.
const MOST_NODES: usize = 12;

/// Up to this many nodes there is room for larger ones, wider labels and rounder arrows.
const ROOMY_NODES: usize = 6;

/// More arrows than this are not written out in the description.
const MOST_SENTENCES: usize = 24;

/// A share whose place would be crossed by more points of arrows than this is not written: nobody could read it, or tell
/// which arrow it belongs to.
const MOST_CROSSED: usize = 4;

/// Distance of two lines of a label.
const LINE: f64 = 16.0;

/// Points that a curved arrow is drawn through.
const BENDS: usize = 24;

/// What [`network`] draws.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Network {
    pub title: String,
    /// What the drawing shows, said inside the figure: "The graph before the first rejection".
    pub words: String,
    /// What a solid and a hollow node mean; both empty where all nodes are alike.
    pub solid: String,
    pub hollow: String,
    pub nodes: Vec<NetworkNode>,
    pub arrows: Vec<NetworkArrow>,
}

/// One node.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct NetworkNode {
    pub label: String,
    /// None where it holds nothing any more: no weight is written.
    pub weight: Option<f64>,
    pub mark: Mark,
}

/// An arrow between two nodes, given by their places in the list. One from a node to itself, to or from a node that is
/// not there, or with a share that is not above zero, is left out.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct NetworkArrow {
    pub from: usize,
    pub to: usize,
    /// The share of the weight that is passed on.
    pub share: f64,
}

/// The figure of a graph: nodes on a circle, the first at the top or the upper left and the others clockwise.
///
/// Every node has its label and weight beside it. Arrows between the same two nodes bend away from each other. A share
/// stands beside its arrow; where all arrows pass the same, it is said once instead and arrows there and
/// back are one line. A share that has no room shows on pointing, and the figure says so. More than 12 nodes are not drawn.
pub fn network(spec: &Network) -> Figure {
    let mut drawing = Drawing::default();
    let arrows = usable(spec);
    let common = common(&arrows);
    let mut y = key(&mut drawing, spec, common);
    if spec.nodes.len() > MOST_NODES {
        let all = number::count(spec.nodes.len());
        y = drawing.paragraph(y, &format!("A graph of {all} nodes is not drawn; the table has all of them."));
    } else if !spec.nodes.is_empty() {
        let layout = layout(spec, y - 8.0);
        let curves: Vec<Curve> = curves(&arrows, &layout, common.is_some());
        for curve in &curves {
            curve.draw(&mut drawing, spec);
        }
        let omitted = if common.is_none() { write_shares(&mut drawing, spec, &curves, &layout) } else { 0 };
        for (node, place) in spec.nodes.iter().zip(&layout.places) {
            draw_node(&mut drawing, node, place, layout.radius);
        }
        y = layout.bottom + 14.0;
        if omitted > 0 {
            let text = "Shares that have no room beside their arrows show on pointing; the table has all.";
            y = drawing.paragraph(y, text);
        }
    }
    let description = describe(spec, &arrows);
    let svg = drawing.finish(y - 6.0, &format!("{}. {description}", spec.title));
    Figure::new(spec.title.clone(), description, svg)
}

fn usable(spec: &Network) -> Vec<NetworkArrow> {
    let n = spec.nodes.len();
    let drawn =
        |a: &&NetworkArrow| a.from < n && a.to < n && a.from != a.to && a.share > 0.0 && a.share.is_finite();
    spec.arrows.iter().filter(drawn).copied().collect()
}

/// The share that all arrows pass, where it is the same for three or more.
fn common(arrows: &[NetworkArrow]) -> Option<f64> {
    let first = arrows.first()?.share;
    let alike = |a: &NetworkArrow| (a.share - first).abs() <= 1e-9 * first;
    (arrows.len() > 2 && arrows.iter().all(alike)).then_some(first)
}

/// "0.5", "0.333"; never "0" for a share above it nor "1" for one below.
fn share(x: f64) -> String {
    if !x.is_finite() {
        return NOT_AVAILABLE.to_owned();
    }
    if !(0.0..=1.0).contains(&x) {
        return number::estimate(x, Precision::decimals(3));
    }
    match (x * 1000.0).round() / 1000.0 {
        0.0 if x > 0.0 => "<0.001".to_owned(),
        1.0 if x < 1.0 - 1e-9 => ">0.999".to_owned(),
        shown => number::plain(shown),
    }
}

/// The lines above the graph that say what is drawn. Returns the baseline of the line that would follow.
fn key(drawing: &mut Drawing, spec: &Network, common: Option<f64>) -> f64 {
    let mut y = 16.0;
    for (words, fill) in [(&spec.solid, Fill::Solid), (&spec.hollow, Fill::Hollow)] {
        if !words.is_empty() {
            drawing.circle(10.0, y - 4.5, 4.4, fill);
            let shown = label::shorten(words, SMALL, WIDTH - 30.0);
            drawing.titled(22.0, y, &shown, words, Anchor::Start, Words::Small);
            y += 19.0;
        }
    }
    if !spec.words.is_empty() {
        y = drawing.paragraph(y, &spec.words);
    }
    if let Some(common) = common {
        y = drawing.paragraph(y, &passes_all(common));
    }
    y
}

fn passes_all(common: f64) -> String {
    match share(common).as_str() {
        "1" => "Every arrow passes on all of the weight.".to_owned(),
        shown => format!("Every arrow passes on the share {shown} of the weight."),
    }
}

/// Where everything stands.
struct Layout {
    radius: f64,
    places: Vec<Place>,
    bottom: f64,
    /// How far an arrow bends away from the straight line.
    bend: f64,
}

/// A node, and its words beside it.
struct Place {
    at: Point,
    lines: Vec<String>,
    anchor: Anchor,
    /// Where the words start, are centred or end.
    x: f64,
    /// The baseline of the first line.
    first: f64,
}

fn layout(spec: &Network, top: f64) -> Layout {
    let n = spec.nodes.len();
    let roomy = n <= ROOMY_NODES;
    let (radius, widest) = if roomy { (9.0, 120.0) } else { (7.0, 86.0) };
    let lines: Vec<Vec<String>> = spec.nodes.iter().map(|node| words_of(node, widest)).collect();
    let wide = lines.iter().flatten().map(|line| label::width(line, TEXT)).fold(0.0, f64::max);
    // An even number stands in pairs left and right; of an odd one the first stands at the top.
    let half_step = if n.is_multiple_of(2) { PI / n as f64 } else { 0.0 };
    let angles = (0..n).map(|i| 2.0 * PI * i as f64 / n as f64 - PI / 2.0 - half_step);
    let on_circle: Vec<Point> = angles.map(|a| Point { x: libm::cos(a), y: libm::sin(a) }).collect();
    let rx = (WIDTH / 2.0 - 4.0 - wide.min(widest) - radius - 8.0).clamp(90.0, 140.0);
    let tallest = lines.iter().map(Vec::len).max().unwrap_or(1) as f64 * LINE;
    let ry = height_for(&on_circle, tallest).max(if n < 3 { 0.0 } else { rx.min(110.0) });
    // A single node needs no circle.
    let (rx, ry) = if n == 1 { (0.0, 0.0) } else { (rx, ry) };
    let mut places: Vec<Place> = on_circle
        .iter()
        .zip(lines)
        .map(|(unit, lines)| {
            let at = Point { x: WIDTH / 2.0 + unit.x * rx, y: unit.y * ry };
            beside(at, *unit, radius, lines)
        })
        .collect();
    let filled: Vec<Area> = places.iter().flat_map(|place| areas(place, radius)).collect();
    let down = top - filled.iter().map(|area| area.top).fold(f64::INFINITY, f64::min);
    for place in &mut places {
        place.at.y += down;
        place.first += down;
    }
    Layout {
        radius,
        places,
        bottom: down + filled.iter().map(|area| area.bottom).fold(f64::NEG_INFINITY, f64::max),
        bend: if roomy { 12.0 } else { 5.0 },
    }
}

/// The label in up to two lines, then the weight.
fn words_of(node: &NetworkNode, widest: f64) -> Vec<String> {
    let mut lines = label::wrap(&node.label, TEXT, widest, 2);
    lines.extend(node.weight.map(|weight| format!("weight {}", share(weight))));
    lines
}

/// The half height of the circle at which words of this height on the same side stand clear of each other.
fn height_for(on_circle: &[Point], tall: f64) -> f64 {
    let mut needed = 0.0_f64;
    for (i, one) in on_circle.iter().enumerate() {
        for other in on_circle[..i].iter().filter(|other| other.x * one.x > 0.01) {
            let apart = (one.y - other.y).abs().max(0.01);
            needed = needed.max((tall + 6.0) / apart - tall / 2.0);
        }
    }
    needed
}

/// A node with its words outside the circle: beside it, and the higher or lower the nearer it is to the top or the
/// bottom, out of the way of the arrows to its neighbours.
fn beside(at: Point, unit: Point, radius: f64, lines: Vec<String>) -> Place {
    let count = lines.len() as f64;
    let middle = at.y + 5.0 - LINE / 2.0 * (count - 1.0) + unit.y * LINE / 2.0 * count;
    let (anchor, x, first) = if unit.x > 0.1 {
        (Anchor::Start, at.x + radius + 7.0, middle)
    } else if unit.x < -0.1 {
        (Anchor::End, at.x - radius - 7.0, middle)
    } else {
        (Anchor::Middle, at.x, at.y - radius - 8.0 - LINE * (count - 1.0))
    };
    Place { at, lines, anchor, x, first }
}

fn draw_node(drawing: &mut Drawing, node: &NetworkNode, place: &Place, radius: f64) {
    let fill = if node.mark == Mark::Solid { Fill::Solid } else { Fill::Hollow };
    drawing.circle(place.at.x, place.at.y, radius, fill);
    let labels = place.lines.len() - usize::from(node.weight.is_some());
    let whole = place.lines[..labels].join(" ") == node.label;
    for (i, line) in place.lines.iter().enumerate() {
        let (full, words) = match i < labels {
            true => (if whole { line } else { &node.label }, Words::Label),
            false => (line, Words::Small),
        };
        drawing.titled(place.x, place.first + LINE * i as f64, line, full, place.anchor, words);
    }
}

/// An arrow as it is drawn.
struct Curve {
    arrow: NetworkArrow,
    points: Vec<Point>,
    /// Heads at both ends.
    both: bool,
    /// The unit vector across it, to the side that it bends to.
    across: Point,
}

fn curves(arrows: &[NetworkArrow], layout: &Layout, alike: bool) -> Vec<Curve> {
    let back = |a: &NetworkArrow| arrows.iter().any(|b| b.from == a.to && b.to == a.from);
    // Where all are alike one line with two heads stands for both.
    let drawn = arrows.iter().filter(|a| !(alike && a.from > a.to && back(a)));
    drawn.map(|a| curve(*a, layout, back(a), alike)).collect()
}

fn curve(arrow: NetworkArrow, layout: &Layout, back: bool, alike: bool) -> Curve {
    let (a, b) = (layout.places[arrow.from].at, layout.places[arrow.to].at);
    let (dx, dy) = (b.x - a.x, b.y - a.y);
    let length = (dx * dx + dy * dy).sqrt().max(1.0);
    let across = Point { x: dy / length, y: -dx / length };
    let bend = if back && !alike { layout.bend.min(0.1 * length) } else { 0.0 };
    // From just outside one node to just outside the other.
    let gap = layout.radius + 3.5;
    let (start, end) = (gap / length, 1.0 - gap / length);
    let at = |i: usize| {
        let t = start + (end - start) * i as f64 / BENDS as f64;
        let away = 4.0 * bend * t * (1.0 - t);
        Point { x: a.x + t * dx + away * across.x, y: a.y + t * dy + away * across.y }
    };
    Curve { arrow, points: (0..=BENDS).map(at).collect(), both: back && alike, across }
}

impl Curve {
    fn draw(&self, drawing: &mut Drawing, spec: &Network) {
        drawing.named(&passes(spec, &self.arrow), |drawing| {
            let points = &self.points;
            drawing.polyline(points.iter().map(|p| (p.x, p.y)), Stroke::Axis);
            head(drawing, points[BENDS - 3], points[BENDS]);
            if self.both {
                head(drawing, points[3], points[0]);
            }
        });
    }
}

/// An arrow head at `tip`, coming from `from`.
fn head(drawing: &mut Drawing, from: Point, tip: Point) {
    let (dx, dy) = (tip.x - from.x, tip.y - from.y);
    let length = (dx * dx + dy * dy).sqrt().max(1e-9);
    let (ux, uy) = (dx / length, dy / length);
    let wing = |side: f64| (tip.x - 8.0 * ux - side * 3.6 * uy, tip.y - 8.0 * uy + side * 3.6 * ux);
    drawing.polyline([wing(1.0), (tip.x, tip.y), wing(-1.0)].into_iter(), Stroke::Zero);
}

/// A rectangle that words or a node fill.
#[derive(Clone, Copy)]
struct Area {
    left: f64,
    top: f64,
    right: f64,
    bottom: f64,
}

impl Area {
    fn around(centre: Point, half_width: f64, half_height: f64) -> Self {
        Self {
            left: centre.x - half_width,
            top: centre.y - half_height,
            right: centre.x + half_width,
            bottom: centre.y + half_height,
        }
    }

    fn meets(&self, other: &Self) -> bool {
        self.left < other.right
            && other.left < self.right
            && self.top < other.bottom
            && other.top < self.bottom
    }

    fn holds(&self, p: &Point) -> bool {
        self.left < p.x && p.x < self.right && self.top < p.y && p.y < self.bottom
    }
}

/// Writes each share beside its arrow where it covers no words and no node, and crosses as few arrows as can be.
/// Returns how many have no such place.
fn write_shares(drawing: &mut Drawing, spec: &Network, curves: &[Curve], layout: &Layout) -> usize {
    let mut taken: Vec<Area> = layout.places.iter().flat_map(|place| areas(place, layout.radius)).collect();
    let mut omitted = 0;
    for curve in curves {
        let text = share(curve.arrow.share);
        let half_width = label::width(&text, SMALL) / 2.0 + 1.0;
        let mut best: Option<(usize, Area, Point)> = None;
        for (point, side) in candidates(curve) {
            let away = side * (3.0 + half_width * curve.across.x.abs() + 6.0 * curve.across.y.abs());
            let centre = Point { x: point.x + away * curve.across.x, y: point.y + away * curve.across.y };
            let area = Area::around(centre, half_width, 6.0);
            if area.left < 0.0 || area.right > WIDTH || taken.iter().any(|other| area.meets(other)) {
                continue;
            }
            let crossed = curves.iter().flat_map(|c| &c.points).filter(|p| area.holds(p)).count();
            if crossed <= MOST_CROSSED && best.is_none_or(|(least, ..)| crossed < least) {
                best = Some((crossed, area, centre));
            }
        }
        match best {
            Some((_, area, centre)) => {
                taken.push(area);
                let whole = passes(spec, &curve.arrow);
                drawing.titled(centre.x, centre.y + 4.5, &text, &whole, Anchor::Middle, Words::Small);
            }
            None => omitted += 1,
        }
    }
    omitted
}

/// Where a share may stand, best first: nearer to where its arrow starts than to where it ends, on the side that it
/// bends to.
fn candidates(curve: &Curve) -> impl Iterator<Item = (Point, f64)> {
    let along = [8, 9, 7, 10, 6, 11, 5, 12, 4, 13, 14, 15, 16];
    [1.0, -1.0].into_iter().flat_map(move |side| along.map(|i| (curve.points[i], side)))
}

fn areas(place: &Place, radius: f64) -> Vec<Area> {
    let mut areas = vec![Area::around(place.at, radius + 2.0, radius + 2.0)];
    for (i, line) in place.lines.iter().enumerate() {
        let width = label::width(line, TEXT);
        let left = match place.anchor {
            Anchor::Start => place.x,
            Anchor::Middle => place.x - width / 2.0,
            Anchor::End => place.x - width,
        };
        let baseline = place.first + LINE * i as f64;
        areas.push(Area { left, top: baseline - 12.0, right: left + width, bottom: baseline + 4.0 });
    }
    areas
}

/// "A passes 0.5 to B".
fn passes(spec: &Network, arrow: &NetworkArrow) -> String {
    let (from, to) = (&spec.nodes[arrow.from].label, &spec.nodes[arrow.to].label);
    format!("{from} passes {} to {to}", share(arrow.share))
}

fn describe(spec: &Network, arrows: &[NetworkArrow]) -> String {
    let n = spec.nodes.len();
    let mut sentences =
        vec![format!("A graph of {} {}", number::count(n), if n == 1 { "node" } else { "nodes" })];
    if !spec.words.is_empty() {
        sentences.push(spec.words.clone());
    }
    if n > MOST_NODES {
        sentences.push("It is not drawn; the table lists every node".to_owned());
        return joined(&sentences);
    }
    for node in &spec.nodes {
        let meaning = if node.mark == Mark::Solid { &spec.solid } else { &spec.hollow };
        let weight = node.weight.map(|weight| format!("weight {}", share(weight)));
        let parts: Vec<&str> = weight
            .iter()
            .map(String::as_str)
            .chain([meaning.as_str()])
            .filter(|part| !part.is_empty())
            .collect();
        let parts = parts.join("; ");
        sentences.push(if parts.is_empty() {
            node.label.clone()
        } else {
            format!("{}: {parts}", node.label)
        });
    }
    if arrows.len() <= MOST_SENTENCES {
        sentences.extend(arrows.iter().map(|arrow| passes(spec, arrow)));
    } else {
        let all = number::count(arrows.len());
        sentences.push(format!("{all} arrows; the table lists every one"));
        sentences.extend(common(arrows).map(passes_all));
    }
    joined(&sentences)
}

fn joined(sentences: &[String]) -> String {
    sentences.iter().map(|s| format!("{}.", s.trim_end_matches('.'))).collect::<Vec<_>>().join(" ")
}
