//! The command from outside: text, files and exit status.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::path::{Path, PathBuf};
use std::process::Output;

use assert_cmd::Command;
use serde_json::Value;

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

fn run(arguments: &[&str]) -> Output {
    Command::cargo_bin("couplet").unwrap().current_dir(root()).args(arguments).output().unwrap()
}

/// A short heron with few lifetimes.
fn quick(command: &str, more: &[&str]) -> Output {
    let short = "mission.phases=[{name: only, duration: 20 d, unload: {every: 1 d}, events: [{name: tip-off, rate_damping: {rates: 0 0 0 ± 0.8 deg/s}}]}]";
    let base =
        [command, "configs/heron.yaml", "--set", short, "--lifetimes", "150", "--quiet", "--set", "requirements[AOCS-02].at_least=90 %"];
    run(&[&base, more].concat())
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).unwrap()
}

fn json(output: &Output) -> Value {
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    serde_json::from_slice(&output.stdout).unwrap()
}

/// `--explain` adds up to the row it explains, and a wrong name is told the right one.
#[test]
fn a_row_is_explained() {
    let explained = json(&run(&["budget", "configs/heron.yaml", "--explain", "wheel_unloading", "--format", "json"]));
    let sum: f64 = explained["entries"].as_array().unwrap().iter().map(|entry| entry["propellant_kg"].as_f64().unwrap()).sum();
    let row = explained["nominal_kg"].as_f64().unwrap();
    assert!(row > 1.0 && (sum - row).abs() < 1e-9 * row);
}

fn has(value: &Value, keys: &[&str]) {
    for key in keys {
        assert!(value.get(key).is_some(), "`{key}` is missing in {value:#}");
    }
}

/// The keys are those that the project promises to scripts: docs/output.md.
#[test]
fn budget_has_every_key() {
    let budget = json(&quick("budget", &["--format", "json"]));
    has(
        &budget,
        &[
            "schema",
            "provenance",
            "ledger",
            "attitude_total_kg",
            "propellant_loaded_kg",
            "probability_enough",
            "life_years",
            "unloads",
            "valve_cycles",
            "drivers",
            "requirements",
            "warnings",
            "layout",
        ],
    );
    assert_eq!(budget["schema"], "couplet/budget/1");
    has(&budget["provenance"], &["version", "config", "config_sha256", "overlays", "settings", "seed", "lifetimes"]);
    has(&budget["ledger"][0], &["row", "nominal_kg", "mean_kg", "p50_kg", "p95_kg", "p99_kg"]);
    has(&budget["attitude_total_kg"], &["nominal", "mean", "sd", "quantiles"]);
    has(&budget["attitude_total_kg"]["quantiles"][0], &["p", "kg", "lower_kg", "upper_kg", "confidence"]);
    has(&budget["life_years"][0], &["p", "years"]);
    has(&budget["unloads"], &["nominal", "p95"]);
    has(&budget["valve_cycles"][0], &["thruster", "nominal", "p95", "qualified"]);
    has(&budget["drivers"][0], &["parameter", "first_order", "total"]);
    has(&budget["requirements"][0], &["name", "met", "value", "limit", "unit"]);
    // 150 lifetimes cannot bound P99 with 95 % confidence: 299 are needed (Wilks 1941), and null says so.
    let p99 = &budget["attitude_total_kg"]["quantiles"][3];
    assert!(p99["upper_kg"].is_null() && p99["lifetimes_needed"] == 299, "{p99}");
    assert_eq!(budget["unloads"]["nominal"], 20.0);
}

