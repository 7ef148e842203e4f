//! What do the parts of the season ribbon look like?

use super::super::{Direction, Lane, Role};
use super::{BARE, Color, Look, Theme, dashes, fill, line, pattern, written};
use crate::season::series::Curve;

/// The look of a role of the ribbon; bare for any other.
pub(super) fn look(theme: Theme, role: Role) -> Look {
    let p = theme.palette();
    let letters = |color| written(color, p.ground);
    match role {
        Role::SeasonCurve(curve) => pattern(curve_color(theme, curve), width(curve), curve_dashes(curve)),
        Role::CurveLeader(curve) => line(curve_color(theme, curve), 0.8),
        Role::CurveName(curve) | Role::CurveNumber(curve) => letters(curve_color(theme, curve)),
        Role::TrackEdge | Role::LaneRule => line(p.rule, 1.0),
        Role::TrackZero => pattern(p.dial, 1.0, &[1.5, 4.0]),
        Role::LaneName(_) => letters(p.quiet),
        Role::Band(lane) => fill(lane_color(theme, lane), if lane == Lane::DarkHours { 0.75 } else { 0.3 }),
        Role::BandRim(lane) => line(lane_color(theme, lane), 1.2),
        Role::BandHatch(lane) => line(lane_color(theme, lane), 1.0),
        Role::EventMark => fill(p.text, 1.0),
        Role::EventStroke => line(p.quiet, 1.0),
        Role::EventGuide => pattern(p.dial, 0.8, &[1.5, 3.5]),
        Role::EventName => letters(p.text),
        Role::Handle => line(p.text, 1.6),
        Role::HandleGrip => Look { fill: Some(p.text), ..line(p.ground, 1.5) },
        Role::HandleRidge => line(p.ground, 1.0),
        _ => BARE,
    }
}

fn width(curve: Curve) -> f64 {
    match curve {
        // A row of dots needs as much as the first among the lines.
        Curve::OrbitPlane | Curve::PhaseAngle => 2.2,
        _ => 1.5,
    }
}

/// Line pattern of a curve; the two directions keep those of their hands.
const fn curve_dashes(curve: Curve) -> &'static [f64] {
    match curve {
        Curve::OrbitPlane => &[],
        Curve::Antisolar => dashes(Direction::Antisolar),
        Curve::NegativeVelocity => dashes(Direction::NegativeVelocity),
        Curve::PhaseAngle => &[0.1, 4.5],
        Curve::Elongation => &[6.0, 4.5],
        Curve::SunDistance => &[10.0, 4.0, 0.1, 4.0],
        Curve::ObserverDistance => &[3.0, 4.0],
        Curve::Magnitude => &[8.0, 4.0, 0.1, 3.5, 0.1, 4.0],
    }
}

fn curve_color(theme: Theme, curve: Curve) -> Color {
    let p = theme.palette();
    match curve {
        Curve::OrbitPlane => p.text,
        Curve::Antisolar => p.antisolar,
        Curve::NegativeVelocity => p.negative_velocity,
        Curve::PhaseAngle => p.phase_angle,
        Curve::Elongation => p.elongation,
        Curve::SunDistance => p.sun_distance,
        Curve::ObserverDistance => p.observer_distance,
        Curve::Magnitude => p.magnitude,
    }
}

fn lane_color(theme: Theme, lane: Lane) -> Color {
    let p = theme.palette();
    match lane {
        Lane::SunwardDust => p.toward_sun,
        Lane::DarkHours => p.dark_hours,
        Lane::NearSun => p.near_sun,
    }
}
