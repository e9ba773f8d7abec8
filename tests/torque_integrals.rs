//! The inertial integral of each disturbance torque over ten orbits against an independent integration: see
//! `tests/reference/torque_integrals.py`, which writes the file read here, from the published formulas and with packages
//! of other people for time, field and air.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use std::collections::BTreeMap;

use couplet::disturbance::{Factor, Feature, Observer, sources};
use couplet::mission::Scenario;
use couplet::vehicle::{INERTIA_ELEMENTS, MassState};
use nalgebra::Vector3;
use serde::Deserialize;
use support::scenario;

/// The spacecraft of the script. The tank stands at the centre of mass, so that propellant moves nothing.
const SPACECRAFT: &str = "
spacecraft:
  name: Box and plates
  dry_mass: 300 kg
  centre_of_mass: 0.03 -0.05 0.08 m
  inertia: 60 80 70 kg m2
  products_of_inertia: 3 -2 4 kg m2
  residual_dipole: 0.8 -0.5 0.3 A m2
  body_torque: 2 -1.5 1 uN m
materials:
- {name: foil, specular: 0.30, diffuse: 0.25, drag_coefficient: 2.2}
- {name: radiator, specular: 0.05, diffuse: 0.70, drag_coefficient: 2.0}
- {name: cell, specular: 0.10, diffuse: 0.15, drag_coefficient: 2.4}
surfaces:
- {name: +x, area: 1.2 m2, centre: 0.5 0 0 m, normal: 1 0 0, material: foil}
- {name: -x, area: 1.2 m2, centre: -0.5 0 0 m, normal: -1 0 0, material: foil}
- {name: +y, area: 1.0 m2, centre: 0 0.6 0 m, normal: 0 1 0, material: foil}
- {name: -y, area: 1.0 m2, centre: 0 -0.6 0 m, normal: 0 -1 0, material: foil}
- {name: +z, area: 1.2 m2, centre: 0 0 0.5 m, normal: 0 0 1, material: foil}
- {name: -z, area: 1.2 m2, centre: 0 0 -0.5 m, normal: 0 0 -1, material: foil}
- {name: radiator, area: 0.8 m2, centre: -0.4 -0.9 0.7 m, normal: 0 -0.6 -0.8, material: radiator}
- {name: shield, area: 0.5 m2, centre: 0.9 0.2 0.6 m, normal: 0.6 0 -0.8, material: foil, both_sides: true}
- {name: wing, area: 3 m2, centre: 0.1 2.1 -0.2 m, normal: 0 0.6 -0.8, material: cell, follows_sun_about: 0 1 0}
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
tank: {loaded: 5 kg, position: 0.03 -0.05 0.08 m}
wheels:
  capacity: 30 N m s
  torque: 0.2 N m
  axes: [{name: x, axis: 1 0 0}, {name: y, axis: 0 1 0}, {name: z, axis: 0 0 1}]
mission:
  start: 2027-06-10
  orbit: {altitude: 500 km, inclination: 60 deg, ascending_node: 20 deg, mean_anomaly: 40 deg}
  phases: [{name: only, duration: 10 d, unload: {every: 1 d}}]
environment: {solar_activity: {level: moderate}, drag_coefficient: 2}
";

const ELLIPSE: &str = "mission.orbit={perigee_altitude: 1200 km, apogee_altitude: 39150 km, inclination: 63.4 deg, \
    ascending_node: 250 deg, argument_of_perigee: 270 deg, mean_anomaly: 120 deg}";

/// Exactly at nadir, gravity feels but two elements of the inertia matrix; turned, it feels all.
const TURNED: &str = "mission.phases[only].attitude={bias: 6 -9 4 deg}";

#[derive(Deserialize)]
struct Reference {
    cases: Vec<Case>,
}

#[derive(Deserialize)]
struct Case {
    name: String,
    nodal_period_s: f64,
    span_s: f64,
    /// Where the air begins and ends: the density jumps there, and no rule with fixed steps sees a jump.
    ceiling_crossings_s: Vec<f64>,
    sources: BTreeMap<String, Row>,
}

#[derive(Deserialize)]
struct Row {
    integral_n_m_s: [f64; 3],
    error_n_m_s: f64,
}

fn case(name: &str) -> Case {
    let reference: Reference = serde_json::from_str(include_str!("reference/torque_integrals.json")).unwrap();
    reference.cases.into_iter().find(|case| case.name == name).unwrap()
}

