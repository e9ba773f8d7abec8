//! Starters, short forms, assumptions, resolved configurations and second looks, from outside; and every command of the documentation.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Output};

use serde_json::Value;

const KINDS: [&str; 5] = ["low-orbit", "geostationary", "elliptic", "deep-space", "cold-gas"];

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

fn couplet(folder: &Path, arguments: &[&str]) -> Output {
    Command::new(assert_cmd::cargo::cargo_bin("couplet")).current_dir(folder).args(arguments).output().unwrap()
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8_lossy(bytes).into_owned()
}

fn ok(output: &Output) -> String {
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    text(&output.stdout)
}

fn json(output: &Output) -> Value {
    serde_json::from_slice(&output.stdout).unwrap()
}

/// Every starter runs as it is, with every requirement met and nothing to be warned of, and is never overwritten.
#[test]
fn starters_run_as_they_are() {
    let folder = tempfile::tempdir().unwrap();
    for kind in KINDS {
        ok(&couplet(folder.path(), &["new", kind]));
        let file = format!("{kind}.yaml");
        let before = fs::read_to_string(folder.path().join(&file)).unwrap();
        assert!(before.starts_with("# yaml-language-server: $schema=couplet.schema.json\n"), "{kind}");
        let again = couplet(folder.path(), &["new", kind]);
        assert_eq!(again.status.code(), Some(2));
        assert!(text(&again.stderr).contains("nothing is overwritten"));
        assert_eq!(fs::read_to_string(folder.path().join(&file)).unwrap(), before);
        assert!(ok(&couplet(folder.path(), &["check", &file])).contains("in order"));
        let budget = couplet(folder.path(), &["budget", &file, "--lifetimes", "300", "--format", "json"]);
        assert_eq!(budget.status.code(), Some(0), "{kind}: {}", text(&budget.stderr));
        assert_eq!(text(&budget.stderr), "", "{kind} warns of nothing");
        assert_eq!(ok(&couplet(folder.path(), &["new", kind, "-"])), before);
    }
    for call in [vec!["new"], vec!["new", "low-obit"]] {
        let refused = couplet(folder.path(), &call);
        assert_eq!(refused.status.code(), Some(2));
        assert!(KINDS.iter().all(|kind| text(&refused.stderr).contains(kind)));
    }
}

/// What `--resolved` prints is a configuration that gives the same results, for starters and demos, with overlays, assumptions and
/// settings in it; only the names of files in the provenance differ.
#[test]
fn resolved_configurations_give_the_same_results() {
    let folder = tempfile::tempdir().unwrap();
    for name in ["heron", "skua", "dunlin"] {
        fs::copy(root().join(format!("configs/{name}.yaml")), folder.path().join(format!("{name}.yaml"))).unwrap();
    }
    ok(&couplet(folder.path(), &["new", "low-orbit"]));
    fs::write(folder.path().join("rates.csv"), "rate,flow\n1,10\n2,20\n3,45\n").unwrap();
    let overlay = "tank: {leakage: {empirical: {file: rates.csv, column: flow, unit: g/yr}}}\nspacecraft: {name: \"a: b # c\"}\n";
    fs::write(folder.path().join("over.yaml"), overlay).unwrap();
    for (file, more) in [
        ("heron.yaml", vec!["--with", "over.yaml", "--set", "tank.loaded=30 kg"]),
        ("skua.yaml", vec![]),
        ("dunlin.yaml", vec![]),
        ("low-orbit.yaml", vec!["--assume", "active Sun", "--assume", "strong dipole", "--set", "wheels.reserve=0.5 N m s"]),
    ] {
        let resolved = ok(&couplet(folder.path(), &[&["check", file, "--resolved"][..], &more].concat()));
        fs::write(folder.path().join("resolved.yaml"), &resolved).unwrap();
        let run = |file: &str, more: &[&str]| {
            let mut told =
                json(&couplet(folder.path(), &[&["budget", file, "--lifetimes", "100", "--format", "json", "--quiet"][..], more].concat()));
            for key in ["config", "overlays", "assumptions", "settings"] {
                told["provenance"].as_object_mut().unwrap().remove(key);
            }
            told.to_string()
        };
        assert_eq!(run(file, &more), run("resolved.yaml", &[]), "{file}");
        let page = |file: &str, more: &[&str]| ok(&couplet(folder.path(), &[&["momentum", file][..], more].concat()));
        // But for the last lines, which say where it came from.
        let body = |text: String| text.rsplit_once("\nFrom ").map(|(body, _)| body.to_owned()).unwrap();
        assert_eq!(body(page(file, &more)), body(page("resolved.yaml", &[])), "{file}");
        // Resolved once more it is itself, but for where values came from.
        let again = ok(&couplet(folder.path(), &["check", "resolved.yaml", "--resolved"]));
        let bare =
            |text: &str| text.lines().map(|line| line.rsplit_once("   # ").map_or(line, |(value, _)| value).to_owned()).collect::<Vec<_>>();
        assert_eq!(bare(&resolved), bare(&again), "{file}");
    }
    let resolved = ok(&couplet(folder.path(), &["check", "heron.yaml", "--resolved", "--with", "over.yaml", "--set", "tank.loaded=30 kg"]));
    for origin in
        ["loaded: 30 kg   # --set tank.loaded", "values: [10.0, 20.0, 45.0]   # over.yaml:1", "capacity: 12 N m s   # heron.yaml:"]
    {
        assert!(resolved.contains(origin), "`{origin}` is missing in {resolved}");
    }
}

