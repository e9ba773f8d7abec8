//! Short forms of common arrays of wheels and sets of thrusters, written out before anything else is read.
//!
//! `couplet check FILE --resolved` shows what they stand for.

use serde_yaml::Value;

use super::diagnostic::Diagnostic;
use super::node::{Body, Entry, Map, Node};
use super::source::Place;
use crate::uncertain::parse_triple;
use crate::units::{Kind, kind, parse};

/// Most copies of one thruster, and wheels of one array.
const MOST: u64 = 24;

type Fault = Box<Diagnostic>;

/// Writes out `wheels.array` and the `copies` of thrusters.
pub(crate) fn write_out(root: &mut Node, faults: &mut Vec<Diagnostic>) {
    let Body::Map(sections) = &mut root.body else { return };
    if let Some(Entry { node: Node { body: Body::Map(wheels), .. }, .. }) = sections.get_mut("wheels")
        && let Err(fault) = array(wheels)
    {
        faults.push(*fault);
    }
    if let Some(Entry { node: Node { body: Body::List(thrusters), .. }, .. }) = sections.get_mut("thrusters") {
        let written = std::mem::take(thrusters);
        for thruster in written {
            match copies(&thruster) {
                Ok(Some(list)) => thrusters.extend(list),
                Ok(None) => thrusters.push(thruster),
                Err(fault) => {
                    faults.push(*fault);
                    thrusters.push(thruster);
                }
            }
        }
    }
}

fn refuse<T>(place: &Place, message: impl Into<String>, help: &str) -> Result<T, Fault> {
    Err(Box::new(Diagnostic::error_at(place.clone(), message).help(help)))
}

/// The text of a scalar.
fn text(node: &Node) -> Option<String> {
    match &node.body {
        Body::Scalar(Value::String(text)) => Some(text.clone()),
        Body::Scalar(Value::Number(number)) => Some(number.to_string()),
        Body::List(items) => Some(items.iter().map(text).collect::<Option<Vec<_>>>()?.join(", ")),
        _ => None,
    }
}

fn triple<K: Kind>(map: &Map, key: &str, otherwise: Option<[f64; 3]>, place: &Place) -> Result<[f64; 3], Fault> {
    let Some(entry) = map.get(key) else {
        return otherwise.map_or_else(|| refuse(place, format!("a short form needs `{key}`"), "give it, or write all out"), Ok);
    };
    let written = text(&entry.node).unwrap_or_default();
    parse_triple(&written, K::DIMENSION, K::NAME, K::EXAMPLE)
        .or_else(|error| refuse(&entry.node.place, format!("`{key}`: {}", error.message), &error.help))
}

fn whole(map: &Map, key: &str, otherwise: Option<u64>, least: u64, place: &Place) -> Result<u64, Fault> {
    let help = format!("write a whole number from {least} to {MOST}");
    match (map.get(key), otherwise) {
        (None, Some(number)) => Ok(number),
        (None, None) => refuse(place, format!("`{key}` is missing in this short form"), &help),
        (Some(entry), _) => match &entry.node.body {
            Body::Scalar(Value::Number(number)) if number.as_u64().is_some_and(|n| (least..=MOST).contains(&n)) => {
                Ok(number.as_u64().unwrap_or(least))
            }
            _ => refuse(&entry.node.place, format!("`{key}` must be a whole number from {least} to {MOST}"), &help),
        },
    }
}

/// Unknown keys of a short form.
fn known(map: &Map, keys: &[&str]) -> Result<(), Fault> {
    match map.entries().iter().find(|entry| !keys.contains(&entry.key.as_str())) {
        None => Ok(()),
        Some(entry) => {
            let help = super::nearest::did_you_mean(&entry.key, keys.iter().copied()).unwrap_or_default();
            refuse(&entry.key_place, format!("unknown key `{}` in a short form", entry.key), &help)
        }
    }
}

/// A number without the noise of a sine that should be zero.
fn clean(x: f64) -> f64 {
    if x.abs() < 1e-15 { 0.0 } else { x }
}

