//! The Earth's main magnetic field, IGRF-14.

use std::sync::OnceLock;

use nalgebra::Vector3;

use super::epoch::Epoch;

/// Coefficients of the 14th generation, 1900 to 2030. Source: IAGA, doi 10.5281/zenodo.14012302.
static TABLE_TEXT: &str = include_str!("igrf14.shc");
const MAX_DEGREE: usize = 13;
/// Mean radius of the Earth by which the coefficients are defined, m.
const REFERENCE_RADIUS_M: f64 = 6_371_200.0;
/// Number of (n, m) pairs with 0 ≤ m ≤ n ≤ 14, one degree more than the potential for its derivatives.
const PAIRS: usize = (MAX_DEGREE + 2) * (MAX_DEGREE + 3) / 2;

/// Gauss coefficients of one date. Beyond three or four Earth radii the true field has external parts of like size.
#[derive(Debug, Clone)]
pub struct Igrf {
    /// Coefficients g and h, tesla, unnormalised, by `pair(n, m)`.
    coefficients: [(f64, f64); PAIRS],
}

struct Table {
    years: Vec<f64>,
    rows: Vec<(usize, i32, Vec<f64>)>,
}

impl Igrf {
    /// The field at `epoch`: coefficients linear in days within each five-year span, secular variation after 2025.
    ///
    /// After 2030 the secular variation of 2025 to 2030 goes on, before 1900 that of the first span.
    /// An epoch outside the calendar gives the first year of the table.
    #[must_use]
    pub fn at(epoch: Epoch) -> Self {
        let table = table();
        let (span, fraction) = span_of(&table.years, epoch);
        let mut coefficients = [(0.0, 0.0); PAIRS];
        for (degree, order, values) in &table.rows {
            let (Some(from), Some(to)) = (values.get(span), values.get(span + 1)) else { continue };
            let m = order.unsigned_abs() as usize;
            let tesla = (from + (to - from) * fraction) * 1e-9 * schmidt_factor(*degree, m);
            if let Some(slot) = coefficients.get_mut(pair(*degree, m)) {
                if *order < 0 { slot.1 = tesla } else { slot.0 = tesla }
            }
        }
        Self { coefficients }
    }

    /// Whether `epoch` lies outside the years the model is made for, 1900 to 2030.
    #[must_use]
    pub fn is_extrapolated(epoch: Epoch) -> bool {
        let years = &table().years;
        let year = epoch.decimal_year();
        !(years.first().is_some_and(|first| year >= *first) && years.last().is_some_and(|last| year <= *last))
    }

    /// Field at an Earth-fixed position in metres, tesla, Earth-fixed components, degree 13. Zero at the centre.
    #[must_use]
    pub fn field_earth_fixed(&self, position_m: &Vector3<f64>) -> Vector3<f64> {
        self.field_truncated(position_m, MAX_DEGREE)
    }

    /// The same with terms up to `max_degree` alone (13 if above). Allocates nothing.
    ///
    /// The potential is a sum of solid harmonics, whose Cartesian derivatives are solid harmonics of the next degree:
    /// no angle appears and the poles are as any other place.
    ///
    /// ```text
    /// V_nm + i W_nm = (a/r)^(n+1) P_nm(sin latitude) exp(i m longitude),   B = −grad( a Σ g_nm V_nm + h_nm W_nm )
    /// ```
    ///
    /// Source: L. E. Cunningham, Celestial Mechanics 2, 207 (1970), as in Montenbruck and Gill, Satellite Orbits, section 3.2.
    #[must_use]
    pub fn field_truncated(&self, position_m: &Vector3<f64>, max_degree: usize) -> Vector3<f64> {
        let degree = max_degree.min(MAX_DEGREE);
        let scaled = position_m / REFERENCE_RADIUS_M;
        if scaled.norm_squared() <= 0.0 {
            return Vector3::zeros();
        }
        let solid = solid_harmonics(&scaled, degree + 1);
        let mut gradient = Vector3::zeros();
        for n in 1..=degree {
            for m in 0..=n {
                gradient += term_gradient(&solid, self.coefficients[pair(n, m)], n, m);
            }
        }
        -gradient
    }
}

/// Gradient of `g V_nm + h W_nm` in units of the reference radius. Source: Montenbruck and Gill, eq. 3.33.
fn term_gradient(solid: &[(f64, f64); PAIRS], (g, h): (f64, f64), n: usize, m: usize) -> Vector3<f64> {
    let (v_zero, w_zero) = solid[pair(n + 1, m)];
    let (v_up, w_up) = solid[pair(n + 1, m + 1)];
    let along_z = -((n - m + 1) as f64) * (g * v_zero + h * w_zero);
    if m == 0 {
        return Vector3::new(-g * v_up, -g * w_up, along_z);
    }
    let (v_down, w_down) = solid[pair(n + 1, m - 1)];
    let factor = ((n - m + 1) * (n - m + 2)) as f64;
    Vector3::new(
        0.5 * (-g * v_up - h * w_up + factor * (g * v_down + h * w_down)),
        0.5 * (-g * w_up + h * v_up + factor * (-g * w_down + h * v_down)),
        along_z,
    )
}

