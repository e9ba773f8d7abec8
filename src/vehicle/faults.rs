//! Collecting what is wrong with a configuration, so that one run shows it all.

use nalgebra::Vector3;

use crate::config::{Diagnostic, Path};
use crate::uncertain::Spread;

/// A number with at most five digits that count.
fn short(number: f64) -> String {
    let rounded: f64 = format!("{number:.4e}").parse().unwrap_or(number);
    if rounded.abs() > 0.0 && rounded.abs() < 1e-4 { format!("{rounded:e}") } else { rounded.to_string() }
}

/// The faults found so far.
#[derive(Debug, Default)]
pub struct Faults(Vec<Diagnostic>);

impl Faults {
    /// None yet.
    #[must_use]
    pub fn new() -> Self {
        Self::default()
    }

    /// How many errors and warnings there are.
    #[must_use]
    pub fn count(&self) -> usize {
        self.0.len()
    }

    /// All of them.
    #[must_use]
    pub fn into_inner(self) -> Vec<Diagnostic> {
        self.0
    }

    /// Notes that the value at `key` is wrong, what was expected, and how to mend it.
    pub fn push(&mut self, key: &str, message: impl Into<String>, help: impl Into<String>) {
        self.0.push(Diagnostic::error(Path::parse(key), format!("`{key}`: {}", message.into())).help(help));
    }

    /// The same where a second value of the file explains it.
    pub fn push_also(&mut self, key: &str, message: impl Into<String>, help: impl Into<String>, other: &str, label: &str) {
        let fault = Diagnostic::error(Path::parse(key), format!("`{key}`: {}", message.into()));
        self.0.push(fault.help(help).also(Path::parse(other), label));
    }

    /// Takes a value above zero.
    pub fn positive(&mut self, key: &str, value: f64, what: &str) -> Option<f64> {
        if value > 0.0 {
            return Some(value);
        }
        self.push(key, format!("expected {what} above zero, got {value}"), "give a value above zero");
        None
    }

    /// Takes a value that lies in `low..=high`.
    pub fn within(&mut self, key: &str, value: f64, low: f64, high: f64, what: &str) -> Option<f64> {
        if (low..=high).contains(&value) {
            return Some(value);
        }
        let (from, to, got) = (short(low), short(high), short(value));
        let help = if high <= 1.0 && (5.0..=100.0).contains(&value) && !what.contains("rad") {
            format!("give a value from {from} to {to}; is `{got} %` meant?")
        } else {
            format!("give a value from {from} to {to}")
        };
        self.push(key, format!("expected {what} from {from} to {to}, got {got}"), help);
        None
    }

    /// Takes a spread all of whose values (normal ones to six sigma) lie in `low..=high`, or above
    /// `low` where `open` says so.
    pub fn spread(&mut self, key: &str, spread: Spread, low: f64, high: f64, what: &str) -> Option<Spread> {
        let (least, most) = spread.support();
        if least >= low && most <= high {
            return Some(spread);
        }
        let range =
            if high.is_finite() { format!("from {} to {}", short(low), short(high)) } else { format!("of at least {}", short(low)) };
        let (message, help) = if spread.is_fixed() {
            (format!("expected {what} {range}, got {}", short(least)), format!("give a value {range}"))
        } else {
            (
                format!("expected {what} {range}, but this spread reaches from {least:.4} to {most:.4} (a normal one counts to six sigma)"),
                "narrow the spread, or cut it off: `{truncated_normal: {mean: …, sigma: …, low: …, high: …}}`".to_owned(),
            )
        };
        self.push(key, message, help);
        None
    }

    /// As [`Faults::spread`] for a quantity that must stay above zero.
    pub fn positive_spread(&mut self, key: &str, spread: Spread, what: &str) -> Option<Spread> {
        let (least, most) = spread.support();
        if least > 0.0 && most.is_finite() {
            return Some(spread);
        }
        if spread.is_fixed() {
            self.push(key, format!("expected {what} above zero, got {least}"), "give a value above zero");
        } else {
            self.push(
                key,
                format!("expected {what} above zero, but this spread reaches {least:.4} (a normal one counts to six sigma)"),
                "narrow the spread, or cut it off: `{truncated_normal: {mean: …, sigma: …, low: …, high: …}}`",
            );
        }
        None
    }

    /// Takes a direction: any length but zero.
    pub fn direction(&mut self, key: &str, xyz: [f64; 3]) -> Option<Vector3<f64>> {
        let unit = Vector3::from(xyz).try_normalize(1e-12);
        if unit.is_none() {
            self.push(key, "expected a direction, got the zero vector", "give a vector of any length but zero, such as `0 0 1`");
        }
        unit
    }

    /// Notes every name that stands twice in a list.
    pub fn unique<'a>(&mut self, list: &str, names: impl Iterator<Item = &'a str>) {
        let mut seen: Vec<&str> = Vec::new();
        for (index, name) in names.enumerate() {
            if name.trim().is_empty() {
                self.push(&format!("{list}[{index}].name"), "expected a name, got nothing", "give it a name: results and messages use it");
            } else if let Some(first) = seen.iter().position(|known| *known == name) {
                self.push_also(
                    &format!("{list}[{index}].name"),
                    format!("the name `{name}` stands twice"),
                    "give each its own name",
                    &format!("{list}[{first}].name"),
                    "first here",
                );
            }
            seen.push(name);
        }
    }
}
