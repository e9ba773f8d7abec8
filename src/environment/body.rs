//! The central body and the constants of the Sun.

/// Astronomical unit, m. Source: IAU 2012 Resolution B2 (exact).
pub const ASTRONOMICAL_UNIT_M: f64 = 149_597_870_700.0;
/// Nominal solar radius, m. Source: IAU 2015 Resolution B3.
pub const SOLAR_RADIUS_M: f64 = 6.957e8;
/// Nominal total solar irradiance at one astronomical unit, W/m². Source: IAU 2015 Resolution B3.
pub const SOLAR_IRRADIANCE_W_PER_M2: f64 = 1361.0;
/// Speed of light in vacuum, m/s. Source: SI (exact).
pub const SPEED_OF_LIGHT_M_PER_S: f64 = 299_792_458.0;

/// The body the spacecraft orbits. Its pole is taken as the third axis of the inertial frame.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Body {
    /// Name in English.
    pub name: &'static str,
    /// Gravitational parameter, m³/s².
    pub mu_m3_per_s2: f64,
    /// Equatorial radius, m; the reference radius of `j2`.
    pub equatorial_radius_m: f64,
    /// Second zonal harmonic of gravity, unnormalised, dimensionless.
    pub j2: f64,
    /// Sidereal rotation rate about the pole, rad/s.
    pub rotation_rate_rad_per_s: f64,
}

impl Body {
    /// The Earth. Sources: EGM96 for the gravitational parameter and `j2`; WGS 84 (NIMA TR8350.2) for radius and rate.
    pub const EARTH: Self = Self {
        name: "Earth",
        mu_m3_per_s2: 3.986_004_418e14,
        equatorial_radius_m: 6_378_137.0,
        j2: 1.082_626_68e-3,
        rotation_rate_rad_per_s: 7.292_115_9e-5,
    };
}
