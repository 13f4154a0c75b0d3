//! One engine and the page that it talks to.

use super::messages::{KindMessage, Message, Numbered, Request, rows, update};
use crate::notebook::engine::{CellView, Engine};
use crate::notebook::report;
use serde::Serialize;
use std::collections::BTreeMap;
use std::sync::Arc;
use wasm_bindgen::prelude::*;

/// Cells are computed for about this long, in milliseconds, before the page is told and newer requests are heard: a
/// frame of a screen with sixty a second. Cells that take longer are told one by one; long work is cut into slices below this.
const SLICE: f64 = 16.0;

/// The page is told of progress no more often than this, in milliseconds: a line that changes faster is not read, and every
/// telling draws the cell.
const CALM: f64 = 250.0;

/// Texts longer than this are not sent again while they stay the same.
const LONG_TEXT: usize = 20_000;

/// An engine behind the page: requests come in through [`Session::handle`], messages go out through the function
/// given to it, and [`Session::advance`] works one slice.
#[wasm_bindgen]
pub struct Session {
    engine: Engine,
    post: js_sys::Function,
    seq: u32,
    revision: u32,
    told: BTreeMap<u32, Arc<str>>,
    /// When the page was last told.
    told_at: f64,
}

#[wasm_bindgen]
impl Session {
    /// A session with an empty notebook; says `ready` at once.
    #[wasm_bindgen(constructor)]
    pub fn new(post: js_sys::Function) -> Session {
        std::panic::set_hook(Box::new(|info| web_sys::console::error_1(&info.to_string().into())));
        let session =
            Session { engine: Engine::new(), post, seq: 0, revision: 0, told: BTreeMap::new(), told_at: 0.0 };
        session.say(&Message::Ready { version: env!("CARGO_PKG_VERSION"), kinds: KindMessage::all() });
        session
    }

    /// Carries out one request. A request that is not understood is refused in words.
    pub fn handle(&mut self, request: JsValue) {
        match serde_wasm_bindgen::from_value::<Numbered>(request) {
            Ok(numbered) => {
                self.seq = numbered.seq;
                self.carry_out(numbered.request);
            }
            Err(error) => {
                self.refuse(format!("The page asked for something that the engine does not know: {error}"))
            }
        }
    }

    /// Computes a slice of what is left and tells the page; false when nothing is left to compute.
    pub fn advance(&mut self) -> bool {
        let worked = self.work();
        let news = self.engine.has_new_answers() || self.engine.is_settled();
        if worked && (news || js_sys::Date::now() - self.told_at >= CALM) {
            self.tell();
        }
        !self.engine.is_settled()
    }
}

impl Session {
    fn carry_out(&mut self, request: Request) {
        let result = match request.into_edit() {
            Ok(edit) => self.engine.apply(edit).map_err(|refused| refused.to_string()),
            Err(Request::Open { text }) => self.engine.open(&text),
            Err(Request::Rows { cell, from, count }) => return self.say_rows(cell, from, count),
            Err(Request::Save {}) => return self.say(&Message::Saved { text: self.engine.write() }),
            Err(Request::Report { date }) => {
                return self.say(&Message::Report { html: report::document(&self.engine, date.as_deref()) });
            }
            Err(_) => Ok(()),
        };
        match result {
            // What takes no longer than a frame is told together with the edit that it follows from.
            Ok(()) => {
                self.work();
                self.tell();
            }
            Err(message) => self.refuse(message),
        }
    }

    /// Computes for one slice; false when there was nothing to compute.
    fn work(&mut self) -> bool {
        let start = js_sys::Date::now();
        let mut worked = false;
        while self.engine.advance() {
            worked = true;
            if js_sys::Date::now() - start >= SLICE {
                break;
            }
        }
        worked
    }

    fn tell(&mut self) {
        self.revision += 1;
        self.told_at = js_sys::Date::now();
        let told = &mut self.told;
        let mut known = |cell: &CellView<'_>| match told.insert(cell.id, cell.text.clone()) {
            Some(before) => before == *cell.text && before.len() > LONG_TEXT,
            None => false,
        };
        let message = update(&mut self.engine, self.seq, &mut known, self.revision);
        self.say(&message);
    }

    fn say_rows(&self, cell: u32, from: usize, count: usize) {
        match self.engine.table(cell) {
            Ok(table) => self.say(&rows(cell, table, from, count)),
            Err(refused) => self.refuse(refused.to_string()),
        }
    }

    fn refuse(&self, message: String) {
        self.say(&Message::Refused { seq: self.seq, message });
    }

    fn say(&self, message: &Message) {
        let serializer = serde_wasm_bindgen::Serializer::json_compatible();
        let sent = match message.serialize(&serializer) {
            Ok(value) => self.post.call1(&JsValue::NULL, &value).map(|_| ()),
            Err(error) => Err(error.into()),
        };
        if let Err(error) = sent {
            web_sys::console::error_1(&error);
        }
    }
}
