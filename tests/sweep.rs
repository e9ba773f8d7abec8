//! Sweeps: points are runs of their own, and a place that is found is where a run says it is.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use std::path::Path;
use std::process::{Command, Output};

use serde_json::Value;
use support::SMALL;

fn couplet(folder: &Path, arguments: &[&str]) -> Output {
    let program = assert_cmd::cargo::cargo_bin("couplet");
    Command::new(program).current_dir(folder).args(arguments).args(["--lifetimes", "200", "--quiet"]).output().unwrap()
}

fn json(folder: &Path, arguments: &[&str]) -> Value {
    let output = couplet(folder, &[arguments, &["--format", "json"]].concat());
    assert!(matches!(output.status.code(), Some(0 | 1)), "{}", String::from_utf8_lossy(&output.stderr));
    serde_json::from_slice(&output.stdout).unwrap()
}

fn folder() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    std::fs::write(folder.path().join("small.yaml"), SMALL.replace("1 0 0 A m2", "1 0 0 ± 0.2 A m2")).unwrap();
    folder
}

#[test]
fn points_are_runs_of_their_own() {
    let folder = folder();
    let swept = json(
        folder.path(),
        &[
            "sweep",
            "small.yaml",
            "--vary",
            "propulsion.exhaust_speed=1500 .. 2000 m/s",
            "--steps",
            "3",
            "--vary",
            "tank.loaded=5 kg | 0.001 kg",
            "--show",
            "propellant_p95",
            "--show",
            "probability_enough",
            "--show",
            "propellant_nominal",
        ],
    );
    let points = swept["points"].as_array().unwrap();
    assert_eq!(points.len(), 6);
    assert_eq!(points[3]["values"], serde_json::json!(["1750 m/s", "0.001 kg"]));
    for point in points {
        let (speed, loaded) = (point["values"][0].as_str().unwrap(), point["values"][1].as_str().unwrap());
        let alone = json(
            folder.path(),
            &["budget", "small.yaml", "--set", &format!("propulsion.exhaust_speed={speed}"), "--set", &format!("tank.loaded={loaded}")],
        );
        assert_eq!(point["figures"]["propellant_nominal"], alone["attitude_total_kg"]["nominal"]);
        assert_eq!(point["figures"]["propellant_p95"], alone["attitude_total_kg"]["quantiles"][2]["upper_kg"]);
        assert_eq!(point["figures"]["probability_enough"], alone["probability_enough_interval"][0]);
    }
}

/// Momentum conservation: with mass properties that do not follow the propellant it is inversely proportional to the exhaust speed,
/// so a bound of three quarters of what 1500 m/s take is met from 2000 m/s on.
#[test]
fn the_place_where_a_requirement_is_just_met() {
    let folder = folder();
    let start = json(folder.path(), &["budget", "small.yaml"])["attitude_total_kg"]["nominal"].as_f64().unwrap();
    let until = format!("propellant_nominal <= {} kg", start * 0.75);
    let vary = ["sweep", "small.yaml", "--vary", "propulsion.exhaust_speed=1000 .. 3000 m/s", "--steps", "2", "--until", &until];
    let found = json(folder.path(), &vary)["found"].clone();
    let value = found["value"].as_str().unwrap();
    let speed: f64 = value.trim_end_matches(" m/s").parse().unwrap();
    assert!((speed / 2000.0 - 1.0).abs() < 1e-5, "{found}");
    // A run at that value gives the figure told, and keeps the bound; the one beyond does not.
    let at = |value: &str| {
        json(folder.path(), &["budget", "small.yaml", "--set", &format!("propulsion.exhaust_speed={value}")])["attitude_total_kg"]["nominal"].as_f64().unwrap()
    };
    assert_eq!(found["figure"].as_f64().map(f64::to_bits), Some(at(value).to_bits()));
    let limit = start * 0.75 * (1.0 + 1e-9);
    assert!(at(value) <= limit && at(found["not_met_at"].as_str().unwrap()) > limit);
    let never = json(
        folder.path(),
        &["sweep", "small.yaml", "--vary", "propulsion.exhaust_speed=1000 .. 1100 m/s", "--steps", "2", "--until", &until],
    );
    assert!(never["found"]["value"].is_null() && never["found"]["why"].as_str().unwrap().contains("neither end"));
}

#[test]
fn wrong_calls_are_refused_with_a_remedy() {
    let folder = folder();
    for (call, word) in [
        (vec![], "one key or two"),
        (vec!["--vary", "tank.loaded"], "no `=`"),
        (vec!["--vary", "tank.loaded=3 kg"], "one value only"),
        (vec!["--vary", "tank.loaded=3 kg .. 5 g"], "same unit"),
        (vec!["--vary", "tank.loaded=3 .. 5 N"], "got `N`"),
        (vec!["--vary", "tank.lodaed=3 .. 5 kg"], "did you mean `loaded`"),
        (vec!["--vary", "tank.loaded=3 .. 5 kg", "--show", "p95"], "no figure of a sweep"),
        (vec!["--vary", "tank.loaded=3 .. 5 kg", "--until", "propellant_p95 < 3 kg"], "`<=` or `>=`"),
        (vec!["--vary", "tank.loaded=3 .. 5 kg", "--until", "propellant_p95 <= 3 N"], "got `N`"),
    ] {
        let refused = couplet(folder.path(), &[&["sweep", "small.yaml"][..], &call].concat());
        let told = String::from_utf8_lossy(&refused.stderr).into_owned();
        assert_eq!(refused.status.code(), Some(2), "{call:?}: {told}");
        assert!(told.contains(word) && told.contains("help"), "{call:?}: {told}");
    }
}
