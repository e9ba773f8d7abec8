//! A mission of sixty phases and five hundred events against heron, time per lifetime: `cargo bench --bench events`.

use std::fmt::Write as _;
use std::io::Write;
use std::path::Path;
use std::time::Instant;

use couplet::config::{Document, read};
use couplet::lifetime::Plan;
use couplet::mission::{Margin, Scenario};
use couplet::momentum::Resolution;
use couplet::montecarlo::{Design, Watch, sample};

const LIFETIMES: u64 = 10_000;

/// Sixty phases of three months, with 500 events of all kinds between them.
fn phases() -> String {
    let mut text = String::from("mission.phases=[");
    let kinds = [
        "slews: {axis: 0 1 0, angle: 90 deg, rate: 0.25 deg/s, count: 2}",
        "burn: {delta_v: 0.05 m/s, thrusters: [A6, B5]}",
        "safe_mode: {days_per_year: 0.2, half_width: 2 deg, disturbance: 5e-5 5e-5 2e-5 N m}",
        "slews: {axis: 0 0 1, angle: 30 deg, rate: 0.1 deg/s, count: 5}",
        "deadband: {time: 0.2 d, half_width: 1 deg}",
    ];
    let mut made = 0;
    for phase in 0..60 {
        let _ = write!(text, "{{name: p{phase}, duration: 0.25 yr, unload: {{every: 1 d}}, events: [");
        while made < (phase + 1) * 500 / 60 {
            let _ = write!(text, "{{name: e{made}, {}}}, ", kinds[made % kinds.len()]);
            made += 1;
        }
        text.push_str("]}, ");
    }
    text.push(']');
    text
}

fn main() {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/heron.yaml");
    let none: &[&str] = &[];
    let mut out = std::io::stdout().lock();
    let mut each = Vec::new();
    for (name, settings) in [("heron", vec![]), ("60 phases, 500 events, 15 years", vec![phases()])] {
        let document = Document::load(&file, none, &settings).expect("valid YAML");
        let scenario = Scenario::new(&read(&document).expect("the right keys")).expect("possible");
        let start = Instant::now();
        let plan = Plan::new(scenario, Resolution::Default, Margin::NONE).expect("can be flown");
        let basis_s = start.elapsed().as_secs_f64();
        let start = Instant::now();
        let design = Design { lifetimes: LIFETIMES, ..Design::of(&plan.scenario().settings) };
        let stop = std::sync::atomic::AtomicBool::new(false);
        sample(&plan, design, &Watch { progress: &|_, _, _| {}, stop: &stop }).expect("a temporary file");
        let flown_s = start.elapsed().as_secs_f64();
        let per_lifetime_us = flown_s * 1e6 / LIFETIMES as f64;
        writeln!(out, "{name:32} basis {basis_s:6.2} s, {:4} strata, {per_lifetime_us:8.1} µs a lifetime", plan.strata().len())
            .expect("standard output");
        each.push(per_lifetime_us);
    }
    if let [heron, many] = each.as_slice() {
        writeln!(out, "time per lifetime over heron's: {:.2}", many / heron).expect("standard output");
    }
}
