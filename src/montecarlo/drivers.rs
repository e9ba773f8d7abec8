//! What drives the propellant: Sobol' indices of the attitude total.

use super::{Indices, indices};
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

/// Drivers of the attitude total, the strongest first.
#[must_use]
pub fn drivers(plan: &Plan, seed: u64) -> Vec<Driver> {
    let parameters = &plan.scenario().parameters;
    let names: Vec<String> = parameters.as_slice().iter().map(|parameter| parameter.name.clone()).collect();
    let mut groups: Vec<(String, Vec<usize>)> = Vec::new();
    for (column, name) in names.iter().enumerate() {
        match groups.iter_mut().find(|(group, _)| group == whole(name)) {
            Some((_, columns)) => columns.push(column),
            None => groups.push((whole(name).to_owned(), vec![column])),
        }
    }
    if groups.is_empty() {
        return Vec::new();
    }
    let columns: Vec<Vec<usize>> = groups.iter().map(|(_, columns)| columns.clone()).collect();
    let found = indices(&columns, &names, BASE, seed, &|uniforms, rows| attitude_totals(plan, uniforms, rows, names.len()));
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
