//! Whether a cone {s : row · s ≥ 0} of few rows has an inside.

use super::linear::{DEPENDENT, add_scaled, dot, norm, scaled};

/// Rounding of a product of unit vectors.
const ROUNDING: f64 = 1e-15;

/// Whether some s in the first `rank` (1 to 3) coordinates has `row · s > 0` for all `rows`, unit vectors that span them.
///
/// Such a cone is pointed, so it is spanned by its extreme rays, each of which is orthogonal to `rank` − 1 rows; their
/// sum is inside if anything is. A cone narrower than 1e-11 rad counts as flat.
pub(super) fn opens(rows: &[[f64; 3]], rank: usize) -> bool {
    if rows.len() == rank {
        return true;
    }
    let mut middle = [0.0; 3];
    let mut add = |ray: [f64; 3], through: [usize; 2]| {
        let size = norm(&ray);
        if size > DEPENDENT {
            let unit = scaled(&ray, size.recip());
            let others = rows.iter().enumerate().filter(|(i, _)| !through.contains(i)).map(|(_, row)| row);
            // Of two nearly parallel rows the product has few digits.
            if let Some(sign) = common_sign(others, &unit, DEPENDENT.max(ROUNDING / size)) {
                middle = add_scaled(&middle, sign, &unit);
            }
        }
    };
    match rank {
        1 => add([1.0, 0.0, 0.0], [rows.len(); 2]),
        2 => rows.iter().enumerate().for_each(|(i, r)| add([-r[1], r[0], 0.0], [i; 2])),
        _ => {
            for (i, a) in rows.iter().enumerate() {
                for (j, b) in rows[..i].iter().enumerate() {
                    add([a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]], [i, j]);
                }
            }
        }
    }
    let size = norm(&middle);
    size > 0.0 && rows.iter().all(|row| dot(row, &middle) > DEPENDENT * size)
}

/// The sign that makes all components of `unit` along `rows` positive or zero.
fn common_sign<'a>(rows: impl Iterator<Item = &'a [f64; 3]>, unit: &[f64; 3], zero: f64) -> Option<f64> {
    let (mut low, mut high) = (0.0_f64, 0.0_f64);
    for row in rows {
        let along = dot(row, unit);
        low = low.min(along);
        high = high.max(along);
        if low < -zero && high > zero {
            return None;
        }
    }
    Some(if high > -low { 1.0 } else { -1.0 })
}

#[cfg(test)]
mod tests {
    use super::*;

    const X: [f64; 3] = [1.0, 0.0, 0.0];
    const Y: [f64; 3] = [0.0, 1.0, 0.0];
    const Z: [f64; 3] = [0.0, 0.0, 1.0];

    #[test]
    fn an_octant_opens_and_opposed_rows_do_not() {
        assert!(opens(&[X, Y, Z], 3));
        assert!(!opens(&[X, Y, Z, [-1.0, 0.0, 0.0]], 3));
        assert!(!opens(&[X, Y, Z, scaled(&[1.0, 1.0, 1.0], -(3.0_f64.sqrt().recip()))], 3));
    }

    #[test]
    fn fewer_dimensions() {
        assert!(opens(&[X], 1) && opens(&[X, X], 1) && !opens(&[X, [-1.0, 0.0, 0.0]], 1));
        assert!(opens(&[X, Y], 2) && !opens(&[X, Y, [-1.0, 0.0, 0.0]], 2));
    }
}
