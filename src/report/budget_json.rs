//! The budget for programs. The keys are fixed; docs/output.md describes them.

use serde_json::{Map, Value, json};

use super::json::{Provenance, cases, document, object, phases, requirements, unload, xyz};
use crate::config::MarginRule;
use crate::lifetime::{PhaseSummary, TypicalUnload};
use crate::mission::Scenario;
use crate::montecarlo::{Budget, Distribution, Ended, FAN_LINES, FanPoint, Histogram, QuantileEstimate, Swing};
use crate::propellant::ROWS;
use crate::vehicle::Propulsion;

const SECONDS_PER_YEAR: f64 = 31_557_600.0;

fn quantile(distribution: &Distribution, p: f64) -> Option<f64> {
    distribution.at(p).map(|estimate| estimate.value)
}

fn ledger(budget: &Budget) -> Value {
    let one = |(row, distribution): (&crate::propellant::Row, &Distribution)| {
        json!({
            "row": row.key(),
            "nominal_kg": distribution.nominal,
            "mean_kg": distribution.mean,
            "p50_kg": quantile(distribution, 0.50),
            "p95_kg": quantile(distribution, 0.95),
            "p99_kg": quantile(distribution, 0.99),
            "sd_kg": distribution.sd,
            "quantiles": quantiles(distribution),
            "histogram_kg": histogram(&distribution.histogram),
        })
    };
    ROWS.iter().zip(&budget.rows).map(one).collect()
}

fn margin_rule(rule: MarginRule) -> &'static str {
    match rule {
        MarginRule::Own => "own",
        MarginRule::EsaAssessment => "esa_assessment",
        MarginRule::P95 => "p95",
    }
}

fn margin(scenario: &Scenario, budget: &Budget) -> Value {
    let margin = &scenario.settings.margin;
    json!({
        "rule": margin_rule(margin.rule),
        "attitude": margin.attitude,
        "burns": margin.burns,
        "attitude_with_margin_kg": budget.attitude.nominal * (1.0 + margin.attitude),
        "probability_within": budget.within_margin.share,
        "probability_within_interval": [budget.within_margin.lower, budget.within_margin.upper],
    })
}

fn throughput(propulsion: &Propulsion, budget: &Budget) -> Value {
    let each = propulsion.thrusters.iter().zip(&budget.throughput);
    let qualified = propulsion.qualified_throughput_kg;
    each.map(|(t, d)| json!({ "thruster": t.name, "nominal": d.nominal, "p95": quantile(d, 0.95), "qualified": qualified })).collect()
}

/// Quantiles of masses with their limits.
fn quantiles(distribution: &Distribution) -> Value {
    let one = |q: &QuantileEstimate| {
        json!({
            "p": q.p,
            "kg": q.value,
            "lower_kg": q.lower,
            "upper_kg": q.upper,
            "two_sided_kg": q.two_sided.map(|(low, high)| json!([low, high])),
            "confidence": q.confidence,
            "lifetimes_needed": q.needed,
        })
    };
    distribution.quantiles.iter().map(one).collect()
}

fn histogram(histogram: &Histogram) -> Value {
    json!({ "start": histogram.start, "width": histogram.width, "counts": histogram.counts })
}

fn total(total: &Distribution) -> Value {
    json!({
        "nominal": total.nominal,
        "mean": total.mean,
        "sd": total.sd,
        "least": total.range.0,
        "most": total.range.1,
        "quantiles": quantiles(total),
        "histogram_kg": histogram(&total.histogram),
    })
}

/// What was drawn, and what ended it.
fn drawn(budget: &Budget) -> Value {
    let (ended, width) = match budget.ended {
        Ended::Number => ("number", None),
        Ended::Precise(width) => ("precision", Some(width)),
        Ended::Cap(width) => ("cap", width),
        Ended::Stopped => ("stopped_by_user", None),
    };
    json!({
        "lifetimes": budget.lifetimes,
        "ended_by": ended,
        "interval_width": width,
        "precision": budget.design.precision.map(|p| json!({ "quantile": p.quantile, "width": p.width, "at_most": p.at_most })),
        "sampling": if budget.design.replicates().is_some() { "latin_hypercube" } else { "plain" },
        "replicates": budget.design.replicates().map(|(_, replicates)| replicates),
        "limits": if budget.design.replicates().is_some() { "normal, from replicates" } else { "distribution-free" },
    })
}

