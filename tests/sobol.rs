//! Sensitivity indices against functions whose indices are known in closed form.

use std::f64::consts::PI;

use couplet::montecarlo::{Indices, indices};

const BASE: usize = 1 << 15;

fn names(count: usize) -> Vec<String> {
    (1..=count).map(|column| format!("x{column}")).collect()
}

fn alone(count: usize) -> Vec<Vec<usize>> {
    (0..count).map(|column| vec![column]).collect()
}

fn ishigami(uniforms: &[f64], rows: usize) -> Vec<f64> {
    let results: Vec<f64> = uniforms
        .chunks(3)
        .map(|row| {
            let x = |column: usize| PI * (2.0 * row[column] - 1.0);
            x(0).sin() + 7.0 * x(1).sin().powi(2) + 0.1 * x(2).powi(4) * x(0).sin()
        })
        .collect();
    assert_eq!(results.len(), rows);
    results
}

fn check(found: &Indices, first_order: &[f64], total: &[f64], tolerance: f64) {
    for (found, truth) in [(&found.first_order, first_order), (&found.total, total)] {
        assert_eq!(found.len(), truth.len());
        for (found, truth) in found.iter().zip(truth) {
            assert!((found - truth).abs() < tolerance, "{found} for {truth}");
        }
    }
    let intervals = found.first_order_interval.iter().chain(&found.total_interval);
    for ((low, high), estimate) in intervals.zip(found.first_order.iter().chain(&found.total)) {
        assert!(low < estimate && estimate < high || (high - low) < 1e-9, "{low} {estimate} {high}");
        assert!(high - low < 4.0 * tolerance);
    }
}

// Ishigami function with a = 7, b = 0.1: closed form, values from memory and recomputed. The tolerance
// is four standard deviations of an estimate, about 1 / sqrt(BASE) = 0.0055 each.
#[test]
fn ishigami_function() {
    let found = indices(&alone(3), &names(3), BASE, 1, &ishigami);
    // The relative standard deviation of a variance is below sqrt(2 / (2 BASE)) = 0.0055: four of them.
    assert!((found.variance / 13.844_588 - 1.0).abs() < 0.022, "{}", found.variance);
    check(&found, &[0.313_905, 0.442_411, 0.0], &[0.557_589, 0.442_411, 0.243_684], 0.022);
}

// Ishigami with x1 and x3 as one driver: S1 + S3 + S13, and x2 is additive, so both shares agree.
#[test]
fn columns_of_one_driver_count_together() {
    let found = indices(&[vec![0, 2], vec![1]], &names(3), BASE, 2, &ishigami);
    check(&found, &[0.557_589, 0.442_411], &[0.557_589, 0.442_411], 0.022);
}

// Sobol's g-function, a = (0, 1, 4.5, 9, 99, 99, 99, 99): closed form, as published test values.
#[test]
fn g_function() {
    let a = [0.0, 1.0, 4.5, 9.0, 99.0, 99.0, 99.0, 99.0];
    let g = |uniforms: &[f64], _: usize| -> Vec<f64> {
        let factor = |(x, a): (&f64, &f64)| ((4.0 * x - 2.0).abs() + a) / (1.0 + a);
        uniforms.chunks(8).map(|row| row.iter().zip(&a).map(factor).product()).collect()
    };
    let found = indices(&alone(8), &names(8), BASE, 3, &g);
    assert!((found.variance / 0.465_424 - 1.0).abs() < 0.022, "{}", found.variance);
    let first_order = [0.716_192, 0.179_048, 0.023_675_8, 0.007_161_92, 7.161_92e-5, 7.161_92e-5, 7.161_92e-5, 7.161_92e-5];
    let total = [0.787_144, 0.242_198, 0.034_316_9, 0.010_460_4, 1.049_49e-4, 1.049_49e-4, 1.049_49e-4, 1.049_49e-4];
    check(&found, &first_order, &total, 0.025);
    // A difference of two equal rows but one column scales with its effect: small totals are sharp.
    assert!((found.total[7] / 1.049_49e-4 - 1.0).abs() < 0.05, "{}", found.total[7]);
}

#[test]
fn the_answer_does_not_depend_on_the_threads() {
    let one = rayon::ThreadPoolBuilder::new().num_threads(1).build().expect("a pool of one thread");
    let serial = one.install(|| indices(&alone(3), &names(3), 1000, 5, &ishigami));
    assert_eq!(serial, indices(&alone(3), &names(3), 1000, 5, &ishigami));
}

#[test]
fn blocks_are_bounded() {
    let bounded = |uniforms: &[f64], rows: usize| {
        assert!(rows <= 256 && uniforms.len() == 3 * rows);
        ishigami(uniforms, rows)
    };
    assert!(indices(&alone(3), &names(3), 1001, 5, &bounded).variance > 0.0);
}

#[test]
fn a_result_that_does_not_vary_has_no_drivers() {
    let constant = |_: &[f64], rows: usize| vec![0.1; rows];
    for base in [0, 1, 777] {
        let found = indices(&alone(2), &names(2), base, 1, &constant);
        let values = found.first_order.iter().chain(&found.total).chain(std::iter::once(&found.variance));
        assert!(values.into_iter().all(|value| value.abs() < f64::MIN_POSITIVE));
        assert!(found.total_interval.iter().all(|(low, high)| low.abs() + high.abs() < f64::MIN_POSITIVE));
    }
}

#[test]
fn a_result_that_is_not_a_number_shows() {
    let broken = |_: &[f64], rows: usize| vec![f64::NAN; rows];
    assert!(indices(&alone(1), &names(1), 10, 1, &broken).total[0].is_nan());
}
