//! `couplet check` and `couplet schema`.

use super::Outcome;
use super::args::{Common, Format, Output};
use super::budget::pretty;
use super::output::Target;
use super::scenario::load;

pub(super) fn run(common: &Common) -> Outcome {
    let loaded = load(common)?;
    let target = Target::of(common)?;
    let scenario = &loaded.scenario;
    let text = match common.format {
        Format::Json => pretty(&serde_json::json!({ "schema": "couplet/check/1", "provenance": loaded.provenance, "faults": [] })),
        Format::Text | Format::Csv => format!(
            "{}: in order ({} thrusters, {} phases, {} uncertain quantities; sha256 {})\n",
            loaded.provenance.config,
            scenario.vehicle.propulsion.thrusters.len(),
            scenario.mission.phases.len(),
            scenario.parameters.len(),
            loaded.provenance.config_sha256.get(..12).unwrap_or_default()
        ),
    };
    target.finish(&text)?;
    Ok(true)
}

pub(super) fn schema(output: &Output) -> Outcome {
    let target = Target::open(output, &[])?;
    target.finish(&pretty(&crate::config::schema()))?;
    Ok(true)
}
