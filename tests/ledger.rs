//! Rows of the ledger flown in a mission, against the same by hand; books that balance, and that do not.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use couplet::config::{Document, read};
use couplet::lifetime::{Imbalance, Outcome, Plan, PlanError, audit_momentum, audit_propellant};
use couplet::mission::{Margin, Scenario};
use couplet::momentum::Resolution;
use couplet::propellant::{DeadbandAxis, Row, propellant_of_burn};
use nalgebra::Vector3;
use support::{SMALL, scenario};

const DAY_S: f64 = 86_400.0;
/// No disturbance torques: what remains is the events.
const CALM: [&str; 4] = [
    "surfaces=[]",
    "spacecraft.residual_dipole=0 0 0 A m2",
    "spacecraft.inertia=60 60 60 kg m2",
    "engines=[{name: main, thrust: 20 N, exhaust_speed: 2000 m/s, position: 0.01 0 -1 m, push: 0 0 1}]",
];

fn phase(rest: &str) -> String {
    format!("mission.phases=[{{name: only, duration: 100 d, {rest}}}]")
}

fn plan(settings: &[&str]) -> Result<Plan, PlanError> {
    Plan::new(scenario(SMALL, &[&CALM[..], settings].concat()), Resolution::Default, Margin::NONE)
}

fn flown(settings: &[&str]) -> Outcome {
    let plan = plan(settings).unwrap();
    let outcome = plan.fly(plan.nominal());
    plan.audit(&outcome).unwrap();
    outcome
}

fn close(got: f64, expected: f64, relative: f64) {
    assert!((got - expected).abs() <= relative * expected.abs(), "got {got}, expected {expected}");
}

fn event(text: &str) -> String {
    phase(&format!("events: [{{name: e, {text}}}]"))
}

/// 100 kg dry and 5 kg of propellant, 10 m/s at 2000 m/s: the rocket equation. The engine pushes 20 N 10 mm off the centre of mass for
/// m u/F: 0.2 N m, held by couples of two thrusters on 2 m arms at 1500 m/s, 1/3000 kg per N m s.
#[test]
fn a_burn_and_its_attitude_hold() {
    let outcome = flown(&[&event("when: start, burn: {delta_v: 10 m/s, engine: main}")]);
    let burnt = 105.0 * (1.0 - (-10.0_f64 / 2000.0).exp());
    close(outcome.row(Row::OrbitBurns), burnt, 1e-12);
    close(outcome.row(Row::BurnHold), 0.2 * burnt * 2000.0 / 20.0 / 3000.0, 1e-9);
    // Ten small burns over the phase take as much, but for the propellant of the holds in between, which makes it lighter.
    let ten = flown(&[&event("burn: {delta_v: 1 m/s, count: 10, engine: main}")]);
    close(ten.row(Row::OrbitBurns), burnt, 1e-3);
    close(ten.row(Row::BurnHold), outcome.row(Row::BurnHold), 3e-3);
    // On dates: one burn on each, wherever in the phase.
    let dated = flown(&[&event("when: {on: [2029-03-20, 2029-05-01, 2029-06-28]}, burn: {delta_v: 3.333333333333 m/s, engine: main}")]);
    close(dated.row(Row::OrbitBurns), burnt, 1e-3);
    let free = flown(&[&event("when: end, burn: {delta_v: 10 m/s, engine: main, hold: none}")]);
    assert!(free.row(Row::BurnHold) <= 0.0);
}

