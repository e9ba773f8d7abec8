//! Bodies to orbit, and the constants of the Sun.

use nalgebra::{Matrix3, Rotation3, Vector3};

use super::epoch::Epoch;
use super::moon::moon_position_m;
use super::planets::{Planet, heliocentric_position_m};
use super::sun::sun_position_m;

/// Astronomical unit, m. Source: IAU 2012 Resolution B2 (exact).
pub const ASTRONOMICAL_UNIT_M: f64 = 149_597_870_700.0;
/// Nominal solar radius, m. Source: IAU 2015 Resolution B3.
pub const SOLAR_RADIUS_M: f64 = 6.957e8;
/// Nominal total solar irradiance at one astronomical unit, W/m². Source: IAU 2015 Resolution B3.
pub const SOLAR_IRRADIANCE_W_PER_M2: f64 = 1361.0;
/// Speed of light in vacuum, m/s. Source: SI (exact).
pub const SPEED_OF_LIGHT_M_PER_S: f64 = 299_792_458.0;
/// Nominal solar mass parameter, m³/s². Source: IAU 2015 Resolution B3.
pub(super) const SOLAR_MU_M3_PER_S2: f64 = 1.327_124_4e20;
/// Obliquity of the ecliptic at J2000, rad: 84381.406″. Source: Capitaine et al. (2003).
const OBLIQUITY_RAD: f64 = 0.409_092_600_600_582_9;

/// Where a body stands in the solar system.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Site {
    /// It is the Sun.
    Sun,
    /// The Earth.
    Earth,
    /// The Earth's Moon.
    Moon,
    /// Another planet.
    Planet(Planet),
    /// A body on a circle of this radius (m) about the Sun in the ecliptic, at the equinox at J2000.
    Circle(f64),
}

/// How a body sends out the light it has absorbed.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Warmth {
    /// The same everywhere: air or fast rotation spread the heat.
    Even,
    /// At once, where the Sun shines: no air.
    DaySide,
}

/// A body to orbit.
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
    /// Sidereal rotation rate about the pole, rad/s; negative if it turns backwards.
    pub rotation_rate_rad_per_s: f64,
    /// Direction of the pole in I, unit.
    pub pole: Vector3<f64>,
    /// Where it is.
    pub site: Site,
    /// Share of sunlight that it reflects (Bond albedo).
    pub albedo: f64,
    /// How it sends out the rest.
    pub warmth: Warmth,
}

impl Body {
    /// The Earth; its pole is the third axis of I. Sources: EGM96 for the gravitational parameter and `j2`; WGS 84
    /// (NIMA TR8350.2) for radius and rate; albedo 0.3 of Stephens et al., Rev. Geophys. 53, 141 (2015), rounded.
    pub const EARTH: Self = Self {
        name: "Earth",
        mu_m3_per_s2: 3.986_004_418e14,
        equatorial_radius_m: 6_378_137.0,
        j2: 1.082_626_68e-3,
        rotation_rate_rad_per_s: 7.292_115_9e-5,
        pole: Vector3::new(0.0, 0.0, 1.0),
        site: Site::Earth,
        albedo: 0.30,
        warmth: Warmth::Even,
    };

    /// The Moon. Sources, as for the planets below: gravity of the GRAIL mission and radii, poles and rates of the IAU
    /// working group on cartographic coordinates (2015); Bond albedos of the NASA planetary fact sheets; from memory.
    pub const MOON: Self = Self {
        name: "the Moon",
        mu_m3_per_s2: 4.902_800_066e12,
        equatorial_radius_m: 1_738_000.0,
        j2: 2.033_1e-4,
        rotation_rate_rad_per_s: 2.661_699_5e-6,
        pole: Vector3::new(-0.000_035_437_512_6, -0.398_121_549_937_1, 0.917_332_671_510_1),
        site: Site::Moon,
        albedo: 0.11,
        warmth: Warmth::DaySide,
    };

    /// Mars.
    pub const MARS: Self = Self {
        name: "Mars",
        mu_m3_per_s2: 4.282_837_52e13,
        equatorial_radius_m: 3_396_190.0,
        j2: 1.956_6e-3,
        rotation_rate_rad_per_s: 7.088_218_1e-5,
        pole: Vector3::new(0.446_158_726_935_4, -0.406_237_614_260_8, 0.797_441_779_153_3),
        site: Site::Planet(Planet::Mars),
        albedo: 0.25,
        warmth: Warmth::Even,
    };

