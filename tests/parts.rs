//! Runs in parts, runs that are stopped or killed, and exports, from outside.
//!
//! What is expected of signals, of a full disk and of `ulimit -f` follows from POSIX; what Parquet holds, from the format's
//! own reader.
#![cfg(unix)]
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::fs;
use std::path::Path;
use std::process::{Child, Command, Output, Stdio};
use std::time::{Duration, Instant};

use parquet::file::reader::{FileReader, SerializedFileReader};
use parquet::record::RowAccessor;
use serde_json::Value;
use tempfile::TempDir;

const HERON: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/configs/heron.yaml");
/// A short mission, so that most of the time goes into lifetimes.
const SHORT: &str = "mission.phases=[{name: only, duration: 20 d, unload: {every: 1 d}}]";
const LIFETIMES: &str = "700";

fn couplet(folder: &Path) -> Command {
    let mut command = Command::new(assert_cmd::cargo::cargo_bin("couplet"));
    command.current_dir(folder).stdout(Stdio::piped()).stderr(Stdio::piped());
    command
}

fn budget(folder: &Path, more: &[&str]) -> Output {
    couplet(folder).args(["budget", HERON, "--set", SHORT, "--lifetimes", LIFETIMES, "--quiet"]).args(more).output().unwrap()
}

fn join(folder: &Path, parts: &[String], more: &[&str]) -> Output {
    couplet(folder)
        .args(["join", HERON])
        .args(parts)
        .args(["--set", SHORT, "--lifetimes", LIFETIMES, "--quiet"])
        .args(more)
        .output()
        .unwrap()
}

fn ok(output: &Output) -> String {
    assert!(matches!(output.status.code(), Some(0 | 1)), "{}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout.clone()).unwrap()
}

fn refused(output: &Output, status: i32, words: &[&str]) {
    let text = String::from_utf8_lossy(&output.stderr);
    assert_eq!(output.status.code(), Some(status), "{text}");
    for word in words {
        assert!(text.contains(word), "`{word}` is missing in {text}");
    }
}

fn parts(folder: &Path, of: usize) -> Vec<String> {
    (1..=of)
        .map(|k| {
            let name = format!("{k}-{of}.part");
            ok(&budget(folder, &["--part", &format!("{k}/{of}"), "--out", &name]));
            name
        })
        .collect()
}

/// One run, with one thread and with two, and seven parts in any order give the same bytes.
#[test]
fn parts_joined_are_one_run() {
    let folder = tempfile::tempdir().unwrap();
    let whole = ok(&budget(folder.path(), &["--format", "json", "--threads", "1"]));
    assert_eq!(whole, ok(&budget(folder.path(), &["--format", "json", "--threads", "2"])));
    let mut seven = parts(folder.path(), 7);
    seven.reverse();
    assert_eq!(whole, ok(&join(folder.path(), &seven, &["--format", "json"])));
    // More parts than blocks of lifetimes: some are empty.
    let many = parts(folder.path(), 13);
    assert_eq!(whole, ok(&join(folder.path(), &many, &["--format", "json"])));
}

/// Latin hypercubes in parts too: a lifetime's place in its cube depends on nothing else.
#[test]
fn hypercubes_in_parts_are_one_run() {
    let folder = tempfile::tempdir().unwrap();
    let cubes = ["--set", "budget.sampling=latin_hypercube", "--set", "budget.replicates=7"];
    let whole = ok(&budget(folder.path(), &[&cubes[..], &["--format", "json"]].concat()));
    let list: Vec<String> = (1..=3).map(|k| format!("{k}.part")).collect();
    for (k, name) in list.iter().enumerate() {
        let part = format!("{}/3", k + 1);
        ok(&budget(folder.path(), &[&cubes[..], &["--part", &part, "--out", name]].concat()));
    }
    assert_eq!(whole, ok(&join(folder.path(), &list, &[&cubes[..], &["--format", "json"]].concat())));
    let drawn: Value = serde_json::from_str(&whole).unwrap();
    assert_eq!(drawn["drawn"]["replicates"], 7);
    assert_eq!(drawn["drawn"]["limits"], "normal, from replicates");
}

#[test]
fn parts_that_do_not_belong_together_are_refused() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path();
    let three = parts(path, 3);
    refused(&join(path, &three[1..], &[]), 2, &["missing: 1", "--part 1/3"]);
    refused(&join(path, &[three.clone(), vec![three[1].clone()]].concat(), &[]), 2, &["both part 2", "once"]);
    refused(&join(path, &three, &["--seed", "2"]), 2, &["another seed: 1, here 2"]);
    refused(&join(path, &three, &["--set", "tank.loaded=30 kg"]), 2, &["another configuration", "overlays"]);
    let two = parts(path, 2);
    refused(&join(path, &[three[0].clone(), two[1].clone()], &[]), 2, &["one of 3 parts", "same division"]);
    let other = couplet(path).args(["join", HERON]).args(&three).args(["--set", SHORT, "--lifetimes", "701"]).output().unwrap();
    refused(&other, 2, &["another number of lifetimes: 700, here 701"]);
    let bytes = fs::read(path.join(&three[0])).unwrap();
    fs::write(path.join("short.part"), &bytes[..bytes.len() - 100]).unwrap();
    refused(&join(path, &["short.part".to_owned(), three[1].clone(), three[2].clone()], &[]), 2, &["not whole"]);
    let mut flipped = bytes.clone();
    let middle = flipped.len() / 2;
    flipped[middle] ^= 1;
    fs::write(path.join("flipped.part"), &flipped).unwrap();
    refused(&join(path, &["flipped.part".to_owned(), three[1].clone(), three[2].clone()], &[]), 2, &["damaged", "checksum"]);
    let text = String::from_utf8_lossy(&bytes[..600]).replacen("\"version\":\"", "\"version\":\"9.", 1);
    let old = [text.as_bytes(), &bytes[600..]].concat();
    fs::write(path.join("old.part"), old).unwrap();
    refused(&join(path, &["old.part".to_owned()], &[]), 2, &["another version"]);
    refused(&join(path, &[HERON.to_owned()], &[]), 2, &["is no part of a run"]);
    refused(&join(path, &["nowhere.part".to_owned()], &[]), 2, &["cannot be read"]);
    for (call, word) in [(vec!["--part", "4/3"], "K/N"), (vec!["--part", "1/2"], "--out"), (vec!["--part", "half", "--out", "x"], "K/N")] {
        refused(&budget(path, &call), 2, &[word, "help"]);
    }
    refused(&budget(path, &["--part", "1/2", "--out", "x", "--precision", "1 %"]), 2, &["precision"]);
    refused(&budget(path, &["--lifetimes-out", "x.xlsx"]), 2, &[".parquet or .csv"]);
}

