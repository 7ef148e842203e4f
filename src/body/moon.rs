//! Where is the Moon, seen from the centre of the Earth?
//!
//! Geometric (no light time, 1.3 s), ICRF/J2000 equatorial, au. A trigonometric series in the arguments of
//! ELP-2000 (Chapront-Touze & Chapront 1988, A&A 190, 342; as abridged in Meeus, Astronomical Algorithms,
//! 2nd ed. 1998, chapter 47), with amplitudes fitted to JPL DE440 (tests/truth/ephemeris/fit_tables.py), in the
//! mean ecliptic and equinox of date, turned to the ICRF by IAU 2006 precession.
//!
//! Span: [`super::SPAN`]. Against DE440 there, at 60000 evenly spaced times: direction within 8.9 arcsec (0.0025 deg),
//! 1.9 arcsec rms; distance within 11 km. The leading terms alone serve the Earth's own place: see [`super::earth`].

use super::lunar_terms::{
    LATITUDE, LEADING_LATITUDE, LEADING_PLANE, MEAN_ANOMALY_ARCSEC, MEAN_DISTANCE_KM, MEAN_LONGITUDE_ARCSEC,
    MEAN_LONGITUDE_IN_LATITUDE_ARCSEC, NODE_LONGITUDE_ARCSEC, PLANE, VENUS_LATITUDE_ARCSEC, VENUS_LONGITUDE_ARCSEC,
};
use super::{AU_KM, SPAN};
use crate::error::Error;
use crate::frame::earth_rotation::{ARCSEC_RAD, Precession, centuries};
use crate::time::Instant;
use nalgebra::Vector3;

/// Place of the Moon from the centre of the Earth, au, equatorial.
///
/// # Errors
/// A time outside [`SPAN`].
pub fn geocentric_au(time: Instant) -> Result<Vector3<f64>, Error> {
    SPAN.check(time)?;
    Ok(series_au(time.tdb_days(), Detail::Full))
}

/// How many terms of the series are summed.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) enum Detail {
    /// All of them.
    Full,
    /// Those of 5 arcsec or 10 km and more.
    Leading,
}

/// The series at `days` of TDB from J2000.0.
pub(super) fn series_au(days: f64, detail: Detail) -> Vector3<f64> {
    let (plane, latitude) = match detail {
        Detail::Full => (&PLANE[..], &LATITUDE[..]),
        Detail::Leading => (&PLANE[..LEADING_PLANE], &LATITUDE[..LEADING_LATITUDE]),
    };
    let args = Arguments::at(centuries(days));

    let node = args.mean_longitude.less(args.node_distance);
    let mut longitude_arcsec = VENUS_LONGITUDE_ARCSEC * args.venus.sin + NODE_LONGITUDE_ARCSEC * node.sin;
    let mut distance_km = MEAN_DISTANCE_KM;
    for term in plane {
        let angle = args.sum(term.0);
        longitude_arcsec += term.1 * angle.sin;
        distance_km += term.2 * angle.cos;
    }
    let [by_sine, by_cosine] = MEAN_LONGITUDE_IN_LATITUDE_ARCSEC;
    let mut latitude_arcsec = by_sine * args.mean_longitude.sin
        + by_cosine * args.mean_longitude.cos
        + VENUS_LATITUDE_ARCSEC[0] * args.venus.less(args.node_distance).sin
        + VENUS_LATITUDE_ARCSEC[1] * args.venus.plus(args.node_distance).sin;
    for term in latitude {
        latitude_arcsec += term.1 * args.sum(term.0).sin;
    }

    let (sin_lon, cos_lon) = libm::sincos(args.mean_longitude_rad + longitude_arcsec * ARCSEC_RAD);
    let (sin_lat, cos_lat) = libm::sincos(latitude_arcsec * ARCSEC_RAD);
    let of_date = Vector3::new(cos_lat * cos_lon, cos_lat * sin_lon, sin_lat) * (distance_km / AU_KM);
    Precession::at(days).ecliptic_of_date_to_celestial(&of_date)
}

/// Sine and cosine of an angle, times a factor near one where the doc says so.
#[derive(Clone, Copy)]
struct Phasor {
    sin: f64,
    cos: f64,
}

impl Phasor {
    const ZERO_ANGLE: Phasor = Phasor { sin: 0.0, cos: 1.0 };