/// Four thrusters that push along z with the centre of mass 50 mm off their middle: switched off in turn they push as well as
/// before, only longer; canted ones whose pushes across no longer cancel lose the cosine of what is left.
#[test]
fn a_burn_held_by_off_modulation() {
    let thrusters = |cant: f64| {
        let one = |name: &str, x: f64, y: f64, cx: f64| format!("{{name: {name}, position: {x} {y} -1 m, push: {cx} 0 1}}");
        let list = [one("P1", 1.0, 1.0, -cant), one("P2", -1.0, 1.0, cant), one("P3", -1.0, -1.0, cant), one("P4", 1.0, -1.0, -cant)];
        let small: Vec<String> = ["X", "Y", "Z"]
            .iter()
            .enumerate()
            .flat_map(|(axis, name)| {
                let place = |sign: f64| {
                    let mut p = [0.0; 3];
                    p[(axis + 1) % 3] = 2.0 * sign;
                    format!("{} {} {} m", p[0], p[1], p[2])
                };
                let push = |sign: f64| {
                    let mut p = [0.0; 3];
                    p[(axis + 2) % 3] = sign;
                    format!("{} {} {}", p[0], p[1], p[2])
                };
                [(1, 1.0, 1.0), (2, -1.0, -1.0), (3, 1.0, -1.0), (4, -1.0, 1.0)]
                    .map(|(k, at, way)| format!("{{name: {name}{k}, position: {}, push: {}}}", place(at), push(way)))
            })
            .collect();
        format!("thrusters=[{}, {}]", list.join(", "), small.join(", "))
    };
    let burn = event("when: start, burn: {delta_v: 10 m/s, thrusters: [P1, P2, P3, P4], hold: off_modulation}");
    let offset = ["spacecraft.centre_of_mass=0.05 0 0 m", "tank.position=0.05 0 0 m"];
    let straight = flown(&[&thrusters(0.0), &burn, offset[0], offset[1]]);
    close(straight.row(Row::OrbitBurns), propellant_of_burn(10.0, 1500.0, 105.0), 1e-9);
    assert!(straight.row(Row::BurnHold).abs() < 1e-9);
    // Two on each side with the shares x and y: torque about y 0.95 x = 1.05 y; the pushes across, ∓c, then leave (x − y) c, so
    // that less than full force points along z. Held square to it the effective speed keeps the cosine of the cant alone.
    let canted = flown(&[&thrusters(0.2), &burn, offset[0], offset[1]]);
    close(canted.row(Row::OrbitBurns), propellant_of_burn(10.0, 1500.0 / 1.04_f64.sqrt(), 105.0), 1e-9);
    assert!(canted.row(Row::BurnHold) >= 0.0 && canted.row(Row::BurnHold) < 0.05 * canted.row(Row::OrbitBurns));
}

/// 30 days in a band of 0.5° by couples of two 1 N thrusters on 2 m arms for 10 ms: bits of 0.04 N m s and 2 × 0.01 N s / 1500 m/s each.
#[test]
fn a_deadband_and_safe_mode() {
    let axis = DeadbandAxis { inertia_kg_m2: 60.0, half_width_rad: 0.5_f64.to_radians(), bit_n_m_s: 0.04, disturbance_n_m: 0.0 };
    let pulse_kg = 2.0 * 0.01 / 1500.0;
    let day = |torque: f64| {
        let rates = DeadbandAxis { disturbance_n_m: torque, ..axis }.pulse_rates();
        (rates.against_per_s + rates.with_per_s) * DAY_S * pulse_kg
    };
    let held = flown(&[&event("deadband: {time: 30 d, half_width: 0.5 deg, disturbance: 2e-3 0 0 N m}")]);
    close(held.row(Row::Deadband), 30.0 * (day(2e-3) + 2.0 * day(0.0)), 1e-9);
    // About x against the disturbance fire Y1 … or their like: two valves, as often as pulses come.
    let pulses: f64 = held.wear.cycles.iter().sum();
    close(pulses, held.row(Row::Deadband) / pulse_kg * 2.0, 1e-9);
    close(held.wear.throughput_kg.iter().sum(), held.row(Row::Deadband), 1e-9);
    let safe = flown(&[&event("safe_mode: {days_per_year: 36.525, half_width: 0.5 deg, disturbance: 2e-3 0 0 N m}")]);
    close(safe.row(Row::SafeMode), held.row(Row::Deadband) / 3.0, 1e-9);
}