/// The integral of the torque of each source in the inertial frame, N·m·s, by the midpoint rule.
///
/// With [`value`] all that this test takes from the crate. `edges_s`, seconds from the mission's start, bound pieces of
/// the span; each is cut into equal steps of `step_s` or a little less. The field is that of the middle of the span.
fn integrals(scenario: &Scenario, edges_s: &[f64], step_s: f64) -> BTreeMap<&'static str, Vector3<f64>> {
    let (phase, start) = (&scenario.mission.phases[0], scenario.mission.start);
    let mass = scenario.vehicle.mass_state(5.0);
    let middle_s = f64::midpoint(edges_s[0], edges_s[edges_s.len() - 1]);
    let observer = Observer::new(&scenario.mission, phase, start.plus_seconds(middle_s), true);
    let sources = sources(scenario, phase);
    let values: Vec<Vec<f64>> = sources.iter().map(|source| source.features().iter().map(|f| value(f, &mass)).collect()).collect();
    let mut sums: BTreeMap<_, _> = sources.iter().map(|source| (source.name(), Vector3::zeros())).collect();
    for (middle_s, step_s) in steps(edges_s, step_s) {
        let moment = phase.moment(start, middle_s);
        let sky = moment.sky();
        let surroundings = observer.step(start.plus_seconds(middle_s), step_s, &sky);
        let inertial_from_body = phase.attitude.inertial_from_body(&moment, &sky);
        let body = surroundings.turned(&inertial_from_body.inverse());
        for (source, values) in sources.iter().zip(&values) {
            let mut torques = vec![Vector3::zeros(); values.len()];
            source.torques(&body, &mut torques);
            let torque: Vector3<f64> = torques.iter().zip(values).map(|(torque, value)| torque * *value).sum();
            *sums.get_mut(source.name()).unwrap() += inertial_from_body * torque * step_s;
        }
    }
    sums
}

/// Nothing is uncertain here, so mass properties alone multiply.
fn value(feature: &Feature, mass: &MassState) -> f64 {
    let factor = |factor: &Factor| match *factor {
        Factor::CentreOfMass(axis) => mass.centre_of_mass_m[axis],
        Factor::Inertia(element) => mass.inertia_kg_m2[INERTIA_ELEMENTS[element]],
        other => panic!("{other:?} is not fixed"),
    };
    feature.factors().iter().map(factor).product()
}

/// Middle and length of every step, s.
fn steps(edges_s: &[f64], step_s: f64) -> impl Iterator<Item = (f64, f64)> {
    edges_s.windows(2).flat_map(move |piece| {
        let (from_s, length_s) = (piece[0], piece[1] - piece[0]);
        let count = (length_s / step_s).ceil();
        let each_s = length_s / count;
        (0_u32..).map(f64::from).take_while(move |k| *k < count).map(move |k| (from_s + (k + 0.5) * each_s, each_s))
    })
}

/// Both sides have the same models, so only integration may differ: 1e-6 is what was asked for. Reached are 3e-8 and better
/// with 4000 and 8000 steps an orbit; the most is that of drag, whose kinks (facets edge-on to the wind) fall within steps
/// and which no extrapolation removes.
fn agree(name: &str, settings: &[&str]) {
    let case = case(name);
    let scenario = scenario(SPACECRAFT, settings);
    let period_s = scenario.mission.phases[0].trajectory.revolution_s().unwrap();
    // A few roundings in forming it.
    assert!((period_s / case.nodal_period_s - 1.0).abs() < 1e-13, "{period_s}");
    let edges_s: Vec<f64> = [&[0.0], case.ceiling_crossings_s.as_slice(), &[case.span_s]].concat();
    let coarse = integrals(&scenario, &edges_s, period_s / 4000.0);
    let fine = integrals(&scenario, &edges_s, period_s / 8000.0);
    assert_eq!(case.sources.len(), 5);
    for (source, row) in &case.sources {
        let want = Vector3::from(row.integral_n_m_s);
        // Richardson: the error of the midpoint rule falls with the square of the step.
        let got = (fine[source.as_str()] * 4.0 - coarse[source.as_str()]) / 3.0;
        let off = (got - want).norm() / want.norm();
        assert!(row.error_n_m_s < 1e-9 * want.norm(), "{name}, {source}: the reference itself is uncertain");
        assert!(off < 1e-6, "{name}, {source}: {got:?} against {want:?}, {off:.1e}");
    }
}

#[test]
fn torques_of_a_low_orbit_integrate_to_the_reference() {
    agree("low", &[]);
}

#[test]
fn torques_on_a_body_turned_from_nadir_integrate_to_the_reference() {
    agree("turned", &[TURNED]);
}

#[test]
fn torques_of_a_twelve_hour_ellipse_integrate_to_the_reference() {
    agree("ellipse", &[ELLIPSE]);
}
