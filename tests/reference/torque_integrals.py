"""Writes torque_integrals.json: the inertial integral of each disturbance torque over ten orbits, for tests/torque_integrals.rs.

    python3 -m venv /tmp/envref
    /tmp/envref/bin/pip install numpy==2.2.6 scipy==1.15.3 pyerfa==2.0.1.5 ppigrf==2.1.0 nrlmsise00==0.1.2
    /tmp/envref/bin/python tests/reference/torque_integrals.py

The physics is written anew from the published formulas; time, precession, sidereal time and geodetic coordinates are
ERFA's, the field is that of ppigrf, the air that of the C port of NRLMSISE-00. The models are those that docs/theory.md
names, so that nothing but the integration, and slips, can differ.

The integrands have kinks: shadow contacts, facets that turn from or to the Sun or the wind, the ceiling of the air. Each
is found by brentq, and between them Gauss and Legendre's rule is applied to pieces of a few degrees of true anomaly.
The error that is written is the difference between two such rules of different order on different pieces. With
the argument `check` solve_ivp (DOP853) has to agree with the rule over the first orbit (seven minutes; 3e-10 was seen).
"""

import json
import pathlib
import sys
from datetime import datetime, timedelta

import erfa
import numpy as np
import ppigrf
import scipy
from nrlmsise00 import gtd7d_flat
from scipy.integrate import solve_ivp
from scipy.optimize import brentq
from scipy.spatial.transform import Rotation
from scipy.special import roots_legendre

# WGS 84, EGM96; IAU 2012 B2 and 2015 B3; SI.
MU, RADIUS, J2, SPIN = 3.986004418e14, 6378137.0, 1.08262668e-3, 7.2921159e-5
AU, SUN_RADIUS, IRRADIANCE, LIGHT = 149597870700.0, 6.957e8, 1361.0, 299792458.0
CEILING_M = 1.5e6
F107, AP = 140.0, 15.0
ORBITS = 10
START = datetime(2027, 6, 10)

# The spacecraft; the configuration in tests/torque_integrals.rs says the same.
INERTIA = np.array([[60.0, 3.0, -2.0], [3.0, 80.0, 4.0], [-2.0, 4.0, 70.0]])
CENTRE = np.array([0.03, -0.05, 0.08])
DIPOLE = np.array([0.8, -0.5, 0.3])
BODY_TORQUE = np.array([2e-6, -1.5e-6, 1e-6])
# Specular share, diffuse share, drag coefficient.
FOIL, RADIATOR, CELL = (0.30, 0.25, 2.2), (0.05, 0.70, 2.0), (0.10, 0.15, 2.4)
# Area, centre, normal, material, both sides count, hinge.
FACETS = [
    (1.2, (0.5, 0.0, 0.0), (1.0, 0.0, 0.0), FOIL, False, None),
    (1.2, (-0.5, 0.0, 0.0), (-1.0, 0.0, 0.0), FOIL, False, None),
    (1.0, (0.0, 0.6, 0.0), (0.0, 1.0, 0.0), FOIL, False, None),
    (1.0, (0.0, -0.6, 0.0), (0.0, -1.0, 0.0), FOIL, False, None),
    (1.2, (0.0, 0.0, 0.5), (0.0, 0.0, 1.0), FOIL, False, None),
    (1.2, (0.0, 0.0, -0.5), (0.0, 0.0, -1.0), FOIL, False, None),
    (0.8, (-0.4, -0.9, 0.7), (0.0, -0.6, -0.8), RADIATOR, False, None),
    (0.5, (0.9, 0.2, 0.6), (0.6, 0.0, -0.8), FOIL, True, None),
    (3.0, (0.1, 2.1, -0.2), (0.0, 0.6, -0.8), CELL, False, (0.0, 1.0, 0.0)),
]


def dot(a, b):
    return np.sum(a * b, axis=-1)


def unit(v):
    return v / np.linalg.norm(v, axis=-1, keepdims=True)


