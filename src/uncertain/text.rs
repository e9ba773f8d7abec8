//! Spreads as users write them: `2.2 ± 0.2`, `2.0 .. 2.6 N`, `0.6 0.3 0.4 ± 0.2 A m2`.

use super::{Spread, SpreadError};
use crate::units::{Dimension, QuantityError, expect_unit, finite, for_kind, number_prefix};

/// What the key asks for, as in [`crate::units::parse`].
#[derive(Clone, Copy)]
struct Asked<'a> {
    dimension: Dimension,
    name: &'a str,
    example: &'a str,
}

/// Some numbers and the unit behind them, which may be missing.
struct Side<'a> {
    numbers: Vec<f64>,
    unit: &'a str,
    /// Byte offset of the unit in the whole text.
    unit_at: usize,
}

fn fault(text: &str, message: String, help: &str) -> QuantityError {
    QuantityError { range: 0..text.len(), message, help: help.to_owned() }
}

impl From<SpreadError> for QuantityError {
    fn from(error: SpreadError) -> Self {
        Self { range: 0..0, message: error.message, help: error.help }
    }
}

/// Reads as many numbers as stand at the start, separated by spaces or by commas with a space.
fn side(text: &str, offset: usize) -> Result<Side<'_>, QuantityError> {
    let mut numbers = Vec::new();
    let mut taken = 0;
    loop {
        let rest = text.get(taken..).unwrap_or_default();
        match number_prefix(rest) {
            Ok((number, length)) => {
                numbers.push(number);
                taken += length;
            }
            // What follows the first number may be the unit.
            Err(error) if numbers.is_empty() || error.message.contains("decimal") => return Err(error.shifted(offset + taken)),
            Err(_) => break,
        }
        let rest = text.get(taken..).unwrap_or_default();
        if rest.trim_start().starts_with(", ") {
            taken += rest.len() - rest.trim_start().len() + 1;
        }
    }
    let unit = text.get(taken..).unwrap_or_default();
    Ok(Side { numbers, unit, unit_at: offset + taken })
}

enum Split<'a> {
    Alone,
    PlusMinus(&'a str, &'a str, usize),
    Range(&'a str, &'a str, usize),
}

fn split(text: &str) -> Split<'_> {
    for sign in ["±", "+/-", "+-"] {
        if let Some((left, right)) = text.split_once(sign) {
            return Split::PlusMinus(left, right, left.len() + sign.len());
        }
    }
    match text.split_once("..") {
        Some((left, right)) => Split::Range(left, right, left.len() + 2),
        None => Split::Alone,
    }
}

/// Repeats one number for each component, or takes as many as there are components.
fn spread_over(numbers: &[f64], count: usize, text: &str) -> Result<[f64; 3], QuantityError> {
    match (numbers, count) {
        ([x], _) => Ok([*x; 3]),
        ([x, y, z], 3) => Ok([*x, *y, *z]),
        _ => Err(wrong_count(text, numbers.len(), count)),
    }
}

fn wrong_count(text: &str, got: usize, count: usize) -> QuantityError {
    let (wanted, help) = if count == 3 {
        ("three numbers", "write x y z with the unit behind them, such as `0.01 0 0.74 m`")
    } else {
        ("one number", "write one number with its unit")
    };
    fault(text, format!("expected {wanted}, got {got}"), help)
}

