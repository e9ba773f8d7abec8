//! Faults as text with the source line and the marked place, and as JSON.

use std::fmt::Write as _;
use std::sync::Arc;

use annotate_snippets::{Annotation, AnnotationKind, Group, Level, Renderer, Snippet, normalize_untrusted_str};
use serde_json::json;

use super::diagnostic::{Diagnostic, Severity, Site};
use super::document::Document;
use super::source::Place;

/// Most faults that are shown in full; the rest are counted.
const MOST_SHOWN: usize = 100;
/// Most bytes of a line that are shown after the start of the marked place.
const MOST_OF_A_LINE: usize = 200;
/// Places further apart than this many bytes are shown one by one.
const MOST_BETWEEN: usize = 4000;

impl Diagnostic {
    /// Where it stands, or `None` if nowhere. Without a document only faults found while reading
    /// have a place.
    #[must_use]
    pub fn place(&self, document: Option<&Document>) -> Option<Place> {
        locate(&self.site, document)
    }

    /// The fault as text: message, file, line and column, the line itself with the place marked,
    /// and how to mend it. With `styled`, coloured by ANSI escape codes.
    ///
    /// `document` is `None` for the faults of [`Document::load`].
    #[must_use]
    pub fn render(&self, document: Option<&Document>, styled: bool) -> String {
        let level = match self.severity {
            Severity::Error => Level::ERROR,
            Severity::Warning => Level::WARNING,
        };
        let mut title = level.primary_title(self.message.as_str());
        if let Some(name) = self.name {
            title = title.id(name);
        }
        let mut group = Group::with_title(title);
        let place = self.place(document);
        let others: Vec<(Place, &str)> =
            self.related.iter().filter_map(|other| Some((locate(&other.site, document)?, other.label.as_str()))).collect();
        if let Some(place) = &place {
            group = group.elements(snippets(place, &self.label, &others));
        }
        if let Some(help) = &self.help {
            group = group.element(Level::HELP.message(normalize_untrusted_str(help)));
        }
        let renderer = if styled { Renderer::styled() } else { Renderer::plain() };
        renderer.render(&[group])
    }
}

fn locate(site: &Site, document: Option<&Document>) -> Option<Place> {
    match (site, document) {
        (Site::Place(place), _) => Some(place.clone()),
        (_, Some(document)) => document.locate(site),
        _ => None,
    }
}

/// One snippet for all places if they stand close together in one source, else one each.
fn snippets<'a>(place: &'a Place, label: &'a str, others: &'a [(Place, &'a str)]) -> Vec<Snippet<'a, Annotation<'a>>> {
    let near = |other: &Place| {
        let distance = other.range.start.abs_diff(place.range.start);
        Arc::ptr_eq(&other.source, &place.source) && distance <= MOST_BETWEEN
    };
    let (close, far): (Vec<_>, Vec<_>) = others.iter().partition(|(other, _)| near(other));
    let mut marks = vec![(place, label, AnnotationKind::Primary)];
    marks.extend(close.iter().map(|(place, label)| (place, *label, AnnotationKind::Context)));
    let mut found = vec![snippet(place, &marks)];
    for (place, label) in far {
        found.push(snippet(place, &[(place, *label, AnnotationKind::Context)]));
    }
    found
}

/// The lines of `marks`, which stand in the source of `place`.
fn snippet<'a>(place: &'a Place, marks: &[(&'a Place, &'a str, AnnotationKind)]) -> Snippet<'a, Annotation<'a>> {
    let source = &*place.source;
    let text = source.text();
    let first = marks.iter().map(|(mark, ..)| mark.range.start).min().unwrap_or_default();
    let last = marks.iter().map(|(mark, ..)| mark.range.start).max().unwrap_or_default();
    let start = source.line_start(first);
    let most = text.floor_char_boundary(last.saturating_add(MOST_OF_A_LINE));
    let end = source.line_end(last).min(most).max(last);
    let mut snippet = Snippet::source(source.slice(&(start..end))).line_start(source.line_column(first).0).path(source.name());
    for (mark, label, kind) in marks {
        let from = mark.range.start.min(end) - start;
        let to = mark.first_line().range.end.clamp(start + from, end) - start;
        let annotation = kind.span(from..to);
        let label = (!label.is_empty()).then_some(*label);
        snippet = snippet.annotation(annotation.label(label));
    }
    snippet
}

/// Puts faults in the order in which a reader meets them: the file, overlays, flags, each from top
/// to bottom; faults without a place first.
pub fn sort(faults: &mut [Diagnostic], document: Option<&Document>) {
    faults.sort_by_cached_key(|fault| fault.place(document).map(|place| (place.source.rank(), place.range.start)));
}

/// All faults as text in file order, an empty line between two, at most a hundred in full.
#[must_use]
pub fn render_all(faults: &[Diagnostic], document: Option<&Document>, styled: bool) -> String {
    let mut ordered = faults.to_vec();
    sort(&mut ordered, document);
    let mut text = String::new();
    for fault in ordered.iter().take(MOST_SHOWN) {
        text.push_str(&fault.render(document, styled));
        text.push_str("\n\n");
    }
    if let Some(more) = ordered.len().checked_sub(MOST_SHOWN).filter(|&more| more > 0) {
        let _ = writeln!(text, "… and {more} more\n");
    }
    text.truncate(text.trim_end().len());
    text.push_str(if text.is_empty() { "" } else { "\n" });
    text
}

/// All faults in file order as a JSON list.
///
/// Each is `{severity, name, message, file, line, column, key, label, help}`: line and column from
/// 1, the column in characters; `file` is `command line` for a flag; what does not exist is null.
#[must_use]
pub fn to_json(faults: &[Diagnostic], document: Option<&Document>) -> serde_json::Value {
    let mut ordered = faults.to_vec();
    sort(&mut ordered, document);
    let one = |fault: &Diagnostic| {
        let place = fault.place(document);
        let line_column = place.as_ref().map(|place| place.source.line_column(place.range.start));
        json!({
            "severity": match fault.severity { Severity::Error => "error", Severity::Warning => "warning" },
            "name": fault.name,
            "message": fault.message,
            "file": place.as_ref().map(|place| place.source.name()),
            "line": line_column.map(|(line, _)| line),
            "column": line_column.map(|(_, column)| column),
            "key": Some(fault.key()).filter(|key| !key.is_empty()),
            "label": Some(fault.label.as_str()).filter(|label| !label.is_empty()),
            "help": fault.help,
        })
    };
    ordered.iter().map(one).collect()
}
