//! The ranges that the reference tells, and what the program refuses.

use std::path::Path;

use couplet::config::{Document, RANGES, read, render_all};
use couplet::mission::Scenario;

/// heron with one of everything else laid over it.
const MORE: &str = "
tank: {blowdown: {pressure: 22 bar, ratio: 4, propellant_density: 1008 kg/m3}}
propulsion:
  pressure_law: {thrust_power: 1, exhaust_speed_power: 0}
  failures: [{name: f, out: A, probability: 1 %, from: 1 yr}]
engines: [{name: main, thrust: 20 N, isp: 300 s, position: 0 0 0 m, push: 0 0 1}]
uncertainty: {correlations: [{quantities: [propulsion.isp, propulsion.thrust], coefficient: 0.1}]}
budget: {precision: {width: 1 %}}
mission:
  phases:
  - name: science
    events:
    - {name: spin, spin: {axis: 0 0 1, to: 1 rpm, count: 1}}
    - {name: turn, axis_turn: {axis: 0 0 1, rate: 1 rpm, angle: 5 deg, arc: 10 deg, count: 1}}
    - {name: band, deadband: {half_width: 1 deg, time: 1 d}}
";

/// `Type.key`, where it stands, and a value out of its range.
const OUTSIDE: &[(&str, &str, &str)] = &[
    ("AxisTurn.angle", "mission.phases[science].events[turn].axis_turn.angle", "0 deg"),
    ("AxisTurn.arc", "mission.phases[science].events[turn].axis_turn.arc", "190 deg"),
    ("AxisTurn.axis", "mission.phases[science].events[turn].axis_turn.axis", "0 0 0"),
    ("AxisTurn.count", "mission.phases[science].events[turn].axis_turn.count", "-1"),
    ("AxisTurn.rate", "mission.phases[science].events[turn].axis_turn.rate", "0 rpm"),
    ("Blowdown.exponent", "tank.blowdown.exponent", "1.7"),
    ("Blowdown.pressure", "tank.blowdown.pressure", "0 bar"),
    ("Blowdown.propellant_density", "tank.blowdown.propellant_density", "0 kg/m3"),
    ("Budget.burn_margin", "budget.burn_margin", "-1 %"),
    ("Budget.confidence", "budget.confidence", "40 %"),
    ("Budget.lifetimes", "budget.lifetimes", "0"),
    ("Budget.margin", "budget.margin", "-1 %"),
    ("Budget.seed", "budget.seed", "-1"),
    ("Budget.tolerance", "budget.tolerance", "30 %"),
    ("Burn.count", "mission.phases[science].events[drag make-up].burn.count", "-1"),
    ("Burn.delta_v", "mission.phases[science].events[drag make-up].burn.delta_v", "-1 m/s"),
    ("Correlation.coefficient", "uncertainty.correlations[0].coefficient", "1.5"),
    ("Deadband.half_width", "mission.phases[science].events[band].deadband.half_width", "0 deg"),
    ("Deadband.time", "mission.phases[science].events[band].deadband.time", "-1 d"),
    ("Engine.push", "engines[main].push", "0 0 0"),
    ("Engine.thrust", "engines[main].thrust", "0 N"),
    ("Environment.albedo", "environment.albedo", "1.2"),
    ("Environment.density_factor", "environment.density_factor", "0"),
    ("Environment.drag_coefficient", "environment.drag_coefficient", "-1"),
    ("Failure.from", "propulsion.failures[f].from", "-1 yr"),
    ("Failure.probability", "propulsion.failures[f].probability", "120 %"),
    ("Material.diffuse", "materials[foil].diffuse", "0.9"),
    ("Material.drag_coefficient", "materials[foil].drag_coefficient", "0"),
    ("Material.specular", "materials[foil].specular", "1.2"),
    ("Mission.start", "mission.start", "1800-01-01"),
    ("Orbit.inclination", "mission.orbit", "{altitude: 600 km, inclination: 200 deg}"),
    ("Orbit.eccentricity", "mission.orbit", "{semi_major_axis: 8000 km, eccentricity: 1, inclination: 50 deg}"),
    ("Orbit.local_time", "mission.orbit.local_time", "25 h"),
    ("Orbit.semi_major_axis", "mission.orbit", "{semi_major_axis: -1 km, eccentricity: 0, inclination: 50 deg}"),
    ("Orbit.sun_distance", "mission.orbit", "{sun_distance: 0 AU}"),
    ("Phase.duration", "mission.phases[science].duration", "300 yr"),
    ("Plume.half_angle", "propulsion.plume.half_angle", "100 deg"),
    ("Plume.range", "propulsion.plume.range", "0 m"),
    ("Precision.at_most", "budget.precision.at_most", "0"),
    ("Precision.quantile", "budget.precision.quantile", "100 %"),
    ("Precision.width", "budget.precision.width", "0 %"),
    ("PressureLaw.exhaust_speed_power", "propulsion.pressure_law.exhaust_speed_power", "2"),
    ("PressureLaw.thrust_power", "propulsion.pressure_law.thrust_power", "4"),
    ("PressurePoint.exhaust_speed", "propulsion.pressure_law", "{table: [{pressure: 22 bar, thrust: 100 %, exhaust_speed: 0}]}"),
    ("PressurePoint.pressure", "propulsion.pressure_law", "{table: [{pressure: 0 bar, thrust: 100 %, exhaust_speed: 1}]}"),
    ("PressurePoint.thrust", "propulsion.pressure_law", "{table: [{pressure: 22 bar, thrust: 0 %, exhaust_speed: 1}]}"),
    ("Propulsion.alignment", "propulsion.alignment", "95 deg"),
    ("Propulsion.duty_cycle", "propulsion.duty_cycle", "0"),
    ("Propulsion.exhaust_speed", "propulsion", "{exhaust_speed: 0 m/s, thrust: 1 N, shortest_pulse: 1 s, longest_pulse: 1 s}"),
    ("Propulsion.isp", "propulsion.isp", "0 s"),
    ("Propulsion.longest_pulse", "propulsion.longest_pulse", "0 s"),
    ("Propulsion.qualified_pulses", "propulsion.qualified_pulses", "0"),
    ("Propulsion.qualified_throughput", "propulsion.qualified_throughput", "0 kg"),
    ("Propulsion.shortest_pulse", "propulsion.shortest_pulse", "10 s"),
    ("Propulsion.thrust", "propulsion.thrust", "0 N"),
    ("Propulsion.thrust_tolerance", "propulsion.thrust_tolerance", "120 %"),
    ("PulsePerformance.on_time", "propulsion.pulse_performance[1].on_time", "10 ms"),
    ("PulsePerformance.share", "propulsion.pulse_performance[1].share", "110 %"),
    ("Pyramid.count", "wheels", "{capacity: 1 N m s, torque: 1 N m, array: {pyramid: {count: 2}}}"),
    ("SafeMode.days_per_year", "mission.phases[science].events[safe mode].safe_mode.days_per_year", "400"),
    ("SafeMode.half_width", "mission.phases[science].events[safe mode].safe_mode.half_width", "0 deg"),
    ("Sky.declination", "mission.phases[science].attitude", "{to: {sky: {right_ascension: 0 deg, declination: 91 deg}}}"),
    ("Slews.angle", "mission.phases[science].events[calibration].slews.angle", "0 deg"),
    ("Slews.axis", "mission.phases[science].events[calibration].slews.axis", "0 0 0"),
    ("Slews.count", "mission.phases[science].events[calibration].slews.count", "-1"),
    ("Slews.rate", "mission.phases[science].events[calibration].slews.rate", "0 deg/s"),
    ("SolarActivity.f107", "environment.solar_activity.f107", "500"),
    ("Spacecraft.centre_of_mass_box", "spacecraft.centre_of_mass_box", "-1 1 1 mm"),
    ("Spacecraft.dry_mass", "spacecraft.dry_mass", "0 kg"),
    ("Spacecraft.inertia", "spacecraft.inertia", "1 1 3 kg m2"),
    ("SpinChange.axis", "mission.phases[science].events[spin].spin.axis", "0 0 0"),
    ("SpinChange.count", "mission.phases[science].events[spin].spin.count", "-1"),
    ("Surface.area", "surfaces[wing].area", "0 m2"),
    ("Surface.normal", "surfaces[wing].normal", "0 0 0"),
    ("Tank.leakage", "tank.leakage", "-1 g/yr"),
    ("Tank.loaded", "tank.loaded", "0 kg"),
    ("Tank.residual", "tank.residual", "110 %"),
    ("Thruster.plume_loss", "thrusters[A1].plume_loss", "100 %"),
    ("Thruster.push", "thrusters[A1].push", "0 0 0"),
    ("Unload.at_fill", "mission.phases[science].unload", "{at_fill: 150 %}"),
    ("Unload.every", "mission.phases[science].unload", "{every: 0 d}"),
    ("Wheel.axis", "wheels.axes[W1].axis", "0 0 0"),
    ("Wheels.capacity", "wheels.capacity", "0 N m s"),
    ("Wheels.reserve", "wheels.reserve", "100 N m s"),
    ("Wheels.torque", "wheels.torque", "0 N m"),
];

fn refused(more: &[&str]) -> Option<String> {
    let heron = include_str!("../configs/heron.yaml");
    let found = Document::from_text("heron.yaml", heron, &[("more.yaml", MORE)], more);
    let document = match found {
        Ok(document) => document,
        Err(faults) => return Some(render_all(&faults, None, false)),
    };
    let scenario = read(&document).and_then(|spec| Scenario::in_folder(&spec, Path::new("configs")).map(drop));
    scenario.err().map(|faults| render_all(&faults, Some(&document), false))
}

#[test]
fn values_outside_the_range_told_are_refused() {
    assert_eq!(refused(&[]), None, "the base is in order");
    for (name, key, value) in OUTSIDE {
        assert!(RANGES.iter().any(|(known, _)| known == name), "{name} has no range");
        let Some(shown) = refused(&[&format!("{key}={value}")]) else { panic!("{key}: {value} is accepted") };
        let word = name.rsplit('.').next().unwrap_or_default();
        assert!(shown.contains(word), "{key}: {value} is refused for another reason:\n{shown}");
    }
    assert!(OUTSIDE.len() > 80, "{}", OUTSIDE.len());
}
