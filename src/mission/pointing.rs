//! Pointing one body axis exactly and a second as near as it can.

use nalgebra::{Matrix3, Rotation3, Vector3};

use crate::environment::{Body, ECLIPTIC_NORTH, Epoch, State, Trajectory};

/// Two directions nearer to one another than this (sine of the angle) do not fix an attitude: 0.06°, a tenth of the
/// radius of the Sun's disc and well over rounding.
const PARALLEL: f64 = 1e-3;

/// A direction in which an axis can point.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Direction {
    /// To the centre of the body that is orbited.
    Nadir,
    /// To the Sun.
    Sun,
    /// To the Earth.
    Earth,
    /// Along the velocity.
    Velocity,
    /// Along the orbital angular momentum.
    OrbitNormal,
    /// Fixed in I, unit.
    Fixed(Vector3<f64>),
    /// Fixed in I square to the ecliptic.
    EclipticNorth,
}

/// What an attitude follows at an instant; vectors in I.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sky {
    /// Position and velocity from the body.
    pub state: State,
    /// Position of the Sun from the body, m.
    pub sun_m: Vector3<f64>,
    earth_m: Vector3<f64>,
}

impl Sky {
    /// Along a trajectory at an instant.
    #[must_use]
    pub fn at(trajectory: &Trajectory, epoch: Epoch) -> Self {
        let body = trajectory.body();
        let sun_m = -body.heliocentric_position_m(epoch);
        let earth_m = if body.is_earth() { Vector3::zeros() } else { sun_m + Body::EARTH.heliocentric_position_m(epoch) };
        Self { state: trajectory.state(epoch), sun_m, earth_m }
    }

    /// Position of the Earth from the body, m; zero if the Earth itself is orbited.
    #[must_use]
    pub const fn earth_m(&self) -> Vector3<f64> {
        self.earth_m
    }

    /// Unit vector of a direction; zero if it does not exist.
    #[must_use]
    pub fn direction(&self, direction: &Direction) -> Vector3<f64> {
        let (r, v) = (&self.state.position_m, &self.state.velocity_m_per_s);
        let vector = match direction {
            Direction::Nadir => -r,
            Direction::Sun => self.sun_m - r,
            Direction::Earth => self.earth_m - r,
            Direction::Velocity => *v,
            Direction::OrbitNormal => r.cross(v),
            Direction::EclipticNorth => ECLIPTIC_NORTH,
            Direction::Fixed(direction) => *direction,
        };
        vector.try_normalize(0.0).unwrap_or_else(Vector3::zeros)
    }
}

/// One body axis goes to a direction exactly, a second as near to another as it can.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Pointing {
    /// Body axis that is pointed exactly, unit.
    pub axis: Vector3<f64>,
    /// Where it points; against it if the second is true.
    pub to: (Direction, bool),
    /// Body axis that fixes the rest, unit, not along `axis`.
    pub second_axis: Vector3<f64>,
    /// Where it points as near as it can; against it if the second is true.
    pub towards: (Direction, bool),
}

impl Pointing {
    /// z to the centre of the body, y against the orbit normal.
    pub const NADIR: Self = Self {
        axis: Vector3::new(0.0, 0.0, 1.0),
        to: (Direction::Nadir, false),
        second_axis: Vector3::new(0.0, -1.0, 0.0),
        towards: (Direction::OrbitNormal, false),
    };

    /// Rotation from the body frame to I.
    ///
    /// Where the two directions lie along one another the orbit normal takes the place of the second, then the north pole
    /// of the ecliptic, then any other.
    #[must_use]
    pub fn inertial_from_body(&self, sky: &Sky) -> Rotation3<f64> {
        let first = signed(sky, &self.to);
        let asked = signed(sky, &self.towards);
        let others = [sky.direction(&Direction::OrbitNormal), ECLIPTIC_NORTH, Vector3::x(), Vector3::y()];
        let second = std::iter::once(asked).chain(others).find(|d| first.cross(d).norm() > PARALLEL).unwrap_or(asked);
        frame(&first, &second) * frame(&self.axis, &self.second_axis).inverse()
    }

    /// Sine of the angle between the two directions at an instant.
    #[must_use]
    pub fn spread(&self, sky: &Sky) -> f64 {
        signed(sky, &self.to).cross(&signed(sky, &self.towards)).norm()
    }

    /// Whether the directions fix the attitude at an instant.
    #[must_use]
    pub fn is_defined(&self, sky: &Sky) -> bool {
        self.spread(sky) > PARALLEL
    }
}

fn signed(sky: &Sky, (direction, against): &(Direction, bool)) -> Vector3<f64> {
    let vector = sky.direction(direction);
    if *against { -vector } else { vector }
}

/// Frame with its first axis along `first`, its second square to it towards `second`.
pub(super) fn frame(first: &Vector3<f64>, second: &Vector3<f64>) -> Rotation3<f64> {
    let third = first.cross(second).normalize();
    Rotation3::from_matrix_unchecked(Matrix3::from_columns(&[*first, third.cross(first), third]))
}
