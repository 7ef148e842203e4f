"""Truth for grains of dust: release from the comet's orbit, ejection, motion under GM (1 - beta), tangent offsets, in 80 digits.

The classical closed forms of make_conic.py (eccentric, parabolic, hyperbolic, repulsive anomaly, straight line) carry
the comet to the moment of release and the grain from there; nothing is taken from the crate. Beside each place stands
its conditioning: how far it moves when each input, the two times and GM move by half a unit in their last place.
"""

import math
import os
import random

from mpmath import mp, mpf

import make_conic
import table

AU_KM = mpf("149597870.7")
TO_AU_D = 86400 / AU_KM
OBLIQUITY = mp.radians(mpf("84381.448") / 3600)
DEG = 180 / mp.pi

# q, e, i, node, peri, perihelion (days from J2000, TT, a multiple of 1/64). Invented.
ORBITS = [
    (0.52, 1.0003, 61.2, 201.9, 33.4, 11385.015625),
    (0.21, 0.9992, 119.5, 35.25, 301.0, 11400.5),
    (0.9, 1.0, 17.75, 310.5, 95.5, 10950.25),
    (1.3, 0.62, 8.5, 150.0, 222.5, 12001.75),
    (2.8, 1.4, 140.25, 77.0, 10.0, 11820.125),
    (0.35, 0.85, 75.0, 12.5, 180.5, 11110.0),
    (3.5, 0.015, 3.0, 0.0, 0.0, 11500.0),
    (0.03, 0.99995, 144.0, 5.5, 80.25, 11610.03125),
    (0.8, 0.3, 22.5, 266.0, 131.0, 11300.0),
    (0.0052, 0.9999, 143.5, 2.25, 82.0, 11710.03125),
    (0.0031, 1.0002, 139.0, 340.0, 70.5, 11905.0),
]


def rotate(v, angle):
    c, s = mp.cos(angle), mp.sin(angle)
    return [v[0], v[1] * c - v[2] * s, v[1] * s + v[2] * c]


def comet(orbit, days, mu):
    """Ecliptic state of the comet."""
    q, e, inc, node, peri, perihelion = orbit
    x, y, vx, vy = make_conic.perifocal(mu, q, e, days - perihelion)
    i, o, w = (mp.radians(a) for a in (inc, node, peri))
    ci, si, co, so, cw, sw = mp.cos(i), mp.sin(i), mp.cos(o), mp.sin(o), mp.cos(w), mp.sin(w)
    p = [cw * co - sw * so * ci, cw * so + sw * co * ci, sw * si]
    s = [-sw * co - cw * so * ci, -sw * so + cw * co * ci, cw * si]
    turn = lambda a, b: [a * j + b * k for j, k in zip(p, s)]
    return turn(x, y), turn(vx, vy)


def unit(v):
    n = make_conic.norm(v)
    return [x / n for x in v]


def release(inputs):
    """State at release with the ejection added, and the pull."""
    *orbit, seen, age, beta, radial, transverse, normal, mu = inputs
    r, v = comet(orbit, seen - age, mu)
    out = unit(r)
    up = unit(make_conic.cross(r, v))
    along = make_conic.cross(up, out)
    v = [a + (o * radial + l * transverse + u * normal) * TO_AU_D for a, o, l, u in zip(v, out, along, up)]
    return r, v, mu * (1 - beta)


def grain(inputs):
    r, v, pull = release(inputs)
    return make_conic.propagate(pull, r, v, inputs[7])[0]


def offset(place, nucleus, observer):
    """xi, eta in degrees of tangent; None 90 degrees or more away. All ecliptic."""
    sight = rotate([a - b for a, b in zip(nucleus, observer)], OBLIQUITY)
    way = rotate([a - b for a, b in zip(place, observer)], OBLIQUITY)
    s = unit(sight)
    flat = mp.hypot(s[0], s[1])
    east = [-s[1] / flat, s[0] / flat, mpf(0)]
    north = make_conic.cross(s, east)
    along = make_conic.dot(way, s)
    if along <= 0:
        return None, None
    return make_conic.dot(way, east) / along * DEG, make_conic.dot(way, north) / along * DEG


def past(inputs):
    """Least distance on the way and time over period, by the classical elements."""
    r, v, pull = release(inputs)
    age = inputs[7]
    first, last = make_conic.norm(r), make_conic.norm(make_conic.propagate(pull, r, v, age)[0])
    ends = min(first, last)
    rv, speed2 = make_conic.dot(r, v), make_conic.dot(v, v)
    if pull == 0:
        at = -rv / speed2
        near = make_conic.norm([a + b * at for a, b in zip(r, v)])
        return (min(ends, near) if 0 <= at <= age else ends), mpf(0)
    inverse_a = 2 / first - speed2 / pull
    h2 = make_conic.dot(make_conic.cross(r, v), make_conic.cross(r, v))
    e = mp.sqrt(abs(1 - h2 * inverse_a / pull))
    revolutions = mpf(0)
    if pull > 0 and inverse_a > 0:
        a = 1 / inverse_a
        E = mp.atan2(rv / mp.sqrt(pull * a), 1 - first / a)
        turn = mp.sqrt(a**3 / pull)
        since = (E - e * mp.sin(E)) * turn
        revolutions = age / (2 * mp.pi * turn)
        to_perihelion = -since if since <= 0 else 2 * mp.pi * turn - since
        q = a * (1 - e)
        return (min(ends, q) if to_perihelion <= age else ends), revolutions
    # Open orbits pass once, where r . v changes sign.
    r1, v1 = make_conic.propagate(pull, r, v, age)
    passed = rv <= 0 <= make_conic.dot(r1, v1)
    a = abs(1 / inverse_a)
    q = a * (e - 1) if pull > 0 else a * (e + 1)
    return (min(ends, q) if passed else ends), revolutions


