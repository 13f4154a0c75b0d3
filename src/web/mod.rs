//! The browser boundary: a request in, messages out, and nothing else. Byte positions become UTF-16 positions
//! here. The message types are this layer's own, so that the core can change without the page noticing.

mod messages;
mod session;

pub use session::Session;
