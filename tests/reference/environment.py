"""Writes environment.json, the reference values that tests/environment_reference.rs reads.

    python3 -m venv /tmp/envref
    /tmp/envref/bin/pip install numpy==2.2.6 astropy==7.0.0 ppigrf==2.1.0 nrlmsise00==0.1.2
    /tmp/envref/bin/python tests/reference/environment.py

Astropy runs offline: built-in ephemeris (ERFA epv00), and UT1 = UTC as in the crate.
"""

import json
import pathlib
from datetime import datetime

import astropy
import nrlmsise00
import numpy as np
import ppigrf
from astropy.coordinates import get_body_barycentric
from astropy.time import Time
from astropy.utils import iers
import erfa

iers.conf.auto_download = False
iers.conf.iers_degraded_accuracy = "ignore"

DATES = [f"{y}-{m:02d}-{d:02d}T{h:02d}:30:00" for y, m, d, h in
         [(2020, 1, 3, 0), (2022, 4, 19, 5), (2025, 7, 11, 9), (2028, 3, 1, 13),
          (2031, 10, 23, 17), (2035, 6, 30, 21), (2041, 12, 5, 2), (2050, 8, 17, 11)]]


def sun():
    rows = []
    for date in DATES:
        t = Time(date, scale="utc")
        d = (get_body_barycentric("sun", t) - get_body_barycentric("earth", t)).xyz.to_value("m")
        rows.append({"utc": date + "Z", "position_m": list(map(float, d))})
    return rows


def rotation():
    rows = []
    for date in DATES:
        t = Time(date, scale="utc")
        m = erfa.c2t06a(t.tt.jd1, t.tt.jd2, t.utc.jd1, t.utc.jd2, 0.0, 0.0)
        rows.append({"utc": date + "Z", "rows": [list(map(float, r)) for r in m]})
    return rows


def field():
    rows = []
    for date in [datetime(2021, 5, 17), datetime(2025, 1, 1), datetime(2027, 11, 2), datetime(2029, 12, 31)]:
        for km in [400.0, 700.0, 35786.0]:
            for lat, lon in [(0.0, 0.0), (52.0, 13.0), (-30.0, -50.0), (79.0, 200.0), (-88.0, 95.0)]:
                r = 6371.2 + km
                br, bt, bp = (float(np.squeeze(x)) for x in ppigrf.igrf_gc(r, 90.0 - lat, lon, date))
                rows.append({"utc": date.strftime("%Y-%m-%d"), "radius_m": r * 1e3, "latitude_deg": lat, "longitude_deg": lon,
                             "radial_nt": br, "south_nt": bt, "east_nt": bp})
    return rows


def density():
    rows = []
    for when in [datetime(2026, 1, 12, 3, 15), datetime(2028, 6, 20, 18, 40)]:
        for km in [200.0, 400.0, 700.0, 1000.0]:
            for lat, lon in [(0.0, 10.0), (63.0, -120.0), (-41.0, 170.0)]:
                for flux, ap in [(65.0, 0.0), (140.0, 15.0), (250.0, 45.0)]:
                    d, _ = nrlmsise00.msise_model(when, km, lat, lon, flux, flux, ap, method="gtd7d")
                    rows.append({"utc": when.strftime("%Y-%m-%dT%H:%M:%SZ"), "height_m": km * 1e3, "latitude_deg": lat,
                                 "longitude_deg": lon, "f107": flux, "ap": ap, "density_kg_per_m3": float(d[5]) * 1e3})
    return rows


VERSIONS = {"astropy": astropy.__version__, "ppigrf": "2.1.0", "nrlmsise00": "0.1.2"}
OUT = pathlib.Path(__file__).with_name("environment.json")
OUT.write_text(json.dumps({"versions": VERSIONS, "sun": sun(), "rotation": rotation(), "field": field(), "density": density()}, indent=1) + "\n")
