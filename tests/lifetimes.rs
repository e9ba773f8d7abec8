//! Draws and lifetimes: against closed forms of linear missions, and the blocked engine against the plain one.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use std::sync::atomic::AtomicBool;

use couplet::config::{Document, read};
use couplet::lifetime::{Outcome, Plan};
use couplet::mission::{Margin, Sampling, Scenario};
use couplet::momentum::Resolution;
use couplet::montecarlo::{Design, Figure, Sample, Watch, draws, quantile, sample};
use couplet::propellant::Row;
use couplet::pulses::Pricer;
use couplet::uncertain::ParameterId;
use nalgebra::Vector3;
use support::{SMALL, heron, scenario};

/// No disturbance but a constant torque about x, in an attitude that stands still among the stars: the wheels' momentum grows
/// by torque × time and every unload is a couple about x, so propellant is proportional to the torque.
const STEADY: [&str; 4] = [
    "surfaces=[]",
    "spacecraft.residual_dipole=0 0 0 A m2",
    "spacecraft.inertia=60 60 60 kg m2",
    "mission.phases=[{name: first, duration: 50 d, attitude: {axis: 0 0 1, to: {sky: {right_ascension: 10 deg, declination: 0 deg}}, second_axis: 0 1 0, towards: {sky: {right_ascension: 0 deg, declination: 90 deg}}}, unload: {every: 1 d}}, {name: second, duration: 50 d, attitude: {axis: 0 0 1, to: {sky: {right_ascension: 10 deg, declination: 0 deg}}, second_axis: 0 1 0, towards: {sky: {right_ascension: 0 deg, declination: 90 deg}}}, unload: {every: 1 d}}]",
];

fn plan(settings: &[&str]) -> Plan {
    Plan::new(scenario(SMALL, &[&STEADY[..], settings].concat()), Resolution::Default, Margin::NONE).unwrap()
}

fn design(plan: &Plan, lifetimes: u64) -> Design {
    Design { lifetimes, ..Design::of(&plan.scenario().settings) }
}

fn flown(plan: &Plan, design: Design) -> Sample {
    let stop = AtomicBool::new(false);
    sample(plan, design, &Watch { progress: &|_, _, _| {}, stop: &stop }).unwrap()
}

fn totals(plan: &Plan, lifetimes: u64) -> Vec<f64> {
    flown(plan, design(plan, lifetimes)).store.column(Figure::AttitudeTotal.column()).unwrap()
}

fn id(plan: &Plan, name: &str) -> ParameterId {
    let parameters = &plan.scenario().parameters;
    let place = parameters.as_slice().iter().position(|p| p.name == name).unwrap_or_else(|| panic!("{name}"));
    parameters.ids().nth(place).unwrap()
}

fn mean_and_sd(values: &[f64]) -> (f64, f64) {
    let n = values.len() as f64;
    let mean = values.iter().sum::<f64>() / n;
    (mean, (values.iter().map(|x| (x - mean).powi(2)).sum::<f64>() / (n - 1.0)).sqrt())
}

fn correlation(a: &[f64], b: &[f64]) -> f64 {
    let ((ma, sa), (mb, sb)) = (mean_and_sd(a), mean_and_sd(b));
    a.iter().zip(b).map(|(a, b)| (a - ma) * (b - mb)).sum::<f64>() / (a.len() as f64 - 1.0) / (sa * sb)
}

/// 1 mN m ± 10 % about x for 100 days are 8640 N m s, at 1/6000 kg per N m s (two thrusters on 2 m arms, 1500 m/s): 2.88 kg,
/// normal with 10 %. Closed form: P95 = mean + 1.644854 sigma; its standard error √(p(1−p)/n)/f, four of them allowed.
#[test]
fn a_linear_gaussian_mission_has_its_p95() {
    let plan = plan(&["spacecraft.body_torque=1e-3 0 0 ± 1e-4 0 0 N m"]);
    let mean = 1e-3 * 8.64e6 / (2.0 * 1500.0);
    let nominal = plan.fly(plan.nominal()).attitude_total_kg();
    assert!((nominal - mean).abs() < 1e-9 * mean, "{nominal} {mean}");
    let n = 20_000;
    let mut found = totals(&plan, n);
    found.sort_by(f64::total_cmp);
    let p95 = quantile(&found, 0.95, 0.95);
    let (z, density) = (1.644_854, 0.103_136);
    let sigma = 0.1 * mean;
    let error = (0.95 * 0.05 / n as f64).sqrt() / density * sigma;
    assert!((p95.value - (mean + z * sigma)).abs() < 4.0 * error, "{p95:?}");
    assert!(p95.lower.unwrap() < p95.value && p95.value < p95.upper.unwrap());
    let (low, high) = p95.two_sided.unwrap();
    assert!(low <= p95.lower.unwrap() && high >= p95.upper.unwrap());
}

