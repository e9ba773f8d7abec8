//! A table of text cells: aligned for a terminal, or as comma-separated values.

use comfy_table::{CellAlignment, ContentArrangement, presets};

/// A table with a header.
#[derive(Debug, Clone, Default, PartialEq, Eq)]
pub struct Table {
    header: Vec<String>,
    rows: Vec<Vec<String>>,
}

impl Table {
    /// An empty table with these columns.
    #[must_use]
    pub fn new(header: &[&str]) -> Self {
        Self { header: header.iter().map(|cell| (*cell).to_owned()).collect(), rows: Vec::new() }
    }

    /// Adds a row.
    pub fn push(&mut self, row: Vec<String>) {
        self.rows.push(row);
    }

    /// The first rows, and how many are left out.
    #[must_use]
    pub fn clipped(mut self, most: usize) -> (Self, usize) {
        let more = self.rows.len().saturating_sub(most);
        self.rows.truncate(most);
        (self, more)
    }

    /// Aligned text, indented by two spaces: words left, numbers right.
    #[must_use]
    pub fn to_text(&self) -> String {
        let mut table = comfy_table::Table::new();
        table.load_style(presets::NOTHING).set_content_arrangement(ContentArrangement::Disabled);
        table.set_header(&self.header);
        for row in &self.rows {
            table.add_row(row);
        }
        let numeric = |column: usize| {
            let number = |cell: &str| cell == "—" || cell.starts_with(|c: char| c.is_ascii_digit() || matches!(c, '-' | '−' | '+'));
            !self.rows.is_empty()
                && self.rows.iter().all(|row| row.get(column).is_some_and(|cell| number(cell) && !cell.contains(['x', 'y', 'z'])))
        };
        for (index, column) in table.column_iter_mut().enumerate() {
            column.set_padding((0, 2));
            column.set_cell_alignment(if numeric(index) { CellAlignment::Right } else { CellAlignment::Left });
        }
        table.lines().fold(String::new(), |text, line| text + "  " + line.trim_end() + "\n")
    }

    /// Comma-separated values with a header line (RFC 4180).
    #[must_use]
    pub fn to_csv(&self) -> String {
        let mut writer = csv::Writer::from_writer(Vec::new());
        // Writing to memory cannot fail, and every row has the width of the header.
        let written = std::iter::once(&self.header).chain(&self.rows).try_for_each(|row| writer.write_record(row));
        let bytes = written.ok().and_then(|()| writer.into_inner().ok()).unwrap_or_default();
        String::from_utf8(bytes).unwrap_or_default()
    }
}
