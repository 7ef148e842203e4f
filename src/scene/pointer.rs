//! What lies under the pointer?
//!
//! A place of the page as position angle and distance from the nucleus, as right ascension and declination,
//! and as a length at the comet under each assumption about where in depth the feature lies.
//!
//! ```text
//!   observer --- Delta --- nucleus        A feature seen theta from the nucleus on a tail that leaves the
//!       \                  / gamma        nucleus at gamma to the observer's direction is
//!        \ theta          /  L            L = Delta sin(theta) / sin(gamma + theta) long;
//!         \______________/                theta can never reach pi - gamma.
//! ```
//!
//! In the orbit plane, a line of sight s from the observer meets the plane where n . (k s - rho) = 0, n the
//! orbit's normal and rho the way from observer to nucleus ([`inverse::meet_plane`]). Left out: light time within the tail.

use super::quantity::{self, KM_PER_AU};
use super::view::SkyView;
use crate::frame::{self, half_turn, norm, tangent};
use crate::sky::Sky;
use crate::tail::inverse;
use std::f64::consts::PI;

/// How far a position angle may differ from that of a direction for a length along it to be given.
pub const AGREES_WITHIN_RAD: f64 = 5.0 * PI / 180.0;

/// A length along a direction in space.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Along {
    /// The pointer lies on the direction; this far from the nucleus, km.
    Km(f64),
    /// The pointer lies on the direction, farther out than anything along it can be seen.
    Impossible,
    /// The pointer does not lie on the direction, or there is none.
    Elsewhere,
}

/// A place of the drawing in numbers.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Hover {
    /// From the nucleus, [0, 2 pi); None on the nucleus itself.
    pub position_angle_rad: Option<f64>,
    /// From the nucleus, [0, pi/2).
    pub distance_rad: f64,
    /// Astrometric, [0, 2 pi).
    pub right_ascension_rad: f64,
    pub declination_rad: f64,
    /// Length in the plane through the nucleus that faces the observer, km.
    pub across_km: f64,
    pub antisolar: Along,
    pub negative_velocity: Along,
    /// Length in the comet's orbit plane, km; None at a plane crossing, or where the line of sight misses
    /// the plane.
    pub orbit_plane_km: Option<f64>,
}

/// What lies under a point of the page.
pub fn hover(sky: &Sky, view: &SkyView, x_px: f64, y_px: f64) -> Hover {
    let [xi, eta] = view.to_sky(sky, x_px, y_px);
    let sight = tangent::unproject(xi, eta, &sky.axes);
    let radius = norm([xi, eta]);
    let distance_rad = libm::atan(radius);
    let position_angle_rad = frame::position_angle_rad(&(sky.axes.east * xi + sky.axes.north * eta), &sky.axes);
    let along = |angle: Option<f64>, to_observer_rad: f64| match (position_angle_rad, angle) {
        (Some(here), Some(there)) if half_turn(here - there).abs() <= AGREES_WITHIN_RAD => {
            along(sky.observer_distance_au, distance_rad, to_observer_rad)
        }
        _ => Along::Elsewhere,
    };
    Hover {
        position_angle_rad,
        distance_rad,
        right_ascension_rad: frame::right_ascension_rad(&sight),
        declination_rad: frame::declination_rad(&sight),
        across_km: sky.observer_distance_au * radius * KM_PER_AU,
        antisolar: along(sky.antisolar_position_angle_rad, PI - sky.phase_angle_rad),
        negative_velocity: along(sky.negative_velocity_position_angle_rad, sky.negative_velocity_sight_angle_rad),
        orbit_plane_km: in_orbit_plane_km(sky, &sight),
    }
}

/// Length along a direction at `to_observer_rad` to the observer's direction that is seen `distance_rad` long.
fn along(observer_distance_au: f64, distance_rad: f64, to_observer_rad: f64) -> Along {
    if distance_rad >= PI - to_observer_rad {
        return Along::Impossible;
    }
    let length_au = observer_distance_au * libm::sin(distance_rad) / libm::sin(to_observer_rad + distance_rad);
    Along::Km(length_au * KM_PER_AU)
}

/// Distance from the nucleus of the point where a line of sight meets the orbit plane.
fn in_orbit_plane_km(sky: &Sky, sight: &nalgebra::Vector3<f64>) -> Option<f64> {
    let normal = sky.comet.position_au.cross(&sky.comet.velocity_au_d).try_normalize(0.0)?;
    let met = inverse::meet_plane(&normal, &sky.observer.position_au, &sky.axes.sight, sight).ok()?;
    Some((met - sky.comet.position_au).norm() * KM_PER_AU)
}

impl Hover {
    /// The numbers in words, one per line.
    pub fn words(&self) -> String {
        let mut lines = Vec::new();
        let distance = quantity::arc(self.distance_rad);
        lines.push(match self.position_angle_rad {
            Some(angle) => format!("position angle {}, {distance} from the nucleus", quantity::position_angle(angle)),
            None => "on the nucleus".to_string(),
        });
        lines.push(quantity::place(self.right_ascension_rad, self.declination_rad));
        lines.push(format!("{} in the plane of the sky at the comet", quantity::length(self.across_km)));
        for (along, words) in
            [(self.antisolar, "along the antisolar direction"), (self.negative_velocity, "along negative velocity")]
        {
            match along {
                Along::Km(km) => lines.push(format!("{} {words}", quantity::length(km))),
                Along::Impossible => lines.push(format!("{words}: impossible, nothing can be seen this far out")),
                Along::Elsewhere => {}
            }
        }
        if let Some(km) = self.orbit_plane_km {
            lines.push(format!("{} in the orbit plane", quantity::length(km)));
        }
        lines.join("\n")
    }
}
