//! The fused kernel, features × basis, price, maximum, against plain NumPy and a linear-program solver: `cargo bench --bench price`.
//!
//! A mission of 15 years with one unload a day, 12 thrusters, 15 features, double precision, two cores, all in one run.
//! `COUPLET_PYTHON` names a Python with the packages that benches/plain.py pins; without them only our own side is measured.

use std::io::Write;
use std::path::Path;
use std::process::Command;
use std::time::Instant;

use couplet::authority::PriceMap;
use couplet::config::{Document, read};
use couplet::mission::Scenario;
use couplet::momentum::least_propellant;
use couplet::montecarlo::uniforms;
use couplet::pulses::Pricer;
use couplet::uncertain::{LANES, Lane};
use nalgebra::{DMatrix, Vector3};
use pulp::Arch;
use rayon::prelude::*;

const UNLOADS: usize = 5479;
const FEATURES: usize = 15;
const LIFETIMES: usize = 64 * 1024;
/// Lifetimes that the scripts fly.
const PLAIN: usize = 2048;
const SOLVED: usize = 100;

fn numbers(name: &str, count: usize) -> Vec<f64> {
    let mut out = vec![0.0; count];
    uniforms(1, name, 0, &mut out);
    out.iter().map(|u| 2.0 * u - 1.0).collect()
}

fn bytes(values: impl IntoIterator<Item = f64>) -> Vec<u8> {
    values.into_iter().flat_map(f64::to_le_bytes).collect()
}

/// Lifetimes in blocks of lanes.
fn blocks(draws: &[f64]) -> Vec<Vec<Lane>> {
    let block = |lifetimes: &[f64]| -> Vec<Lane> {
        (0..FEATURES).map(|f| std::array::from_fn(|lane| lifetimes.get(lane * FEATURES + f).copied().unwrap_or(0.0))).collect()
    };
    draws.chunks(LANES * FEATURES).map(block).collect()
}

fn fastest(mut work: impl FnMut() -> f64) -> (f64, f64) {
    let mut best = (f64::INFINITY, 0.0);
    for _ in 0..5 {
        let start = Instant::now();
        let answer = work();
        best = (start.elapsed().as_secs_f64().min(best.0), answer);
    }
    best
}

/// Rate of a square matrix product on all threads, floating-point operations a second.
fn peak() -> f64 {
    let size = 512;
    let threads = rayon::current_num_threads();
    let mut all: Vec<_> =
        (0..threads).map(|_| (DMatrix::<f64>::from_element(size, size, 0.5), DMatrix::<f64>::zeros(size, size))).collect();
    let (seconds, _) = fastest(|| {
        all.par_iter_mut().for_each(|(a, out)| (0..8).for_each(|_| out.gemm(1.0, a, a, 0.0)));
        0.0
    });
    8.0 * threads as f64 * 2.0 * (size as f64).powi(3) / seconds
}