    fn of(angle_rad: f64) -> Phasor {
        let (sin, cos) = libm::sincos(angle_rad);
        Phasor { sin, cos }
    }

    fn plus(self, other: Phasor) -> Phasor {
        Phasor { sin: self.sin * other.cos + self.cos * other.sin, cos: self.cos * other.cos - self.sin * other.sin }
    }

    fn less(self, other: Phasor) -> Phasor {
        self.plus(other.negative())
    }

    fn negative(self) -> Phasor {
        Phasor { sin: -self.sin, ..self }
    }

    fn times(self, factor: f64) -> Phasor {
        Phasor { sin: self.sin * factor, cos: self.cos * factor }
    }
}

/// The arguments of the series at one time, and the multiples of them that its terms use.
struct Arguments {
    mean_longitude_rad: f64,
    mean_longitude: Phasor,
    node_distance: Phasor,
    /// 18 times Venus less 16 times the Earth less the Moon's anomaly.
    venus: Phasor,
    /// Elongation 0 to 4 times, and the Sun's anomaly -2 to 2 times (shrunk with the Earth's eccentricity).
    elongation_and_sun: [[Phasor; 5]; 5],
    /// The Moon's anomaly -4 to 4 times, and the distance from the node -3 to 3 times.
    moon_and_node: [[Phasor; 7]; 9],
}

impl Arguments {
    /// Arguments at `t` Julian centuries from J2000.0; degrees and their powers of the time from Meeus, chapter 47.
    fn at(t: f64) -> Arguments {
        let radians = |c: [f64; 3]| (c[0] + t * (c[1] + t * c[2])).to_radians();
        let mended =
            |c: [f64; 3], arcsec: [f64; 3]| radians(c) + (arcsec[0] + t * (arcsec[1] + t * arcsec[2])) * ARCSEC_RAD;
        let mean_longitude_rad = mended([218.316_447_7, 481_267.881_234_21, -0.001_578_6], MEAN_LONGITUDE_ARCSEC);
        let elongation = Phasor::of(radians([297.850_192_1, 445_267.111_403_4, -0.001_881_9]));
        // The Earth's eccentricity, as a share of that of 2000, scales each multiple of the Sun's anomaly.
        let eccentricity = 1.0 - t * (0.002_516 + 0.000_007_4 * t);
        let sun = Phasor::of(radians([357.529_109_2, 35_999.050_290_9, -0.000_153_6])).times(eccentricity);
        let moon = Phasor::of(mended([134.963_396_4, 477_198.867_505_5, 0.008_741_4], MEAN_ANOMALY_ARCSEC));
        let node_distance = Phasor::of(radians([93.272_095_0, 483_202.017_523_3, -0.003_653_9]));

        let sun_twice = sun.plus(sun);
        let suns = [sun_twice.negative(), sun.negative(), Phasor::ZERO_ANGLE, sun, sun_twice];
        let mut elongation_and_sun = [suns; 5];
        for d in 1..5 {
            elongation_and_sun[d] = elongation_and_sun[d - 1].map(|phasor| phasor.plus(elongation));
        }
        let node_twice = node_distance.plus(node_distance);
        let node_thrice = node_twice.plus(node_distance);
        let nodes = [
            node_thrice.negative(),
            node_twice.negative(),
            node_distance.negative(),
            Phasor::ZERO_ANGLE,
            node_distance,
            node_twice,
            node_thrice,
        ];
        let mut moon_and_node = [nodes; 9];
        for m in 1..5 {
            let row = moon_and_node[3 + m].map(|phasor| phasor.plus(moon));
            let mut mirrored = row.map(Phasor::negative);
            mirrored.reverse();
            (moon_and_node[4 + m], moon_and_node[4 - m]) = (row, mirrored);
        }
        Arguments {
            mean_longitude_rad,
            mean_longitude: Phasor::of(mean_longitude_rad),
            node_distance,
            venus: Phasor::of(radians([119.75, 131.849, 0.0])),
            elongation_and_sun,
            moon_and_node,
        }
    }

    /// The phasor of a sum of multiples: elongation, Sun's anomaly, Moon's anomaly, distance from the node.
    fn sum(&self, [d, s, m, f]: [i8; 4]) -> Phasor {
        let outer = self.elongation_and_sun[d as usize][(s + 2) as usize];
        outer.plus(self.moon_and_node[(m + 4) as usize][(f + 3) as usize])
    }
}