class Case:
    def __init__(self, name, perigee_altitude, apogee_altitude, inclination, node, perigee, anomaly, bias=(0.0, 0.0, 0.0)):
        self.name = name
        # Rotation vector from the nadir frame to the body: exactly at nadir, gravity feels but two elements of inertia.
        self.bias = Rotation.from_rotvec(bias, degrees=True).as_matrix()
        low, high = RADIUS + perigee_altitude, RADIUS + apogee_altitude
        self.a, self.e = 0.5 * (low + high), (high - low) / (high + low)
        self.i, self.node, self.perigee, self.anomaly = np.radians([inclination, node, perigee, anomaly])
        # Secular rates: Vallado, Fundamentals of Astrodynamics and Applications, ch. 9.
        self.n = np.sqrt(MU / self.a**3)
        p = self.a * (1.0 - self.e**2)
        k = 1.5 * self.n * J2 * (RADIUS / p) ** 2
        self.node_rate = -k * np.cos(self.i)
        self.perigee_rate = k * (2.0 - 2.5 * np.sin(self.i) ** 2)
        self.anomaly_rate = self.n + k * np.sqrt(1.0 - self.e**2) * (1.0 - 1.5 * np.sin(self.i) ** 2)
        self.period = 2.0 * np.pi / (self.anomaly_rate + self.perigee_rate)
        self.span = ORBITS * self.period

    def eccentric(self, t):
        mean = self.anomaly + self.anomaly_rate * t
        guess = mean + self.e * np.sin(mean)
        for _ in range(30):
            guess = guess - (guess - self.e * np.sin(guess) - mean) / (1.0 - self.e * np.cos(guess))
        return guess

    def state(self, t):
        """Position and velocity of the osculating ellipse from its true anomaly: Vallado, ch. 2."""
        big = self.eccentric(t)
        nu = 2.0 * np.arctan2(np.sqrt(1.0 + self.e) * np.sin(big / 2.0), np.sqrt(1.0 - self.e) * np.cos(big / 2.0))
        p = self.a * (1.0 - self.e**2)
        w, o = self.perigee + self.perigee_rate * t, self.node + self.node_rate * t
        zero = np.zeros_like(t)
        ascending = np.stack([np.cos(o), np.sin(o), zero], -1)
        ahead = np.stack([-np.sin(o) * np.cos(self.i), np.cos(o) * np.cos(self.i), zero + np.sin(self.i)], -1)
        turn = lambda angle: np.cos(angle)[..., None] * ascending + np.sin(angle)[..., None] * ahead
        r = (p / (1.0 + self.e * np.cos(nu)))[..., None] * turn(w + nu)
        to_perigee, across = turn(w), turn(w + np.pi / 2.0)
        v = np.sqrt(MU / p) * (-np.sin(nu)[..., None] * to_perigee + (self.e + np.cos(nu))[..., None] * across)
        return r, v


def clock(t):
    """Julian dates in two parts, UTC (for UT1 too) and TT."""
    utc1, utc2 = erfa.dtf2d("UTC", START.year, START.month, START.day, 0, 0, 0.0)
    tai1, tai2 = erfa.utctai(utc1, utc2)
    tt1, tt2 = erfa.taitt(tai1, tai2)
    days = t / 86400.0
    return (utc1, utc2 + days), (tt1, tt2 + days)


def sun(t):
    """Meeus, Astronomical Algorithms, 2nd ed., ch. 25 (geometric) and eq. 22.2; mean equator of date, and to J2000."""
    _, (jd1, jd2) = clock(t)
    c = ((jd1 - 2451545.0) + jd2) / 36525.0
    l0 = 280.46646 + 36000.76983 * c + 0.0003032 * c**2
    m = np.radians(357.52911 + 35999.05029 * c - 0.0001537 * c**2)
    e = 0.016708634 - 0.000042037 * c - 0.0000001267 * c**2
    centre = ((1.914602 - 0.004817 * c - 0.000014 * c**2) * np.sin(m) + (0.019993 - 0.000101 * c) * np.sin(2 * m)
              + 0.000289 * np.sin(3 * m))
    longitude, nu = np.radians(l0 + centre), m + np.radians(centre)
    r = 1.000001018 * (1 - e**2) / (1 + e * np.cos(nu)) * AU
    obliquity = np.radians((84381.448 - 46.8150 * c - 0.00059 * c**2 + 0.001813 * c**3) / 3600.0)
    of_date = np.stack([np.cos(longitude), np.sin(longitude) * np.cos(obliquity), np.sin(longitude) * np.sin(obliquity)], -1)
    return np.einsum("...ji,...j->...i", precession(t), of_date) * r[..., None]


