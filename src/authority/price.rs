//! The least propellant for an angular impulse.

use nalgebra::{DMatrix, Vector3};

use super::linear::{Vec6, norm};
use super::reduced::{Direction, Reduced};
use super::tariff::{Certificate, Way, certificates, vertices};
use super::{Generator, NetForce};

/// An angular impulse outside what can be served by less than this part of itself counts as served: it comes out of
/// rotations and integrals that round to 1e-13, and a layout aligned on axes has its limits exactly there.
const OUTSIDE: f64 = 1e-10;

/// An impulse below zero by less than this part of all impulses is rounding on the border between two bases.
const IMPULSE_IS_ROUNDING: f64 = 1e-9;

/// Impulse per angular impulse, over that of a thruster on the longest arm, up to which a plain product keeps 1e-12.
const PLAIN_ENOUGH: f64 = 1e3;

/// A basis is taken without asking others if no impulse is below zero by more than this part of all.
const BORDER: f64 = 1e-12;

/// One way to fire at a vertex: `J = allocation · h`, best wherever that is not negative.
#[derive(Debug, Clone, PartialEq)]
pub struct Basis {
    /// Indices of the thrusters that fire, ascending.
    pub active: Vec<usize>,
    /// Impulse of each active thruster (rows, N·s) per angular impulse (columns x, y, z in N·m·s): 1/m.
    pub allocation: DMatrix<f64>,
    /// Price with the raised costs, in reduced coordinates: the largest tells the basis to fire.
    pub(super) select: [f64; 3],
    pub(super) way: Way,
}

/// One vertex of the dual: the price is `lambda · h` for the h that its bases serve.
#[derive(Debug, Clone, PartialEq)]
pub struct Vertex {
    /// Propellant per angular impulse, kg/(N·m·s), within the span of what can be served.
    pub lambda: Vector3<f64>,
    /// The bases that share this price; more than one where several ways to fire cost the same.
    pub bases: Vec<Basis>,
    /// `lambda` in reduced coordinates.
    pub(super) reduced: [f64; 3],
}

/// A basis as a plain linear map, for many impulses at once.
#[derive(Debug, Clone, PartialEq)]
pub struct PlainBasis {
    /// The basis with the largest `select · h` fires.
    pub select: [f64; 3],
    /// Thrusters that fire, and the impulse of each (N·s) per angular impulse about x, y, z (N·m·s).
    pub firing: Vec<(usize, [f64; 3])>,
}

/// What one angular impulse costs.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Price {
    /// Least propellant for the angular impulse asked for.
    Served {
        /// Propellant, kg.
        kg: f64,
    },
    /// No firing, however long, gives this angular impulse: `along · h > 0`, yet no torque that the layout can make has a
    /// positive part along `along`.
    NotServed {
        /// Unit vector.
        along: Vector3<f64>,
    },
}

/// The least propellant for every angular impulse, precomputed.
///
/// ```text
/// price(h) = min Σ J_i / u_i  over  Σ J_i a_i = h, [Σ J_i d_i = 0,] J ≥ 0
///          = max λ·h  over the vertices (λ, μ) of  {λ·a_i + μ·d_i ≤ 1/u_i}
/// ```
///
/// by linear-programming duality (Gale, Kuhn and Tucker 1951). Only the vertices that are best for a cone of h with an
/// inside are kept; their cones cover all that can be served.
#[derive(Debug, Clone)]
pub struct PriceMap {
    /// The vertices that some angular impulse makes best.
    pub vertices: Vec<Vertex>,
    /// Unit vectors: h can be served ⇔ `ray · h ≤ 0` for all of them. Empty if every direction can be served.
    pub rays: Vec<Vector3<f64>>,
    /// For each ray the m (in m) that proves it: `ray · torque + m · force ≤ 0` for every generator, to rounding.
    /// Zero where a net force is allowed.
    pub ray_forces: Vec<Vector3<f64>>,
    /// `lambda` of the vertices in reduced coordinates, side by side for speed.
    lambdas: Vec<[f64; 3]>,
    /// `select` of all bases side by side, and the vertex and basis they belong to.
    selects: Vec<[f64; 3]>,
    places: Vec<(usize, usize)>,
    /// The rays that are not for missing directions, in reduced coordinates, and what takes a torque there.
    reduced_rays: Vec<[f64; 3]>,
    direction: Direction,
    generators: usize,
    plain: Option<Vec<PlainBasis>>,
}