def cases():
    chance = random.Random(20310320)
    betas = [0.0, 1e-4, 0.003, 0.01, 0.1, 0.3, 0.7, 0.95, 1.0, 1.000001, 1.2, 1.8, 2.5]
    ages = [0.0, 0.01, 1.0, 12.5, 60.0, 180.0, 400.0, 900.0, 1500.0]
    for number, orbit in enumerate(ORBITS):
        for beta in betas:
            for age in (ages if number in (0, 3, 8, 9, 10) else chance.sample(ages[1:], 4)):
                seen = orbit[5] + chance.randrange(-64 * 100, 64 * 200) / 64
                place = chance.uniform(0, 2 * math.pi)
                observer = (math.cos(place), math.sin(place), chance.uniform(-4e-5, 4e-5))
                # Undisturbed on an exact parabola, the classical form has no digits left: 1/a is nothing but rounding.
                parabola = orbit[1] == 1.0 and beta == 0.0
                ejection = (0.0, 0.0, 0.0) if chance.random() < 0.3 and not parabola else tuple(round(chance.gauss(0, 0.4), 3) for _ in range(3))
                if age not in (0.0, 0.01, 1500.0):
                    age = round(age * chance.uniform(0.8, 1.2), 4)
                yield orbit, seen, observer, beta, age, ejection


def half_ulp(x):
    return mpf(math.ulp(x)) / 2 if x else mpf(0)


def make(folder):
    rows = []
    for orbit, seen, observer, beta, age, ejection in cases():
        plain = [*orbit, seen, age, beta, *ejection, float(make_conic.MU)]
        exact = [mpf(x) for x in plain[:-1]] + [make_conic.MU]
        place = grain(exact)
        nucleus, _ = comet(exact[:6], exact[6], exact[-1])
        xi, eta = offset(place, nucleus, [mpf(x) for x in observer])
        least, revolutions = past(exact)
        moved = mpf(0)
        # Both times are differences of days that carry the rounding of the larger.
        steps = [half_ulp(x) for x in plain]
        steps[6] = steps[7] = half_ulp(max(abs(seen), abs(seen - age)))
        for at, step in enumerate(steps):
            if step == 0 or (at == 1 and orbit[1] == 1.0):
                continue
            near = list(exact)
            near[at] += step
            moved += make_conic.norm([a - b for a, b in zip(grain(near), place)])
        text = lambda x: None if x is None else make_conic.text(x)
        rows.append([*orbit, seen, *observer, beta, age, *ejection] + [text(x) for x in (*place, xi, eta, least, revolutions)] + [mp.nstr(moved, 3)])
    columns = ["perihelion_distance_au", "eccentricity", "inclination_deg", "ascending_node_deg", "argument_of_perihelion_deg", "perihelion_tt_days",
               "seen_tt_days", "observer_x_au", "observer_y_au", "observer_z_au", "beta", "age_days", "radial_km_s", "transverse_km_s", "normal_km_s",
               "x_au", "y_au", "z_au", "xi_deg", "eta_deg", "least_distance_au", "revolutions", "conditioning_au"]
    table.write(
        os.path.join(folder, "grain.csv"),
        [
            "Places of grains of dust: classical closed forms (all conics, the repulsive branch, the straight line) in 80-digit arithmetic.",
            "Source: " + table.versions("mpmath") + ", make_grain.py. Orbits invented. Inputs are the doubles that the decimals mean.",
            "Elements and places: heliocentric ecliptic J2000, obliquity 84381.448 arcsec; days from J2000.0 TT. seen: the moment seen, light time taken off;",
            "the observer is given, so no ephemeris enters. Ejection at release: away from the Sun, along normal x radial, along r x v.",
            "xi (east), eta (north): gnomonic about the nucleus in equatorial axes, tangent times 180/pi; empty 90 degrees or more away.",
            "least_distance: from the Sun between release and the moment seen, both included. revolutions: age over period, 0 on an open orbit.",
            "conditioning: sum of the changes of the place when each input moves by half a unit in its last place.",
            "Tolerance of the comparison: 1e-10 au, or ten times the conditioning where that is worse (grazing perihelia only);",
            "offsets 1e-6 deg near the nucleus, in the proportion of the tangent far from it. Of the regeneration: 1e-15 relative.",
        ],
        columns,
        rows,
    )


CHECKS = {"grain.csv": (1e-15, 1e-30)}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
