//! Missions that cannot be flown are told where and why, and both resolutions agree on the demonstration missions.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

use couplet::config::{Document, read};
use couplet::lifetime::Plan;
use couplet::mission::{Margin, Scenario};
use couplet::momentum::Resolution;

const DEMOS: [(&str, &str); 5] = [
    ("heron", include_str!("../configs/heron.yaml")),
    ("petrel", include_str!("../configs/petrel.yaml")),
    ("skua", include_str!("../configs/skua.yaml")),
    ("ternlet", include_str!("../configs/ternlet.yaml")),
    ("dunlin", include_str!("../configs/dunlin.yaml")),
];

fn demo(name: &str) -> &'static str {
    DEMOS.iter().find(|(own, _)| *own == name).unwrap().1
}

fn scenario(name: &str, settings: &[&str]) -> Result<Scenario, Vec<String>> {
    let none: &[(&str, &str)] = &[];
    let document = Document::from_text("test.yaml", demo(name), none, settings).unwrap();
    let told = |faults: Vec<couplet::config::Diagnostic>| {
        // Every fault has a remedy.
        assert!(faults.iter().all(|fault| fault.help.as_ref().is_some_and(|help| !help.is_empty())));
        faults.iter().map(|fault| fault.message.clone()).collect::<Vec<_>>()
    };
    Scenario::new(&read(&document).map_err(told)?).map_err(told)
}

fn refused(name: &str, setting: &str, expected: &str) {
    let faults = scenario(name, &[setting]).unwrap_err();
    assert!(faults.iter().any(|message| message.contains(expected)), "{setting}\n{faults:?}");
}

#[test]
fn orbits_that_cannot_be() {
    let orbit = |text: &str, expected: &str| refused("heron", &format!("mission.orbit={text}"), expected);
    orbit("{about: mars, perigee_altitude: -50 km, apogee_altitude: 900 km, inclination: 90 deg}", "above the surface of Mars");
    orbit("{semi_major_axis: 8000 km, eccentricity: 1.1, inclination: 3 deg}", "expected an eccentricity from 0 to below 1, got 1.1");
    orbit("{about: pluto, altitude: 300 km}", "must be one of `earth`, `moon`, `mars`, `venus`, `mercury`, `sun`, `body`");
    orbit("{about: {body: {radius: 3 km}}, altitude: 300 km}", "gravitational_parameter` is missing");
    orbit("{lagrange: l2, altitude: 300 km, inclination: 3 deg}", "goes without another way");
    orbit("{lagrange: l6}", "must be one of `l1`, `l2`");
    orbit("{about: mars, stationary: {longitude: 3 deg}}", "known for the Earth only");
    orbit("{about: venus, altitude: 300 km, local_time: 10 h}", "no inclination makes an orbit of this size Sun-synchronous");
    orbit("{inclination: 30 deg}", "expected the size of the orbit in one way");
}

#[test]
fn attitudes_that_cannot_be() {
    let attitude = |text: &str, expected: &str| refused("heron", &format!("mission.phases[science].attitude={text}"), expected);
    attitude("{to: sun, towards: anti_sun}", "lie along one line");
    attitude("{to: nadir, towards: earth}", "lie along one line, so the attitude about it is undefined (at 20");
    attitude("{to: ecliptic_north, towards: {sky: {right_ascension: 270 deg, declination: 66.5607 deg}}}", "lie along one line");
    attitude("{axis: 0 0 1, to: sun, second_axis: 0 0 -2}", "the second axis lies along the first");
    attitude("{axis: 0 0 0}", "got the zero vector");
    attitude("{survey: {sun_angle_from: 120 deg, sun_angle_to: 60 deg, dwell: 1 h}}", "the least angle from the Sun is over the largest");
    attitude("{survey: {sun_angle_from: 10 deg, sun_angle_to: 200 deg, dwell: 1 h}}", "expected an angle from 0 to 180 deg");
    attitude("{survey: {sun_angle_from: 10 deg, sun_angle_to: 60 deg, dwell: 0 h}}", "expected a time above zero");
    attitude("{to: sun, survey: {sun_angle_from: 10 deg, sun_angle_to: 60 deg, dwell: 1 h}}", "a survey goes without `to` and `spin`");
    attitude("{mix: {period: 1 d, of: [{share: 40 %}, {share: 40 %, to: sun}]}}", "the shares add up to 0.8000");
    attitude("{axis: 1 0 0, mix: {period: 1 d, of: [{share: 100 %}]}}", "goes without the keys of a single attitude");
    attitude("{to: moon}", "must be one of `nadir`");
    refused("ternlet", "mission.phases[observing].unload.timing=cheapest", "no orbit whose points could be compared");
    refused(
        "ternlet",
        "mission.phases[observing].attitude={axis: 0 0 -1, to: sun, second_axis: 1 0 0, towards: earth}",
        "lie along one line, so the attitude about it is undefined (at 2031-09",
    );
}

