//! The text of a configuration file or flag, and places in it.

use std::fs::File;
use std::io::Read as _;
use std::ops::Range;
use std::sync::Arc;

/// Largest file that is read, bytes. A spacecraft takes a few kB; this bounds time and memory.
pub(crate) const MOST_BYTES: usize = 4 << 20;

/// A text that values came from: a file, or a flag of the command line.
#[derive(Debug, PartialEq, Eq)]
pub struct Source {
    name: String,
    text: String,
    rank: usize,
}

/// A stretch of a source, in bytes.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Place {
    /// The text.
    pub source: Arc<Source>,
    /// The stretch, byte offsets into the text.
    pub range: Range<usize>,
}

/// Why a file could not be taken as a source.
#[derive(Debug, thiserror::Error)]
pub(crate) enum ReadError {
    #[error("`{name}` does not exist")]
    Missing { name: String, nearest: Option<String> },
    #[error("`{name}` is a directory, expected a YAML file")]
    Directory { name: String },
    #[error("`{name}` cannot be read: {cause}")]
    Unreadable { name: String, cause: std::io::Error },
    #[error("`{name}` is larger than 4 MiB, the most that a configuration may have")]
    TooLarge { name: String },
    #[error("`{}` is not UTF-8 text", place.source.name)]
    NotUtf8 { place: Place },
    #[error("`{}` holds a control character, U+{:04X}", place.source.name, u32::from(*character))]
    Control { place: Place, character: char },
}

impl Source {
    /// A source of this name and text. `rank` is its turn when faults are shown in order.
    pub(crate) fn new(name: impl Into<String>, text: impl Into<String>, rank: usize) -> Arc<Self> {
        Arc::new(Self { name: name.into(), text: text.into(), rank })
    }

    /// Reads a file: at most 4 MiB of UTF-8 without control characters; a byte-order mark at the
    /// start is dropped.
    pub(crate) fn read(path: &std::path::Path, rank: usize) -> Result<Arc<Self>, ReadError> {
        let name = path.display().to_string();
        let bytes = bytes(path, &name)?;
        let bytes = bytes.strip_prefix(b"\xEF\xBB\xBF").unwrap_or(&bytes);
        match str::from_utf8(bytes) {
            Ok(text) => Self::checked(name, text, rank),
            Err(error) => {
                // The first character that stands for broken bytes is where the good part ends.
                let start = error.valid_up_to();
                let range = start..start + char::REPLACEMENT_CHARACTER.len_utf8();
                let source = Self::new(name, String::from_utf8_lossy(bytes), rank);
                Err(ReadError::NotUtf8 { place: Place { source, range } })
            }
        }
    }

    /// As [`Source::new`], without a byte-order mark and refusing control characters. YAML forbids
    /// them (U+0085 apart), a terminal would obey them, and one of the two parsers would take U+0000
    /// for the end of the file.
    pub(crate) fn checked(name: impl Into<String>, text: &str, rank: usize) -> Result<Arc<Self>, ReadError> {
        let text = text.strip_prefix('\u{FEFF}').unwrap_or(text);
        let is_control = |c: char| c.is_control() && !"\t\n\r\u{85}".contains(c);
        let Some((start, character)) = text.char_indices().find(|&(_, c)| is_control(c)) else {
            return Ok(Self::new(name, text, rank));
        };
        // The message shows the line, so there too no control character may be left.
        let stand_in = char::REPLACEMENT_CHARACTER;
        let source = Self::new(name, text.replace(is_control, &stand_in.to_string()), rank);
        let place = Place { source, range: start..start + stand_in.len_utf8() };
        Err(ReadError::Control { place, character })
    }

    /// The file's name as given, or `command line` for a flag.
    #[must_use]
    pub fn name(&self) -> &str {
        &self.name
    }

    /// The text, without a byte-order mark.
    #[must_use]
    pub fn text(&self) -> &str {
        &self.text
    }

    /// The turn of this source when faults are shown in order: the file, overlays, flags.
    #[must_use]
    pub fn rank(&self) -> usize {
        self.rank
    }

    /// Line and column of a byte offset, both from 1, the column in characters.
    #[must_use]
    pub fn line_column(&self, offset: usize) -> (usize, usize) {
        let line_start = self.line_start(offset);
        let line = 1 + self.slice(&(0..line_start)).matches('\n').count();
        (line, 1 + self.slice(&(line_start..offset)).chars().count())
    }

