//! The units that a quantity may be written in.
//!
//! Conversions are exact unless said otherwise: NIST Special Publication 811 (2008), appendix B.

use std::f64::consts::PI;

use super::Dimension;

/// A unit: its name, its size in SI, its dimension, and whether SI prefixes may stand before it.
pub(super) struct Unit {
    pub(super) name: &'static str,
    pub(super) size: f64,
    pub(super) dimension: Dimension,
    pub(super) prefixes: bool,
}

const fn unit(name: &'static str, size: f64, exponents: [i8; 6], prefixes: bool) -> Unit {
    Unit { name, size, dimension: Dimension::new(exponents), prefixes }
}

const NUMBER: [i8; 6] = [0; 6];
const LENGTH: [i8; 6] = [1, 0, 0, 0, 0, 0];
const MASS: [i8; 6] = [0, 1, 0, 0, 0, 0];
const TIME: [i8; 6] = [0, 0, 1, 0, 0, 0];
const FORCE: [i8; 6] = [1, 1, -2, 0, 0, 0];
const PRESSURE: [i8; 6] = [-1, 1, -2, 0, 0, 0];
const ANGLE: [i8; 6] = [0, 0, 0, 0, 0, 1];
const TORQUE: [i8; 6] = [2, 1, -2, 0, 0, 0];
const MOMENTUM: [i8; 6] = [2, 1, -1, 0, 0, 0];

/// Pound-force: 0.45359237 kg × 9.80665 m/s².
const POUND_FORCE: f64 = 4.448_221_615_260_5;
const POUND: f64 = 0.453_592_37;
const INCH: f64 = 0.0254;
const FOOT: f64 = 0.3048;

pub(super) const UNITS: &[Unit] = &[
    unit("m", 1.0, LENGTH, true),
    unit("g", 1e-3, MASS, true),
    unit("s", 1.0, TIME, true),
    unit("A", 1.0, [0, 0, 0, 1, 0, 0], true),
    unit("K", 1.0, [0, 0, 0, 0, 1, 0], true),
    unit("rad", 1.0, ANGLE, true),
    unit("N", 1.0, FORCE, true),
    unit("Pa", 1.0, PRESSURE, true),
    unit("bar", 1e5, PRESSURE, true),
    unit("J", 1.0, TORQUE, true),
    unit("W", 1.0, [2, 1, -3, 0, 0, 0], true),
    unit("T", 1.0, [0, 1, -2, -1, 0, 0], true),
    unit("Hz", 1.0, [0, 0, -1, 0, 0, 0], true),
    unit("L", 1e-3, [3, 0, 0, 0, 0, 0], true),
    // A tonne, without prefixes: `mt` would be a trap.
    unit("t", 1e3, MASS, false),
    unit("lb", POUND, MASS, false),
    unit("lbm", POUND, MASS, false),
    unit("oz", POUND / 16.0, MASS, false),
    unit("slug", POUND_FORCE / FOOT, MASS, false),
    unit("lbf", POUND_FORCE, FORCE, false),
    unit("psi", POUND_FORCE / (INCH * INCH), PRESSURE, false),
    unit("in", INCH, LENGTH, false),
    unit("ft", FOOT, LENGTH, false),
    unit("AU", 149_597_870_700.0, LENGTH, false),
    unit("au", 149_597_870_700.0, LENGTH, false),
    unit("min", 60.0, TIME, false),
    unit("h", 3600.0, TIME, false),
    unit("d", 86_400.0, TIME, false),
    // The Julian year of astronomy (IAU).
    unit("yr", 31_557_600.0, TIME, false),
    unit("deg", PI / 180.0, ANGLE, false),
    unit("°", PI / 180.0, ANGLE, false),
    unit("arcmin", PI / 10_800.0, ANGLE, false),
    unit("arcsec", PI / 648_000.0, ANGLE, false),
    unit("rev", 2.0 * PI, ANGLE, false),
    unit("rpm", PI / 30.0, [0, 0, -1, 0, 0, 1], false),
    unit("%", 0.01, NUMBER, false),
    unit("ppm", 1e-6, NUMBER, false),
    unit("sfu", 1.0, NUMBER, false),
    // Spellings of the trade in which the factors are run together.
    unit("Nm", 1.0, TORQUE, true),
    unit("Nms", 1.0, MOMENTUM, true),
    unit("Ns", 1.0, [1, 1, -1, 0, 0, 0], true),
    unit("Am2", 1.0, [2, 0, 0, 1, 0, 0], true),
    unit("Am²", 1.0, [2, 0, 0, 1, 0, 0], true),
    unit("kgm2", 1.0, [2, 1, 0, 0, 0, 0], false),
    unit("kgm²", 1.0, [2, 1, 0, 0, 0, 0], false),
];

const PREFIXES: &[(&str, f64)] =
    &[("n", 1e-9), ("u", 1e-6), ("µ", 1e-6), ("μ", 1e-6), ("m", 1e-3), ("c", 1e-2), ("k", 1e3), ("M", 1e6), ("G", 1e9)];

/// Size in SI and dimension of a unit name, an exact name before a prefixed one.
pub(super) fn find(name: &str) -> Option<(f64, Dimension)> {
    if let Some(exact) = UNITS.iter().find(|unit| unit.name == name) {
        return Some((exact.size, exact.dimension));
    }
    PREFIXES.iter().find_map(|(prefix, factor)| {
        let rest = name.strip_prefix(prefix)?;
        let unit = UNITS.iter().find(|unit| unit.prefixes && unit.name == rest)?;
        Some((factor * unit.size, unit.dimension))
    })
}