/// Short forms against what they stand for, by hand.
#[test]
fn short_forms_are_written_out() {
    let folder = tempfile::tempdir().unwrap();
    ok(&couplet(folder.path(), &["new", "deep-space"]));
    let resolved = |more: &[&str]| ok(&couplet(folder.path(), &[&["check", "deep-space.yaml", "--resolved"][..], more].concat()));
    let text = resolved(&[]);
    let value = |name: &str, key: &str| -> Vec<f64> {
        let lines: Vec<&str> = text.lines().collect();
        let place = lines.iter().position(|line| line.contains(&format!("name: {name}  "))).unwrap_or_else(|| panic!("{name}"));
        let line = lines[place..].iter().find_map(|line| line.trim().strip_prefix(&format!("{key}: "))).unwrap();
        line.split_whitespace().map_while(|word| word.parse().ok()).collect()
    };
    let near = |a: Vec<f64>, b: [f64; 3]| assert!(a.iter().zip(b).all(|(a, b)| (a - b).abs() < 1e-12), "{a:?} {b:?}");
    near(value("L1", "position"), [0.8, 0.0, -0.6]);
    near(value("L2", "position"), [0.0, 0.8, -0.6]);
    near(value("L2", "push"), [-0.4, 0.0, 1.0]);
    near(value("L3", "push"), [0.0, -0.4, 1.0]);
    // Four wheels whose cosine to the axis is √(1/3).
    near(value("W1", "axis"), [(2.0_f64 / 3.0).sqrt(), 0.0, (1.0_f64 / 3.0).sqrt()]);
    near(value("W2", "axis"), [0.0, (2.0_f64 / 3.0).sqrt(), (1.0_f64 / 3.0).sqrt()]);
    let skew = resolved(&["--set", "wheels.array=orthogonal_and_skew"]);
    assert!(skew.contains("axis: 1 1 1") && skew.contains("name: W4"));
    for (setting, words) in [
        ("wheels.array=tetrahedron", "no array of wheels"),
        ("wheels.axes=[{name: W1, axis: 1 0 0}]", "together with `array`"),
        ("thrusters[L].copies={fold: 1}", "whole number from 2"),
        ("thrusters[L].copies={mirror: w}", "is no axis"),
        ("thrusters[L].copies={folds: 4}", "did you mean `fold`"),
    ] {
        let refused = couplet(folder.path(), &["check", "deep-space.yaml", "--set", setting]);
        assert_eq!(refused.status.code(), Some(2), "{setting}");
        assert!(super_text(&refused).contains(words), "{setting}: {}", super_text(&refused));
    }
}

