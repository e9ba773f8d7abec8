//! Results for a person and for programs: text, JSON, CSV.
//!
//! In: results. Out: text. Computes nothing.

mod budget;
mod budget_json;
mod check;
mod explain;
mod json;
mod layout;
mod momentum;
mod table;
mod unload;
mod words;

pub use budget::budget_text;
pub use budget::ledger_table;
pub use budget_json::budget_json;
pub use check::{check_text, footer};
pub use explain::{explain_json, explain_table, explain_text, row_named, row_names};
pub use json::{Provenance, document, layout_json, momentum_json, unload_json};
pub use layout::{layout_table, layout_text};
pub use momentum::{momentum_table, momentum_text};
pub use table::Table;
pub use unload::{unload_table, unload_text};
