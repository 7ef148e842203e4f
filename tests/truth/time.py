"""Makes time.csv: TT - UTC (from 1972, ERFA's leap seconds) and TT - UT1 (before, skyfield's tables of measured
and historical Delta T), with general libraries only.

Columns: scale (UTC or UT), ISO date, day number from 2000-01-01 (ERFA's Gregorian cal2jd), TT - that scale in seconds.
Run: python tests/truth/time.py > tests/truth/time.csv
"""
import erfa
from skyfield.api import load

print("# made by tests/truth/time.py with pyerfa", erfa.__version__, "and skyfield", __import__("skyfield").__version__)
print("scale,date,day_number,tt_minus_scale_seconds")


def day_number(year, month, day):
    jd0, mjd = erfa.cal2jd(year, month, day)
    return int(jd0 + mjd - 2451544.5)


for year in range(1972, 2032):
    for month in range(1, 13):
        # ERFA warns of dates beyond its own table's expiry; it keeps TAI - UTC, as we do.
        print(f"UTC,{year}-{month:02}-01,{day_number(year, month, 1)},{erfa.dat(year, month, 1, 0.0) + 32.184:.3f}")

timescale = load.timescale(builtin=True)
for year in list(range(1700, 1900, 5)) + list(range(1900, 1972)):
    moment = timescale.ut1(year, 1, 1)
    print(f"UT,{year}-01-01,{day_number(year, 1, 1)},{moment.delta_t:.4f}")
