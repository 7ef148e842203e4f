//! Where does the ion tail point?
//!
//! Ions go with the wind of the Sun as the moving nucleus feels it: w rhat - v, the wind w blowing straight away from
//! the Sun, v the heliocentric velocity of the nucleus. The axis lags behind the antisolar direction by the aberration
//!
//! ```text
//!   antisolar, w rhat            tan(aberration) = v_across / (w - v_outward)
//!      |    / ion axis
//!      |   /
//!      |~~/  aberration
//!      | /
//!   nucleus ---> v
//! ```
//!
//! Valid for the axis near the nucleus: kinks, disconnections and storms of the Sun break it. The real wind blows up
//! to some 10 to 30 km/s off radial, 1 to 4 degrees, so a wedge of directions is never drawn as a line.
//! Sources: Biermann 1951; Belton & Brandt 1966; Brandt & Snow 2000, Icarus 148, 52.

use crate::body::KM_S_PER_AU_D;
use crate::caution::Caution;
use crate::frame::{half_turn, position_angle_rad, separation_rad};
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use nalgebra::Vector3;

/// The wedge reaches at least this far on either side of its axis on the sky.
pub const LEAST_REACH_RAD: f64 = 3.0 * std::f64::consts::PI / 180.0;

/// This near the orbit plane less than a tenth of the aberration shows, below what flow off the radial direction does.
const NEAR_PLANE_RAD: f64 = 5.0 * std::f64::consts::PI / 180.0;

/// The axis of the ion tail for one wind.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Axis {
    pub wind_km_s: f64,
    /// Unit vector from the nucleus, equatorial.
    pub direction: Vector3<f64>,
    /// [0, 2 pi); None where the axis lies along the line of sight.
    pub position_angle_rad: Option<f64>,
    /// From the antisolar position angle to that of the axis, (-pi, pi], positive from north through east; None where
    /// either does not exist.
    pub from_antisolar_rad: Option<f64>,
    /// Angle in space between the antisolar direction and the axis, [0, pi].
    pub aberration_rad: f64,
}

impl Axis {
    /// The axis for a wind of `wind_km_s` > 0.
    pub fn of(vista: &Vista, wind_km_s: f64) -> Self {
        let out = vista.nucleus.position_au.normalize();
        let flow = out * (wind_km_s / KM_S_PER_AU_D) - vista.nucleus.velocity_au_d;
        let speed = flow.norm();
        let position_angle = position_angle_rad(&flow, &vista.axes);
        let antisolar = position_angle_rad(&out, &vista.axes);
        Axis {
            wind_km_s,
            // A nucleus that runs with the wind feels none: nothing bends the axis.
            direction: if speed > 0.0 { flow / speed } else { out },
            position_angle_rad: position_angle,
            from_antisolar_rad: position_angle.zip(antisolar).map(|(axis, away)| half_turn(axis - away)),
            aberration_rad: separation_rad(&flow, &out),
        }
    }
}

/// The directions in which an ion tail may lie, for a range of winds.
#[derive(Clone, Debug, PartialEq)]
pub struct Wedge {
    pub axis: Axis,
    pub slowest: Axis,
    pub fastest: Axis,
    /// How far the wedge reaches from the axis on the sky: to the side of falling position angle (at most -3 degrees)
    /// and of rising (at least 3 degrees). None where the axis has no position angle.
    pub reach_rad: Option<[f64; 2]>,
    pub cautions: Vec<Caution>,
}

impl Wedge {
    /// The wedge of a plan's winds.
    pub fn of(vista: &Vista, laws: &Tails) -> Self {
        let axis = Axis::of(vista, laws.wind_axis_km_s);
        let slowest = Axis::of(vista, laws.wind_slowest_km_s);
        let fastest = Axis::of(vista, laws.wind_fastest_km_s);
        let reach_rad = axis.position_angle_rad.map(|middle| {
            let mut reach = [-LEAST_REACH_RAD, LEAST_REACH_RAD];
            for edge in [slowest, fastest].iter().filter_map(|axis| axis.position_angle_rad) {
                let from_axis = half_turn(edge - middle);
                reach = [reach[0].min(from_axis), reach[1].max(from_axis)];
            }
            reach
        });
        Wedge { axis, slowest, fastest, reach_rad, cautions: cautions(vista, &axis) }
    }
}

/// What is doubtful about an axis.
pub fn cautions(vista: &Vista, axis: &Axis) -> Vec<Caution> {
    let mut found = Vec::new();
    if axis.position_angle_rad.is_none() {
        found.push(Caution::AngleUndefined { quantity: "ion axis" });
    }
    let from_plane = vista.observer_from_orbit_plane_rad();
    if from_plane.abs() < NEAR_PLANE_RAD {
        found.push(Caution::WindUnreadable { observer_from_orbit_plane_deg: from_plane.to_degrees() });
    }
    found
}
