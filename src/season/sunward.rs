//! When can dust lie sunward, and how well would it show?

use super::event::{Event, EventKind};
use super::looks::{EDGE_DAYS, Look};
use super::stretch::Stretch;
use crate::tail::perspective::Grade;
use crate::time::Instant;

/// What brings dust to the sunward side.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Origin {
    /// Perspective alone: dust that left without speed lies there.
    Perspective,
    /// Only dust that was thrown out gets there.
    Ejection,
}

/// How sunward dust stands at one date, by [`crate::tail::perspective`] with the plan's tails.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Strength {
    pub time: Instant,
    /// None where the dust reaches no grade.
    pub origin: Option<Origin>,
    pub grade: Grade,
    /// Share of the light in the anti-tail sector, with the chosen ejection, and without ejection speed.
    pub share: f64,
    pub share_at_rest: f64,
}

/// A stretch of time with sunward dust of one origin.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Window {
    pub origin: Origin,
    pub begin: Instant,
    pub end: Instant,
    /// Whether it begins before the season, or ends after it: then that end is the season's.
    pub cut: [bool; 2],
    /// Its best date of those looked at: of the highest grade, and there of the greatest share.
    pub best: Strength,
    /// How far either end may be off, days: as far as the dust takes to change by a tenth.
    pub uncertainty_days: [f64; 2],
}

/// A level is good to so much of itself.
const LEVEL_ERROR: f64 = 0.1;
/// No end is called less certain than this, days.
const LEAST_CERTAIN_DAYS: f64 = 8.0;

/// The windows that looks in order of time show, cut to the stretch. Each end is a date inside, and the dust is of another
/// kind less than [`EDGE_DAYS`] further on.
pub(super) fn windows<'a>(looks: impl Iterator<Item = &'a Look>, stretch: &Stretch) -> Vec<Window> {
    let mut found: Vec<Window> = Vec::new();
    let mut last: Option<&Look> = None;
    for look in looks {
        let time = look.strength.time;
        let changed = last.is_none_or(|last| last.strength.origin != look.strength.origin);
        let doubt = last.map_or(0.0, |last| edge_doubt_days(last, look));
        if changed && last.is_some_and(|last| last.strength.origin.is_some()) {
            let window = found.last_mut().expect("opened at an earlier look");
            window.cut[1] = false;
            window.uncertainty_days[1] = doubt;
        }
        if let Some(origin) = look.strength.origin {
            if changed {
                found.push(Window {
                    origin,
                    begin: time,
                    end: time,
                    // The first look of all has no other before it; every end is open until another kind follows.
                    cut: [last.is_none(), true],
                    best: look.strength,
                    uncertainty_days: [doubt, 0.0],
                });
            }
            let window = found.last_mut().expect("just opened, or at an earlier look");
            window.end = time;
            let worth = |strength: &Strength| (strength.grade, strength.share);
            // A best date outside the stretch would be no use.
            if !stretch.holds(window.best.time) || (stretch.holds(time) && worth(&look.strength) > worth(&window.best))
            {
                window.best = look.strength;
            }
        }
        last = Some(look);
    }
    found.retain(|window| window.begin <= stretch.to() && stretch.from() <= window.end);
    for window in &mut found {
        if window.begin < stretch.from() {
            (window.begin, window.cut[0]) = (stretch.from(), true);
        }
        if window.end > stretch.to() {
            (window.end, window.cut[1]) = (stretch.to(), true);
        }
    }
    found
}

/// How long the dust takes from one look to the next to change by the error of its level.
fn edge_doubt_days(one: &Look, next: &Look) -> f64 {
    let gap = next.days() - one.days();
    let folds = libm::log(one.contrast(next)).max(1e-9);
    (gap * LEVEL_ERROR / folds).clamp(EDGE_DAYS, LEAST_CERTAIN_DAYS)
}

/// Begin and end of each window, where they lie inside the season.
pub(super) fn events(windows: &[Window]) -> Vec<Event> {
    let mut found = Vec::new();
    for window in windows {
        let best = &window.best;
        let grade = match best.grade {
            Grade::Strong => "strong",
            Grade::Possible => "possible",
            Grade::Faint | Grade::None => "faint",
        };
        let minute = best.time.utc_minute();
        let day = minute.split(' ').next().unwrap_or_default();
        let note = format!("at its best {grade}, about {day}, with this share of the light");
        let mut push = |end: usize, kind: EventKind, time: Instant| {
            if !window.cut[end] {
                found.push(Event {
                    kind,
                    time,
                    value: Some(best.share * 100.0),
                    unit: "percent",
                    note: note.clone(),
                    uncertainty_days: window.uncertainty_days[end],
                });
            }
        };
        push(0, EventKind::SunwardDustBegins(window.origin), window.begin);
        push(1, EventKind::SunwardDustEnds(window.origin), window.end);
    }
    found
}
