//! `couplet unload`.

use nalgebra::Vector3;

use super::Outcome;
use super::args::{Format, UnloadArgs};
use super::budget::pretty;
use super::output::{Failure, Target};
use super::scenario::{load, on_threads, plan};
use crate::pulses::ForceChoice;
use crate::report::{footer, unload_json, unload_table, unload_text};
use crate::uncertain::parse_triple;
use crate::units::kind::{ImpulsePrice, Momentum};
use crate::units::{Kind, parse};

pub(super) fn run(args: &UnloadArgs) -> Outcome {
    let common = &args.common;
    let asked = args.momentum.as_deref().map(momentum).transpose()?;
    let force = args.net_force.as_deref().map(force).transpose()?;
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let plan = on_threads(common, || plan(loaded.scenario, common))??;
    let found = match asked {
        Some(momentum) => Some(plan.unload_in(0, momentum, force)),
        None => plan.largest_momentum().map(|(stratum, momentum)| plan.unload_in(stratum, momentum, force)),
    };
    let refused = |message: String| Failure::Input(format!("error: {message}\n --> {}", common.file.display()));
    let unload = match found {
        Some(Ok(unload)) => unload,
        Some(Err(error)) => return Err(refused(format!("{error}\n  = help: `couplet layout` shows what the layout can do"))),
        None => return Err(refused("the mission has no unloads\n  = help: give `--momentum`, or a phase an `unload`".to_owned())),
    };
    let thrusters = &plan.vehicle().propulsion.thrusters;
    let text = match common.format {
        Format::Text => unload_text(&unload, thrusters) + &footer(&loaded.provenance),
        Format::Json => pretty(&unload_json(&unload, thrusters, &loaded.provenance)),
        Format::Csv => unload_table(&unload.command, thrusters).to_csv(),
    };
    target.finish(&text)?;
    Ok(true)
}

fn force(text: &str) -> Result<ForceChoice, Failure> {
    match text.trim() {
        "zero" => Ok(ForceChoice::Zero),
        "any" => Ok(ForceChoice::Any),
        price => match parse(price, ImpulsePrice::DIMENSION, ImpulsePrice::NAME, ImpulsePrice::EXAMPLE) {
            Ok(price) if price >= 0.0 => Ok(ForceChoice::Priced(price)),
            Ok(_) => Err(Failure::Input(format!(
                "error: --net-force \"{text}\": expected a price of at least zero\n  = help: write `any` for none"
            ))),
            Err(error) => Err(Failure::Input(format!(
                "error: --net-force \"{text}\": {}\n  = help: write `zero`, `any` or a price such as \"0.5 g/(N s)\"",
                error.message
            ))),
        },
    }
}

fn momentum(text: &str) -> Result<Vector3<f64>, Failure> {
    let read = parse_triple(text, Momentum::DIMENSION, Momentum::NAME, "1 2 -0.5 N m s");
    read.map(Vector3::from)
        .map_err(|error| Failure::Input(format!("error: --momentum \"{text}\": {}\n  = help: {}", error.message, error.help)))
}
