//! Secular and cyclic momentum of four demonstration missions against estimates by hand: docs/verification.md. heron's
//! stand in `hand_check`.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use couplet::config::{Document, read};
use couplet::lifetime::{PhaseSummary, Plan};
use couplet::mission::{Margin, Scenario};
use couplet::momentum::Resolution;
use nalgebra::{Matrix3, Vector3};

const DAY_S: f64 = 86_400.0;
/// 1361 W/m² over the speed of light, Pa.
const P: f64 = 4.5398e-6;

fn plan(name: &str) -> Plan {
    let file = std::path::Path::new(env!("CARGO_MANIFEST_DIR")).join("configs").join(name);
    let none: &[&str] = &[];
    let document = Document::load(&file, none, none).unwrap();
    Plan::new(Scenario::new(&read(&document).unwrap()).unwrap(), Resolution::Default, Margin::NONE).unwrap()
}

fn secular(phase: &PhaseSummary, name: &str) -> f64 {
    phase.sources.iter().find(|(source, _, _)| *source == name).unwrap().2.norm()
}

fn near(what: &str, program: f64, hand: f64, tolerance: f64) {
    assert!((program - hand).abs() <= tolerance * hand, "{what}: by hand {hand}, program {program}");
}

/// petrel, geostationary.
#[test]
fn petrel_by_hand() {
    let phase = &plan("petrel.yaml").summary()[0];
    // The part of the body torque along the orbit normal.
    near("body torque", secular(phase, "body_torque"), 6e-6 * DAY_S, 0.01);
    // A facet at a lever l along its own normal: the part along the Sun pushes with −P A (1 − ρs) n (n·s)+ × s. Faces that
    // turn with the body give ¼ (s‖ × s) in the mean, the north and south ones the opposite; over a year sin δ × direction
    // averages to sin ε / 2, and the cosine of the declination to 0.94. The dish and the wings add nothing: their two
    // sides cancel half a turn later. 6 %: eclipses and the declination.
    let turning = 0.25 * 0.6 * (2.0 * 6.0 * 1.1 + 4.4 * (1.5 + 1.3));
    let poles = 0.28 * 5.6 * 1.0;
    near("radiation", secular(phase, "radiation"), P * (turning - poles) * 0.3978 / 2.0 * 0.94 * DAY_S, 0.06);
    // Cyclic: the dish alone, 2.56 m from the centre of mass; its torque about the orbit normal over a turn, integrated here.
    let (area, arm, at, specular, diffuse) = (4.2, Vector3::new(2.4, 0.0, 0.9), Vector3::new(1.0, 0.0, -1.0).normalize(), 0.1, 0.3);
    let steps = 10_000;
    let torque = |k: i32| {
        let (s, c) = (std::f64::consts::TAU * f64::from(k) / f64::from(steps)).sin_cos();
        let sun = Vector3::new(s, 0.0, c);
        let cos = at.dot(&sun);
        let push = (1.0 - specular) * sun + 2.0 * (specular * cos.abs() + diffuse / 3.0) * cos.signum() * at;
        arm.cross(&(push * (-P * area * cos.abs()))).y
    };
    let mean: f64 = (0..steps).map(torque).sum::<f64>() / f64::from(steps);
    let (mut momentum, mut low, mut high) = (0.0, 0.0_f64, 0.0_f64);
    for k in 0..steps {
        momentum += (torque(k) - mean) * 86_164.0 / f64::from(steps);
        (low, high) = (low.min(momentum), high.max(momentum));
    }
    // 8 %: the bus, and where in the turn it is counted from.
    near("cyclic", phase.cyclic_n_m_s, high - low, 0.08);
}

/// skua, on its ellipse, while commissioned.
#[test]
fn skua_by_hand() {
    let plan = plan("skua.yaml");
    let phase = &plan.summary()[0];
    // Over an orbit the mean of the radial direction is −e times the direction of the perigee, that of the transverse one −e
    // times the direction a quarter turn ahead: of a torque fixed in the body the part in the plane keeps the share e.
    let e = (45_528.0 - 7_578.0) / (45_528.0 + 7_578.0_f64);
    let body = 1e-6 * (0.3_f64.powi(2) + e * e * (0.5_f64.powi(2) + 0.4_f64.powi(2))).sqrt() * DAY_S;
    near("body torque", secular(phase, "body_torque"), body, 0.03);
    // The boom, which stands square to the orbit plane, at (−2.6, 0, 0.3) m from the centre of mass: light on it is steady, its
    // place is in the mean e (2.6 q + 0.3 p), with p to the perigee and q a quarter turn ahead. 8 %: the bus and the wings.
    let mission = &plan.scenario().mission;
    let path = &mission.phases[0].trajectory;
    let mut hand = Vector3::zeros();
    for k in 0..90 {
        let epoch = mission.start.plus_seconds(DAY_S * (0.25 + f64::from(k) / 2.0));
        let perigee = (0..400).map(|j| path.state(epoch.plus_seconds(f64::from(j) * 107.7)).position_m);
        let p = perigee.reduce(|a, b| if b.norm() < a.norm() { b } else { a }).unwrap().normalize();
        let state = path.state(epoch);
        let n = state.position_m.cross(&state.velocity_m_per_s).normalize();
        let sun = -path.body().heliocentric_position_m(epoch).normalize();
        let lit = n * n.dot(&sun).signum();
        let cos = n.dot(&sun).abs();
        let push = -P * 1.033 * 0.25 * cos * (0.65 * sun + 2.0 * (0.35 * cos + 0.25 / 3.0) * lit);
        hand += e * (2.6 * n.cross(&p) + 0.3 * p).cross(&push) * DAY_S / 90.0;
    }
    near("radiation", secular(phase, "radiation"), hand.norm(), 0.08);
}

