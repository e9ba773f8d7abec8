//! From the characters that the YAML parser counts to bytes.

use std::ops::Range;

use saphyr_parser::Span;

/// Byte offsets of characters; the parser counts characters.
pub(crate) struct Offsets {
    /// Where the text starts in its source.
    pub(crate) start: usize,
    /// Offset of every character and of the end, or `None` if all characters are one byte.
    table: Option<Vec<usize>>,
}

impl Offsets {
    pub(crate) fn new(start: usize, text: &str) -> Self {
        let ends = || text.char_indices().map(|(at, _)| at).chain([text.len()]).collect();
        Self { start, table: (!text.is_ascii()).then(ends) }
    }

    pub(crate) fn byte(&self, character: usize) -> usize {
        let relative = match &self.table {
            None => character,
            Some(table) => table.get(character).or(table.last()).copied().unwrap_or_default(),
        };
        self.start + relative
    }

    pub(crate) fn range(&self, span: Span) -> Range<usize> {
        let start = self.byte(span.start.index());
        start..self.byte(span.end.index()).max(start)
    }
}
