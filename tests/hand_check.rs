//! heron's secular momentum per day in its first phase against closed forms worked out by hand: docs/verification.md.
#![allow(clippy::unwrap_used, reason = "a helper of a test fails by panicking")]

mod support;

use couplet::lifetime::Plan;
use couplet::mission::Margin;
use couplet::momentum::Resolution;
use support::heron;

const DAY_S: f64 = 86_400.0;

/// The phase lasts 60 days, in which the orbit plane turns with the Sun by 59.1°: the mean of a vector that turns with it in
/// the equator is sin(x)/x of its length, x half the turn. Vectors along the pole do not turn.
fn turned() -> f64 {
    let half = 59.1_f64.to_radians() / 2.0;
    half.sin() / half
}

#[test]
fn secular_momentum_by_hand() {
    let plan = Plan::new(heron(&[]), Resolution::Default, Margin::NONE).unwrap();
    let phase = &plan.summary()[0];
    let program = |name: &str| phase.sources.iter().find(|(source, _, _)| *source == name).unwrap().2.norm();

    // 3 n² Ixz about the orbit normal; Ixz with the propellant by hand. Only the orbit's nodding is left out: 3 %.
    let n = 2.0 * std::f64::consts::PI / 5801.2;
    let gravity_gradient = 3.0 * n * n * 0.8916 * DAY_S * turned();
    // The component of the constant torque along the orbit normal: 3 %.
    let body = 0.5e-6 * DAY_S * turned();
    // Wing alone, in light for 64.5 % of the time: the bus is 4 % of its moment. The polar part does not turn: 6 %.
    let (beta, pressure) = (-22.94_f64.to_radians(), 1361.0 / 299_792_458.0 / 1.00748_f64.powi(2));
    let bracket = 0.92 * beta.cos() + 2.0 * (0.08 * beta.cos() + 0.12 / 3.0);
    let light = 2.3 * pressure * 5.2 * beta.cos() * bracket * 0.6453 * DAY_S;
    let (polar, equator) = (0.966, 0.258);
    let radiation = light * (f64::hypot(polar, equator * turned()));
    // Wing alone; density 1.564e-13 (1 + 0.437 cos) kg/m³ around the orbit: 15 %.
    let drag = 0.5 * 2.4 * 5.2 * 7626.0_f64.powi(2) * 2.3 * 1.564e-13 * 0.437 * (2.0 / (3.0 * std::f64::consts::PI)) * DAY_S * turned();
    // Axial dipole over a polar orbit: half of m_y B along the line of nodes: 12 %, for the tilts of orbit and dipole.
    let field = 2.9733e-5 * (6371.2_f64 / 6978.1).powi(3);
    let dipole = 0.5 * 0.3 * field * DAY_S * turned();

    for (name, hand, tolerance) in [
        ("gravity_gradient", gravity_gradient, 0.03),
        ("body_torque", body, 0.03),
        ("radiation", radiation, 0.06),
        ("drag", drag, 0.15),
        ("residual_dipole", dipole, 0.12),
    ] {
        let got = program(name);
        assert!((got - hand).abs() <= tolerance * hand, "{name}: hand {hand}, program {got}");
    }
}
