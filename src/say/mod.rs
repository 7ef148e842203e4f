//! What do the numbers mean, in words?
//!
//! The headline and the sentence under the sky plane, which are also what a screen reader hears for the
//! drawing. Whether dust reaches the sunward side depends on grain sizes and ages: that is taken from the dust itself
//! ([`crate::tail::perspective`]), never from negative velocity or from the orbit-plane angle.

mod dust;
mod figure;
pub mod night;
pub mod season;
pub mod stage;
pub mod table;

use crate::body::observer::Observer;
use crate::plan::Plan;
use crate::sky::dark::{Limits, Window};
use crate::sky::{Side, Sky};
use crate::tail::ion::Wedge;
use crate::tail::perspective::Perspective;
use figure::{range, tenth, whole};

/// A sky in words.
#[derive(Clone, Debug, PartialEq)]
pub struct Saying {
    /// One short line made from the numbers.
    pub headline: String,
    /// Plain sentences, three at most; also the text twin of the sky plane.
    pub sentence: String,
}

/// Says what `sky` means for the comet and observer of `plan`, with its dust and its ion tail.
pub fn say(plan: &Plan, sky: &Sky, perspective: &Perspective, ion: &Wedge) -> Saying {
    Saying {
        headline: format!("{} {}", gas(ion), dust::headline(perspective)),
        sentence: [directions(sky, perspective, ion), plane(plan, sky, perspective), standing(plan, sky)].join(" "),
    }
}

fn gas(ion: &Wedge) -> String {
    match ion.axis.position_angle_rad {
        Some(angle) => format!("Gas toward {}.", whole(angle)),
        None => "Gas along the line of sight.".to_owned(),
    }
}

/// Where the directions lie: antisolar, gas, dust, negative velocity.
fn directions(sky: &Sky, perspective: &Perspective, ion: &Wedge) -> String {
    let gas = match (ion.axis.position_angle_rad, ion.reach_rad) {
        (Some(axis), Some([below, above])) => format!("gas {}", range([axis + below, axis + above])),
        _ => "gas along the line of sight".to_owned(),
    };
    let back = match sky.negative_velocity_position_angle_rad {
        Some(angle) => format!("and negative velocity at {}", tenth(angle)),
        None => "and negative velocity along the line of sight".to_owned(),
    };
    let Some(antisolar) = sky.antisolar_position_angle_rad else {
        return format!(
            "Comet, Sun and observer are in line, so no antisolar direction exists on the sky; {gas}, {back} (J2000)."
        );
    };
    let dust = match perspective.at_rest.fan_rad {
        Some(fan) => format!(", dust on the tail side {}", range(fan)),
        None => String::new(),
    };
    format!("The antisolar direction lies at position angle {} (J2000), {gas}{dust}, {back}.", tenth(antisolar))
}

/// How the observer stands to the orbit plane, and what the dust makes of it.
fn plane(plan: &Plan, sky: &Sky, perspective: &Perspective) -> String {
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
    format!("The observer stands {place}; {}.", dust::clause(plan, sky, perspective))
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
pub fn when_up(windows: &[Window], limits: &Limits) -> String {
    let rule = rule(limits);
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

/// What counts as dark time.
fn rule(limits: &Limits) -> String {
    format!("Sun below {} deg, comet above {} deg", minus(limits.sun_below_deg), minus(limits.comet_above_deg))
}

/// Hours and minutes of "2031-03-20 05:30 UTC"-like text.
fn clock(minute: &str) -> &str {
    minute.get(11..16).unwrap_or(minute)
}

fn minus(value: f64) -> String {
    format!("{value}").replace('-', "\u{2212}")
}
