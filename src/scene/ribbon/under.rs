//! What lies under the pointer, in words?

use super::{Strip, flag, lane, scale};
use crate::season::series::Curve;
use crate::sky::avoidance::NEAR_SUN_DEG;
use crate::time::Instant;

/// The time, the values of the curves (as a series holds them), the bands in force, and the events within `reach_days`,
/// one to an item.
pub fn words(strip: &Strip, time: Instant, values: &[(Curve, f64)], reach_days: f64) -> Vec<String> {
    let season = strip.season;
    let mut said = vec![time.utc_minute()];
    said.extend(values.iter().map(|&(curve, value)| scale::said(curve, value)));
    let within = |begin: Instant, end: Instant| begin <= time && time <= end;
    for window in season.sunward.iter().filter(|window| within(window.begin, window.end)) {
        let nearest = season
            .strengths
            .iter()
            .filter(|one| one.origin == Some(window.origin))
            .min_by(|a, b| away(a.time, time).total_cmp(&away(b.time, time)));
        let grade = lane::grade(nearest.map_or(window.best.grade, |one| one.grade));
        said.push(format!("{}: {grade}", lane::words(window)));
    }
    if season.near_sun.iter().any(|&[begin, end]| within(begin, end)) {
        said.push(format!("within {NEAR_SUN_DEG}° of the Sun"));
    }
    let night =
        strip.nights.unwrap_or_default().iter().min_by(|a, b| away(a.middle, time).total_cmp(&away(b.middle, time)));
    if let Some(night) = night.filter(|night| away(night.middle, time) <= 0.5) {
        said.push(match lane::hours(night) {
            hours if hours < 0.05 => "not up in a dark sky that night".to_owned(),
            hours => format!("dark with the comet up for {hours:.1} h that night"),
        });
    }
    let mut near: Vec<_> = season.events.iter().filter(|event| away(event.time, time) <= reach_days).collect();
    crate::order::by_rank(&mut near, |event| flag::rank(event.kind).into());
    said.extend(near.iter().take(2).map(|event| format!("{} {}", event.kind.words(), event.time.utc_minute())));
    said
}

fn away(one: Instant, other: Instant) -> f64 {
    (one.tdb_days() - other.tdb_days()).abs()
}