/// `(V_nm, W_nm)` up to `degree` at a position in units of the reference radius, without Condon-Shortley phase.
fn solid_harmonics(position: &Vector3<f64>, degree: usize) -> [(f64, f64); PAIRS] {
    let mut solid = [(0.0, 0.0); PAIRS];
    let inverse_square = position.norm_squared().recip();
    let along = position * inverse_square;
    solid[0] = (inverse_square.sqrt(), 0.0);
    for m in 0..=degree {
        if m > 0 {
            let (v, w) = solid[pair(m - 1, m - 1)];
            let odd = (2 * m - 1) as f64;
            solid[pair(m, m)] = (odd * (along.x * v - along.y * w), odd * (along.x * w + along.y * v));
        }
        for n in m + 1..=degree {
            let (v, w) = solid[pair(n - 1, m)];
            let before = if n >= m + 2 { solid[pair(n - 2, m)] } else { (0.0, 0.0) };
            let (near, far) = ((2 * n - 1) as f64 * along.z, (n + m - 1) as f64 * inverse_square);
            let scale = ((n - m) as f64).recip();
            solid[pair(n, m)] = (scale * (near * v - far * before.0), scale * (near * w - far * before.1));
        }
    }
    solid
}

fn pair(n: usize, m: usize) -> usize {
    n * (n + 1) / 2 + m
}

/// Schmidt's semi-normalisation over plain Legendre functions: √(2 (n−m)!/(n+m)!), 1 for m = 0.
fn schmidt_factor(n: usize, m: usize) -> f64 {
    if m == 0 {
        return 1.0;
    }
    let ratio: f64 = (n - m + 1..=n + m).map(|k| k as f64).product();
    (2.0 / ratio).sqrt()
}

/// The span of the table to use at `epoch` and how far into it, which is outside [0, 1] when extrapolated.
fn span_of(years: &[f64], epoch: Epoch) -> (usize, f64) {
    let year = epoch.decimal_year();
    let last_span = years.len().saturating_sub(2);
    let span = years.iter().skip(1).take(last_span).filter(|start| year >= **start).count();
    let (Some(from), Some(to)) = (years.get(span), years.get(span + 1)) else { return (0, 0.0) };
    let (start, end) = (julian_date_of_new_year(*from), julian_date_of_new_year(*to));
    let fraction = (epoch.julian_date_utc() - start) / (end - start);
    if year.is_nan() { (0, 0.0) } else { (span, fraction) }
}

/// Julian date of 1 January 00:00 of a whole Gregorian `year`.
fn julian_date_of_new_year(year: f64) -> f64 {
    let before = year - 1.0;
    1_721_425.5 + 365.0 * before + (before / 4.0).floor() - (before / 100.0).floor() + (before / 400.0).floor()
}

fn table() -> &'static Table {
    static TABLE: OnceLock<Table> = OnceLock::new();
    TABLE.get_or_init(|| parse(TABLE_TEXT))
}

/// Reads the `shc` form: comments, one line of sizes, one of years, then `n m value…` (m below zero for h).
fn parse(text: &str) -> Table {
    let mut lines = text.lines().filter(|line| !line.starts_with('#') && !line.trim().is_empty()).skip(1);
    let numbers = |line: &str| line.split_whitespace().filter_map(|word| word.parse().ok()).collect::<Vec<f64>>();
    let years = lines.next().map(numbers).unwrap_or_default();
    let rows = lines
        .filter_map(|line| {
            let mut words = line.split_whitespace();
            let (degree, order) = (words.next()?.parse().ok()?, words.next()?.parse().ok()?);
            Some((degree, order, words.filter_map(|word| word.parse().ok()).collect()))
        })
        .collect();
    Table { years, rows }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_coefficient_of_the_file_is_read_once() {
        let table = table();
        assert_eq!(table.years.len(), 27);
        // 13 · 15 pairs of degree and order, the h of order 0 left out.
        assert_eq!(table.rows.len(), 195);
        assert!(table.rows.iter().all(|(_, _, values)| values.len() == 27));
    }

    #[test]
    fn spans_of_the_table_hold_leap_days() {
        // 2020 to 2025 has two leap days: 1827 days.
        let (span, fraction) = span_of(&table().years, Epoch::parse("2020-01-02").unwrap());
        assert_eq!(span, 24);
        approx::assert_abs_diff_eq!(fraction, 1.0 / 1827.0, epsilon = 1e-9);
        let (span, fraction) = span_of(&table().years, Epoch::parse("2035-01-01").unwrap());
        assert_eq!(span, 25);
        approx::assert_abs_diff_eq!(fraction, 3652.0 / 1826.0, epsilon = 1e-9);
    }
}
