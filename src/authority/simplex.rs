//! A small simplex method for one question: the levels that make the most torque along a direction.

use nalgebra::Vector3;

use super::Generator;
use super::linear::{Vec6, add_scaled, dot, inverse, norm, scaled, unit_axis};
use super::reduced::Reduced;

/// A gain or a rate below this part of the row it comes from is rounding: columns have length one, and the basis is
/// inverted afresh at each step.
const ROUNDING: f64 = 4e-15;

/// One unknown: a generator one way, the torque asked for, or the zero that a row starts with.
struct Variable {
    column: Vec6,
    /// Upper bound; the lower one is zero.
    most: f64,
    at_most: bool,
    basic: bool,
}

impl Variable {
    fn new(column: Vec6, most: f64) -> Self {
        Self { column, most, at_most: false, basic: false }
    }

    fn resting_value(&self) -> f64 {
        if self.at_most { self.most } else { 0.0 }
    }
}

/// Levels of `generators` that maximise t with Σ level · torque = t · `direction` and, if asked, no net force.
///
/// The start is everything at rest, which is feasible; each step moves one variable until another meets a bound
/// (bounded-variable simplex, Dantzig 1955; Bland's rule after a while, so that it cannot cycle). With at most six
/// rows the basis is inverted anew at each step, so that no rounding adds up.
pub(super) fn most_levels(generators: &[Generator], reduced: &Reduced, direction: &Vector3<f64>) -> Vec<f64> {
    let mut owners = Vec::new();
    let mut variables = Vec::new();
    for column in &reduced.columns {
        let generator = &generators[column.index];
        for (sign, most) in [(1.0, generator.most), (-1.0, -generator.least)] {
            if most > 0.0 {
                owners.push((column.index, sign / column.length));
                variables.push(Variable::new(column.unit.map(|x| x * sign), most * column.length));
            }
        }
    }
    let along = reduced.coordinates(direction);
    let torque = variables.len();
    variables.push(Variable::new(scaled(&along, -norm(&along).recip()), f64::INFINITY));
    let basis: Vec<usize> = (variables.len()..variables.len() + reduced.rank).collect();
    for row in 0..reduced.rank {
        variables.push(Variable { basic: true, ..Variable::new(unit_axis(row), 0.0) });
    }
    let mut simplex = Simplex { variables, basis, torque };
    simplex.run();
    let mut levels = vec![0.0; generators.len()];
    for ((index, factor), value) in owners.iter().zip(simplex.values()) {
        levels[*index] += factor * value;
    }
    for (level, generator) in levels.iter_mut().zip(generators) {
        *level = level.clamp(generator.least, generator.most);
    }
    levels
}

struct Simplex {
    variables: Vec<Variable>,
    basis: Vec<usize>,
    /// The variable to maximise.
    torque: usize,
}

impl Simplex {
    fn run(&mut self) {
        let patience = 4 * self.variables.len();
        for step in 0..50 * patience {
            let Some(rows) = self.inverse() else { return };
            let Some(entering) = self.entering(&rows, step >= patience) else {
                return;
            };
            if !self.advance(&rows, entering) {
                return;
            }
        }
    }

    fn inverse(&self) -> Option<[Vec6; 6]> {
        let columns: Vec<Vec6> = self.basis.iter().map(|&b| self.variables[b].column).collect();
        inverse(&columns, self.basis.len())
    }

    /// A variable whose move raises the torque: the steepest, or the first once patience is over.
    fn entering(&self, rows: &[Vec6; 6], first: bool) -> Option<usize> {
        let held = self.basis.iter().position(|&b| b == self.torque);
        let zero = held.map_or(0.0, |row| ROUNDING * norm(&rows[row]));
        let gain = |(index, v): (usize, &Variable)| {
            let own = if index == self.torque { 1.0 } else { 0.0 };
            let gain = own - held.map_or(0.0, |row| dot(&rows[row], &v.column));
            (index, if v.at_most { -gain } else { gain })
        };
        let free = self.variables.iter().enumerate().filter(|(_, v)| !v.basic && v.most > 0.0);
        let mut useful = free.map(gain).filter(|(_, gain)| *gain > zero);
        if first {
            return useful.next().map(|(index, _)| index);
        }
        useful.reduce(|a, b| if b.1 > a.1 { b } else { a }).map(|(index, _)| index)
    }

    /// Values of the basic variables.
    fn basic_values(&self, rows: &[Vec6; 6]) -> Vec6 {
        let resting = self.variables.iter().filter(|v| !v.basic && v.at_most);
        let right = resting.fold([0.0; 6], |sum, v| add_scaled(&sum, -v.most, &v.column));
        std::array::from_fn(|row| dot(&rows[row], &right))
    }

    /// Moves `entering` as far as it goes; false if nothing stops it.
    fn advance(&mut self, rows: &[Vec6; 6], entering: usize) -> bool {
        let values = self.basic_values(rows);
        let variable = &self.variables[entering];
        let sign = if variable.at_most { -1.0 } else { 1.0 };
        let mut reach = variable.most;
        let mut stop: Option<(usize, f64)> = None;
        for (row, &held) in self.basis.iter().enumerate() {
            let rate = -sign * dot(&rows[row], &variable.column);
            if rate.abs() <= ROUNDING * norm(&rows[row]) {
                continue;
            }
            let most = self.variables[held].most;
            let room = match rate > 0.0 {
                _ if most <= 0.0 => 0.0,
                true => (most - values[row]) / rate,
                false => values[row] / -rate,
            };
            let room = room.max(0.0);
            let better_pivot = stop.is_some_and(|(_, other)| rate.abs() > other.abs());
            if room < reach || (room <= reach && better_pivot) {
                reach = room;
                stop = Some((row, rate));
            }
        }
        match stop {
            None if reach.is_infinite() => return false,
            None => self.variables[entering].at_most ^= true,
            Some((row, rate)) => {
                let leaving = &mut self.variables[self.basis[row]];
                leaving.basic = false;
                leaving.at_most = rate > 0.0 && leaving.most > 0.0;
                self.variables[entering].basic = true;
                self.basis[row] = entering;
            }
        }
        true
    }

    /// Values of all variables.
    fn values(&self) -> Vec<f64> {
        let mut values: Vec<f64> = self.variables.iter().map(Variable::resting_value).collect();
        if let Some(rows) = self.inverse() {
            for (&held, value) in self.basis.iter().zip(self.basic_values(&rows)) {
                values[held] = value;
            }
        }
        values
    }
}