/// Correlated torques: the coefficient comes back within four standard errors, (1 − r²)/√n; what is not correlated stays so.
#[test]
fn correlation_is_recovered() {
    let plan = plan(&[
        "spacecraft.body_torque=1e-3 1e-3 1e-3 ± 1e-4 1e-4 1e-4 N m",
        "uncertainty.correlations=[{quantities: [spacecraft.body_torque.x, spacecraft.body_torque.z], coefficient: -0.7}]",
    ]);
    let n = 20_000;
    let drawn = draws(&plan, &design(&plan, 20_000), 0, n);
    let column = |name: &str| -> Vec<f64> { drawn.iter().map(|draw| draw.value(id(&plan, name))).collect() };
    let [x, y, z] = ["x", "y", "z"].map(|axis| column(&format!("spacecraft.body_torque.{axis}")));
    let root = (n as f64).sqrt();
    assert!((correlation(&x, &z) + 0.7).abs() < 4.0 * (1.0 - 0.49) / root, "{}", correlation(&x, &z));
    assert!(correlation(&x, &y).abs() < 4.0 / root && correlation(&y, &z).abs() < 4.0 / root);
    // Each keeps its own distribution.
    let (mean, sd) = mean_and_sd(&z);
    assert!((mean - 1e-3).abs() < 4.0 * 1e-4 / root && (sd - 1e-4).abs() < 4.0 * 1e-4 / (2.0 * n as f64).sqrt());
}

/// Correlations that contradict one another are refused with a line and a remedy: 0.9, 0.9 and −0.9 among three.
#[test]
fn contradictions_are_refused() {
    let refused = |correlations: &str| {
        let setting = format!("uncertainty.correlations={correlations}");
        let settings = [&STEADY[..], &["spacecraft.body_torque=1e-3 1e-3 1e-3 ± 1e-4 1e-4 1e-4 N m", &setting]].concat();
        let none: &[(&str, &str)] = &[];
        let document = Document::from_text("test.yaml", SMALL, none, &settings).unwrap();
        let faults = read(&document).and_then(|spec| Scenario::new(&spec)).unwrap_err();
        couplet::config::render_all(&faults, Some(&document), false)
    };
    let all = "quantities: [spacecraft.body_torque.x, spacecraft.body_torque.y, spacecraft.body_torque.z]";
    let text = refused(&format!("[{{{all}, matrix: [[1, 0.9, 0.9], [0.9, 1, -0.9], [0.9, -0.9, 1]]}}]"));
    assert!(text.contains("not positive definite") && text.contains("help"), "{text}");
    assert!(refused("[{quantities: [spacecraft.body_torque], coefficient: 0.5}]").contains("is a vector"));
    assert!(refused("[{quantities: [spacecraft.body_torqe.x], coefficient: 0.5}]").contains("spacecraft.body_torque.x"));
    assert!(refused(&format!("[{{{all}, matrix: [[1, 0.9], [0.9, 1]]}}]")).contains("3 rows of 3"));
    assert!(refused(&format!("[{{{all}, matrix: [[1, 0.9, 0], [0.1, 1, 0], [0, 0, 1]]}}]")).contains("symmetric"));
}

