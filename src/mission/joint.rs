//! How uncertain quantities hang together: correlation, draws made anew, groups of drivers.

use nalgebra::DMatrix;

use crate::config::{self, Each, Uncertainty, did_you_mean};
use crate::uncertain::{Anew, Correlated, Parameters};
use crate::vehicle::Faults;

/// Quantities that count as one driver.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct DriverGroup {
    /// Name.
    pub name: String,
    /// Places of its quantities in the registry.
    pub members: Vec<usize>,
}

/// Quantities that are one number for the whole mission, whatever the phase.
const ONCE: [&str; 2] = ["tank.loading_error", "tank.residual"];

/// Ends of names that say how often or how long an event happens.
const COUNTED: [&str; 3] = [".count", ".time", ".days_per_year"];

/// Applies what the user wrote to the registry; the groups of drivers come back.
pub(super) fn apply(written: &Uncertainty, events: &[String], parameters: &mut Parameters, faults: &mut Faults) -> Vec<DriverGroup> {
    for (index, drawn) in written.drawn.iter().enumerate() {
        let at = format!("uncertainty.drawn[{index}]");
        for (k, name) in drawn.quantities.iter().enumerate() {
            let at = format!("{at}.quantities[{k}]");
            let anew = match drawn.for_each {
                Each::Lifetime => Anew::Lifetime,
                Each::Phase => Anew::Phase,
                Each::Event => Anew::Event,
            };
            let places = named(name, &at, parameters, faults);
            if anew == Anew::Phase && ONCE.contains(&name.as_str()) {
                faults.push(&at, format!("`{name}` is one number for the whole mission"), "leave it out");
            } else if anew == Anew::Event && COUNTED.iter().any(|end| name.ends_with(end)) {
                faults.push(&at, format!("`{name}` is counted once a phase"), "draw it for each `phase`");
            } else if anew == Anew::Event && !events.iter().any(|event| name.starts_with(event.as_str())) {
                let help = "draw it for each `phase`, or name a quantity of an event, such as `PHASE.EVENT.delta_v`";
                faults.push(&at, format!("`{name}` is no quantity of an event"), help);
            } else {
                for place in places {
                    parameters.draw_anew(place, anew);
                }
            }
        }
    }
    let mut taken = Vec::new();
    for (index, group) in written.correlations.iter().enumerate() {
        correlate(group, &format!("uncertainty.correlations[{index}]"), &mut taken, parameters, faults);
    }
    groups(written, parameters, faults)
}

fn groups(written: &Uncertainty, parameters: &Parameters, faults: &mut Faults) -> Vec<DriverGroup> {
    faults.unique("uncertainty.drivers", written.drivers.iter().map(|group| group.name.as_str()));
    let mut groups: Vec<DriverGroup> = Vec::new();
    for (index, group) in written.drivers.iter().enumerate() {
        let mut members = Vec::new();
        for (k, name) in group.quantities.iter().enumerate() {
            let at = format!("uncertainty.drivers[{index}].quantities[{k}]");
            for place in named(name, &at, parameters, faults) {
                if members.contains(&place) || groups.iter().any(|other| other.members.contains(&place)) {
                    faults.push(&at, format!("`{name}` belongs to a driver already"), "name it once");
                }
                members.push(place);
            }
        }
        groups.push(DriverGroup { name: group.name.clone(), members });
    }
    groups
}

/// Places of a quantity: of one, or of all components of a vector.
fn named(name: &str, at: &str, parameters: &Parameters, faults: &mut Faults) -> Vec<usize> {
    let list = parameters.as_slice();
    let component = |known: &str| known.strip_prefix(name).is_some_and(|rest| matches!(rest, ".x" | ".y" | ".z"));
    let found: Vec<usize> = (0..list.len()).filter(|k| list.get(*k).is_some_and(|p| p.name == name || component(&p.name))).collect();
    if found.is_empty() {
        let known: Vec<&str> = list.iter().map(|p| p.name.as_str()).collect();
        let help = did_you_mean(name, known.iter().copied()).unwrap_or_else(|| match known.as_slice() {
            [] => "nothing is uncertain: give it a spread".to_owned(),
            known => format!("give it a spread, or name one of {}", known.join(", ")),
        });
        faults.push(at, format!("`{name}` is no uncertain quantity of this configuration"), help);
    }
    found
}

fn correlate(written: &config::Correlation, at: &str, taken: &mut Vec<usize>, parameters: &mut Parameters, faults: &mut Faults) {
    let before = faults.count();
    let mut members = Vec::new();
    for (k, name) in written.quantities.iter().enumerate() {
        let at = format!("{at}.quantities[{k}]");
        let places = named(name, &at, parameters, faults);
        match places.as_slice() {
            [place] if taken.contains(place) => {
                faults.push(&at, format!("`{name}` is correlated already"), "put all that goes together into one list with a `matrix`");
            }
            [place] => {
                taken.push(*place);
                members.push(*place);
            }
            [] => {}
            _ => faults.push(&at, format!("`{name}` is a vector"), format!("name its components: `{name}.x`, `{name}.y`, `{name}.z`")),
        }
    }
    if faults.count() > before {
        return;
    }
    if members.len() < 2 {
        faults.push(at, "expected two quantities or more", "name what goes together");
        return;
    }
    let mut often = members.iter().filter_map(|place| parameters.as_slice().get(*place)).map(|p| p.anew);
    if often.next().is_some_and(|first| often.any(|other| other != first)) {
        faults.push(at, "expected quantities that are drawn equally often", "list all of them under the same `for_each`");
        return;
    }
    let Some(matrix) = matrix(written, members.len(), at, faults) else { return };
    match Correlated::new(members, matrix) {
        Some(group) => parameters.correlate(group),
        None => faults.push(
            at,
            "these correlations contradict one another: the matrix is not positive definite",
            "bring the coefficients nearer to zero: what goes with two others cannot keep them far apart",
        ),
    }
}

/// The matrix written, symmetric with ones on its diagonal.
fn matrix(written: &config::Correlation, size: usize, at: &str, faults: &mut Faults) -> Option<DMatrix<f64>> {
    let help = "write `coefficient: 0.6`, or `matrix: [[1, 0.6], [0.6, 1]]`";
    match (written.coefficient, &written.matrix) {
        (Some(coefficient), None) => {
            let coefficient = faults.within(&format!("{at}.coefficient"), coefficient, -1.0, 1.0, "a correlation coefficient")?;
            Some(DMatrix::from_fn(size, size, |row, column| if row == column { 1.0 } else { coefficient }))
        }
        (None, Some(rows)) => {
            let at = format!("{at}.matrix");
            if rows.len() != size || rows.iter().any(|row| row.len() != size) {
                faults.push(&at, format!("expected {size} rows of {size} numbers, one for each quantity"), help);
                return None;
            }
            let matrix = DMatrix::from_fn(size, size, |row, column| rows.get(row).and_then(|row| row.get(column)).copied().unwrap_or(0.0));
            let off = |value: f64| value.abs() > 1e-12;
            if (0..size).any(|k| off(matrix[(k, k)] - 1.0)) {
                faults.push(&at, "expected ones on the diagonal", "a quantity goes wholly with itself");
                return None;
            }
            if (0..size).any(|row| (0..row).any(|column| off(matrix[(row, column)] - matrix[(column, row)]))) {
                faults.push(&at, "expected a symmetric matrix", "write the same coefficient on both sides of the diagonal");
                return None;
            }
            Some(matrix)
        }
        _ => {
            faults.push(at, "expected one of `coefficient` and `matrix`", help);
            None
        }
    }
}
