//! `couplet layout`.

use super::Outcome;
use super::args::{Common, Format};
use super::budget::pretty;
use super::output::Target;
use super::scenario::{load, on_threads};
use crate::layout::all_cases;
use crate::report::{layout_json, layout_table, layout_text};

pub(super) fn run(common: &Common) -> Outcome {
    let loaded = load(common)?;
    let target = Target::open(&common.output)?;
    let vehicle = &loaded.scenario.vehicle;
    let cases = on_threads(common, || all_cases(vehicle))?;
    let text = match common.format {
        Format::Text => layout_text(&vehicle.name, &cases),
        Format::Json => pretty(&layout_json(&cases, &loaded.provenance)),
        Format::Csv => layout_table(&cases).to_csv(),
    };
    target.finish(&text)?;
    Ok(true)
}