#[test]
fn surroundings_that_cannot_be() {
    refused("heron", "environment.solar_activity=null", "passes through the Earth's air");
    refused("heron", "environment.solar_activity={level: low, f107: 90}", "expected one of `level`, `f107` and `cycle`");
    refused(
        "heron",
        "environment.solar_activity={cycle: {start: \"2031-01-01\", period: 11 yr, low: 200, high: 100}}",
        "minimum lies above",
    );
    refused("heron", "environment.solar_activity={cycle: {start: \"soon\", period: 11 yr, low: 70, high: 100}}", "is not a date");
    refused("heron", "environment.accommodation={normal: 0.9 ± 0.1, tangential: 0.9}", "expected an accommodation from 0 to 1");
    refused("heron", "environment.albedo=1.2", "expected a share of light from 0 to 1");
    refused("dunlin", "environment.atmosphere.scale_height=0 km", "expected a height above zero");
    refused("heron", "surfaces[bus +x].shaded={by: wingg, to: 3 deg}", "`wingg` is no other surface");
    refused("heron", "surfaces[bus +x].shaded={by: bus +x, to: 3 deg}", "`bus +x` is no other surface");
    refused("heron", "surfaces[bus +x].shaded={by: wing, from: 9 deg, to: 3 deg}", "0 ≤ `from` ≤ `to`");
    refused("heron", "budget.tolerance=90 %", "expected a tolerance from 0.001 to 0.2");
}

/// Secular momentum of a day and cyclic together, as a share of what the wheels hold before an unload, by both
/// resolutions: within the tolerance of 1 % on a shortened version of each demonstration mission.
#[test]
fn both_resolutions_agree_on_every_demonstration() {
    for (name, phases) in [
        ("heron", "[{name: a, duration: 40 d, unload: {every: 1 d}}]"),
        ("petrel", "[{name: a, duration: 90 d, unload: {at_fill: 60 %}}]"),
        ("skua", "[{name: a, duration: 40 d, unload: {every: 2 d}}]"),
        (
            "ternlet",
            "[{name: a, duration: 280 d, unload: {every: 7 d}, attitude: {axis: 1 0 0, second_axis: 0 0 -1, \
             survey: {sun_angle_from: 65 deg, sun_angle_to: 115 deg, dwell: 12 h}}}]",
        ),
        (
            "dunlin",
            "[{name: a, duration: 60 d, unload: {every: 2 d}, attitude: {mix: {period: 1 d, of: [{share: 70 %}, \
             {share: 30 %, axis: -1 0 0, to: earth, second_axis: 0 1 0, towards: ecliptic_north}]}}}]",
        ),
    ] {
        let flown = |resolution: Resolution| {
            let plan = Plan::new(scenario(name, &[&format!("mission.phases={phases}")]).unwrap(), resolution, Margin::NONE).unwrap();
            let windows: Vec<f64> = (0..plan.strata().len())
                .flat_map(|k| {
                    let (windows, rate) = plan.nominal_unloads(k);
                    // Per day: the intervals of a fill differ.
                    windows.into_iter().map(move |h| h.norm() / rate.unwrap().interval_s * 86_400.0)
                })
                .collect();
            let used = plan.convergence()[0];
            assert!(resolution == Resolution::Full || used.is_met(), "{name}: {used:?}");
            (windows.iter().sum::<f64>() / windows.len() as f64, plan.summary()[0].cyclic_n_m_s, used)
        };
        let ((default, default_cyclic, used), (full, full_cyclic, _)) = (flown(Resolution::Default), flown(Resolution::Full));
        let held = full + full_cyclic;
        let off = ((default - full).abs() + (default_cyclic - full_cyclic).abs()) / held;
        assert!(off <= 0.01, "{name}: {off}; {default} {full}, {default_cyclic} {full_cyclic}; {used:?}");
    }
}

/// A finer tolerance asks for finer steps or more strata, and finds less to differ.
#[test]
fn a_finer_tolerance_is_met_with_more_work() {
    let used = |tolerance: &str| {
        let settings = ["mission.phases=[{name: a, duration: 90 d, unload: {every: 1 d}}]", &format!("budget.tolerance={tolerance}")];
        let plan = Plan::new(scenario("heron", &settings).unwrap(), Resolution::Default, Margin::NONE).unwrap();
        plan.convergence()[0]
    };
    let (coarse, fine) = (used("5 %"), used("0.3 %"));
    assert!(fine.steps > coarse.steps, "{coarse:?} {fine:?}");
    assert!(fine.step_error < coarse.step_error);
    assert!((fine.tolerance - 0.003).abs() < 1e-12);
}
