//! Unit expressions: `N m s`, `kg·m²`, `deg/s`, `g/(N m s)`.

use std::ops::Range;

use super::table::{UNITS, find};
use super::{Dimension, QuantityError};

/// One sign or word of an expression and where it stands.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Token<'a> {
    Word(&'a str),
    Slash,
    Open,
    Close,
}

fn tokens(text: &str) -> Vec<(Token<'_>, Range<usize>)> {
    let mut found = Vec::new();
    let mut start = None;
    for (at, c) in text.char_indices().chain([(text.len(), ' ')]) {
        let sign = match c {
            '/' => Some(Token::Slash),
            '(' => Some(Token::Open),
            ')' => Some(Token::Close),
            '*' | '·' | '⋅' => None,
            c if c.is_whitespace() => None,
            _ => {
                start.get_or_insert(at);
                continue;
            }
        };
        if let Some(from) = start.take() {
            found.push((Token::Word(text.get(from..at).unwrap_or_default()), from..at));
        }
        if let Some(sign) = sign {
            found.push((sign, at..at + c.len_utf8()));
        }
    }
    found
}

/// Splits `m2`, `m^2`, `m²`, `s-1` into name and exponent; a name of the table wins (`Am2`).
fn split_power(word: &str) -> (&str, Option<i8>) {
    const RAISED: &[(&str, i8)] = &[("⁻¹", -1), ("⁻²", -2), ("⁻³", -3), ("²", 2), ("³", 3), ("¹", 1)];
    if find(word).is_some() {
        return (word, Some(1));
    }
    if let Some((base, power)) = RAISED.iter().find_map(|(sign, power)| Some((word.strip_suffix(sign)?, *power))) {
        return (base, Some(power));
    }
    let digits = word.trim_end_matches(|c: char| c.is_ascii_digit());
    let base = digits.trim_end_matches(['-', '−']);
    let power_text = word.get(base.len()..).unwrap_or_default().replace('−', "-");
    let caret = base.strip_suffix('^').unwrap_or(base);
    if power_text.is_empty() {
        return (word, Some(1));
    }
    (caret, power_text.parse().ok().filter(|power: &i8| *power != 0 && power.abs() <= 6))
}

/// Units with a prefix that are often meant.
const PREFIXED: [&str; 10] = ["kg", "km", "cm", "mm", "ms", "mN", "kN", "kPa", "MPa", "mrad"];

fn unknown(word: &str, range: Range<usize>) -> QuantityError {
    // The right letters in the wrong case, with or without a prefix.
    let same = PREFIXED
        .iter()
        .copied()
        .chain(UNITS.iter().map(|unit| unit.name))
        .find(|name| name.to_lowercase() == word.trim_end_matches('s').to_lowercase());
    let by_distance = UNITS.iter().map(|unit| (strsim::damerau_levenshtein(&unit.name.to_lowercase(), &word.to_lowercase()), unit.name));
    let nearest =
        by_distance.min().filter(|(distance, name)| *distance <= 1.max(name.chars().count() / 3) && *distance < word.chars().count());
    let help = match same.or(nearest.map(|(_, name)| name)) {
        Some(name) => format!("did you mean `{name}`? Factors are separated by a space, `·` or `*`: `N m s`"),
        None => "see the units in docs/config.md; factors are separated by a space, `·` or `*`: `N m s`".to_owned(),
    };
    QuantityError { range, message: format!("unknown unit `{word}`"), help }
}

fn malformed(range: Range<usize>) -> QuantityError {
    QuantityError {
        range,
        message: "the unit cannot be read".to_owned(),
        help: "write factors with their powers, such as `kg m2` or `g/(N m s)`; `/` takes the next factor or bracket".to_owned(),
    }
}

/// Size in SI and dimension of a unit expression; an empty one is the number 1.
///
/// `/` divides by the next factor, or by all in the brackets that follow it.
///
/// # Errors
/// An unknown unit, or an expression that cannot be read; the range counts in `text`.
pub fn unit_factor(text: &str) -> Result<(f64, Dimension), QuantityError> {
    let (mut size, mut dimension) = (1.0, Dimension::NONE);
    // Sign of the powers inside the bracket, if one is open, and of the next factor.
    let (mut bracket, mut next): (Option<i8>, i8) = (None, 1);
    let mut waiting = None;
    for (token, range) in tokens(text) {
        match token {
            Token::Slash if next == 1 => {
                next = -1;
                waiting = Some(range);
            }
            Token::Open if bracket.is_none() => {
                bracket = Some(next);
                next = 1;
                waiting = Some(range);
            }
            Token::Close if bracket.is_some() && waiting.is_none() => bracket = None,
            Token::Word(word) => {
                let (name, power) = split_power(word);
                let (unit, own) = find(name).ok_or_else(|| unknown(name, range.clone()))?;
                let power = power.ok_or_else(|| malformed(range.clone()))? * next * bracket.unwrap_or(1);
                size *= unit.powi(i32::from(power));
                dimension = dimension.times(own, power).ok_or_else(|| malformed(range.clone()))?;
                next = 1;
                waiting = None;
            }
            _ => return Err(malformed(range)),
        }
    }
    match (waiting, bracket) {
        (None, None) => Ok((size, dimension)),
        _ => Err(malformed(0..text.len())),
    }
}
