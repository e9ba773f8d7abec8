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
    /// Loss through valves.
    Leakage,
    /// What the tank does not give up.
    Residual,
    /// Margin on the attitude-control rows.
    Margin,
}

/// All rows in the order of the ledger.
pub const ROWS: [Row; 6] = [Row::WheelUnloading, Row::RateDamping, Row::Slews, Row::Leakage, Row::Residual, Row::Margin];

impl Row {
    /// Name in machine-readable output.
    #[must_use]
    pub const fn key(self) -> &'static str {
        match self {
            Self::WheelUnloading => "wheel_unloading",
            Self::RateDamping => "rate_damping",
            Self::Slews => "slews",
            Self::Leakage => "leakage",
            Self::Residual => "residual",
            Self::Margin => "margin",
        }
    }

    /// Whether attitude control burns it, so that it counts in the attitude total.
    #[must_use]
    pub const fn is_attitude_control(self) -> bool {
        matches!(self, Self::WheelUnloading | Self::RateDamping | Self::Slews)
    }

    /// Place in the order of the ledger.
    #[must_use]
    pub const fn index(self) -> usize {
        self as usize
    }
}
