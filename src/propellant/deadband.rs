//! Holding an attitude within a deadband by single pulses: the limit cycle of one axis.

use std::sync::OnceLock;

/// One axis held within a band.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct DeadbandAxis {
    /// Moment of inertia about the axis, kg·m².
    pub inertia_kg_m2: f64,
    /// Half the width of the band, rad; above zero.
    pub half_width_rad: f64,
    /// Angular impulse of the smallest firing, N·m·s; above zero.
    pub bit_n_m_s: f64,
    /// Disturbance torque about the axis, constant, N·m.
    pub disturbance_n_m: f64,
}

/// How often an axis fires, per second, against the disturbance and with it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct PulseRates {
    /// Firings that oppose the disturbance.
    pub against_per_s: f64,
    /// Firings the other way: the cycle runs into the far side of the band.
    pub with_per_s: f64,
}

impl DeadbandAxis {
    /// Long-run mean of the firings, over all rates with which the cycle may have begun.
    ///
    /// A pulse fires where the band is left and changes the rate by b = bit / I, as often as it takes to turn it. Between
    /// pulses the disturbance bends the path. In units of b and of the half width the cycle depends on one number,
    ///
    /// ```text
    /// λ = 4 T θ I / bit²
    /// ```
    ///
    /// Without disturbance the mean rate of pulses is b / (6 θ), two thirds of the symmetric cycle's b / (4 θ): the cycle
    /// keeps the rate it began with, and slow drifts one way last long. From λ = 1 upwards the far side is never
    /// reached and pulses balance the torque, T / bit. In between, a table made by following the cycle from evenly
    /// spread rates ([`mean_rate`]).
    #[must_use]
    pub fn pulse_rates(&self) -> PulseRates {
        let torque = self.disturbance_n_m.abs();
        let lambda = 4.0 * torque * self.half_width_rad * self.inertia_kg_m2 / (self.bit_n_m_s * self.bit_n_m_s);
        let balance = torque / self.bit_n_m_s;
        let all = mean_rate(lambda) * self.bit_n_m_s / (self.inertia_kg_m2 * self.half_width_rad);
        // What a long time leaves in the body is nothing: the difference of both balances the torque.
        PulseRates { against_per_s: f64::midpoint(all, balance).max(balance), with_per_s: ((all - balance) / 2.0).max(0.0) }
    }

    /// Largest disturbance for which even the symmetric cycle still reaches both sides, N·m: λ = 1/4.
    ///
    /// Source: Space Propulsion, TU Wien (2014), slide 83, in other letters.
    #[must_use]
    pub fn two_sided_below_n_m(&self) -> f64 {
        self.bit_n_m_s * self.bit_n_m_s / (16.0 * self.inertia_kg_m2 * self.half_width_rad)
    }
}

const POINTS: usize = 121;
/// The table runs over λ^(1/3) from 0 to 1: the ends are where it bends.
fn table() -> &'static [f64; POINTS] {
    static TABLE: OnceLock<[f64; POINTS]> = OnceLock::new();
    TABLE.get_or_init(|| {
        let mut table = [0.0; POINTS];
        for (k, place) in table.iter_mut().enumerate() {
            *place = followed((k as f64 / (POINTS - 1) as f64).powi(3));
        }
        table
    })
}

/// Pulses per unit of time (half width over b) at a disturbance λ.
#[must_use]
pub fn mean_rate(lambda: f64) -> f64 {
    if lambda >= 1.0 {
        return lambda / 4.0;
    }
    let at = lambda.max(0.0).cbrt() * (POINTS - 1) as f64;
    let table = table();
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "from 0 to the number of points")]
    let below = (at as usize).min(POINTS - 2);
    let (low, high) = (table.get(below).copied().unwrap_or(0.0), table.get(below + 1).copied().unwrap_or(0.0));
    low + (high - low) * (at - below as f64)
}

/// Rates from which the cycle is followed, and for how long, in units of the half width over b: hundreds of crossings left
/// out, since it may take as many to find the one-sided cycle, and hundreds counted.
const STARTS: u32 = 48;
const SETTLE: f64 = 4000.0;
const SPAN: f64 = 1500.0;

/// Mean over starts of the long-run rate of pulses, units of b and the half width.
///
/// Equal times, not equal pulses: under a weak disturbance the cycle drifts through all rates, and spends as much time at
/// each as the spread of starts gives it.
fn followed(lambda: f64) -> f64 {
    (0..STARTS).map(|k| one((f64::from(k) + 0.5) / f64::from(STARTS), lambda / 4.0)).sum::<f64>() / f64::from(STARTS)
}

/// The cycle from the near side, left at rate `u` against the acceleration; pulses over time.
fn one(mut u: f64, acceleration: f64) -> f64 {
    let (mut time, mut pulses) = (-SETTLE, 0.0);
    while time < SPAN {
        if time < 0.0 {
            pulses = 0.0;
        }
        let at_far = u * u - 4.0 * acceleration;
        let arrives = if at_far > 0.0 {
            // To the far side, a pulse there, and back: the mean of the rates at both ends over the width of 2.
            let w = at_far.sqrt();
            let turned = w.floor() + 1.0;
            let a = turned - w;
            let v = (a * a + 4.0 * acceleration).sqrt();
            time += 4.0 / (u + w) + 4.0 / (a + v);
            pulses += turned;
            v
        } else {
            time += 2.0 * u / acceleration;
            u
        };
        let turned = arrives.floor() + 1.0;
        pulses += turned;
        // Exactly on a whole number of bits the cycle would stand still for ever.
        u = (turned - arrives).max(1e-9);
    }
    if time > 0.0 { pulses / time } else { 0.0 }
}
