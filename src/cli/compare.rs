//! `couplet compare`.

use super::Outcome;
use super::args::{Common, Format};
use super::budget::pretty;
use super::interrupt;
use super::output::{Failure, Target};
use super::scenario::{Progress, document_of, load, on_threads, plan, refused};
use crate::config::{Document, Patch, did_you_mean, read};
use crate::lifetime::Plan;
use crate::mission::Scenario;
use crate::montecarlo::{Budget, Design, Sample, Watch, attribute, compare, sample};
use crate::report::{Alternative, compare_json, compare_table, compare_text, footer, verdicts};

/// A base against every `--with`, every `--assume`, and all `--set` together.
pub(super) fn run(common: &Common) -> Outcome {
    let alone = Common { overlays: Vec::new(), assume: Vec::new(), settings: Vec::new(), ..common.clone() };
    let loaded = load(&alone)?;
    let document = document_of(&alone, &[]).map_err(|faults| refused(&faults, None))?;
    let asked = alternatives(common, &document)?;
    let target = Target::of(common, &loaded)?;
    let progress = Progress::new(common.quiet);
    let watch = Watch { progress: &|step, done, of| progress.show(step, done, of), stop: interrupt::listen() };
    let text = on_threads(common, || {
        let provenance = loaded.provenance;
        let base = plan(loaded.scenario, common)?;
        let design = Design { precision: None, ..Design::of(&base.scenario().settings) };
        let (base_budget, mut base_sample) = flown(&base, design, &watch)?;
        let mut list = Vec::new();
        for (name, patches) in &asked {
            let all: Vec<&Patch> = patches.iter().collect();
            let (changed, sha256) = planned(common, &document, &all)?;
            let (budget, mut other) = flown(&changed, design, &watch)?;
            let figures = compare((&base_budget, &mut base_sample.store), (&budget, &mut other.store), design.seed)
                .map_err(|error| machine(&error))?;
            let nominal = |made: &[bool]| -> Result<f64, Failure> {
                let chosen: Vec<&Patch> = patches.iter().zip(made).filter(|(_, made)| **made).map(|(patch, _)| patch).collect();
                // Both ends are flown already.
                if chosen.is_empty() {
                    return Ok(base_budget.attitude.nominal);
                }
                if chosen.len() == patches.len() {
                    return Ok(budget.attitude.nominal);
                }
                let (plan, _) = planned(common, &document, &chosen)?;
                Ok(plan.fly(plan.nominal()).attitude_total_kg())
            };
            let shares = attribute(patches.len(), nominal).ok();
            let keyed = |shares: Vec<f64>| patches.iter().map(|patch| patch.key().to_owned()).zip(shares).collect();
            let verdicts = verdicts(&base_budget, &budget);
            list.push(Alternative { name: name.clone(), config_sha256: sha256, figures, shares: shares.map(keyed), verdicts });
        }
        let text = match common.format {
            Format::Text => compare_text(&base.vehicle().name, base_budget.lifetimes, design.seed, &list) + &footer(&provenance),
            Format::Json => pretty(&compare_json(&list, &provenance)),
            Format::Csv => compare_table(&list).to_csv(),
        };
        Ok::<_, Failure>(text)
    })??;
    progress.finish();
    target.finish(&text)?;
    Ok(true)
}

fn machine(error: &std::io::Error) -> Failure {
    Failure::Machine(format!("error: the lifetimes could not be compared: {error}"))
}

/// Name of each alternative, and the keys that it changes.
fn alternatives(common: &Common, document: &Document) -> Result<Vec<(String, Vec<Patch>)>, Failure> {
    let mut list = Vec::new();
    for file in &common.overlays {
        let patches = document.patches_of_file(file).map_err(|faults| refused(&faults, None))?;
        list.push((file.display().to_string(), patches));
    }
    for name in &common.assume {
        let Some(patches) = document.patches_of_assumptions(name) else {
            let help = did_you_mean(name, document.assumptions().iter().map(String::as_str))
                .unwrap_or_else(|| "describe them under `assumptions` in the configuration".to_owned());
            return Err(Failure::Input(format!("error: no assumptions are named `{name}`\n  = help: {help}")));
        };
        list.push((name.clone(), patches));
    }
    if !common.settings.is_empty() {
        list.push(("settings".to_owned(), Document::patches_of_settings(&common.settings)));
    }
    if list.is_empty() {
        let message = "error: there is nothing to compare with";
        return Err(Failure::Input(format!(
            "{message}\n  = help: name an alternative: `--with FILE`, `--assume NAME` or `--set KEY=VALUE`"
        )));
    }
    Ok(list)
}

/// The mission with some changes, and the hash of its configuration.
fn planned(common: &Common, document: &Document, patches: &[&Patch]) -> Result<(Plan, String), Failure> {
    let changed = document.patched(patches).map_err(|faults| refused(&faults, None))?;
    let folder = common.file.parent().unwrap_or_else(|| std::path::Path::new(""));
    let scenario = read(&changed).and_then(|spec| Scenario::in_folder(&spec, folder));
    let scenario = scenario.map_err(|faults| refused(&faults, Some(&changed)))?;
    Ok((plan(scenario, common)?, changed.sha256()))
}

fn flown(plan: &Plan, design: Design, watch: &Watch<'_>) -> Result<(Budget, Sample), Failure> {
    let mut flown = sample(plan, design, watch).map_err(|error| machine(&error))?;
    if watch.stopped() {
        return Err(Failure::Stopped("stopped; a comparison needs all lifetimes, and nothing is written".to_owned()));
    }
    let budget = Budget::without_drivers(plan, &mut flown).map_err(|error| machine(&error))?;
    Ok((budget, flown))
}