#[test]
fn layout_momentum_and_unload_have_every_key() {
    let layout = json(&run(&["layout", "configs/heron.yaml", "--format", "json"]));
    // Intact, twelve thrusters, two strings; two centres of mass.
    assert_eq!(layout["cases"].as_array().unwrap().len(), 2 * (1 + 12 + 2));
    let case = &layout["cases"][0];
    has(
        case,
        &["thrusters_out", "out_because", "centre_of_mass", "centre_of_mass_m", "torque_rank", "wrench_rank", "pure_torque", "any_force"],
    );
    for verdict in [&case["pure_torque"], &case["any_force"]] {
        has(
            verdict,
            &["every_direction", "guaranteed_N_m", "weakest_direction", "dearest_direction", "dearest_price_kg_per_N_m_s", "axes"],
        );
        for axis in ["+x", "-x", "+y", "-y", "+z", "-z"] {
            has(&verdict["axes"][axis], &["most_N_m", "price_kg_per_N_m_s", "thrusters"]);
        }
    }
    // A5 and A6 alone push couples about +z: with A5 out there is none left, and null says so.
    let out = layout["cases"].as_array().unwrap().iter().find(|case| case["thrusters_out"][0] == "A5").unwrap();
    assert!(out["pure_torque"]["axes"]["+z"]["price_kg_per_N_m_s"].is_null());
    assert!(out["pure_torque"]["dearest_price_kg_per_N_m_s"].is_null());

    let momentum = json(&quick("momentum", &["--format", "json"]));
    let phase = &momentum["phases"][0];
    has(
        phase,
        &["name", "peak_torque_N_m", "secular_N_m_s_per_day", "cyclic_N_m_s", "wheel_envelope_N_m_s", "unloads", "unload_interval_s"],
    );
    has(&phase["secular_N_m_s_per_day"], &["total", "drag", "radiation", "gravity_gradient", "residual_dipole", "body_torque"]);

    let unload = json(&quick("unload", &["--format", "json", "--momentum", "1 2 -0.5 N m s"]));
    has(
        &unload,
        &[
            "momentum_N_m_s",
            "thrusters",
            "propellant_kg",
            "ideal_propellant_kg",
            "duration_s",
            "residual_N_m_s",
            "net_impulse_N_s",
            "delta_v_m_per_s",
            "valve_cycles",
        ],
    );
    has(&unload["thrusters"][0], &["name", "impulse_N_s", "pulses", "on_time_s", "propellant_kg"]);
    assert_eq!(unload["momentum_N_m_s"], serde_json::json!([1.0, 2.0, -0.5]));
}

#[test]
fn threads_do_not_change_a_byte_and_the_seed_does() {
    let one = quick("budget", &["--format", "json", "--threads", "1"]);
    let two = quick("budget", &["--format", "json", "--threads", "2"]);
    assert!(one.status.success() && one.stdout == two.stdout);
    let other = quick("budget", &["--format", "json", "--seed", "2"]);
    assert_ne!(json(&one)["attitude_total_kg"]["mean"], json(&other)["attitude_total_kg"]["mean"]);
}

#[test]
fn overlays_and_settings_change_the_result() {
    let folder = tempfile::tempdir().unwrap();
    let overlay = folder.path().join("dipole.yaml");
    std::fs::write(&overlay, "spacecraft: {residual_dipole: 8 8 8 A m2}\n").unwrap();
    let free = ["--format", "json", "--set", "requirements=[]"];
    let base = json(&quick("budget", &free));
    let with = json(&quick("budget", &[&free[..], &["--with", overlay.to_str().unwrap()]].concat()));
    let set = json(&quick("budget", &[&free[..], &["--set", "spacecraft.residual_dipole=8 8 8 A m2"]].concat()));
    let total = |value: &Value| value["attitude_total_kg"]["nominal"].as_f64().unwrap();
    assert!(total(&with) > total(&base));
    // The same values, however they came in: the same result and the same hash.
    assert_eq!(with["ledger"], set["ledger"]);
    assert_eq!(with["provenance"]["config_sha256"], set["provenance"]["config_sha256"]);
    assert_eq!(with["provenance"]["overlays"][0], overlay.to_str().unwrap());
}

#[test]
fn a_requirement_that_is_not_met_is_status_1() {
    let strict = quick("budget", &["--set", "requirements[AOCS-01].at_most=1 g"]);
    assert_eq!(strict.status.code(), Some(1));
    assert!(text(&strict.stdout).contains("NOT MET"));
    assert_eq!(quick("budget", &[]).status.code(), Some(0));
}

