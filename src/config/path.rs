//! The address of a value in a configuration, such as `thrusters[3].thrust`.

use std::fmt;

/// One step of a [`Path`].
#[derive(Debug, Clone, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Segment {
    /// A key of a map.
    Key(String),
    /// An item of a list, counted from 0.
    Index(usize),
}

/// The address of a value: keys and list positions from the root down.
///
/// Shown as a user writes it: `thrusters[3].thrust`. A key that holds `.`, `[` or `]` stands in
/// brackets.
///
/// ```
/// use couplet::config::Path;
/// let path = Path::root().key("thrusters").index(3).key("thrust");
/// assert_eq!(path.to_string(), "thrusters[3].thrust");
/// assert_eq!(Path::parse("thrusters[3].thrust"), path);
/// ```
#[derive(Debug, Clone, Default, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct Path(Vec<Segment>);

impl Path {
    /// The address of the whole configuration.
    #[must_use]
    pub fn root() -> Self {
        Self::default()
    }

    /// Reads the text form. Digits in brackets are a list position, other text there is a key.
    #[must_use]
    pub fn parse(text: &str) -> Self {
        let segment = |part: Part<'_>| match part.text.parse() {
            Ok(index) if part.bracketed => Segment::Index(index),
            _ => Segment::Key(part.text.to_owned()),
        };
        Self(parts(text).into_iter().map(segment).collect())
    }

    /// The address of `name` in the map that stands here.
    #[must_use]
    pub fn key(&self, name: impl Into<String>) -> Self {
        self.join(Segment::Key(name.into()))
    }

    /// The address of item `index`, counted from 0, of the list that stands here.
    #[must_use]
    pub fn index(&self, index: usize) -> Self {
        self.join(Segment::Index(index))
    }

    /// This address and one step more.
    #[must_use]
    pub fn join(&self, segment: Segment) -> Self {
        let mut segments = self.0.clone();
        segments.push(segment);
        Self(segments)
    }

    /// The steps from the root down.
    #[must_use]
    pub fn segments(&self) -> &[Segment] {
        &self.0
    }

    /// The address of the map or list that holds this value, or `None` for the root.
    #[must_use]
    pub fn parent(&self) -> Option<Self> {
        self.0.split_last().map(|(_, above)| Self(above.to_vec()))
    }
}

impl From<Vec<Segment>> for Path {
    fn from(segments: Vec<Segment>) -> Self {
        Self(segments)
    }
}

impl fmt::Display for Path {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        if self.0.is_empty() {
            return f.write_str("the configuration");
        }
        for (position, segment) in self.0.iter().enumerate() {
            match segment {
                Segment::Index(index) => write!(f, "[{index}]")?,
                Segment::Key(key) if key.contains(['.', '[', ']']) => {
                    write!(f, "[{}]", short(key))?;
                }
                Segment::Key(key) if position == 0 => f.write_str(&short(key))?,
                Segment::Key(key) => write!(f, ".{}", short(key))?,
            }
        }
        Ok(())
    }
}

/// `text` fit for one line of a message: at most 60 characters.
pub(crate) fn short(text: &str) -> String {
    const MOST: usize = 60;
    match text.char_indices().nth(MOST) {
        None => text.to_owned(),
        Some((end, _)) => text.get(..end).unwrap_or_default().to_owned() + "…",
    }
}

/// One step of the text form of a path, before it is known whether it names a key or an item.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(crate) struct Part<'a> {
    /// The key, the name or the digits, without brackets and dots.
    pub(crate) text: &'a str,
    /// Byte offset of `text` in the whole.
    pub(crate) start: usize,
    /// Whether it stood in brackets.
    pub(crate) bracketed: bool,
}

/// Splits `thrusters[A1].thrust` into its steps. Never fails: odd text gives odd (empty) steps.
pub(crate) fn parts(text: &str) -> Vec<Part<'_>> {
    let mut found = Vec::new();
    let (mut start, mut bracketed) = (0, false);
    let mut after_bracket = false;
    for (at, c) in text.char_indices() {
        let ends = if bracketed { c == ']' } else { c == '.' || c == '[' };
        if !ends {
            continue;
        }
        // `a[0].b` and `a[0][1]`: nothing stands between the bracket and the next sign.
        let nothing = at == start && (after_bracket || c == '[' && at == 0);
        if !nothing {
            found.push(Part { text: text.get(start..at).unwrap_or_default(), start, bracketed });
        }
        after_bracket = c == ']';
        bracketed = c == '[';
        start = at + 1;
    }
    if !(after_bracket && start == text.len()) {
        found.push(Part { text: text.get(start..).unwrap_or_default(), start, bracketed });
    }
    found
}

#[cfg(test)]
mod tests {
    use super::*;

    fn texts(path: &str) -> Vec<(&str, bool)> {
        parts(path).into_iter().map(|part| (part.text, part.bracketed)).collect()
    }

    #[test]
    fn splits_keys_items_and_names() {
        assert_eq!(texts("wheels.capacity"), [("wheels", false), ("capacity", false)]);
        assert_eq!(texts("a[0][b.c].d"), [("a", false), ("0", true), ("b.c", true), ("d", false)]);
        assert_eq!(texts("[a b].c"), [("a b", true), ("c", false)]);
        assert_eq!(texts("a..b"), [("a", false), ("", false), ("b", false)]);
        assert_eq!(texts(""), [("", false)]);
        assert_eq!(texts("a[0"), [("a", false), ("0", true)]);
    }

    #[test]
    fn the_place_of_each_step_is_its_text() {
        let text = "thrusters[Ä1].thrust";
        for part in parts(text) {
            assert_eq!(text.get(part.start..part.start + part.text.len()), Some(part.text));
        }
    }

    #[test]
    fn text_form_is_read_back() {
        let path = Path::root().key("a").index(0).key("b.c").key("d e");
        assert_eq!(path.to_string(), "a[0][b.c].d e");
        assert_eq!(Path::parse(&path.to_string()), path);
    }
}
