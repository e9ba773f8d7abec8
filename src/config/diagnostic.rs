//! A fault: what is wrong, where it stands, and how to mend it.

use std::ops::Range;

use super::path::Path;
use super::source::{Place, ReadError};

/// How grave a fault is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub enum Severity {
    /// The configuration cannot be used.
    Error,
    /// It can be used, and is probably not what was meant.
    Warning,
}

/// Which part of a key and its value a fault points to.
#[derive(Debug, Clone, Copy, Default, PartialEq, Eq)]
pub enum Mark {
    /// The key, as for an unknown one.
    Key,
    /// The value.
    #[default]
    Value,
}

/// Where a fault stands.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Site {
    /// At a value of the document; if it does not exist, at the nearest map or list above it.
    At {
        /// Address of the value.
        path: Path,
        /// The key or the value.
        mark: Mark,
        /// Part of the scalar's text, bytes; `None` for all of it.
        within: Option<Range<usize>>,
    },
    /// At a known stretch of a text, as for a syntax error.
    Place(Place),
    /// Nowhere in a text, as for a file that does not exist.
    Nowhere,
}

/// A second place that explains a fault, such as the first of two equal keys.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Related {
    /// Where.
    pub site: Site,
    /// What is to be seen there.
    pub label: String,
}

/// One fault of a configuration.
///
/// ```
/// use couplet::config::{Diagnostic, Path};
/// let fault = Diagnostic::error(Path::parse("thrusters[3].thrust"), "`thrusters[3].thrust` must be a force above zero, got -0.5 N")
///     .label("not above zero")
///     .help("turn the direction around instead: `push: [0, 0, -1]`")
///     .within(0..4);
/// assert_eq!(fault.key(), "thrusters[3].thrust");
/// ```
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Diagnostic {
    /// How grave it is.
    pub severity: Severity,
    /// Name by which a warning can be silenced, such as `inertia-magnitude`.
    pub name: Option<&'static str>,
    /// What is wrong: lower case, no full stop, expected before got.
    pub message: String,
    /// Where it is.
    pub site: Site,
    /// A few words beside the marked place; may be empty.
    pub label: String,
    /// How to mend it, in the imperative.
    pub help: Option<String>,
    /// Other places that explain it.
    pub related: Vec<Related>,
}

impl Diagnostic {
    /// An error at the value of `path`.
    #[must_use]
    pub fn error(path: Path, message: impl Into<String>) -> Self {
        Self::new(Severity::Error, Site::At { path, mark: Mark::Value, within: None }, message)
    }

    /// A warning at the value of `path`, which `name` silences.
    #[must_use]
    pub fn warning(name: &'static str, path: Path, message: impl Into<String>) -> Self {
        let site = Site::At { path, mark: Mark::Value, within: None };
        Self { name: Some(name), ..Self::new(Severity::Warning, site, message) }
    }

    /// An error at a known place of a text.
    #[must_use]
    pub fn error_at(place: Place, message: impl Into<String>) -> Self {
        Self::new(Severity::Error, Site::Place(place), message)
    }

    /// A fault of this kind and place, with neither label nor help yet.
    #[must_use]
    pub fn new(severity: Severity, site: Site, message: impl Into<String>) -> Self {
        Self { severity, name: None, message: message.into(), site, label: String::new(), help: None, related: Vec::new() }
    }

    /// Puts `label` beside the marked place.
    #[must_use]
    pub fn label(mut self, label: impl Into<String>) -> Self {
        self.label = label.into();
        self
    }

    /// Says how to mend it.
    #[must_use]
    pub fn help(mut self, help: impl Into<String>) -> Self {
        self.help = Some(help.into());
        self
    }

    /// Says how to mend it if there is something to say.
    #[must_use]
    pub fn help_if(mut self, help: Option<String>) -> Self {
        self.help = help.or(self.help);
        self
    }

    /// Marks the key in place of the value.
    #[must_use]
    pub fn at_key(mut self) -> Self {
        if let Site::At { mark, .. } = &mut self.site {
            *mark = Mark::Key;
        }
        self
    }

    /// Marks only these bytes of the scalar's text.
    #[must_use]
    pub fn within(mut self, bytes: Range<usize>) -> Self {
        if let Site::At { within, .. } = &mut self.site {
            *within = Some(bytes);
        }
        self
    }

    /// Shows the value of `path` too, with a few words.
    #[must_use]
    pub fn also(mut self, path: Path, label: impl Into<String>) -> Self {
        let site = Site::At { path, mark: Mark::Value, within: None };
        self.related.push(Related { site, label: label.into() });
        self
    }

    /// Shows a place of a text too, with a few words.
    #[must_use]
    pub fn also_at(mut self, place: Place, label: impl Into<String>) -> Self {
        self.related.push(Related { site: Site::Place(place), label: label.into() });
        self
    }

    /// The address it is about, as text; empty if it is about no value.
    #[must_use]
    pub fn key(&self) -> String {
        match &self.site {
            Site::At { path, .. } if !path.segments().is_empty() => path.to_string(),
            _ => String::new(),
        }
    }
}

impl From<ReadError> for Diagnostic {
    fn from(error: ReadError) -> Self {
        let message = error.to_string();
        let nowhere = |help: String| Self::new(Severity::Error, Site::Nowhere, message.clone()).help(help);
        match error {
            ReadError::Missing { nearest: Some(nearest), .. } => nowhere(format!("did you mean `{nearest}`?")),
            ReadError::Missing { nearest: None, .. } => nowhere("check the path; relative paths start at the current folder".to_owned()),
            ReadError::Directory { .. } => nowhere("name a file in it".to_owned()),
            ReadError::Unreadable { .. } => nowhere("check the permissions of the file".to_owned()),
            ReadError::TooLarge { .. } => nowhere("check that it is the right file; a spacecraft takes a few kB".to_owned()),
            ReadError::NotUtf8 { place } => {
                Self::error_at(place, message).label("these bytes are no character").help("save the file as UTF-8")
            }
            ReadError::Control { place, .. } => Self::error_at(place, message).label("not allowed in YAML").help("delete it"),
        }
    }
}
