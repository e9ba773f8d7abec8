//! The wheel array.

use nalgebra::{Matrix3, Unit, Vector3};

use super::Faults;
use crate::config;

/// One wheel.
#[derive(Debug, Clone)]
pub struct Wheel {
    /// Name.
    pub name: String,
    /// Spin axis in the body frame.
    pub axis: Unit<Vector3<f64>>,
}

/// The wheel array: equal wheels that span space.
#[derive(Debug, Clone)]
pub struct Wheels {
    /// The wheels.
    pub wheels: Vec<Wheel>,
    /// Momentum that one can hold either way, N·m·s.
    pub capacity_n_m_s: f64,
    /// Torque that one can make either way, N·m.
    pub torque_n_m: f64,
    /// Momentum kept free in every direction, N·m·s.
    pub reserve_n_m_s: f64,
}

impl Wheels {
    pub(super) fn new(written: &config::Wheels, faults: &mut Faults) -> Option<Self> {
        let capacity = faults.positive("wheels.capacity", written.capacity.0, "a capacity");
        let torque = faults.positive("wheels.torque", written.torque.0, "a torque");
        let reserve = written.reserve.map_or(0.0, |reserve| reserve.0);
        if reserve < 0.0 {
            faults.push("wheels.reserve", format!("expected a reserve of at least zero, got {reserve} N m s"), "give zero or more");
        }
        faults.unique("wheels.axes", written.axes.iter().map(|wheel| wheel.name.as_str()));
        let mut wheels = Vec::new();
        for (index, wheel) in written.axes.iter().enumerate() {
            let axis = faults.direction(&format!("wheels.axes[{index}].axis"), wheel.axis.0);
            wheels.push(Wheel { name: wheel.name.clone(), axis: Unit::new_unchecked(axis?) });
        }
        // Gram matrix of the axes: its smallest eigenvalue is zero if they lie in a plane.
        let gram: Matrix3<f64> = wheels.iter().map(|wheel| wheel.axis.into_inner() * wheel.axis.transpose()).sum();
        if gram.symmetric_eigenvalues().min() < 1e-6 {
            faults.push(
                "wheels.axes",
                format!("expected at least three wheels whose axes do not lie in a plane, got {} that do", wheels.len()),
                "add a wheel out of the plane, or leave `wheels` and every `unload` out",
            );
            return None;
        }
        Some(Self { wheels, capacity_n_m_s: capacity?, torque_n_m: torque?, reserve_n_m_s: reserve })
    }
}
