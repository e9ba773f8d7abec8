//! Many lifetimes of one plan: figures of each into a store, in order.

use std::io;
use std::sync::atomic::{AtomicBool, Ordering};

use rayon::prelude::*;

use super::figures::figures;
use super::{Figure, Store, stratified, uniforms};
use crate::lifetime::{BLOCK, Plan};
use crate::mission::{Precision, Sampling, Settings};
use crate::uncertain::Draw;

/// Blocks flown between two writes: enough to keep threads busy, few enough to bound memory.
const BLOCKS_PER_WAVE: u64 = 16;

/// Lifetimes after which a precision is first looked at, and by how much their number then grows at least and at most.
const FIRST_LOOK: u64 = 1024;
const GROWTH: (f64, f64) = (1.25, 4.0);

/// Who watches a run: hears of progress and may stop it.
pub struct Watch<'a> {
    /// Hears the name of the step and how many of how many.
    pub progress: &'a (dyn Fn(&'static str, u64, u64) + Sync),
    /// Asks to stop.
    pub stop: &'a AtomicBool,
}

impl Watch<'_> {
    /// Whether the run is asked to stop.
    #[must_use]
    pub fn stopped(&self) -> bool {
        self.stop.load(Ordering::Relaxed)
    }
}

/// Which lifetimes are flown: seed, how the draws are spread, and how many in all.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Design {
    /// Seed.
    pub seed: u64,
    /// How the draws are spread.
    pub sampling: Sampling,
    /// Lifetimes in all; of Latin hypercubes a whole number each.
    pub lifetimes: u64,
    /// Draw on until a quantile is known this well.
    pub precision: Option<Precision>,
}

impl Design {
    /// What the settings ask for.
    #[must_use]
    pub fn of(settings: &Settings) -> Self {
        let lifetimes = match settings.sampling {
            Sampling::Plain => settings.lifetimes,
            Sampling::LatinHypercube(replicates) => settings.lifetimes.div_ceil(replicates) * replicates,
        };
        Self { seed: settings.seed, sampling: settings.sampling, lifetimes, precision: settings.precision }
    }

    /// The lifetimes that part `part` of `parts` (from 1) flies: whole blocks, so that parts joined are the same as one run.
    #[must_use]
    pub fn part(&self, part: u64, parts: u64) -> std::ops::Range<u64> {
        let blocks = self.lifetimes.div_ceil(BLOCK as u64);
        let bound = |k: u64| {
            let block = u128::from(blocks) * u128::from(k) / u128::from(parts.max(1));
            u64::try_from(block).unwrap_or(u64::MAX).saturating_mul(BLOCK as u64).min(self.lifetimes)
        };
        bound(part.saturating_sub(1))..bound(part)
    }

    /// Lifetimes of one Latin hypercube, and how many there are; `None` for plain draws.
    #[must_use]
    pub fn replicates(&self) -> Option<(usize, usize)> {
        match self.sampling {
            Sampling::Plain => None,
            Sampling::LatinHypercube(replicates) => {
                Some((usize::try_from(self.lifetimes / replicates).ok()?, usize::try_from(replicates).ok()?))
            }
        }
    }
}

/// Why a run ended.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Ended {
    /// All lifetimes asked for were flown.
    Number,
    /// The quantile is known as well as asked: the width of its interval as a share of it.
    Precise(f64),
    /// The most lifetimes allowed were flown before that: the width reached, if there is an interval at all.
    Cap(Option<f64>),
    /// The user stopped it.
    Stopped,
}

/// Lifetimes that were flown.
#[derive(Debug)]
pub struct Sample {
    /// Their figures.
    pub store: Store,
    /// What was asked for.
    pub design: Design,
    /// Why there are no more.
    pub ended: Ended,
}

/// The draws of lifetimes `first..first + count`.
///
/// A value depends on the seed, the parameter's name and the lifetime's number alone (of a Latin hypercube also on its size).
#[must_use]
pub fn draws(plan: &Plan, design: &Design, first: u64, count: usize) -> Vec<Draw> {
    let parameters = &plan.scenario().parameters;
    let columns: Vec<Vec<f64>> = parameters
        .as_slice()
        .iter()
        .map(|parameter| {
            let mut column = vec![0.0; count];
            match design.sampling {
                Sampling::Plain => uniforms(design.seed, &parameter.name, first, &mut column),
                Sampling::LatinHypercube(replicates) => {
                    stratified(design.seed, &parameter.name, design.lifetimes / replicates, first, &mut column);
                }
            }
            column
        })
        .collect();
    (0..count).map(|k| parameters.at_quantiles(&columns.iter().map(|column| column[k]).collect::<Vec<_>>())).collect()
}

