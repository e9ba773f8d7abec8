//! `couplet sweep`.

use super::Outcome;
use super::args::{Common, Format, SweepArgs};
use super::budget::pretty;
use super::interrupt;
use super::output::{Failure, Target};
use super::scenario::{Progress, load, load_quietly, on_threads, plan, refused};
use super::vary::{Values, Vary, written};
use crate::config::Figure;
use crate::mission::{Bound, Requirement};
use crate::montecarlo::{Budget, Checked, Design, Watch, sample};
use crate::report::{Found, Point, Sweep, footer, sweep_json, sweep_table, sweep_text};

/// Most points of a sweep.
const MOST_POINTS: usize = 10_000;
/// Halvings of a bisection: the place is known to a millionth of the range.
const HALVINGS: usize = 20;

pub(super) fn run(args: &SweepArgs) -> Outcome {
    let common = &args.common;
    let vary = args.vary.iter().map(|text| Vary::parse(text)).collect::<Result<Vec<_>, _>>()?;
    if vary.is_empty() || vary.len() > 2 {
        let message = format!("error: a sweep varies one key or two, got {}", vary.len());
        return Err(Failure::Input(format!("{message}\n  = help: write `--vary \"wheels.capacity=4 .. 20 N m s\"` once or twice")));
    }
    let figures: Vec<Figure> = if args.show.is_empty() {
        vec![Figure::PropellantNominal, Figure::PropellantP95, Figure::ProbabilityEnough, Figure::WheelFill]
    } else {
        args.show.iter().map(|name| figure(name)).collect::<Result<_, _>>()?
    };
    let until = args.until.as_deref().map(|text| until(text, &vary)).transpose()?;
    let steps = usize::from(args.steps);
    let points: usize = vary.iter().map(|vary| vary.points(steps).len()).product();
    if points > MOST_POINTS {
        let message = format!("error: this sweep has {points} points, and the most is {MOST_POINTS}");
        return Err(Failure::Input(format!("{message}\n  = help: take fewer `--steps`")));
    }
    let loaded = load(common)?;
    let target = Target::of(common, &loaded)?;
    let progress = Progress::new(common.quiet);
    let swept = on_threads(common, || sweep(common, &vary, steps, &figures, until.as_ref(), &progress))??;
    progress.finish();
    let text = match common.format {
        Format::Text => sweep_text(&loaded.scenario.vehicle.name, &swept) + &footer(&loaded.provenance),
        Format::Json => pretty(&sweep_json(&swept, &loaded.provenance)),
        Format::Csv => sweep_table(&swept).to_csv(),
    };
    target.finish(&text)?;
    Ok(true)
}

fn sweep(
    common: &Common,
    vary: &[Vary],
    steps: usize,
    figures: &[Figure],
    until: Option<&Requirement>,
    progress: &Progress,
) -> Result<Sweep, Failure> {
    let mut all: Vec<Vec<String>> = vec![Vec::new()];
    for vary in vary {
        let points = vary.points(steps);
        all = all.iter().flat_map(|before| points.iter().map(|value| [before.as_slice(), std::slice::from_ref(value)].concat())).collect();
    }
    let keys: Vec<String> = vary.iter().map(|vary| vary.key.clone()).collect();
    let of = all.len() as u64;
    let mut points = Vec::new();
    for (values, done) in all.into_iter().zip(0..) {
        progress.show("points", done, of);
        let budget = flown(common, &keys, &values)?;
        points.push(Point { values, figures: figures.iter().map(|figure| budget.value(*figure)).collect() });
    }
    let found = match (until, vary) {
        (Some(until), [one]) => Some(bisect(common, one, until)?),
        _ => None,
    };
    Ok(Sweep { keys, figures: figures.to_vec(), points, until: until.cloned(), found })
}

