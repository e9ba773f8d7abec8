//! The fused kernel, features × basis, price, maximum, against plain `NumPy` and a linear-program solver: `cargo bench --bench price`.
//!
//! A mission of 15 years with one unload a day, 12 thrusters, 15 features, double precision, two cores, all in one run.
//! `COUPLET_PYTHON` names a Python with the packages that benches/plain.py pins; without them only our own side is measured.

use std::io::Write;
use std::path::Path;
use std::process::Command;
use std::time::Instant;

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

/// What is flown: a random basis, random draws, and the layout of heron.
struct Problem {
    pricer: Pricer,
    lambdas: Vec<[f64; 3]>,
    rows: Vec<[f64; 3]>,
    draws: Vec<f64>,
}

impl Problem {
    fn new() -> Self {
        let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/heron.yaml");
        let none: &[&str] = &[];
        let document = Document::load(&file, none, none).expect("heron is valid YAML");
        let scenario = Scenario::new(&read(&document).expect("heron has the right keys")).expect("heron is possible");
        let pricer = Pricer::new(&scenario.vehicle.propulsion, &Vector3::new(0.01, 0.0, 0.74));
        Self {
            lambdas: pricer.price_map().vertices.iter().map(|v| v.lambda.into()).collect(),
            rows: numbers("basis", UNLOADS * FEATURES * 3).chunks(3).map(|v| [v[0], v[1], v[2]]).collect(),
            draws: numbers("draws", LIFETIMES * FEATURES),
            pricer,
        }
    }

    fn fly(&self, blocks: &[Vec<Lane>]) -> f64 {
        let one = |block: &Vec<Lane>| least_propellant(Arch::new(), &self.rows, block, &self.lambdas);
        let totals: Vec<Lane> = blocks.par_iter().map(one).collect();
        totals.iter().flatten().sum()
    }

    /// Floating-point operations of one lifetime.
    fn operations(&self) -> f64 {
        UNLOADS as f64 * (6.0 * FEATURES as f64 + self.lambdas.len() as f64 * 6.0 + 1.0)
    }

    /// Propellant of the first unloads of the first two lifetimes, which the linear programs solve.
    fn solved(&self) -> f64 {
        let one = |k: usize| {
            let block = &blocks(&self.draws[k * FEATURES..(k + 1) * FEATURES])[0];
            least_propellant(Arch::new(), &self.rows[..SOLVED * FEATURES], block, &self.lambdas)[0]
        };
        one(0) + one(1)
    }

    /// Runs the scripts; what they print.
    fn scripts(&self) -> (String, String) {
        let folder = tempfile::tempdir().expect("a temporary folder");
        let write = |name: &str, content: Vec<u8>| std::fs::write(folder.path().join(name), content).expect("a temporary file");
        let layout = self.pricer.layout();
        write("shape", format!("{UNLOADS} {FEATURES} {} {} {PLAIN}", self.lambdas.len(), layout.len()).into_bytes());
        write("basis", bytes(self.rows.iter().flatten().copied()));
        write("prices", bytes(self.lambdas.iter().flatten().copied()));
        write("draws", bytes(self.draws[..PLAIN * FEATURES].iter().copied()));
        let torques = (0..3).flat_map(|axis| layout.iter().map(move |g| g.torque[axis]));
        let forces = (0..3).flat_map(|axis| layout.iter().map(move |g| g.force[axis]));
        write("wrench", bytes(torques.chain(forces)));
        write("cost", bytes(layout.iter().map(|g| g.cost)));
        let python = std::env::var("COUPLET_PYTHON").unwrap_or_else(|_| "python3".to_owned());
        let script = Path::new(env!("CARGO_MANIFEST_DIR")).join("benches/plain.py");
        let answer = Command::new(&python).arg(script).arg(folder.path()).output().expect("COUPLET_PYTHON can be started");
        (String::from_utf8_lossy(&answer.stdout).into_owned(), String::from_utf8_lossy(&answer.stderr).into_owned())
    }
}

fn main() {
    let mut out = std::io::stdout().lock();
    let mut tell = |line: String| writeln!(out, "{line}").expect("standard output");
    let problem = Problem::new();
    let all = blocks(&problem.draws);
    let (seconds, _) = fastest(|| problem.fly(&all));
    let (per_second, operations) = (LIFETIMES as f64 / seconds, problem.operations());
    let machine = match Arch::new() {
        Arch::Scalar => "no wide vectors",
        Arch::V3(_) => "AVX2",
        _ => "AVX-512",
    };
    let (thrusters, vertices, threads) = (problem.pricer.layout().len(), problem.lambdas.len(), rayon::current_num_threads());
    tell(format!(
        "{UNLOADS} unloads, {FEATURES} features, {thrusters} thrusters, {vertices} vertices of the price; {threads} threads, {machine}"
    ));
    let rate = operations * per_second;
    tell(format!(
        "fused                       {per_second:10.0} lifetimes/s   {operations:.0} floating-point operations each, {:.0} Gflop/s",
        rate / 1e9
    ));
    let own_peak = peak();
    let (text, complaint) = problem.scripts();
    let value = |name: &str| text.lines().find_map(|line| line.strip_prefix(name)?.strip_prefix(' ')?.parse::<f64>().ok());
    let peak = own_peak.max(value("peak").unwrap_or(0.0));
    tell(format!("peak of a matrix product {:.0} Gflop/s: the fused kernel reaches {:.0} % of it", peak / 1e9, rate / peak * 100.0));
    let own_sum = problem.fly(&blocks(&problem.draws[..PLAIN * FEATURES]));
    for (name, words, reference) in [
        ("straightforward", "NumPy, straightforward      ", own_sum),
        ("rearranged", "NumPy, lifetimes along rows ", own_sum),
        ("program", "linear program each unload  ", problem.solved()),
    ] {
        let (Some(other), Some(sum)) = (value(name), value(&format!("{name}_sum"))) else {
            tell(format!("{words}did not run: set COUPLET_PYTHON as benches/plain.py says\n{complaint}"));
            continue;
        };
        let off = (sum - reference).abs() / reference;
        tell(format!(
            "{words}{other:10.3} lifetimes/s   fused is {:.0} times as fast; sums differ by {off:.0e} of themselves",
            per_second / other
        ));
    }
}
