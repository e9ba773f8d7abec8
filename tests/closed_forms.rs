//! Momentum of whole plans against closed forms.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use couplet::disturbance::{Radiation, ResidualDipole, Source, Surroundings};
use couplet::environment::Gas;
use couplet::lifetime::{PhaseSummary, Plan};
use couplet::mission::{Margin, Scenario};
use couplet::momentum::Resolution;
use nalgebra::{Matrix3, Vector3};
use support::{SMALL, heron, scenario};

const DAY_S: f64 = 86_400.0;

fn plan(scenario: Scenario) -> Plan {
    Plan::new(scenario, Resolution::Default, Margin::NONE).unwrap()
}

fn secular(phase: &PhaseSummary, name: &str) -> Vector3<f64> {
    phase.sources.iter().find(|(source, _, _)| *source == name).unwrap().2
}

/// A body with the Earth's gravity but neither J2, field nor air.
const BARE: &str = "{body: {gravitational_parameter: 398600.4418 km3/s2, radius: 6378.137 km, sun_distance: 1 AU}}";

/// Fixed in space on a circular orbit the gravity-gradient torque is in the mean −3/2 n² n̂ × (I n̂), n̂ the orbit normal: the mean
/// of r̂ r̂ᵀ over an orbit is ½ (1 − n̂ n̂ᵀ) (closed form). Tolerance: the steps chosen for 1 %.
#[test]
fn gravity_gradient_of_an_inertially_fixed_attitude() {
    let attitude = "{axis: 1 0 0, to: {sky: {right_ascension: 40 deg, declination: -25 deg}}, second_axis: 0 1 0, towards: ecliptic_north}";
    let s = scenario(
        SMALL,
        &[
            "spacecraft.inertia=60 80 95 kg m2",
            "spacecraft.products_of_inertia=4 -6 3 kg m2",
            "surfaces=[]",
            &format!("mission.orbit={{about: {BARE}, altitude: 700 km, inclination: 50 deg}}"),
            &format!("mission.phases=[{{name: only, duration: 30 d, attitude: {attitude}, unload: {{every: 1 d}}}}]"),
        ],
    );
    let phase = &s.mission.phases[0];
    let moment = phase.moment(s.mission.start, 0.0);
    let r = *phase.attitude.inertial_from_body(&moment, &moment.sky()).matrix();
    let inertia = Matrix3::new(60.0, 4.0, -6.0, 4.0, 80.0, 3.0, -6.0, 3.0, 95.0);
    let state = phase.trajectory.state(s.mission.start);
    let n = state.position_m.cross(&state.velocity_m_per_s).normalize();
    let n2 = 3.986_004_418e14 / 7.078_137e6_f64.powi(3);
    let expected = -1.5 * n2 * n.cross(&(r * inertia * r.transpose() * n)) * DAY_S;
    let got = secular(&plan(s).summary()[0], "gravity_gradient");
    // A day is 14.6 orbits: the odd part of one, 4 % of a day's gain at most, averages out over nine windows.
    assert!((got - expected).norm() < 0.01 * expected.norm(), "{got:?} {expected:?}");
}

/// Fixed in space on a polar orbit in the field of an axial dipole, m × B is in the mean ½ m × p̂ Bₑ: the mean of
/// Bₑ (p̂ − 3 (p̂·r̂) r̂) with the mean of r̂ r̂ᵀ as above, p̂ the pole and Bₑ the field at the equator (closed form).
#[test]
fn dipole_in_the_field_of_an_axial_dipole() {
    let s = scenario(SMALL, &["spacecraft.residual_dipole=1 2 -3 A m2"]);
    let source = ResidualDipole::new(&s.vehicle);
    let (pole, equator_t) = (Vector3::z(), 2.3e-5);
    let mut sum = Vector3::zeros();
    for k in 0..360 {
        let (sin, cos) = f64::from(k).to_radians().sin_cos();
        let up = Vector3::new(cos, 0.0, sin);
        let field_t = equator_t * (pole - 3.0 * pole.dot(&up) * up);
        let mut parts = vec![Vector3::zeros(); 3];
        source.torques(&Surroundings { field_t, ..nothing() }, &mut parts);
        sum += parts.iter().sum::<Vector3<f64>>() / 360.0;
    }
    let expected = Vector3::new(1.0, 2.0, -3.0).cross(&pole) * (-0.5 * equator_t);
    assert!((sum - expected).norm() < 1e-12 * expected.norm(), "{sum:?} {expected:?}");
}