/// One row a lifetime: the same totals in CSV, Parquet and the statistics.
#[test]
fn lifetimes_are_exported() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path();
    let whole: Value = serde_json::from_str(&ok(&budget(path, &["--format", "json", "--lifetimes-out", "all.csv"]))).unwrap();
    ok(&budget(path, &["--lifetimes-out", "all.parquet"]));
    let mut reader = csv::Reader::from_path(path.join("all.csv")).unwrap();
    let heading = reader.headers().unwrap().clone();
    let place = |name: &str| heading.iter().position(|column| column == name).unwrap_or_else(|| panic!("{name}"));
    let (total, dipole, lifetime) = (place("attitude_total_kg"), place("spacecraft_residual_dipole_x_A_m2"), place("lifetime"));
    let rows: Vec<csv::StringRecord> = reader.records().map(Result::unwrap).collect();
    assert_eq!(rows.len(), 700);
    let column = |k: usize| rows.iter().map(|row| row[k].parse::<f64>().unwrap()).collect::<Vec<_>>();
    let mean = column(total).iter().sum::<f64>() / 700.0;
    let told = whole["attitude_total_kg"]["mean"].as_f64().unwrap();
    assert!((mean - told).abs() < 1e-12 * told);
    assert!(column(lifetime).iter().enumerate().all(|(k, n)| (k as f64 - n).abs() < 1e-9));
    let dipoles = column(dipole);
    // 0.6 ± 0.25: the mean of 700 within four standard errors.
    assert!((dipoles.iter().sum::<f64>() / 700.0 - 0.6).abs() < 4.0 * 0.25 / 700.0_f64.sqrt());
    let parquet = SerializedFileReader::new(fs::File::open(path.join("all.parquet")).unwrap()).unwrap();
    let names: Vec<String> = parquet.metadata().file_metadata().schema().get_fields().iter().map(|f| f.name().to_owned()).collect();
    assert_eq!(names, heading.iter().map(str::to_owned).collect::<Vec<_>>());
    for (record, row) in parquet.get_row_iter(None).unwrap().zip(&rows) {
        let record = record.unwrap();
        assert_eq!(record.get_long(lifetime).unwrap().to_string(), row[lifetime]);
        for k in [total, dipole] {
            assert_eq!(record.get_double(k).unwrap().to_bits(), row[k].parse::<f64>().unwrap().to_bits());
        }
    }
}

