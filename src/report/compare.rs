//! What alternatives change, as text, JSON and a table.

use serde_json::{Value, json};

use super::json::{Provenance, document};
use super::table::Table;
use super::words::{heading, number, paragraph, plain, shortened};
use crate::montecarlo::{Budget, Change, FigureChange};

/// A base, and what one alternative makes of it.
#[derive(Debug, Clone)]
pub struct Alternative {
    /// Name: the overlay file, the set of assumptions, or `settings`.
    pub name: String,
    /// SHA-256 of its configuration.
    pub config_sha256: String,
    /// Figures.
    pub figures: Vec<FigureChange>,
    /// Key and what it owns of the change of the nominal attitude total, kg; nothing if the keys cannot be changed one by one.
    pub shares: Option<Vec<(String, f64)>>,
    /// What flips or moves beside propellant: what, in the base, in the alternative, and whether a verdict flips.
    pub verdicts: Vec<Verdict>,
}

/// A verdict in the base and in an alternative.
#[derive(Debug, Clone, PartialEq)]
pub struct Verdict {
    /// What it is about.
    pub about: String,
    /// In the base.
    pub base: String,
    /// In the alternative.
    pub other: String,
    /// Whether it is another verdict, not only another number.
    pub flips: bool,
}

/// Verdicts of requirements, layout and wheels in two budgets.
#[must_use]
pub fn verdicts(base: &Budget, other: &Budget) -> Vec<Verdict> {
    let mut list = Vec::new();
    let met = |met: bool, value: Option<f64>| {
        format!("{} ({})", if met { "met" } else { "NOT MET" }, value.map_or_else(|| "—".to_owned(), |value| number(value, 4)))
    };
    for before in &base.requirements {
        if let Some(after) = other.requirements.iter().find(|after| after.requirement.name == before.requirement.name) {
            list.push(Verdict {
                about: before.requirement.name.clone(),
                base: met(before.met, before.value),
                other: met(after.met, after.value),
                flips: before.met != after.met,
            });
        }
    }
    let pure = |budget: &Budget| budget.layout.iter().all(|case| case.pure_torque.every_direction);
    let word = |yes: bool| if yes { "everywhere" } else { "not everywhere" }.to_owned();
    list.push(Verdict {
        about: "pure torque, all working".to_owned(),
        base: word(pure(base)),
        other: word(pure(other)),
        flips: pure(base) != pure(other),
    });
    if let (Some(before), Some(after)) = (base.wheel_fill, other.wheel_fill) {
        let share = |fill: f64| format!("{:.1} %", fill * 100.0);
        list.push(Verdict {
            about: "largest fill of the wheels".to_owned(),
            base: share(before),
            other: share(after),
            flips: (before > 1.0) != (after > 1.0),
        });
    }
    list
}

/// The comparison on a page.
#[must_use]
pub fn compare_text(name: &str, lifetimes: u64, seed: u64, alternatives: &[Alternative]) -> String {
    let title =
        format!("{name}: base against {} on common random numbers; {lifetimes} lifetimes each, seed {seed}.", count(alternatives.len()));
    let mut text = paragraph("", "", &title);
    for alternative in alternatives {
        text.push_str(&heading(&format!("With {}", alternative.name)));
        text.push_str(&figures(&alternative.figures));
        text.push_str(&shares(alternative));
        let mut table = Table::new(&["verdict", "base", "alternative", ""]);
        for verdict in &alternative.verdicts {
            let flips = if verdict.flips { "FLIPS" } else { "" }.to_owned();
            table.push(vec![shortened(&verdict.about, 27), verdict.base.clone(), verdict.other.clone(), flips]);
        }
        text.push_str(&table.to_text());
    }
    text
}

/// A change with its sign, and none if it is rounded to nothing.
fn signed(kg: f64) -> String {
    if kg.abs() < 5e-4 { "0.000".to_owned() } else { format!("{kg:+.3}") }
}

fn count(number: usize) -> String {
    if number == 1 { "one alternative".to_owned() } else { format!("{number} alternatives") }
}

