"""Truth for the camera's field: pixel to sky and back on a turned, mirrored, shifted chip, by wcslib through astropy.

The chip is a TAN picture whose CD matrix is written from the rotation; the nucleus is whatever the picture has at its pixel.
"""

import math
import os
import random

import numpy as np
from astropy import units as u
from astropy.coordinates import SkyCoord
from astropy.wcs import WCS

import table


def picture(lon0_deg, lat0_deg, up_deg, mirrored, scale_arcsec, wide, high):
    """The WCS of a chip with image up at position angle `up_deg` at its middle; FITS pixels, the first row at the foot."""
    wcs = WCS(naxis=2)
    wcs.wcs.ctype = ["RA---TAN", "DEC--TAN"]
    wcs.wcs.crval = [lon0_deg, lat0_deg]
    wcs.wcs.crpix = [wide / 2 + 0.5, high / 2 + 0.5]
    scale = scale_arcsec / 3600
    angle = math.radians(up_deg)
    # As on the sky, image right lies a quarter turn before image up in position angle; mirrored, after it.
    right = math.radians(up_deg + 90 if mirrored else up_deg - 90)
    wcs.wcs.cd = scale * np.array([[math.sin(right), math.sin(angle)], [math.cos(right), math.cos(angle)]])
    wcs.wcs.lonpole = 180.0
    wcs.wcs.set()
    return wcs


def make(folder):
    rows = []

    def add(why, lon0, lat0, up, mirrored, scale, wide, high, nucleus, pixel, angle):
        wcs = picture(lon0, lat0, up, mirrored, scale, wide, high)
        at = lambda px: [float(x) for x in wcs.all_pix2world([[px[0] + wide / 2 + 0.5, px[1] + high / 2 + 0.5]], 1)[0]]
        seen, there = at(nucleus), at(pixel)
        start = SkyCoord(*seen, unit="deg")
        # A tenth of a degree along a great circle, which is a straight line on the chip.
        along = start.directional_offset_by(angle * u.deg, 0.1 * u.deg)
        x, y = wcs.all_world2pix([[along.ra.deg, along.dec.deg]], 1)[0]
        step = (x - wide / 2 - 0.5 - nucleus[0], y - high / 2 - 0.5 - nucleus[1])
        clockwise = math.degrees(math.atan2(step[0], step[1])) % 360
        rows.append([why, lon0, lat0, up, int(mirrored), scale, wide, high, *nucleus, *seen, *pixel, *there, angle, clockwise])

    add("north up", 30.0, 10.0, 0.0, False, 2.0, 6000, 4000, (0.0, 0.0), (1500.0, -700.0), 20.0)
    add("east up", 30.0, 10.0, 90.0, False, 2.0, 6000, 4000, (0.0, 0.0), (1500.0, -700.0), 110.0)
    add("mirror-reversed", 30.0, 10.0, 0.0, True, 2.0, 6000, 4000, (0.0, 0.0), (1500.0, -700.0), 40.0)
    add("mirror-reversed and turned", 200.0, -35.0, 123.4, True, 1.37, 4096, 4096, (-800.0, 1200.0), (2048.0, 2048.0), 250.0)
    add("nucleus off the chip", 200.0, 35.0, 300.0, False, 5.0, 3000, 2000, (1900.0, 1400.0), (-1500.0, 1000.0), 200.0)
    add("near the north pole", 77.0, 88.5, 45.0, False, 4.0, 5000, 3000, (-700.0, 200.0), (2500.0, 1500.0), 10.0)
    add("near the south pole", 310.0, -89.0, 220.0, True, 3.0, 5000, 3000, (300.0, 900.0), (-2500.0, 100.0), 170.0)
    add("wide", 120.0, 60.0, 15.0, False, 60.0, 3000, 2000, (-1200.0, -800.0), (1500.0, 1000.0), 330.0)
    add("very wide", 0.3, -5.0, 359.0, False, 120.0, 2000, 2000, (900.0, -900.0), (-1000.0, 1000.0), 77.0)
    chance = random.Random(120)
    while len(rows) < 60:
        lat0 = math.degrees(math.asin(chance.uniform(-1, 1)))
        wide, high = chance.randrange(200, 9000), chance.randrange(200, 9000)
        scale = 10 ** chance.uniform(-0.5, 1.6)
        spot = lambda: (chance.uniform(-0.5, 0.5) * wide, chance.uniform(-0.5, 0.5) * high)
        nucleus = spot()
        # Of the two pointings that may have a nucleus near a pole at one pixel the table holds the one not across it.
        wcs = picture(0.0, lat0, 0.0, False, scale, wide, high)
        if abs(lat0) + math.degrees(math.atan(math.hypot(*nucleus) * scale / 206265)) > 89:
            continue
        add("random", chance.uniform(0, 360), lat0, chance.uniform(0, 360), chance.random() < 0.5, scale, wide, high, nucleus, spot(), chance.uniform(0, 360))
    table.write(
        os.path.join(folder, "camera.csv"),
        [
            "A chip on the sky: middle (lon0, lat0), position angle of image up there, parity, scale, pixels; the nucleus's pixel (right and up from",
            "the middle) and where it lies; another pixel and where it lies; and how a position angle at the nucleus lies on the chip.",
            "Source: " + table.versions("astropy") + " (wcslib TAN with a CD matrix; SkyCoord.directional_offset_by), make_camera.py.",
            "Units: degrees, arcsec per pixel, pixels. Tolerance: 1e-7 pixel times (1 + the squared tangent of the distance from the middle), since wcslib's",
            "degrees keep 1e-13 of a turn; 1e-6 deg for the angle on the chip, from a step of 0.1 deg. Of the regeneration: 1e-9.",
        ],
        ["why", "lon0_deg", "lat0_deg", "image_up_deg", "mirrored", "scale_arcsec", "pixels_wide", "pixels_high", "nucleus_right_px", "nucleus_up_px",
         "nucleus_lon_deg", "nucleus_lat_deg", "right_px", "up_px", "lon_deg", "lat_deg", "position_angle_deg", "clockwise_from_up_deg"],
        rows,
    )


CHECKS = {"camera.csv": (1e-9, 1e-9)}

if __name__ == "__main__":
    make(os.path.dirname(os.path.abspath(__file__)))