def precession(t):
    """IAU 2006, without the frame bias: the inertial frame is the mean equator and equinox of J2000 itself."""
    _, tt = clock(t)
    return erfa.bp06(*tt)[1]


def earth_fixed(t):
    utc, tt = clock(t)
    gmst = erfa.gmst06(*utc, *tt)
    s, c, zero, one = np.sin(gmst), np.cos(gmst), np.zeros_like(gmst), np.ones_like(gmst)
    spin = np.stack([np.stack([c, s, zero], -1), np.stack([-s, c, zero], -1), np.stack([zero, zero, one], -1)], -2)
    return spin @ precession(t)


def rims(r, to_sun):
    """Angle between the centres of the discs, and the radii of Sun and Earth, rad."""
    a, b = unit(to_sun), unit(-r)
    apart = 2.0 * np.arctan2(np.linalg.norm(a - b, axis=-1), np.linalg.norm(a + b, axis=-1))
    return apart, np.arcsin(SUN_RADIUS / np.linalg.norm(to_sun, axis=-1)), np.arcsin(RADIUS / np.linalg.norm(r, axis=-1))


def visible(r, to_sun):
    """Share of the Sun's disc: Montenbruck and Gill, Satellite Orbits, 3.4.2 (flat discs)."""
    c, a, b = rims(r, to_sun)
    inside = np.clip(c, np.abs(b - a), a + b)
    x = (inside**2 + a**2 - b**2) / (2.0 * inside)
    y = np.sqrt(np.maximum(a**2 - x**2, 0.0))
    area = a**2 * np.arccos(np.clip(x / a, -1, 1)) + b**2 * np.arccos(np.clip((inside - x) / b, -1, 1)) - inside * y
    share = 1.0 - area / (np.pi * a**2)
    return np.where(c >= a + b, 1.0, np.where(c <= b - a, 0.0, share))


def geodetic(t, r):
    """Longitude and latitude, degrees, and height over WGS 84, m; with the Earth-fixed position."""
    fixed = np.einsum("...ij,...j->...i", earth_fixed(t), r)
    longitude, latitude, height = erfa.gc2gd(1, fixed)
    return np.degrees(longitude), np.degrees(latitude), height, fixed


def local_time(t, longitude):
    seconds = np.mod(t, 86400.0)
    return np.mod(seconds / 3600.0 + longitude / 15.0, 24.0), seconds


def density(t, r):
    longitude, latitude, height, _ = geodetic(t, r)
    hours, seconds = local_time(t, longitude)
    day = START.timetuple().tm_yday + np.floor(t / 86400.0).astype(int)
    out = np.zeros_like(t)
    for k in np.flatnonzero(height <= CEILING_M):
        # g/cm³, with anomalous oxygen.
        out[k] = gtd7d_flat(START.year, day[k], seconds[k], height[k] / 1e3, latitude[k], longitude[k], hours[k], F107, F107, AP)[5] * 1e3
    return out


def field(t, r, middle):
    """Tesla, inertial axes; the coefficients are those of one instant."""
    turn = earth_fixed(t)
    x = np.einsum("...ij,...j->...i", turn, r)
    radius = np.linalg.norm(x, axis=-1)
    theta, phi = np.arccos(x[..., 2] / radius), np.arctan2(x[..., 1], x[..., 0])
    parts = ppigrf.igrf_gc(radius / 1e3, np.degrees(theta), np.degrees(phi), middle)
    br, bt, bp = (np.squeeze(part, 0)[..., None] * 1e-9 for part in parts)
    s, c, sl, cl = np.sin(theta), np.cos(theta), np.sin(phi), np.cos(phi)
    fixed = (br * np.stack([s * cl, s * sl, c], -1) + bt * np.stack([c * cl, c * sl, -s], -1)
             + bp * np.stack([-sl, cl, np.zeros_like(sl)], -1))
    return np.einsum("...ji,...j->...i", turn, fixed)


def axes(case, r, v):
    """Body axes in I as columns: z to the Earth's centre, y against the orbit normal, then the bias."""
    z, y = -unit(r), -unit(np.cross(r, v))
    return np.stack([np.cross(y, z), y, z], -1) @ case.bias


def in_body(frame, v):
    return np.einsum("...ji,...j->...i", frame, v)


