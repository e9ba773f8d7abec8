//! Files made to break a reader: each ends in a message, within 200 MB of memory.
#![cfg(unix)]
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::fmt::Write as _;
use std::fs;
use std::process::Command;

/// Nesting, alias bombs, long scalars, many keys, a file of 10 MB, tags, tabs, marks and bytes that are no text; and the short
/// forms and samples that grow.
fn files() -> Vec<(&'static str, Vec<u8>)> {
    let mut bomb = "a: &a [x, x, x, x, x, x, x, x, x, x]\n".to_owned();
    for (name, before) in ('b'..='j').zip('a'..='i') {
        let aliases = vec![format!("*{before}"); 10].join(", ");
        let _ = writeln!(bomb, "{name}: &{name} [{aliases}]");
    }
    let (mut copies, mut keys) = ("thrusters:\n".to_owned(), String::new());
    for k in 0..40_000 {
        let _ = writeln!(copies, "- {{name: T{k}, position: 0 0 1 m, push: 0 0 1, copies: {{mirror: [x, y, z]}}}}");
    }
    for k in 0..200_000 {
        let _ = writeln!(keys, "k{}: 1", k % 1000);
    }
    let text = [
        ("brackets", "[".repeat(100_000) + &"]".repeat(100_000)),
        ("maps", format!("a: {}1{}", "{a: ".repeat(50_000), "}".repeat(50_000))),
        ("bomb", bomb),
        ("scalar", format!("a: \"{}\"\n", "x".repeat(3_000_000))),
        ("ten-megabytes", "a: 1\n".repeat(2_000_000)),
        ("keys", keys),
        ("tag", "!!python/object:os.system a: 1\n".to_owned()),
        ("tab", "spacecraft:\n\tname: x\n".to_owned()),
        ("sample", format!("spacecraft: {{dry_mass: {{empirical: {{values: [{}], unit: kg}}}}}}\n", vec!["1"; 900_000].join(","))),
        ("copies", copies),
        ("count", "wheels: {array: {pyramid: {count: 100000000000}}}\n".to_owned()),
    ];
    let mut all: Vec<(&str, Vec<u8>)> = text.into_iter().map(|(name, text)| (name, text.into_bytes())).collect();
    all.push(("mark", b"\xEF\xBB\xBFspacecraft: {}\r\ntank: {}\r\n".to_vec()));
    all.push(("bytes", b"spacecraft: {name: \"\xFF\xFE\"}\n".to_vec()));
    all.push(("nothing", Vec::new()));
    all
}

#[test]
fn hostile_files_end_in_a_message() {
    let folder = tempfile::tempdir().unwrap();
    let program = assert_cmd::cargo::cargo_bin("couplet");
    for (name, bytes) in files() {
        let file = folder.path().join(format!("{name}.yaml"));
        fs::write(&file, bytes).unwrap();
        // The limit is on address space, of which the program and its libraries take some.
        let call = format!("ulimit -v 300000; exec '{}' check '{}'", program.display(), file.display());
        let output = Command::new("sh").arg("-c").arg(call).output().unwrap();
        let told = String::from_utf8_lossy(&output.stderr);
        assert_eq!(output.status.code(), Some(2), "{name}: {}", told.chars().take(600).collect::<String>());
        assert!(told.contains("error: ") && told.contains("help: "), "{name}: {}", told.chars().take(600).collect::<String>());
    }
}
