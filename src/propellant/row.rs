//! The rows of the ledger.

/// One row of the ledger.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Row {
    /// Unloading the wheels.
    WheelUnloading,
    /// Damping rates after separation.
    RateDamping,
    /// Slews on thrusters.
    Slews,
    /// Holding the attitude during orbit burns.
    BurnHold,
    /// Holding the attitude within a band.
    Deadband,
    /// Spinning up and down and turning the axis of the spin.
    Spin,
    /// Holding the attitude in safe mode.
    SafeMode,
    /// Orbit burns.
    OrbitBurns,
    /// Loss through valves.
    Leakage,
    /// What the tank does not give up.
    Residual,
    /// What was loaded too little (below zero: too much).
    LoadingError,
    /// Margin on the other rows.
    Margin,
}

/// All rows in the order of the ledger.
pub const ROWS: [Row; 12] = [
    Row::WheelUnloading,
    Row::RateDamping,
    Row::Slews,
    Row::BurnHold,
    Row::Deadband,
    Row::Spin,
    Row::SafeMode,
    Row::OrbitBurns,
    Row::Leakage,
    Row::Residual,
    Row::LoadingError,
    Row::Margin,
];

impl Row {
    /// Name in machine-readable output.
    #[must_use]
    pub const fn key(self) -> &'static str {
        match self {
            Self::WheelUnloading => "wheel_unloading",
            Self::RateDamping => "rate_damping",
            Self::Slews => "slews",
            Self::BurnHold => "burn_hold",
            Self::Deadband => "deadband",
            Self::Spin => "spin",
            Self::SafeMode => "safe_mode",
            Self::OrbitBurns => "orbit_burns",
            Self::Leakage => "leakage",
            Self::Residual => "residual",
            Self::LoadingError => "loading_error",
            Self::Margin => "margin",
        }
    }

    /// Whether attitude control burns it, so that it counts in the attitude total.
    #[must_use]
    pub const fn is_attitude_control(self) -> bool {
        matches!(
            self,
            Self::WheelUnloading | Self::RateDamping | Self::Slews | Self::BurnHold | Self::Deadband | Self::Spin | Self::SafeMode
        )
    }

    /// Whether it leaves the tank during the mission.
    #[must_use]
    pub const fn leaves_the_tank(self) -> bool {
        self.is_attitude_control() || matches!(self, Self::OrbitBurns | Self::Leakage)
    }

    /// Place in the order of the ledger.
    #[must_use]
    pub const fn index(self) -> usize {
        self as usize
    }
}