impl PriceMap {
    /// Prices of the layout `generators`, each taken as one-sided: levels from zero up without bound, those bounded to
    /// zero lost. Cannot fail. Time grows as the sixth power of their number without net force (20 ms for 24).
    #[must_use]
    pub fn new(generators: &[Generator], net: NetForce) -> Self {
        let reduced = Reduced::new(generators, net);
        let (mut vertices, rays) = vertices(&reduced, generators);
        vertices.sort_by(|a, b| {
            let order = a.lambda.iter().zip(&b.lambda).map(|(a, b)| b.total_cmp(a));
            order.fold(std::cmp::Ordering::Equal, std::cmp::Ordering::then)
        });
        let certificates = certificates(&reduced, &rays, generators);
        let bases =
            || vertices.iter().enumerate().flat_map(|(v, vertex)| vertex.bases.iter().enumerate().map(move |(b, basis)| (v, b, basis)));
        let (selects, places) = bases().map(|(v, b, basis)| (basis.select, (v, b))).unzip();
        let taken = |certificate: &Certificate| certificate.reduced;
        let mut map = Self {
            lambdas: vertices.iter().map(|v| v.reduced).collect(),
            selects,
            places,
            vertices,
            rays: certificates.iter().map(|c| c.torque).collect(),
            ray_forces: certificates.iter().map(|c| c.force).collect(),
            reduced_rays: certificates.iter().map_while(taken).collect(),
            direction: reduced.direction(),
            generators: generators.len(),
            plain: None,
        };
        map.plain = map.as_products();
        map
    }

    /// Least propellant for the angular impulse `h` (N·m·s), kg; homogeneous of degree 1.
    #[must_use]
    pub fn price(&self, h: &Vector3<f64>) -> Price {
        let s = self.direction.of(h);
        if let Some(ray) = self.violated(h, s.as_ref()) {
            return Price::NotServed { along: self.rays[ray] };
        }
        let kg = s.map_or(0.0, |s| self.lambdas.iter().map(|lambda| along(lambda, &s)).fold(0.0, f64::max));
        Price::Served { kg }
    }

    /// The ray that most says `h` cannot be served: index into `rays` and `ray_forces`, or `None` if it can.
    #[must_use]
    pub fn against(&self, h: &Vector3<f64>) -> Option<usize> {
        self.violated(h, self.direction.of(h).as_ref())
    }

    fn violated(&self, h: &Vector3<f64>, s: Option<&Vec6>) -> Option<usize> {
        if self.rays.is_empty() {
            return None;
        }
        let (ray, most) = match s {
            Some(s) => largest(self.reduced_rays.iter().map(|ray| along(ray, s) / norm(s)))?,
            None => largest(self.rays.iter().map(|ray| ray.dot(h) / h.norm()))?,
        };
        (most > OUTSIDE).then_some(ray)
    }

    /// Index of the vertex with the largest `lambda · h`, the first of equals; 0 if there are none. Does not check that
    /// `h` can be served.
    #[must_use]
    pub fn best_vertex(&self, h: &Vector3<f64>) -> usize {
        let s = self.direction.of(h).unwrap_or_default();
        largest(self.lambdas.iter().map(|lambda| along(lambda, &s))).map_or(0, |(index, _)| index)
    }

    /// Impulse of every generator (N·s, none negative) that gives `h` for the least propellant, or `None` if nothing can.
    ///
    /// A basic solution: at most six thrusters fire without net force, three with it.
    #[must_use]
    pub fn allocate(&self, h: &Vector3<f64>) -> Option<Vec<f64>> {
        let mut impulses = vec![0.0; self.generators];
        for (index, impulse) in self.firings(h)? {
            if let Some(place) = impulses.get_mut(index) {
                *place = impulse;
            }
        }
        Some(impulses)
    }

    /// As [`PriceMap::allocate`], but only the thrusters that fire: index and impulse, N·s. Allocates nothing.
    #[must_use]
    pub fn firings(&self, h: &Vector3<f64>) -> Option<impl Iterator<Item = (usize, f64)> + use<>> {
        let fired = match self.plainly(h) {
            Some(fired) => fired,
            None => self.carefully(h)?,
        };
        Some(fired.into_iter().flatten().map(|(index, impulse): (usize, f64)| (index, impulse.max(0.0))))
    }

    /// The firing by a plain product, unless it lies so near a border between two bases that others must be asked.
    fn plainly(&self, h: &Vector3<f64>) -> Option<Fired> {
        let plain = self.plain.as_deref()?;
        let (best, _) = largest(plain.iter().map(|basis| product(&basis.select, h)))?;
        let mut fired = Fired::default();
        let (mut lowest, mut sum) = (0.0_f64, 0.0);
        for (place, (index, row)) in fired.iter_mut().zip(&plain.get(best)?.firing) {
            let impulse = product(row, h);
            (lowest, sum) = (lowest.min(impulse), sum + impulse.abs());
            *place = Some((*index, impulse));
        }
        (lowest >= -BORDER * sum).then_some(fired)
    }

