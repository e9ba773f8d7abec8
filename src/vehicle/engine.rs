//! Engines for orbit burns.

use nalgebra::{Unit, UnitVector3, Vector3};

use super::Faults;
use super::propulsion::{ExhaustSpeed, exhaust_speed};
use crate::config::{self, Spec};
use crate::uncertain::{Draw, Parameters, Spread, Uncertain};
use crate::units::{Kind, kind};

/// An engine.
#[derive(Debug, Clone)]
pub struct Engine {
    /// Name.
    pub name: String,
    /// Thrust with the tanks as loaded, N.
    pub thrust_n: Uncertain,
    /// Exhaust speed with the tanks as loaded.
    pub exhaust_speed: ExhaustSpeed,
    /// Position in the body frame, m.
    pub position_m: Vector3<f64>,
    /// Direction in which it is meant to push the spacecraft, body frame.
    pub push: UnitVector3<f64>,
    /// Angles of the push from there about two axes across it, rad.
    pub misalignment_rad: [Uncertain; 2],
}

impl Engine {
    /// Direction of the push in a draw, unit: turned by the small angles about two axes across it.
    #[must_use]
    pub fn push_in_draw(&self, draw: &Draw) -> Vector3<f64> {
        let push = self.push.into_inner();
        let other = if push.z.abs() < 0.9 { Vector3::z() } else { Vector3::x() };
        let first = push.cross(&other).normalize();
        let second = push.cross(&first);
        let [a, b] = self.misalignment_rad.each_ref().map(|angle| angle.in_draw(draw));
        (push + second * a - first * b).normalize()
    }
}

pub(super) fn read(spec: &Spec, parameters: &mut Parameters, faults: &mut Faults) -> Vec<Engine> {
    faults.unique("engines", spec.engines.iter().map(|engine| engine.name.as_str()));
    (0..spec.engines.len()).filter_map(|index| engine(spec.engines.get(index)?, index, parameters, faults)).collect()
}

fn engine(written: &config::Engine, index: usize, parameters: &mut Parameters, faults: &mut Faults) -> Option<Engine> {
    let at = format!("engines[{index}]");
    let name = format!("engines[{}]", written.name);
    let thrust = faults.positive_spread(&format!("{at}.thrust"), written.thrust.0.clone(), "a thrust");
    let speed = exhaust_speed(&at, &name, (written.isp.as_ref(), written.exhaust_speed.as_ref()), parameters, faults);
    if written.isp.is_none() && written.exhaust_speed.is_none() {
        faults.push(&at, "expected `isp` or `exhaust_speed`", "add `isp: 225 s`");
    }
    let push = faults.direction(&format!("{at}.push"), written.push.0);
    let off = written.misalignment.clone().map_or(Spread::Fixed(0.0), |angle| angle.0);
    let misalignment_rad =
        ["a", "b"].map(|axis| parameters.register(format!("{name}.misalignment.{axis}"), kind::Angle::UNIT, off.clone()));
    Some(Engine {
        name: written.name.clone(),
        thrust_n: parameters.register(format!("{name}.thrust"), kind::Force::UNIT, thrust?),
        exhaust_speed: speed?,
        position_m: Vector3::from(written.position.0),
        push: Unit::new_unchecked(push?),
        misalignment_rad,
    })
}