/// Drawn for each of two equal phases, the two halves scatter independently: the spread of the sum is 1/√2 of that of one draw
/// for both. Both within four standard errors of a standard deviation, 1/√(2n).
#[test]
fn draws_for_each_phase_average_out() {
    let torque = "spacecraft.body_torque=1e-3 0 0 ± 1e-4 0 0 N m";
    let n = 4096;
    let once = mean_and_sd(&totals(&plan(&[torque]), n)).1;
    let drawn = "uncertainty.drawn=[{quantities: [spacecraft.body_torque], for_each: phase}]";
    let anew = plan(&[torque, drawn]);
    let each = mean_and_sd(&totals(&anew, n)).1;
    assert!((each / once * 2.0_f64.sqrt() - 1.0).abs() < 8.0 / (2.0 * n as f64).sqrt(), "{each} {once}");
    // One by one as in blocks.
    let drawn = draws(&anew, &design(&anew, n), 0, 64);
    agree(&anew, &drawn);
}

fn agree(plan: &Plan, drawn: &[couplet::uncertain::Draw]) {
    for (draw, outcome) in drawn.iter().zip(plan.fly_block(drawn)) {
        let single: Outcome = plan.fly(draw);
        for (a, b) in single.rows_kg.iter().zip(outcome.rows_kg) {
            assert!((a - b).abs() <= 1e-12 * b.abs().max(1e-3), "{a} {b}");
        }
        for (a, b) in single.wear.cycles.iter().zip(&outcome.wear.cycles) {
            assert!((a - b).abs() <= 1e-9 * b.abs().max(1.0), "{a} {b}");
        }
    }
}

/// Twenty-five burns, each with its own Δv, scatter by 1/√25 of what one draw for all does (closed form: small burns add up).
#[test]
fn draws_for_each_event_average_out() {
    let phases =
        "mission.phases=[{name: only, duration: 100 d, events: [{name: burn, burn: {delta_v: 0.1 ± 0.01 m/s, count: 25, engine: main}}]}]";
    let engine = "engines=[{name: main, thrust: 20 N, exhaust_speed: 2000 m/s, position: 0 0 -1 m, push: 0 0 1}]";
    let fly = |more: &[&str]| {
        let plan = plan(&[&[engine, phases], more].concat());
        let mut sample = flown(&plan, design(&plan, 4096));
        mean_and_sd(&sample.store.column(Figure::Row(Row::OrbitBurns.index()).column()).unwrap())
    };
    let once = fly(&[]);
    let each = fly(&["uncertainty.drawn=[{quantities: [only.burn.delta_v], for_each: event}]"]);
    assert!((each.1 / once.1 * 5.0 - 1.0).abs() < 8.0 / (2.0 * 4096.0_f64).sqrt(), "{each:?} {once:?}");
    assert!((each.0 / once.0 - 1.0).abs() < 4.0 * 0.1 / 64.0);
}

/// A quantity more changes no draw of the others, and a setting changes nothing but itself.
#[test]
fn draws_do_not_depend_on_other_quantities() {
    let few = plan(&["spacecraft.body_torque=1e-3 0 0 ± 1e-4 0 0 N m"]);
    let more = plan(&[
        "spacecraft.body_torque=1e-3 0 0 ± 1e-4 0 0 N m",
        "propulsion.exhaust_speed=1500 m/s ± 2 %",
        "spacecraft.dry_mass=100 ± 1 kg",
    ]);
    let of = |plan: &Plan| -> Vec<u64> {
        let torque = id(plan, "spacecraft.body_torque.x");
        draws(plan, &design(plan, 100), 7, 50).iter().map(|draw| draw.value(torque).to_bits()).collect()
    };
    assert_eq!(of(&few), of(&more));
}

