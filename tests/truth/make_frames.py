"""Truth for frames: position angles, tangent plane, obliquity, horizon, by ERFA, astropy and wcslib; arcs by mpmath.

The first rows of each kind use the inputs of ERFA's own unit tests (t_erfa_c.c), the outputs are run here and
agree with the values printed there.
"""

import math
import os
import random

import erfa
import numpy as np
import spiceypy as spice
from astropy import units as u
from astropy.coordinates import SkyCoord
from astropy.wcs import WCS
from mpmath import mp

import table

DEG = 180.0 / math.pi


def make_angles(folder):
    """Position angle and separation from point a to point b."""
    rows = []

    def add(why, a_lon, a_lat, b_lon, b_lat):
        pas, seps = float(erfa.pas(a_lon, a_lat, b_lon, b_lat)), float(erfa.seps(a_lon, a_lat, b_lon, b_lat))
        if abs(b_lat) <= math.pi / 2:  # ERFA takes any latitude, astropy does not
            a, b = (SkyCoord(x * u.rad, y * u.rad) for x, y in ((a_lon, a_lat), (b_lon, b_lat)))
            assert abs(a.separation(b).rad - seps) < 1e-12
            assert abs(math.remainder(a.position_angle(b).rad - pas, 2 * math.pi)) < 1e-11
        rows.append([why, a_lon, a_lat, b_lon, b_lat, pas % (2 * math.pi), seps])

    add("ERFA t_pas", 1.0, 0.1, 0.2, -1.0)
    add("ERFA t_seps", 1.0, 0.1, 0.2, -3.0)
    d = math.pi / 180
    add("near the pole and across it", 10 * d, 85 * d, 200 * d, 88 * d)
    add("and back", 200 * d, 88 * d, 10 * d, 85 * d)
    add("across right ascension zero", 359.9 * d, -20 * d, 0.1 * d, -20 * d)
    add("and back", 0.1 * d, -20 * d, 359.9 * d, -20 * d)
    add("due north", 2.0, 0.3, 2.0, 0.9)
    add("due south", 2.0, 0.3, 2.0, -0.9)
    add("small step", 3.0, 1.2, 3.0 + 1e-6, 1.2 + 1e-6)
    chance = random.Random(1957)
    for _ in range(12):
        add("random", chance.uniform(0, 2 * math.pi), math.asin(chance.uniform(-1, 1)), chance.uniform(0, 2 * math.pi), math.asin(chance.uniform(-1, 1)))
    assert abs(rows[0][5] - 2 * math.pi + 2.724544922932270173) < 1e-12
    assert abs(rows[1][6] - 2.346722016996998842) < 1e-12
    table.write(
        os.path.join(folder, "position_angles.csv"),
        [
            "Position angle (north through east, [0, 2 pi)) and separation from point a to point b.",
            "Source: " + table.versions("pyerfa", "astropy") + " (pas, seps; astropy agrees to 1e-11), make_frames.py; ERFA's unit tests print",
            "-2.724544922932270173 for the position angle of the first row and 2.346722016996998842 for the separation of the second.",
            "Units: radians. Tolerance: 1e-12 rad; for a position angle 1e-12 / sine of the separation (1e-15 of direction, seen over that arc), since the crate",
            "works on unit vectors. Of the regeneration: 1e-12.",
        ],
        ["why", "a_lon_rad", "a_lat_rad", "b_lon_rad", "b_lat_rad", "position_angle_rad", "separation_rad"],
        rows,
    )


