//! Where results and messages go: files, links, devices, pipes and standard error.
//!
//! What is expected follows from POSIX (`rename`, `symlink`, `mkfifo`, `/dev/null`, `/dev/full`) and from
//! docs/output.md.
#![cfg(unix)]
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::fs::{self, File, OpenOptions};
use std::os::unix::fs::{FileTypeExt, MetadataExt, PermissionsExt, symlink};
use std::path::{Path, PathBuf};
use std::process::{Output, Stdio};

use tempfile::TempDir;

const HERON: &str = concat!(env!("CARGO_MANIFEST_DIR"), "/configs/heron.yaml");

/// Runs the command with its standard output going to `to`.
fn run_to(arguments: &[&str], to: impl Into<Stdio>) -> Output {
    let command = assert_cmd::cargo::cargo_bin("couplet");
    let child = std::process::Command::new(command).args(arguments).stdout(to).stderr(Stdio::piped()).spawn().unwrap();
    child.wait_with_output().unwrap()
}

fn run(arguments: &[&str]) -> Output {
    run_to(arguments, Stdio::piped())
}

fn check_out(out: &Path) -> Output {
    run(&["check", HERON, "--out", out.to_str().unwrap()])
}

fn stderr(output: &Output) -> String {
    String::from_utf8(output.stderr.clone()).unwrap()
}

fn assert_status(output: &Output, status: i32) {
    assert_eq!(output.status.code(), Some(status), "{}", stderr(output));
}

fn folder_with(name: &str, text: &str) -> (TempDir, PathBuf) {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join(name);
    fs::write(&file, text).unwrap();
    (folder, file)
}

fn entries(folder: &TempDir) -> usize {
    fs::read_dir(folder.path()).unwrap().count()
}

/// A device like `/dev/NAME`; where one can be made, our own, so that a fault does not cost root's machine the real one.
fn device(folder: &TempDir, name: &str, minor: &str) -> PathBuf {
    let own = folder.path().join(name);
    let made = std::process::Command::new("mknod").arg(&own).args(["c", "1", minor]).stderr(Stdio::null()).status();
    let usable = made.is_ok_and(|status| status.success()) && OpenOptions::new().write(true).open(&own).is_ok();
    if usable { own } else { Path::new("/dev").join(name) }
}

/// Numbers of the devices: Linux, Documentation/admin-guide/devices.txt.
#[test]
fn a_device_stays_a_device() {
    let folder = tempfile::tempdir().unwrap();
    for (name, minor, status) in [("null", "3", 0), ("full", "7", 3)] {
        let device = device(&folder, name, minor);
        let output = check_out(&device);
        assert_status(&output, status);
        assert!(fs::symlink_metadata(&device).unwrap().file_type().is_char_device());
    }
}

#[test]
fn dev_stdout_is_standard_output() {
    let piped = check_out(Path::new("/dev/stdout"));
    assert_status(&piped, 0);
    assert_eq!(piped.stdout, run(&["check", HERON]).stdout);
    // As with `>> log`: what is there stays there.
    let (_folder, log) = folder_with("log", "before\n");
    let append = OpenOptions::new().append(true).open(&log).unwrap();
    assert_status(&run_to(&["check", HERON, "--out", "/dev/stdout"], append), 0);
    let logged = fs::read_to_string(&log).unwrap();
    assert!(logged.starts_with("before\n") && logged.len() > "before\n".len(), "{logged}");
}

#[test]
fn a_fifo_is_written_to() {
    let folder = tempfile::tempdir().unwrap();
    let fifo = folder.path().join("fifo");
    assert!(std::process::Command::new("mkfifo").arg(&fifo).status().unwrap().success());
    let reader = std::thread::spawn({
        let fifo = fifo.clone();
        move || fs::read(fifo).unwrap()
    });
    assert_status(&check_out(&fifo), 0);
    // Looked at before joining: were the FIFO replaced, the reader would wait for ever.
    assert!(fs::symlink_metadata(&fifo).unwrap().file_type().is_fifo());
    assert_eq!(reader.join().unwrap(), run(&["check", HERON]).stdout);
}

#[test]
fn a_link_stays_and_its_target_is_replaced() {
    let (folder, target) = folder_with("target.txt", "old");
    let link = folder.path().join("link.txt");
    symlink("target.txt", &link).unwrap();
    assert_status(&check_out(&link), 0);
    assert!(link.is_symlink());
    assert_eq!(fs::read(&target).unwrap(), run(&["check", HERON]).stdout);
    assert_eq!(entries(&folder), 2);

    let nowhere = folder.path().join("nowhere.txt");
    symlink("missing.txt", &nowhere).unwrap();
    let output = check_out(&nowhere);
    assert_status(&output, 3);
    assert!(stderr(&output).contains("link to nothing") && nowhere.is_symlink());
}

#[test]
fn a_replaced_file_keeps_its_permissions() {
    let (_folder, file) = folder_with("private.txt", "old");
    fs::set_permissions(&file, fs::Permissions::from_mode(0o600)).unwrap();
    assert_status(&check_out(&file), 0);
    assert_eq!(fs::metadata(&file).unwrap().mode() & 0o777, 0o600);
}

