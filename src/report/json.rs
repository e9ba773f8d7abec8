//! Documents for programs. The keys are fixed; docs/output.md describes them.

use nalgebra::Vector3;
use serde::Serialize;
use serde_json::{Map, Value, json};

use crate::authority::NetForce;
use crate::layout::{Advice, LayoutCase, OutBecause, Study, TravelEnd, Verdict};
use crate::lifetime::{PhaseSummary, TypicalUnload};
use crate::mission::Bound;
use crate::momentum::Convergence;
use crate::montecarlo::Checked;
use crate::vehicle::Thruster;

/// Where a result came from.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Provenance {
    /// Version of the program.
    pub version: &'static str,
    /// The configuration file.
    pub config: String,
    /// SHA-256 of the merged configuration.
    pub config_sha256: String,
    /// Ephemeris files that the phases fly, each with its SHA-256.
    pub ephemerides: std::collections::BTreeMap<String, String>,
    /// Overlay files in order.
    pub overlays: Vec<String>,
    /// Assumption sets in order.
    pub assumptions: Vec<String>,
    /// Settings of the command line in order.
    pub settings: Vec<String>,
    /// Seed of the draws.
    pub seed: u64,
    /// Lifetimes drawn.
    pub lifetimes: u64,
}

/// A document of a name: its schema and provenance, and the body's keys.
#[must_use]
pub fn document(name: &str, provenance: &Provenance, body: Value) -> Value {
    let mut body = object(body);
    body.insert("schema".to_owned(), json!(format!("couplet/{name}/1")));
    body.insert("provenance".to_owned(), json!(provenance));
    Value::Object(body)
}

pub(super) fn object(value: Value) -> Map<String, Value> {
    match value {
        Value::Object(map) => map,
        _ => Map::new(),
    }
}

pub(super) fn xyz(v: &Vector3<f64>) -> Value {
    json!([v.x, v.y, v.z])
}

fn verdict(verdict: &Verdict) -> Value {
    let axes: Map<String, Value> = verdict
        .axes
        .iter()
        .map(|axis| {
            let body = json!({ "most_N_m": axis.most_n_m, "price_kg_per_N_m_s": axis.price, "thrusters": axis.thrusters });
            (axis.axis.to_owned(), body)
        })
        .collect();
    json!({
        "every_direction": verdict.every_direction,
        "guaranteed_N_m": verdict.guaranteed_n_m,
        "weakest_direction": xyz(&verdict.weakest_direction),
        "dearest_direction": verdict.dearest.map(|(direction, _)| xyz(&direction)),
        "dearest_price_kg_per_N_m_s": verdict.dearest.map(|(_, price)| price),
        "missing_directions": verdict.missing.iter().map(xyz).collect::<Value>(),
        "axes": axes,
    })
}

pub(super) fn cases(cases: &[LayoutCase]) -> Value {
    let one = |case: &LayoutCase| {
        json!({
            "thrusters_out": case.thrusters_out,
            "out_because": match &case.out_because { OutBecause::None => "none", OutBecause::Thruster => "thruster", OutBecause::String(_) => "string" },
            "centre_of_mass": match case.travel_end { TravelEnd::Start => "start", TravelEnd::End => "end" },
            "centre_of_mass_m": xyz(&case.centre_of_mass_m),
            "torque_rank": case.torque_rank,
            "wrench_rank": case.wrench_rank,
            "pure_torque": verdict(&case.pure_torque),
            "any_force": verdict(&case.any_force),
            "worst_corner": case.worst_corner.as_ref().map(|corner| json!({
                "centre_of_mass_m": xyz(&corner.centre_of_mass_m),
                "guaranteed_N_m": corner.guaranteed_n_m,
                "dearest_price_kg_per_N_m_s": corner.dearest_price,
            })),
            "reasons": case.reasons.iter().map(|reason| json!({
                "axis": reason.axis,
                "net_force": if reason.pure { "zero" } else { "any" },
                "along": xyz(&reason.along),
                "sentence": reason.sentence,
            })).collect::<Value>(),
        })
    };
    cases.iter().map(one).collect()
}

fn advice(list: &[Advice]) -> Value {
    let one = |advice: &Advice| {
        json!({
            "thrusters_out": advice.out,
            "net_force": if advice.net == NetForce::Zero { "zero" } else { "any" },
            "turn": advice.turn.as_ref().map(|t| json!({
                "name": t.thruster, "push": xyz(&t.push), "angle_rad": t.angle_rad, "guaranteed_N_m": t.guaranteed_n_m,
            })),
            "cant": advice.cant.as_ref().map(|c| json!({
                "group": c.group,
                "ranges_rad": c.ranges_rad.iter().map(|(low, high)| json!([low, high])).collect::<Value>(),
                "best_rad": c.best_rad,
                "guaranteed_N_m": c.guaranteed_n_m,
            })),
            "add": advice.add.as_ref().map(|a| json!({
                "beside": a.beside, "position_m": xyz(&a.position_m), "push": xyz(&a.push), "guaranteed_N_m": a.guaranteed_n_m,
            })),
        })
    };
    list.iter().map(one).collect()
}

