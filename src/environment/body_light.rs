//! Light and heat that a body sends to a spacecraft above it.

use std::f64::consts::{PI, TAU};

use nalgebra::Vector3;

use super::body::{SPEED_OF_LIGHT_M_PER_S, Warmth};

/// Patches of the three rings: 1, 6 and 12, all of the same solid angle.
const RINGS: [u32; 3] = [1, 6, 12];
const PATCHES: f64 = 19.0;

/// Light from one part of the visible disc of a body.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Patch {
    /// Direction from the spacecraft to the patch, unit.
    pub direction: Vector3<f64>,
    /// Pressure of reflected sunlight on an absorbing plate that faces the patch, Pa, for an albedo of 1.
    pub reflected_pa: f64,
    /// Pressure of thermal infrared, Pa, if the body sent out as much (for [`Warmth::DaySide`] below the Sun) as it gets
    /// square to the Sun.
    pub infrared_pa: f64,
}

/// Divides the disc of a body as the spacecraft sees it into 19 patches of equal solid angle.
///
/// The ray to the middle of each patch meets the sphere at a place whose radiance is that of a Lambertian surface:
///
/// ```text
/// reflected  S max(0, n̂·ŝ) / π        infrared, even  S / π        infrared, day side  S max(0, n̂·ŝ) / π
/// ```
///
/// `position_m` from the body's centre, `sun` the unit vector to the Sun, in one frame; `irradiance` S at the body, W/m².
/// The middles are those of cos θ, which makes the force on a plate that faces the body exact for an even radiance:
/// M (R/r)² / c. Empty at or below the surface.
///
/// Source: the rings are those of P. C. Knocke, J. C. Ries and B. D. Tapley, AIAA 88-4292 (1988), here of equal solid angle.
#[must_use]
pub fn patches(position_m: &Vector3<f64>, sun: &Vector3<f64>, radius_m: f64, irradiance: f64, warmth: Warmth) -> Vec<Patch> {
    let distance_m = position_m.norm();
    let ratio = radius_m / distance_m;
    if ratio.is_nan() || ratio >= 1.0 {
        return Vec::new();
    }
    let down = -position_m / distance_m;
    let cap = 1.0 - (1.0 - ratio * ratio).sqrt();
    let solid_angle = TAU * cap / PATCHES;
    let east = down.cross(&sideways(&down)).normalize();
    let north = down.cross(&east);
    let scale = irradiance * solid_angle / (PI * SPEED_OF_LIGHT_M_PER_S);
    let mut list = Vec::with_capacity(19);
    let mut inner = 0.0;
    for count in RINGS {
        let outer = inner + f64::from(count) / PATCHES * cap;
        // One patch in the middle looks straight down: its cosine is that of the ring's mean.
        let cos = 1.0 - f64::midpoint(inner, outer);
        let sin = (1.0 - cos * cos).max(0.0).sqrt();
        inner = outer;
        for k in 0..count {
            let (s, c) = (TAU * (f64::from(k) + 0.5) / f64::from(count)).sin_cos();
            let direction = if count == 1 { down } else { down * cos + (east * c + north * s) * sin };
            let lit = place(position_m, &direction, radius_m).dot(sun).max(0.0);
            let weight = if count == 1 { scale * cos } else { scale };
            let infrared = if warmth == Warmth::DaySide { lit } else { 1.0 };
            list.push(Patch { direction, reflected_pa: weight * lit, infrared_pa: weight * infrared });
        }
    }
    list
}

/// Normal of the sphere where the ray from `position` along `direction` meets it.
fn place(position_m: &Vector3<f64>, direction: &Vector3<f64>, radius_m: f64) -> Vector3<f64> {
    let along = position_m.dot(direction);
    let reach = (along * along - position_m.norm_squared() + radius_m * radius_m).max(0.0).sqrt();
    (position_m + direction * (-along - reach)) / radius_m
}

/// Any vector well off `direction`.
fn sideways(direction: &Vector3<f64>) -> Vector3<f64> {
    if direction.z.abs() < 0.9 { Vector3::z() } else { Vector3::x() }
}
