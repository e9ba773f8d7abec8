//! Which thrusters can take part in a firing without net force.

use nalgebra::Vector3;

use super::linear::{DEPENDENT, extend};

/// Marks the forces that some balanced firing uses, and returns with them the vector m for which m · d is zero on
/// those and below zero on the others.
///
/// A combination Σ f d = 0 with f ≥ 0 uses only d in the lineality space of the cone of all d, which is the
/// intersection of the supporting planes of that cone. A cone of rank k has a supporting plane through k − 1
/// independent members for each of its facets, so trying those planes finds them all. A two-sided generator
/// counts as d and −d.
pub(super) fn balanced(forces: &[Vector3<f64>], two_sided: &[bool]) -> (Vec<bool>, Vector3<f64>) {
    let mut span = Vec::new();
    let arrays: Vec<[f64; 3]> = forces.iter().map(|d| (*d).into()).collect();
    extend(&mut span, &arrays, DEPENDENT);
    let span: Vec<Vector3<f64>> = span.into_iter().map(Vector3::from).collect();
    let mut normals = Vec::new();
    match span.as_slice() {
        [] => {}
        [line] => normals.push(*line),
        [a, b] => normals.extend(forces.iter().map(|d| a.cross(b).cross(d))),
        _ => {
            for (i, d) in forces.iter().enumerate() {
                normals.extend(forces[..i].iter().map(|e| across_both(d, e)));
            }
        }
    }
    let mut taking_part = vec![true; forces.len()];
    let mut across = Vector3::zeros();
    for unit in normals.iter().filter_map(|n| n.try_normalize(DEPENDENT)).flat_map(|n| [n, -n]) {
        let supports = |(d, two): (&Vector3<f64>, &bool)| {
            let along = unit.dot(d);
            along <= DEPENDENT && (!two || along >= -DEPENDENT)
        };
        if !forces.iter().zip(two_sided).all(supports) {
            continue;
        }
        let mut excludes = false;
        for (part, d) in taking_part.iter_mut().zip(forces) {
            if unit.dot(d) < -DEPENDENT {
                *part = false;
                excludes = true;
            }
        }
        if excludes {
            across += unit;
        }
    }
    (taking_part, across)
}

/// d × e, with its digits kept where the two are nearly parallel.
fn across_both(d: &Vector3<f64>, e: &Vector3<f64>) -> Vector3<f64> {
    if d.dot(e) > 0.0 { d.cross(&(e - d)) } else { d.cross(&(e + d)) }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn x() -> Vector3<f64> {
        Vector3::x()
    }

    fn y() -> Vector3<f64> {
        Vector3::y()
    }

    fn z() -> Vector3<f64> {
        Vector3::z()
    }

    #[test]
    fn a_thruster_with_nothing_against_it_takes_no_part() {
        let (part, across) = balanced(&[x(), -x(), z()], &[false; 3]);
        assert_eq!(part, [true, true, false]);
        assert!(across.dot(&z()) < 0.0 && across.dot(&x()).abs() < DEPENDENT);
    }

    #[test]
    fn all_on_one_side_leaves_none() {
        let forces = [(x() + z()).normalize(), (z() - x()).normalize(), (y() + z()).normalize()];
        assert_eq!(balanced(&forces, &[false; 3]).0, [false; 3]);
    }

    #[test]
    fn a_line_in_a_half_space_survives_alone() {
        let forces = [x(), -x(), (y() + z()).normalize(), (y() - z()).normalize()];
        assert_eq!(balanced(&forces, &[false; 4]).0, [true, true, false, false]);
    }

    /// Pushes a billionth of a radian apart, all in one half-space: none can be balanced.
    #[test]
    fn nearly_equal_pushes_do_not_hide_a_plane() {
        let forces = [
            Vector3::new(0.242_380_958_982_066_9, 0.367_620_307_376_778_03, -0.897_834_494_952_793),
            Vector3::new(0.747_320_795_750_108, 0.543_574_357_267_152_1, -0.382_149_900_380_764_24),
            Vector3::new(0.242_380_958_686_270_66, 0.367_620_308_276_189_86, -0.897_834_494_664_380_6),
        ];
        let (part, across) = balanced(&forces, &[false; 3]);
        assert_eq!(part, [false; 3]);
        assert!(forces.iter().all(|d| across.dot(d) < 0.0));
    }

    #[test]
    fn tetrahedron_is_whole_and_wheels_always_take_part() {
        let s = 1.0 / 3.0_f64.sqrt();
        let forces = [Vector3::new(s, s, s), Vector3::new(s, -s, -s), Vector3::new(-s, s, -s), Vector3::new(-s, -s, s)];
        assert_eq!(balanced(&forces, &[false; 4]).0, [true; 4]);
        assert_eq!(balanced(&forces[..3], &[false; 3]).0, [false; 3]);
        assert_eq!(balanced(&[Vector3::zeros(), x()], &[true, false]).0, [true, false]);
    }
}
