//! What drives the propellant: Sobol' indices of the attitude total.

use super::{Indices, Watch, indices};
use crate::lifetime::{BLOCK, Plan};

/// Base sample of the indices; each driver costs as many lifetimes.
pub const BASE: usize = 512;

/// Share of the variance of the attitude total that one driver owns.
#[derive(Debug, Clone, PartialEq)]
pub struct Driver {
    /// Name: a parameter, or a vector whose components count as one.
    pub parameter: String,
    /// Share that it explains alone, and its 95 % interval.
    pub first_order: (f64, (f64, f64)),
    /// Share with all its interactions, and its 95 % interval.
    pub total: (f64, (f64, f64)),
}

/// The name without the component of a vector.
fn whole(name: &str) -> &str {
    [".x", ".y", ".z"].iter().find_map(|axis| name.strip_suffix(axis)).unwrap_or(name)
}

/// The quantities of each driver: as the user groups them, else the components of a vector together. Correlated ones make one
/// driver, since shares of the variance have a meaning for independent drivers only.
fn groups(plan: &Plan, names: &[String]) -> Vec<(String, Vec<usize>)> {
    let scenario = plan.scenario();
    let mut groups: Vec<(String, Vec<usize>)> =
        scenario.driver_groups.iter().map(|group| (group.name.clone(), group.members.clone())).collect();
    let grouped: Vec<usize> = groups.iter().flat_map(|(_, columns)| columns.clone()).collect();
    let own = groups.len();
    for (column, name) in names.iter().enumerate().filter(|(column, _)| !grouped.contains(column)) {
        match groups.iter_mut().skip(own).find(|(group, _)| group == whole(name)) {
            Some((_, columns)) => columns.push(column),
            None => groups.push((whole(name).to_owned(), vec![column])),
        }
    }
    for correlated in scenario.parameters.correlated() {
        let meets = |(_, columns): &(String, Vec<usize>)| columns.iter().any(|column| correlated.members().contains(column));
        let (joined, others): (Vec<_>, Vec<_>) = groups.into_iter().partition(meets);
        groups = others;
        let name = joined.iter().map(|(name, _)| name.as_str()).collect::<Vec<_>>().join(" + ");
        groups.push((name, joined.into_iter().flat_map(|(_, columns)| columns).collect()));
    }
    groups
}

/// Drivers of the attitude total, the strongest first; none where the watch stops it.
#[must_use]
pub fn drivers(plan: &Plan, seed: u64, watch: &Watch<'_>) -> Vec<Driver> {
    let parameters = &plan.scenario().parameters;
    let names: Vec<String> = parameters.as_slice().iter().map(|parameter| parameter.name.clone()).collect();
    let groups = groups(plan, &names);
    if groups.is_empty() {
        return Vec::new();
    }
    let columns: Vec<Vec<usize>> = groups.iter().map(|(_, columns)| columns.clone()).collect();
    let found = indices(&columns, &names, BASE, seed, &|uniforms, rows| {
        // A run that is stopped has no drivers: what is left needs no flying.
        if watch.stopped() { vec![0.0; rows] } else { attitude_totals(plan, uniforms, rows, names.len()) }
    });
    if watch.stopped() {
        return Vec::new();
    }
    let mut list = listed(groups, &found);
    list.sort_by(|a, b| b.total.0.total_cmp(&a.total.0));
    list
}

fn listed(groups: Vec<(String, Vec<usize>)>, found: &Indices) -> Vec<Driver> {
    let first = found.first_order.iter().copied().zip(found.first_order_interval.iter().copied());
    let total = found.total.iter().copied().zip(found.total_interval.iter().copied());
    groups
        .into_iter()
        .zip(first.zip(total))
        .map(|((parameter, _), (first_order, total))| Driver { parameter, first_order, total })
        .collect()
}

fn attitude_totals(plan: &Plan, uniforms: &[f64], rows: usize, columns: usize) -> Vec<f64> {
    let parameters = &plan.scenario().parameters;
    let draws: Vec<_> = uniforms.chunks(columns).take(rows).map(|row| parameters.at_quantiles(row)).collect();
    draws.chunks(BLOCK).flat_map(|block| plan.fly_block(block)).map(|outcome| outcome.attitude_total_kg()).collect()
}
