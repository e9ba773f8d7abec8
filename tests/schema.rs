//! The JSON Schema against a general-purpose validator, and against what it promises to editors.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use std::fs;
use std::path::{Path, PathBuf};

use serde_json::{Value, json};

fn configurations() -> Vec<PathBuf> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let files = |folder: &str| fs::read_dir(root.join(folder)).unwrap().map(|entry| entry.unwrap().path()).collect::<Vec<_>>();
    let mut all: Vec<PathBuf> = files("configs").into_iter().chain(files("src/cli/starters")).collect();
    all.retain(|file| file.extension().is_some_and(|end| end == "yaml"));
    all.sort();
    all
}

/// The file as an editor sees it.
fn written(file: &Path) -> Value {
    let value: serde_yaml::Value = serde_yaml::from_str(&fs::read_to_string(file).unwrap()).unwrap();
    serde_json::to_value(value).unwrap()
}

/// Demos and starters are valid as they are written, and copies with one thing wrong are not.
#[test]
fn the_schema_takes_the_demos_and_refuses_mutated_copies() {
    let validator = jsonschema::draft202012::new(&couplet::config::schema()).unwrap();
    let files = configurations();
    assert!(files.len() >= 10);
    for file in files {
        let good = written(&file);
        if let Err(error) = validator.validate(&good) {
            panic!("{}: {error} at {}", file.display(), error.instance_path());
        }
        let mut mutated = Vec::new();
        let mut change = |what: &str, change: &dyn Fn(&mut Value)| {
            let mut copy = good.clone();
            change(&mut copy);
            mutated.push((what.to_owned(), copy));
        };
        change("a key renamed", &|v| {
            let mass = v["spacecraft"].as_object_mut().unwrap().remove("dry_mass").unwrap();
            v["spacecraft"]["dry_mas"] = mass;
        });
        change("a number for a map", &|v| v["tank"] = json!(3));
        change("a wrong word", &|v| v["propulsion"]["net_force"] = json!("some"));
        change("a list for a scalar", &|v| v["mission"]["start"] = json!(["2029-01-01"]));
        change("a required section missing", &|v| drop(v.as_object_mut().unwrap().remove("thrusters")));
        change("an unknown section", &|v| v["payload"] = json!({}));
        change("text for a list", &|v| v["mission"]["phases"] = json!("science"));
        change("a phase without a name", &|v| drop(v["mission"]["phases"][0].as_object_mut().unwrap().remove("name")));
        for (what, copy) in mutated {
            assert!(!validator.is_valid(&copy), "{}: {what}", file.display());
        }
    }
}

fn each_key(node: &Value, path: &str, take: &mut dyn FnMut(&str, &Value)) {
    for (key, value) in node["properties"].as_object().into_iter().flatten() {
        take(&format!("{path}.{key}"), value);
    }
    // A choice that is a map says what it means beside it.
    for option in node["oneOf"].as_array().into_iter().flatten() {
        for key in option["properties"].as_object().into_iter().flat_map(|keys| keys.keys()) {
            take(&format!("{path}.{key}"), option);
        }
    }
}

/// Every key says what it means; every quantity its unit and an example.
#[test]
fn every_key_explains_itself() {
    let schema = couplet::config::schema();
    let mut count = 0;
    let mut take = |path: &str, value: &Value| {
        count += 1;
        assert!(value["description"].as_str().is_some_and(|text| text.len() > 2), "{path} has no description");
        if value.get("x-quantity").is_some() {
            assert!(value["x-unit"].is_string(), "{path} has no unit");
            assert!(value["examples"][0].is_string(), "{path} has no example");
        }
    };
    each_key(&schema, "Spec", &mut take);
    for (name, definition) in schema["$defs"].as_object().unwrap() {
        each_key(definition, name, &mut take);
    }
    assert!(count > 200, "{count}");
    for (name, _) in couplet::config::RANGES {
        let (kind, key) = name.split_once('.').unwrap();
        let definition = &schema["$defs"][kind]["properties"][key];
        assert!(definition["x-range"].is_string(), "{name} is no key of the schema");
    }
}