fn read(text: &str, asked: Asked<'_>, count: usize) -> Result<[Spread; 3], QuantityError> {
    let unit =
        |side: &Side<'_>| expect_unit(side.unit, asked.dimension, asked.name, asked.example).map_err(|error| error.shifted(side.unit_at));
    let first_side = |left: &str| {
        let found = side(left, 0).map_err(|error| for_kind(error, left, asked.name, asked.example))?;
        if found.numbers.len() == count { Ok(found.numbers) } else { Err(wrong_count(text, found.numbers.len(), count)) }
    };
    let scaled = |numbers: [f64; 3], size: f64| -> Result<[f64; 3], QuantityError> {
        let [x, y, z] = numbers.map(|number| finite(number * size, text));
        Ok([x?, y?, z?])
    };
    match split(text) {
        Split::Alone => {
            let numbers = spread_over(&first_side(text)?, count, text)?;
            Ok(scaled(numbers, unit(&side(text, 0)?)?)?.map(Spread::Fixed))
        }
        Split::PlusMinus(left, right, offset) => {
            let (a, b) = (side(left, 0).map_err(|error| for_kind(error, left, asked.name, asked.example))?, side(right, offset)?);
            let means = spread_over(&first_side(left)?, count, text)?;
            let sigmas = spread_over(&b.numbers, count, text)?;
            // Percent means percent of the value, whatever the quantity.
            let relative = b.unit.trim() == "%" && a.unit.trim() != "%";
            let left_unit = if a.unit.trim().is_empty() && !relative { unit(&b)? } else { unit(&a)? };
            let means = scaled(means, left_unit)?;
            let sigmas = if relative {
                let mut of = sigmas;
                of.iter_mut().zip(means).for_each(|(sigma, mean)| *sigma *= 0.01 * mean.abs());
                of
            } else {
                scaled(sigmas, unit(&b)?)?
            };
            each(means, sigmas, Spread::normal)
        }
        Split::Range(left, right, offset) => {
            let (a, b) = (side(left, 0).map_err(|error| for_kind(error, left, asked.name, asked.example))?, side(right, offset)?);
            let lows = spread_over(&first_side(left)?, count, text)?;
            let highs = spread_over(&b.numbers, count, text)?;
            let left_unit = if a.unit.trim().is_empty() { unit(&b)? } else { unit(&a)? };
            let (lows, highs) = (scaled(lows, left_unit)?, scaled(highs, unit(&b)?)?);
            each(lows, highs, |low, high| if low < high || count == 1 { Spread::uniform(low, high) } else { fixed_if_equal(low, high) })
        }
    }
}

/// In a vector, a component whose limits are the same is fixed.
fn fixed_if_equal(low: f64, high: f64) -> Result<Spread, SpreadError> {
    if low.total_cmp(&high).is_eq() { Ok(Spread::Fixed(low)) } else { Spread::uniform(low, high) }
}

fn each(a: [f64; 3], b: [f64; 3], make: impl Fn(f64, f64) -> Result<Spread, SpreadError>) -> Result<[Spread; 3], QuantityError> {
    let ([a0, a1, a2], [b0, b1, b2]) = (a, b);
    Ok([make(a0, b0)?, make(a1, b1)?, make(a2, b2)?])
}

/// Reads one quantity with or without a spread into SI: `1 N`, `2.2 ± 0.2`, `1 N ± 2 %`, `0.9 .. 1.1 N`.
///
/// `±` gives one standard deviation of a normal distribution, `..` the limits of a uniform one.
/// Where one side has no unit, the other's counts for both. `± 2 %` is two percent of the value.
///
/// # Errors
/// As [`crate::units::parse`], and limits out of order.
pub fn parse_spread(text: &str, expected: Dimension, name: &str, example: &str) -> Result<Spread, QuantityError> {
    let [spread, ..] = read(text, Asked { dimension: expected, name, example }, 1)?;
    Ok(spread)
}

/// Reads three components with or without spreads into SI: `0.6 0.3 0.4 ± 0.2 A m2`.
///
/// Behind `±` stand one number for all components or three.
///
/// # Errors
/// As [`parse_spread`].
pub fn parse_spread_triple(text: &str, expected: Dimension, name: &str, example: &str) -> Result<[Spread; 3], QuantityError> {
    read(text, Asked { dimension: expected, name, example }, 3)
}

/// Reads three components into SI: `0.01 0 0.74 m`.
///
/// # Errors
/// As [`crate::units::parse`], and a spread where none is taken.
pub fn parse_triple(text: &str, expected: Dimension, name: &str, example: &str) -> Result<[f64; 3], QuantityError> {
    let spreads = parse_spread_triple(text, expected, name, example)?;
    if spreads.iter().all(Spread::is_fixed) {
        return Ok(spreads.map(|spread| spread.nominal()));
    }
    Err(fault(text, "this value takes no spread".to_owned(), "give plain numbers"))
}