fn super_text(output: &Output) -> String {
    text(&output.stderr)
}

/// Sets of assumptions by name; a wrong name is told the right one, and a set with a fault is found without being chosen.
#[test]
fn assumptions_are_chosen_by_name() {
    let folder = tempfile::tempdir().unwrap();
    ok(&couplet(folder.path(), &["new", "low-orbit"]));
    let told = json(&couplet(folder.path(), &["check", "low-orbit.yaml", "--format", "json", "--assume", "active Sun"]));
    assert_eq!(told["assumptions"], serde_json::json!(["active Sun", "strong dipole"]));
    assert_eq!(told["provenance"]["assumptions"], serde_json::json!(["active Sun"]));
    let refused = couplet(folder.path(), &["check", "low-orbit.yaml", "--assume", "active sun"]);
    assert_eq!(refused.status.code(), Some(2));
    assert!(super_text(&refused).contains("did you mean `active Sun`"));
    let setting = "assumptions.broken={wheels: {capacitie: 1 N m s}}";
    fs::write(folder.path().join("broken.yaml"), "assumptions: {broken: {wheels: {capacitie: 1 N m s}}}\n").unwrap();
    let refused = couplet(folder.path(), &["check", "low-orbit.yaml", "--with", "broken.yaml"]);
    assert_eq!(refused.status.code(), Some(2), "{setting}");
    assert!(super_text(&refused).contains("with the assumptions `broken`") && super_text(&refused).contains("broken.yaml:1"));
}

/// A slip of a unit is told, with its name and line, and can be silenced.
#[test]
fn unlikely_values_are_told() {
    let heron = root().join("configs/heron.yaml");
    let check = |settings: &[&str]| {
        let flags: Vec<&str> = settings.iter().flat_map(|setting| ["--set", setting]).collect();
        couplet(root(), &[&["check", heron.to_str().unwrap(), "--format", "json"][..], &flags].concat())
    };
    for (setting, name) in [
        ("spacecraft.inertia=0.2 0.2 0.2 kg m2", "inertia-small"),
        ("spacecraft.inertia=118000 142000 96000 kg m2", "inertia-large"),
        ("propulsion.thrust=1 kN", "thrust"),
        ("propulsion.isp=2 s", "specific-impulse"),
        ("wheels.torque=100 N m", "wheel-speed-up"),
        ("spacecraft.residual_dipole=600 300 400 A m2", "dipole"),
    ] {
        let both = [setting, "spacecraft.products_of_inertia=0 0 0 kg m2"];
        let told = json(&check(&both));
        let faults = told["faults"].as_array().unwrap();
        assert_eq!(faults.len(), 1, "{setting}: {told:#}");
        assert_eq!((&faults[0]["name"], &faults[0]["severity"]), (&name.into(), &"warning".into()));
        let quiet = json(&check(&[both[0], both[1], &format!("silence=[{name}]")]));
        assert_eq!(quiet["faults"], serde_json::json!([]), "{name}");
    }
    assert_eq!(json(&check(&[]))["faults"], serde_json::json!([]));
    let wrong = check(&["silence=[inertia-smal]"]);
    assert_eq!(wrong.status.code(), Some(2));
    assert_eq!(json(&wrong)["faults"][0]["help"], "did you mean `inertia-small`?");
}

/// Faults for programs: the document goes to standard output of `check`, and to standard error of other commands.
#[test]
fn faults_are_told_to_programs() {
    let refused = couplet(root(), &["check", "configs/heron.yaml", "--format", "json", "--set", "tank.loaded=3 N", "--set", "tank.x=1"]);
    assert_eq!((refused.status.code(), text(&refused.stderr)), (Some(2), String::new()));
    let faults = json(&refused)["faults"].clone();
    assert_eq!(faults.as_array().unwrap().len(), 2);
    assert_eq!(faults[0]["file"], "command line");
    assert!(faults[0]["line"] == 1 && faults[0]["help"].is_string() && faults[0]["key"] == "tank.loaded", "{faults:#}");
    let other = couplet(root(), &["budget", "configs/heron.yaml", "--format", "json", "--set", "tank.loaded=3 N"]);
    assert_eq!(other.status.code(), Some(2));
    let told: Value = serde_json::from_slice(&other.stderr).unwrap();
    assert_eq!(told["faults"][0]["column"], 21);
}

