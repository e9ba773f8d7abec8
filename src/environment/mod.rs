//! Surroundings of the spacecraft: time, the central body, its rotation, the Sun, the orbit, the shadow, the magnetic
//! field and the air. In: an epoch and elements; out: vectors in SI units. Knows nothing of spacecraft or missions.

mod atmosphere;
mod body;
mod earth_rotation;
mod epoch;
mod magnetic;
mod orbit;
mod shadow;
mod sun;

pub use atmosphere::{Activity, air_velocity_m_per_s, density_kg_per_m3};
pub use body::{ASTRONOMICAL_UNIT_M, Body, SOLAR_IRRADIANCE_W_PER_M2, SOLAR_RADIUS_M, SPEED_OF_LIGHT_M_PER_S};
pub use earth_rotation::{Geodetic, earth_fixed_from_inertial};
pub use epoch::{Epoch, EpochError};
pub use magnetic::Igrf;
pub use orbit::{Elements, Orbit, OrbitError, State, node_of_local_time, sun_synchronous_inclination};
pub use shadow::sunlit_fraction;
pub use sun::{SunOfDate, sun_of_date, sun_position_m};
