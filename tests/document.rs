//! The configuration layer from outside: what is read, what is refused, and how it is said.

#[path = "document/demo.rs"]
mod demo;
#[path = "document/hostile.rs"]
mod hostile;
#[path = "document/layers.rs"]
mod layers;
#[path = "document/shown.rs"]
mod shown;
#[path = "document/structure.rs"]
mod structure;
#[path = "document/traps.rs"]
mod traps;

use couplet::config::{Diagnostic, Document, render_all};

/// Reads one text without overlays or settings.
fn read(text: &str) -> Result<Document, Vec<Diagnostic>> {
    Document::from_text("mission.yaml", text, &[], &[] as &[&str])
}

/// The faults of a text that must not be read, as shown.
fn refused(text: &str) -> String {
    render_all(&read(text).expect_err(text), None, false)
}

/// Message, line and column of each fault of a text that must not be read.
fn faults(text: &str) -> Vec<(String, usize, usize)> {
    positions(&read(text).expect_err(text), None)
}

fn positions(faults: &[Diagnostic], document: Option<&Document>) -> Vec<(String, usize, usize)> {
    let position = |fault: &Diagnostic| {
        let place = fault.place(document).expect("a place");
        let (line, column) = place.source.line_column(place.range.start);
        (fault.message.clone(), line, column)
    };
    faults.iter().map(position).collect()
}
