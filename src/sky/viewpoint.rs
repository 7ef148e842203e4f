//! From where, and when, does the observer look?
//!
//! Everything about the observer at one time that does not depend on the comet.

use crate::body::State;
use crate::frame::horizon::Horizon;
use crate::time::Instant;
use nalgebra::Vector3;

/// An observer at a time.
#[derive(Clone, Debug, PartialEq)]
pub struct Viewpoint {
    pub time: Instant,
    /// Heliocentric, equatorial; the Earth's rotation included for a site.
    pub observer: State,
    /// What only an observer on the ground has.
    pub ground: Option<Ground>,
}

/// Horizon and Moon of a site at a time.
#[derive(Clone, Debug, PartialEq)]
pub struct Ground {
    pub horizon: Horizon,
    /// From the site to the Moon, equatorial, au.
    pub moon_au: Vector3<f64>,
}
