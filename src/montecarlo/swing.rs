//! One quantity at a time: what the attitude total becomes with it at its P5 and at its P95, the rest nominal.

use crate::lifetime::Plan;

/// What one quantity does alone.
#[derive(Debug, Clone, PartialEq)]
pub struct Swing {
    /// Name.
    pub parameter: String,
    /// SI unit; empty for a pure number.
    pub unit: &'static str,
    /// Its value at P5 and P95, SI.
    pub values: (f64, f64),
    /// Attitude total there, kg.
    pub totals_kg: (f64, f64),
}

impl Swing {
    /// Distance between both totals, kg.
    #[must_use]
    pub fn width_kg(&self) -> f64 {
        (self.totals_kg.1 - self.totals_kg.0).abs()
    }
}

/// Swings of all uncertain quantities, the widest first.
#[must_use]
pub fn swings(plan: &Plan) -> Vec<Swing> {
    let list = plan.scenario().parameters.as_slice();
    let nominal = plan.nominal();
    let ends: Vec<(f64, f64)> = list.iter().map(|p| (p.spread.quantile(0.05), p.spread.quantile(0.95))).collect();
    let draws: Vec<_> = plan
        .scenario()
        .parameters
        .ids()
        .zip(&ends)
        .flat_map(|(id, (low, high))| [nominal.clone().with(id, *low), nominal.clone().with(id, *high)])
        .collect();
    let totals: Vec<f64> = plan.fly_block(&draws).iter().map(crate::lifetime::Outcome::attitude_total_kg).collect();
    let one = |((p, values), totals): ((&crate::uncertain::Parameter, &(f64, f64)), &[f64])| Swing {
        parameter: p.name.clone(),
        unit: p.unit,
        values: *values,
        totals_kg: (totals.first().copied().unwrap_or(f64::NAN), totals.last().copied().unwrap_or(f64::NAN)),
    };
    let mut swings: Vec<Swing> = list.iter().zip(&ends).zip(totals.chunks(2)).map(one).collect();
    swings.sort_by(|a, b| b.width_kg().total_cmp(&a.width_kg()));
    swings
}