    /// Venus.
    pub const VENUS: Self = Self {
        name: "Venus",
        mu_m3_per_s2: 3.248_585_92e14,
        equatorial_radius_m: 6_051_800.0,
        j2: 4.404_4e-6,
        rotation_rate_rad_per_s: -2.992_449e-7,
        pole: Vector3::new(0.018_690_814_168_9, -0.387_708_808_361_8, 0.921_592_390_042_6),
        site: Site::Planet(Planet::Venus),
        albedo: 0.76,
        warmth: Warmth::Even,
    };

    /// Mercury.
    pub const MERCURY: Self = Self {
        name: "Mercury",
        mu_m3_per_s2: 2.203_186_855e13,
        equatorial_radius_m: 2_440_530.0,
        j2: 5.03e-5,
        rotation_rate_rad_per_s: 1.240_014e-6,
        pole: Vector3::new(0.091_377_818_208_3, -0.469_647_350_364_3, 0.878_112_441_909_0),
        site: Site::Planet(Planet::Mercury),
        albedo: 0.088,
        warmth: Warmth::DaySide,
    };

    /// The Sun; its orbits count from the ecliptic and equinox of J2000.
    pub const SUN: Self = Self {
        name: "the Sun",
        mu_m3_per_s2: SOLAR_MU_M3_PER_S2,
        equatorial_radius_m: SOLAR_RADIUS_M,
        j2: 0.0,
        rotation_rate_rad_per_s: 0.0,
        pole: ECLIPTIC_NORTH,
        site: Site::Sun,
        albedo: 0.0,
        warmth: Warmth::Even,
    };

    /// Whether the Sun itself is orbited.
    #[must_use]
    pub fn is_sun(&self) -> bool {
        self.site == Site::Sun
    }

    /// Whether it is the Earth.
    #[must_use]
    pub fn is_earth(&self) -> bool {
        self.site == Site::Earth
    }

    /// Position of the body from the Sun, m, in I.
    #[must_use]
    pub fn heliocentric_position_m(&self, epoch: Epoch) -> Vector3<f64> {
        match self.site {
            Site::Sun => Vector3::zeros(),
            Site::Earth => -sun_position_m(epoch),
            Site::Moon => moon_position_m(epoch) - sun_position_m(epoch),
            Site::Planet(planet) => heliocentric_position_m(planet, epoch),
            Site::Circle(radius_m) => {
                let rate = (SOLAR_MU_M3_PER_S2 / radius_m.powi(3)).sqrt();
                let (s, c) = (rate * epoch.tt_seconds()).sin_cos();
                inertial_from_ecliptic() * Vector3::new(radius_m * c, radius_m * s, 0.0)
            }
        }
    }

    /// Rotation from the frame of the body's equator (z to its pole, x to where its equator rises through that of the
    /// Earth) to I. The x axis is that of I if the poles are the same.
    #[must_use]
    pub fn inertial_from_equator(&self) -> Rotation3<f64> {
        let x = Vector3::z().cross(&self.pole).try_normalize(1e-9).unwrap_or_else(Vector3::x);
        Rotation3::from_matrix_unchecked(Matrix3::from_columns(&[x, self.pole.cross(&x), self.pole]))
    }

    /// Radius, m, of the circle in the equator on which a spacecraft stays over one place, secular J2 included; `None`
    /// if the body turns too slowly (or backwards) to have one within its sphere of influence.
    #[must_use]
    pub fn synchronous_radius_m(&self) -> Option<f64> {
        if self.rotation_rate_rad_per_s <= 0.0 {
            return None;
        }
        let rate_of = |a: f64| {
            let n = (self.mu_m3_per_s2 / a.powi(3)).sqrt();
            n * (1.0 + 3.0 * self.j2 * (self.equatorial_radius_m / a).powi(2))
        };
        let mut a = (self.mu_m3_per_s2 / self.rotation_rate_rad_per_s.powi(2)).cbrt();
        for _ in 0..8 {
            a *= (rate_of(a) / self.rotation_rate_rad_per_s).powf(2.0 / 3.0);
        }
        Some(a)
    }
}

/// North pole of the ecliptic of J2000, in I.
pub const ECLIPTIC_NORTH: Vector3<f64> = Vector3::new(0.0, -0.397_776_969_112_606, 0.917_482_143_065_241_8);

/// Rotation from the ecliptic and equinox of J2000 to I.
#[must_use]
pub fn inertial_from_ecliptic() -> Rotation3<f64> {
    Rotation3::from_axis_angle(&Vector3::x_axis(), OBLIQUITY_RAD)
}
