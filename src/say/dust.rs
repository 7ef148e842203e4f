//! What is said of the dust: its fan, and whether a sunward tail can be perspective?
//!
//! All of it comes from [`crate::tail::perspective`], none from the orbit-plane angle or negative velocity.

use super::figure::{beside, day, percent, range, whole};
use crate::plan::Plan;
use crate::sky::Sky;
use crate::tail::perspective::{Dust, Grade, Part, Perspective, Verdict};
use crate::tail::size::{Material, SUBMICRON_UM};
use crate::time::Instant;

/// Sunward dust below this share of the light is not worth a place in the headline.
const HEADLINE_SHARE: f64 = 0.01;
/// Below this part of the chosen ages dust counts as released until now.
const FRESH_PART: f64 = 0.02;

/// The dust in the headline: its fan and what lies on the sunward side.
pub fn headline(perspective: &Perspective) -> String {
    match perspective.verdict {
        Verdict::NoDust => return "No dust was released in the chosen ages.".to_owned(),
        Verdict::NoSunwardSide => return "Comet, Sun and observer are in line: dust has no sunward side.".to_owned(),
        Verdict::None | Verdict::NeedsEjection(_) | Verdict::Perspective(_) => {}
    }
    let fan = perspective.at_rest.fan_rad.or(perspective.ejected.fan_rad);
    let sunward = sunward(perspective);
    match (fan, sunward) {
        (Some(fan), None) => format!("Dust {}.", range(fan)),
        (Some(fan), Some(words)) => format!("Dust {}. {} also on the sunward side, {}", range(fan), words[0], words[1]),
        (None, Some(words)) => format!("{} on the sunward side only, {}", words[0], words[1]),
        (None, None) => "Dust only close to the nucleus.".to_owned(),
    }
}

/// Which dust lies on the sunward side, and where; None where there is too little to say.
fn sunward(perspective: &Perspective) -> Option<[String; 2]> {
    let ejected = &perspective.ejected;
    let (who, part) = match perspective.verdict {
        Verdict::Perspective(Grade::Faint) => ("A little old dust", ejected.anti_tail?),
        Verdict::Perspective(_) => ("Old dust", ejected.anti_tail?),
        Verdict::NeedsEjection(_) => ("Thrown-out dust", ejected.anti_tail?),
        _ => ("Some dust", ejected.sunward.filter(|part| part.share >= HEADLINE_SHARE)?),
    };
    Some([who.to_owned(), format!("toward {}.", whole(part.position_angle_rad))])
}

/// Whether a sunward tail can be perspective, which dust would make it, and how bright it would be: the end of a
/// sentence that began with the observer's place.
pub fn clause(plan: &Plan, sky: &Sky, perspective: &Perspective) -> String {
    let ejected = &perspective.ejected;
    match perspective.verdict {
        Verdict::NoDust => {
            "no dust was released in the chosen ages, so nothing can be said of a sunward tail".to_owned()
        }
        Verdict::NoSunwardSide => "there is no sunward side, so no tail can be said to point there".to_owned(),
        Verdict::None => none(perspective),
        Verdict::NeedsEjection(grade) => {
            format!("only dust that was thrown out reaches the sunward sector, {}", light(grade, ejected))
        }
        Verdict::Perspective(grade) => {
            let dust = perspective.at_rest.anti_tail.or(ejected.anti_tail);
            let grains = dust.map_or_else(String::new, |part| grains(plan, sky, &part));
            let can = if grade == Grade::Strong {
                "a sunward tail tonight can be"
            } else {
                "a faint sunward tail tonight can be"
            };
            format!("{can} perspective: {grains} project toward the Sun, {}", light(grade, ejected))
        }
    }
}

/// No anti-tail: whether dust goes past the side at all.
fn none(perspective: &Perspective) -> String {
    match perspective.ejected.sunward.filter(|part| part.share >= HEADLINE_SHARE) {
        Some(part) => format!(
            "dust of the chosen sizes and ages spreads past the side, toward {}, but not toward the Sun: a tail that \
             points there would need another cause",
            whole(part.position_angle_rad)
        ),
        None => "hardly any dust of the chosen sizes and ages projects toward the Sun: a tail that points there would \
                 need another cause"
            .to_owned(),
    }
}

/// How bright the dust in the anti-tail sector is.
fn light(grade: Grade, dust: &Dust) -> String {
    let Some(part) = dust.anti_tail else { return "too faint to see".to_owned() };
    let deep = if grade == Grade::Faint { ", for deep images only" } else { "" };
    format!(
        "{} the tail at the same distance from the nucleus, with {} of the dust's light{deep}",
        beside(part.beside_tail),
        percent(part.share)
    )
}

/// Which grains most of the light comes from: sizes and release dates.
fn grains(plan: &Plan, sky: &Sky, part: &Part) -> String {
    let tails = &plan.tails;
    let material = Material::of(tails);
    let size = match material.radius_um(part.beta[1]) {
        Some(radius_um) if radius_um >= SUBMICRON_UM => {
            format!("grains larger than about {}", material.short(part.beta[1]))
        }
        _ => "grains of nearly all sizes".to_owned(),
    };
    let seen = sky.time.plus_days(-sky.light_time_days);
    let at = |age_days: f64| -> Instant { seen.plus_days(-age_days) };
    let fresh = FRESH_PART * (tails.age_greatest_days - tails.age_least_days);
    let date = if part.age_days[0] > tails.age_least_days + fresh {
        format!("released before {}", day(at(part.age_days[0]), sky.time))
    } else {
        format!("released since {}", day(at(part.age_days[1]), sky.time))
    };
    format!("{size}, {date},")
}
