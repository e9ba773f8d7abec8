"""Writes bodies.json: where the Sun, the planets and the Moon are, their poles, sidereal time, and shadow contacts.

    python3 -m venv /tmp/envref
    /tmp/envref/bin/pip install numpy==2.2.6 scipy==1.15.3 astropy==7.0.0 pyerfa==2.0.1.5
    /tmp/envref/bin/python tests/reference/bodies.py

Astropy runs offline with its built-in ephemeris: ERFA epv00 for the Earth, plan94 (Simon et al. 1994, up to some
twenty arcseconds) for the planets, moon98 (Meeus 1998) for the Moon. Positions are geometric, of one instant, without
light time, in ICRF axes. UT1 = UTC as in the crate.
"""

import json
import pathlib
import warnings
from datetime import date, timedelta

import astropy
import erfa
import numpy as np
import scipy
from astropy.coordinates import get_body_barycentric
from astropy.time import Time
from astropy.utils import iers
from scipy.optimize import brentq

iers.conf.auto_download = False
iers.conf.iers_degraded_accuracy = "ignore"
# Leap seconds are not known so far ahead: as in the crate, those of today stand.
warnings.filterwarnings("ignore", message=".*dubious year.*")

DATES = [f"{y}-{m:02d}-{d:02d}T{h:02d}:00:00" for y, m, d, h in
         [(2020, 1, 1, 0), (2022, 9, 14, 7), (2025, 5, 30, 15), (2028, 2, 11, 22), (2030, 10, 27, 4), (2033, 7, 9, 11),
          (2036, 3, 25, 18), (2038, 12, 6, 1), (2041, 8, 21, 9), (2044, 5, 4, 16), (2047, 1, 17, 21), (2050, 1, 1, 0)]]
PLANETS = ["mercury", "venus", "earth", "mars"]

EARTH_RADIUS_M = 6378137.0
SOLAR_RADIUS_M = 6.957e8
AU_M = 149597870700.0
MU_M3_PER_S2 = 3.986004418e14


def place(body, t):
    return get_body_barycentric(body, t).xyz.to_value("m")


def floats(values):
    return [float(value) for value in values]


def bodies():
    rows = []
    for utc in DATES:
        t = Time(utc, scale="utc")
        at_sun, at_earth, at_moon = place("sun", t), place("earth", t), place("moon", t)
        planets = {name: place(name, t) - at_sun for name in PLANETS}
        seen = {name: floats(-planets[name]) for name in PLANETS} | {"moon": floats(at_sun - at_moon)}
        rows.append({
            "utc": utc + "Z",
            "heliocentric_m": {name: floats(planets[name]) for name in PLANETS},
            "moon_from_earth_m": floats(at_moon - at_earth),
            "sun_from_m": seen,
            "mean_sidereal_time_rad": float(erfa.gmst06(t.utc.jd1, t.utc.jd2, t.tt.jd1, t.tt.jd2)),
        })
    return rows


def suns():
    """Direction to the Sun from the Earth's centre, every 100 days."""
    rows = []
    for k in range(110):
        day = (date(2020, 1, 1) + timedelta(days=100 * k)).isoformat()
        t = Time(day, scale="utc")
        d = place("sun", t) - place("earth", t)
        rows.append({"utc": day, "direction": floats(d / np.linalg.norm(d)), "distance_m": float(np.linalg.norm(d))})
    return rows


def poles():
    """North poles at J2000 (T = 0) by the report of the IAU Working Group on Cartographic Coordinates and Rotational
    Elements 2015: Archinal et al., Celest. Mech. Dyn. Astr. 130:22 (2018), tables 1 and 2. The report itself was not at
    hand: from memory, and equal to several public copies. The Moon's is the mean pole (without the terms in E1 to
    E13); that of Mars needs its terms in sines and cosines, of which the longest is a turn in 71 000 years."""
    sin = lambda terms: sum(a * np.sin(np.radians(x)) for a, x in terms)
    cos = lambda terms: sum(a * np.cos(np.radians(x)) for a, x in terms)
    mars_ra = 317.269202 + sin([(0.000068, 198.991226), (0.000238, 226.292679), (0.000052, 249.663391),
                                (0.000009, 266.183510), (0.419057, 79.398797)])
    mars_dec = 54.432516 + cos([(0.000051, 122.433576), (0.000141, 43.058401), (0.000031, 57.663379),
                                (0.000005, 79.476401), (1.591274, 166.325722)])
    degrees = {"mercury": (281.0103, 61.4155), "venus": (272.76, 67.16), "mars": (mars_ra, mars_dec), "moon": (269.9949, 66.5392)}
    out = {}
    for name, (ra, dec) in degrees.items():
        a, d = np.radians([ra, dec])
        out[name] = {"right_ascension_deg": float(ra), "declination_deg": float(dec),
                     "direction": floats([np.cos(d) * np.cos(a), np.cos(d) * np.sin(a), np.sin(d)])}
    return out