def normals(sun_b):
    """Normal of each facet; one with a hinge turns the part of it across the hinge to the Sun's."""
    out = []
    for _, _, normal, _, _, hinge in FACETS:
        n = np.broadcast_to(np.array(normal), sun_b.shape)
        if hinge is not None:
            h = np.array(hinge)
            along = np.array(normal) @ h
            towards = unit(sun_b - dot(sun_b, h)[..., None] * h)
            n = along * h + np.sqrt(1.0 - along**2) * towards
        out.append(n)
    return out


def wind(r, v):
    """Velocity through air that turns with the Earth about z."""
    return v - np.cross(np.array([0.0, 0.0, SPIN]), r)


def torques(case, t, middle):
    """Torque of each source in I at times t, N m."""
    r, v = case.state(t)
    frame = axes(case, r, v)
    to_sun = sun(t) - r
    s = in_body(frame, unit(to_sun))
    up = in_body(frame, unit(r))
    air = in_body(frame, wind(r, v))
    pressure = IRRADIANCE / LIGHT * (AU / np.linalg.norm(to_sun, axis=-1)) ** 2 * visible(r, to_sun)
    rho = density(t, r)
    light, drag = np.zeros_like(r), np.zeros_like(r)
    for (area, centre, _, (specular, diffuse, cd), both, _), n in zip(FACETS, normals(s)):
        arm = np.array(centre) - CENTRE
        cos = dot(n, s)
        lit, cos = (np.sign(cos)[..., None] * n, np.abs(cos)) if both else (n, np.maximum(cos, 0.0))
        force = -(pressure * area * cos)[..., None] * ((1 - specular) * s + 2 * (specular * cos + diffuse / 3)[..., None] * lit)
        light += np.cross(arm, force)
        flux = dot(n, air)
        flux = np.abs(flux) if both else np.maximum(flux, 0.0)
        drag += np.cross(arm, -0.5 * cd * (rho * area * flux)[..., None] * air)
    body = {
        "gravity_gradient": (3.0 * MU / np.linalg.norm(r, axis=-1) ** 3)[..., None] * np.cross(up, up @ INERTIA),
        "radiation": light,
        "drag": drag,
        "residual_dipole": np.cross(DIPOLE, in_body(frame, field(t, r, middle))),
        "body_torque": np.broadcast_to(BODY_TORQUE, r.shape),
    }
    return {name: np.einsum("...ij,...j->...i", frame, torque) for name, torque in body.items()}


def switches(case, t):
    """Functions whose zeros are kinks or jumps of an integrand, name → values."""
    r, v = case.state(t)
    frame = axes(case, r, v)
    to_sun = sun(t) - r
    s, air = in_body(frame, unit(to_sun)), in_body(frame, unit(wind(r, v)))
    apart, a, b = rims(r, to_sun)
    longitude, _, height, _ = geodetic(t, r)
    hours, _ = local_time(t, longitude)
    out = {"penumbra": apart - b - a, "umbra": apart - b + a, "ceiling": (height - CEILING_M) / RADIUS,
           # The air model takes the day by its number, and rounds 2π/24 so that local time 24 h is not quite 0 h.
           "midnight": np.sin(np.pi * t / 86400.0), "local midnight": np.sin(np.radians(15.0 * hours)),
           "date line": np.sin(np.radians(longitude))}
    for k, n in enumerate(normals(s)):
        out[f"facet {k} and light"], out[f"facet {k} and air"] = dot(n, s), dot(n, air)
    return out


def breaks(case, samples=2000):
    """Zeros of the switches, name → times."""
    grid = np.linspace(0.0, case.span, samples * ORBITS + 1)
    values = switches(case, grid)
    found = {}
    for name, f in values.items():
        at = lambda x: switches(case, np.array([x]))[name][0]
        # A facet edge-on to the Sun for good would give noise, not zeros.
        crossing = np.flatnonzero((f[:-1] * f[1:] < 0.0) & (np.maximum(abs(f[:-1]), abs(f[1:])) > 1e-12))
        found[name] = [brentq(at, grid[k], grid[k + 1], xtol=1e-9) for k in crossing]
    return found


