//! The air: density by NRLMSISE-00, and how it moves with the Earth.

use nalgebra::Vector3;
use nrlmsise00::{Input, MagneticActivity, Model};

use super::body::Body;
use super::earth_rotation::Geodetic;
use super::epoch::Epoch;

/// Above this height, m, the model has no meaning and the density is taken as zero.
const CEILING_M: f64 = 1.5e6;

/// Solar and geomagnetic activity.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Activity {
    /// Solar flux at 10.7 cm of the day before, 1e-22 W/(m²·Hz).
    pub f107: f64,
    /// Its mean over 81 days, same unit.
    pub f107_average: f64,
    /// Daily geomagnetic index Ap, dimensionless.
    pub ap: f64,
}

impl Activity {
    /// Long-term low activity. Source: ECSS-E-ST-10-04C, long-term reference values (as in ISO 14222).
    pub const LOW: Self = Self { f107: 65.0, f107_average: 65.0, ap: 0.0 };
    /// Long-term moderate activity, same source.
    pub const MODERATE: Self = Self { f107: 140.0, f107_average: 140.0, ap: 15.0 };
    /// Long-term high activity, same source.
    pub const HIGH: Self = Self { f107: 250.0, f107_average: 250.0, ap: 45.0 };

    /// Activity of a long-term flux `f107`, with Ap interpolated between the three levels and clamped outside them.
    #[must_use]
    pub fn from_f107(f107: f64) -> Self {
        let between = |from: Self, to: Self| from.ap + (to.ap - from.ap) * (f107 - from.f107) / (to.f107 - from.f107);
        let ap = if f107 < Self::MODERATE.f107 { between(Self::LOW, Self::MODERATE) } else { between(Self::MODERATE, Self::HIGH) };
        Self { f107, f107_average: f107, ap: ap.clamp(Self::LOW.ap, Self::HIGH.ap) }
    }
}

/// Total mass density, kg/m³, with anomalous oxygen (which counts for drag), at an Earth-fixed position in metres.
///
/// Zero above 1500 km and for a position or epoch that is not a number; below the ground that of the ground.
/// Not a number if the model gives none, as for an activity that is not a number.
/// The model is good to about 15 % for known activity.
///
/// Source: Picone et al., J. Geophys. Res. 107(A12), 1468 (2002), subroutine `gtd7d`.
#[must_use]
pub fn density_kg_per_m3(epoch: Epoch, earth_fixed_position_m: &Vector3<f64>, activity: &Activity) -> f64 {
    let place = Geodetic::from_earth_fixed(earth_fixed_position_m);
    let (day_of_year, seconds_of_day) = epoch.day_of_year_and_ut_seconds();
    if place.height_m.is_nan() || place.height_m > CEILING_M || day_of_year.is_nan() {
        return 0.0;
    }
    let longitude_deg = place.longitude_rad.to_degrees();
    #[expect(clippy::cast_possible_truncation, reason = "a day of the year, 1 to 366")]
    let day_of_year = day_of_year as i32;
    let density = Model::new()
        .gtd7d(&Input {
            day_of_year,
            seconds_of_day,
            altitude_km: place.height_m.max(0.0) / 1e3,
            latitude_deg: place.latitude_rad.to_degrees(),
            longitude_deg,
            local_solar_time_h: (seconds_of_day / 3600.0 + longitude_deg / 15.0).rem_euclid(24.0),
            f107_average: activity.f107_average,
            f107: activity.f107,
            magnetic: MagneticActivity::Daily { ap: activity.ap },
        })
        .total_mass;
    // `max` would take a fault of the model, which is not a number, for no air.
    if density < 0.0 { 0.0 } else { density }
}

/// Velocity of air that turns with the body, ω × r, m/s, in I. Winds (up to some hundred m/s) are left out.
#[must_use]
pub fn air_velocity_m_per_s(position_inertial: &Vector3<f64>, body: &Body) -> Vector3<f64> {
    Vector3::z().cross(position_inertial) * body.rotation_rate_rad_per_s
}
