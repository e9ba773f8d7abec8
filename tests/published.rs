//! Published examples of the ledger's arithmetic that stand in no other file.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use couplet::lifetime::Plan;
use couplet::mission::{Margin, Scenario};
use couplet::momentum::Resolution;
use couplet::propellant::{DeadbandAxis, Row, slew_momentum};
use couplet::pulses::Pricer;
use couplet::uncertain::Uncertain;
use couplet::units::{Kind, kind, parse};
use couplet::vehicle::{MassProperties, MassState};
use nalgebra::{Matrix3, Vector3};
use support::{SMALL, scenario};

fn close(got: f64, expected: f64, relative: f64) {
    assert!((got - expected).abs() <= relative * expected.abs(), "got {got}, expected {expected}");
}

fn si<K: Kind>(text: &str) -> f64 {
    parse(text, K::DIMENSION, K::NAME, K::EXAMPLE).unwrap()
}

/// U-02: 4000 rpm is 418.879 rad/s; a wheel that holds 27 N m s then has 0.064458 kg m² (Space Propulsion, TU Wien, 2014, Example 9).
#[test]
fn speed_of_a_wheel() {
    close(si::<kind::AngularRate>("4000 rpm"), 418.879, 1e-6);
    close(27.0 / si::<kind::AngularRate>("4000 rpm"), 0.064_458, 1e-5);
}

/// U-09: C. D. Brown, Elements of Spacecraft Design (2002), from memory: 2000 slug ft², pairs of 0.3 lbf at 5 ft for 30 ms, ±0.5°, 190 s: his
/// cycle of 775.8 s with 1.89e-4 lb and 0.021 lb a day counts a crossing as a cycle of two pulses. One pulse a crossing is half of it.
#[test]
fn a_limit_cycle_in_old_units() {
    let (force, arm) = (si::<kind::Force>("0.3 lbf"), si::<kind::Length>("5 ft"));
    let axis = DeadbandAxis {
        inertia_kg_m2: si::<kind::Inertia>("2000 slug ft2"),
        half_width_rad: 0.5_f64.to_radians(),
        bit_n_m_s: 2.0 * force * arm * 0.03,
        disturbance_n_m: 0.0,
    };
    let step = axis.bit_n_m_s / axis.inertia_kg_m2;
    let crossing_s = 2.0 * axis.half_width_rad / (step / 2.0);
    close(crossing_s + 0.06, 775.76, 1e-4);
    let pulse_lb = 2.0 * force * 0.03 / (190.0 * 9.80665) / si::<kind::Mass>("1 lb");
    close(2.0 * pulse_lb, 1.8947e-4, 1e-4);
    let symmetric = pulse_lb / crossing_s * 86_400.0;
    close(symmetric, 0.0211 / 2.0, 2e-3);
    // Over all starting rates two thirds of that.
    let rates = axis.pulse_rates();
    close((rates.against_per_s + rates.with_per_s) * 86_400.0 * pulse_lb, symmetric * 2.0 / 3.0, 0.01);
}

/// U-10: Larson and Wertz (eds), Space Mission Analysis and Design, 3rd ed. (1999), Table 11-13, from memory: 4.5e-5 N m on an arm of 0.5 m
/// takes 9.0e-5 N; 30° in 60 s at 0.5 °/s reached in 3 s with 90 kg m² takes 0.52 N; 0.4 N m s in 1 s takes 0.8 N; 3 wheels once a day for 5
/// years 5479 pulses.
#[test]
fn thruster_sizing_of_the_textbook_satellite() {
    let one_sided = |force: f64| {
        // A couple on arms of 0.25 m makes the torque of one thruster at 0.5 m.
        let settings = [
            format!("propulsion.thrust={force} N"),
            "thrusters[X1].position=0 0.25 0 m".to_owned(),
            "thrusters[X2].position=0 -0.25 0 m".to_owned(),
            "thrusters[X3].position=0 0.25 0 m".to_owned(),
            "thrusters[X4].position=0 -0.25 0 m".to_owned(),
        ];
        let settings: Vec<&str> = settings.iter().map(String::as_str).collect();
        let scenario = scenario(SMALL, &settings);
        Pricer::new(&scenario.vehicle.propulsion, &Vector3::zeros())
    };
    close(one_sided(9.0e-5).authority().most(&Vector3::x()), 4.5e-5, 1e-9);
    close(one_sided(0.8).authority().most(&Vector3::x()) * 1.0, 0.4, 1e-9);
    let mass = MassState { mass_kg: 100.0, centre_of_mass_m: Vector3::zeros(), inertia_kg_m2: Matrix3::identity() * 90.0 };
    let rate = 0.5_f64.to_radians();
    let force = 90.0 * rate / 3.0 / 0.5;
    close(force, 0.52, 0.01);
    let slew = slew_momentum(&Vector3::x(), 30_f64.to_radians(), rate, &mass, one_sided(force).authority()).unwrap();
    // Three seconds to reach the rate, three to stop; the table lets the whole take 60 s.
    close(slew.start_n_m_s.x / (force * 0.5), 3.0, 1e-3);
    close(slew.duration_s, 63.0, 1e-3);
    close(3.0 * 365.25 * 5.0, 5479.0, 1e-4);
}

