//! Hermite's interpolation through positions and velocities.

use nalgebra::Vector3;

use super::oem::Point;
use super::orbit::State;

/// Most points: beyond this a polynomial swings between its ends.
pub(super) const MOST_POINTS: usize = 8;

/// Position and velocity at `at_s` (TT past J2000) on the polynomial through the first [`MOST_POINTS`] of the points and their
/// velocities, by divided differences with each node taken twice. Zero without points. Epochs must rise.
///
/// Source: any text on numerical analysis, such as J. Stoer and R. Bulirsch, Introduction to Numerical Analysis, 2.1.5.
pub(super) fn hermite(points: &[Point], at_s: f64) -> State {
    let origin = points.first().map_or(0.0, |point| point.epoch.tt_seconds());
    let mut nodes = [0.0; 2 * MOST_POINTS];
    let mut table = [Vector3::zeros(); 2 * MOST_POINTS];
    let count = 2 * points.len().min(MOST_POINTS);
    for (k, point) in points.iter().take(MOST_POINTS).enumerate() {
        // From the first node: differences of seconds since J2000 would lose the digits that matter.
        nodes[2 * k..2 * k + 2].fill(point.epoch.tt_seconds() - origin);
        table[2 * k..2 * k + 2].fill(Vector3::from(point.position_m));
    }
    for level in 1..count {
        // From the end, so that each entry still finds the one before it as the last level left it.
        for k in (level..count).rev() {
            table[k] = match points.get(k / 2) {
                Some(point) if level == 1 && k % 2 == 1 => Vector3::from(point.velocity_m_per_s),
                _ => (table[k] - table[k - 1]) / (nodes[k] - nodes[k - level]),
            };
        }
    }
    let t = at_s - origin;
    let (mut position_m, mut velocity_m_per_s) = (Vector3::zeros(), Vector3::zeros());
    for (coefficient, node) in table.iter().zip(&nodes).take(count).rev() {
        velocity_m_per_s = velocity_m_per_s * (t - node) + position_m;
        position_m = position_m * (t - node) + coefficient;
    }
    State { position_m, velocity_m_per_s }
}
