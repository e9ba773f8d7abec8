//! Small dense linear algebra on fixed arrays: what nalgebra's heap matrices would be too slow for.

/// Coordinates of a wrench in its own range; those above the rank are zero.
pub(super) type Vec6 = [f64; 6];

/// Unit columns closer to a common subspace than this count as lying in it, rad. Geometry typed in degrees and
/// metres carries rounding of 1e-15; a real misalignment of 1e-11 rad is a tenth of an atom over ten metres.
pub(super) const DEPENDENT: f64 = 1e-11;

/// Inner product.
pub(super) fn dot<const N: usize>(a: &[f64; N], b: &[f64; N]) -> f64 {
    a.iter().zip(b).map(|(x, y)| x * y).sum()
}

/// Euclidean norm.
pub(super) fn norm<const N: usize>(a: &[f64; N]) -> f64 {
    dot(a, a).sqrt()
}

/// `a + factor · b`.
pub(super) fn add_scaled<const N: usize>(a: &[f64; N], factor: f64, b: &[f64; N]) -> [f64; N] {
    let mut sum = *a;
    for (s, x) in sum.iter_mut().zip(b) {
        *s += factor * x;
    }
    sum
}

/// `factor · a`.
pub(super) fn scaled<const N: usize>(a: &[f64; N], factor: f64) -> [f64; N] {
    a.map(|x| x * factor)
}

/// The unit vector along the coordinate `axis`.
pub(super) fn unit_axis<const N: usize>(axis: usize) -> [f64; N] {
    std::array::from_fn(|i| if i == axis { 1.0 } else { 0.0 })
}

/// What is left of `vector` beside the orthonormal `basis`; done twice, since one pass of Gram–Schmidt loses digits
/// where little is left (Giraud, Langou, Rozložník and van den Eshof 2005: twice is enough).
pub(super) fn residual<const N: usize>(vector: &[f64; N], basis: &[[f64; N]]) -> [f64; N] {
    let mut left = *vector;
    for _ in 0..2 {
        for e in basis {
            left = add_scaled(&left, -dot(&left, e), e);
        }
    }
    left
}

/// Extends the orthonormal `basis` to the span of it and `vectors`, the vector with most left first; stops when no
/// vector has more than `tolerance` left.
pub(super) fn extend<const N: usize>(
    basis: &mut Vec<[f64; N]>,
    vectors: &[[f64; N]],
    tolerance: f64,
) {
    while basis.len() < N {
        let left = vectors.iter().map(|v| residual(v, basis));
        let Some((most, size)) = left
            .map(|v| (v, norm(&v)))
            .reduce(|a, b| if b.1 > a.1 { b } else { a })
        else {
            return;
        };
        if size <= tolerance {
            return;
        }
        let unit = residual(&scaled(&most, size.recip()), basis);
        basis.push(scaled(&unit, norm(&unit).recip()));
    }
}

/// Orthonormal rows that span `rows` beside the orthonormal `given`, strongest first; rows with less than
/// [`DEPENDENT`] of the strongest row left add nothing.
pub(super) fn orthonormal_rows(given: &[Vec<f64>], rows: &[Vec<f64>]) -> Vec<Vec<f64>> {
    let inner = |a: &[f64], b: &[f64]| a.iter().zip(b).map(|(x, y)| x * y).sum::<f64>();
    let size = |row: &Vec<f64>| inner(row, row).sqrt();
    let smallest = DEPENDENT * rows.iter().map(size).fold(0.0, f64::max);
    let mut found: Vec<Vec<f64>> = Vec::new();
    let beside = |row: &Vec<f64>, found: &[Vec<f64>]| {
        let mut left = row.clone();
        // Twice, as in `residual`.
        for e in given.iter().chain(found).chain(given).chain(found) {
            let along = inner(&left, e);
            left.iter_mut().zip(e).for_each(|(x, e)| *x -= along * e);
        }
        left
    };
    while found.len() < rows.len() {
        let left = rows.iter().map(|row| beside(row, &found));
        let Some(mut most) = left.reduce(|a, b| if size(&b) > size(&a) { b } else { a }) else {
            break;
        };
        let length = size(&most);
        if length <= smallest {
            break;
        }
        for x in &mut most {
            *x /= length;
        }
        let mut unit = beside(&most, &found);
        let length = size(&unit);
        for x in &mut unit {
            *x /= length;
        }
        found.push(unit);
    }
    found
}