fn vector(xyz: [f64; 3], unit: &str, place: &Place) -> Node {
    let [x, y, z] = xyz.map(clean);
    let text = format!("{x} {y} {z} {unit}");
    Node { place: place.clone(), body: Body::Scalar(Value::String(text.trim_end().to_owned())) }
}

fn scalar(text: String, place: &Place) -> Node {
    Node { place: place.clone(), body: Body::Scalar(Value::String(text)) }
}

fn entry(key: &str, node: Node) -> Entry {
    Entry { key: key.to_owned(), key_place: node.place.clone(), node }
}

/// Writes the wheels of `array` out as `axes`.
fn array(wheels: &mut Map) -> Result<(), Fault> {
    let Some(Entry { key_place, node, .. }) = wheels.get("array").cloned() else { return Ok(()) };
    if let Some(axes) = wheels.get("axes") {
        return refuse(&axes.key_place, "`axes` is given together with `array`", "keep one of the two");
    }
    let axes = match &node.body {
        Body::Scalar(Value::String(word)) if word == "orthogonal" => vec![[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]],
        Body::Scalar(Value::String(word)) if word == "orthogonal_and_skew" => {
            vec![[1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0], [1.0, 1.0, 1.0]]
        }
        Body::Map(map) if map.keys().eq(["pyramid"]) => match map.get("pyramid").map(|entry| (&entry.node.body, &entry.node.place)) {
            Some((Body::Map(pyramid), place)) => self::pyramid(pyramid, place)?,
            _ => return refuse(&node.place, "`pyramid` must be a map", "write `pyramid: {about: 0 0 1, half_angle: 55 deg, count: 4}`"),
        },
        _ => {
            let help = "write `orthogonal`, `orthogonal_and_skew`, or `pyramid: {about: 0 0 1, half_angle: 55 deg, count: 4}`";
            return refuse(&node.place, "this is no array of wheels", help);
        }
    };
    let wheel = |(k, axis): (usize, &[f64; 3])| {
        let mut map = Map::default();
        map.set(entry("name", scalar(format!("W{}", k + 1), &node.place)));
        map.set(entry("axis", vector(*axis, "", &node.place)));
        Node { place: node.place.clone(), body: Body::Map(map) }
    };
    let list = axes.iter().enumerate().map(wheel).collect();
    wheels.remove("array");
    wheels.set(Entry { key: "axes".to_owned(), key_place, node: Node { place: node.place, body: Body::List(list) } });
    Ok(())
}

/// Axes evenly on a cone about an axis.
fn pyramid(map: &Map, place: &Place) -> Result<Vec<[f64; 3]>, Fault> {
    known(map, &["about", "half_angle", "count", "turned"])?;
    let about = triple::<kind::Number>(map, "about", Some([0.0, 0.0, 1.0]), place)?;
    let angle = |key: &str, otherwise: f64| -> Result<f64, Fault> {
        let Some(entry) = map.get(key) else { return Ok(otherwise) };
        let written = text(&entry.node).unwrap_or_default();
        parse(&written, kind::Angle::DIMENSION, kind::Angle::NAME, kind::Angle::EXAMPLE)
            .or_else(|error| refuse(&entry.node.place, format!("`{key}`: {}", error.message), &error.help))
    };
    // Four wheels at this angle hold as much along the axis as across it: cos² = 1/3.
    let half_angle = angle("half_angle", (1.0_f64 / 3.0).sqrt().acos())?;
    let turned = angle("turned", 0.0)?;
    let count = whole(map, "count", Some(4), 3, place)?;
    let Some(axis) = nalgebra::Vector3::from(about).try_normalize(1e-12) else {
        return refuse(place, "`about` is the zero vector", "give a direction, such as `0 0 1`");
    };
    let other = if axis.x.abs() < 0.9 { nalgebra::Vector3::x() } else { nalgebra::Vector3::y() };
    let first = (other - axis * axis.dot(&other)).normalize();
    let second = axis.cross(&first);
    let one = |k: u64| {
        let (s, c) = (turned + std::f64::consts::TAU * k as f64 / count as f64).sin_cos();
        (axis * half_angle.cos() + (first * c + second * s) * half_angle.sin()).into()
    };
    Ok((0..count).map(one).collect())
}

