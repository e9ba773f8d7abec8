//! Mass, centre of mass and inertia, without and with propellant.

use nalgebra::{Matrix3, Vector3};

use super::{Faults, register_triple};
use crate::config;
use crate::uncertain::{Draw, Parameters, Uncertain};

/// Mass properties without propellant.
#[derive(Debug, Clone)]
pub struct MassProperties {
    /// Mass, kg.
    pub mass_kg: Uncertain,
    /// Centre of mass in the body frame, m.
    pub centre_of_mass_m: [Uncertain; 3],
    /// Half widths of the box in which the centre of mass is stated to lie, m.
    pub centre_of_mass_box_m: Option<Vector3<f64>>,
    /// Elements xx, yy, zz, xy, xz, yz of the inertia matrix about the centre of mass, kg·m².
    pub inertia_kg_m2: [Uncertain; 6],
}

/// Mass properties at one time, all numbers.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MassState {
    /// Mass, kg.
    pub mass_kg: f64,
    /// Centre of mass in the body frame, m.
    pub centre_of_mass_m: Vector3<f64>,
    /// Inertia matrix about the centre of mass, kg·m².
    pub inertia_kg_m2: Matrix3<f64>,
}

/// Rows and columns of the six inertia elements.
pub const INERTIA_ELEMENTS: [(usize, usize); 6] = [(0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)];

/// The symmetric matrix of the elements xx, yy, zz, xy, xz, yz.
#[must_use]
pub fn symmetric(elements: [f64; 6]) -> Matrix3<f64> {
    let mut matrix = Matrix3::zeros();
    for (value, (row, column)) in elements.into_iter().zip(INERTIA_ELEMENTS) {
        matrix[(row, column)] = value;
        matrix[(column, row)] = value;
    }
    matrix
}

impl MassProperties {
    pub(super) fn new(written: &config::Spacecraft, parameters: &mut Parameters, faults: &mut Faults) -> Option<Self> {
        let mass = faults.positive_spread("spacecraft.dry_mass", written.dry_mass.0.clone(), "a mass");
        for (axis, spread) in ["xx", "yy", "zz"].into_iter().zip(written.inertia.0.clone()) {
            faults.positive_spread("spacecraft.inertia", spread, &format!("a moment of inertia {axis}"))?;
        }
        let diagonal = register_triple("spacecraft.inertia", "kg m2", written.inertia.0.clone(), parameters);
        let products = match &written.products_of_inertia {
            Some(xyz) => register_triple("spacecraft.products_of_inertia", "kg m2", xyz.0.clone(), parameters),
            None => [Uncertain::fixed(0.0); 3],
        };
        let [xx, yy, zz] = diagonal;
        let [xy, xz, yz] = products;
        let inertia_kg_m2 = [xx, yy, zz, xy, xz, yz];
        if written.centre_of_mass_box.is_some_and(|half| half.0.iter().any(|x| *x < 0.0)) {
            faults.push(
                "spacecraft.centre_of_mass_box",
                "expected half widths of at least zero",
                "give the distance to either side: `5 5 5 mm`",
            );
        }
        check_inertia(&symmetric(inertia_kg_m2.map(|element| element.nominal())), faults)?;
        Some(Self {
            mass_kg: parameters.register("spacecraft.dry_mass", "kg", mass?),
            centre_of_mass_m: register_triple("spacecraft.centre_of_mass", "m", written.centre_of_mass.0.clone(), parameters),
            centre_of_mass_box_m: written.centre_of_mass_box.map(|half| Vector3::from(half.0.map(f64::abs))),
            inertia_kg_m2,
        })
    }

    /// Nominal mass properties with point masses of propellant: mass, kg, and place, m, of each.
    #[must_use]
    pub fn with_propellant(&self, propellant: impl Iterator<Item = (f64, Vector3<f64>)>) -> MassState {
        combine(self, Uncertain::nominal, propellant)
    }

    /// Mass properties of one draw with point masses of propellant.
    #[must_use]
    pub fn in_draw(&self, draw: &Draw, propellant: impl Iterator<Item = (f64, Vector3<f64>)>) -> MassState {
        combine(self, |u| u.in_draw(draw), propellant)
    }
}

/// Adds point masses (parallel-axis theorem).
fn combine(dry: &MassProperties, value: impl Fn(&Uncertain) -> f64, propellant: impl Iterator<Item = (f64, Vector3<f64>)>) -> MassState {
    let dry_kg = value(&dry.mass_kg);
    let dry_centre = Vector3::from(dry.centre_of_mass_m.each_ref().map(&value));
    // About the body origin first, then about the centre of mass that comes out.
    let about_origin = |mass: f64, at: Vector3<f64>| (Matrix3::identity() * at.norm_squared() - at * at.transpose()) * mass;
    let own = symmetric(dry.inertia_kg_m2.each_ref().map(&value));
    let (mut mass_kg, mut moment, mut inertia) = (dry_kg, dry_centre * dry_kg, own + about_origin(dry_kg, dry_centre));
    for (kg, at) in propellant {
        mass_kg += kg;
        moment += at * kg;
        inertia += about_origin(kg, at);
    }
    let centre_of_mass_m = moment / mass_kg;
    MassState { mass_kg, centre_of_mass_m, inertia_kg_m2: inertia - about_origin(mass_kg, centre_of_mass_m) }
}

/// A body's principal moments obey the triangle inequality: none exceeds the sum of the others.
fn check_inertia(matrix: &Matrix3<f64>, faults: &mut Faults) -> Option<()> {
    let mut moments: Vec<f64> = matrix.symmetric_eigenvalues().iter().copied().collect();
    moments.sort_by(f64::total_cmp);
    let [low, middle, high] = moments[..] else { return None };
    // A plate reaches equality, so rounding must not refuse it.
    if low > 0.0 && high <= (low + middle) * (1.0 + 1e-9) {
        return Some(());
    }
    faults.push(
        "spacecraft.inertia",
        format!("no body has the principal moments {low:.4}, {middle:.4} and {high:.4} kg m2: each must be above zero and at most the sum of the other two"),
        "check the order Ixx Iyy Izz, the units, and the signs of `products_of_inertia`",
    );
    None
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Two equal point masses a distance d apart: reduced mass m/2, so I = m d²/2 across (classical mechanics, closed form).
    #[test]
    fn two_point_masses_make_a_dumbbell() {
        let tiny = Uncertain::fixed(1e-12);
        let zero = Uncertain::fixed(0.0);
        let dry = MassProperties {
            mass_kg: Uncertain::fixed(3.0),
            centre_of_mass_m: [zero; 3],
            centre_of_mass_box_m: None,
            inertia_kg_m2: [tiny, tiny, tiny, zero, zero, zero],
        };
        let both = dry.with_propellant([(1.0, Vector3::new(0.0, 0.0, 2.0)), (2.0, Vector3::new(0.0, 0.0, 2.0))].into_iter());
        assert!((both.centre_of_mass_m.z - 1.0).abs() < 1e-15);
        assert!((both.inertia_kg_m2[(0, 0)] - 6.0).abs() < 1e-9);
        assert!(both.inertia_kg_m2[(2, 2)].abs() < 1e-9);
    }
}
