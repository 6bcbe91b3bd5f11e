//! What `weigh` and the text tray say: JSON for machines, tables for people.

mod all;
mod columns;
mod json;
mod table;
mod tray;

pub(crate) use json::rounded;
pub use json::{SCHEMA, json_line, json_line_with_all};
pub use table::{table, table_with_all};
pub use tray::tray;