def knots(case, pieces_per_orbit):
    """Times at equal steps of true anomaly."""
    nu0 = 2.0 * np.arctan2(np.sqrt(1 + case.e) * np.sin(case.eccentric(0.0) / 2), np.sqrt(1 - case.e) * np.cos(case.eccentric(0.0) / 2))
    nu = nu0 + 2.0 * np.pi / pieces_per_orbit * np.arange(1, pieces_per_orbit * (ORBITS + 1))
    turns = np.floor((nu + np.pi) / (2 * np.pi))
    big = 2.0 * np.arctan(np.sqrt((1 - case.e) / (1 + case.e)) * np.tan((nu - 2 * np.pi * turns) / 2)) + 2 * np.pi * turns
    t = (big - case.e * np.sin(big) - case.anomaly) / case.anomaly_rate
    return t[(t > 0.0) & (t < case.span)]


def integrate(case, edges, order, middle):
    x, w = roots_legendre(order)
    half, mid = np.diff(edges) / 2.0, (edges[1:] + edges[:-1]) / 2.0
    t = (mid[:, None] + half[:, None] * x).ravel()
    weights = (half[:, None] * w).ravel()
    values = torques(case, t, middle)
    sums = {name: weights @ torque for name, torque in values.items()}
    gross = {name: float(weights @ np.linalg.norm(torque, axis=-1)) for name, torque in values.items()}
    return sums, gross


def differently(case, edges, middle):
    """The same by solve_ivp (DOP853), for a check of the rule: relative difference by source over `edges`."""
    names = list(torques(case, np.array([1.0]), middle))
    rate = lambda t, _: np.concatenate([torques(case, np.array([t]), middle)[name][0] for name in names])
    total = np.zeros(3 * len(names))
    for low, high in zip(edges, edges[1:]):
        # A hair inside, since the method also looks at the ends, where the air may jump.
        inner = (low + 1e-8, high - 1e-8)
        size = np.abs(rate(0.5 * (low + high), None)) * (high - low)
        total += solve_ivp(rate, inner, np.zeros_like(total), "DOP853", rtol=1e-8, atol=1e-10 * size.max()).y[:, -1]
    sums, _ = integrate(case, edges, 48, middle)
    parts = np.split(total, len(names))
    return {name: float(np.linalg.norm(part - sums[name]) / np.linalg.norm(sums[name])) for name, part in zip(names, parts)}


def run(case):
    middle = START + timedelta(seconds=case.span / 2.0)
    found = breaks(case)
    finer = breaks(case, 5000)
    assert all(len(found[name]) == len(finer[name]) for name in found), "a pair of kinks was missed"
    at = [0.0, case.span] + [time for times in found.values() for time in times]
    tidy = lambda extra: np.unique(np.round(np.concatenate([at, extra]), 9))
    sums, gross = integrate(case, tidy(knots(case, 72)), 24, middle)
    check, _ = integrate(case, tidy(knots(case, 47)), 16, middle)
    if "check" in sys.argv[1:]:
        first = np.array(sorted(x for x in set(at) | set(knots(case, 12)) if x <= case.period))
        ode = differently(case, first, middle)
        print("solve_ivp over the first orbit, relative:", ode)
        assert max(ode.values()) < 1e-8, ode
    print(case.name, {name: len(times) for name, times in found.items() if times})
    rows = {}
    for name, total in sums.items():
        error = float(np.linalg.norm(total - check[name]))
        rows[name] = {"integral_n_m_s": list(map(float, total)), "error_n_m_s": error, "integral_of_norm_n_m_s": gross[name]}
        print(f"  {name:18} {total}  relative error {error / np.linalg.norm(total):.1e}  norm/gross {np.linalg.norm(total) / gross[name]:.2e}")
    return {"name": case.name, "start": START.isoformat() + "Z", "nodal_period_s": case.period, "span_s": case.span,
            "ceiling_crossings_s": found["ceiling"], "sources": rows}


CASES = [
    Case("low", 500e3, 500e3, 60.0, 20.0, 0.0, 40.0),
    Case("turned", 500e3, 500e3, 60.0, 20.0, 0.0, 40.0, (6.0, -9.0, 4.0)),
    Case("ellipse", 1200e3, 39150e3, 63.4, 250.0, 270.0, 120.0),
]
VERSIONS = {"numpy": np.__version__, "scipy": scipy.__version__, "pyerfa": erfa.__version__, "ppigrf": "2.1.0", "nrlmsise00": "0.1.2"}
if __name__ == "__main__":
    OUT = pathlib.Path(__file__).with_name("torque_integrals.json")
    OUT.write_text(json.dumps({"versions": VERSIONS, "cases": [run(case) for case in CASES]}, indent=1) + "\n")