def make_arcs(folder):
    """The angle of two legs, correctly rounded from 40 digits."""
    rows = []

    def add(why, opposite, adjacent):
        with mp.workdps(40):
            rows.append([why, opposite, adjacent, float(mp.atan2(mp.mpf(opposite), mp.mpf(adjacent)))])

    for opposite in (1.0, -1.0):
        for adjacent in (1.0, -1.0, 1e-8, -1e-8, 1e8, -1e8, 1e-300, -1e-300):
            add("octants and poles", opposite, adjacent)
    for sign in (1.0, -1.0):
        add("on an axis", 0.0, sign)
        add("on an axis", sign, 0.0)
    edge = math.tan(math.pi / 8)
    for step in range(-4, 5):
        add("where the method changes", edge * (1 + step * 2.0**-52), 1.0)
        add("where the method changes", -1.0, edge * (1 + step * 2.0**-52))
        add("where the method changes", 1.0 + step * 2.0**-52, -1.0)
    chance = random.Random(1744)
    for _ in range(120):
        add("random", chance.uniform(-1, 1), chance.uniform(-1, 1))
    for _ in range(40):
        add("random size", chance.choice([-1, 1]) * 10 ** chance.uniform(-30, 30), chance.choice([-1, 1]) * 10 ** chance.uniform(-30, 30))
    table.write(
        os.path.join(folder, "arcs.csv"),
        [
            "Angle of the point (adjacent, opposite) from the first axis toward the second, (-pi, pi].",
            "Source: " + table.versions("mpmath") + " (atan2 in 40 digits, rounded to the nearest double), make_frames.py.",
            "Units: radians. Tolerance: two units in the last place; a unit and a half is what the method loses, half a unit the rounding of the table.",
            "Of the regeneration: 1e-16 relative.",
        ],
        ["why", "opposite", "adjacent", "arc_rad"],
        rows,
    )


def make_tangent(folder):
    """Gnomonic projection about a tangent point, and back."""
    rows = []

    def add(why, a, b, a0, b0):
        xi, eta = erfa.tpxes(a, b, a0, b0)
        wcs = WCS(naxis=2)
        wcs.wcs.ctype, wcs.wcs.crval, wcs.wcs.crpix, wcs.wcs.cdelt = ["RA---TAN", "DEC--TAN"], [a0 * DEG, b0 * DEG], [0, 0], [1, 1]
        wcs.wcs.lonpole = 180.0  # as everywhere but at the pole, where wcslib would turn the plane round
        for mine, theirs in zip((xi, eta), wcs.wcs_world2pix([[a * DEG, b * DEG]], 0)[0] + 1):
            assert abs(mine - theirs / DEG) < 1e-11 * max(1, abs(mine)), (why, mine, theirs / DEG)
        rows.append([why, a, b, a0, b0, float(xi), float(eta)])

    def add_back(why, xi, eta, a0, b0):
        a, b = erfa.tpsts(xi, eta, a0, b0)
        rows.append([why, float(a), float(b), a0, b0, xi, eta])

    d = math.pi / 180
    add("ERFA t_tpxes", 1.3, 1.55, 2.3, 1.5)
    add_back("ERFA t_tpsts", -0.03, 0.07, 2.3, 1.5)
    add("5 deg toward 69.4", 228.3243891 * d, 1.9894742 * d, 223.642 * d, 0.233 * d)
    add("15 deg toward 30", 231.2799253 * d, 13.1834744 * d, 223.642 * d, 0.233 * d)
    add("tangent at the pole", 0.7, 1.3, 0.0, math.pi / 2)
    add("80 deg away", 1.0, -0.4, 1.0, -0.4 + 80 * d)
    add("across zero", 359.95 * d, 40 * d, 0.3 * d, 40.1 * d)
    chance = random.Random(2002)
    for _ in range(8):
        add_back("random", chance.uniform(-2, 2), chance.uniform(-2, 2), chance.uniform(0, 2 * math.pi), math.asin(chance.uniform(-1, 1)))
    table.write(
        os.path.join(folder, "tangent.csv"),
        [
            "Gnomonic coordinates xi (east), eta (north) of (lon, lat) about the tangent point (lon0, lat0).",
            "Source: " + table.versions("pyerfa", "astropy") + " (tpxes, tpsts; wcslib's TAN agrees to 1e-11), make_frames.py. ERFA's unit test prints",
            "xi -0.01753200983236980595, eta 0.05962940005778712891 for its first row; lon 0.7596127167359629775, lat 1.540864645109263028 for its second.",
            "Units: radians; tangent values. Tolerance: 1e-12 times (1 + xi^2 + eta^2), the magnification there. Of the regeneration: 1e-12.",
        ],
        ["why", "lon_rad", "lat_rad", "lon0_rad", "lat0_rad", "xi", "eta"],
        rows,
    )


