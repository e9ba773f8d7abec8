//! The arithmetic of the ledger's rows against published examples, closed forms and simulations written here.

use couplet::propellant::{
    Burn, DeadbandAxis, arc_efficiency, axis_turn_momentum, delta_v_of, mean_rate, propellant_of_burn, spin_momentum,
};
use couplet::vehicle::{Feed, MassState, PressureLaw};
use nalgebra::{Matrix3, Vector3};
use proptest::prelude::*;

fn close(got: f64, expected: f64, relative: f64) {
    assert!((got - expected).abs() <= relative * expected.abs(), "got {got}, expected {expected}");
}

/// The spacecraft of Space Propulsion, notes of TU Wien (2014), Examples 6 and 8: 112.5 kg m², half width 0.5°, two thrusters of 5 N
/// on 0.5 m arms for 30 ms.
fn example(disturbance_n_m: f64) -> DeadbandAxis {
    DeadbandAxis { inertia_kg_m2: 112.5, half_width_rad: 0.5_f64.to_radians(), bit_n_m_s: 2.0 * 5.0 * 0.5 * 0.03, disturbance_n_m }
}

/// One axis event by event, in seconds and radians: to the next edge of the band by the quadratic of its path, a pulse there, and
/// so on, for a span of time. Knows nothing of the program's own variables. Pulses against and with the disturbance a second.
fn simulate(axis: &DeadbandAxis, start_rate: f64, settle_s: f64, span_s: f64) -> (f64, f64) {
    let a = axis.disturbance_n_m / axis.inertia_kg_m2;
    let step = axis.bit_n_m_s / axis.inertia_kg_m2;
    let edge = axis.half_width_rad;
    let (mut x, mut rate, mut time) = (edge, -start_rate, -settle_s);
    let (mut against, mut with) = (0.0, 0.0);
    while time < span_s {
        if time < 0.0 {
            (against, with) = (0.0, 0.0);
        }
        // First positive root of x + rate t + a t²/2 = ±edge.
        let mut next = f64::INFINITY;
        let mut wall = edge;
        for target in [edge, -edge] {
            let c = x - target;
            let roots = if a.abs() < 1e-15 {
                [-c / rate, f64::INFINITY]
            } else {
                let root = (rate * rate - 2.0 * a * c).sqrt();
                [(-rate - root) / a, (-rate + root) / a]
            };
            for root in roots {
                // The edge that it stands on is no crossing unless it comes back to it.
                if root > 1e-9 * edge / step && root < next {
                    (next, wall) = (root, target);
                }
            }
        }
        if !next.is_finite() {
            break;
        }
        time += next;
        rate += a * next;
        x = wall;
        while rate * wall.signum() >= 0.0 {
            rate -= step * wall.signum();
            if wall > 0.0 { against += 1.0 } else { with += 1.0 }
        }
    }
    (against / time, with / time)
}

fn simulated(axis: &DeadbandAxis) -> (f64, f64) {
    let step = axis.bit_n_m_s / axis.inertia_kg_m2;
    let crossing_s = 2.0 * axis.half_width_rad / step;
    let starts = 300;
    let mut sum = (0.0, 0.0);
    for k in 0..starts {
        let (against, with) = simulate(axis, step * (f64::from(k) + 0.5) / f64::from(starts), 3000.0 * crossing_s, 3000.0 * crossing_s);
        sum = (sum.0 + against / f64::from(starts), sum.1 + with / f64::from(starts));
    }
    sum
}

/// The program's rates against the simulation from far below to far above the boundary: 2 % as asked. The two-sided part of
/// the firings is compared with all of them, since it vanishes at the boundary. At three times the boundary a cycle of three
/// pulses appears for some starts; the grid passes it on both sides.
#[test]
fn limit_cycles_event_by_event() {
    let boundary = example(0.0).two_sided_below_n_m();
    // Published threshold of the example: 1.4324e-3 N m (U-06).
    close(boundary, 1.4324e-3, 1e-4);
    for factor in [0.0, 1e-4, 1e-3, 0.01, 0.05, 0.1, 0.2, 0.4, 0.7, 0.95, 1.05, 1.5, 2.0, 2.8, 3.2, 4.1, 10.0, 100.0] {
        let axis = example(factor * boundary);
        let (rates, (against, with)) = (axis.pulse_rates(), simulated(&axis));
        let all = against + with;
        assert!((rates.against_per_s - against).abs() < 0.02 * all, "{factor}: {rates:?} {against} {with}");
        assert!((rates.with_per_s - with).abs() < 0.02 * all, "{factor}: {rates:?} {against} {with}");
    }
}