fn files(folder: &Path) -> Vec<PathBuf> {
    std::fs::read_dir(folder).unwrap().map(|entry| entry.unwrap().path()).collect()
}

#[test]
fn a_result_file_appears_whole_or_not_at_all() {
    let folder = tempfile::tempdir().unwrap();
    let out = folder.path().join("budget.json");
    let out = out.to_str().unwrap();
    let wrong = quick("budget", &["--out", out, "--set", "spacecraft.dry_mass=-1 kg"]);
    assert_eq!(wrong.status.code(), Some(2));
    assert!(files(folder.path()).is_empty());
    let right = quick("budget", &["--out", out, "--format", "json"]);
    assert!(right.status.success() && right.stdout.is_empty());
    assert_eq!(files(folder.path()), [PathBuf::from(out)]);
    let written: Value = serde_json::from_slice(&std::fs::read(out).unwrap()).unwrap();
    assert_eq!(written["schema"], "couplet/budget/1");
}

#[test]
fn an_unwritable_target_is_status_3_and_leaves_nothing() {
    let folder = tempfile::tempdir().unwrap();
    for target in [folder.path().to_path_buf(), folder.path().join("missing/result.json")] {
        let output = quick("budget", &["--out", target.to_str().unwrap()]);
        assert_eq!(output.status.code(), Some(3), "{}", text(&output.stderr));
        assert!(text(&output.stderr).contains("cannot write") && output.stdout.is_empty());
    }
    assert!(files(folder.path()).is_empty());
}

/// Every line of every text result, at 80 columns.
#[test]
fn text_fits_80_columns() {
    for output in [quick("budget", &[]), quick("momentum", &[]), quick("unload", &[]), run(&["layout", "configs/heron.yaml"])] {
        let text = text(&output.stdout);
        assert!(text.lines().count() > 3);
        for line in text.lines() {
            assert!(line.chars().count() <= 80, "{} characters: {line}", line.chars().count());
        }
    }
    for command in [vec!["--help"], vec!["budget", "--help"], vec!["unload", "-h"]] {
        let help = run(&command);
        assert_eq!(help.status.code(), Some(0));
        assert!(text(&help.stdout).lines().all(|line| line.chars().count() <= 80), "{}", text(&help.stdout));
    }
}

#[test]
fn every_configuration_is_in_order_and_has_a_budget() {
    for file in files(&root().join("configs")) {
        let file = file.strip_prefix(root()).unwrap().to_str().unwrap();
        let check = run(&["check", file]);
        assert_eq!(check.status.code(), Some(0), "{file}");
        let sentence = text(&check.stdout);
        assert!(sentence.starts_with(&format!("{file}: in order (")), "{sentence}");
        assert!(sentence.lines().all(|line| line.chars().count() <= 80), "{sentence}");
        let budget = run(&["budget", file, "--lifetimes", "100", "--quiet"]);
        assert!(matches!(budget.status.code(), Some(0 | 1)), "{file}: {}", text(&budget.stderr));
    }
}

#[test]
fn the_page_ends_with_cautions() {
    let page = text(&quick("budget", &[]).stdout);
    let cautions = page.find("Cautions").unwrap();
    for word in ["Preliminary design", "toxic", "qualified review"] {
        assert!(page[cautions..].contains(word), "{word}");
    }
}

#[test]
fn csv_has_one_line_a_row() {
    let csv = text(&quick("budget", &["--format", "csv"]).stdout);
    let mut lines = csv.lines();
    assert_eq!(lines.next(), Some("row,nominal_kg,mean_kg,p50_kg,p95_kg,p99_kg"));
    assert!(lines.clone().all(|line| line.split(',').count() == 6));
    assert!(lines.next().unwrap().starts_with("wheel_unloading,"));
}

