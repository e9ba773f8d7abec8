//! Files that a configuration names.

use std::path::Path;

use crate::environment::{Body, Ephemeris, Site, Trajectory};
use crate::vehicle::Faults;

/// Where the files that a configuration names are looked for.
#[derive(Debug, Clone, Copy)]
pub(super) struct Files<'a> {
    pub(super) folder: &'a Path,
}

/// Faults of a file that are told; more of the same help nobody.
const TOLD: usize = 8;
/// Largest ephemeris that is read, bytes: some ten years at a minute's step.
const LARGEST: u64 = 1 << 30;

impl Files<'_> {
    /// Reads an ephemeris about `body`.
    pub(super) fn ephemeris(&self, file: &str, body: &Body, at: &str, faults: &mut Faults) -> Option<Trajectory> {
        let path = self.folder.join(file);
        let size = std::fs::metadata(&path).map(|known| known.len());
        let text = match size {
            Ok(size) if size > LARGEST => {
                faults.push(at, format!("{} has {size} bytes", path.display()), "give a file of at most 1 GB: a coarser step will do");
                return None;
            }
            _ => std::fs::read(&path),
        };
        let text = match text {
            Ok(bytes) => String::from_utf8_lossy(&bytes).into_owned(),
            Err(error) => {
                let help = "name the file from the folder in which the configuration lies";
                faults.push(at, format!("cannot read {}: {error}", path.display()), help);
                return None;
            }
        };
        match Ephemeris::parse(&text) {
            Ok(ephemeris) => {
                let known = names(body);
                if !known.is_empty() && !known.contains(&ephemeris.centre()) {
                    let message = format!("the positions of {} count from {}, not from {}", path.display(), ephemeris.centre(), body.name);
                    faults.push(at, message, "name the centre of the file with `about`");
                    return None;
                }
                Some(Trajectory::Table(Box::new((ephemeris.named(file), *body))))
            }
            Err(found) => {
                for fault in found.iter().take(TOLD) {
                    faults.push(at, format!("{}, {fault}", path.display()), fault.help.clone());
                }
                if found.len() > TOLD {
                    faults.push(
                        at,
                        format!("{}: and {} faults more", path.display(), found.len() - TOLD),
                        "mend the first ones and try again",
                    );
                }
                None
            }
        }
    }
}

/// Names by which files know a body; none for a body of one's own.
fn names(body: &Body) -> &'static [&'static str] {
    match body.site {
        Site::Earth => &["EARTH", "399"],
        Site::Moon => &["MOON", "301"],
        Site::Sun => &["SUN", "10"],
        Site::Planet(planet) => match planet {
            crate::environment::Planet::Mercury => &["MERCURY", "199"],
            crate::environment::Planet::Venus => &["VENUS", "299"],
            crate::environment::Planet::Mars => &["MARS", "499"],
        },
        Site::Circle(_) => &[],
    }
}