/// U-04: the notes' symmetric cycle crosses the band in 26.24 s with 0.15789 g a pulse: 0.521 kg a day (their printed
/// 1.037 kg a day counts two pulses a crossing). Over all starting rates the mean is two thirds of the symmetric one.
#[test]
fn the_symmetric_cycle_and_the_mean_over_starts() {
    let axis = example(0.0);
    let per_pulse_kg = 2.0 * 5.0 * 0.03 / 1900.0;
    close(per_pulse_kg, 0.157_89e-3, 1e-4);
    let step = axis.bit_n_m_s / axis.inertia_kg_m2;
    // Time across and the burn of 30 ms itself, which the program leaves out of the cycle: 0.1 %.
    close(2.0 * axis.half_width_rad / (step / 2.0) + 0.06, 26.24, 1e-3);
    let symmetric = simulate(&axis, step / 2.0, 0.0, 86_400.0);
    close((symmetric.0 + symmetric.1) * 86_400.0 * per_pulse_kg, 0.5212, 3e-3);
    let rates = axis.pulse_rates();
    let day_kg = (rates.against_per_s + rates.with_per_s) * 86_400.0 * per_pulse_kg;
    close(day_kg, 0.5212 * 2.0 / 3.0, 0.01);
    // ab over a uniform split of b is b²/6.
    close(mean_rate(0.0), 1.0 / 6.0, 0.005);
}

/// U-05: with 2e-3 N m one side fires: T t / (L v) = 0.18189 kg a day. U-06: at 1e-4 N m both fire, 0.355 kg a day, where the
/// one-sided formula would give 0.0091 kg.
#[test]
fn one_sided_and_forced_cycles() {
    let per_pulse_kg = 2.0 * 5.0 * 0.03 / 1900.0;
    let day = |torque: f64| {
        let rates = example(torque).pulse_rates();
        (rates.against_per_s * 86_400.0 * per_pulse_kg, rates.with_per_s * 86_400.0 * per_pulse_kg)
    };
    let (against, with) = day(6.0e-3);
    close(against, 0.18189 * 3.0, 1e-3);
    assert!(with < 1e-12);
    let (against, with) = day(1.0e-4);
    close(against + with, 0.355, 0.02);
}

/// U-07: 1000 kg m² at 5 rpm, 3°: the chord momentum is 27.4124 N m s; along the arc I ω θ, larger by θ²/24. Pulse arcs: 60° gives
/// 0.954930, 90° 0.900316, 120° 0.826993 (P-06).
#[test]
fn turning_the_axis_of_a_spin() {
    let mass = MassState { mass_kg: 500.0, centre_of_mass_m: Vector3::zeros(), inertia_kg_m2: Matrix3::identity() * 1000.0 };
    let rate = 5.0 * std::f64::consts::TAU / 60.0;
    let angle = 3_f64.to_radians();
    let arc = axis_turn_momentum(&Vector3::z(), rate, angle, 0.0, &mass);
    close(arc, 27.4124 * (1.0 + angle * angle / 24.0), 1e-5);
    for (degrees, efficiency) in [(60.0, 0.954_930), (90.0, 0.900_316), (120.0, 0.826_993)] {
        close(arc_efficiency(f64::to_radians(degrees)), efficiency, 1e-5);
        close(axis_turn_momentum(&Vector3::z(), rate, angle, f64::to_radians(degrees), &mass), arc / efficiency, 1e-5);
    }
    // U-11: a wheel's 160 N m s taken by a body of 502.42 kg m² spins it at 3.041 rpm; stopping it takes the same again.
    let body = MassState { inertia_kg_m2: Matrix3::identity() * 502.42, ..mass };
    close(spin_momentum(&Vector3::x(), 0.318_459, 0.0, &body).norm(), 160.0, 1e-4);
}

