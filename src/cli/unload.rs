//! `couplet unload`.

use nalgebra::Vector3;

use super::Outcome;
use super::args::{Format, UnloadArgs};
use super::budget::pretty;
use super::output::{Failure, Target};
use super::scenario::{load, on_threads, plan};
use crate::report::{unload_json, unload_table, unload_text};
use crate::uncertain::parse_triple;
use crate::units::{Kind, kind::Momentum};

pub(super) fn run(args: &UnloadArgs) -> Outcome {
    let common = &args.common;
    let asked = args.momentum.as_deref().map(momentum).transpose()?;
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let plan = on_threads(common, || plan(loaded.scenario, common))??;
    let found = match asked {
        Some(momentum) => Some(plan.unload_in(0, momentum)),
        None => plan.largest_unload(),
    };
    let refused = |message: String| Failure::Input(format!("error: {message}\n --> {}", common.file.display()));
    let unload = match found {
        Some(Ok(unload)) => unload,
        Some(Err(error)) => return Err(refused(format!("{error}\n  = help: `couplet layout` shows what the layout can do"))),
        None => return Err(refused("the mission has no unloads\n  = help: give `--momentum`, or a phase an `unload`".to_owned())),
    };
    let thrusters = &plan.vehicle().propulsion.thrusters;
    let text = match common.format {
        Format::Text => unload_text(&unload, thrusters),
        Format::Json => pretty(&unload_json(&unload, thrusters, &loaded.provenance)),
        Format::Csv => unload_table(&unload.command, thrusters).to_csv(),
    };
    target.finish(&text)?;
    Ok(true)
}

fn momentum(text: &str) -> Result<Vector3<f64>, Failure> {
    let read = parse_triple(text, Momentum::DIMENSION, Momentum::NAME, "1 2 -0.5 N m s");
    read.map(Vector3::from)
        .map_err(|error| Failure::Input(format!("error: --momentum \"{text}\": {}\n  = help: {}", error.message, error.help)))
}