fn main() {
    let mut out = std::io::stdout().lock();
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/heron.yaml");
    let none: &[&str] = &[];
    let document = Document::load(&file, none, none).expect("heron is valid YAML");
    let scenario = Scenario::new(&read(&document).expect("heron has the right keys")).expect("heron is possible");
    let pricer = Pricer::new(&scenario.vehicle.propulsion, &Vector3::new(0.01, 0.0, 0.74));
    let map: &PriceMap = pricer.price_map();
    let lambdas: Vec<[f64; 3]> = map.vertices.iter().map(|v| v.lambda.into()).collect();
    let rows: Vec<[f64; 3]> = numbers("basis", UNLOADS * FEATURES * 3).chunks(3).map(|v| [v[0], v[1], v[2]]).collect();
    let draws = numbers("draws", LIFETIMES * FEATURES);

    let all = blocks(&draws);
    let fly = |blocks: &[Vec<Lane>]| -> f64 {
        let totals: Vec<Lane> = blocks.par_iter().map(|block| least_propellant(Arch::new(), &rows, block, &lambdas)).collect();
        totals.iter().flatten().sum()
    };
    let (seconds, _) = fastest(|| fly(&all));
    let per_second = LIFETIMES as f64 / seconds;
    let operations = UNLOADS as f64 * (2.0 * 3.0 * FEATURES as f64 + lambdas.len() as f64 * 6.0 + 1.0);
    writeln!(
        out,
        "{UNLOADS} unloads, {FEATURES} features, {} thrusters, {} vertices of the price; {} threads, {}",
        pricer.layout().len(),
        lambdas.len(),
        rayon::current_num_threads(),
        match Arch::new() {
            Arch::Scalar => "no wide vectors",
            Arch::V3(_) => "AVX2",
            _ => "AVX-512",
        }
    )
    .expect("standard output");
    writeln!(
        out,
        "fused              {per_second:10.0} lifetimes/s   {operations:.0} floating-point operations each, {:.1} Gflop/s",
        operations * per_second / 1e9
    )
    .expect("standard output");

    let some = blocks(&draws[..PLAIN * FEATURES]);
    let own_sum = fly(&some);
    let mut best_peak = peak();
    let folder = tempfile::tempdir().expect("a temporary folder");
    let write = |name: &str, content: Vec<u8>| std::fs::write(folder.path().join(name), content).expect("a temporary file");
    write("shape", format!("{UNLOADS} {FEATURES} {} {} {PLAIN}", lambdas.len(), pricer.layout().len()).into_bytes());
    write("basis", bytes(rows.iter().flatten().copied()));
    write("prices", bytes(lambdas.iter().flatten().copied()));
    write("draws", bytes(draws[..PLAIN * FEATURES].iter().copied()));
    let layout = pricer.layout();
    let wrench = (0..3)
        .flat_map(|axis| layout.iter().map(move |g| g.torque[axis]))
        .chain((0..3).flat_map(|axis| layout.iter().map(move |g| g.force[axis])));
    write("wrench", bytes(wrench));
    write("cost", bytes(layout.iter().map(|g| g.cost)));
    let python = std::env::var("COUPLET_PYTHON").unwrap_or_else(|_| "python3".to_owned());
    let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("benches/plain.py");
    let answer = Command::new(&python).arg(script).arg(folder.path()).output().expect("COUPLET_PYTHON can be started");
    let text = String::from_utf8_lossy(&answer.stdout);
    let value = |name: &str| text.lines().find_map(|line| line.strip_prefix(name)?.strip_prefix(' ')?.parse::<f64>().ok());
    best_peak = best_peak.max(value("peak").unwrap_or(0.0));
    writeln!(
        out,
        "peak of a matrix product {:.1} Gflop/s: the fused kernel reaches {:.0} % of it",
        best_peak / 1e9,
        operations * per_second / best_peak * 100.0
    )
    .expect("standard output");
    let mut line = |name: &str, words: &str, reference: f64| {
        if let (Some(rate), Some(sum)) = (value(name), value(&format!("{name}_sum"))) {
            writeln!(
                out,
                "{words}   {rate:10.3} lifetimes/s   fused is {:.0} times as fast; sums differ by {:.1e} of themselves",
                per_second / rate,
                (sum - reference).abs() / reference
            )
            .expect("standard output");
        }
    };
    line("straightforward", "NumPy, straightforward      ", own_sum);
    line("rearranged", "NumPy, lifetimes along rows ", own_sum);
    let solved: f64 = (0..2)
        .map(|k| {
            least_propellant(Arch::new(), &rows[..SOLVED * FEATURES], &blocks(&draws[k * FEATURES..(k + 1) * FEATURES])[0], &lambdas)[0]
        })
        .sum();
    line("program", "linear program each unload  ", solved);
    if value("straightforward").is_none() {
        writeln!(out, "the scripts did not run: set COUPLET_PYTHON as benches/plain.py says\n{}", String::from_utf8_lossy(&answer.stderr))
            .expect("standard output");
    }
}