/// Flies the lifetimes of a design, or until the watch stops it.
///
/// # Errors
/// The temporary file cannot be written, or books do not balance: a fault of the program.
pub fn sample(plan: &Plan, design: Design, watch: &Watch<'_>) -> io::Result<Sample> {
    let mut store = Store::new(Figure::columns(plan.vehicle().propulsion.thrusters.len()))?;
    let Some(precision) = design.precision else {
        fly(plan, &design, 0..design.lifetimes, design.lifetimes, &mut store, watch)?;
        let ended = if (store.rows() as u64) < design.lifetimes { Ended::Stopped } else { Ended::Number };
        return Ok(Sample { store, design, ended });
    };
    let mut next = FIRST_LOOK.min(precision.at_most);
    loop {
        let flown = store.rows() as u64;
        fly(plan, &design, flown..next, precision.at_most, &mut store, watch)?;
        if (store.rows() as u64) < next {
            return Ok(Sample { store, design, ended: Ended::Stopped });
        }
        let width = width(&mut store, precision.quantile, plan.scenario().settings.confidence)?;
        if let Some(width) = width.filter(|width| *width <= precision.width) {
            return Ok(Sample { store, design, ended: Ended::Precise(width) });
        }
        if next >= precision.at_most {
            return Ok(Sample { store, design, ended: Ended::Cap(width) });
        }
        // The width shrinks with the root of the number; a little more than that asks for saves a further look.
        let wanted = width.map_or(GROWTH.1, |width| (width / precision.width).powi(2) * 1.1).clamp(GROWTH.0, GROWTH.1);
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "at most four times a number of lifetimes")]
        let grown = (next as f64 * wanted) as u64;
        next = grown.next_multiple_of(BLOCK as u64).min(precision.at_most);
    }
}

/// Flies part `part` of `parts` of a design.
///
/// # Errors
/// As [`sample`].
pub fn sample_part(plan: &Plan, design: Design, (part, parts): (u64, u64), watch: &Watch<'_>) -> io::Result<Sample> {
    let mut store = Store::new(Figure::columns(plan.vehicle().propulsion.thrusters.len()))?;
    let range = design.part(part, parts);
    let count = range.end - range.start;
    fly(plan, &design, range, count, &mut store, watch)?;
    let ended = if (store.rows() as u64) < count { Ended::Stopped } else { Ended::Number };
    Ok(Sample { store, design, ended })
}

/// Width of the interval between both limits of a quantile of the attitude total, as a share of the quantile.
fn width(store: &mut Store, p: f64, confidence: f64) -> io::Result<Option<f64>> {
    let mut totals = store.column(Figure::AttitudeTotal.column())?;
    totals.sort_unstable_by(f64::total_cmp);
    let found = super::quantile(&totals, p, confidence);
    let share = |(low, high): (f64, f64)| if found.value > 0.0 { (high - low) / found.value } else { 0.0 };
    Ok(found.two_sided.map(share))
}

/// Flies lifetimes into a store.
///
/// Blocks have the same bounds whatever the number of threads, and rows are kept in the order of lifetimes: the same seed
/// gives the same bytes.
fn fly(plan: &Plan, design: &Design, range: std::ops::Range<u64>, of: u64, store: &mut Store, watch: &Watch<'_>) -> io::Result<()> {
    let block = BLOCK as u64;
    let wave = BLOCKS_PER_WAVE * block;
    let begun = range.start;
    for first in range.clone().step_by(usize::try_from(wave).unwrap_or(usize::MAX)) {
        if watch.stopped() {
            return Ok(());
        }
        let last = range.end.min(first + wave);
        let starts: Vec<u64> = (first..last).step_by(BLOCK).collect();
        let flown: Vec<Vec<Vec<f64>>> = starts
            .into_par_iter()
            .map(|start| {
                let count = usize::try_from(block.min(last - start)).unwrap_or(BLOCK);
                let outcomes = plan.fly_block(&draws(plan, design, start, count));
                outcomes.iter().map(|outcome| plan.audit(outcome).map(|()| figures(plan, outcome))).collect()
            })
            .collect::<Result<_, _>>()
            .map_err(io::Error::other)?;
        for row in flown.iter().flatten() {
            store.push(row)?;
        }
        (watch.progress)("lifetimes", if of == range.end { last } else { last - begun }, of);
    }
    Ok(())
}