/// U-13: Space Solar Power Review 1 (3), 1980: 9° in 22.5 h with 6.1e14 kg m² needs 95.8e-12 rad/s² (its torque and rate do not follow from
/// that and are not used).
#[test]
fn a_very_large_structure() {
    let inertia = 6.1e14;
    let torque = 95.77e-12 * inertia;
    let settings = [format!("propulsion.thrust={} N", torque / 4.0)];
    let scenario = scenario(SMALL, &[settings[0].as_str()]);
    let pricer = Pricer::new(&scenario.vehicle.propulsion, &Vector3::zeros());
    let mass = MassState { mass_kg: 1e7, centre_of_mass_m: Vector3::zeros(), inertia_kg_m2: Matrix3::identity() * inertia };
    // Couples of two on arms of 2 m: 4 m times the thrust, twice (four thrusters make each signed couple).
    let most = pricer.authority().most(&Vector3::x());
    let slew = slew_momentum(&Vector3::x(), 9_f64.to_radians(), 1.0, &mass, pricer.authority()).unwrap();
    close(slew.duration_s, 22.5 * 3600.0 * (torque / most).sqrt(), 1e-3);
    close(slew.rate_rad_per_s, 3.8785e-6 * (most / torque).sqrt(), 1e-3);
}

fn flown(settings: &[&str], margin: Margin) -> couplet::lifetime::Outcome {
    let calm = ["surfaces=[]", "spacecraft.residual_dipole=0 0 0 A m2", "spacecraft.inertia=60 60 60 kg m2"];
    let made: Scenario = scenario(SMALL, &[&calm[..], settings].concat());
    let plan = Plan::new(made, Resolution::Default, margin).unwrap();
    plan.fly(plan.nominal())
}

/// P-07: Apollo 11 Flight Plan, table 5-1, service-module thrusters, lb: loaded 1342.4, outage 15.6, trapped 26.4, gauging 80.4, deliverable
/// 1220.0; 590 used, 630 left of it.
#[test]
fn bookkeeping_of_a_load() {
    let pound = si::<kind::Mass>("1 lb");
    let residual = (15.6 + 26.4) / 1342.4;
    let delta_v = {
        // 590 lb at 2000 m/s from the mass with the gauging error already gone.
        let mass = 1000.0 + (1342.4 - 80.4) * pound;
        -2000.0 * (-590.0 * pound / mass).ln_1p()
    };
    let outcome = flown(
        &[
            "spacecraft.dry_mass=1000 kg",
            "tank.loaded=1342.4 lb",
            &format!("tank.residual={residual}"),
            "tank.loading_error=-80.4 lb",
            "engines=[{name: all, thrust: 445 N, exhaust_speed: 2000 m/s, position: 0 0 -1 m, push: 0 0 1}]",
            &format!(
                "mission.phases=[{{name: only, duration: 8 d, events: [{{name: use, when: start, burn: {{delta_v: {delta_v} m/s, engine: all, hold: none}}}}]}}]"
            ),
        ],
        Margin::NONE,
    );
    let lb = |kg: f64| kg / pound;
    close(lb(outcome.row(Row::OrbitBurns)), 590.0, 1e-9);
    close(1342.4 - lb(outcome.row(Row::Residual)) - lb(outcome.row(Row::LoadingError)), 1220.0, 1e-9);
    close(lb(outcome.left_kg - outcome.row(Row::Residual)), 630.0, 1e-9);
}

