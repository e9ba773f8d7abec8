//! What the engineer should know before signing.

use super::Budget;
use crate::lifetime::Plan;
use crate::mission::UnloadPolicy;

const SECONDS_PER_YEAR: f64 = 31_557_600.0;

pub(super) fn warnings(plan: &Plan, budget: &Budget) -> Vec<String> {
    let mut list = Vec::new();
    let name = |index: usize| plan.vehicle().propulsion.thrusters[index].name.as_str();
    if let Some(estimate) = budget.attitude.quantiles.iter().find(|estimate| estimate.upper.is_none()) {
        let needed = estimate.needed.map_or_else(String::new, |n| format!(": at least {n} are needed (`--lifetimes {n}`)"));
        list.push(format!(
            "{} lifetimes cannot bound P{:.0} with {:.0} % confidence{needed}",
            budget.lifetimes,
            estimate.p * 100.0,
            budget.confidence * 100.0
        ));
    }
    if budget.nominal.unserved > 0.0 {
        list.push(format!(
            "the thrusters cannot make {:.0} of the torques asked for in the nominal mission; their propellant is missing from the ledger",
            budget.nominal.unserved
        ));
    }
    if budget.served.share < 1.0 && budget.nominal.unserved <= 0.0 {
        list.push(format!(
            "in {:.2} % of the lifetimes the thrusters that are left cannot make every torque asked for; the propellant of those torques is missing from the ledger (`net_force: any` in `propulsion.failures` allows more)",
            (1.0 - budget.served.share) * 100.0
        ));
    }
    if let Some(fill) = budget.wheel_fill.filter(|fill| *fill > 1.0) {
        list.push(format!(
            "the wheels overflow: {:.0} % of their envelope is asked for; unload more often, or take larger wheels",
            fill * 100.0
        ));
    }
    if let Some(limit) = plan.vehicle().propulsion.qualified_pulses {
        let over = budget.cycles.iter().enumerate().filter_map(|(k, d)| Some((k, d.at(0.95)?.value))).filter(|(_, cycles)| *cycles > limit);
        for (thruster, cycles) in over {
            list.push(format!("thruster {} makes {cycles:.0} pulses at P95, over the {limit:.0} it is qualified for", name(thruster)));
        }
    }
    list.extend(of_pulses(plan));
    if let Some(limit) = plan.vehicle().propulsion.qualified_throughput_kg {
        let over = budget.throughput.iter().enumerate().filter_map(|(k, d)| Some((k, d.at(0.95)?.value))).filter(|(_, kg)| *kg > limit);
        for (thruster, kg) in over {
            list.push(format!("thruster {} passes {kg:.2} kg at P95, over the {limit:.2} kg it is qualified for", name(thruster)));
        }
    }
    list.extend(runs_dry(plan, budget));
    list.extend(of_models(plan));
    for found in crate::layout::impingements(plan.vehicle()) {
        let angle = found.angle_rad.to_degrees();
        list.push(format!(
            "the plume of {} meets {}, {angle:.0} deg off its axis and {:.2} m away",
            found.thruster, found.surface, found.distance_m
        ));
    }
    if plan.scenario().mission.phases.iter().any(|phase| phase.unload == UnloadPolicy::Never) {
        list.push("a phase has no `unload`: what its wheels collect is not charged to propellant".to_owned());
    }
    list
}

/// Warnings about what the models can know.
fn of_models(plan: &Plan) -> Vec<String> {
    let mut list = Vec::new();
    for (phase, used) in plan.scenario().mission.phases.iter().zip(plan.convergence()).filter(|(_, used)| !used.is_met()) {
        list.push(format!(
            "the momentum of phase {} is known to {:.1} % only, not to the tolerance of {:.1} %: `budget.resolution: full` simulates every unload",
            phase.name,
            (used.step_error + used.strata_error.unwrap_or(0.0)) * 100.0,
            used.tolerance * 100.0
        ));
    }
    let dipole = &plan.vehicle().residual_dipole_a_m2;
    let in_a_field = plan.scenario().mission.phases.iter().any(|phase| phase.trajectory.body().is_earth())
        && dipole.iter().any(|m| m.parameter().is_some() || m.nominal().abs() > 0.0);
    let ends = plan.scenario().mission.start.decimal_year() + plan.scenario().mission.duration_s() / SECONDS_PER_YEAR;
    if ends > 2030.0 && in_a_field {
        list.push(format!(
            "the mission ends in {ends:.1}; the geomagnetic model (IGRF-14) is a prediction to 2030 and carried on unchanged beyond"
        ));
    }
    list
}

/// Warnings about what valves and wheels can do in an unload.
fn of_pulses(plan: &Plan) -> Vec<String> {
    let mut list = Vec::new();
    let small = plan.small_unloads();
    if small > 0.005 {
        list.push(format!(
            "{:.0} % of the unloads ask some thruster for less than its shortest pulse; what is left over is carried on until a whole pulse is due (`propulsion.small_unload: wait` waits instead)",
            small * 100.0
        ));
    }
    let shortest_s = plan.summary().iter().filter_map(|phase| phase.unload_interval_s).reduce(f64::min);
    if let (Some(Ok(unload)), Some(interval_s)) = (plan.largest_unload(), shortest_s)
        && unload.command.duration_s > interval_s
    {
        list.push(format!(
            "the wheels' torque makes the largest unload last {:.1} h, longer than the {:.1} h between unloads: take wheels with more torque, or unload less often",
            unload.command.duration_s / 3600.0,
            interval_s / 3600.0
        ));
    }
    list
}

/// When the tank is empty before the mission ends, in the largest share of lifetimes that is told, and in the nominal mission.
fn runs_dry(plan: &Plan, budget: &Budget) -> Vec<String> {
    let mut list = Vec::new();
    let mission_s = plan.scenario().mission.duration_s();
    if let Some((p, Some(life_s))) = budget.life_s.iter().rev().find(|(_, life)| life.is_some_and(|life| life < mission_s)) {
        list.push(format!(
            "the usable propellant is gone by month {:.0} of {:.0} in {:.0} % of the lifetimes",
            life_s / SECONDS_PER_YEAR * 12.0,
            mission_s / SECONDS_PER_YEAR * 12.0,
            (1.0 - p) * 100.0
        ));
    }
    let (loaded, needed) = (budget.loaded_kg, budget.needed.nominal);
    if needed > loaded {
        list.push(format!("the propellant loaded, {loaded:.2} kg, does not cover the nominal need of {needed:.2} kg"));
    }
    list
}
