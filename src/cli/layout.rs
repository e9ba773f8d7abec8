//! `couplet layout`.

use super::Outcome;
use super::args::{Common, Format};
use super::budget::pretty;
use super::output::Target;
use super::scenario::{load, on_threads};
use crate::layout::Study;
use crate::montecarlo::check_layout;
use crate::report::{footer, layout_json, layout_table, layout_text};

pub(super) fn run(common: &Common) -> Outcome {
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let vehicle = &loaded.scenario.vehicle;
    let study = on_threads(common, || Study::new(vehicle))?;
    let requirements = check_layout(&loaded.scenario.requirements, &study.cases);
    let text = match common.format {
        Format::Text => layout_text(&vehicle.name, &study, &requirements) + &footer(&loaded.provenance),
        Format::Json => pretty(&layout_json(&study, &requirements, &loaded.provenance)),
        Format::Csv => layout_table(&study.cases).to_csv(),
    };
    target.finish(&text)?;
    Ok(requirements.iter().all(|checked| checked.met))
}