/// Spin-up of 60 kg m² to 5 rpm and a turn of its axis by 30°, 1/3000 kg per N m s.
#[test]
fn a_spin_and_turns_of_its_axis() {
    let rate = 5.0 * std::f64::consts::TAU / 60.0;
    let up = flown(&[&event("spin: {axis: 0 0 1, to: 5 rpm}")]);
    close(up.row(Row::Spin), 60.0 * rate / 3000.0, 1e-9);
    let turned = flown(&[&event("axis_turn: {axis: 0 0 1, rate: 5 rpm, angle: 30 deg, arc: 60 deg, count: 4}")]);
    close(turned.row(Row::Spin), 4.0 * 60.0 * rate * 30_f64.to_radians() / 0.954_930 / 3000.0, 1e-5);
}

/// U-14: 782.68 unloads of 0.8 N m s by a couple with an arm of 0.45 m at 140 s take 1.01347 kg; 14 m/s at 220 s 1.06724 kg of 165 kg.
/// The couple of SMALL has arms of 2 m: 0.8 N m s here is 0.8 × 2/0.45 there.
#[test]
fn the_exam_of_a_small_observer() {
    let per_day = 0.8 * 2.0 / 0.45 * 3.0 / 7.0;
    let torque = format!("spacecraft.body_torque=0 {} 0 N m", per_day / DAY_S);
    let years = "mission.phases=[{name: only, duration: 1826.25 d, unload: {every: 0.5 d}}]";
    let outcome = flown(&[&torque, years, "propulsion.exhaust_speed=1372.931 m/s", "wheels.capacity=200 N m s"]);
    // Along the orbit normal everything gathers; the plane drifts by some degrees a day, which the body follows: 0.2 %.
    close(outcome.row(Row::WheelUnloading), 1.013_47, 2e-3);
}

/// In blowdown with u ∝ √p at constant temperature and a steady demand k of angular impulse the use follows
/// dm/dt = k/u0 √(1 + m/(ρ V0)): 2 ρ V0 (√(1 + m/(ρV0)) − 1) = k t/u0 (closed form).
#[test]
fn a_tank_that_runs_down() {
    let settings = [
        "spacecraft.body_torque=0 1e-3 0 N m",
        "mission.phases=[{name: only, duration: 120 d, unload: {every: 0.25 d}}]",
        "tank.blowdown={pressure: 22 bar, ratio: 4, propellant_density: 1000 kg/m3}",
        "propulsion.pressure_law={thrust_power: 1, exhaust_speed_power: 0.5}",
    ];
    let outcome = flown(&settings);
    let gas_kg = 5.0 / 3.0;
    let steady = 1e-3 * 120.0 * DAY_S / 3000.0;
    let expected = gas_kg * ((1.0 + steady / 2.0 / gas_kg).powi(2) - 1.0);
    // Five strata that each take a fifth of the tank: the pressure of each is that when half of it has left.
    close(outcome.row(Row::WheelUnloading), expected, 0.01);
    let fine = Plan::new(scenario(SMALL, &[&CALM[..], &settings].concat()), Resolution::Full, Margin::NONE).unwrap();
    close(fine.fly(fine.nominal()).row(Row::WheelUnloading), expected, 2e-3);
    // Thrust falls with the pressure, so pulses must be longer or more: none is lost.
    assert!(outcome.unserved <= 0.0);
}

/// Two tanks, drained one after the other: the centre of mass goes with what is left in each (by hand).
#[test]
fn several_tanks() {
    let tanks = "tank={tanks: [{name: upper, loaded: 3 kg, position: 0 0 1 m}, {name: lower, loaded: 2 kg, position: 0 0 -1 m}]}";
    let vehicle = scenario(SMALL, &[tanks]).vehicle;
    for (left, upper, lower) in [(5.0, 3.0, 2.0), (4.0, 2.0, 2.0), (2.0, 0.0, 2.0), (1.5, 0.0, 1.5), (0.0, 0.0, 0.0)] {
        let state = vehicle.mass_state(left);
        close(state.mass_kg, 100.0 + left, 1e-12);
        assert!((state.centre_of_mass_m.z - (upper - lower) / (100.0 + left)).abs() < 1e-12);
    }
}