fn figures(list: &[FigureChange]) -> String {
    let mut table = Table::new(&["propellant, kg", "", "base", "alternative", "change", "95 % interval"]);
    for figure in list {
        let p95 = figure.quantiles.iter().find(|(p, _)| (p - 0.95).abs() < 1e-9).map(|(_, change)| *change);
        // Rows that stay as they are say nothing; both totals are always told.
        let stays =
            |change: Change| change.difference().abs() < 5e-4 && change.interval.is_none_or(|(low, high)| low.abs().max(high.abs()) < 5e-4);
        if !matches!(figure.figure, "attitude_total" | "needed") && stays(figure.mean) {
            continue;
        }
        let lines = [("nominal", Some(figure.nominal)), ("mean", Some(figure.mean)), ("P95", p95)];
        let whole = matches!(figure.figure, "attitude_total" | "needed");
        // Of single rows the mean is enough.
        for (word, change) in lines.into_iter().filter(|(word, _)| whole || *word == "mean") {
            let Some(change) = change else { continue };
            let interval = change.interval.map_or_else(String::new, |(low, high)| format!("{} to {}", signed(low), signed(high)));
            let difference = signed(change.difference());
            table.push(vec![
                plain(figure.figure),
                word.to_owned(),
                format!("{:.3}", change.base),
                format!("{:.3}", change.other),
                difference,
                interval,
            ]);
        }
    }
    table.to_text() + &paragraph("  ", "  ", "Rows that stay as they are, to half a gram, are left out.")
}

fn shares(alternative: &Alternative) -> String {
    let Some(shares) = &alternative.shares else {
        return paragraph("  ", "  ", "Its keys cannot be changed one by one, so no share of the change is told for each.");
    };
    let mut table = Table::new(&["share of the nominal change", "kg"]);
    for (key, kg) in shares {
        table.push(vec![shortened(key, 60), signed(*kg)]);
    }
    format!("\n{}\n", table.to_text())
}

/// `couplet/compare/1`.
#[must_use]
pub fn compare_json(alternatives: &[Alternative], provenance: &Provenance) -> Value {
    let change = |change: &Change| {
        json!({
            "base_kg": change.base,
            "alternative_kg": change.other,
            "change_kg": change.difference(),
            "interval_kg": change.interval.map(|(low, high)| json!([low, high])),
        })
    };
    let figure = |figure: &FigureChange| {
        json!({
            "figure": figure.figure,
            "nominal": change(&figure.nominal),
            "mean": change(&figure.mean),
            "quantiles": figure.quantiles.iter().map(|(p, quantile)| json!({ "p": p, "change": change(quantile) })).collect::<Value>(),
        })
    };
    let one = |alternative: &Alternative| {
        json!({
            "name": alternative.name,
            "config_sha256": alternative.config_sha256,
            "figures": alternative.figures.iter().map(figure).collect::<Value>(),
            "shares": alternative.shares.as_ref().map(|shares| {
                shares.iter().map(|(key, kg)| json!({ "key": key, "nominal_change_kg": kg })).collect::<Value>()
            }),
            "verdicts": alternative.verdicts.iter().map(|verdict| json!({
                "about": verdict.about, "base": verdict.base, "alternative": verdict.other, "flips": verdict.flips,
            })).collect::<Value>(),
        })
    };
    document("compare", provenance, json!({ "alternatives": alternatives.iter().map(one).collect::<Value>() }))
}

/// One line a figure and statistic.
#[must_use]
pub fn compare_table(alternatives: &[Alternative]) -> Table {
    let mut table = Table::new(&["alternative", "figure", "statistic", "base_kg", "alternative_kg", "change_kg", "low_kg", "high_kg"]);
    let mut push = |name: &str, figure: &str, statistic: String, change: &Change| {
        let (low, high) = change.interval.map_or_else(Default::default, |(low, high)| (low.to_string(), high.to_string()));
        let numbers = [change.base, change.other, change.difference()].map(|x| x.to_string());
        table.push([vec![name.to_owned(), figure.to_owned(), statistic], numbers.to_vec(), vec![low, high]].concat());
    };
    for alternative in alternatives {
        for figure in &alternative.figures {
            push(&alternative.name, figure.figure, "nominal".to_owned(), &figure.nominal);
            push(&alternative.name, figure.figure, "mean".to_owned(), &figure.mean);
            for (p, change) in &figure.quantiles {
                push(&alternative.name, figure.figure, format!("p{:.0}", p * 100.0), change);
            }
        }
    }
    table
}
