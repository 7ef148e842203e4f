"""Truth for time scales: ERFA from UTC to TT since 1972, and skyfield's published Delta T table before.

Delta T there is the spline of Morrison, Stephenson, Hohenkerk & Zawilski 2021 (Proc. R. Soc. A 477, 20200776)
before 1973 joined to the daily values of the IERS.
"""

import os

import erfa
import numpy as np
from skyfield.api import load

import table

J2000 = 2451545.0
SCALE = load.timescale(builtin=True)
FIRST_UTC = 2441317.5  # 1972-01-01

LEAPS = [
    (1972, 6), (1972, 12), (1973, 12), (1974, 12), (1975, 12), (1976, 12), (1977, 12), (1978, 12), (1979, 12), (1981, 6), (1982, 6),
    (1983, 6), (1985, 6), (1987, 12), (1989, 12), (1990, 12), (1992, 6), (1993, 6), (1994, 6), (1995, 12), (1997, 6), (1998, 12),
    (2005, 12), (2008, 12), (2012, 6), (2015, 6), (2016, 12),
]


def tt_minus_ut_seconds(jd_tt):
    """What the plan means by TT - UTC: TT - UT1 before 1972, 32.184 s plus the leap seconds afterwards (those known now, for ever)."""
    if jd_tt < FIRST_UTC:
        return float(SCALE.tt_jd(jd_tt).delta_t)
    utc = jd_tt - 69.184 / 86400.0
    year, month, day, fraction = erfa.jd2cal(utc, 0.0)
    return 32.184 + quiet(erfa.dat, year, month, day, fraction)


def quiet(function, *arguments):
    """ERFA warns of dates far past its last leap second ("dubious year"); that is what the plan asks for here."""
    import warnings

    with warnings.catch_warnings():
        warnings.simplefilter("ignore", erfa.ErfaWarning)
        return float(function(*arguments))


def utc_row(why, y, mo, d, h, mi, s):
    import warnings

    with warnings.catch_warnings():
        warnings.simplefilter("ignore", erfa.ErfaWarning)
        utc1, utc2 = erfa.dtf2d("UTC", y, mo, d, h, mi, s)
        tt1, tt2 = erfa.taitt(*erfa.utctai(utc1, utc2))
    whole, part = (f"{s:06.3f}".split(".") if s != int(s) else (f"{int(s):02d}", ""))
    stamp = f"{y:04d}-{mo:02d}-{d:02d}T{h:02d}:{mi:02d}:{whole}" + (f".{part}" if part else "") + "Z"
    return [why, stamp, float(tt1), float(tt2), float((tt1 - J2000) + tt2)]


def make_utc(folder):
    rows = []
    for y, mo in LEAPS:
        d = 30 if mo == 6 else 31
        after = (y, 7, 1) if mo == 6 else (y + 1, 1, 1)
        before = quiet(erfa.dat, y, mo, d, 0.5)
        assert quiet(erfa.dat, *after, 0.0) == before + 1, (y, mo)
        for why, args in [
            ("a second before", (y, mo, d, 23, 59, 59)), ("the leap second begins", (y, mo, d, 23, 59, 60)),
            ("within the leap second", (y, mo, d, 23, 59, 60.5)), ("the day after begins", (*after, 0, 0, 0)),
            ("noon before", (y, mo, d, 12, 0, 0)), ("noon after", (*after, 12, 0, 0)),
        ]:
            rows.append(utc_row(why, *args))
    for why, args in [
        ("first day of leap seconds", (1972, 1, 1, 0, 0, 0)), ("plain", (1986, 2, 9, 10, 59, 3)), ("J2000 in UTC", (2000, 1, 1, 12, 0, 0)),
        ("plain", (2004, 5, 2, 22, 16, 19)), ("leap day", (2020, 2, 29, 23, 59, 59.999)), ("physics sheet", (2024, 10, 14, 18, 0, 0)),
        ("a date after the last leap second", (2026, 12, 1, 0, 0, 0)), ("past the last known leap second", (2031, 3, 20, 5, 30, 0)),
        ("past the last known leap second", (2099, 12, 31, 23, 59, 59)),
    ]:
        rows.append(utc_row(why, *args))
    table.write(
        os.path.join(folder, "utc.csv"),
        [
            "UTC to TT around every leap second since 1972, and ordinary dates.",
            "Source: " + table.versions("pyerfa") + " (dtf2d, utctai, taitt), make_times.py; TAI - UTC from ERFA's table (last step 2017-01-01), kept afterwards.",
            "Units: Julian date TT in two parts; tt_days from J2000.0 TT.",
            "Tolerance: 1e-10 day (9 microseconds): times are typed to a millisecond at best, and a leap second or an off-by-one day is 1e-5 day or more.",
            "Of the regeneration: 1e-11 day.",
        ],
        ["why", "utc", "jd_tt_1", "jd_tt_2", "tt_days"],
        rows,
    )


def make_delta_t(folder):
    rows = []
    for half in range(2 * (1972 - 1900)):
        year, month = 1900 + half // 2, 1 if half % 2 == 0 else 7
        time = SCALE.ut1(year, month, 1)
        rows.append([f"{year:04d}-{month:02d}-01T00:00:00Z", float(time.delta_t), float((time.whole - J2000) + time.tt_fraction)])
    table.write(
        os.path.join(folder, "delta_t.csv"),
        [
            "TT - UT1 on 1 January and 1 July, 1900 to 1971: what a date marked UTC means before 1972.",
            "Source: " + table.versions("skyfield") + ", builtin time scale: Morrison, Stephenson, Hohenkerk & Zawilski 2021 splines and IERS values; make_times.py.",
            "Units: delta_t s; tt_days from J2000.0 TT.",
            "Tolerance: 1.2 s. Published values themselves differ by 0.8 s in 1900 (-2.8 s after Morrison & Stephenson 2004), and polynomials of a few terms per two",
            "decades miss the wander of the Earth's rotation by up to 1.1 s (1906) and 0.7 s (1955, 1965). 1.2 s turn the Earth by 18 arcsec (0.005 deg of altitude, bar 0.01) and move a comet at",
            "0.1 au and 60 km/s by 1 arcsec; times of observation were published to a minute or so then.",
            "Of the regeneration: 1e-6 s, 1e-10 day.",
        ],
        ["ut", "delta_t_s", "tt_days"],
        rows,
    )


def make(folder):
    make_utc(folder)
    make_delta_t(folder)


CHECKS = {"utc.csv": (0.0, 1e-11), "delta_t.csv": (0.0, {"delta_t_s": 1e-6, "": 1e-10})}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
