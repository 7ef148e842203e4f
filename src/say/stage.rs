//! What do the orbit view, the map of the dust, and a place on the sky say in words?
//!
//! The text twins of two drawings, and the grains that land under a pointer.

use super::figure::{day, percent, tenth, whole};
use crate::plan::Plan;
use crate::sky::Sky;
use crate::tail::grain::Vista;
use crate::tail::inverse::{Landing, Reason};
use crate::tail::law::Tails;
use crate::tail::perspective::{Part, Perspective};
use crate::tail::size::Material;

/// Grains named for one place; of more, the number is said.
const MOST_LANDINGS: usize = 3;

/// The orbit view: who stands where, from the pole and along the plane.
pub fn orbit(sky: &Sky) -> String {
    let days = sky.days_from_perihelion;
    let when = if days < 0.0 { "before" } else { "after" };
    let latitude = sky.observer_from_orbit_plane_rad;
    let side = if latitude < 0.0 { "below" } else { "above" };
    let standing = match latitude.to_degrees().abs() {
        degrees if degrees < 0.05 => "in the plane, so that the dust sheet is seen edge-on".to_owned(),
        degrees if degrees < 5.0 => {
            format!("{} {side} it, so that the dust sheet is seen nearly edge-on", tenth(latitude.abs()))
        }
        _ => format!("{} {side} it", whole(latitude.abs())),
    };
    format!(
        "From the pole of the orbit: the comet stands {:.2} au from the Sun and {:.2} au from the observer, {:.0} days {when} \
         perihelion, with {} between the two as seen from it. Along the orbit plane: the observer, seen from the comet, stands {standing}.",
        sky.sun_distance_au,
        sky.observer_distance_au,
        days.abs(),
        whole(sky.phase_angle_rad),
    )
}

/// The map of the dust by beta and age: which part of it lies sunward.
pub fn map(plan: &Plan, sky: &Sky, perspective: &Perspective) -> String {
    let laws = &plan.tails;
    let part = |name: &str, part: Option<Part>| match part {
        Some(part) => format!(
            "{name}: {} of the light, most of it beta {} to {} ({}), released {} to {}",
            percent(part.share),
            figures(part.beta[0]),
            figures(part.beta[1]),
            sizes(laws, part.beta),
            day(sky.time.plus_days(-sky.light_time_days - part.age_days[1]), sky.time),
            day(sky.time.plus_days(-sky.light_time_days - part.age_days[0]), sky.time),
        ),
        None => format!("{name}: none"),
    };
    let dust = &perspective.at_rest;
    let sector = format!("Within {}\u{b0} of the Sun's direction", figures(laws.anti_tail_half_width_deg));
    format!(
        "Dust by beta and age, {} to {} and {} to {} days, without ejection speed. {}. {}.",
        figures(laws.beta_least),
        figures(laws.beta_greatest),
        figures(laws.age_least_days),
        figures(laws.age_greatest_days),
        part("On the sunward side", dust.sunward),
        part(&sector, dust.anti_tail),
    )
}

/// Radii of a range of betas, the larger first.
fn sizes(laws: &Tails, [low, high]: [f64; 2]) -> String {
    let material = Material::of(laws);
    let (large, small) = (material.short(low), material.short(high));
    if large == small { large } else { format!("{large} to {small}") }
}

/// The grains that land at a place, one to a line, or why none can be named.
pub fn landings(found: &Result<Vec<Landing>, Reason>, vista: &Vista, laws: &Tails) -> String {
    let landings = match found {
        Ok(landings) => landings,
        Err(reason) => return reason.sentence().to_owned(),
    };
    let material = Material::of(laws);
    let mut lines: Vec<String> = landings
        .iter()
        .take(MOST_LANDINGS)
        .map(|landing| {
            let outside = match (landing.beta_chosen, landing.age_chosen) {
                (true, true) => "",
                (false, true) => ", outside the chosen sizes",
                (true, false) => ", outside the chosen ages",
                (false, false) => ", outside the chosen sizes and ages",
            };
            format!(
                "dust here: beta {}, {}, released {} ({} days ago){outside}",
                figures(landing.beta),
                material.words(landing.beta),
                day(vista.released_at(landing.age_days), vista.seen),
                figures(landing.age_days),
            )
        })
        .collect();
    if landings.len() > MOST_LANDINGS {
        lines.push(format!("and {} other grains", landings.len() - MOST_LANDINGS));
    }
    lines.join("\n")
}

/// At most two significant figures below a hundred, none after the point above.
fn figures(value: f64) -> String {
    if value == 0.0 || !value.is_finite() {
        return "0".to_owned();
    }
    let decimals = (1 - libm::floor(libm::log10(value.abs())) as i32).clamp(0, 9) as usize;
    let text = format!("{value:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}