/// A string that fails in year three with 20 %: that share of lifetimes pays for it within four binomial standard errors. With
/// one of two opposite couples lost about x there is no pure torque about +x; with net force allowed there is.
#[test]
fn a_thruster_that_fails() {
    let failure = |net: &str| format!("propulsion.failures=[{{name: valve, out: X2, from: 50 d, probability: 20 %, net_force: {net}}}]");
    let torque = "spacecraft.body_torque=-1e-3 0 0 N m";
    let n = 4096_u64;
    let share = |plan: &Plan, figure: Figure, over: f64| {
        let column = flown(plan, design(plan, n)).store.column(figure.column()).unwrap();
        column.iter().filter(|value| **value > over).count() as f64 / n as f64
    };
    let error = 4.0 * (0.2 * 0.8 / n as f64).sqrt();
    // A torque of −x must be met by +x: the couple X1 and X2.
    let strict = plan(&[torque, &failure("zero")]);
    assert!((share(&strict, Figure::Unserved, 0.0) - 0.2).abs() < error);
    let free = plan(&[torque, &failure("any")]);
    assert!(share(&free, Figure::Unserved, 0.0) < 1e-12);
    let nominal = free.fly(free.nominal());
    assert!(nominal.unserved < 1e-12, "the nominal mission has no failure");
    // X1 alone has the same arm: it takes the other half over at the same price, so the propellant stays.
    let used = flown(&free, design(&free, 64)).store.column(Figure::AttitudeTotal.column()).unwrap();
    assert!(used.iter().all(|kg| (kg - nominal.attitude_total_kg()).abs() < 1e-9 * kg));
}

/// Values with probabilities, and a sample, come back with their shares.
#[test]
fn discrete_and_empirical_quantities() {
    let plan = plan(&[
        "propulsion.exhaust_speed={discrete: [{value: 1500 m/s, probability: 70 %}, {value: 1200 m/s, probability: 30 %}]}",
        "spacecraft.dry_mass={empirical: {values: [99, 100, 100, 101, 250], unit: kg}}",
    ]);
    let n = 10_000;
    let drawn = draws(&plan, &design(&plan, 10_000), 0, n);
    let share =
        |name: &str, value: f64| drawn.iter().filter(|draw| (draw.value(id(&plan, name)) - value).abs() < 1e-9).count() as f64 / n as f64;
    for (name, value, probability) in [
        ("propulsion.exhaust_speed", 1200.0, 0.3),
        ("propulsion.exhaust_speed", 1500.0, 0.7),
        ("spacecraft.dry_mass", 100.0, 0.4),
        ("spacecraft.dry_mass", 250.0, 0.2),
    ] {
        let error = 4.0 * (probability * (1.0 - probability) / n as f64).sqrt();
        assert!((share(name, value) - probability).abs() < error, "{name} {value}");
    }
    assert!((plan.nominal().value(id(&plan, "propulsion.exhaust_speed")) - 1500.0).abs() < 1e-9, "the most probable value is nominal");
    assert!((plan.nominal().value(id(&plan, "spacecraft.dry_mass")) - 100.0).abs() < 1e-9, "the median is nominal");
}

/// A centre of mass drawn elsewhere changes the price where a net force is allowed, as a layout made for that centre says, and
/// not at all without one.
#[test]
fn a_centre_of_mass_moves_the_arms_of_thrusters() {
    let torque = "spacecraft.body_torque=1e-3 2e-4 0 N m";
    let centre = "spacecraft.centre_of_mass=0 0 0 ± 0.02 0.02 0.02 m";
    let pure = plan(&[torque, centre]);
    let kg: Vec<f64> = totals(&pure, 64);
    assert!(mean_and_sd(&kg).1 < 1e-12, "couples have no reference point");
    let free = plan(&[torque, centre, "propulsion.net_force=any", "tank.loaded=0.001 kg"]);
    let drawn = draws(&free, &design(&free, 64), 0, 64);
    let vehicle = free.vehicle();
    let torque_impulse = Vector3::new(1e-3, 2e-4, 0.0) * 8.64e6;
    for (draw, outcome) in drawn.iter().zip(free.fly_block(&drawn)) {
        let at = Vector3::from(["x", "y", "z"].map(|axis| draw.value(id(&free, &format!("spacecraft.centre_of_mass.{axis}")))));
        let exact = Pricer::new(&vehicle.propulsion, &at).price_map().price(&-torque_impulse);
        let couplet::authority::Price::Served { kg } = exact else { panic!("not served") };
        let got = outcome.row(Row::WheelUnloading);
        // On-board software does not know the centre that was drawn: where choices cost the same it may take arms of 2 m − δ and
        // not of 2 m + δ, about x and about y, and the torque that these leave across takes a third firing: four times δ/2 m in
        // all. It is never cheaper.
        let dearest = 1.0 + 4.0 * at.norm() / 2.0;
        assert!(got >= kg * (1.0 - 1e-6) && got <= kg * dearest, "{got} {kg}");
    }
    assert!(mean_and_sd(&totals(&free, 64)).1 > 1e-4);
    agree(&free, &drawn);
}

