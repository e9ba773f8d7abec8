//! How long the cases of a large layout take: `cargo bench --bench layout`.

use std::io::Write;
use std::time::Instant;

use couplet::authority::{Authority, Generator, NetForce, PriceMap, cases, single_failures};
use nalgebra::Vector3;
use rand::{RngExt, SeedableRng, rngs::ChaCha8Rng};

/// A seeded layout of thrusters on a box, about `centre`.
fn layout(count: usize, centre: Vector3<f64>) -> Vec<Generator> {
    let mut rng = ChaCha8Rng::seed_from_u64(24);
    let mut one = || {
        let mut part = || rng.random_range(-1.0..1.0);
        let (position, push) = (Vector3::new(part(), part(), part()), Vector3::new(part(), part(), part()).normalize());
        Generator::thruster(position, push, centre, 1.0, 2100.0)
    };
    (0..count).map(|_| one()).collect()
}

fn main() {
    let mut out = std::io::stdout().lock();
    // Half of the thrusters in either string.
    let mut lost = single_failures(24);
    lost.extend([(0..12).collect(), (12..24).collect::<Vec<usize>>()]);
    let pool = rayon::ThreadPoolBuilder::new().num_threads(1).build().expect("one thread");
    let start = Instant::now();
    let (mut facets, mut vertices) = (0, 0);
    for centre in [Vector3::zeros(), Vector3::new(0.02, -0.01, 0.05)] {
        for case in pool.install(|| cases(&layout(24, centre), &lost)) {
            for capability in [&case.pure_torque, &case.any_force] {
                facets += capability.authority.half_spaces.len();
                vertices += capability.price.vertices.len();
            }
        }
    }
    let all_s = start.elapsed().as_secs_f64();
    writeln!(out, "24 thrusters, {} cases, 2 centres of mass, both force conditions: {all_s:.2} s on one thread, {facets} facets, {vertices} vertices", lost.len())
        .expect("standard output");
    let large = layout(32, Vector3::zeros());
    let start = Instant::now();
    let facets = Authority::new(&large, NetForce::Zero).half_spaces.len();
    let vertices = PriceMap::new(&large, NetForce::Zero).vertices.len();
    let intact_s = start.elapsed().as_secs_f64();
    writeln!(
        out,
        "32 thrusters, intact, no net force: {intact_s:.2} s, {facets} facets, {vertices} vertices; {:.2} of the above",
        intact_s / all_s
    )
    .expect("standard output");
}