/// A long run that writes to a file which is there already.
fn long(folder: &TempDir) -> Child {
    fs::write(folder.path().join("result.json"), "old").unwrap();
    let mut command = couplet(folder.path());
    command.args(["budget", HERON, "--set", SHORT, "--lifetimes", "100000000", "--format", "json", "--out", "result.json"]);
    command.spawn().unwrap()
}

fn signal(child: &Child, name: &str) {
    let sent = Command::new("kill").args([&format!("-{name}"), &child.id().to_string()]).status().unwrap();
    assert!(sent.success());
}

fn ended(mut child: Child) -> Option<i32> {
    let begun = Instant::now();
    while begun.elapsed() < Duration::from_mins(1) {
        if let Some(status) = child.try_wait().unwrap() {
            return status.code();
        }
        std::thread::sleep(Duration::from_millis(20));
    }
    child.kill().unwrap();
    panic!("it did not end within a minute");
}

fn result(folder: &TempDir) -> String {
    fs::read_to_string(folder.path().join("result.json")).unwrap()
}

/// SIGINT and SIGTERM while lifetimes are flown: the file is whole and says that it is not all; SIGKILL: the old one is left.
#[test]
fn a_run_that_is_stopped_reports_what_is_complete() {
    for name in ["INT", "TERM"] {
        let folder = tempfile::tempdir().unwrap();
        let child = long(&folder);
        std::thread::sleep(Duration::from_secs(6));
        signal(&child, name);
        assert_eq!(ended(child), Some(130), "SIG{name}");
        let told: Value = serde_json::from_str(&result(&folder)).unwrap();
        assert_eq!(told["drawn"]["ended_by"], "stopped_by_user");
        let flown = told["drawn"]["lifetimes"].as_u64().unwrap();
        assert!(flown > 0 && flown < 100_000_000 && told["provenance"]["lifetimes"] == flown, "{flown}");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1, "nothing else is left");
    }
    let folder = tempfile::tempdir().unwrap();
    let child = long(&folder);
    std::thread::sleep(Duration::from_secs(3));
    signal(&child, "KILL");
    assert_eq!(ended(child), None);
    assert_eq!(result(&folder), "old");
    assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1, "nothing else is left");
}

/// A file that may not grow beyond 512 bytes stands for a disk that is full: status 3, and the old file is left.
#[test]
fn a_full_disk_leaves_the_old_file() {
    let folder = tempfile::tempdir().unwrap();
    fs::write(folder.path().join("result.json"), "old").unwrap();
    let program = assert_cmd::cargo::cargo_bin("couplet");
    for out in ["--out result.json --format json", "--out result.json --part 1/1"] {
        let call = format!(
            "trap '' XFSZ; ulimit -f 1; exec '{}' budget '{HERON}' --set '{SHORT}' --lifetimes 64 --quiet {out}",
            program.display()
        );
        let output = Command::new("sh").arg("-c").arg(call).current_dir(folder.path()).output().unwrap();
        refused(&output, 3, &["cannot write"]);
        assert_eq!(result(&folder), "old");
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 1, "nothing else is left");
    }
    // The lifetimes themselves do not fit: the temporary file.
    let call = format!("trap '' XFSZ; ulimit -f 1; exec '{}' budget '{HERON}' --set '{SHORT}' --lifetimes 5000 --quiet", program.display());
    let output = Command::new("sh").arg("-c").arg(call).current_dir(folder.path()).output().unwrap();
    refused(&output, 3, &["lifetimes could not be flown"]);
}