    fn carefully(&self, h: &Vector3<f64>) -> Option<Fired> {
        let s = self.direction.of(h)?;
        if self.violated(h, Some(&s)).is_some() {
            return None;
        }
        let mut all = Fired::default();
        if norm(&s) > 0.0 {
            let (way, fired) = self.way(&s)?;
            for ((place, index), impulse) in all.iter_mut().zip(&way.indices).zip(fired) {
                *place = Some((*index, impulse));
            }
        }
        Some(all)
    }

    /// The bases as plain linear maps, for many impulses at once; `None` where some direction cannot be served, or where the
    /// arms are so nearly in a plane that a plain product would lose digits.
    #[must_use]
    pub fn plain(&self) -> Option<&[PlainBasis]> {
        self.plain.as_deref()
    }

    fn as_products(&self) -> Option<Vec<PlainBasis>> {
        if !self.rays.is_empty() {
            return None;
        }
        let unit = |axis: usize| self.direction.of(&Vector3::ith(axis, 1.0));
        let axes = [unit(0)?, unit(1)?, unit(2)?];
        let one = |(vertex, basis): &(usize, usize)| {
            let basis = self.vertices.get(*vertex)?.bases.get(*basis)?;
            let select = axes.map(|s| along(&basis.select, &s));
            let fired = axes.map(|s| basis.way.fire(&s));
            let rows = (0..basis.way.indices.len()).map(|k| (basis.way.indices[k], [fired[0][k], fired[1][k], fired[2][k]]));
            let firing: Vec<_> = rows.filter(|(_, row)| row.iter().any(|x| x.abs() > 0.0)).collect();
            let largest = firing.iter().flat_map(|(_, row)| row).fold(0.0, |most: f64, x| most.max(x.abs()));
            (largest * self.direction.arm() < PLAIN_ENOUGH).then_some(PlainBasis { select, firing })
        };
        self.places.iter().map(one).collect()
    }

    /// The way to fire for the reduced coordinates `s`, and its impulses. The raised costs leave one, which has no
    /// negative impulse; on a border between two rounding may have picked the neighbour, then the others are asked.
    fn way(&self, s: &Vec6) -> Option<(&Way, Vec6)> {
        let at = |&(vertex, basis): &(usize, usize)| self.vertices.get(vertex).and_then(|v| v.bases.get(basis));
        let (best, _) = largest(self.selects.iter().map(|select| along(select, s)))?;
        let chosen = &at(self.places.get(best)?)?.way;
        let fired = chosen.fire(s);
        if lowest_share(&fired) >= -BORDER {
            return Some((chosen, fired));
        }
        let all = self.places.iter().filter_map(at).map(|basis| (&basis.way, basis.way.fire(s)));
        let least_bad = all.reduce(|a, b| if lowest_share(&b.1) > lowest_share(&a.1) { b } else { a })?;
        (lowest_share(&least_bad.1) >= -IMPULSE_IS_ROUNDING).then_some(least_bad)
    }

    /// The dearest unit direction and its price, kg/(N·m·s), or `None` if some direction cannot be served.
    ///
    /// The maximum of λ·h over unit h and vertices is the longest λ, along itself.
    #[must_use]
    pub fn dearest(&self) -> Option<(Vector3<f64>, f64)> {
        if !self.rays.is_empty() {
            return None;
        }
        let longest = self.vertices.iter().map(|v| v.lambda).reduce(|a, b| if b.norm() > a.norm() { b } else { a })?;
        Some((longest.try_normalize(0.0)?, longest.norm()))
    }
}

/// The thrusters that fire, and the impulse of each, N·s; at most six.
type Fired = [Option<(usize, f64)>; 6];

fn product(row: &[f64; 3], h: &Vector3<f64>) -> f64 {
    row[0] * h.x + row[1] * h.y + row[2] * h.z
}

/// Index and value of the largest, the first of equals.
fn largest(values: impl Iterator<Item = f64>) -> Option<(usize, f64)> {
    values.enumerate().reduce(|a, b| if b.1 > a.1 { b } else { a })
}

/// Lowest impulse, if below zero, over the sum of their sizes.
fn lowest_share(impulses: &Vec6) -> f64 {
    let lowest = impulses.iter().copied().fold(0.0, f64::min);
    if lowest < 0.0 { lowest / impulses.iter().map(|j| j.abs()).sum::<f64>() } else { 0.0 }
}

/// Product over the attainable coordinates.
fn along(covector: &[f64; 3], s: &Vec6) -> f64 {
    covector.iter().zip(s).map(|(a, b)| a * b).sum()
}
