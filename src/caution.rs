//! What was computed but is doubtful, and why?
//!
//! A caution travels with a value; it never replaces it. An angle that does not exist is `None` in the
//! value and named here. The rules for pointing near the Sun are common practice, not a standard: the
//! sentences defer to the site's own rule, the makers' limits and a qualified person.

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
    /// The date is more than 100 days from the elements' epoch.
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
    /// The comet is nearer than 0.1 au, so the Earth's place, the site and the elements' age all show more.
    NearEarth { observer_distance_au: f64 },
    /// Comet near the Sun while the Sun is up, or rises or sets within half an hour.
    SunDanger { elongation_deg: f64 },
    /// Comet near the Sun, the Sun down. `sunrise`: None where it does not rise within a day.
    NearSun { elongation_deg: f64, sunrise: Option<Instant> },
    /// Comet near the Sun, and the observer has no horizon to tell whether the Sun is up.
    NearSunNoHorizon { elongation_deg: f64 },
    /// The Sun is above the horizon while the comet is up: no dark sky.
    SunUp,
    /// The comet is below the site's horizon.
    CometDown { altitude_deg: f64 },
    /// The observer is so near the orbit plane that the ion axis does not tell the speed of the wind.
    WindUnreadable { observer_from_orbit_plane_deg: f64 },
    /// Dust was to leave while the nucleus was inside the Sun.
    GrainStartsInSun,
    /// The way of a grain leads through the Sun; its place is that of a grain that met nothing.
    GrainInSun { least_distance_au: f64 },
    /// A grain has gone more than once around the Sun since it left.
    GrainRevolved { revolutions: f64 },
}

impl Caution {
    pub fn weight(&self) -> Weight {
        match self {
            Caution::SunDanger { .. } => Weight::Danger,
            Caution::NearSun { .. } | Caution::NearSunNoHorizon { .. } => Weight::Danger,
            Caution::OldElements { .. }
            | Caution::Parabola
            | Caution::AngleUndefined { .. }
            | Caution::AngleLoose { .. }
            | Caution::NearEarth { .. }
            | Caution::WindUnreadable { .. }
            | Caution::GrainStartsInSun
            | Caution::GrainInSun { .. }
            | Caution::GrainRevolved { .. } => Weight::Doubt,
            Caution::NoEpoch | Caution::NongravitationalUnused | Caution::SunUp | Caution::CometDown { .. } => {
                Weight::Notice
            }
        }
    }

    /// One or two sentences for people.
    pub fn sentence(&self) -> String {
        match self {
            Caution::OldElements { days } => format!(
                "The elements are {:.0} days from their epoch. Two-body motion typically misses the place by 3.5 \
                 arcsec and a direction by 0.002 deg after 100 days, by more and more later, and by far more near \
                 Jupiter: use newer elements.",
                days.abs()
            ),
            Caution::NoEpoch => "The elements name no epoch, so nobody can tell how old they are.".to_owned(),
            Caution::Parabola => {
                "The orbit is an exact parabola, which usually means a preliminary orbit: the place may be off by \
                 much more than the digits suggest."
                    .to_owned()
            }
            Caution::NongravitationalUnused => {
                "The non-gravitational parameters are kept but not used: motion is the two-body conic.".to_owned()
            }
            Caution::AngleUndefined { quantity } => {
                format!("No position angle exists for the {quantity}: it lies along the line of sight.")
            }
            Caution::AngleLoose { quantity, uncertainty_deg } => format!(
                "The {quantity} lies almost along the line of sight; its position angle is uncertain by {}.",
                degrees(*uncertainty_deg)
            ),
            Caution::NearEarth { observer_distance_au } => format!(
                "The comet is only {observer_distance_au:.4} au away: small errors of the elements and of the site \
                 show strongly."
            ),
            Caution::SunDanger { elongation_deg } => format!(
                "Danger: the comet is {elongation_deg:.1} deg from the Sun, and the Sun is up, or rises or sets \
                 within half an hour. Never look through, or point, unfiltered optics there; a slewing instrument \
                 can sweep across the Sun. The observatory's solar-avoidance rule and the makers' limits hold; a \
                 qualified person decides."
            ),
            Caution::NearSun { elongation_deg, sunrise: Some(sunrise) } => format!(
                "The comet is {elongation_deg:.1} deg from the Sun, which stays down until {}: have optics capped or \
                 turned away by {}. The observatory's solar-avoidance rule and the makers' limits hold; a qualified \
                 person decides.",
                sunrise.utc_minute(),
                sunrise.plus_days(-0.5 / 24.0).utc_minute()
            ),
            Caution::NearSun { elongation_deg, sunrise: None } => format!(
                "The comet is {elongation_deg:.1} deg from the Sun, which does not rise here within a day. The \
                 observatory's solar-avoidance rule and the makers' limits hold; a qualified person decides."
            ),
            Caution::NearSunNoHorizon { elongation_deg } => format!(
                "The comet is {elongation_deg:.1} deg from the Sun. Give a site to see when the Sun is up there. Never \
                 look through, or point, unfiltered optics near the Sun; the observatory's solar-avoidance rule and \
                 the makers' limits hold; a qualified person decides."
            ),
            Caution::SunUp => "The Sun is above the horizon while the comet is up: no dark sky.".to_owned(),
            Caution::CometDown { altitude_deg } => {
                format!("The comet is {:.0} deg below the horizon of this site.", -altitude_deg)
            }
            Caution::WindUnreadable { observer_from_orbit_plane_deg } => format!(
                "You are only {:.1} deg from the comet's orbit plane. Wind bends the ion tail within that plane, so here the \
                 angle between ion tail and antisolar direction says nothing about the speed of the wind.",
                observer_from_orbit_plane_deg.abs()
            ),
            Caution::GrainStartsInSun => {
                "The nucleus was inside the Sun when this grain was to leave: the grain does not exist.".to_owned()
            }
            Caution::GrainInSun { least_distance_au } => format!(
                "The way of this grain leads through the Sun, to {least_distance_au:.5} au from its centre: the grain \
                 no longer exists, and the place given is that of one that met nothing."
            ),
            Caution::GrainRevolved { revolutions } => format!(
                "This grain has gone {revolutions:.1} times around the Sun since it left: planets and the drag of light \
                 are left out and may have moved it far."
            ),
        }
    }
}

/// An uncertainty in honest digits: two figures, and a plain statement where the angle means nothing.
fn degrees(uncertainty_deg: f64) -> String {
    match uncertainty_deg {
        u if u >= 90.0 => "so much that it means nothing".to_owned(),
        u if u >= 1.0 => format!("about {u:.0} deg"),
        u if u >= 0.1 => format!("about {u:.1} deg"),
        u => format!("about {u:.2} deg"),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pointing_near_the_sun_weighs_more_than_any_doubt() {
        let danger = Caution::SunDanger { elongation_deg: 12.0 };
        assert!(danger.weight() > Caution::Parabola.weight());
        assert!(danger.sentence().contains("qualified person"));
    }
}