/// `couplet/layout/1`.
#[must_use]
pub fn layout_json(study: &Study, checked: &[Checked], provenance: &Provenance) -> Value {
    let dispersions: Value = study
        .dispersions
        .iter()
        .map(|d| {
            json!({
                "axis": d.axis,
                "torque_rss_N_m": xyz(&d.torque_rss),
                "torque_worst_N_m": xyz(&d.torque_worst),
                "force_rss_N": xyz(&d.force_rss),
                "force_worst_N": xyz(&d.force_worst),
            })
        })
        .collect();
    let plumes: Value = study
        .impingements
        .iter()
        .map(|i| json!({ "thruster": i.thruster, "surface": i.surface, "angle_rad": i.angle_rad, "distance_m": i.distance_m }))
        .collect();
    let wheels: Value = study
        .wheels
        .iter()
        .map(|w| {
            json!({
                "wheel_out": w.out,
                "every_direction_N_m_s": w.every_direction_n_m_s,
                "weakest_direction": xyz(&w.weakest_direction),
                "axes_N_m_s": w.axes_n_m_s,
            })
        })
        .collect();
    let body = json!({
        "cases": cases(&study.cases),
        "advice": advice(&study.advice),
        "dispersions": dispersions,
        "plume_impingements": plumes,
        "wheels": wheels,
        "requirements": requirements(checked),
    });
    document("layout", provenance, body)
}

pub(super) fn phases(list: &[PhaseSummary]) -> Value {
    let one = |phase: &PhaseSummary| {
        let peaks: Map<String, Value> = phase.sources.iter().map(|(name, peak, _)| ((*name).to_owned(), json!(peak))).collect();
        let mut secular: Map<String, Value> = phase.sources.iter().map(|(name, _, h)| ((*name).to_owned(), xyz(h))).collect();
        secular.insert("total".to_owned(), xyz(&phase.secular_n_m_s_per_day));
        json!({
            "name": phase.name,
            "peak_torque_N_m": peaks,
            "secular_N_m_s_per_day": secular,
            "cyclic_N_m_s": phase.cyclic_n_m_s,
            "wheel_envelope_N_m_s": phase.wheel_envelope_n_m_s,
            "unloads": phase.unloads,
            "unload_interval_s": phase.unload_interval_s,
            "simulated": simulated(&phase.convergence),
        })
    };
    list.iter().map(one).collect()
}

/// What a phase was simulated with.
fn simulated(used: &Convergence) -> Value {
    json!({
        "step_s": used.step_s,
        "steps_per_cycle": used.steps,
        "step_error": used.step_error,
        "strata": used.strata,
        "strata_error": used.strata_error,
        "tolerance": used.tolerance,
        "met": used.is_met(),
    })
}

/// `couplet/momentum/1`.
#[must_use]
pub fn momentum_json(list: &[PhaseSummary], provenance: &Provenance) -> Value {
    document("momentum", provenance, json!({ "phases": phases(list) }))
}

pub(super) fn unload(unload: &TypicalUnload, thrusters: &[Thruster]) -> Value {
    let command = &unload.command;
    let firings: Value = command
        .thrusters
        .iter()
        .map(|firing| {
            json!({
                "name": thrusters[firing.thruster].name,
                "impulse_N_s": firing.impulse_n_s,
                "pulses": firing.pulses,
                "on_time_s": firing.on_time_s,
                "propellant_kg": firing.propellant_kg,
            })
        })
        .collect();
    json!({
        "momentum_N_m_s": xyz(&command.momentum_n_m_s),
        "thrusters": firings,
        "propellant_kg": command.propellant_kg,
        "ideal_propellant_kg": command.ideal_propellant_kg,
        "duration_s": command.duration_s,
        "residual_N_m_s": xyz(&command.residual_n_m_s),
        "net_impulse_N_s": xyz(&command.net_impulse_n_s),
        "delta_v_m_per_s": xyz(&(command.net_impulse_n_s / unload.mass_kg)),
        "valve_cycles": command.thrusters.iter().map(|firing| firing.pulses).sum::<u32>(),
        "phase": unload.phase,
        "transient": { "rate_rad_per_s": unload.transient.rate_rad_per_s, "angle_rad": unload.transient.angle_rad },
    })
}

/// `couplet/unload/1`.
#[must_use]
pub fn unload_json(typical: &TypicalUnload, thrusters: &[Thruster], provenance: &Provenance) -> Value {
    document("unload", provenance, unload(typical, thrusters))
}

pub(super) fn requirements(list: &[Checked]) -> Value {
    let one = |checked: &Checked| {
        let (bound, limit) = match checked.requirement.bound {
            Bound::AtMost(limit) => ("at_most", limit),
            Bound::AtLeast(limit) => ("at_least", limit),
        };
        json!({
            "name": checked.requirement.name,
            "figure": checked.requirement.figure.name(),
            "met": checked.met,
            "value": checked.value,
            "bound": bound,
            "limit": limit,
            "unit": checked.requirement.figure.unit(),
        })
    };
    list.iter().map(one).collect()
}