/// ternlet, on its way and at the second Lagrange point.
#[test]
fn ternlet_by_hand() {
    let plan = plan("ternlet.yaml");
    let (transfer, observing) = (&plan.summary()[0], &plan.summary()[1]);
    // The shield square to the Sun at 1.005 au: its push on the offset of its centre, 0.03 m along x to the ecliptic's pole and
    // 0.02 m along y. In 90 days the Sun turns by 88.7°: the part in the ecliptic keeps sin(44.35°)/0.774 = 0.903.
    let force = P / 1.005_f64.powi(2) * 14.0 * (0.3 + 2.0 * (0.7 + 0.1 / 3.0));
    let hand = force * f64::hypot(0.03 * 0.903, 0.02) * DAY_S;
    near("radiation, transfer", secular(transfer, "radiation"), hand, 0.02);
    // In the survey the shield, 1.2 m below the centre of mass, tilts by up to 25°: its torque is P A (1 − ρs) 1.2 m × sin cos of
    // the tilt, with the sine evenly spread, 0.236 in the root mean square. With the offset of the shield (0.036 m) and the body
    // torque that is 0.29 N m s in the twelve hours of a dwell, each time another way: after 14 dwells of a random walk in the
    // plane across the Sun 0.886 × √14 × 0.29 = 0.97 N m s. The sequence is spread evenly, so that its dwells cancel better than
    // at random: the program must lie below, but not by more than a factor of four.
    let (light, dwell_s) = (P / 1.02 * 14.0, DAY_S / 2.0);
    let dwell = [light * 0.3 * 1.2 * 0.236, 0.036 * light * 1.7667 * 0.95, 1.5e-6].map(|torque: f64| (torque * dwell_s).powi(2));
    let walk = 0.886 * (14.0 * dwell.iter().sum::<f64>()).sqrt();
    let weeks: Vec<f64> =
        (0..plan.strata().len()).filter(|k| plan.strata()[*k].phase == 1).map(|k| plan.nominal_unloads(k).0[0].norm()).collect();
    let mean = weeks.iter().sum::<f64>() / weeks.len() as f64;
    assert!((0.25 * walk..walk).contains(&mean), "a week of survey: random walk {walk}, program {mean}");
    assert!((0.25 * walk..walk).contains(&observing.cyclic_n_m_s), "{}", observing.cyclic_n_m_s);
}

/// dunlin about Mars.
#[test]
fn dunlin_by_hand() {
    let plan = plan("dunlin.yaml");
    let phase = &plan.summary()[0];
    let mission = &plan.scenario().mission;
    let flown = &mission.phases[0];
    let couplet::mission::Law::Mix(_, parts) = &flown.attitude.law else { panic!("a mix") };
    // Half way through the propellant that is used: 38 kg on board, 0.15 m below the centre of mass.
    let inertia = plan.vehicle().mass_state(38.0).inertia_kg_m2;
    let a: f64 = 3_396_190.0 + 370_000.0;
    let n2 = 4.282_837_52e13 / a.powi(3);
    let (mut hand, mut largest) = (Vector3::zeros(), 0.0_f64);
    for k in 0..400 {
        let moment = flown.moment(mission.start, flown.duration_s * (f64::from(k) + 0.5) / 400.0);
        let sky = moment.sky();
        let n = sky.state.position_m.cross(&sky.state.velocity_m_per_s).normalize();
        // Fixed in space for a pass: −3/2 n² n × (I n) in the mean over an orbit. Looking down: 3 n² Ixz against the normal.
        let to_earth: Matrix3<f64> = *parts[1].1.inertial_from_body(&moment, &sky).matrix();
        let fixed = -1.5 * n2 * n.cross(&(to_earth * inertia * to_earth.transpose() * n));
        let down = -3.0 * n2 * inertia[(0, 2)] * n;
        hand += (0.3 * fixed + 0.7 * down) * DAY_S / 400.0;
        largest = largest.max((fixed - down).norm());
    }
    near("gravity gradient", secular(phase, "gravity_gradient"), hand.norm(), 0.03);
    // Thirty hundredths of a day at the one torque, seventy at the other: 0.3 × 0.7 of a day from the steady gain; and the swing
    // within an orbit on top: 25 %.
    near("cyclic", phase.cyclic_n_m_s, 0.3 * 0.7 * DAY_S * largest, 0.25);
    // The part of the body torque along the normal while it looks down, and whole while it is fixed: between these.
    assert!(secular(phase, "body_torque") < (0.7 * 1.0 + 0.3 * 2.7) * 1e-6 * DAY_S);
}
