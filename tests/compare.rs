//! Comparisons: identical runs, a change with a closed form, and shares that add up.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use std::path::Path;
use std::process::Command;

use couplet::montecarlo::attribute;
use serde_json::Value;
use support::SMALL;

fn compared(folder: &Path, arguments: &[&str]) -> Value {
    let output = Command::new(assert_cmd::cargo::cargo_bin("couplet"))
        .current_dir(folder)
        .args(arguments)
        .args(["--format", "json", "--quiet"])
        .output()
        .unwrap();
    assert!(matches!(output.status.code(), Some(0 | 1)), "{}", String::from_utf8_lossy(&output.stderr));
    serde_json::from_slice(&output.stdout).unwrap()
}

fn folder() -> tempfile::TempDir {
    let folder = tempfile::tempdir().unwrap();
    // The propellant sits at the centre of mass: how much is left moves nothing.
    let uncertain = SMALL.replace("residual_dipole: 1 0 0 A m2", "residual_dipole: 1 0 0 ± 0.2 A m2");
    std::fs::write(folder.path().join("small.yaml"), uncertain).unwrap();
    std::fs::write(folder.path().join("over.yaml"), "spacecraft: {residual_dipole: 2 0 0 ± 0.2 A m2}\ntank: {leakage: 5 g/yr}\nmission: {phases: [{name: only, unload: {every: 2 d}}]}\n").unwrap();
    folder
}

fn figure<'a>(alternative: &'a Value, name: &str) -> &'a Value {
    alternative["figures"].as_array().unwrap().iter().find(|figure| figure["figure"] == name).unwrap()
}

#[test]
fn identical_configurations_differ_by_nothing() {
    let folder = folder();
    let told = compared(folder.path(), &["compare", "small.yaml", "--set", "spacecraft.name=Other", "--lifetimes", "300"]);
    for figure in told["alternatives"][0]["figures"].as_array().unwrap() {
        let changes = figure["quantiles"].as_array().unwrap().iter().map(|quantile| &quantile["change"]);
        for change in changes.chain([&figure["nominal"], &figure["mean"]]) {
            assert_eq!(change["change_kg"].as_f64().map(f64::abs), Some(0.0), "{figure:#}");
            if let Some(interval) = change["interval_kg"].as_array() {
                assert!(interval.iter().all(|limit| limit.as_f64().unwrap().abs() <= 0.0), "{figure:#}");
            }
        }
    }
    assert!(told["alternatives"][0]["verdicts"].as_array().unwrap().iter().all(|verdict| verdict["flips"] == false));
}

/// Momentum conservation: with a regulated tank and mass properties that do not follow the propellant, 1 % more exhaust speed
/// divides every quantile of unloading by 1.01.
#[test]
fn exhaust_speed_divides_propellant() {
    let folder = folder();
    let told = compared(folder.path(), &["compare", "small.yaml", "--set", "propulsion.exhaust_speed=1515 m/s", "--lifetimes", "500"]);
    let unloading = figure(&told["alternatives"][0], "wheel_unloading");
    for quantile in unloading["quantiles"].as_array().unwrap() {
        let (base, other) = (quantile["change"]["base_kg"].as_f64().unwrap(), quantile["change"]["alternative_kg"].as_f64().unwrap());
        assert!(base > 0.0 && (other * 1.01 / base - 1.0).abs() < 1e-6, "{quantile:#}");
        // The interval of so sure a change lies about it.
        let limits: Vec<f64> = quantile["change"]["interval_kg"].as_array().unwrap().iter().map(|x| x.as_f64().unwrap()).collect();
        assert!(limits[0] < 0.0 && limits[1] < 0.0, "{quantile:#}");
    }
}

/// The alternative is what `budget --with` gives, and the shares of its keys add up to the change.
#[test]
fn shares_add_up_and_alternatives_are_runs_of_their_own() {
    let folder = folder();
    let told = compared(folder.path(), &["compare", "small.yaml", "--with", "over.yaml", "--lifetimes", "300"]);
    let alternative = &told["alternatives"][0];
    let total = figure(alternative, "attitude_total");
    let shares = alternative["shares"].as_array().unwrap();
    let keys: Vec<&str> = shares.iter().map(|share| share["key"].as_str().unwrap()).collect();
    assert_eq!(keys, ["spacecraft.residual_dipole", "tank.leakage", "mission.phases[only].unload.every"]);
    let sum: f64 = shares.iter().map(|share| share["nominal_change_kg"].as_f64().unwrap()).sum();
    let change = total["nominal"]["change_kg"].as_f64().unwrap();
    assert!((sum - change).abs() < 1e-12 && change > 0.0, "{sum} {change}");
    let alone = compared(folder.path(), &["budget", "small.yaml", "--with", "over.yaml", "--lifetimes", "300"]);
    assert_eq!(alternative["config_sha256"], alone["provenance"]["config_sha256"]);
    assert_eq!(total["mean"]["alternative_kg"], alone["attitude_total_kg"]["mean"]);
    for (quantile, other) in total["quantiles"].as_array().unwrap().iter().zip(alone["attitude_total_kg"]["quantiles"].as_array().unwrap())
    {
        assert_eq!(quantile["change"]["alternative_kg"], other["kg"]);
    }
}

/// Closed forms: in a product of two, each owns half of what they do together (L. S. Shapley, 1953); in a sum each owns itself,
/// also where orders are only sampled.
#[test]
fn shares_of_known_games() {
    let product = |made: &[bool]| {
        Ok::<f64, ()>(
            (1.0 + f64::from(u8::from(made[0]))) * (3.0 + 2.0 * f64::from(u8::from(made[1]))) + 0.0 * f64::from(u8::from(made[2])),
        )
    };
    // (1,3) → 3, (2,3) → 6, (1,5) → 5, (2,5) → 10: 4 and 3, and nothing for what changes nothing.
    let shares = attribute(3, product).unwrap();
    for (share, expected) in shares.iter().zip([4.0, 3.0, 0.0]) {
        assert!((share - expected).abs() < 1e-12, "{shares:?}");
    }
    let sum = |made: &[bool]| Ok::<f64, ()>(made.iter().enumerate().map(|(k, made)| if *made { k as f64 } else { 0.0 }).sum());
    for (k, share) in attribute(11, sum).unwrap().iter().enumerate() {
        assert!((share - k as f64).abs() < 1e-12);
    }
    assert_eq!(attribute(2, |_| Err::<f64, &str>("no")), Err("no"));
}
