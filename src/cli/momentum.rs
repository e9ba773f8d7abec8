//! `couplet momentum`.

use super::Outcome;
use super::args::{Common, Format};
use super::budget::pretty;
use super::output::Target;
use super::scenario::{load, on_threads, plan};
use crate::report::{footer, momentum_json, momentum_table, momentum_text};

pub(super) fn run(common: &Common) -> Outcome {
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let plan = on_threads(common, || plan(loaded.scenario, common))??;
    let phases = plan.summary();
    let text = match common.format {
        Format::Text => momentum_text(&plan.vehicle().name, &phases) + &footer(&loaded.provenance),
        Format::Json => pretty(&momentum_json(&phases, &loaded.provenance)),
        Format::Csv => momentum_table(&phases).to_csv(),
    };
    target.finish(&text)?;
    Ok(true)
}
