//! Surroundings of the spacecraft: time, bodies, their rotation, the Sun, the orbit, shadow, light from the body, magnetic
//! field and air. In: an epoch and elements; out: vectors in SI units. Knows nothing of spacecraft or missions.

mod atmosphere;
mod body;
mod body_light;
mod calendar;
mod earth_rotation;
mod ephemeris;
mod epoch;
mod hermite;
mod magnetic;
mod moon;
mod oem;
mod orbit;
mod planets;
mod shadow;
mod sun;
mod trajectory;

pub use atmosphere::{Activity, Air, Exponential, Gas, air_velocity_m_per_s, density_kg_per_m3, earth_gas};
pub use body::{
    ASTRONOMICAL_UNIT_M, Body, ECLIPTIC_NORTH, SOLAR_IRRADIANCE_W_PER_M2, SOLAR_RADIUS_M, SPEED_OF_LIGHT_M_PER_S, Site, Warmth,
    inertial_from_ecliptic,
};
pub use body_light::{Patch, patches};
pub use earth_rotation::{Geodetic, earth_fixed_from_inertial};
pub use ephemeris::Ephemeris;
pub use epoch::{Epoch, EpochError};
pub use magnetic::Igrf;
pub use moon::moon_position_m;
pub use oem::EphemerisError;
pub use orbit::{Elements, Orbit, OrbitError, State, node_at_local_time, node_of_local_time, sun_synchronous_inclination};
pub use planets::{Planet, heliocentric_position_m};
pub use shadow::sunlit_fraction;
pub use sun::{SunOfDate, sun_of_date, sun_position_m, sun_velocity_m_per_s};
pub use trajectory::{Companion, HILL_SHARE, SunDistance, Trajectory, right_ascension_of_longitude};