/// Running out of propellant is a result: in how many years, not a crash; a burn that asks for more than is left is refused.
#[test]
fn running_dry() {
    let torque = "spacecraft.body_torque=0 1e-3 0 N m";
    let outcome = flown(&[torque, "mission.phases=[{name: only, duration: 400 d, unload: {every: 0.25 d}}]"]);
    // 5 kg at 0.0288 kg a day.
    close(outcome.life_s.unwrap(), 5.0 / 0.0288 * DAY_S, 2e-3);
    assert!(outcome.left_kg < 0.0);
    let refused = plan(&[&event("burn: {delta_v: 200 m/s, engine: main}, when: start")]).unwrap_err();
    assert!(refused.to_string().contains("the burn `e` of phase only asks for 9.99 kg, but 5.00 kg are left by then"), "{refused}");
}

/// What is loaded too little counts as needed, and shortens the life.
#[test]
fn an_error_of_loading() {
    let scenario = scenario(SMALL, &[&CALM[..], &["tank.loading_error=0 ± 0.1 kg"]].concat());
    let id = scenario.vehicle.tank.loading_error_kg.parameter().unwrap();
    let plan = Plan::new(scenario, Resolution::Default, Margin::NONE).unwrap();
    let short = plan.fly(&plan.nominal().clone().with(id, -0.2));
    plan.audit(&short).unwrap();
    close(short.row(Row::LoadingError), 0.2, 1e-12);
    close(short.left_kg, 4.8, 1e-12);
    close(short.needed_kg(), 0.2, 1e-12);
}

/// The checks find what is broken: a row that lost a gram, a history that runs backwards, a firing turned round.
#[test]
fn books_that_do_not_balance_are_found() {
    let good = flown(&["spacecraft.body_torque=0 1e-4 0 N m"]);
    assert!(audit_propellant(&good, 5.0).is_ok());
    let mut lost = good.clone();
    lost.rows_kg[Row::WheelUnloading.index()] -= 1e-3;
    assert!(matches!(audit_propellant(&lost, 5.0), Err(Imbalance::Propellant { .. })));
    let mut nan = good.clone();
    nan.left_kg = f64::NAN;
    assert!(matches!(audit_propellant(&nan, 5.0), Err(Imbalance::Propellant { .. })));
    let mut back = good.clone();
    back.used_kg[1] = back.used_kg[0] - 1e-3;
    assert!(matches!(audit_propellant(&back, 5.0), Err(Imbalance::Backwards { .. })));
    assert!(audit_propellant(&good, 6.0).is_err());
    let stored = Vector3::new(1.0, -2.0, 0.5);
    assert!(audit_momentum(&stored, [Vector3::new(-1.0, 0.0, 0.0), Vector3::new(0.0, 2.0, -0.5)].into_iter()).is_ok());
    assert!(matches!(audit_momentum(&stored, [stored].into_iter()), Err(Imbalance::Momentum { .. })));
}

fn refused(setting: &str, expected: &str) {
    let none: &[(&str, &str)] = &[];
    let settings: Vec<&str> = CALM.iter().copied().chain([setting]).collect();
    let document = Document::from_text("test.yaml", SMALL, none, &settings).unwrap();
    let faults = Scenario::new(&read(&document).unwrap()).unwrap_err();
    assert!(faults.iter().any(|fault| fault.message.contains(expected) && fault.help.is_some()), "{setting}: {faults:?}");
}

