//! What several test files share.

use couplet::config::{Document, read};
use couplet::mission::Scenario;

#[allow(dead_code, reason = "not every test file needs all")]
/// A spacecraft with one facet, six thrusters that make every pure torque, and a nadir-pointing orbit at 700 km.
pub(crate) const SMALL: &str = "
spacecraft:
  name: Small
  dry_mass: 100 kg
  centre_of_mass: 0 0 0 m
  inertia: 60 60 90 kg m2
  residual_dipole: 1 0 0 A m2
materials:
- {name: plate, specular: 0, diffuse: 0}
surfaces:
- {name: plate, area: 3 m2, centre: 0 0.3 0 m, normal: 1 0 0, material: plate}
propulsion: {thrust: 1 N, exhaust_speed: 1500 m/s, shortest_pulse: 10 ms, longest_pulse: 10 s, duty_cycle: 100 %}
thrusters:
- {name: X1, position: 0 2 0 m, push: 0 0 1}
- {name: X2, position: 0 -2 0 m, push: 0 0 -1}
- {name: X3, position: 0 2 0 m, push: 0 0 -1}
- {name: X4, position: 0 -2 0 m, push: 0 0 1}
- {name: Y1, position: 0 0 2 m, push: 1 0 0}
- {name: Y2, position: 0 0 -2 m, push: -1 0 0}
- {name: Y3, position: 0 0 2 m, push: -1 0 0}
- {name: Y4, position: 0 0 -2 m, push: 1 0 0}
- {name: Z1, position: 2 0 0 m, push: 0 1 0}
- {name: Z2, position: -2 0 0 m, push: 0 -1 0}
- {name: Z3, position: 2 0 0 m, push: 0 -1 0}
- {name: Z4, position: -2 0 0 m, push: 0 1 0}
tank: {loaded: 5 kg, position: 0 0 0 m}
wheels:
  capacity: 30 N m s
  torque: 0.2 N m
  axes: [{name: x, axis: 1 0 0}, {name: y, axis: 0 1 0}, {name: z, axis: 0 0 1}]
mission:
  start: 2029-03-20
  orbit: {altitude: 700 km, inclination: 0 deg}
  phases: [{name: only, duration: 10 d, unload: {every: 1 d}}]
environment: {solar_activity: {level: moderate}, drag_coefficient: 2}
";

/// The scenario of `text` with settings as after `--set`.
pub(crate) fn scenario(text: &str, settings: &[&str]) -> Scenario {
    let none: &[(&str, &str)] = &[];
    let document = Document::from_text("test.yaml", text, none, settings).unwrap();
    Scenario::new(&read(&document).unwrap()).unwrap()
}

/// heron with settings as after `--set`.
#[allow(dead_code, reason = "not every test file needs all")]
pub(crate) fn heron(settings: &[&str]) -> Scenario {
    scenario(include_str!("../../configs/heron.yaml"), settings)
}
