//! What do the numbers mean, in words?
//!
//! The headline and the sentence under the sky plane, which are also what a screen reader hears for the
//! drawing. They say what the directions allow and no more: whether dust reaches the sunward side depends
//! on grain sizes and ages, and is never decided here from negative velocity or from the orbit-plane angle.

use crate::body::observer::Observer;
use crate::frame::half_turn;
use crate::plan::Plan;
use crate::sky::dark::{COMET_ABOVE_DEG, SUN_BELOW_DEG, Window};
use crate::sky::{Side, Sky};
use std::f64::consts::{FRAC_PI_2, PI};

/// A direction lies on the sunward side within this of the Sun's direction on the sky.
const SUNWARD_RAD: f64 = FRAC_PI_2;

/// A sky in words.
#[derive(Clone, Debug, PartialEq)]
pub struct Saying {
    /// One short line made from the numbers.
    pub headline: String,
    /// Plain sentences; also the text twin of the sky plane.
    pub sentence: String,
}

/// Says what `sky` means for the comet and observer of `plan`.
pub fn say(plan: &Plan, sky: &Sky) -> Saying {
    Saying { headline: headline(sky), sentence: sentence(plan, sky) }
}

fn headline(sky: &Sky) -> String {
    let gas = match sky.antisolar_position_angle_rad {
        Some(angle) => format!("Gas and fresh dust toward {}.", whole(angle)),
        None => "Tails point along the line of sight.".to_owned(),
    };
    let dust = match (sky.negative_velocity_position_angle_rad, sunward(sky)) {
        (Some(angle), Some(true)) => format!(" Old dust tends toward {}, on the sunward side.", whole(angle)),
        (Some(angle), _) => format!(" Old dust tends toward {}.", whole(angle)),
        (None, _) => String::new(),
    };
    gas + &dust
}

fn sentence(plan: &Plan, sky: &Sky) -> String {
    [directions(sky), plane(sky), standing(plan, sky)].join(" ")
}

/// Where the two directions lie, and how far apart.
fn directions(sky: &Sky) -> String {
    match (sky.antisolar_position_angle_rad, sky.negative_velocity_position_angle_rad) {
        (Some(antisolar), Some(back)) => {
            let apart = half_turn(back - antisolar).abs();
            let side = if apart > PI - SUNWARD_RAD {
                "so on the sunward side of the sky; how much dust reaches it depends on grain sizes and ages"
            } else {
                "so on the tail side of the sky"
            };
            format!(
                "The antisolar direction lies at position angle {} (J2000) and negative velocity at {}, {} apart, {side}.",
                tenth(antisolar),
                tenth(back),
                whole(apart)
            )
        }
        (Some(antisolar), None) => format!(
            "The antisolar direction lies at position angle {} (J2000); negative velocity points along the line of sight.",
            tenth(antisolar)
        ),
        (None, Some(back)) => format!(
            "Comet, Sun and observer are in line: no antisolar direction exists on the sky. Negative velocity lies at \
             position angle {} (J2000).",
            tenth(back)
        ),
        (None, None) => {
            "Comet, Sun and observer are in line and negative velocity points along the line of sight: no direction \
             exists on the sky."
                .to_owned()
        }
    }
}

/// How the observer stands to the orbit plane and to the tails.
fn plane(sky: &Sky) -> String {
    let latitude = sky.observer_from_orbit_plane_rad;
    let size = latitude.to_degrees().abs();
    let place = match size {
        s if s < 0.05 => "in the comet's orbit plane: dust that spreads in it is seen edge-on".to_owned(),
        s if s < 5.0 => format!(
            "{} {} the comet's orbit plane, which is seen nearly edge-on",
            tenth(latitude.abs()),
            over(latitude)
        ),
        _ => format!("{} {} the comet's orbit plane", whole(latitude.abs()), over(latitude)),
    };
    format!("The observer stands {place}, at phase angle {}.", whole(sky.phase_angle_rad))
}

fn over(latitude_rad: f64) -> &'static str {
    if latitude_rad > 0.0 { "above" } else { "below" }
}

/// Where the comet stands to the Sun and the horizon.
fn standing(plan: &Plan, sky: &Sky) -> String {
    let side = match sky.elongation_side {
        Some(Side::Evening) => " in the evening sky",
        Some(Side::Morning) => " in the morning sky",
        None => "",
    };
    let from_sun = format!("The comet stands {} from the Sun{side}", whole(sky.elongation_rad));
    match (&plan.observer, &sky.site) {
        (Observer::Site(site), Some(seen)) => {
            let up = if seen.altitude_rad >= 0.0 { "up" } else { "below the horizon" };
            let at = if site.name.is_empty() { "this site".to_owned() } else { site.name.clone() };
            format!("{from_sun}, {} {up} at {at}.", whole(seen.altitude_rad.abs()))
        }
        _ => format!("{from_sun}."),
    }
}

/// One line on when the comet is up in a dark sky around the chosen time.
pub fn when_up(windows: &[Window]) -> String {
    let rule = format!("Sun below {} deg, comet above {} deg", minus(SUN_BELOW_DEG), COMET_ABOVE_DEG);
    if windows.is_empty() {
        return format!("Not up in a dark sky within half a day of this time ({rule}).");
    }
    let spans: Vec<String> = windows
        .iter()
        .map(|window| {
            format!(
                "{} to {} UTC, highest {:.0}\u{b0}",
                clock(&window.begin.utc_minute()),
                clock(&window.end.utc_minute()),
                window.highest_deg
            )
        })
        .collect();
    format!("Up in a dark sky {} ({rule}).", spans.join("; "))
}

/// Hours and minutes of "2031-03-20 05:30 UTC"-like text.
fn clock(minute: &str) -> &str {
    minute.get(11..16).unwrap_or(minute)
}

/// Whether negative velocity projects to the sunward side; None where a direction is missing.
fn sunward(sky: &Sky) -> Option<bool> {
    let apart = half_turn(sky.negative_velocity_position_angle_rad? - sky.antisolar_position_angle_rad?).abs();
    Some(apart > PI - SUNWARD_RAD)
}

fn minus(value: f64) -> String {
    format!("{value}").replace('-', "\u{2212}")
}

/// An angle in whole degrees; a direction never reads 360.
fn whole(angle_rad: f64) -> String {
    format!("{}\u{b0}", (angle_rad.to_degrees().round() as i64) % 360)
}

/// An angle in tenths of a degree; a direction never reads 360.
fn tenth(angle_rad: f64) -> String {
    let tenths = (angle_rad.to_degrees() * 10.0).round() as i64 % 3600;
    format!("{}.{}\u{b0}", tenths / 10, tenths % 10)
}