/// Completions for every shell and a manual page for every command.
#[test]
fn completions_and_manual_pages() {
    let folder = tempfile::tempdir().unwrap();
    for shell in ["bash", "zsh", "fish", "elvish", "powershell"] {
        assert!(ok(&couplet(folder.path(), &["completions", shell])).contains("budget"), "{shell}");
    }
    ok(&couplet(folder.path(), &["man", "--dir", "."]));
    for command in ["budget", "compare", "sweep", "join", "layout", "momentum", "unload", "check", "new", "schema", "completions", "man"] {
        let page = fs::read_to_string(folder.path().join(format!("couplet-{command}.1"))).unwrap();
        assert!(page.contains(".SH SYNOPSIS") && page.contains(command), "{command}");
    }
    assert!(ok(&couplet(folder.path(), &["man"])).contains("couplet"));
}

/// Commands of the README and of docs/, from top to bottom in a clean folder.
#[test]
fn every_command_of_the_documentation_runs() {
    let mut count = 0;
    let mut files = vec![PathBuf::from("README.md")];
    files.extend(fs::read_dir(root().join("docs")).unwrap().map(|entry| Path::new("docs").join(entry.unwrap().file_name())));
    files.sort();
    for file in files {
        let folder = tempfile::tempdir().unwrap();
        fs::create_dir_all(folder.path().join("configs")).unwrap();
        for name in ["heron", "petrel", "skua", "ternlet", "dunlin"] {
            fs::copy(root().join(format!("configs/{name}.yaml")), folder.path().join(format!("configs/{name}.yaml"))).unwrap();
        }
        fs::write(folder.path().join("worst-case.yaml"), "spacecraft: {residual_dipole: 1 1 1 A m2}\n").unwrap();
        let _ = couplet(folder.path(), &["new", "low-orbit"]);
        for command in commands(&fs::read_to_string(root().join(&file)).unwrap()) {
            // Fewer lifetimes: what is tested is that the command is right.
            let quick = if command.contains("couplet budget")
                && !command.contains("--lifetimes")
                && !command.contains("--part")
                && !command.contains("--explain")
            {
                format!("{command} --lifetimes 100")
            } else {
                command.replace("40000", "400")
            };
            let path = format!(
                "{}:{}",
                Path::new(&assert_cmd::cargo::cargo_bin("couplet")).parent().unwrap().display(),
                std::env::var("PATH").unwrap()
            );
            let done = Command::new("sh").arg("-c").arg(&quick).current_dir(folder.path()).env("PATH", path).output().unwrap();
            assert!(matches!(done.status.code(), Some(0 | 1)), "{}: {command}\n{}", file.display(), text(&done.stderr));
            count += 1;
        }
    }
    assert!(count >= 9, "{count}");
}

/// Lines of code blocks that call the program with files: a loop counts as one command.
fn commands(markdown: &str) -> Vec<String> {
    let mut found: Vec<String> = Vec::new();
    let mut shell = false;
    let mut block = String::new();
    for line in markdown.lines() {
        if line.starts_with("```") {
            if shell && !block.contains("#SBATCH") && block.contains("couplet") {
                found.push(block.clone());
            }
            shell = line == "```sh" && !shell;
            block.clear();
        } else if shell {
            block.push_str(line);
            block.push('\n');
        } else if let Some(command) = line.strip_prefix("    ").filter(|command| command.starts_with("couplet ") && !command.contains("…"))
        {
            found.push(command.to_owned());
        }
    }
    found
}
