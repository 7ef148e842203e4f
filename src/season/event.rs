//! What happened at one moment of a season?
//!
//! Times are of the Earth's centre, to the second inside; for people they are rounded to the minute and carry the
//! uncertainty that [`Event::uncertainty_days`] holds.

use super::sunward::Origin;
use crate::caution::Caution;
use crate::time::Instant;

/// What kind of moment it is.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum EventKind {
    /// The Earth passes through the comet's orbit plane: antisolar direction and negative velocity have one position
    /// angle (`opposite` false: old dust lies antisolar) or two that differ by 180 degrees (true: it lies sunward).
    OrbitPlaneCrossing {
        opposite: bool,
    },
    /// The comet at its least distance from the Sun, by its own clock: the light comes later.
    Perihelion,
    /// Least distance from the Earth.
    LeastDistance,
    GreatestElongation,
    LeastElongation,
    GreatestPhaseAngle,
    LeastPhaseAngle,
    /// Ecliptic longitude (J2000) 180 degrees from the Sun's.
    Opposition,
    /// Ecliptic longitude (J2000) that of the Sun.
    Conjunction,
    /// The elongation falls below the limit of [`crate::sky::avoidance`].
    NearSunBegins,
    NearSunEnds,
    SunwardDustBegins(Origin),
    SunwardDustEnds(Origin),
    /// Fastest motion among the stars.
    FastestMotion,
    /// Least separation from the Moon.
    MoonNearest,
}

/// One event of a season.
#[derive(Clone, Debug, PartialEq)]
pub struct Event {
    pub kind: EventKind,
    pub time: Instant,
    /// The quantity that makes the event, in `unit`; None where none does.
    pub value: Option<f64>,
    pub unit: &'static str,
    /// What else to know, one or two short sentences without the final point, or empty.
    pub note: String,
    /// The event may lie this much earlier or later, days, > 0.
    pub uncertainty_days: f64,
}

/// An event with what is doubtful or dangerous about it.
#[derive(Clone, Debug, PartialEq)]
pub struct Told {
    pub event: Event,
    pub cautions: Vec<Caution>,
}

impl EventKind {
    /// The event in words, the same in every table.
    pub fn words(self) -> &'static str {
        match self {
            EventKind::OrbitPlaneCrossing { .. } => "orbit-plane crossing",
            EventKind::Perihelion => "perihelion",
            EventKind::LeastDistance => "least distance",
            EventKind::GreatestElongation => "greatest elongation",
            EventKind::LeastElongation => "least elongation",
            EventKind::GreatestPhaseAngle => "greatest phase angle",
            EventKind::LeastPhaseAngle => "least phase angle",
            EventKind::Opposition => "opposition",
            EventKind::Conjunction => "conjunction with the Sun",
            EventKind::NearSunBegins => "near the Sun begins",
            EventKind::NearSunEnds => "near the Sun ends",
            EventKind::SunwardDustBegins(Origin::Perspective) => "sunward dust by perspective begins",
            EventKind::SunwardDustEnds(Origin::Perspective) => "sunward dust by perspective ends",
            EventKind::SunwardDustBegins(Origin::Ejection) => "sunward dust by ejection begins",
            EventKind::SunwardDustEnds(Origin::Ejection) => "sunward dust by ejection ends",
            EventKind::FastestMotion => "fastest motion",
            EventKind::MoonNearest => "Moon nearest",
        }
    }
}