/// Blocks and single flights agree for every demo, unloading at a fill, blowdown, waiting and net force among them.
#[test]
fn blocks_give_what_single_flights_give_in_every_demo() {
    for text in [
        include_str!("../configs/heron.yaml"),
        include_str!("../configs/skua.yaml"),
        include_str!("../configs/ternlet.yaml"),
        include_str!("../configs/petrel.yaml"),
    ] {
        let plan = Plan::new(scenario(text, &[]), Resolution::Default, Margin::NONE).unwrap();
        agree(&plan, &draws(&plan, &design(&plan, 100), 3, 11));
    }
}

/// In a Latin hypercube every one of n equal parts of each distribution holds one draw, so that the mean of a linear mission
/// scatters far less than that of plain draws; its limits come from replicates.
#[test]
fn latin_hypercubes_cover_every_part() {
    let torque = "spacecraft.body_torque=1e-3 0 0 ± 1e-4 0 0 N m";
    let cubes = plan(&[torque, "budget.sampling=latin_hypercube", "budget.replicates=10", "budget.lifetimes=2000"]);
    let asked = Design::of(&cubes.scenario().settings);
    assert_eq!((asked.sampling, asked.replicates()), (Sampling::LatinHypercube(10), Some((200, 10))));
    let torque_x = id(&cubes, "spacecraft.body_torque.x");
    let spread = &cubes.scenario().parameters.as_slice()[0].spread;
    for cube in 0..10 {
        let mut parts: Vec<u16> = draws(&cubes, &asked, cube * 200, 200)
            .iter()
            .map(|draw| {
                let within = |k: &u16| draw.value(torque_x) <= spread.quantile((f64::from(*k) + 1.0) / 200.0);
                (0..200).find(within).unwrap_or(199)
            })
            .collect();
        parts.sort_unstable();
        assert_eq!(parts, (0..200).collect::<Vec<_>>(), "cube {cube}");
    }
    let kg = totals(&cubes, 2000);
    let mean = mean_and_sd(&kg).0;
    let exact = 1e-3 * 8.64e6 / 3000.0;
    // Plain draws: 0.1/√2000 = 0.22 %; a hypercube of one quantity is exact to about its part, some 0.01 %.
    assert!((mean / exact - 1.0).abs() < 3e-4, "{mean} {exact}");
}

/// Drawing goes on until the interval is narrow enough, or to the cap, and says which.
#[test]
fn precision_ends_a_run() {
    use couplet::montecarlo::Ended;
    let torque = "spacecraft.body_torque=1e-3 0 0 ± 1e-4 0 0 N m";
    let narrow = plan(&[torque, "budget.precision={width: 1 %}"]);
    let done = flown(&narrow, Design::of(&narrow.scenario().settings));
    let Ended::Precise(width) = done.ended else { panic!("{:?}", done.ended) };
    // Closed form: width = 2 z √(p(1−p)/n)/(f μ') with z = 1.96, σ = 10 %: n near 2,400 for 1 %.
    assert!(width <= 0.01 && (1024..20_000).contains(&done.store.rows()), "{width} {}", done.store.rows());
    let capped = plan(&[torque, "budget.precision={width: 0.1 %, at_most: 3000}"]);
    let done = flown(&capped, Design::of(&capped.scenario().settings));
    assert!(matches!(done.ended, Ended::Cap(Some(width)) if width > 0.001), "{:?}", done.ended);
    assert_eq!(done.store.rows(), 3000);
}

/// heron stopped before its first wave has no lifetimes, and says so.
#[test]
fn a_stopped_run_says_so() {
    let plan = Plan::new(heron(&[]), Resolution::Default, Margin::NONE).unwrap();
    let stop = AtomicBool::new(true);
    let done = sample(&plan, design(&plan, 10_000), &Watch { progress: &|_, _, _| {}, stop: &stop }).unwrap();
    assert_eq!((done.ended, done.store.rows()), (couplet::montecarlo::Ended::Stopped, 0));
}
