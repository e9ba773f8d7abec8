//! How long heron's basis takes to build and its lifetimes to fly: `cargo bench`.
//!
//! Absolute times depend on the machine; the ratio of flying in blocks to flying one by one does not much.

use std::io::Write;
use std::path::Path;
use std::time::Instant;

use couplet::config::{Document, read};
use couplet::lifetime::Plan;
use couplet::mission::{Margin, Scenario};
use couplet::momentum::Resolution;
use std::sync::atomic::AtomicBool;

use couplet::montecarlo::{Design, Figure, Watch, draws, sample};

const LIFETIMES: u64 = 10_000;
const ONE_BY_ONE: usize = 512;

fn main() {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/heron.yaml");
    let none: &[&str] = &[];
    let document = Document::load(&file, none, none).expect("heron is valid YAML");
    let scenario = Scenario::new(&read(&document).expect("heron has the right keys")).expect("heron is possible");
    let mut out = std::io::stdout().lock();

    let start = Instant::now();
    let plan = Plan::new(scenario, Resolution::Default, Margin::NONE).expect("heron can be flown");
    let basis_s = start.elapsed().as_secs_f64();
    let (strata, features, rows) = (plan.strata().len(), plan.basis().features.len(), plan.basis().matrix.nrows());
    writeln!(out, "basis              {basis_s:8.3} s   ({strata} strata, {features} features, {rows} rows)").expect("standard output");

    let start = Instant::now();
    let design = Design { lifetimes: LIFETIMES, ..Design::of(&plan.scenario().settings) };
    let stop = AtomicBool::new(false);
    let watch = Watch { progress: &|_, _, _| {}, stop: &stop };
    let mut flown = sample(&plan, design, &watch).expect("a temporary file");
    let flown_s = start.elapsed().as_secs_f64();
    let per_second = LIFETIMES as f64 / flown_s;
    let threads = rayon::current_num_threads();
    writeln!(out, "{LIFETIMES} lifetimes   {flown_s:8.3} s   ({per_second:.0} lifetimes/s on {threads} threads)").expect("standard output");
    let p95 = flown.store.select(Figure::AttitudeTotal.column(), &[9500]).expect("the temporary file");
    writeln!(out, "P95 of the total   {:8.3} kg", p95.first().copied().unwrap_or(f64::NAN)).expect("standard output");

    let some = draws(&plan, &design, 0, ONE_BY_ONE);
    let start = Instant::now();
    let single: f64 = some.iter().map(|draw| plan.fly(draw).attitude_total_kg()).sum();
    let single_s = start.elapsed().as_secs_f64();
    let start = Instant::now();
    let blocked: f64 = some.chunks(couplet::lifetime::BLOCK).flat_map(|block| plan.fly_block(block)).map(|o| o.attitude_total_kg()).sum();
    let blocked_s = start.elapsed().as_secs_f64();
    writeln!(
        out,
        "blocks against one by one, one thread: {:.2} times as fast (sums differ by {:.1e} of themselves)",
        single_s / blocked_s,
        (single - blocked).abs() / blocked
    )
    .expect("standard output");
}
