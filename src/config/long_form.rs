//! Distributions written out: `{lognormal: {median: 1 N, factor: 1.2}}` and its like.

use serde_yaml::{Mapping, Value};

use super::leaf::{Form, KindWords};
use crate::uncertain::Spread;
use crate::units::{QuantityError, expect_unit, kind};

/// The distributions and their keys, as shown in messages.
const FORMS: &str = "`{lognormal: {median: …, factor: …}}`, `{triangular: {low: …, mode: …, high: …}}`, \
                     `{truncated_normal: {mean: …, sigma: …, low: …, high: …}}`, \
                     `{discrete: [{value: …, probability: …}, …]}` or `{empirical: {file: …, column: …, unit: …}}`";

fn fault(message: String) -> QuantityError {
    QuantityError { range: 0..0, message, help: format!("write {FORMS}") }
}

/// Reads the long form of a spread.
///
/// `factor` of a lognormal is the ratio of its one-sigma quantile to its median, above 1.
///
/// # Errors
/// An unknown distribution, a missing, unknown or wrong parameter, or parameters out of order.
pub(crate) fn read(map: &Mapping, words: KindWords) -> Result<Spread, QuantityError> {
    let mut entries = map.iter();
    let no_distribution = || fault(format!("expected {} or one distribution with its parameters", words.name));
    let (Some((Value::String(kind_of), parts)), None) = (entries.next(), entries.next()) else { return Err(no_distribution()) };
    if let ("discrete", Value::Sequence(items)) = (kind_of.as_str(), parts) {
        return discrete(items, words);
    }
    let Value::Mapping(parts) = parts else { return Err(no_distribution()) };
    let keys: &[&str] = match kind_of.as_str() {
        "lognormal" => &["median", "factor"],
        "triangular" => &["low", "mode", "high"],
        "truncated_normal" => &["mean", "sigma", "low", "high"],
        "empirical" => return empirical(parts, words),
        other => return Err(fault(format!("unknown distribution `{other}`"))),
    };
    if let Some(key) = parts.keys().filter_map(Value::as_str).find(|key| !keys.contains(key)) {
        return Err(fault(format!("unknown key `{key}` in `{kind_of}`")));
    }
    let part = |key: &str| -> Result<f64, QuantityError> {
        let value = parts.get(key).ok_or_else(|| fault(format!("`{key}` is missing in `{kind_of}`")))?;
        let asked = if key == "factor" { KindWords::of::<kind::Number>() } else { words };
        let [spread, ..] = read_one(value, asked)?;
        Ok(spread.nominal())
    };
    let made = match kind_of.as_str() {
        "lognormal" => Spread::lognormal(part("median")?, part("factor")?.ln()),
        "triangular" => Spread::triangular(part("low")?, part("mode")?, part("high")?),
        _ => Spread::truncated_normal(part("mean")?, part("sigma")?, part("low")?, part("high")?),
    };
    made.map_err(|error| QuantityError { range: 0..0, message: error.message, help: error.help })
}

/// Values with their probabilities.
fn discrete(items: &[Value], words: KindWords) -> Result<Spread, QuantityError> {
    let one = |item: &Value| -> Result<(f64, f64), QuantityError> {
        let expected = || fault("expected `value` and `probability` in each item of `discrete`".to_owned());
        let Value::Mapping(parts) = item else { return Err(expected()) };
        let (Some(value), Some(probability), 2) = (parts.get("value"), parts.get("probability"), parts.len()) else {
            return Err(expected());
        };
        let [value, ..] = read_one(value, words)?;
        let [probability, ..] = read_one(probability, KindWords::of::<kind::Number>())?;
        Ok((value.nominal(), probability.nominal()))
    };
    let pairs = items.iter().map(one).collect::<Result<Vec<_>, _>>()?;
    Spread::discrete(&pairs).map_err(|error| QuantityError { range: 0..0, message: error.message, help: error.help })
}

/// A sample: numbers and their unit. A file's name has been replaced by its numbers by now.
fn empirical(parts: &Mapping, words: KindWords) -> Result<Spread, QuantityError> {
    let known = ["values", "unit", "file", "column"];
    if let Some(key) = parts.keys().filter_map(Value::as_str).find(|key| !known.contains(key)) {
        return Err(fault(format!("unknown key `{key}` in `empirical`")));
    }
    let Some(Value::Sequence(values)) = parts.get("values") else {
        return Err(fault("expected `file` with `column`, or a list of `values`, in `empirical`".to_owned()));
    };
    let unit = parts.get("unit").and_then(Value::as_str).unwrap_or_default();
    let size = expect_unit(unit, words.dimension, words.name, words.example).map_err(|error| QuantityError {
        range: 0..0,
        message: format!("{} in `unit`", error.message),
        help: error.help,
    })?;
    let number = |value: &Value| match value.as_f64() {
        Some(number) if (number * size).is_finite() => Ok(number * size),
        _ => Err(fault("expected plain numbers in `values`, their unit in `unit`".to_owned())),
    };
    let numbers = values.iter().map(number).collect::<Result<Vec<f64>, _>>()?;
    Spread::empirical(&numbers).map_err(|error| QuantityError { range: 0..0, message: error.message, help: error.help })
}

fn read_one(value: &Value, words: KindWords) -> Result<[Spread; 3], QuantityError> {
    super::leaf::read(value, words, Form::One).map_err(|mut error| {
        // The range counts inside the parameter's own text, which stands elsewhere in the file.
        error.range = 0..0;
        error
    })
}