/// The budget with some keys set: what `couplet budget` with these settings gives.
fn flown(common: &Common, keys: &[String], values: &[String]) -> Result<Budget, Failure> {
    let settings = keys.iter().zip(values).map(|(key, value)| format!("{key}={value}"));
    let here = Common { settings: common.settings.iter().cloned().chain(settings).collect(), ..common.clone() };
    let (loaded, _) = load_quietly(&here).map_err(|(faults, document)| refused(&faults, document.as_deref()))?;
    let plan = plan(loaded.scenario, &here)?;
    let design = Design { precision: None, ..Design::of(&plan.scenario().settings) };
    let watch = Watch { progress: &|_, _, _| {}, stop: interrupt::listen() };
    let machine = |error: std::io::Error| Failure::Machine(format!("error: the lifetimes could not be flown to their end: {error}"));
    let mut sample = sample(&plan, design, &watch).map_err(machine)?;
    Budget::without_drivers(&plan, &mut sample).map_err(machine)
}

/// Where a requirement is just met, by bisection between the ends of a range; the value told has been flown.
fn bisect(common: &Common, vary: &Vary, until: &Requirement) -> Result<Found, Failure> {
    let Values::Range(from, to, unit) = &vary.values else { return Ok(Found::None("a list has no places between its values".to_owned())) };
    let keys = std::slice::from_ref(&vary.key);
    let at = |number: f64| -> Result<(String, Checked), Failure> {
        let value = written(number, unit);
        let budget = flown(common, keys, std::slice::from_ref(&value))?;
        Ok((value, Checked::new(until, budget.value(until.figure))))
    };
    let (first, last) = (at(*from)?, at(*to)?);
    if first.1.met == last.1.met {
        let word = if first.1.met { "met at both ends of the range" } else { "met at neither end of the range" };
        return Ok(Found::None(word.to_owned()));
    }
    let (mut yes, mut no, mut best) = if first.1.met { (*from, *to, first) } else { (*to, *from, last) };
    for _ in 0..HALVINGS {
        let middle = f64::midpoint(yes, no);
        let found = at(middle)?;
        if found.1.met {
            (yes, best) = (middle, found);
        } else {
            no = middle;
        }
    }
    Ok(Found::At { value: best.0, figure: best.1.value, beyond: written(no, unit) })
}

fn figure(name: &str) -> Result<Figure, Failure> {
    let known = Figure::NAMES.iter().map(|(name, _)| *name);
    if let Some((_, figure)) = Figure::NAMES.iter().find(|(known, _)| *known == name) {
        return Ok(*figure);
    }
    let help = crate::config::did_you_mean(name, known.clone())
        .unwrap_or_else(|| format!("write one of {}", known.collect::<Vec<_>>().join(", ")));
    Err(Failure::Input(format!("error: `{name}` is no figure of a sweep\n  = help: {help}")))
}

/// Reads `FIGURE <= BOUND` or `FIGURE >= BOUND`.
fn until(text: &str, vary: &[Vary]) -> Result<Requirement, Failure> {
    let refuse = |message: &str| {
        let help = "write `--until \"propellant_p95 <= 38 kg\"`";
        Failure::Input(format!("error: `--until {text}`: {message}\n  = help: {help}"))
    };
    if vary.len() != 1 {
        return Err(refuse("a place can be found along one varied key only"));
    }
    let most = text.split_once("<=").or_else(|| text.split_once('≤'));
    let least = text.split_once(">=").or_else(|| text.split_once('≥'));
    let (name, bound, make): (&str, &str, fn(f64) -> Bound) = match (most, least) {
        (Some((name, bound)), None) => (name, bound, Bound::AtMost),
        (None, Some((name, bound))) => (name, bound, Bound::AtLeast),
        _ => return Err(refuse("expected a figure, `<=` or `>=`, and a bound")),
    };
    let figure = figure(name.trim())?;
    let limit = figure.parse_bound(bound.trim()).map_err(|error| refuse(&error.message))?;
    Ok(Requirement { name: text.to_owned(), figure, scope: crate::layout::Scope::default(), bound: make(limit) })
}