/// The rocket equation at its ends and at U-08 and U-14: 14 m/s at 220 s for 165 kg takes 1.06724 kg.
#[test]
fn the_rocket_equation() {
    assert!(propellant_of_burn(0.0, 2000.0, 500.0).abs() < 1e-300);
    assert!(delta_v_of(0.0, 2000.0, 500.0).abs() < 1e-300);
    close(propellant_of_burn(7690.0, 3100.0, 11.949), 10.949, 1e-4);
    close(propellant_of_burn(14.0, 220.0 * 9.80665, 165.0), 1.067_24, 1e-5);
    assert!(propellant_of_burn(1e6, 2000.0, 500.0) <= 500.0);
    assert!(delta_v_of(500.0 * (1.0 - 1e-12), 2000.0, 500.0) > 27.0 * 2000.0);
    assert!(delta_v_of(500.0, 2000.0, 500.0).is_infinite());
}

/// Angular impulse of a burn whose centre of mass moves, against an integration in 100,000 steps.
#[test]
fn momentum_of_a_burn() {
    let (dry, tank_m) = (Vector3::new(0.02, -0.01, 1.1), Vector3::new(0.05, 0.0, 0.3));
    let (dry_kg, start_kg) = (800.0, 400.0);
    let centre = |used: f64| (dry * dry_kg + tank_m * (start_kg - used)) / (dry_kg + start_kg - used);
    let (position, force_n) = (Vector3::new(0.0, 0.0, -0.2), Vector3::new(3.0, -2.0, 420.0));
    let burn = Burn { torque_n_m: position.cross(&force_n), force_n, flow_kg_per_s: 0.14, propellant_kg: 350.0 };
    let steps = 100_000;
    let dt = burn.duration_s() / f64::from(steps);
    let plain: Vector3<f64> =
        (0..steps).map(|k| (position - centre(burn.flow_kg_per_s * dt * (f64::from(k) + 0.5))).cross(&burn.force_n) * dt).sum();
    let got = burn.momentum_n_m_s(centre);
    assert!((got - plain).norm() < 1e-3 * plain.norm(), "{got:?} {plain:?}");
}

/// Blowdown 4:1, isothermal: 22 N become 5.5 N where thrust goes with pressure; half of the gas's growth leaves p0/2.5 (P-06).
#[test]
fn blowdown() {
    let feed = |exponent: f64| Feed::Blowdown { start_pa: 22e5, gas_m3: 0.02, density_kg_per_m3: 1000.0, exponent };
    let law = PressureLaw::Powers(1.0, 0.1);
    close(feed(1.0).pressure_ratio(60.0), 0.25, 1e-12);
    close(22.0 * law.factors(feed(1.0).pressure_ratio(60.0)).0, 5.5, 1e-12);
    close(feed(1.0).pressure_ratio(30.0), 0.4, 1e-12);
    close(feed(1.4).pressure_ratio(60.0), 0.25_f64.powf(1.4), 1e-12);
    close(Feed::Regulated.pressure_ratio(60.0), 1.0, 1e-15);
    let table = PressureLaw::Table(vec![(0.2, 0.25, 0.9), (0.6, 0.65, 0.97), (1.0, 1.0, 1.0)]);
    let (thrust, speed) = table.factors(0.4);
    close(thrust, 0.45, 1e-12);
    close(speed, 0.935, 1e-12);
    close(table.factors(0.1).0, 0.25, 1e-12);
}

proptest! {
    /// Pulses balance the disturbance in the long run, whatever the axis.
    #[test]
    fn pulses_balance_the_torque(inertia in 1.0..1e4_f64, width in 1e-4..0.1_f64, bit in 1e-4..1.0_f64, torque in 0.0..0.1_f64) {
        let axis = DeadbandAxis { inertia_kg_m2: inertia, half_width_rad: width, bit_n_m_s: bit, disturbance_n_m: torque };
        let rates = axis.pulse_rates();
        let net = (rates.against_per_s - rates.with_per_s) * bit;
        prop_assert!((net - torque).abs() <= 1e-9 * torque.max(1e-9));
        prop_assert!(rates.with_per_s >= 0.0);
    }
}
