//! What `weigh` and the text tray say: JSON for machines, tables for people.

mod columns;
mod json;
mod table;
mod tray;

pub use json::{SCHEMA, json_line};
pub use table::table;
pub use tray::tray;
