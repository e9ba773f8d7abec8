//! The least propellant for an angular impulse.

use nalgebra::{DMatrix, Vector3};

use super::{Generator, NetForce};

/// One way to fire at a vertex: `J = allocation · h`, best wherever that is not negative.
#[derive(Debug, Clone, PartialEq)]
pub struct Basis {
    /// Indices of the thrusters that fire, ascending.
    pub active: Vec<usize>,
    /// Impulse of each active thruster (rows, N·s) per angular impulse (columns x, y, z in N·m·s): 1/m.
    pub allocation: DMatrix<f64>,
}

/// One vertex of the dual: the price is `lambda · h` for the h that its bases serve.
#[derive(Debug, Clone, PartialEq)]
pub struct Vertex {
    /// Propellant per angular impulse, kg/(N·m·s), within the span of what can be served.
    pub lambda: Vector3<f64>,
    /// The bases that share this price; more than one where several ways to fire cost the same.
    pub bases: Vec<Basis>,
}

/// What one angular impulse costs.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Price {
    /// Least propellant for the angular impulse asked for, kg.
    Served {
        /// Propellant, kg.
        kg: f64,
    },
    /// No firing, however long, gives this angular impulse: `along · h > 0`, yet no attainable torque has a positive part along `along`.
    NotServed {
        /// Unit vector.
        along: Vector3<f64>,
    },
}

/// The least propellant for every angular impulse, precomputed.
#[derive(Debug, Clone)]
pub struct PriceMap {
    /// The vertices that some angular impulse makes best.
    pub vertices: Vec<Vertex>,
    /// Unit vectors: h can be served ⇔ `ray · h ≤ 0` for all of them. Empty if every direction can be served.
    pub rays: Vec<Vector3<f64>>,
    /// For each ray the force m (1/m times an arm: m per unit) that proves it: `ray · torque + m · force ≤ 0` for every
    /// thruster. Zero where a net force is allowed.
    pub ray_forces: Vec<Vector3<f64>>,
}

impl PriceMap {
    /// Prices of the layout `generators`, each taken as one-sided (levels from zero up, bounds not used).
    #[must_use]
    pub fn new(_generators: &[Generator], _net: NetForce) -> Self {
        unimplemented!()
    }

    /// Least propellant for the angular impulse `h` (N·m·s), kg; homogeneous of degree 1.
    #[must_use]
    pub fn price(&self, _h: &Vector3<f64>) -> Price {
        unimplemented!()
    }

    /// Index of the vertex with the largest `lambda · h`; 0 if there are none. Does not check that `h` can be served.
    #[must_use]
    pub fn best_vertex(&self, _h: &Vector3<f64>) -> usize {
        unimplemented!()
    }

    /// Impulse of every generator (N·s, none negative) that gives `h` for the least propellant, or `None` if nothing can.
    #[must_use]
    pub fn allocate(&self, _h: &Vector3<f64>) -> Option<Vec<f64>> {
        unimplemented!()
    }

    /// The dearest unit direction and its price, kg/(N·m·s), or `None` if some direction cannot be served.
    #[must_use]
    pub fn dearest(&self) -> Option<(Vector3<f64>, f64)> {
        unimplemented!()
    }
}
