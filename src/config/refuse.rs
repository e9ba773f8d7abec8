//! What is not allowed in a configuration although YAML has it, and what is not YAML.

use std::ops::Range;
use std::sync::Arc;

use saphyr_parser::ScanError;

use super::diagnostic::Diagnostic;
use super::source::{Place, Source};
use super::spans::Scan;
use super::syntax::{Explained, explain};

impl Scan<'_> {
    pub(crate) fn place(&self, range: &Range<usize>) -> Place {
        let end = range.end.min(self.source.text().len());
        Place { source: Arc::clone(self.source), range: range.start.min(end)..end }
    }

    pub(crate) fn fault(&self, range: &Range<usize>, message: impl Into<String>, label: &str) -> Diagnostic {
        Diagnostic::error_at(self.place(range).first_line(), message).label(label)
    }

    pub(crate) fn anchored(&mut self, range: &Range<usize>) {
        let message = "anchors (`&name`) and aliases (`*name`) are not allowed";
        let fault = self.fault(range, message, "part of an anchor or alias");
        self.faults.push(fault.help("write the value out; start text that begins with `&` or `*` with a quote"));
    }

    pub(crate) fn properties(&mut self, range: &Range<usize>, anchor: usize, tagged: bool) {
        if anchor > 0 {
            self.anchored(range);
        }
        if tagged {
            let fault = self.fault(range, "tags (`!name`) are not allowed", "has a tag");
            self.faults.push(fault.help("delete the tag; start text that begins with `!` with a quote"));
        }
    }

    pub(crate) fn syntax(&mut self, error: &ScanError) -> Option<()> {
        let text = self.source.slice(&(0..self.offsets.start + self.text.len()));
        let trimmed = text.trim_end();
        let mut at = self.offsets.byte(error.marker().index()).min(text.len());
        let mut label = "here";
        if error.info().contains("found a tab") {
            // The parser points to the start of the text, the tab is at the start of a later line.
            let tab = text.get(at..).and_then(|rest| rest.find("\n\t"));
            at = tab.map_or(at, |tab| at + tab + 1);
        } else if at >= trimmed.len() {
            // Nothing to mark at the end: take the last character before it.
            at = trimmed.char_indices().next_back().map_or(0, |(last, _)| last);
            label = "the text ends here, too early";
        }
        let next = text.get(at..).and_then(|rest| rest.chars().next());
        let range = at..at + next.map_or(0, char::len_utf8);
        let Explained { message, help } = explain(error.info());
        let mut fault = self.fault(&range, message, label).help(help);
        if let Some(bracket) = self.open_bracket().filter(|bracket| bracket.start != at) {
            fault = fault.also_at(self.place(&bracket), "this is still open");
        }
        self.faults.push(fault);
        None
    }

    /// The innermost bracket that is open.
    pub(crate) fn open_bracket(&self) -> Option<Range<usize>> {
        let start = self.frames.last()?.start;
        let range = start..start + 1;
        matches!(self.source.slice(&range), "[" | "{").then_some(range)
    }
}

/// The fault of a text without any value.
pub(crate) fn empty(source: &Arc<Source>, within: &Range<usize>) -> Diagnostic {
    let place = Place { source: Arc::clone(source), range: within.start..within.start };
    let help = if source.rank() == 0 {
        "`couplet new FILE` writes a commented example to start from"
    } else {
        "write `key: value` into it, or leave it out"
    };
    Diagnostic::error_at(place, format!("`{}` is empty", source.name())).label("expected `key: value`").help(help)
}
