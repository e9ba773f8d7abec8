//! How long the basis of a fifteen-year mission in a low orbit takes to build: `cargo bench --bench basis`.
//!
//! Absolute times depend on the machine; the ratio of full to default resolution does not much.

use std::io::Write;
use std::path::Path;
use std::time::Instant;

use couplet::config::{Document, read};
use couplet::mission::Scenario;
use couplet::momentum::{Resolution, simulate};

fn main() {
    let file = Path::new(env!("CARGO_MANIFEST_DIR")).join("configs/heron.yaml");
    let none: &[&str] = &[];
    let longer = ["mission.phases[science].duration=14.836 yr"];
    let document = Document::load(&file, none, &longer).expect("heron is valid YAML");
    let scenario = Scenario::new(&read(&document).expect("heron has the right keys")).expect("heron is possible");
    let mut out = std::io::stdout().lock();
    let threads = rayon::current_num_threads();
    let mut seconds = Vec::new();
    for (name, resolution) in [("default", Resolution::Default), ("full", Resolution::Full)] {
        let start = Instant::now();
        let (strata, raw, convergence) = simulate(&scenario, resolution);
        let took_s = start.elapsed().as_secs_f64();
        seconds.push(took_s);
        let steps: usize = strata.iter().map(|stratum| stratum.span.steps()).sum();
        let features = raw.features.last().map_or(0, Vec::len);
        let used = convergence.last().expect("heron has phases");
        writeln!(
            out,
            "{name:8} {took_s:8.2} s on {threads} threads   {:5} spans, {steps} steps of {:.0} s, {features} features, {:.1} µs a step and thread",
            strata.len(),
            used.step_s,
            took_s * 1e6 * threads as f64 / steps as f64
        )
        .expect("standard output");
    }
    if let [default, full] = seconds.as_slice() {
        writeln!(out, "full over default: {:.0}", full / default).expect("standard output");
    }
}
