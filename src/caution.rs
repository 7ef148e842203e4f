//! What was computed but is doubtful, and why?
//!
//! A caution travels with a value; it never replaces it. An angle that does not exist is `None` in the
//! value and named here.

use crate::time::Instant;

/// How loudly a caution is shown.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Weight {
    /// A fact to keep in mind.
    Notice,
    /// Doubt about a number that is shown.
    Doubt,
    /// Danger to eyes or instruments.
    Danger,
}

/// Something doubtful or dangerous about a computed sky.
#[derive(Clone, Debug, PartialEq)]
pub enum Caution {
    /// The date is far from the elements' epoch.
    OldElements { days: f64 },
    /// The elements name no epoch, so their age is unknown.
    NoEpoch,
    /// An exact parabola: usually a preliminary orbit.
    Parabola,
    /// Non-gravitational parameters were given; two-body motion does not use them.
    NongravitationalUnused,
    /// A direction has no position angle, since it lies along the line of sight (or has no length).
    AngleUndefined { quantity: &'static str },
    /// A direction lies so near the line of sight that its position angle is loose.
    AngleLoose { quantity: &'static str, uncertainty_deg: f64 },
    /// The comet is nearer than 0.1 au, so old elements and the observer's place show more than elsewhere.
    NearEarth { observer_distance_au: f64 },
    /// Comet within 30 degrees of the Sun while the Sun is up, or rises or sets within half an hour.
    SunDanger { elongation_deg: f64 },
    /// Comet within 30 degrees of the Sun, the Sun safely down until `until` (None: not known for the geocentre).
    NearSun { elongation_deg: f64, until: Option<Instant> },
    /// The Sun is above the horizon while the comet is up: no dark sky.
    SunUp,
    /// The comet is below the site's horizon.
    CometDown,
}