fn nothing() -> Surroundings {
    Surroundings {
        position_m: Vector3::new(7.0e6, 0.0, 0.0),
        mu_m3_per_s2: 3.986e14,
        pole: Vector3::z(),
        sun: Vector3::x(),
        radiation_pressure_pa: 0.0,
        patches: Vec::new(),
        field_t: Vector3::zeros(),
        air_velocity_m_per_s: Vector3::zeros(),
        gas: vec![Gas::default()],
    }
}

/// A sphere has no torque about its centre: 2,000 evenly spread facets (Fibonacci's lattice) leave less than a hundredth of
/// the force times the radius, where one facet out of place makes as much.
#[test]
fn light_puts_no_torque_on_a_sphere() {
    let count = 2000;
    let facet = |k: i32| {
        let z = 1.0 - (2.0 * f64::from(k) + 1.0) / f64::from(count);
        let (s, c) = (f64::from(k) * 2.399_963_229_728_653).sin_cos();
        let n = Vector3::new((1.0 - z * z).sqrt() * c, (1.0 - z * z).sqrt() * s, z);
        format!(
            "{{name: f{k}, area: 0.006283 m2, centre: {:.9} {:.9} {:.9} m, normal: {:.9} {:.9} {:.9}, material: plate}}",
            n.x, n.y, n.z, n.x, n.y, n.z
        )
    };
    let facets: Vec<String> = (0..count).map(facet).collect();
    let s =
        scenario(SMALL, &[&format!("surfaces=[{}]", facets.join(", ")), "materials[plate].diffuse=0.4", "materials[plate].specular=0.2"]);
    let source = Radiation::new(&s.vehicle);
    let mut parts = vec![Vector3::zeros(); source.features().len()];
    source.torques(&Surroundings { sun: Vector3::new(0.3, -0.8, 0.5).normalize(), radiation_pressure_pa: 4.5e-6, ..nothing() }, &mut parts);
    let torque: Vector3<f64> = parts.chunks(4).map(|four| four[0]).sum();
    // π R² P, and half as much again for what is reflected.
    assert!(torque.norm() < 0.01 * std::f64::consts::PI * 4.5e-6, "{torque:?}");
}

/// A plate that spins about the Sun line, its offset square to it, collects nothing however fast it turns: the torque turns with
/// it (closed form). Not spinning, it collects P A (1 + ⅔ ρd) × offset every second.
#[test]
fn a_spin_averages_what_turns_with_the_body() {
    let flown = |spin: &str| {
        let attitude = format!("{{axis: 1 0 0, to: sun{spin}}}");
        let s = scenario(
            SMALL,
            &[
                "spacecraft.residual_dipole=0 0 0 A m2",
                "spacecraft.inertia=60 60 60 kg m2",
                "mission.orbit={sun_distance: 1 AU}",
                &format!("mission.phases=[{{name: only, duration: 10 d, attitude: {attitude}, unload: {{every: 1 d}}}}]"),
            ],
        );
        secular(&plan(s).summary()[0], "radiation").norm()
    };
    let still = flown("");
    let pressure = 1361.0 / 299_792_458.0;
    assert!((still - pressure * 3.0 * 0.3 * DAY_S).abs() < 0.002 * still, "{still}");
    for spin in [", spin: 5 rpm", ", spin: 1 rpm", ", spin: 0.02 deg/s"] {
        // The last makes 4.8 turns a day: what is left of the fifth.
        assert!(flown(spin) < 0.05 * still, "{spin}: {}", flown(spin));
    }
}