#[test]
fn events_and_tanks_that_cannot_be() {
    refused(&event("burn: {delta_v: 1 m/s}"), "expected one of `engine` and `thrusters`");
    refused(&event("burn: {delta_v: 1 m/s, engine: mian}"), "which `engines` does not describe");
    refused(&event("burn: {delta_v: 1 m/s, thrusters: [X1, X9]}"), "`X9` is no thruster");
    refused(&event("burn: {delta_v: 1 m/s, engine: main, hold: off_modulation}"), "one engine cannot be modulated");
    refused(&event("burn: {delta_v: -1 m/s, engine: main}"), "expected a Δv of at least 0");
    refused(&event("when: {on: [2030-05-01]}, burn: {delta_v: 1 m/s, engine: main}"), "2030-05-01T00:00:00Z lies outside the phase");
    refused(&event("when: {on: [soon]}, burn: {delta_v: 1 m/s, engine: main}"), "is not a date");
    refused(&event("deadband: {time: 3 d, half_width: 0 deg}"), "expected half the width of a band above zero");
    refused(
        &event("deadband: {time: 3 d, half_width: 1 deg}, slews: {axis: 1 0 0, angle: 1 deg, rate: 1 deg/s, count: 1}"),
        "expected one of",
    );
    refused(&event("safe_mode: {days_per_year: 400, half_width: 1 deg}"), "expected a number of days from 0 to 365.25");
    let two = |start: &str| format!("mission.phases=[{{name: a, duration: 30 d}}, {{name: b, start: {start}, duration: 30 d}}]");
    refused(&two("2029-05-01"), "leaves a gap of 12.0 d: the phases before it end at 2029-04-19T00:00:00Z");
    refused(&two("2029-04-09"), "overlaps by 10.0 d");
    assert!(Plan::new(scenario(SMALL, &[&two("2029-04-19")]), Resolution::Default, Margin::NONE).is_ok());
    refused("tank={loaded: 5 kg}", "expected one tank with `loaded` and `position`, or a list of `tanks`");
    refused("tank.blowdown={pressure: 22 bar, volume: 0.004 m3, propellant_density: 1000 kg/m3}", "do not hold the propellant");
    refused("tank.blowdown={pressure: 22 bar, ratio: 1, propellant_density: 1000 kg/m3}", "expected a ratio above 1");
    refused("tank.blowdown={pressure: 22 bar, propellant_density: 1000 kg/m3}", "expected one of `volume` and `ratio`");
    refused("propulsion.pressure_law={thrust_power: 1}", "the feed pressure is constant");
    refused("engines=[{name: main, thrust: 20 N, position: 0 0 0 m, push: 0 0 1}]", "expected `isp` or `exhaust_speed`");
}

/// Momentum under the smallest couple: carried, a fraction of a pulse is charged every time; waiting, one unload in so many
/// intervals makes whole pulses, for the same propellant, since both are at the shortest pulse.
#[test]
fn unloads_under_the_shortest_pulse() {
    // 1e-7 N m for a day is 8.64e-3 N m s; couples of two 1 N thrusters on 2 m arms for 10 ms make 0.04 N m s: five days, whole.
    let torque = "spacecraft.body_torque=0 1e-7 0 N m";
    let phases = "mission.phases=[{name: only, duration: 100 d, unload: {every: 1 d}}]";
    let carried = flown(&[torque, phases]);
    let waited = flown(&[torque, phases, "propulsion.small_unload=wait"]);
    close(carried.unloads, 100.0, 1e-9);
    close(waited.unloads, 20.0, 1e-9);
    close(waited.shortest_interval_s.unwrap(), 5.0 * DAY_S, 1e-9);
    close(waited.row(Row::WheelUnloading), carried.row(Row::WheelUnloading), 1e-9);
    assert!(plan(&[torque, phases]).unwrap().small_unloads() > 0.99);
    assert!(plan(&[torque, phases, "propulsion.small_unload=wait"]).unwrap().small_unloads() < 0.01);
}
