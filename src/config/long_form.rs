//! Distributions written out: `{lognormal: {median: 1 N, factor: 1.2}}` and its like.

use serde_yaml::{Mapping, Value};

use super::leaf::{Form, KindWords};
use crate::uncertain::Spread;
use crate::units::{QuantityError, kind};

/// The distributions and their keys, as shown in messages.
const FORMS: &str = "`{lognormal: {median: …, factor: …}}`, `{triangular: {low: …, mode: …, high: …}}` or \
                     `{truncated_normal: {mean: …, sigma: …, low: …, high: …}}`";

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
    let (Some((Value::String(kind_of), Value::Mapping(parts))), None) = (entries.next(), entries.next()) else {
        return Err(fault(format!("expected {} or one distribution with its parameters", words.name)));
    };
    let keys: &[&str] = match kind_of.as_str() {
        "lognormal" => &["median", "factor"],
        "triangular" => &["low", "mode", "high"],
        "truncated_normal" => &["mean", "sigma", "low", "high"],
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

fn read_one(value: &Value, words: KindWords) -> Result<[Spread; 3], QuantityError> {
    super::leaf::read(value, words, Form::One).map_err(|mut error| {
        // The range counts inside the parameter's own text, which stands elsewhere in the file.
        error.range = 0..0;
        error
    })
}
