//! A small simplex method for one question: the levels that make the most torque along a direction.

use nalgebra::Vector3;

use super::linear::{Vec6, add_scaled};
use super::reduced::{longest_arm, works, wrench};
use super::{Generator, NetForce};

/// A reduced cost or a pivot below this is rounding: columns have length near one, entries round to 1e-15 and a
/// few dozen pivots add up.
const ROUNDING: f64 = 1e-12;

/// One column of the tableau: a generator one way, or the torque asked for.
struct Variable {
    column: Vec6,
    /// Objective per unit in terms of the variables that are not basic.
    gain: f64,
    /// Upper bound; the lower one is zero.
    most: f64,
    at_most: bool,
    basic: bool,
}

/// What a row of the tableau holds: a variable, or the zero it started with.
#[derive(Clone, Copy, PartialEq)]
enum Held {
    Zero,
    Variable(usize),
}

struct Tableau {
    variables: Vec<Variable>,
    held: [Held; 6],
    values: Vec6,
}

/// Levels of `generators` that maximise t with Σ level · torque = t · `direction` and, if asked, no net force.
///
/// The start is everything at rest, which is feasible; each step moves one variable until another meets a bound
/// (bounded-variable simplex, Dantzig 1955; Bland's rule after a while, so that it cannot cycle).
pub(super) fn most_levels(
    generators: &[Generator],
    net: NetForce,
    direction: &Vector3<f64>,
) -> Vec<f64> {
    let arm = longest_arm(generators.iter().filter(|g| works(g)));
    let mut owners = Vec::new();
    let mut variables = Vec::new();
    let variable = |column: Vec6, gain: f64, most: f64| Variable {
        column,
        gain,
        most,
        at_most: false,
        basic: false,
    };
    for (index, generator) in generators.iter().enumerate() {
        let column = wrench(generator, arm, net);
        for (sign, most) in [(1.0, generator.most), (-1.0, -generator.least)] {
            if most > 0.0 {
                owners.push((index, sign));
                variables.push(variable(column.map(|x| x * sign), 0.0, most));
            }
        }
    }
    variables.push(variable(
        [-direction.x, -direction.y, -direction.z, 0.0, 0.0, 0.0],
        1.0,
        f64::INFINITY,
    ));
    let mut tableau = Tableau {
        variables,
        held: [Held::Zero; 6],
        values: [0.0; 6],
    };
    tableau.run();
    let mut levels = vec![0.0; generators.len()];
    for (place, (index, sign)) in owners.iter().enumerate() {
        levels[*index] += sign * tableau.value(place);
    }
    levels
}

impl Tableau {
    fn run(&mut self) {
        let patience = 4 * self.variables.len();
        for step in 0..50 * patience {
            let Some(entering) = self.entering(step >= patience) else {
                return;
            };
            if !self.advance(entering) {
                return;
            }
        }
    }

    /// A variable whose move raises the objective: the steepest, or the first once patience is over.
    fn entering(&self, first: bool) -> Option<usize> {
        let gains = self.variables.iter().enumerate().filter(|(_, v)| !v.basic);
        let mut useful = gains
            .map(|(index, v)| (index, if v.at_most { -v.gain } else { v.gain }))
            .filter(|(_, gain)| *gain > ROUNDING);
        if first {
            return useful.next().map(|(index, _)| index);
        }
        useful
            .reduce(|a, b| if b.1 > a.1 { b } else { a })
            .map(|(index, _)| index)
    }

    /// Moves `entering` as far as it goes; false if nothing stops it.
    fn advance(&mut self, entering: usize) -> bool {
        let variable = &self.variables[entering];
        let column = variable.column;
        let sign = if variable.at_most { -1.0 } else { 1.0 };
        let mut reach = variable.most;
        let mut stop: Option<(usize, bool)> = None;
        for (row, held) in self.held.iter().enumerate() {
            let rate = -sign * column[row];
            if rate.abs() <= ROUNDING {
                continue;
            }
            let room = match (held, rate > 0.0) {
                (Held::Zero, _) => 0.0,
                (Held::Variable(_), false) => self.values[row] / -rate,
                (Held::Variable(v), true) => (self.variables[*v].most - self.values[row]) / rate,
            };
            let room = room.max(0.0);
            let better_pivot = stop.is_some_and(|(s, _)| column[row].abs() > column[s].abs());
            if room < reach || (room <= reach && better_pivot) {
                reach = room;
                stop = Some((row, rate > 0.0));
            }
        }
        if reach.is_infinite() {
            return false;
        }
        self.values = add_scaled(&self.values, -sign * reach, &column);
        match stop {
            None => self.variables[entering].at_most ^= true,
            Some((row, above)) => self.pivot(row, entering, above, sign * reach),
        }
        true
    }

    fn pivot(&mut self, row: usize, entering: usize, leaves_at_most: bool, moved: f64) {
        let variable = &self.variables[entering];
        let value = if variable.at_most { variable.most } else { 0.0 } + moved;
        let (column, gain) = (variable.column, variable.gain);
        for v in &mut self.variables {
            let share = v.column[row] / column[row];
            v.column = add_scaled(&v.column, -share, &column);
            v.column[row] = share;
            v.gain -= share * gain;
        }
        if let Held::Variable(leaving) = self.held[row] {
            self.variables[leaving].basic = false;
            self.variables[leaving].at_most = leaves_at_most;
        }
        self.variables[entering].basic = true;
        self.held[row] = Held::Variable(entering);
        self.values[row] = value;
    }

    fn value(&self, variable: usize) -> f64 {
        let v = &self.variables[variable];
        let row = self
            .held
            .iter()
            .position(|held| *held == Held::Variable(variable));
        match row {
            Some(row) => self.values[row].clamp(0.0, v.most),
            None if v.at_most => v.most,
            None => 0.0,
        }
    }
}
