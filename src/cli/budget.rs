//! `couplet budget`.

use super::Outcome;
use super::args::{BudgetArgs, Common, Format};
use super::output::{Failure, Target, warn};
use super::scenario::{Progress, load, on_threads, plan};
use crate::config::did_you_mean;
use crate::montecarlo::Budget;
use crate::report::{budget_json, budget_text, document, explain_json, explain_table, explain_text, ledger_table, row_named, row_names};

pub(super) fn run(args: &BudgetArgs) -> Outcome {
    let common = &args.common;
    if let Some(name) = &args.explain {
        return explain(common, name);
    }
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let progress = Progress::new(common.quiet);
    let (plan, budget) = on_threads(common, || {
        progress.show("basis", 0, 1);
        let plan = plan(loaded.scenario, common)?;
        let settings = plan.scenario().settings.clone();
        let budget = Budget::new(&plan, settings.seed, settings.lifetimes, &|step, done, of| progress.show(step, done, of))
            .map_err(|error| Failure::Machine(format!("error: the lifetimes could not be flown to their end: {error}")))?;
        Ok::<_, Failure>((plan, budget))
    })??;
    progress.finish();
    let scenario = plan.scenario();
    let momentum = plan.summary();
    let typical = plan.largest_unload().and_then(Result::ok);
    let text = match common.format {
        Format::Text => budget_text(scenario, &budget, &momentum, typical.as_ref(), scenario.settings.seed),
        Format::Json => pretty(&budget_json(scenario, &budget, &momentum, typical.as_ref(), &loaded.provenance)),
        Format::Csv => ledger_table(&budget).to_csv(),
    };
    // The page for a person has them; a program's reader would not see them.
    if !common.quiet && (common.format != Format::Text || common.output.out.is_some()) {
        warn(&budget.warnings);
    }
    target.finish(&text)?;
    Ok(budget.requirements.iter().all(|checked| checked.met))
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
        Format::Text => explain_text(&plan, row, &nominal),
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
