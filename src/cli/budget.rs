//! `couplet budget` and `couplet join`.

use std::path::{Path, PathBuf};

use super::Outcome;
use super::args::{BudgetArgs, Common, Format, JoinArgs, Output};
use super::interrupt;
use super::output::{Failure, Target, warn};
use super::scenario::{Loaded, Progress, load, on_threads, plan};
use crate::config::did_you_mean;
use crate::lifetime::Plan;
use crate::mission::{Precision, Scenario};
use crate::montecarlo::{
    Budget, Design, Ended, JoinError, PartHeader, Sample, Watch, export_csv, export_parquet, figure_names, join, sample, sample_part,
    write_part,
};
use crate::report::{
    Provenance, budget_json, budget_text, document, explain_json, explain_table, explain_text, footer, ledger_table, row_named, row_names,
};
use crate::units::{Kind, kind, parse};

pub(super) fn run(args: &BudgetArgs) -> Outcome {
    let common = &args.common;
    if let Some(name) = &args.explain {
        return explain(common, name);
    }
    let mut loaded = load(common)?;
    loaded.scenario.settings.precision = precision(args, &loaded.scenario)?;
    let part = args.part.as_deref().map(|text| part(text, args, &loaded.scenario)).transpose()?;
    let target = Target::of(common, &loaded)?;
    let lifetimes_out = lifetimes_target(args.lifetimes_out.as_deref(), common)?;
    let progress = Progress::new(common.quiet);
    let watch = Watch { progress: &|step, done, of| progress.show(step, done, of), stop: interrupt::listen() };
    let done = on_threads(common, || {
        progress.show("basis", 0, 1);
        let Loaded { scenario, provenance } = loaded;
        let plan = plan(scenario, common)?;
        let design = Design::of(&plan.scenario().settings);
        interrupt::worth_it();
        let mut flown = match part {
            None => sample(&plan, design, &watch),
            Some(part) => sample_part(&plan, design, part, &watch),
        }
        .map_err(|error| not_flown(&error))?;
        if let Some((path, target)) = lifetimes_out {
            let first = part.map_or(0, |(part, parts)| design.part(part, parts).start);
            export(&plan, &mut flown, first, &path, target, &provenance)?;
        }
        match part {
            None => report(&plan, &mut flown, &watch, common, provenance).map(|(text, status)| (Some(text), status)),
            Some(_) if flown.ended == Ended::Stopped => Err(Failure::Stopped("stopped: a part is written whole or not at all".to_owned())),
            Some(part) => {
                let header = PartHeader::new(provenance.version, &provenance.config_sha256, &design, part, figure_names(&plan));
                target.finish_with(|out| write_part(&header, &mut flown.store, out))?;
                return Ok((None, None, Ok(true)));
            }
        }
        .map(|(text, status)| (text, Some(target), status))
    })??;
    progress.finish();
    let (text, target, status) = done;
    if let (Some(text), Some(target)) = (text, target) {
        target.finish(&text)?;
    }
    status
}

/// Puts parts together and reports them as one run.
pub(super) fn run_join(args: &JoinArgs) -> Outcome {
    let common = &args.common;
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let lifetimes_out = lifetimes_target(args.lifetimes_out.as_deref(), common)?;
    let progress = Progress::new(common.quiet);
    let watch = Watch { progress: &|step, done, of| progress.show(step, done, of), stop: interrupt::listen() };
    let (text, status) = on_threads(common, || {
        progress.show("basis", 0, 1);
        let Loaded { scenario, provenance } = loaded;
        let plan = plan(scenario, common)?;
        let design = Design { precision: None, ..Design::of(&plan.scenario().settings) };
        let expected = PartHeader::new(provenance.version, &provenance.config_sha256, &design, (1, 1), figure_names(&plan));
        let mut whole = join(&expected, design, &args.parts).map_err(|error| match error {
            JoinError::Io(error) => Failure::Machine(format!("error: the parts cannot be put together: {error}")),
            JoinError::Part { .. } => Failure::Input(format!("error: {error}")),
        })?;
        if let Some((path, target)) = lifetimes_out {
            export(&plan, &mut whole, 0, &path, target, &provenance)?;
        }
        report(&plan, &mut whole, &watch, common, provenance)
    })??;
    progress.finish();
    target.finish(&text)?;
    status
}

fn not_flown(error: &std::io::Error) -> Failure {
    Failure::Machine(format!("error: the lifetimes could not be flown to their end: {error}"))
}

/// The budget of a sample in the format asked for, and the status it ends with.
fn report(
    plan: &Plan,
    sample: &mut Sample,
    watch: &Watch<'_>,
    common: &Common,
    mut provenance: Provenance,
) -> Result<(String, Outcome), Failure> {
    if sample.store.rows() == 0 {
        return Err(Failure::Stopped("stopped before the first lifetimes were complete; nothing is written".to_owned()));
    }
    let budget = Budget::of(plan, sample, watch).map_err(|error| not_flown(&error))?;
    provenance.lifetimes = budget.lifetimes;
    let scenario = plan.scenario();
    let momentum = plan.summary();
    let typical = plan.largest_unload().and_then(Result::ok);
    let text = match common.format {
        Format::Text => budget_text(scenario, &budget, &momentum, typical.as_ref()) + &footer(&provenance),
        Format::Json => pretty(&budget_json(scenario, &budget, &momentum, typical.as_ref(), &provenance)),
        Format::Csv => ledger_table(&budget).to_csv(),
    };
    // The page for a person has them; a program's reader would not see them.
    if !common.quiet && (common.format != Format::Text || common.output.out.is_some()) {
        warn(&budget.warnings);
    }
    let met = budget.requirements.iter().all(|checked| checked.met);
    let stopped = || Failure::Stopped(format!("stopped after {} lifetimes; the result says so", budget.lifetimes));
    Ok((text, if budget.ended == Ended::Stopped { Err(stopped()) } else { Ok(met) }))
}

