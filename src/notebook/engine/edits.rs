//! The edits that a notebook takes.

use super::cells::Slot;
use super::{Condition, Engine};
use crate::notebook::edit;
use crate::notebook::fields::Holds;
use crate::notebook::history::{Moment, Step};
use crate::notebook::kinds::{Kind, Read};
use crate::notebook::outcome::Value;
use crate::table::{self, ColumnKind, Table};
use std::sync::Arc;

/// One edit. Cells are named by their identity.
#[derive(Debug, Clone, PartialEq)]
pub enum Edit {
    /// The text face: the cell's whole text.
    Text {
        cell: u32,
        text: String,
    },
    /// A blank of the sentence, as typed; empty brings the default back.
    Field {
        cell: u32,
        field: String,
        value: String,
    },
    /// A new cell after the given one, or at the start.
    Add {
        kind: Kind,
        after: Option<u32>,
    },
    Duplicate {
        cell: u32,
    },
    Remove {
        cell: u32,
    },
    /// Moves the cell to the place `to`, counted from 0.
    Move {
        cell: u32,
        to: usize,
    },
    /// Gives the cell another name; the cells that read from it follow.
    Rename {
        cell: u32,
        name: String,
    },
    /// One value of a data cell's table: data row and column from 0.
    TableValue {
        cell: u32,
        row: usize,
        column: usize,
        value: String,
    },
    /// A table pasted or dropped: into the data cell, or as a new data cell with a study to go with it.
    Table {
        cell: Option<u32>,
        text: String,
    },
    Undo,
    Redo,
}

/// Why an edit was not carried out; nothing has changed.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("{0}")]
pub struct Refused(pub String);

impl Engine {
    /// Carries out an edit and settles what is already known.
    ///
    /// # Errors
    /// [`Refused`] in words; then nothing has changed.
    pub fn apply(&mut self, edit: Edit) -> Result<(), Refused> {
        match edit {
            Edit::Undo => {
                return self.step(|engine, now| engine.history.undo(now), "There is nothing to undo.");
            }
            Edit::Redo => {
                return self.step(|engine, now| engine.history.redo(now), "There is nothing to redo.");
            }
            _ => {}
        }
        let before = self.moment();
        let step = match &edit {
            Edit::Text { cell, .. } => Step::Typing(*cell),
            _ => Step::Other,
        };
        if let Err(refused) = self.carry_out(edit) {
            self.restore(before);
            return Err(refused);
        }
        if self.moment() != before {
            self.history.note(before, step);
        }
        self.relink();
        Ok(())
    }

    fn carry_out(&mut self, edit: Edit) -> Result<(), Refused> {
        match edit {
            Edit::Text { cell, text } => {
                let index = self.place(cell)?;
                self.slots[index].set_text(text.into());
            }
            Edit::Field { cell, field, value } => self.set_field(cell, &field, &value)?,
            Edit::Add { kind, after } => {
                let at = match after {
                    Some(after) => self.place(after)? + 1,
                    None => 0,
                };
                self.add(kind, at);
            }
            Edit::Duplicate { cell } => self.duplicate(cell)?,
            Edit::Remove { cell } => {
                let index = self.place(cell)?;
                self.slots.remove(index);
            }
            Edit::Move { cell, to } => {
                let index = self.place(cell)?;
                let slot = self.slots.remove(index);
                self.slots.insert(to.min(self.slots.len()), slot);
            }
            Edit::Rename { cell, name } => self.rename(cell, name.trim())?,
            Edit::TableValue { cell, row, column, value } => self.set_value(cell, row, column, &value)?,
            Edit::Table { cell: Some(cell), text } => self.set_field(cell, "table", &with_end(text))?,
            Edit::Table { cell: None, text } => self.add_table(&with_end(text))?,
            Edit::Undo | Edit::Redo => {}
        }
        Ok(())
    }

    fn place(&self, id: u32) -> Result<usize, Refused> {
        self.slots
            .iter()
            .position(|slot| slot.id == id)
            .ok_or_else(|| Refused("That cell is no longer there.".to_string()))
    }

    fn moment(&self) -> Moment {
        self.slots.iter().map(|slot| (slot.id, slot.text.clone())).collect()
    }

    fn step(
        &mut self,
        turn: impl Fn(&mut Self, Moment) -> Option<Moment>,
        nothing: &str,
    ) -> Result<(), Refused> {
        let now = self.moment();
        let moment = turn(self, now).ok_or_else(|| Refused(nothing.to_string()))?;
        self.restore(moment);
        Ok(())
    }

    /// Brings the cells back to what they were at `moment`.
    fn restore(&mut self, moment: Moment) {
        let mut old: Vec<Slot> = std::mem::take(&mut self.slots);
        for (id, text) in moment {
            let slot = match old.iter().position(|slot| slot.id == id) {
                Some(index) => {
                    let mut slot = old.swap_remove(index);
                    if slot.text != text {
                        slot.set_text(text);
                    }
                    slot
                }
                None => Slot::new(id, text, 1),
            };
            self.slots.push(slot);
        }
        self.relink();
    }

    fn set_field(&mut self, cell: u32, name: &str, value: &str) -> Result<(), Refused> {
        let index = self.place(cell)?;
        let field = self.slots[index].kind.and_then(|kind| kind.table().field(name));
        let field = field.ok_or_else(|| Refused(format!("The cell has no field \"{name}\".")))?;
        let text = edit::set_field(&self.slots[index].text, field, value).map_err(Refused)?;
        self.slots[index].set_text(text.into());
        Ok(())
    }

