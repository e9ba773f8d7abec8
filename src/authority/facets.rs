//! The faces of the attainable torques, from subsets of columns.

use std::collections::HashMap;

use super::Generator;
use super::linear::{DEPENDENT, Vec6, dot, norm, scaled, unit_axis};
use super::planes::{Plane, each_plane, parallel};
use super::reduced::{ROUNDINGS, Reduced};

/// Sine below which a column counts as lying in a face when faces are weeded out. Generous: a face kept without
/// need costs a dot product, a face dropped wrongly costs the answer.
const IN_FACE: f64 = 1e-9;

/// Normals that agree to this, per component, are one face found from several subsets.
const SAME_NORMAL: f64 = 1e-12;

/// Columns on one line, taken together.
struct Line {
    unit: Vec6,
    /// Reach against and along `unit`: level × length.
    least: f64,
    most: f64,
    /// Coordinates of `unit` beside the attainable torques.
    force: [f64; 3],
}

/// A face in the reduced coordinates of the attainable torques: unit normal and offset. There the set is round even
/// where it is flat in newton metres, so that directions and offsets keep their digits.
#[derive(Debug, Clone, Copy)]
pub(super) struct ReducedFace {
    pub(super) normal: [f64; 3],
    pub(super) offset: f64,
}

/// All faces of the attainable torques of `generators`, which `reduced` describes.
pub(super) fn facets(reduced: &Reduced, generators: &[Generator]) -> Vec<ReducedFace> {
    let mut faces = Faces { reduced, generators, seen: HashMap::new(), found: Vec::new() };
    if reduced.torque_rank == 0 {
        return Vec::new();
    }
    if reduced.rank == 1 {
        faces.add(&unit_axis(0));
        faces.add(&unit_axis::<6>(0).map(|x| -x));
        return faces.found;
    }
    let lines = lines(reduced, generators);
    let units: Vec<Vec6> = lines.iter().map(|line| line.unit).collect();
    let balance = Balance::new(&lines, reduced.rank - reduced.torque_rank);
    let mut rates = vec![0.0; lines.len()];
    each_plane(&units, reduced.rank, &mut |plane| {
        for follower in plane.followers() {
            let Some((along, _)) = plane.along(follower) else {
                continue;
            };
            for (rate, [a, b]) in rates.iter_mut().zip(plane.coordinates) {
                *rate = along[0] * b - along[1] * a;
            }
            faces.add_both(plane, along, &rates, &balance);
        }
    });
    faces.found
}

fn lines(reduced: &Reduced, generators: &[Generator]) -> Vec<Line> {
    let mut lines: Vec<Line> = Vec::new();
    for column in &reduced.columns {
        let generator = &generators[column.index];
        let (least, most) = (generator.least * column.length, generator.most * column.length);
        let known = lines.iter_mut().find_map(|line| parallel(&line.unit, &column.unit).map(|sign| (line, sign)));
        if let Some((line, sign)) = known {
            line.least += if sign > 0.0 { least } else { -most };
            line.most += if sign > 0.0 { most } else { -least };
        } else {
            let force = std::array::from_fn(|i| column.unit.get(reduced.torque_rank + i).map_or(0.0, |x| *x));
            lines.push(Line { unit: column.unit, least, most, force });
        }
    }
    lines
}

struct Faces<'a> {
    reduced: &'a Reduced,
    generators: &'a [Generator],
    seen: HashMap<[i64; 3], usize>,
    found: Vec<ReducedFace>,
}

impl Faces<'_> {
    fn add_both(&mut self, plane: &Plane, along: [f64; 2], rates: &[f64], balance: &Balance) {
        let [up, down] = balance.meets(rates);
        if !up && !down {
            return;
        }
        let normal = plane.normal(along);
        if up {
            self.add(&normal);
        }
        if down {
            self.add(&normal.map(|x| -x));
        }
    }

    fn add(&mut self, reduced_normal: &Vec6) {
        let torque = std::array::from_fn(|i| if i < self.reduced.torque_rank { reduced_normal[i] } else { 0.0 });
        let size = norm(&torque);
        if size <= DEPENDENT {
            return;
        }
        let face = ReducedFace { normal: scaled(&torque, size.recip()), offset: self.offset(reduced_normal) / size };
        #[expect(clippy::cast_possible_truncation, reason = "components of a unit vector over 1e-12 fit 2^63")]
        let key = face.normal.map(|x| (x / SAME_NORMAL).round() as i64);
        let next = self.found.len();
        let index = *self.seen.entry(key).or_insert(next);
        match self.found.get_mut(index) {
            Some(known) => known.offset = known.offset.min(face.offset),
            None => self.found.push(face),
        }
    }

    /// Support of the zonotope along the normal, from all its columns: a bound that holds for any normal, so that
    /// rounding of a normal can only loosen a face, never cut the set. Zero if nothing that reaches beyond the face
    /// does so by more than rounding: the rule that makes a ray of the dual, so that both come to the same verdict.
    fn offset(&self, reduced_normal: &Vec6) -> f64 {
        let (mut offset, mut beyond) = (0.0, false);
        for column in &self.reduced.columns {
            let generator = &self.generators[column.index];
            let value = dot(reduced_normal, &column.unit);
            let reach = (generator.most * value).max(generator.least * value);
            offset += reach * column.length;
            beyond |= reach > 0.0 && value.abs() > ROUNDINGS * column.noise;
        }
        if beyond { offset } else { 0.0 }
    }
}

