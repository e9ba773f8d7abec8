//! From the resolved configuration to typed values.

use serde::de::DeserializeOwned;
use serde_path_to_error::Segment;

use super::diagnostic::Diagnostic;
use super::document::Document;
use super::path::Path;

/// Reads typed values from a configuration.
///
/// An enum with data is written as a map with the variant's name as its only key.
///
/// # Errors
/// One diagnostic at the value that serde refuses. After [`super::check_structure`] has found no
/// fault this should not happen: it stops at the first fault and its words are serde's.
pub fn decode<T: DeserializeOwned>(document: &Document) -> Result<T, Vec<Diagnostic>> {
    // By way of JSON: from a YAML value serde_yaml would take an enum with data only as a tag.
    serde_path_to_error::deserialize(document.json()).map_err(|error| {
        let path = path(error.path());
        let message = format!("`{path}` cannot be used: {}", error.inner());
        vec![Diagnostic::error(path, message).help("`couplet schema` prints what each key takes")]
    })
}

fn path(found: &serde_path_to_error::Path) -> Path {
    found
        .iter()
        .map_while(|segment| match segment {
            Segment::Seq { index } => Some(super::path::Segment::Index(*index)),
            Segment::Map { key } => Some(super::path::Segment::Key(key.clone())),
            Segment::Enum { variant } => Some(super::path::Segment::Key(variant.clone())),
            Segment::Unknown => None,
        })
        .collect::<Vec<_>>()
        .into()
}
