//! Momentum that the wheels hold, intact and with each wheel out.

use nalgebra::Vector3;

use super::AXES;
use crate::authority::{Authority, Generator, NetForce};
use crate::vehicle::Wheels;

/// The momentum envelope with one wheel out, or none.
#[derive(Debug, Clone, PartialEq)]
pub struct WheelCase {
    /// Name of the wheel that is out.
    pub out: Option<String>,
    /// Momentum held in every direction, N·m·s; zero if the others lie in a plane.
    pub every_direction_n_m_s: f64,
    /// Direction that holds no more, unit, body frame.
    pub weakest_direction: Vector3<f64>,
    /// Momentum held along x, y and z, either way, N·m·s.
    pub axes_n_m_s: [f64; 3],
}

/// The envelope with all wheels, then with each one out.
#[must_use]
pub fn wheel_cases(wheels: &Wheels) -> Vec<WheelCase> {
    let sets = std::iter::once(None).chain((0..wheels.wheels.len()).map(Some));
    sets.map(|out| {
        let left = wheels.wheels.iter().enumerate().filter(|(k, _)| Some(*k) != out);
        let generators: Vec<_> = left.map(|(_, wheel)| Generator::wheel(wheel.axis.into_inner(), wheels.capacity_n_m_s)).collect();
        let envelope = Authority::new(&generators, NetForce::Any);
        let along = |k: usize| AXES.get(2 * k).map_or(0.0, |(_, axis)| envelope.most(&Vector3::from(*axis)));
        WheelCase {
            out: out.and_then(|k| wheels.wheels.get(k)).map(|wheel| wheel.name.clone()),
            every_direction_n_m_s: envelope.guaranteed(),
            weakest_direction: envelope.weakest_direction(),
            axes_n_m_s: [along(0), along(1), along(2)],
        }
    })
    .collect()
}
