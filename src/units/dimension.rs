//! Dimensions: exponents of the SI base units and of the plane angle.

use std::fmt::Debug;

/// Exponents of metre, kilogram, second, ampere, kelvin and radian.
///
/// The angle stands as a base of its own so that a rate in rpm and a frequency in Hz differ.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub struct Dimension {
    /// Metre.
    pub length: i8,
    /// Kilogram.
    pub mass: i8,
    /// Second.
    pub time: i8,
    /// Ampere.
    pub current: i8,
    /// Kelvin.
    pub temperature: i8,
    /// Radian.
    pub angle: i8,
}

impl Dimension {
    /// The dimension with these exponents of m, kg, s, A, K, rad.
    #[must_use]
    pub const fn new(exponents: [i8; 6]) -> Self {
        let [length, mass, time, current, temperature, angle] = exponents;
        Self { length, mass, time, current, temperature, angle }
    }
}

/// A kind of quantity that a configuration key may ask for: its dimension, and words for messages.
pub trait Kind: Debug + Clone + Copy + PartialEq + Send + Sync + 'static {
    /// Exponents of the base units.
    const DIMENSION: Dimension;
    /// What it is called in a message, with its article: "a force".
    const NAME: &'static str;
    /// The SI unit as written in results: "N"; empty for a pure number.
    const UNIT: &'static str;
    /// An example as a user would write it: "1 N".
    const EXAMPLE: &'static str;
}

/// The kinds that configurations use.
pub mod kind {
    use super::{Dimension, Kind};

    macro_rules! kinds {
        ($($(#[$doc:meta])* $kind:ident $exponents:expr, $name:literal, $unit:literal, $example:literal;)*) => {
            $($(#[$doc])*
            #[derive(Debug, Clone, Copy, PartialEq, Eq)]
            pub struct $kind;
            impl Kind for $kind {
                const DIMENSION: Dimension = Dimension::new($exponents);
                const NAME: &'static str = $name;
                const UNIT: &'static str = $unit;
                const EXAMPLE: &'static str = $example;
            })*

            /// Dimension, SI unit and name of every kind.
            pub(super) const NAMED: &[(Dimension, &str, &str)] = &[$((Dimension::new($exponents), $unit, $name)),*];
        };
    }

    kinds! {
        /// A pure number, also written in percent.
        Number [0, 0, 0, 0, 0, 0], "a pure number", "", "2.2";
        /// Length, m.
        Length [1, 0, 0, 0, 0, 0], "a length", "m", "0.74 m";
        /// Area, m².
        Area [2, 0, 0, 0, 0, 0], "an area", "m2", "3.2 m2";
        /// Volume, m³.
        Volume [3, 0, 0, 0, 0, 0], "a volume", "m3", "0.05 m3";
        /// Mass, kg.
        Mass [0, 1, 0, 0, 0, 0], "a mass", "kg", "480 kg";
        /// Mass rate, kg/s.
        MassRate [0, 1, -1, 0, 0, 0], "a mass rate", "kg/s", "20 g/yr";
        /// Time, s.
        Time [0, 0, 1, 0, 0, 0], "a time", "s", "7 yr";
        /// Force, N.
        Force [1, 1, -2, 0, 0, 0], "a force", "N", "1 N";
        /// Linear impulse, N·s.
        Impulse [1, 1, -1, 0, 0, 0], "an impulse", "N s", "20 mN s";
        /// Torque, N·m.
        Torque [2, 1, -2, 0, 0, 0], "a torque", "N m", "0.1 N m";
        /// Angular momentum or angular impulse, N·m·s.
        Momentum [2, 1, -1, 0, 0, 0], "an angular momentum", "N m s", "12 N m s";
        /// Moment of inertia, kg·m².
        Inertia [2, 1, 0, 0, 0, 0], "a moment of inertia", "kg m2", "82 kg m2";
        /// Speed, m/s.
        Speed [1, 0, -1, 0, 0, 0], "a speed", "m/s", "2108 m/s";
        /// Acceleration, m/s²; also Δv over time.
        Acceleration [1, 0, -2, 0, 0, 0], "a speed over time", "m/s2", "0.2 mm/(s d)";
        /// Propellant per impulse, kg/(N·s).
        ImpulsePrice [-1, 0, 1, 0, 0, 0], "a price of impulse", "kg/(N s)", "0.5 g/(N s)";
        /// Magnetic dipole moment, A·m².
        Dipole [2, 0, 0, 1, 0, 0], "a magnetic dipole", "A m2", "0.6 A m2";
        /// Plane angle, rad.
        Angle [0, 0, 0, 0, 0, 1], "an angle", "rad", "97.8 deg";
        /// Angular rate, rad/s.
        AngularRate [0, 0, -1, 0, 0, 1], "an angular rate", "rad/s", "1 deg/s";
        /// Pressure, Pa.
        Pressure [-1, 1, -2, 0, 0, 0], "a pressure", "Pa", "22 bar";
        /// Density, kg/m³.
        Density [-3, 1, 0, 0, 0, 0], "a density", "kg/m3", "1008 kg/m3";
        /// Gravitational parameter, m³/s².
        GravitationalParameter [3, 0, -2, 0, 0, 0], "a gravitational parameter", "m3/s2", "398600.44 km3/s2";
        /// Irradiance, W/m².
        Irradiance [0, 1, -3, 0, 0, 0], "an irradiance", "W/m2", "238 W/m2";
        /// Temperature, K.
        Temperature [0, 0, 0, 0, 1, 0], "a temperature", "K", "300 K";
        /// Price: propellant per angular impulse, kg/(N·m·s).
        Price [-2, 0, 1, 0, 0, 0], "a price of angular impulse", "kg/(N m s)", "1.2 g/(N m s)";
    }
}

impl Dimension {
    /// A pure number.
    pub const NONE: Self = Self::new([0; 6]);

    /// The exponents of m, kg, s, A, K, rad.
    #[must_use]
    pub const fn exponents(self) -> [i8; 6] {
        [self.length, self.mass, self.time, self.current, self.temperature, self.angle]
    }

    /// Dimension of a product with `other` raised to `power`; `None` if an exponent grows past what anyone needs.
    #[must_use]
    pub fn times(self, other: Self, power: i8) -> Option<Self> {
        let mut sum = [0_i8; 6];
        for ((place, own), more) in sum.iter_mut().zip(self.exponents()).zip(other.exponents()) {
            *place = own.checked_add(more.checked_mul(power)?)?;
        }
        Some(Self::new(sum))
    }
}

impl std::fmt::Display for Dimension {
    /// The trade's name where there is one, else base units: `N m`, `kg m2/s3`.
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        if let Some((_, unit, name)) = kind::NAMED.iter().find(|(dimension, _, _)| dimension == self) {
            return if unit.is_empty() { write!(f, "{name}") } else { write!(f, "{unit} ({name})") };
        }
        let units = ["m", "kg", "s", "A", "K", "rad"];
        let part = |sign: i8| -> Vec<String> {
            let listed = units.iter().zip(self.exponents()).filter(|(_, power)| power.signum() == sign);
            listed.map(|(unit, power)| if power.abs() == 1 { (*unit).to_owned() } else { format!("{unit}{}", power.abs()) }).collect()
        };
        let (above, below) = (part(1), part(-1));
        let above = if above.is_empty() { "1".to_owned() } else { above.join(" ") };
        match below.len() {
            0 => f.write_str(&above),
            1 => write!(f, "{above}/{}", below.join(" ")),
            _ => write!(f, "{above}/({})", below.join(" ")),
        }
    }
}
