//! The share of a change that each changed key owns, whatever the order in which they are changed.

use std::collections::BTreeMap;

use super::uniforms;

/// Up to this many keys every order is looked at, by way of all subsets.
pub const EXACT: usize = 8;

/// Orders that are drawn beyond.
const ORDERS: usize = 48;

/// Shares of `evaluate(all) − evaluate(none)`, one for each of `keys` changes: the mean of what a change adds, over the orders
/// in which changes can be made (L. S. Shapley, 1953). They add up to the whole change.
///
/// `evaluate` gets which changes are made. Beyond [`EXACT`] keys a sample of orders stands for all.
///
/// # Errors
/// What `evaluate` says.
pub fn attribute<E>(keys: usize, mut evaluate: impl FnMut(&[bool]) -> Result<f64, E>) -> Result<Vec<f64>, E> {
    let mut known: BTreeMap<Vec<bool>, f64> = BTreeMap::new();
    let mut value = |made: &[bool]| -> Result<f64, E> {
        if let Some(value) = known.get(made) {
            return Ok(*value);
        }
        let value = evaluate(made)?;
        known.insert(made.to_vec(), value);
        Ok(value)
    };
    let mut shares = vec![0.0; keys];
    if keys <= EXACT {
        let factorial = |n: usize| (1..=n).map(|k| k as f64).product::<f64>();
        for subset in 0..1_usize << keys {
            let made: Vec<bool> = (0..keys).map(|k| subset >> k & 1 == 1).collect();
            let before = made.iter().filter(|made| **made).count();
            for (key, share) in shares.iter_mut().enumerate().filter(|(key, _)| subset >> key & 1 == 0) {
                let mut with = made.clone();
                with[key] = true;
                let weight = factorial(before) * factorial(keys - before - 1) / factorial(keys);
                *share += weight * (value(&with)? - value(&made)?);
            }
        }
        return Ok(shares);
    }
    for order in 0..ORDERS {
        let mut drawn = vec![0.0; keys];
        uniforms(1, "orders of change", (order * keys) as u64, &mut drawn);
        let mut places: Vec<usize> = (0..keys).collect();
        places.sort_by(|a, b| drawn[*a].total_cmp(&drawn[*b]));
        let mut made = vec![false; keys];
        let mut before = value(&made)?;
        for place in places {
            made[place] = true;
            let after = value(&made)?;
            shares[place] += (after - before) / ORDERS as f64;
            before = after;
        }
    }
    Ok(shares)
}