/// By its own name, over a detour, and through a link.
#[test]
fn an_input_is_never_overwritten() {
    let heron = fs::read_to_string(HERON).unwrap();
    let (folder, config) = folder_with("heron.yaml", &heron);
    let overlay = folder.path().join("overlay.yaml");
    let laid_over = "spacecraft: {dry_mass: 450 kg}\n";
    fs::write(&overlay, laid_over).unwrap();
    let link = folder.path().join("link.yaml");
    symlink(&config, &link).unwrap();
    fs::create_dir(folder.path().join("sub")).unwrap();
    let detour = folder.path().join("sub/../heron.yaml");
    for command in ["budget", "layout", "momentum", "unload", "check"] {
        for out in [&config, &detour, &link, &overlay] {
            let call = [command, config.to_str().unwrap(), "--with", overlay.to_str().unwrap(), "--out", out.to_str().unwrap()];
            let output = run(&call);
            assert_status(&output, 2);
            let message = stderr(&output);
            assert!(message.contains("would overwrite") && message.contains("name another file"), "{message}");
        }
    }
    assert!(link.is_symlink());
    assert_eq!(fs::read_to_string(&config).unwrap(), heron);
    assert_eq!(fs::read_to_string(&overlay).unwrap(), laid_over);
}

#[test]
fn a_missing_folder_is_named_as_missing() {
    let (folder, file) = folder_with("file", "");
    let out = folder.path().join("no/such/result.json");
    let output = check_out(&out);
    assert_status(&output, 3);
    let missing = format!("the folder {} does not exist", out.parent().unwrap().display());
    assert!(stderr(&output).contains(&missing), "{}", stderr(&output));

    let inside = check_out(&file.join("result.json"));
    assert_status(&inside, 3);
    assert!(stderr(&inside).contains("is a file, not a folder"), "{}", stderr(&inside));

    for folder_like in [folder.path().join("new/"), folder.path().join("n".repeat(300))] {
        assert_status(&check_out(&folder_like), 3);
    }
    assert_eq!(entries(&folder), 1);
}

/// Ten million lifetimes would take minutes: a status within the time of a test comes from before them.
#[test]
fn an_unwritable_target_is_found_before_computing() {
    let start = std::time::Instant::now();
    let output = run(&["budget", HERON, "--lifetimes", "10000000", "--out", "/proc/couplet.json"]);
    assert_status(&output, 3);
    assert!(stderr(&output).contains("cannot write"));
    assert!(start.elapsed().as_secs() < 20, "a slow machine still loads a configuration within seconds");
}

#[test]
fn a_full_device_is_status_3() {
    let full = || OpenOptions::new().write(true).open("/dev/full").unwrap();
    for call in [&["--help"][..], &["--version"], &["budget", "-h"], &["check", HERON], &["schema"]] {
        let output = run_to(call, full());
        assert_status(&output, 3);
        assert!(stderr(&output).contains("error: cannot write"), "{}", stderr(&output));
    }
}

/// Too few lifetimes to bound P99, the geomagnetic model past 2030: the page says so, and so must every other form.
#[test]
fn warnings_reach_whoever_reads_no_page() {
    let folder = tempfile::tempdir().unwrap();
    let page = folder.path().join("page.txt");
    let short = "mission.phases=[{name: only, duration: 20 d, unload: {every: 1 d}}]";
    let base = ["budget", HERON, "--set", short, "--set", "requirements=[]", "--lifetimes", "100"];
    let call = |more: &[&str]| {
        let output = run(&[&base, more].concat());
        assert_status(&output, 0);
        output
    };
    let json = call(&["--format", "json"]);
    let value: serde_json::Value = serde_json::from_slice(&json.stdout).unwrap();
    let told: Vec<String> =
        value["warnings"].as_array().unwrap().iter().map(|warning| format!("warning: {}", warning.as_str().unwrap())).collect();
    assert!(told.iter().any(|warning| warning.contains("cannot bound")));
    assert_eq!(stderr(&json).lines().collect::<Vec<_>>(), told);
    for more in [&["--format", "csv"][..], &["--out", page.to_str().unwrap()]] {
        assert_eq!(stderr(&call(more)).lines().collect::<Vec<_>>(), told, "{more:?}");
        assert_eq!(stderr(&call(&[more, &["--quiet"]].concat())), "");
    }
    assert_eq!(stderr(&call(&[])), "", "the page itself holds them");
}

/// `couplet … | head -1`.
#[test]
fn a_reader_that_has_seen_enough_is_no_fault() {
    let folder = tempfile::tempdir().unwrap();
    for call in [&["--help"][..], &["schema"]] {
        let (reader, writer) = std::io::pipe().unwrap();
        drop(reader);
        let complaints = File::create(folder.path().join("stderr")).unwrap();
        let status = std::process::Command::new(assert_cmd::cargo::cargo_bin("couplet"))
            .args(call)
            .stdout(writer)
            .stderr(complaints)
            .status()
            .unwrap();
        assert_eq!(status.code(), Some(0), "{call:?}");
    }
}