fn fan(budget: &Budget) -> Value {
    let one = |point: &FanPoint| {
        let lines: Map<String, Value> =
            FAN_LINES.iter().zip(point.kg).map(|(p, kg)| (format!("p{:02.0}_kg", p * 100.0), json!(kg))).collect();
        let mut point = object(json!({ "years": point.time_s / SECONDS_PER_YEAR, "nominal_kg": point.nominal_kg }));
        point.extend(lines);
        Value::Object(point)
    };
    budget.fan.iter().map(one).collect()
}

fn swings(budget: &Budget) -> Value {
    let one = |swing: &Swing| {
        json!({
            "parameter": swing.parameter,
            "unit": swing.unit,
            "p5": swing.values.0,
            "p95": swing.values.1,
            "total_at_p5_kg": swing.totals_kg.0,
            "total_at_p95_kg": swing.totals_kg.1,
        })
    };
    budget.swings.iter().map(one).collect()
}

/// `couplet/budget/1`.
#[must_use]
pub fn budget_json(
    scenario: &Scenario,
    budget: &Budget,
    momentum: &[PhaseSummary],
    typical: Option<&TypicalUnload>,
    provenance: &Provenance,
) -> Value {
    let propulsion = &scenario.vehicle.propulsion;
    let life: Value = budget.life_s.iter().map(|(p, life)| json!({ "p": p, "years": life.map(|s| s / SECONDS_PER_YEAR) })).collect();
    let cycles: Value = propulsion
        .thrusters
        .iter()
        .zip(&budget.cycles)
        .map(|(thruster, d)| json!({ "thruster": thruster.name, "nominal": d.nominal, "p95": quantile(d, 0.95), "qualified": propulsion.qualified_pulses }))
        .collect();
    let drivers: Value = budget
        .drivers
        .iter()
        .map(|d| {
            let interval = |(low, high): (f64, f64)| json!([low, high]);
            json!({
                "parameter": d.parameter,
                "first_order": d.first_order.0,
                "first_order_interval": interval(d.first_order.1),
                "total": d.total.0,
                "total_interval": interval(d.total.1),
            })
        })
        .collect();
    let body = json!({
        "ledger": ledger(budget),
        "attitude_total_kg": total(&budget.attitude),
        "needed_kg": total(&budget.needed),
        "drawn": drawn(budget),
        "propellant_used_over_time": fan(budget),
        "swings": swings(budget),
        "probability_served": budget.served.share,
        "propellant_loaded_kg": budget.loaded_kg,
        "probability_enough": budget.enough.share,
        "probability_enough_interval": [budget.enough.lower, budget.enough.upper],
        "life_years": life,
        "unloads": { "nominal": budget.unloads.nominal, "p95": quantile(&budget.unloads, 0.95) },
        "valve_cycles": cycles,
        "drivers": drivers,
        "throughput_kg": throughput(propulsion, budget),
        "margin": margin(scenario, budget),
        "unload_delta_v": budget.unload_delta_v.map(|push| json!({
            "each_m_per_s": push.each_m_per_s,
            "per_day_m_per_s": push.per_day_m_per_s,
            "per_year_m_per_s": xyz(&push.per_year_m_per_s),
        })),
        "wheel_fill": budget.wheel_fill,
        "unload_timing": budget.timing.map(|gain| json!({ "as_due_kg": gain.as_due_kg, "cheapest_kg": gain.cheapest_kg })),
        "requirements": requirements(&budget.requirements),
        "warnings": budget.warnings,
        "layout": { "cases": cases(&budget.layout) },
        "momentum": { "phases": phases(momentum) },
        "unload": typical.map(|typical| unload(typical, &propulsion.thrusters)),
    });
    document("budget", provenance, body)
}