    fn add(&mut self, kind: Kind, at: usize) -> usize {
        let references: Vec<(&str, String)> = kind
            .table()
            .fields
            .iter()
            .filter_map(|field| self.nearest_source(field.holds, at).map(|name| (field.name, name)))
            .collect();
        let name = if kind == Kind::Note { String::new() } else { self.free_name(kind.name()) };
        let id = self.new_id();
        self.slots.insert(
            at.min(self.slots.len()),
            Slot::new(id, edit::new_cell(kind, &name, &references).into(), 1),
        );
        at
    }

    /// The nearest named cell above `at` that the field may read from, or else the first one below.
    fn nearest_source(&self, holds: Holds, at: usize) -> Option<String> {
        let Holds::Cell(kinds) = holds else { return None };
        let fits = |slot: &&Slot| slot.name.is_some() && slot.kind.is_some_and(|kind| kinds.contains(&kind));
        let (above, below) = self.slots.split_at(at.min(self.slots.len()));
        above.iter().rev().find(fits).or_else(|| below.iter().find(fits)).and_then(|slot| slot.name.clone())
    }

    /// `wanted`, or `wanted 2`, `wanted 3`, whichever no cell is called yet.
    fn free_name(&self, wanted: &str) -> String {
        let taken = |name: &str| self.slots.iter().any(|slot| slot.name.as_deref() == Some(name));
        let numbered = (2..).map(|number| format!("{wanted} {number}"));
        std::iter::once(wanted.to_string()).chain(numbered).find(|name| !taken(name)).unwrap_or_default()
    }

    fn duplicate(&mut self, cell: u32) -> Result<(), Refused> {
        let index = self.place(cell)?;
        let text = match &self.slots[index].name {
            Some(name) => {
                let free = self.free_name(name);
                edit::set_name(&self.slots[index].text, &free).map_err(Refused)?.into()
            }
            None => self.slots[index].text.clone(),
        };
        let id = self.new_id();
        self.slots.insert(index + 1, Slot::new(id, text, 1));
        Ok(())
    }

    fn rename(&mut self, cell: u32, name: &str) -> Result<(), Refused> {
        let index = self.place(cell)?;
        if name.is_empty() {
            return Err(Refused("A cell's name cannot be empty.".to_string()));
        }
        if self.slots.iter().any(|slot| slot.id != cell && slot.name.as_deref() == Some(name)) {
            return Err(Refused(format!("Another cell is called \"{name}\" already. Choose another name.")));
        }
        let old = self.slots[index].name.clone();
        let text = edit::set_name(&self.slots[index].text, name).map_err(Refused)?;
        self.slots[index].set_text(text.into());
        let Some(old) = old else { return Ok(()) };
        for slot in &mut self.slots {
            if let Some(text) =
                slot.kind.and_then(|kind| edit::rename_references(&slot.text, kind, &old, name))
            {
                slot.set_text(text.into());
            }
        }
        Ok(())
    }

    /// The table that the data cell holds at present.
    ///
    /// # Errors
    /// [`Refused`] when the cell has no readable table.
    pub fn table(&self, cell: u32) -> Result<&Arc<Table>, Refused> {
        let slot = &self.slots[self.place(cell)?];
        match slot.outcome.as_ref().and_then(|outcome| outcome.value.as_ref()) {
            Some(Value::Table(table)) if slot.condition == Condition::Settled => Ok(table),
            _ => Err(Refused("The table cannot be read yet; mend the cell's text first.".to_string())),
        }
    }

    fn set_value(&mut self, cell: u32, row: usize, column: usize, value: &str) -> Result<(), Refused> {
        let table = self.table(cell)?.clone();
        let index = self.place(cell)?;
        let text = self.slots[index].ask.as_ref().and_then(|ask| ask.text_of("table")).unwrap_or_default();
        let changed = table::replace_value(text, table.separator, row, column, value).ok_or_else(|| {
            Refused(format!("Row {}, column {} is not a field of the pasted table; columns computed from others change with them.", row + 1, column + 1))
        })?;
        self.set_field(cell, "table", &changed)
    }

    /// A data cell with the table at the end of the notebook, and a study to go with it if there is none. The study's
    /// blanks are filled where the table leaves no choice: one column of numbers, one of labels.
    fn add_table(&mut self, text: &str) -> Result<(), Refused> {
        let at = self.add(Kind::Data, self.slots.len());
        let (id, has_study) =
            (self.slots[at].id, self.slots.iter().any(|slot| slot.kind == Some(Kind::Study)));
        self.set_field(id, "table", text)?;
        if has_study {
            return Ok(());
        }
        let study = self.add(Kind::Study, at + 1);
        let study = self.slots[study].id;
        let data_name = self.slots[at].name.clone().unwrap_or_default();
        self.set_field(study, "data", &data_name)?;
        let outcome =
            self.slots[at].ask.as_ref().map(|ask| ask.kind.evaluate(ask, &Read::default()).finish());
        if let Some(Value::Table(table)) = outcome.and_then(|outcome| outcome.value) {
            let only = |kind| {
                let mut of_kind = table.columns.iter().filter(|column| column.kind == kind);
                of_kind.next().filter(|_| of_kind.next().is_none()).map(|column| column.name.clone())
            };
            for (field, kind) in [("outcome", ColumnKind::Number), ("groups", ColumnKind::Label)] {
                if let Some(name) = only(kind) {
                    self.set_field(study, field, &name)?;
                }
            }
        }
        Ok(())
    }
}

/// The pasted text with one line end at its end, so that the closing quotes stand on their own line.
fn with_end(text: String) -> String {
    format!("{}\n", text.trim_end_matches(['\n', '\r']))
}