/// Weeds out faces of the zonotope that the slice without force does not meet.
///
/// A face with normal y consists of the columns with y · w > 0 at their most, those with y · w < 0 at their least and
/// those in the face anywhere between. It meets the slice ⇔ the forces of the first two can be cancelled by the last,
/// that is ⇔ the origin lies in a small zonotope of forces, which its own faces tell. Faces that touch count as met.
struct Balance {
    dimensions: usize,
    least: Vec<[f64; 3]>,
    most: Vec<[f64; 3]>,
    force: Vec<[f64; 3]>,
    slack: f64,
}

impl Balance {
    fn new(lines: &[Line], dimensions: usize) -> Self {
        let reach = |line: &Line| (line.most - line.least) * dot(&line.force, &line.force).sqrt();
        Self {
            dimensions,
            least: lines.iter().map(|line| line.force.map(|x| x * line.least)).collect(),
            most: lines.iter().map(|line| line.force.map(|x| x * line.most)).collect(),
            force: lines.iter().map(|line| line.force).collect(),
            slack: IN_FACE * lines.iter().map(reach).sum::<f64>(),
        }
    }

    /// Whether the faces with normals up and down meet the slice, given each line's component along the normal.
    fn meets(&self, rates: &[f64]) -> [bool; 2] {
        if self.dimensions == 0 {
            return [true; 2];
        }
        let (mut up, mut down) = ([0.0; 3], [0.0; 3]);
        let mut inside = Inside { count: 0, lines: [0; 64], whole: true };
        for (index, rate) in rates.iter().enumerate() {
            if rate.abs() <= IN_FACE {
                inside.push(index);
                continue;
            }
            let (above, below) = if *rate > 0.0 { (&mut up, &mut down) } else { (&mut down, &mut up) };
            for (sum, x) in above.iter_mut().zip(&self.most[index]) {
                *sum += x;
            }
            for (sum, x) in below.iter_mut().zip(&self.least[index]) {
                *sum += x;
            }
        }
        if !inside.whole {
            return [true; 2];
        }
        let inside = &inside.lines[..inside.count];
        [self.cancels(&up, inside), self.cancels(&down, inside)]
    }

    /// Whether `force` plus some levels of the `inside` lines can be zero, as far as the faces of those lines tell.
    fn cancels(&self, force: &[f64; 3], inside: &[usize]) -> bool {
        let among = |normal: [f64; 3]| {
            let size = dot(&normal, &normal).sqrt();
            if size <= DEPENDENT {
                return true;
            }
            let (mut low, mut high) = (dot(force, &normal), dot(force, &normal));
            for &index in inside {
                let (least, most) = (dot(&self.least[index], &normal), dot(&self.most[index], &normal));
                low += least.min(most);
                high += least.max(most);
            }
            low <= self.slack * size && high >= -self.slack * size
        };
        match self.dimensions {
            1 => among([1.0, 0.0, 0.0]),
            2 => inside.iter().all(|&i| {
                let [x, y, _] = self.force[i];
                among([-y, x, 0.0])
            }),
            _ => inside.iter().enumerate().all(|(count, &i)| {
                let against = |&j: &usize| among(cross(&self.force[i], &self.force[j]));
                inside[..count].iter().all(against)
            }),
        }
    }
}

/// The lines that lie in a face; more than 64 are not weeded.
struct Inside {
    count: usize,
    lines: [usize; 64],
    whole: bool,
}

impl Inside {
    fn push(&mut self, line: usize) {
        match self.lines.get_mut(self.count) {
            Some(place) => {
                *place = line;
                self.count += 1;
            }
            None => self.whole = false,
        }
    }
}

fn cross(a: &[f64; 3], b: &[f64; 3]) -> [f64; 3] {
    [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]]
}
