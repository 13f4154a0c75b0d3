//! Which cell reads from which: names to cells, an order in which every cell comes after those that it reads
//! from, and what is wrong with the links.

use super::ask::Ask;
use super::diagnostics::{Diagnostic, quoted_choices, suggestion};
use super::fields::Holds;
use super::kinds::Kind;
use std::collections::BTreeMap;
use std::collections::btree_map::Entry;

/// What the graph needs to know of a cell. Cells are spoken of by their place in the list.
pub struct Node<'a> {
    pub kind: Option<Kind>,
    pub name: Option<&'a str>,
    pub ask: Option<&'a Ask>,
}

/// The links of a notebook.
#[derive(Debug, Clone, Default)]
pub struct Graph {
    /// For each cell the cells that it reads from, by field.
    pub reads: Vec<Vec<(&'static str, usize)>>,
    /// For each cell what is wrong with its name and links.
    pub problems: Vec<Vec<Diagnostic>>,
    /// Every cell once, each after those that it reads from; cells in a cycle come last.
    pub order: Vec<usize>,
}

impl Graph {
    /// Links the cells.
    pub fn link(nodes: &[Node]) -> Self {
        let mut graph = Self {
            reads: vec![Vec::new(); nodes.len()],
            problems: vec![Vec::new(); nodes.len()],
            order: Vec::new(),
        };
        let mut by_name: BTreeMap<&str, usize> = BTreeMap::new();
        for (index, node) in nodes.iter().enumerate() {
            let Some(name) = node.name else { continue };
            if let Some(first) = by_name.get(name) {
                let span = node.ask.map_or(0..0, |ask| ask.span("name"));
                let message = format!(
                    "Two cells are called \"{name}\": this one and cell {}. Give this one another name.",
                    first + 1
                );
                graph.problems[index].push(Diagnostic::new(message, span, Some("name")));
            } else {
                by_name.insert(name, index);
            }
        }
        for (index, node) in nodes.iter().enumerate() {
            if let Some(ask) = node.ask {
                graph.link_cell(index, ask, nodes, &by_name);
            }
        }
        graph.sort();
        graph.name_cycles(nodes);
        graph
    }

    fn link_cell(&mut self, index: usize, ask: &Ask, nodes: &[Node], by_name: &BTreeMap<&str, usize>) {
        for (field, name) in ask.references() {
            let Holds::Cell(kinds) = field.holds else { continue };
            let fits = |at: usize| nodes[at].kind.is_none_or(|kind| kinds.contains(&kind));
            let problem = match by_name.get(name) {
                Some(&at) if at == index => Some(format!(
                    "The cell \"{name}\" reads from itself. Name another cell in {}.",
                    field.name
                )),
                Some(&at) if fits(at) => {
                    self.reads[index].push((field.name, at));
                    None
                }
                Some(&at) => Some(format!(
                    "{}: \"{name}\" is a {} cell, but a {} is needed.",
                    field.name,
                    nodes[at].kind.map_or("broken", Kind::name),
                    quoted_choices(kinds.iter().map(|kind| kind.name())).replace('"', "")
                )),
                None => {
                    let known = || {
                        by_name.iter().filter(|(_, at)| fits(**at) && **at != index).map(|(name, _)| *name)
                    };
                    let have = match known().next() {
                        Some(_) => format!("there are {}", quoted_choices(known()).replace(" or ", " and ")),
                        None => format!(
                            "add a {} cell with that name first",
                            kinds.first().map_or("", |kind| kind.name())
                        ),
                    };
                    Some(format!(
                        "{}: no cell is called \"{name}\"; {have}.{}",
                        field.name,
                        suggestion(name, known())
                    ))
                }
            };
            if let Some(message) = problem {
                self.problems[index].push(Diagnostic::new(message, ask.span(field.name), Some(field.name)));
            }
        }
    }

    /// Kahn (1962), Comm. ACM 5, 558: repeatedly take the first cell all of whose sources are taken.
    fn sort(&mut self) {
        let count = self.reads.len();
        let mut open: Vec<usize> = self.reads.iter().map(Vec::len).collect();
        let mut readers: Vec<Vec<usize>> = vec![Vec::new(); count];
        for (index, reads) in self.reads.iter().enumerate() {
            for (_, source) in reads {
                readers[*source].push(index);
            }
        }
        let mut ready: std::collections::BTreeSet<usize> =
            (0..count).filter(|&index| open[index] == 0).collect();
        while let Some(index) = ready.pop_first() {
            self.order.push(index);
            for &reader in &readers[index] {
                open[reader] -= 1;
                if open[reader] == 0 {
                    ready.insert(reader);
                }
            }
        }
        let taken: std::collections::BTreeSet<usize> = self.order.iter().copied().collect();
        self.order.extend((0..count).filter(|index| !taken.contains(index)));
    }

    /// Notes, on every cell that reads from itself through others, the way round.
    fn name_cycles(&mut self, nodes: &[Node]) {
        for start in 0..nodes.len() {
            let Some(path) = self.way_back(start) else { continue };
            let names = path.iter().map(|&at| format!("\"{}\"", nodes[at].name.unwrap_or("this cell")));
            let way = names.collect::<Vec<_>>().join(" reads from ");
            let field = self.reads[start]
                .iter()
                .find(|(_, at)| path.get(1) == Some(at))
                .map_or("data", |(field, _)| *field);
            let span = nodes[start].ask.map_or(0..0, |ask| ask.span(field));
            let message = format!("This cell reads from itself: {way}. Change {field} to break the circle.");
            self.problems[start].push(Diagnostic::new(message, span, Some(field)));
        }
    }

    /// The shortest path from a cell through what it reads back to itself.
    fn way_back(&self, start: usize) -> Option<Vec<usize>> {
        let mut came_from: BTreeMap<usize, usize> = BTreeMap::new();
        let mut queue = std::collections::VecDeque::from([start]);
        while let Some(at) = queue.pop_front() {
            for &(_, source) in &self.reads[at] {
                if source == start {
                    let mut path = vec![start, at];
                    let mut step = at;
                    while step != start {
                        step = came_from[&step];
                        path.push(step);
                    }
                    path.reverse();
                    if at == start {
                        path.truncate(1);
                    }
                    path.push(start);
                    path.dedup();
                    return Some(path);
                }
                if let Entry::Vacant(place) = came_from.entry(source) {
                    place.insert(at);
                    queue.push_back(source);
                }
            }
        }
        None
    }
}
