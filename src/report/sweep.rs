//! Figures over one or two inputs, as text, JSON and a table.

use serde_json::{Value, json};

use super::json::{Provenance, document};
use super::table::Table;
use super::words::{heading, number, paragraph, percent};
use crate::config::Figure;
use crate::mission::Requirement;

/// One point: the values set, and the figures there, SI.
#[derive(Debug, Clone, PartialEq)]
pub struct Point {
    /// Values, one a key.
    pub values: Vec<String>,
    /// Figures; `None` where one does not exist.
    pub figures: Vec<Option<f64>>,
}

/// Where a requirement is just met.
#[derive(Debug, Clone, PartialEq)]
pub enum Found {
    /// At this value, which has been flown; not any more at `beyond`.
    At {
        /// The value.
        value: String,
        /// The figure there, SI.
        figure: Option<f64>,
        /// The nearest value flown at which it is not met.
        beyond: String,
    },
    /// Nowhere, and why.
    None(String),
}

/// A sweep.
#[derive(Debug, Clone)]
pub struct Sweep {
    /// Keys that are varied.
    pub keys: Vec<String>,
    /// Figures shown.
    pub figures: Vec<Figure>,
    /// Points in order.
    pub points: Vec<Point>,
    /// The requirement whose place is asked for.
    pub until: Option<Requirement>,
    /// Where it is.
    pub found: Option<Found>,
}

fn key(figure: Figure) -> &'static str {
    Figure::NAMES.iter().find(|(_, known)| *known == figure).map_or("", |(name, _)| name)
}

/// A heading for a narrow column.
const fn short(figure: Figure) -> &'static str {
    match figure {
        Figure::PropellantNominal => "nominal",
        Figure::PropellantP95 => "P95 limit",
        Figure::PropellantP99 => "P99 limit",
        Figure::ProbabilityEnough => "enough",
        Figure::UnloadInterval => "interval",
        Figure::WheelFill => "wheel fill",
        Figure::ValveCycles => "valve cycles",
        Figure::Throughput => "throughput",
        Figure::UnloadDeltaVPerDay => "push",
        Figure::GuaranteedPureTorque => "pure torque",
        Figure::Torque => "torque",
        Figure::Price => "price",
    }
}

/// With full digits, for programs.
#[must_use]
pub fn sweep_table(sweep: &Sweep) -> Table {
    let heads: Vec<&str> = sweep.keys.iter().map(String::as_str).chain(sweep.figures.iter().map(|figure| key(*figure))).collect();
    let mut table = Table::new(&heads);
    for point in &sweep.points {
        let figures = point.figures.iter().map(|figure| figure.map_or_else(String::new, |x| x.to_string()));
        table.push(point.values.iter().cloned().chain(figures).collect());
    }
    table
}

fn shown(value: Option<f64>, figure: Figure) -> String {
    match value {
        None => "—".to_owned(),
        Some(value) if figure.unit().is_empty() && figure != Figure::ValveCycles => percent(value),
        Some(value) => format!("{} {}", number(value, 4), figure.unit()).trim_end().to_owned(),
    }
}

/// On a page.
#[must_use]
pub fn sweep_text(name: &str, sweep: &Sweep) -> String {
    let title = format!("{name}: {} over {} on common random numbers.", count(sweep.points.len()), sweep.keys.join(" and "));
    let mut text = paragraph("", "", &title) + &heading("Figures");
    let heads: Vec<&str> = sweep.keys.iter().map(String::as_str).chain(sweep.figures.iter().map(|figure| short(*figure))).collect();
    let mut table = Table::new(&heads);
    for point in &sweep.points {
        let figures = point.figures.iter().zip(&sweep.figures).map(|(value, figure)| shown(*value, *figure));
        table.push(point.values.iter().cloned().chain(figures).collect());
    }
    text.push_str(&table.to_text());
    if let (Some(until), Some(found)) = (&sweep.until, &sweep.found) {
        let key = sweep.keys.first().map_or("", String::as_str);
        let sentence = match found {
            Found::At { value, figure, beyond } => {
                format!(
                    "{} is just met at {key} = {value}, where it is {}; no longer at {beyond}.",
                    until.name,
                    shown(*figure, until.figure)
                )
            }
            Found::None(why) => format!("{}: {why}.", until.name),
        };
        text.push_str(&paragraph("  ", "  ", &sentence));
    }
    text
}

fn count(points: usize) -> String {
    if points == 1 { "one point".to_owned() } else { format!("{points} points") }
}

/// `couplet/sweep/1`.
#[must_use]
pub fn sweep_json(sweep: &Sweep, provenance: &Provenance) -> Value {
    let point = |point: &Point| {
        let figures: serde_json::Map<String, Value> =
            sweep.figures.iter().zip(&point.figures).map(|(figure, value)| (key(*figure).to_owned(), json!(value))).collect();
        json!({ "values": point.values, "figures": figures })
    };
    let found = sweep.found.as_ref().map(|found| match found {
        Found::At { value, figure, beyond } => json!({ "value": value, "figure": figure, "not_met_at": beyond }),
        Found::None(why) => json!({ "value": null, "why": why }),
    });
    let body = json!({
        "keys": sweep.keys,
        "points": sweep.points.iter().map(point).collect::<Value>(),
        "until": sweep.until.as_ref().map(|until| &until.name),
        "found": found,
    });
    document("sweep", provenance, body)
}
