//! Results for a person and for programs: text, JSON, CSV.
//!
//! In: results. Out: text. Computes nothing.

mod budget;
mod budget_json;
mod check;
mod compare;
mod explain;
mod json;
mod layout;
mod momentum;
mod sweep;
mod table;
mod unload;
mod words;

pub use budget::budget_text;
pub use budget::ledger_table;
pub use budget_json::budget_json;
pub use check::{check_text, footer};
pub use compare::{Alternative, Verdict, compare_json, compare_table, compare_text, verdicts};
pub use explain::{explain_json, explain_table, explain_text, row_named, row_names};
pub use json::{Provenance, document, layout_json, momentum_json, unload_json};
pub use layout::{layout_table, layout_text};
pub use momentum::{momentum_table, momentum_text};
pub use sweep::{Found, Point, Sweep, sweep_json, sweep_table, sweep_text};
pub use table::Table;
pub use unload::{unload_table, unload_text};
