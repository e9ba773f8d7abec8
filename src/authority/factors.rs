//! The factors Q R of a matrix of three rows and up to three independent columns.

use nalgebra::Vector3;

use super::linear::{Vec6, dot, norm, residual, scaled};

/// Q R by Gram–Schmidt. The columns come strongest first, and systems are solved by substitution rather than with an
/// inverse, so that the digits of weak columns survive.
#[derive(Debug, Clone, Default)]
pub(super) struct Factors {
    /// Columns of Q, orthonormal.
    span: Vec<[f64; 3]>,
    /// R, upper triangular.
    upper: [[f64; 3]; 3],
}

impl Factors {
    /// Factors of the matrix with these columns, which must be independent.
    pub(super) fn new(columns: &[Vector3<f64>]) -> Self {
        let mut factors = Self::default();
        for (place, column) in columns.iter().enumerate() {
            let column: [f64; 3] = (*column).into();
            let left = residual(&column, &factors.span);
            let unit = residual(&scaled(&left, norm(&left).recip()), &factors.span);
            factors.span.push(scaled(&unit, norm(&unit).recip()));
            for (row, e) in factors.upper.iter_mut().zip(&factors.span) {
                row[place] = dot(e, &column);
            }
        }
        factors
    }

    /// Orthonormal basis of the span of the columns.
    pub(super) fn span(&self) -> &[[f64; 3]] {
        &self.span
    }

    /// The x with matrix · x = `right`, as far as it lies in the span; zeros follow.
    pub(super) fn solve(&self, right: &Vector3<f64>) -> Vec6 {
        let right = (*right).into();
        let mut x = [0.0; 6];
        for (place, (e, row)) in self.span.iter().zip(&self.upper).enumerate().rev() {
            let known: f64 = row.iter().zip(&x).skip(place + 1).map(|(r, x)| r * x).sum();
            x[place] = (dot(e, &right) - known) / row[place];
        }
        x
    }

    /// The v in the span with v · (matrix · x) = `weights` · x for all x.
    pub(super) fn covector(&self, weights: &[f64]) -> Vector3<f64> {
        let mut along = [0.0; 3];
        for (place, weight) in (0..self.span.len()).zip(weights) {
            let known: f64 = (0..place).map(|row| self.upper[row][place] * along[row]).sum();
            along[place] = (weight - known) / self.upper[place][place];
        }
        self.span.iter().zip(along).fold(Vector3::zeros(), |sum, (e, a)| sum + Vector3::from(*e) * a)
    }

    /// Squares of the entries of the pseudo-inverse, added up.
    pub(super) fn inverse_size_squared(&self) -> f64 {
        let rows = (0..self.span.len()).map(|row| {
            let mut weights = [0.0; 3];
            weights[row] = 1.0;
            self.covector(&weights).norm_squared()
        });
        rows.sum()
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    /// A strong and a very weak column, not orthogonal: both unknowns keep their digits.
    #[test]
    fn weak_columns_keep_their_digits() {
        let columns = [Vector3::new(3.0, 4.0, 0.0), Vector3::new(3e-9, 4e-9, 1e-9)];
        let factors = Factors::new(&columns);
        let x = factors.solve(&(columns[0] * 2.0 - columns[1] * 5.0));
        // The right side rounds to 1e-15 of its size, a millionth of the weak column's part.
        assert!((x[0] - 2.0).abs() < 1e-7 && (x[1] + 5.0).abs() < 1e-5);
        let v = factors.covector(&[0.7, -0.3]);
        assert!((v.dot(&columns[0]) - 0.7).abs() < 1e-6 && (v.dot(&columns[1]) + 0.3).abs() < 1e-6);
        assert!(v.dot(&Vector3::new(-4.0, 3.0, 0.0)).abs() < 1e-6, "outside the span");
    }
}