/// M-01: ESA SRE-PA/2011.097, 2.3 (seen in secondary sources): 100 % on attitude control, 5 % on calculated manoeuvres, 2 % residual where
/// none is stated.
#[test]
fn the_esa_assessment_margins() {
    let settings = [
        "budget={margin_rule: esa_assessment}",
        "spacecraft.body_torque=0 1e-4 0 N m",
        "engines=[{name: all, thrust: 20 N, exhaust_speed: 2000 m/s, position: 0 0 -1 m, push: 0 0 1}]",
        "mission.phases=[{name: only, duration: 50 d, unload: {every: 1 d}, events: [{name: e, burn: {delta_v: 9 m/s, engine: all, hold: none}}]}]",
    ];
    let margin = scenario(SMALL, &settings).settings.margin;
    let outcome = flown(&settings, margin);
    close(outcome.row(Row::Margin), outcome.attitude_total_kg() + 0.05 * outcome.row(Row::OrbitBurns), 1e-12);
    close(outcome.row(Row::Residual), 0.02 * 5.0, 1e-12);
    assert!(outcome.attitude_total_kg() > 0.1 && outcome.row(Row::OrbitBurns) > 0.4);
}

/// U-12: H. Curtis, Orbital Mechanics for Engineering Students, 2nd ed., ex. 10.2 (seen in a public summary): a thin shell of 100 kg, radius 1 m,
/// length 3 m has moments of 100 and 125 kg m²; spinning at 2π rad/min with 20° of nutation its axis precesses at 26.7457 rad/min, 180° in
/// 7.0477 s. The moments come from point masses put together by the program, the motion from Euler's equations integrated here.
#[test]
fn free_precession_of_a_thin_shell() {
    let (tiny, zero) = (Uncertain::fixed(1e-9), Uncertain::fixed(0.0));
    let dry = MassProperties {
        mass_kg: tiny,
        centre_of_mass_m: [zero; 3],
        centre_of_mass_box_m: None,
        inertia_kg_m2: [tiny, tiny, tiny, zero, zero, zero],
    };
    let (rings, each) = (300, 36);
    let points = (0..rings * each).map(|k| {
        let (ring, place) = (k / each, k % each);
        let z = 3.0 * ((f64::from(ring) + 0.5) / f64::from(rings) - 0.5);
        let (s, c) = (std::f64::consts::TAU * f64::from(place) / f64::from(each)).sin_cos();
        (100.0 / f64::from(rings * each), Vector3::new(c, s, z))
    });
    let inertia = dry.with_propellant(points).inertia_kg_m2;
    close(inertia[(2, 2)], 100.0, 1e-6);
    close(inertia[(0, 0)], 125.0, 1e-4);

    let (spin, tilt) = (std::f64::consts::TAU / 60.0, 20_f64.to_radians());
    let precession = 26.7457 / 60.0;
    let inverse = inertia.try_inverse().unwrap();
    let mut omega = Vector3::new(precession * tilt.sin(), 0.0, precession * tilt.cos() + spin);
    let momentum = (inertia * omega).normalize();
    // The body's axis as it stands in space, begun with the body frame.
    let mut attitude = nalgebra::Rotation3::identity();
    let dt = 1e-3;
    let across = |axis: &Vector3<f64>| (axis - momentum * momentum.dot(axis)).normalize();
    let first = across(&Vector3::z());
    let mut time = 0.0;
    while across(&(attitude * Vector3::z())).dot(&first) > -1.0 + 1e-7 && time < 60.0 {
        // Midpoint rule: good to dt².
        let rate = |w: &Vector3<f64>| -inverse * w.cross(&(inertia * w));
        let middle = omega + rate(&omega) * (dt / 2.0);
        attitude *= nalgebra::Rotation3::new(middle * dt);
        omega += rate(&middle) * dt;
        time += dt;
    }
    close(time, 7.0477, 1e-3);
}
