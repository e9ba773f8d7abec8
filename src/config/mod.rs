//! The configuration: from files and flags to values that know where they were written.
//!
//! In: a YAML file, overlays laid over it and `--set` flags. Out: a [`Document`] whose every value
//! knows its file, line and column, and every fault as a [`Diagnostic`]. Knows nothing of what the
//! values mean physically; that is `vehicle`'s part.

#![deny(clippy::expect_used, clippy::indexing_slicing)]

mod choose;
mod decode;
mod diagnostic;
mod document;
mod nearest;
mod node;
mod offsets;
mod overlay;
mod path;
mod refuse;
mod render;
mod schema;
mod setting;
mod source;
mod spans;
mod syntax;
mod walk;

pub use decode::decode;
pub use diagnostic::{Diagnostic, Mark, Related, Severity, Site};
pub use document::Document;
pub use nearest::{did_you_mean, known, nearest};
pub use path::{Path, Segment};
pub use render::{render_all, sort, to_json};
pub use source::{Place, Source};
pub use walk::{Leaf, check_structure};
