"""Truth for whole days: day numbers, TT - UTC at the first of every month from 1972 (ERFA's leap seconds), and TT - UT1 at
the first of the year before (skyfield's published Delta T)."""

import os
import warnings

import erfa
from skyfield.api import load

import table

COLUMNS = ["scale", "date", "day_number", "tt_minus_scale_seconds"]


def day_number(year, month, day):
    jd0, mjd = erfa.cal2jd(year, month, day)
    return int(jd0 + mjd - 2451544.5)


def rows():
    # ERFA warns of dates beyond its own table's expiry; it keeps TAI - UTC, as Tailvane does.
    warnings.simplefilter("ignore")
    for year in range(1972, 2032):
        for month in range(1, 13):
            offset = float(erfa.dat(year, month, 1, 0.0)) + 32.184
            yield ["UTC", f"{year}-{month:02}-01", day_number(year, month, 1), round(offset, 3)]
    scale = load.timescale(builtin=True)
    for year in list(range(1700, 1900, 5)) + list(range(1900, 1972)):
        yield ["UT", f"{year}-01-01", day_number(year, 1, 1), round(float(scale.ut1(year, 1, 1).delta_t), 4)]


def make(folder):
    header = [
        "Whole days, and TT less the scale named, at 0h.",
        f"Source: {table.versions('pyerfa', 'skyfield')}; ERFA cal2jd and dat, skyfield's Delta T table.",
        "Units: days from 2000-01-01 (Gregorian), seconds. Tolerances: tests/time_text.rs says them and why.",
    ]
    table.write(os.path.join(folder, "days.csv"), header, COLUMNS, rows())


CHECKS = {"days.csv": (0.0, {"tt_minus_scale_seconds": 1e-3, "": 0.0})}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
