//! Samples that a configuration takes from a column of a CSV file: `{empirical: {file: …, column: …, unit: …}}`.
//!
//! The numbers take the place of the file's name before anything else is read, so that they are part of the resolved
//! configuration and of its hash.

use std::path::{Path as FilePath, PathBuf};

use serde_yaml::Value;

use super::diagnostic::Diagnostic;
use super::nearest::did_you_mean;
use super::node::{Body, Entry, Map, Node};
use super::source::Place;

/// Most numbers of one sample, and bytes of its file.
const MOST: usize = 1_000_000;
const MOST_BYTES: u64 = 64 << 20;

/// Puts the numbers of every sample in the place of its file's name. Files are looked for beside the file that names them.
pub(crate) fn read_samples(node: &mut Node, faults: &mut Vec<Diagnostic>) {
    match &mut node.body {
        Body::Scalar(_) => {}
        Body::List(items) => items.iter_mut().for_each(|item| read_samples(item, faults)),
        Body::Map(map) => {
            let keys: Vec<String> = map.keys().map(str::to_owned).collect();
            for key in keys {
                let Some(entry) = map.get_mut(&key) else { continue };
                match (&mut entry.node.body, key == "empirical") {
                    (Body::Map(parts), true) if parts.get("file").is_some() => match sample(parts) {
                        Ok(numbers) => give(parts, &numbers),
                        Err(fault) => faults.push(*fault),
                    },
                    _ => read_samples(&mut entry.node, faults),
                }
            }
        }
    }
}

/// Replaces `file` and `column` by `values`.
fn give(parts: &mut Map, numbers: &[f64]) {
    let entries = std::mem::take(parts).into_entries();
    for Entry { key, key_place, node } in entries {
        match key.as_str() {
            "file" => {
                let one = |x: f64| Node { place: node.place.clone(), body: Body::Scalar(Value::from(x)) };
                let body = Body::List(numbers.iter().copied().map(one).collect());
                parts.set(Entry { key: "values".to_owned(), key_place, node: Node { place: node.place.clone(), body } });
            }
            "column" => {}
            _ => parts.set(Entry { key, key_place, node }),
        }
    }
}

fn text<'a>(parts: &'a Map, key: &str) -> Option<(&'a str, &'a Place)> {
    let entry = parts.get(key)?;
    match &entry.node.body {
        Body::Scalar(Value::String(text)) => Some((text, &entry.node.place)),
        _ => None,
    }
}

fn sample(parts: &Map) -> Result<Vec<f64>, Box<Diagnostic>> {
    let wrong = |place: &Place, message: String, help: String| Box::new(Diagnostic::error_at(place.clone(), message).help(help));
    let Some((file, at)) = text(parts, "file") else {
        let message = "expected the name of a CSV file";
        let fault = match parts.get("file") {
            Some(entry) => Diagnostic::error_at(entry.node.place.clone(), message),
            None => Diagnostic::error(super::Path::root(), message),
        };
        return Err(Box::new(fault.help("write `empirical: {file: rates.csv, column: rate, unit: deg/s}`")));
    };
    let folder = FilePath::new(at.source.name()).parent().map(PathBuf::from).unwrap_or_default();
    let path = folder.join(file);
    let unreadable = |cause: String| wrong(at, format!("`{}` cannot be read: {cause}", path.display()), BESIDE.to_owned());
    let size = std::fs::metadata(&path).map_err(|error| unreadable(error.to_string()))?;
    if !size.is_file() {
        return Err(unreadable("it is no file".to_owned()));
    }
    if size.len() > MOST_BYTES {
        return Err(wrong(at, format!("`{}` is larger than 64 MiB", path.display()), "take a smaller sample".to_owned()));
    }
    let mut reader = csv::ReaderBuilder::new()
        .comment(Some(b'#'))
        .trim(csv::Trim::All)
        .from_path(&path)
        .map_err(|error| unreadable(error.to_string()))?;
    let header: Vec<String> = reader.headers().map_err(|error| unreadable(error.to_string()))?.iter().map(str::to_owned).collect();
    let column = match text(parts, "column") {
        None if header.len() == 1 => 0,
        None => {
            let help = format!("add `column:`, one of {}", header.join(", "));
            return Err(wrong(at, format!("`{file}` has {} columns, and none is named", header.len()), help));
        }
        Some((name, place)) => header.iter().position(|known| known == name).ok_or_else(|| {
            let help = did_you_mean(name, header.iter().map(String::as_str)).unwrap_or_else(|| format!("it has {}", header.join(", ")));
            wrong(place, format!("`{file}` has no column `{name}`"), help)
        })?,
    };
    let mut numbers = Vec::new();
    for record in reader.records() {
        let record = record.map_err(|error| unreadable(error.to_string()))?;
        let line = record.position().map_or(0, csv::Position::line);
        let cell = record.get(column).unwrap_or_default();
        match cell.parse::<f64>() {
            Ok(number) if number.is_finite() && numbers.len() < MOST => numbers.push(number),
            Ok(number) if number.is_finite() => {
                return Err(wrong(at, format!("`{file}` has more than {MOST} numbers"), "take a smaller sample".to_owned()));
            }
            _ => {
                let message = format!("line {line} of `{file}` has `{}` where a number was expected", super::path::short(cell));
                return Err(wrong(at, message, "write numbers with a decimal point and without units".to_owned()));
            }
        }
    }
    if numbers.is_empty() {
        return Err(wrong(at, format!("`{file}` has no numbers"), "write a heading and one number a line below it".to_owned()));
    }
    Ok(numbers)
}

const BESIDE: &str = "the name counts from the folder of the file that it stands in";