/// Extends the orthonormal `basis` to the first `dimensions` coordinates and returns what was added.
pub(super) fn complement<const N: usize>(basis: &[[f64; N]], dimensions: usize) -> Vec<[f64; N]> {
    let axes: Vec<[f64; N]> = (0..dimensions).map(unit_axis).collect();
    let mut all = basis.to_vec();
    // Of d directions missing among N axes, one axis has at least √(d/N) ≥ 0.4 left.
    extend(&mut all, &axes, 0.1);
    all.split_off(basis.len())
}

/// Inverse of the `rank` × `rank` matrix whose columns are `columns`, as rows; `None` if it is singular in double precision.
pub(super) fn inverse(columns: &[Vec6], rank: usize) -> Option<[Vec6; 6]> {
    let mut left = [[0.0; 6]; 6];
    let mut right = [[0.0; 6]; 6];
    for row in 0..rank {
        for (cell, column) in left[row].iter_mut().zip(columns) {
            *cell = column[row];
        }
        right[row][row] = 1.0;
    }
    for pivot in 0..rank {
        let best =
            (pivot..rank).max_by(|&a, &b| left[a][pivot].abs().total_cmp(&left[b][pivot].abs()))?;
        left.swap(pivot, best);
        right.swap(pivot, best);
        let factor = left[pivot][pivot].recip();
        if !factor.is_finite() {
            return None;
        }
        left[pivot] = scaled(&left[pivot], factor);
        right[pivot] = scaled(&right[pivot], factor);
        let (left_row, right_row) = (left[pivot], right[pivot]);
        for row in (0..rank).filter(|&row| row != pivot) {
            let factor = -left[row][pivot];
            left[row] = add_scaled(&left[row], factor, &left_row);
            right[row] = add_scaled(&right[row], factor, &right_row);
        }
    }
    Some(right)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Rounding of a well-conditioned 3 × 3 solve with entries near one: 1e-15; this is ten times that.
    const ROUNDING: f64 = 1e-14;

    #[test]
    fn inverse_of_a_small_integer_matrix() {
        // Columns of [[2,1,0],[1,3,1],[0,1,2]]: determinant 8, adjugate over 8 by hand.
        let columns = [
            [2.0, 1.0, 0.0, 0.0, 0.0, 0.0],
            [1.0, 3.0, 1.0, 0.0, 0.0, 0.0],
            [0.0, 1.0, 2.0, 0.0, 0.0, 0.0],
        ];
        let expected = [
            [0.625, -0.25, 0.125],
            [-0.25, 0.5, -0.25],
            [0.125, -0.25, 0.625],
        ];
        let found = inverse(&columns, 3).expect("regular");
        for (row, wanted) in found.iter().zip(expected) {
            assert!(
                row.iter()
                    .zip(wanted)
                    .all(|(a, b)| (a - b).abs() < ROUNDING)
            );
        }
    }

    #[test]
    fn a_zero_column_has_no_inverse() {
        assert!(inverse(&[[1.0, 0.0, 0.0, 0.0, 0.0, 0.0], [0.0; 6]], 2).is_none());
    }

    #[test]
    fn noise_does_not_add_a_dimension() {
        let mut basis = Vec::new();
        extend(
            &mut basis,
            &[[1.0, 1.0, 1e-16], [1.0, -1.0, 0.0], [0.3, 0.1, -1e-16]],
            DEPENDENT,
        );
        assert_eq!(basis.len(), 2);
        let across = complement(&basis, 3);
        assert_eq!(across.len(), 1);
        assert!((across[0][2].abs() - 1.0).abs() < ROUNDING);
    }
}
