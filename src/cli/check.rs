//! `couplet check` and `couplet schema`.

use super::Outcome;
use super::args::{Common, Format, Output};
use super::budget::pretty;
use super::output::Target;
use super::scenario::load;
use crate::report::check_text;

pub(super) fn run(common: &Common) -> Outcome {
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let text = match common.format {
        Format::Json => pretty(&serde_json::json!({ "schema": "couplet/check/1", "provenance": loaded.provenance, "faults": [] })),
        Format::Text | Format::Csv => check_text(&loaded.scenario, &loaded.provenance),
    };
    target.finish(&text)?;
    Ok(true)
}

pub(super) fn schema(output: &Output) -> Outcome {
    let target = Target::open(output, &[])?;
    target.finish(&pretty(&crate::config::schema()))?;
    Ok(true)
}
