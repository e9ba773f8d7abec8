//! Every file of `tests/faults` has the faults that its name says, and this is what the user reads about them.
//!
//! A file lies over `tests/faults/base.yaml`, which has none; comments at its start say otherwise:
//! `# alone` (nothing under it), `# faults: 3` (not one), `# set: KEY=VALUE` (a flag as well).
//! `COUPLET_UPDATE=1 cargo test --test faults` writes the messages anew: read what has changed.

#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::path::{Path, PathBuf};

use couplet::config::{Document, read, render_all, sort};
use couplet::mission::Scenario;

const FOLDER: &str = "tests/faults";

/// One file and what its first comments say.
struct Case {
    name: String,
    alone: bool,
    faults: usize,
    settings: Vec<String>,
}

fn case(path: &Path) -> Case {
    let bytes = std::fs::read(path).unwrap();
    let text = String::from_utf8_lossy(&bytes);
    let comments: Vec<&str> = text.lines().map_while(|line| line.strip_prefix("# ")).collect();
    let said = |word: &'static str| comments.iter().filter_map(move |comment| comment.strip_prefix(word));
    Case {
        name: path.file_stem().unwrap().to_str().unwrap().to_owned(),
        alone: comments.contains(&"alone"),
        faults: said("faults: ").next().map_or(1, |count| count.parse().unwrap()),
        settings: said("set: ").map(str::to_owned).collect(),
    }
}

fn cases() -> Vec<Case> {
    let entries = std::fs::read_dir(FOLDER).unwrap().map(|entry| entry.unwrap().path());
    let mut files: Vec<PathBuf> = entries.filter(|path| path.extension().is_some_and(|end| end == "yaml")).collect();
    files.sort();
    files.iter().filter(|path| !path.ends_with("base.yaml")).map(|path| case(path)).collect()
}

/// How many faults the files have, where the first lies and what is said about all of them, as the command says it.
fn refused(case: &Case) -> Option<(usize, String)> {
    let file = PathBuf::from(format!("{FOLDER}/{}.yaml", case.name));
    let base = PathBuf::from(format!("{FOLDER}/base.yaml"));
    let (main, overlays) = if case.alone { (file, vec![]) } else { (base, vec![file]) };
    let document = match Document::load(&main, &overlays, &case.settings) {
        Err(faults) => return Some((faults.len(), render_all(&faults, None, false))),
        Ok(document) => document,
    };
    let found = read(&document).and_then(|spec| Scenario::in_folder(&spec, Path::new(FOLDER)).map(drop));
    found.err().map(|mut faults| {
        sort(&mut faults, Some(&document));
        (faults.len(), render_all(&faults, Some(&document), false))
    })
}

/// Each message has a title, one place or more as `--> file:line:column`, and a remedy.
fn complaints(name: &str, count: usize, shown: &str) -> Vec<String> {
    let mut complaints = Vec::new();
    let messages: Vec<&str> = shown.split("\n\n").collect();
    if messages.len() != count {
        complaints.push(format!("{name}: {count} faults, but {} messages", messages.len()));
    }
    for message in messages {
        let arrow = message.lines().find_map(|line| line.trim_start().strip_prefix("--> "));
        let place = arrow.unwrap_or_default().rsplit(':').take(2).all(|number| number.parse::<usize>().is_ok_and(|n| n > 0));
        let complaint = match () {
            () if !message.starts_with("error: ") => "is not headed by `error`",
            () if !place => "names no line",
            () if !message.contains("help: ") || message.trim_end().ends_with("help:") => "names no remedy",
            () => continue,
        };
        complaints.push(format!("{name}: {complaint}:\n{message}"));
    }
    complaints
}

#[test]
fn the_base_has_no_fault() {
    let document = Document::load(&PathBuf::from(format!("{FOLDER}/base.yaml")), &[] as &[&str], &[] as &[&str]).unwrap();
    let spec = read(&document).unwrap();
    assert!(Scenario::in_folder(&spec, Path::new(FOLDER)).is_ok());
}

#[test]
fn every_fault_is_told_as_the_snapshot_says() {
    let update = std::env::var_os("COUPLET_UPDATE").is_some();
    let mut complaints_found = Vec::new();
    let cases = cases();
    for case in &cases {
        let Some((count, shown)) = refused(case) else {
            complaints_found.push(format!("{}: is accepted", case.name));
            continue;
        };
        if count != case.faults {
            complaints_found.push(format!("{}: expected {} faults, got {count}:\n{shown}", case.name, case.faults));
        }
        complaints_found.extend(complaints(&case.name, count, &shown));
        let snapshot = format!("{FOLDER}/{}.txt", case.name);
        if update {
            std::fs::write(&snapshot, &shown).unwrap();
        } else if std::fs::read_to_string(&snapshot).ok().as_deref() != Some(&shown) {
            complaints_found.push(format!("{}: differs from {snapshot}; it says\n{shown}", case.name));
        }
    }
    assert!(complaints_found.is_empty(), "{}", complaints_found.join("\n"));
    let single = cases.iter().filter(|case| case.faults == 1).count();
    assert!(single >= 80 && cases.len() - single >= 10, "{single} of {}", cases.len());
}

/// A snapshot without its file tests nothing.
#[test]
fn every_snapshot_has_its_file() {
    for entry in std::fs::read_dir(FOLDER).unwrap() {
        let path = entry.unwrap().path();
        assert!(path.with_extension("yaml").exists(), "{}", path.display());
    }
}
