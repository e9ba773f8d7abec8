//! A configuration in order, in a sentence.

use super::json::Provenance;
use super::words::paragraph;
use crate::mission::Scenario;

/// Characters of a hash that tell two configurations apart at a glance.
const SHORT_HASH: usize = 12;

/// The line at the end of a page that says what it was made from.
#[must_use]
pub fn footer(provenance: &Provenance) -> String {
    let mut from = provenance.config.clone();
    for (flag, list) in [("--with", &provenance.overlays), ("--assume", &provenance.assumptions), ("--set", &provenance.settings)] {
        for item in list {
            from = format!("{from} {flag} {item}");
        }
    }
    let text = format!("From {from}; configuration sha256 {}; couplet {}.", provenance.config_sha256, provenance.version);
    format!("\n{}", paragraph("", "", &text))
}

/// What the configuration holds.
#[must_use]
pub fn check_text(scenario: &Scenario, provenance: &Provenance) -> String {
    let text = format!(
        "{}: in order ({} thrusters, {} phases, {} uncertain quantities; sha256 {})",
        provenance.config,
        scenario.vehicle.propulsion.thrusters.len(),
        scenario.mission.phases.len(),
        scenario.parameters.len(),
        provenance.config_sha256.get(..SHORT_HASH).unwrap_or_default()
    );
    paragraph("", "  ", &text)
}