/// Precision of the command line, or that of the configuration.
fn precision(args: &BudgetArgs, scenario: &Scenario) -> Result<Option<Precision>, Failure> {
    let settings = &scenario.settings;
    let cap = |precision: Precision| Precision { at_most: args.common.lifetimes.unwrap_or(precision.at_most), ..precision };
    let Some(text) = &args.precision else { return Ok(settings.precision.map(cap)) };
    let number = kind::Number::DIMENSION;
    let width = parse(text, number, "a share", "1 %").ok().filter(|width| (1e-4..=1.0).contains(width));
    let Some(width) = width else {
        let message = format!("error: `--precision {text}`: expected a share from 0.01 % to 100 %");
        return Err(Failure::Input(format!("{message}\n  = help: write the width of the interval, such as `--precision \"1 %\"`")));
    };
    if settings.sampling != crate::mission::Sampling::Plain {
        let message = "error: `--precision` does not go with `budget.sampling: latin_hypercube`";
        return Err(Failure::Input(format!("{message}\n  = help: a hypercube has its size from the start: give `--lifetimes`")));
    }
    let base = settings.precision.unwrap_or(Precision { quantile: 0.95, width, at_most: 1_000_000 });
    Ok(Some(cap(Precision { width, ..base })))
}

/// Reads `K/N`.
fn part(text: &str, args: &BudgetArgs, scenario: &Scenario) -> Result<(u64, u64), Failure> {
    let refuse = |message: String, help: &str| Failure::Input(format!("error: {message}\n  = help: {help}"));
    let numbers = text.split_once('/').and_then(|(k, n)| Some((k.trim().parse::<u64>().ok()?, n.trim().parse::<u64>().ok()?)));
    let Some((part, parts)) = numbers.filter(|(part, parts)| (1..=*parts).contains(part) && *parts <= 100_000) else {
        return Err(refuse(format!("`--part {text}`: expected K/N with K from 1 to N"), "write `--part 3/8` for the third of eight"));
    };
    if args.common.output.out.is_none() {
        return Err(refuse("`--part` needs `--out`".to_owned(), "name the file of this part: `--out heron-3.part`"));
    }
    if scenario.settings.precision.is_some() {
        let help = "give a fixed number, `--lifetimes`, and leave the precision out";
        return Err(refuse("`--part` does not go with a precision: no part knows when all together are enough".to_owned(), help));
    }
    Ok((part, parts))
}

/// The file of the lifetimes, whose ending says how it is written.
fn lifetimes_target(path: Option<&Path>, common: &Common) -> Result<Option<(PathBuf, Target)>, Failure> {
    let Some(path) = path else { return Ok(None) };
    let ending = path.extension().and_then(|ending| ending.to_str()).unwrap_or_default();
    if !["parquet", "csv"].contains(&ending) {
        let message = format!("error: `--lifetimes-out {}`: expected a file that ends in .parquet or .csv", path.display());
        return Err(Failure::Input(format!("{message}\n  = help: write `--lifetimes-out lifetimes.parquet`")));
    }
    let inputs: Vec<&Path> = std::iter::once(&common.file).chain(&common.overlays).map(PathBuf::as_path).collect();
    let target = Target::open(&Output { out: Some(path.to_path_buf()) }, &inputs)?;
    Ok(Some((path.to_path_buf(), target)))
}

fn export(plan: &Plan, sample: &mut Sample, first: u64, path: &Path, target: Target, provenance: &Provenance) -> Result<(), Failure> {
    let about = [
        ("couplet", provenance.version.to_owned()),
        ("config", provenance.config.clone()),
        ("config_sha256", provenance.config_sha256.clone()),
        ("seed", provenance.seed.to_string()),
    ];
    let csv = path.extension().is_some_and(|ending| ending == "csv");
    target.finish_with(|out| if csv { export_csv(plan, sample, first, out) } else { export_parquet(plan, sample, first, &about, out) })
}

/// How one row of the ledger comes about in the nominal mission.
fn explain(common: &Common, name: &str) -> Outcome {
    let Some(row) = row_named(name) else {
        let names = row_names();
        let help = did_you_mean(name, names.iter().copied()).unwrap_or_else(|| format!("write one of {}", names.join(", ")));
        return Err(Failure::Input(format!("error: `{name}` is no row of the ledger\n  = help: {help}")));
    };
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let plan = on_threads(common, || plan(loaded.scenario, common))??;
    let nominal = plan.fly(plan.nominal());
    let text = match common.format {
        Format::Text => explain_text(&plan, row, &nominal) + &footer(&loaded.provenance),
        Format::Json => pretty(&document("explain", &loaded.provenance, explain_json(&plan, row, &nominal))),
        Format::Csv => explain_table(&plan, row).to_csv(),
    };
    target.finish(&text)?;
    Ok(true)
}

/// Indented JSON with a line end.
pub(super) fn pretty(value: &serde_json::Value) -> String {
    format!("{value:#}\n")
}