/// A facet declared shaded gets no light in the stated range, and all of it outside.
#[test]
fn a_shaded_facet_is_dark_in_its_range() {
    let two = "surfaces=[{name: shield, area: 1 m2, centre: 0 0 0 m, normal: 1 0 0, material: plate}, \
               {name: behind, area: 1 m2, centre: 0 1 0 m, normal: 1 0 0, material: plate, shaded: {by: shield, from: 10 deg, to: 40 deg}}]";
    let s = scenario(SMALL, &[two]);
    let source = Radiation::new(&s.vehicle);
    let torque = |degrees: f64| {
        let (sin, cos) = degrees.to_radians().sin_cos();
        let mut parts = vec![Vector3::zeros(); source.features().len()];
        source.torques(&Surroundings { sun: Vector3::new(cos, 0.0, sin), radiation_pressure_pa: 1.0, ..nothing() }, &mut parts);
        parts[0].norm()
    };
    for (degrees, lit) in [(5.0, true), (10.5, false), (39.5, false), (41.0, true)] {
        let expected = if lit { f64::cos(f64::to_radians(degrees)) } else { 0.0 };
        assert!((torque(degrees) - expected).abs() < 1e-12, "{degrees}");
    }
}

/// Wind from the west blows with an eastward orbit: the first-order effect of a draw equals the change that a fixed wind of
/// that size makes. Second order is (w/v)², 1e-4 of the drag and a hundredth of the change.
#[test]
fn wind_to_first_order() {
    let base = ["mission.phases=[{name: only, duration: 20 d, unload: {every: 1 d}}]", "environment.solar_activity={level: moderate}"];
    let total = |wind: &str, draw: Option<f64>| {
        let key = format!("environment.wind={{east: {wind}}}");
        let plan = Plan::new(heron(&[base[0], base[1], &key]), Resolution::Default, Margin::NONE).unwrap();
        let mut flown = plan.nominal().clone();
        if let Some(value) = draw {
            let parameters = plan.scenario().parameters.as_slice();
            let place = parameters.iter().position(|parameter| parameter.name == "environment.wind.east").unwrap();
            let id = plan.scenario().mission.wind_m_per_s[0].parameter().unwrap();
            assert_eq!(id.index(), place);
            flown = flown.with(id, value);
        }
        plan.fly(&flown).attitude_total_kg()
    };
    let (still, fixed, drawn) = (total("0 m/s", None), total("60 m/s", None), total("0 ± 30 m/s", Some(60.0)));
    assert!((fixed - still).abs() > 1e-5 * still);
    assert!((drawn - fixed).abs() < 0.03 * (fixed - still).abs(), "still {still} fixed {fixed} drawn {drawn}");
}

/// Waiting for the cheapest point costs no more than unloading as due, and as much where all points are alike: a momentum
/// along the orbit normal of SMALL's layout meets the same thrusters everywhere.
#[test]
fn unloading_at_the_cheapest_point() {
    let flown = |timing: &str| {
        let phase = format!("mission.phases=[{{name: only, duration: 30 d, unload: {{every: 1 d, timing: {timing}}}}}]");
        Plan::new(heron(&[&phase]), Resolution::Default, Margin::NONE).unwrap()
    };
    let (due, cheapest) = (flown("due"), flown("cheapest"));
    assert!(due.timing_gain().is_none());
    let gain = cheapest.timing_gain().unwrap();
    let total = |plan: &Plan| plan.fly(plan.nominal()).attitude_total_kg();
    assert!((gain.as_due_kg - total(&due)).abs() < 1e-3 * gain.as_due_kg);
    assert!((gain.cheapest_kg - total(&cheapest)).abs() < 1e-9);
    assert!(gain.cheapest_kg < 0.95 * gain.as_due_kg);
    let along = [
        "spacecraft.body_torque=0 5 0 uN m",
        "spacecraft.residual_dipole=0 0 0 A m2",
        "surfaces=[]",
        "spacecraft.inertia=60 60 60 kg m2",
        "mission.phases=[{name: only, duration: 30 d, unload: {every: 1 d, timing: cheapest}}]",
    ];
    let gain = plan(scenario(SMALL, &along)).timing_gain().unwrap();
    assert!((gain.cheapest_kg / gain.as_due_kg - 1.0).abs() < 1e-3, "{gain:?}");
}