    /// The text in `range`, empty if that is no stretch of this text.
    #[must_use]
    pub fn slice(&self, range: &Range<usize>) -> &str {
        self.text.get(range.clone()).unwrap_or_default()
    }

    /// Where the line that holds `offset` starts.
    pub(crate) fn line_start(&self, offset: usize) -> usize {
        let before = self.text.get(..offset).unwrap_or(&self.text);
        before.rfind('\n').map_or(0, |newline| newline + 1)
    }

    /// Where the line that holds `offset` ends, its line break left out.
    pub(crate) fn line_end(&self, offset: usize) -> usize {
        let after = self.text.get(offset..).unwrap_or_default();
        offset + after.find(['\n', '\r']).unwrap_or(after.len())
    }
}

impl Place {
    /// The text that stands here.
    #[must_use]
    pub fn text(&self) -> &str {
        self.source.slice(&self.range)
    }

    /// The same place, without the lines after its first.
    pub(crate) fn first_line(&self) -> Self {
        let end = self.source.line_end(self.range.start).min(self.range.end);
        Self { source: Arc::clone(&self.source), range: self.range.start..end.max(self.range.start) }
    }
}

fn bytes(path: &std::path::Path, name: &str) -> Result<Vec<u8>, ReadError> {
    let failed = |cause: std::io::Error| match cause.kind() {
        std::io::ErrorKind::NotFound => ReadError::Missing { name: name.to_owned(), nearest: nearest_file(path) },
        std::io::ErrorKind::IsADirectory => ReadError::Directory { name: name.to_owned() },
        _ => ReadError::Unreadable { name: name.to_owned(), cause },
    };
    if path.is_dir() {
        return Err(ReadError::Directory { name: name.to_owned() });
    }
    let mut bytes = Vec::new();
    let file = File::open(path).map_err(failed)?;
    file.take(MOST_BYTES as u64 + 1).read_to_end(&mut bytes).map_err(failed)?;
    if bytes.len() > MOST_BYTES {
        return Err(ReadError::TooLarge { name: name.to_owned() });
    }
    Ok(bytes)
}

/// The YAML file beside `path` whose name is nearest to it.
fn nearest_file(path: &std::path::Path) -> Option<String> {
    const MOST_ENTRIES: usize = 1000;
    let folder = path.parent()?;
    let here = if folder.as_os_str().is_empty() { std::path::Path::new(".") } else { folder };
    let is_yaml = |name: &String| {
        let extension = std::path::Path::new(name).extension();
        extension.is_some_and(|extension| extension == "yaml" || extension == "yml")
    };
    let entries = std::fs::read_dir(here).ok()?.take(MOST_ENTRIES).flatten();
    let mut names: Vec<String> = entries.filter_map(|entry| entry.file_name().into_string().ok()).filter(is_yaml).collect();
    names.sort(); // the order of a folder is not fixed, the message must be
    let wanted = path.file_name()?.to_str()?;
    let nearest = super::nearest::nearest(wanted, names.iter().map(String::as_str))?;
    Some(folder.join(nearest).display().to_string())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn columns_count_characters_and_lines_end_before_their_break() {
        let source = Source::new("x", "é: 漢字\r\nb: 1\n", 0);
        let at = source.text().find("字").unwrap();
        assert_eq!(source.line_column(at), (1, 5));
        assert_eq!(source.line_end(0), source.text().find('\r').unwrap());
        let b = source.text().find('b').unwrap();
        assert_eq!((source.line_column(b), source.line_start(b + 2)), ((2, 1), b));
    }

    #[test]
    fn places_outside_the_text_or_inside_a_character_are_harmless() {
        let source = Source::new("x", "é", 0);
        assert_eq!(source.line_column(99), (1, 1));
        assert_eq!((source.slice(&(1..2)), source.line_start(1)), ("", 0));
        assert_eq!(source.line_end(99), 99);
    }

    #[test]
    fn control_characters_are_refused_where_they_stand() {
        let error = Source::checked("x", "a: b\0\nc: d", 0).unwrap_err();
        assert_eq!(error.to_string(), "`x` holds a control character, U+0000");
        assert!(matches!(error, ReadError::Control { place, .. } if place.range == (4..7)));
    }
}
