//! One quantity: a number and its unit.

use std::ops::Range;

use super::{Dimension, Kind, unit_factor};

/// What is wrong with the text of a quantity.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("{message}")]
pub struct QuantityError {
    /// Where, in bytes of the text.
    pub range: Range<usize>,
    /// What: lower case, expected before got.
    pub message: String,
    /// How to mend it.
    pub help: String,
}

impl QuantityError {
    /// The same fault in a text that begins `offset` bytes earlier.
    #[must_use]
    pub fn shifted(mut self, offset: usize) -> Self {
        self.range = self.range.start + offset..self.range.end + offset;
        self
    }
}

/// Splits the number off the start of a text: the number, and the bytes it takes with spaces before it.
///
/// # Errors
/// No number there, or one that is written in a way that could be misread.
pub fn number_prefix(text: &str) -> Result<(f64, usize), QuantityError> {
    let start = text.len() - text.trim_start().len();
    let body = text.get(start..).unwrap_or_default();
    let mut end = 0;
    let mut previous = ' ';
    for (at, c) in body.char_indices() {
        let after = body.get(at + c.len_utf8()..).unwrap_or_default();
        let part = match c {
            '0'..='9' => true,
            // `1..2` is a range, not the number `1.`.
            '.' => !after.starts_with('.') && previous != '.',
            '+' | '-' | '−' => at == 0 || matches!(previous, 'e' | 'E'),
            // `3 e` is no number, and `2 eV` no unit: an exponent has digits.
            'e' | 'E' => previous.is_ascii_digit() && after.trim_start_matches(['+', '-', '−']).starts_with(|d: char| d.is_ascii_digit()),
            _ => false,
        };
        if !part {
            break;
        }
        previous = c;
        end = at + c.len_utf8();
    }
    let written = body.get(..end).unwrap_or_default();
    let rest = body.get(end..).unwrap_or_default();
    let fault = |message: String, help: &str| QuantityError { range: start..text.len().max(start), message, help: help.to_owned() };
    match rest.chars().next() {
        Some(',') if rest.get(1..).is_some_and(|r| r.starts_with(|c: char| c.is_ascii_digit())) && !written.is_empty() => {
            return Err(fault(
                format!("`{}` uses a decimal comma", body.trim()),
                "write a decimal point, `1.5`, and thousands without a separator, `1000`",
            ));
        }
        Some('_' | 'x' | 'X') if !written.is_empty() => {
            return Err(fault(
                format!("`{}` is not a plain decimal number", body.trim()),
                "write digits with a decimal point or an exponent: `1000`, `1e-3`",
            ));
        }
        _ => {}
    }
    match written.replace('−', "-").parse::<f64>() {
        Ok(number) if number.is_finite() => Ok((number, start + end)),
        Ok(_) => Err(fault(format!("`{written}` is too large a number"), "write a finite number")),
        Err(_) => Err(fault(
            format!("expected a number, got `{}`", clipped(body.trim())),
            "begin with a number and put its unit behind it: `1 N`",
        )),
    }
}

fn clipped(text: &str) -> String {
    let short: String = text.chars().take(40).collect();
    if short.len() < text.len() { short + "…" } else { short }
}

/// Checks a unit expression against what is expected; `text` is the unit alone.
pub(crate) fn expect_unit(text: &str, expected: Dimension, name: &str, example: &str) -> Result<f64, QuantityError> {
    let start = text.len() - text.trim_start().len();
    let unit = text.trim();
    for (sign, message) in [("..", "a range"), ("±", "a spread"), ("+/-", "a spread")] {
        if unit.contains(sign) {
            return Err(QuantityError {
                range: start..start + unit.len(),
                message: format!("{message} (`{sign}`) cannot stand here"),
                help: "write one number with its unit; where a spread is allowed, `±` or `..`, not both".to_owned(),
            });
        }
    }
    if unit.starts_with(['-', '–', '—']) {
        return Err(QuantityError {
            range: start..start + unit.len(),
            message: "a dash cannot stand behind a number".to_owned(),
            help: "write a range with two points, such as `205 .. 225 s`".to_owned(),
        });
    }
    let (size, found) = unit_factor(unit).map_err(|error| error.shifted(start))?;
    if found == expected {
        return Ok(size);
    }
    let range = start..start + unit.len();
    if unit.is_empty() {
        let message = format!("the unit is missing: expected {name}, such as `{example}`");
        return Err(QuantityError { range: 0..text.len(), message, help: format!("put the unit behind the number, such as `{example}`") });
    }
    let help = match (unit, expected == Dimension::new([1, 1, -2, 0, 0, 0])) {
        ("lb" | "lbm", true) => "`lb` is a mass; write `lbf` for a force".to_owned(),
        ("Hz", _) => "`Hz` counts events; write `rpm`, `deg/s` or `rad/s` for a rate of turn".to_owned(),
        _ => format!("write a unit of this kind, such as `{example}`"),
    };
    Err(QuantityError { range, message: format!("expected {name}, such as `{example}`, got `{unit}`, which is {found}"), help })
}

/// Reads one quantity into SI.
///
/// `name` and `example` stand for what is expected in messages: "a force", "1 N".
///
/// # Errors
/// No number, a number that could be misread, no unit, an unknown unit or another dimension.
///
/// ```
/// use couplet::units::{kind, parse_kind};
/// assert_eq!(parse_kind::<kind::Momentum>("12 N m s"), Ok(12.0));
/// assert!(parse_kind::<kind::Force>("1 N m").is_err());
/// ```
pub fn parse(text: &str, expected: Dimension, name: &str, example: &str) -> Result<f64, QuantityError> {
    let (number, taken) = number_prefix(text).map_err(|error| for_kind(error, text, name, example))?;
    let size = expect_unit(text.get(taken..).unwrap_or_default(), expected, name, example).map_err(|error| error.shifted(taken))?;
    finite(number * size, text)
}

/// A message that begins with what was expected.
pub(crate) fn for_kind(mut error: QuantityError, text: &str, name: &str, example: &str) -> QuantityError {
    if error.message.starts_with("expected a number") {
        error.message = format!("expected {name}, such as `{example}`, got `{}`", clipped(text.trim()));
    }
    error
}

pub(crate) fn finite(value: f64, text: &str) -> Result<f64, QuantityError> {
    if value.is_finite() {
        return Ok(value);
    }
    Err(QuantityError {
        range: 0..text.len(),
        message: "the number is too large".to_owned(),
        help: "check the exponent and the unit".to_owned(),
    })
}

/// [`parse`] for a kind of quantity.
///
/// # Errors
/// As [`parse`].
pub fn parse_kind<K: Kind>(text: &str) -> Result<f64, QuantityError> {
    parse(text, K::DIMENSION, K::NAME, K::EXAMPLE)
}
