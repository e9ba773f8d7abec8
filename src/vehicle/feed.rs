//! Feed pressure, and how thrust and exhaust speed follow it.

/// How the feed pressure goes with the propellant left.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Feed {
    /// Held constant.
    Regulated,
    /// The gas in the tank expands as propellant leaves.
    Blowdown {
        /// Pressure with the tank as loaded, Pa.
        start_pa: f64,
        /// Volume of the gas with the tank as loaded, m³.
        gas_m3: f64,
        /// Density of the propellant, kg/m³.
        density_kg_per_m3: f64,
        /// Exponent of the expansion: 1 isothermal, up to the ratio of specific heats if fast.
        exponent: f64,
    },
}

impl Feed {
    /// Feed pressure over that with the tank as loaded, after `used_kg` have left it.
    ///
    /// ```text
    /// p / p0 = (V0 / (V0 + used / ρ))ⁿ
    /// ```
    ///
    /// Source: the ideal gas, n = 1 isothermal.
    #[must_use]
    pub fn pressure_ratio(&self, used_kg: f64) -> f64 {
        match *self {
            Self::Regulated => 1.0,
            Self::Blowdown { gas_m3, density_kg_per_m3, exponent, .. } => {
                (gas_m3 / (gas_m3 + used_kg.max(0.0) / density_kg_per_m3)).powf(exponent)
            }
        }
    }
}

/// How thrust and steady exhaust speed follow the feed pressure.
#[derive(Debug, Clone, PartialEq)]
pub enum PressureLaw {
    /// Powers of the pressure over that at the start: thrust, exhaust speed.
    Powers(f64, f64),
    /// Shares of thrust and exhaust speed at pressure ratios, rising; straight lines between, constant beyond.
    Table(Vec<(f64, f64, f64)>),
}

impl PressureLaw {
    /// Factors on thrust and exhaust speed at a pressure ratio.
    #[must_use]
    pub fn factors(&self, ratio: f64) -> (f64, f64) {
        match self {
            Self::Powers(thrust, speed) => (ratio.powf(*thrust), ratio.powf(*speed)),
            Self::Table(rows) => {
                let above = rows.partition_point(|(at, ..)| *at < ratio);
                match (above.checked_sub(1).and_then(|below| rows.get(below)), rows.get(above)) {
                    (Some((r0, f0, u0)), Some((r1, f1, u1))) => {
                        let share = (ratio - r0) / (r1 - r0);
                        (f0 + (f1 - f0) * share, u0 + (u1 - u0) * share)
                    }
                    (Some((_, f, u)), None) | (None, Some((_, f, u))) => (*f, *u),
                    (None, None) => (1.0, 1.0),
                }
            }
        }
    }
}