def gap(position, sun, side):
    """How far the rim of the Sun stands from that of the Earth's disc, rad: outer contact for side +1, inner for −1.
    Positive in sunlight (+1), or while any of the Sun is seen (−1)."""
    to_sun, to_earth = sun - position, -position
    u, w = to_sun / np.linalg.norm(to_sun), to_earth / np.linalg.norm(to_earth)
    half = 0.5 * np.linalg.norm(u - w) if u @ w > 0 else 0.5 * np.linalg.norm(u + w)
    apart = 2.0 * np.arcsin(half) if u @ w > 0 else np.pi - 2.0 * np.arcsin(half)
    disc = np.arcsin(SOLAR_RADIUS_M / np.linalg.norm(to_sun))
    return apart - np.arcsin(EARTH_RADIUS_M / np.linalg.norm(position)) - side * disc


def outside_cone(position, sun, side):
    """The same contact as distance from the cone that touches both spheres, m."""
    axis = -sun / np.linalg.norm(sun)
    half = np.arcsin((SOLAR_RADIUS_M + side * EARTH_RADIUS_M) / np.linalg.norm(sun))
    # The umbra's apex lies behind the Earth, the penumbra's before it.
    apex = -side * axis * EARTH_RADIUS_M / np.sin(half)
    along = (position - apex) @ axis
    across = np.linalg.norm(position - apex - along * axis)
    return across - along * np.tan(half) if side > 0 else across + along * np.tan(half)


def contacts(orbit, sun, period):
    """Times of penumbra in, umbra in, umbra out, penumbra out within one turn, s."""
    grid = np.linspace(0.0, period, 2001)
    roots = {}
    for side in (1, -1):
        f = lambda t: gap(orbit(t), sun, side)
        values = [f(t) for t in grid]
        found = [brentq(f, a, b, xtol=1e-10, rtol=8.9e-16) for a, b, x, y in zip(grid, grid[1:], values, values[1:]) if x * y < 0]
        assert len(found) == 2, found
        # Two ways to see the same contact agree to a micrometre per metre a second.
        assert all(abs(outside_cone(orbit(t), sun, side)) < 1e-3 for t in found)
        roots[side] = found
    return [roots[1][0], roots[-1][0], roots[-1][1], roots[1][1]]


def circle(radius, inclination, node, start=0.0):
    rate = np.sqrt(MU_M3_PER_S2 / radius**3)

    def at(t):
        s, c = np.sin(start + rate * t), np.cos(start + rate * t)
        si, ci, sn, cn = np.sin(inclination), np.cos(inclination), np.sin(node), np.cos(node)
        return radius * np.array([cn * c - sn * s * ci, sn * c + cn * s * ci, s * si])
    return at, 2.0 * np.pi / rate


def eclipse():
    """Contacts of the Sun's disc with a spherical Earth's, the Sun standing still, no refraction."""
    utc = "2029-03-20T00:00:00"
    t = Time(utc, scale="utc")
    sun = place("sun", t) - place("earth", t)
    orbit, period = circle(7.0e6, np.radians(51.6), np.radians(30.0))
    low = contacts(orbit, sun, period)
    # Geostationary at the equinox, begun at noon so that the shadow lies in the middle of the turn.
    orbit, period = circle(42164.17e3, 0.0, 0.0)
    high = contacts(orbit, np.array([AU_M, 0.0, 0.0]), period)
    return {
        "earth_radius_m": EARTH_RADIUS_M, "solar_radius_m": SOLAR_RADIUS_M, "mu_m3_per_s2": MU_M3_PER_S2,
        "low": {"utc": utc + "Z", "radius_m": 7.0e6, "inclination_deg": 51.6, "ascending_node_deg": 30.0, "sun_m": floats(sun),
                "penumbra_in_s": low[0], "umbra_in_s": low[1], "umbra_out_s": low[2], "penumbra_out_s": low[3]},
        "geostationary": {"radius_m": 42164.17e3, "sun_m": [AU_M, 0.0, 0.0], "umbra_s": high[2] - high[1], "penumbra_s": high[3] - high[0],
                          "penumbra_in_s": high[0], "umbra_in_s": high[1], "umbra_out_s": high[2], "penumbra_out_s": high[3]},
    }


VERSIONS = {"astropy": astropy.__version__, "pyerfa": erfa.__version__, "numpy": np.__version__, "scipy": scipy.__version__}
OUT = pathlib.Path(__file__).with_name("bodies.json")
OUT.write_text(json.dumps({"versions": VERSIONS, "bodies": bodies(), "sun": suns(), "poles": poles(), "eclipse": eclipse()}, indent=1) + "\n")
