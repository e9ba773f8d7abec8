//! The fused kernel against the plain products, on every instruction set that this machine has.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use couplet::momentum::least_propellant;
use couplet::montecarlo::uniforms;
use couplet::pulses::{LanePerformance, LaneTariff, LaneWear, Performance, Pricer, Wear};
use couplet::uncertain::{LANES, Lane};
use nalgebra::{DMatrix, Vector3};
use pulp::Arch;
use support::{SMALL, heron, scenario};

fn numbers(name: &str, count: usize) -> Vec<f64> {
    let mut out = vec![0.0; count];
    uniforms(11, name, 0, &mut out);
    out.iter().map(|u| 2.0 * u - 1.0).collect()
}

fn machines() -> Vec<Arch> {
    let mut all = vec![Arch::Scalar, Arch::new()];
    #[cfg(target_arch = "x86_64")]
    all.extend(pulp::x86::V3::try_new().map(Arch::V3));
    all
}

/// Product, then price, then maximum with nalgebra, to 1e-12; and the same bits on every instruction set.
#[test]
fn the_fused_kernel_equals_the_plain_one() {
    for (case, (windows, features, vertices)) in [(1, 1, 1), (7, 3, 5), (40, 15, 8), (33, 41, 44), (5, 0, 3)].into_iter().enumerate() {
        let basis = numbers(&format!("basis {case}"), windows * features * 3);
        let draws = numbers(&format!("draws {case}"), features * LANES);
        let prices = numbers(&format!("prices {case}"), vertices * 3);
        let matrix = DMatrix::from_fn(3 * windows, features, |row, column| basis[(row / 3 * features + column) * 3 + row % 3]);
        let weights = DMatrix::from_fn(features, LANES, |row, column| draws[row * LANES + column]);
        let momentum = matrix * weights;
        let lambdas = DMatrix::from_row_slice(vertices, 3, &prices);
        let plain: Vec<f64> =
            (0..LANES).map(|lane| (0..windows).map(|k| (&lambdas * momentum.view((3 * k, lane), (3, 1))).max().max(0.0)).sum()).collect();
        let rows: Vec<[f64; 3]> = basis.chunks(3).map(|v| [v[0], v[1], v[2]]).collect();
        let lanes: Vec<Lane> = (0..features).map(|f| std::array::from_fn(|lane| draws[f * LANES + lane])).collect();
        let prices: Vec<[f64; 3]> = prices.chunks(3).map(|v| [v[0], v[1], v[2]]).collect();
        let all: Vec<Lane> = machines().into_iter().map(|arch| least_propellant(arch, &rows, &lanes, &prices)).collect();
        for (fused, plain) in all[0].iter().zip(plain) {
            // No features leave no momentum and no price.
            assert!((fused - plain).abs() <= 1e-12 * plain.max(1.0), "{fused} {plain}");
        }
        for other in &all {
            assert_eq!(other.map(f64::to_bits), all[0].map(f64::to_bits));
        }
    }
}

/// Firing in lanes equals firing one by one, propellant, pulses and throughput, for layouts with and without net force and
/// with a centre of mass that has moved.
#[test]
fn lanes_fire_as_one_by_one() {
    for (text, net) in [(None, "zero"), (None, "any"), (Some(SMALL), "any"), (Some(SMALL), "zero")] {
        let setting = format!("propulsion.net_force={net}");
        let scenario = text.map_or_else(|| heron(&[&setting]), |text| scenario(text, &[&setting]));
        let propulsion = &scenario.vehicle.propulsion;
        let pricer = Pricer::new(propulsion, &Vector3::new(0.01, 0.0, 0.1));
        let tariff = LaneTariff::new(&pricer).unwrap();
        let vectors: Vec<Vector3<f64>> = numbers("impulses", 3 * LANES).chunks(3).map(|v| Vector3::new(v[0], v[1], v[2]) * 3.0).collect();
        let shifts: Vec<Vector3<f64>> = numbers("shifts", 3 * LANES).chunks(3).map(|v| Vector3::new(v[0], v[1], v[2]) * 0.02).collect();
        let lanes = |of: &[Vector3<f64>]| [0, 1, 2].map(|axis| std::array::from_fn::<f64, LANES, _>(|lane| of[lane][axis]));
        let performance = Performance::nominal(propulsion);
        let thrusters = propulsion.thrusters.len();
        let side_by_side = LanePerformance::new((0..LANES).map(|_| &performance), thrusters);
        for shift in [None, Some(lanes(&shifts))].into_iter().filter(|shift| shift.is_none() || net == "any") {
            let mut wear = LaneWear::none(thrusters);
            let left = tariff.fire(&lanes(&vectors), shift.as_ref(), &[2.5; LANES], &side_by_side, &mut wear);
            for lane in (0..LANES).filter(|lane| left[*lane] <= 0.0) {
                let mut own = Wear::none(thrusters);
                let asked = if shift.is_some() { pricer.aimed(&vectors[lane], &shifts[lane]).unwrap() } else { vectors[lane] };
                let kg = pricer.cost(&asked, 2.5, &performance, &mut own).unwrap();
                assert!((kg - wear.kg[lane]).abs() <= 1e-12 * kg, "{kg} {}", wear.kg[lane]);
                let mut found = Wear::none(thrusters);
                wear.add_to(lane, &mut found);
                for (a, b) in own.cycles.iter().zip(&found.cycles).chain(own.throughput_kg.iter().zip(&found.throughput_kg)) {
                    assert!((a - b).abs() <= 1e-10 * a.max(1e-6), "{a} {b}");
                }
            }
            assert!(left.iter().filter(|left| **left > 0.0).count() < 4, "hardly an impulse lies on a border");
        }
    }
}
