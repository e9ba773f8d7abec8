//! Files that a configuration names.

use std::path::Path;

use crate::environment::{Body, Trajectory};
use crate::vehicle::Faults;

/// Where the files that a configuration names are looked for.
#[derive(Debug, Clone, Copy)]
pub(super) struct Files<'a> {
    pub(super) folder: &'a Path,
}

impl Files<'_> {
    /// Reads an ephemeris about `body`.
    pub(super) fn ephemeris(&self, file: &str, body: &Body, at: &str, faults: &mut Faults) -> Option<Trajectory> {
        let _ = (self.folder, file, body);
        faults.push(at, "ephemeris files cannot be read yet", "describe the orbit");
        None
    }
}