/// One clear message with key and place, status 2, and nothing on standard output.
fn refused(arguments: &[&str], parts: &[&str]) {
    let output = run(arguments);
    let message = text(&output.stderr);
    assert_eq!(output.status.code(), Some(2), "{arguments:?}: {message}");
    assert!(output.stdout.is_empty());
    assert_eq!(message.matches("error").count(), 1, "{message}");
    for part in parts {
        assert!(message.contains(part), "`{part}` is missing in:\n{message}");
    }
}

#[test]
fn wrong_values_are_refused_with_key_place_and_remedy() {
    let cases: &[(&str, &[&str])] = &[
        ("spacecraft.dry_mass=446", &["`spacecraft.dry_mass`", "unit is missing", "a mass", "480 kg"]),
        ("propulsion.thrust=1 N m", &["`propulsion.thrust`", "expected a force", "N m (a torque)"]),
        ("wheels.capacity=12 lbf", &["`wheels.capacity`", "an angular momentum", "N (a force)"]),
        ("spacecraft.dry_mass=-446 kg", &["`spacecraft.dry_mass`", "above zero"]),
        ("thrusters[A1].push=0 0 0", &["`thrusters[0].push`", "zero vector"]),
        ("thrusters[A1].plume=0 0 -1", &["plume", "together with `push`"]),
        ("spacecraft.inertia=118 142 300 kg m2", &["`spacecraft.inertia`", "sum of the other two"]),
        ("spacecraft.dry_mass=.nan", &["spacecraft.dry_mass"]),
        ("thrusters=[]", &["`thrusters`", "at least one thruster"]),
        ("wheels.axes=[{name: a, axis: 1 0 0}, {name: b, axis: 0 1 0}]", &["`wheels.axes`", "at least three wheels"]),
        ("mission.orbit={altitude: -10 km, inclination: 50 deg}", &["`mission.orbit`"]),
        ("mission.orbit={semi_major_axis: 5000 km, inclination: 50 deg}", &["`mission.orbit`", "perigee"]),
        ("mission.orbit={semi_major_axis: 9000 km, eccentricity: 1, inclination: 50 deg}", &["eccentricity", "below 1"]),
        ("propulsion.isp=215 s ± 20 %", &["`propulsion.isp`", "reaches", "truncated_normal"]),
        ("surfaces[wing].material=solar cel", &["material", "did you mean `solar cell`?"]),
        ("mission.start=2029-13-01", &["`mission.start`", "2029-04-01"]),
        ("propulsion.shortest_pulse=1 s", &["`propulsion.shortest_pulse`", "longer than the longest"]),
    ];
    for (setting, parts) in cases {
        refused(&["budget", "configs/heron.yaml", "--set", setting], &[*parts, &["command line:1:"]].concat());
    }
}

#[test]
fn wrong_files_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let file = |name: &str, text: &str| {
        let path = folder.path().join(name);
        std::fs::write(&path, text).unwrap();
        path.to_str().unwrap().to_owned()
    };
    let heron = std::fs::read_to_string(root().join("configs/heron.yaml")).unwrap();
    refused(&["budget", "configs/horen.yaml"], &["horen.yaml", "heron.yaml"]);
    refused(&["budget", &file("empty.yaml", "")], &["empty.yaml"]);
    let unknown = file("unknown.yaml", &heron.replace("  duty_cycle:", "  dutycycle:"));
    refused(&["budget", &unknown], &["unknown key `dutycycle`", "did you mean `duty_cycle`?", "unknown.yaml:"]);
    let no_wheels = heron.replace("wheels:\n", "ignored_wheels:\n");
    assert_ne!(no_wheels, heron);
    refused(&["budget", &file("keys.yaml", &no_wheels)], &["ignored_wheels"]);
}

#[test]
fn a_wrong_call_is_status_2() {
    for call in [vec![], vec!["budget"], vec!["bugdet", "configs/heron.yaml"], vec!["budget", "configs/heron.yaml", "--lifetimes", "0"]] {
        assert_eq!(run(&call).status.code(), Some(2), "{call:?}");
    }
    refused(&["unload", "configs/heron.yaml", "--momentum", "1 2 N m s"], &["--momentum", "three numbers"]);
}