def make_rotation(folder):
    """Ecliptic J2000 to equatorial J2000."""
    rows = []
    turn = np.array(spice.pxform("ECLIPJ2000", "J2000", 0.0))
    by_erfa = erfa.rx(-float(erfa.obl80(2451545.0, 0.0)), np.eye(3))
    assert np.abs(turn - by_erfa).max() < 1e-15
    chance = random.Random(84381)
    for v in [[1, 0, 0], [0, 1, 0], [0, 0, 1], [0.25080662, 0.58704377, 0.13496143]] + [[chance.uniform(-9, 9) for _ in range(3)] for _ in range(4)]:
        v = [float(x) for x in v]
        rows.append(v + [float(x) for x in turn @ np.array(v)])
    table.write(
        os.path.join(folder, "ecliptic.csv"),
        [
            "Vectors in ecliptic J2000 axes (obliquity 84381.448 arcsec, IAU 1976) and the same in equatorial J2000 axes.",
            "Source: " + table.versions("spiceypy", "pyerfa") + " (SPICE frame ECLIPJ2000; ERFA obl80 and rx agree to 1e-15), make_frames.py.",
            "Unit: any. Tolerance: 1e-15 of the vector's length, two roundings. Of the regeneration: 1e-14.",
        ],
        ["x_ecliptic", "y_ecliptic", "z_ecliptic", "x", "y", "z"],
        rows,
    )


def make_horizon(folder):
    """Hour angle and declination to azimuth, altitude and the zenith's position angle."""
    rows = []
    d = math.pi / 180

    def add(why, ha, dec, lat):
        az, alt = erfa.hd2ae(ha, dec, lat)
        rows.append([why, ha, dec, lat, float(az) % (2 * math.pi), float(alt), float(erfa.hd2pa(ha, dec, lat)) % (2 * math.pi)])

    add("ERFA t_hd2ae and t_hd2pa", 1.1, 1.2, 0.3)
    add("west of south", 30 * d, 20 * d, 50 * d)
    add("northern comet", 60 * d, -10 * d, 30 * d)
    add("east of south", -45 * d, -10 * d, 51.4779 * d)
    add("southern site", 20 * d, -60 * d, -33 * d)
    add("below the horizon", 170 * d, 5 * d, 47 * d)
    add("seen from the pole", 1.0, 0.4, math.pi / 2)
    chance = random.Random(1988)
    for _ in range(8):
        add("random", chance.uniform(-math.pi, math.pi), math.asin(chance.uniform(-1, 1)), math.asin(chance.uniform(-1, 1)))
    assert abs(rows[0][6] - 1.906227428001995580) < 1e-12
    table.write(
        os.path.join(folder, "horizon.csv"),
        [
            "Azimuth (north through east), altitude and position angle of the zenith from hour angle, declination and latitude.",
            "Source: " + table.versions("pyerfa") + " (hd2ae, hd2pa), make_frames.py; ERFA's unit test prints 1.906227428001995580 for the last of its row.",
            "Units: radians. Tolerance: 1e-12. Of the regeneration: 1e-12.",
        ],
        ["why", "hour_angle_rad", "declination_rad", "latitude_rad", "azimuth_rad", "altitude_rad", "zenith_position_angle_rad"],
        rows,
    )


def make(folder):
    make_angles(folder)
    make_arcs(folder)
    make_tangent(folder)
    make_rotation(folder)
    make_horizon(folder)


CHECKS = {name: (1e-12, 1e-12) for name in ("position_angles.csv", "tangent.csv", "ecliptic.csv", "horizon.csv")}
CHECKS["arcs.csv"] = (1e-16, 0.0)

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
