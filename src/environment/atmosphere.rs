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

/// Gas at a place.
#[derive(Debug, Clone, Copy, Default, PartialEq)]
pub struct Gas {
    /// Total mass density, kg/m³.
    pub density_kg_per_m3: f64,
    /// Temperature, K.
    pub temperature_k: f64,
    /// Mean mass of a molecule, kg.
    pub molecular_mass_kg: f64,
}

/// The air about a body.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Air {
    /// None, or none that matters.
    None,
    /// The Earth's, by NRLMSISE-00.
    Earth,
    /// A plain exponential about a sphere.
    Exponential(Exponential),
}

/// An atmosphere that thins by a factor e with every scale height.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Exponential {
    /// Gas at the altitude of reference.
    pub gas: Gas,
    /// Altitude of reference above the equatorial radius, m.
    pub altitude_m: f64,
    /// Scale height, m.
    pub scale_height_m: f64,
}

impl Exponential {
    /// Gas at an altitude above the equatorial radius, m. Temperature and molecules are those of the reference.
    #[must_use]
    pub fn at(&self, altitude_m: f64) -> Gas {
        let thinned = ((self.altitude_m - altitude_m) / self.scale_height_m).exp();
        Gas { density_kg_per_m3: self.gas.density_kg_per_m3 * thinned, ..self.gas }
    }
}

/// Total mass density, kg/m³: that of [`earth_gas`].
#[must_use]
pub fn density_kg_per_m3(epoch: Epoch, earth_fixed_position_m: &Vector3<f64>, activity: &Activity) -> f64 {
    earth_gas(epoch, earth_fixed_position_m, activity).density_kg_per_m3
}

/// The Earth's air, with anomalous oxygen (which counts for drag), at an Earth-fixed position in metres.
///
/// No air above 1500 km and for a position or epoch that is not a number; below the ground that of the ground.
/// Not a number if the model gives none, as for an activity that is not a number.
/// The model is good to about 15 % for known activity.
///
/// Source: Picone et al., J. Geophys. Res. 107(A12), 1468 (2002), subroutine `gtd7d`.
#[must_use]
pub fn earth_gas(epoch: Epoch, earth_fixed_position_m: &Vector3<f64>, activity: &Activity) -> Gas {
    let place = Geodetic::from_earth_fixed(earth_fixed_position_m);
    let (day_of_year, seconds_of_day) = epoch.day_of_year_and_ut_seconds();
    if place.height_m.is_nan() || place.height_m > CEILING_M || day_of_year.is_nan() {
        return Gas::default();
    }
    let longitude_deg = place.longitude_rad.to_degrees();
    #[expect(clippy::cast_possible_truncation, reason = "a day of the year, 1 to 366")]
    let day_of_year = day_of_year as i32;
    let found = Model::new().gtd7d(&Input {
        day_of_year,
        seconds_of_day,
        altitude_km: place.height_m.max(0.0) / 1e3,
        latitude_deg: place.latitude_rad.to_degrees(),
        longitude_deg,
        local_solar_time_h: (seconds_of_day / 3600.0 + longitude_deg / 15.0).rem_euclid(24.0),
        f107_average: activity.f107_average,
        f107: activity.f107,
        magnetic: MagneticActivity::Daily { ap: activity.ap },
    });
    let molecules = found.helium
        + found.atomic_oxygen
        + found.molecular_nitrogen
        + found.molecular_oxygen
        + found.argon
        + found.hydrogen
        + found.atomic_nitrogen
        + found.anomalous_oxygen;
    Gas {
        // `max` would turn what is not a number into no air.
        density_kg_per_m3: if found.total_mass < 0.0 { 0.0 } else { found.total_mass },
        temperature_k: found.temperature,
        molecular_mass_kg: if molecules > 0.0 { found.total_mass / molecules } else { 0.0 },
    }
}

/// Velocity of air that turns with the body, ω × r, m/s, in I, without wind.
#[must_use]
pub fn air_velocity_m_per_s(position_inertial: &Vector3<f64>, body: &Body) -> Vector3<f64> {
    body.pole.cross(position_inertial) * body.rotation_rate_rad_per_s
}
