//! The documents agree with the program.

#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::path::{Path, PathBuf};
use std::process::Command;

fn path(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join(name)
}

fn document(name: &str) -> String {
    std::fs::read_to_string(path(name)).unwrap()
}

const BEGIN: &str = "<!-- made from the schema: COUPLET_UPDATE=1 cargo test --test documents -->\n";
const END: &str = "<!-- end -->\n";

/// docs/config.md carries the reference that the types give; `COUPLET_UPDATE=1` writes it.
#[test]
fn the_reference_of_keys_is_up_to_date() {
    let text = document("docs/config.md");
    let (before, rest) = text.split_once(BEGIN).unwrap();
    let (written, after) = rest.split_once(END).unwrap();
    let made = couplet::config::reference();
    if std::env::var_os("COUPLET_UPDATE").is_some() {
        std::fs::write(path("docs/config.md"), format!("{before}{BEGIN}{made}{END}{after}")).unwrap();
        return;
    }
    assert!(written == made, "docs/config.md is out of date: COUPLET_UPDATE=1 cargo test --test documents");
}

fn couplet(arguments: &[&str]) -> (String, Option<i32>) {
    let output = Command::new(env!("CARGO_BIN_EXE_couplet")).current_dir(path("")).args(arguments).output().unwrap();
    (String::from_utf8(output.stdout).unwrap(), output.status.code())
}

/// Every console block of the README is what the command prints, up to a line `…`.
#[test]
fn the_readme_shows_what_the_command_prints() {
    let readme = document("README.md");
    let mut blocks = 0;
    for block in readme.split("```console\n$ ").skip(1) {
        let (block, _) = block.split_once("```").unwrap();
        let (command, expected) = block.split_once('\n').unwrap();
        let arguments = command.strip_prefix("couplet ").or_else(|| command.strip_prefix("cargo run --release -- ")).unwrap();
        let (printed, status) = couplet(&arguments.split_whitespace().collect::<Vec<_>>());
        assert_eq!(status, Some(0), "{command}");
        match expected.split_once("…\n") {
            Some((head, "")) => assert!(printed.starts_with(head), "{command} prints\n{printed}"),
            _ => assert_eq!(printed, expected, "{command}"),
        }
        blocks += 1;
    }
    assert!(blocks >= 1);
}

fn keys(value: &serde_json::Value, found: &mut Vec<String>) {
    match value {
        serde_json::Value::Object(map) => {
            for (key, value) in map {
                found.push(key.clone());
                keys(value, found);
            }
        }
        serde_json::Value::Array(list) => list.iter().for_each(|value| keys(value, found)),
        _ => {}
    }
}

/// docs/output.md names every key that a budget and an unload write.
#[test]
fn every_key_of_the_output_is_described() {
    let text = document("docs/output.md");
    for command in ["budget", "layout", "momentum", "unload"] {
        let (json, _) = couplet(&[command, "configs/heron.yaml", "--format", "json", "--lifetimes", "64", "--quiet"]);
        let mut found = Vec::new();
        keys(&serde_json::from_str(&json).unwrap(), &mut found);
        found.sort();
        found.dedup();
        let missing: Vec<_> = found.iter().filter(|key| !text.contains(&format!("`{key}`"))).collect();
        assert!(missing.is_empty(), "{command}: {missing:?}");
    }
}
