//! Rarefied gas on a plate against limits and against a sum over the velocities of its molecules.

use couplet::disturbance::plate_coefficients;
use couplet::environment::Gas;

const BOLTZMANN: f64 = 1.380_649e-23;

fn gas() -> Gas {
    Gas { density_kg_per_m3: 1e-12, temperature_k: 900.0, molecular_mass_kg: 2.657e-26 }
}

fn thermal() -> f64 {
    (2.0 * BOLTZMANN * 900.0 / 2.657e-26_f64).sqrt()
}

/// Full accommodation on a cold wall at great speed: pressure 2 cos²θ and shear 2 sinθ cosθ, so that `C_D` of a plate square
/// to the flow is 2 (D-08); a mirror gives 4 cos²θ.
#[test]
fn the_limit_of_great_speed() {
    let fast = 60.0 * thermal();
    for degrees in [0.0, 30.0, 60.0, 80.0] {
        let (sin, cos) = f64::to_radians(degrees).sin_cos();
        let c = plate_coefficients(fast, cos, &gas(), 1e-9);
        // Thermal motion still adds 1/S², 3e-4.
        assert!((c.mirror + c.normal - 2.0 * cos * cos).abs() < 1e-3, "{degrees}");
        assert!((c.mirror - 4.0 * cos * cos).abs() < 2e-3, "{degrees}");
        assert!((c.tangential * sin - 2.0 * sin * cos).abs() < 1e-3, "{degrees}");
    }
    // The lee of it meets nothing.
    let lee = plate_coefficients(fast, -0.8, &gas(), 300.0);
    assert!(lee.mirror.abs() < 1e-12 && lee.normal.abs() < 1e-12 && lee.tangential.abs() < 1e-12);
}

/// Momentum that Maxwell's molecules bring to a moving plate, summed over a grid of their velocities: an integration that
/// knows nothing of error functions. Diffuse re-emission at the wall's temperature leaves with the pressure of a gas of
/// that temperature that loses as many molecules: N √(π k Tw m / 2) (kinetic theory of gases).
#[test]
fn against_a_sum_over_molecules() {
    let (u, wall) = (thermal(), 300.0);
    let mass = 2.657e-26;
    for speed_ratio in [0.5, 2.0, 7.0] {
        for cos in [1.0, 0.6, 0.1, -0.2] {
            let v = speed_ratio * u;
            let (vn, vt) = (v * cos, v * (1.0_f64 - cos * cos).sqrt());
            // In units of u: normal speed towards the plate w = vn + ξ > 0, with ξ of density e^(−ξ²)/√π.
            let (mut flux, mut pressure) = (0.0, 0.0);
            let n = 400_000;
            for k in 0..n {
                let w = 0.0 + (f64::from(k) + 0.5) / f64::from(n) * (speed_ratio + 8.0);
                let density = (-(w - vn / u).powi(2)).exp() / std::f64::consts::PI.sqrt() * (speed_ratio + 8.0) / f64::from(n);
                flux += w * density;
                pressure += w * w * density;
            }
            // Per unit of ρ: number flux N = ρ/m u flux, arriving pressure ρ u² pressure, shear ρ u flux vt.
            let dynamic = 0.5 * v * v;
            let leaving = u * flux * (std::f64::consts::PI * BOLTZMANN * wall / (2.0 * mass)).sqrt();
            let diffuse = (u * u * pressure + leaving) / dynamic;
            let mirror = 2.0 * u * u * pressure / dynamic;
            let c = plate_coefficients(v, cos, &gas(), wall);
            let sin = (1.0_f64 - cos * cos).sqrt();
            // The grid ends 8 thermal speeds out (e^−64) and is fine to 1e-9; erf of the library is good to 1e-10.
            let close = |got: f64, expected: f64| (got - expected).abs() < 1e-7 * (1.0 + expected.abs());
            assert!(close(c.mirror, mirror), "S {speed_ratio} cos {cos}: {} {mirror}", c.mirror);
            assert!(close(c.mirror + c.normal, diffuse), "S {speed_ratio} cos {cos}: {} {diffuse}", c.mirror + c.normal);
            assert!(close(c.tangential * sin, u * flux * vt / dynamic), "S {speed_ratio} cos {cos}");
        }
    }
}

/// No gas and no speed make no force and no fault.
#[test]
fn nothing_for_nothing() {
    let none = plate_coefficients(0.0, 0.5, &gas(), 300.0);
    assert!(none.mirror.abs() + none.normal.abs() + none.tangential.abs() < 1e-300);
    let vacuum = plate_coefficients(7000.0, 0.5, &Gas::default(), 300.0);
    assert!(vacuum.mirror.is_finite() && vacuum.normal.is_finite() && vacuum.tangential.is_finite());
}