/// The thruster and its copies, or nothing if it has none.
fn copies(thruster: &Node) -> Result<Option<Vec<Node>>, Fault> {
    let Body::Map(map) = &thruster.body else { return Ok(None) };
    let Some(Entry { node, .. }) = map.get("copies") else { return Ok(None) };
    let place = &node.place;
    let Body::Map(how) = &node.body else {
        return refuse(place, "`copies` must be a map", "write `copies: {mirror: [x, y]}` or `copies: {fold: 4, about: z}`");
    };
    known(how, &["mirror", "fold", "about"])?;
    let moves = match (how.get("mirror"), how.get("fold")) {
        (Some(mirror), None) => mirrors(&mirror.node)?,
        (None, Some(_)) => turns(how, place)?,
        _ => return refuse(place, "expected one of `mirror` and `fold`", "keep one: `mirror: [x, y]`, or `fold: 4` with `about: z`"),
    };
    let name = map.get("name").and_then(|entry| text(&entry.node)).unwrap_or_default();
    let position = triple::<kind::Length>(map, "position", None, place)?;
    let pushes: Vec<&str> = ["push", "plume"].into_iter().filter(|key| map.get(key).is_some()).collect();
    let mut list = Vec::new();
    for (k, turn) in moves.iter().enumerate() {
        let mut copy = map.clone();
        copy.remove("copies");
        let turned = |xyz: [f64; 3]| -> [f64; 3] { (turn * nalgebra::Vector3::from(xyz)).into() };
        copy.set(entry("name", scalar(format!("{name}{}", k + 1), place)));
        copy.set(entry("position", vector(turned(position), "m", place)));
        for key in &pushes {
            copy.set(entry(key, vector(turned(triple::<kind::Number>(map, key, None, place)?), "", place)));
        }
        list.push(Node { place: thruster.place.clone(), body: Body::Map(copy) });
    }
    Ok(Some(list))
}

/// The identity and the reflections of some axes: two, four or eight.
fn mirrors(node: &Node) -> Result<Vec<nalgebra::Matrix3<f64>>, Fault> {
    let words: Vec<String> = match &node.body {
        Body::List(items) => items.iter().filter_map(text).collect(),
        _ => text(node).into_iter().collect(),
    };
    let mut all = vec![nalgebra::Matrix3::identity()];
    for word in &words {
        let Some(axis) = ["x", "y", "z"].iter().position(|axis| axis == word) else {
            return refuse(
                &node.place,
                format!("`{word}` is no axis"),
                "write the axes whose sign changes: `x`, `y`, `z`, or a list such as `[x, y]`",
            );
        };
        let signs = nalgebra::Vector3::from_fn(|row, _| if row == axis { -1.0 } else { 1.0 });
        let mirror = nalgebra::Matrix3::from_diagonal(&signs);
        let mirrored: Vec<_> = all.iter().map(|other| mirror * other).collect();
        all.extend(mirrored);
    }
    if all.len() < 2 || all.len() > 8 {
        return refuse(&node.place, "expected one to three axes", "write the axes whose sign changes, each once: `[x, y]`");
    }
    Ok(all)
}

/// The turns of a symmetry about a body axis.
fn turns(how: &Map, place: &Place) -> Result<Vec<nalgebra::Matrix3<f64>>, Fault> {
    let count = whole(how, "fold", None, 2, place)?;
    let word = how.get("about").and_then(|entry| text(&entry.node)).unwrap_or_else(|| "z".to_owned());
    let axis = match word.as_str() {
        "x" => nalgebra::Vector3::x_axis(),
        "y" => nalgebra::Vector3::y_axis(),
        "z" => nalgebra::Vector3::z_axis(),
        _ => return refuse(place, format!("`{word}` is no axis"), "write `about: x`, `about: y` or `about: z`"),
    };
    let turn = |k: u64| *nalgebra::Rotation3::from_axis_angle(&axis, std::f64::consts::TAU * k as f64 / count as f64).matrix();
    Ok((0..count).map(turn).collect())
}
