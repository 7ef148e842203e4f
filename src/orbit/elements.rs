//! What do published elements of a comet say?
//!
//! Heliocentric osculating elements as they are printed: ecliptic and equinox J2000 with obliquity
//! 84381.448 arcsec, degrees, au. This is text made typed, hence degrees; [`super::conic::Orbit`] is
//! the same orbit ready to compute with. Field names are the keys of the plan file.

use crate::error::{Error, Kind, Place};
use crate::time::Stamp;
use serde::{Deserialize, Serialize};

/// Published heliocentric elements, ecliptic and equinox J2000.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, expecting = "an object with the elements of a comet")]
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
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub epoch: Option<Stamp>,
    /// Non-gravitational parameters, kept and printed back; not used by two-body motion.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub nongravitational: Option<Nongravitational>,
}

/// Non-gravitational acceleration parameters of the standard model (Marsden, Sekanina & Yeomans 1973, AJ 78, 211).
#[derive(Clone, Copy, Debug, Default, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, default, expecting = "an object with non-gravitational parameters")]
pub struct Nongravitational {
    pub a1_au_d2: f64,
    pub a2_au_d2: f64,
    pub a3_au_d2: f64,
    pub delay_days: f64,
}

/// One branch of the total-magnitude law m = H + 5 log10 Delta + 2.5 n log10 r; see [`crate::sky`]'s `magnitude`.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, expecting = "an object with one branch of the brightness law")]
pub struct Brightness {
    pub absolute_magnitude: f64,
    /// The index n. Either this or [`Brightness::slope_2_5n`] is given, in the form in which it was published.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub photometric_index_n: Option<f64>,
    /// The slope 2.5 n of log r.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub slope_2_5n: Option<f64>,
    /// Light of the dust over light of the gas at phase angle 90 degrees; given, the law includes how dust scatters.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub dust_over_gas_at_90_deg: Option<f64>,
    /// The branch holds from this observing time on.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub from: Option<Stamp>,
    /// The branch holds up to this observing time.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub to: Option<Stamp>,
}

impl Brightness {
    /// A branch with an index n, for all times, without a phase function.
    pub fn with_index(absolute_magnitude: f64, photometric_index_n: f64) -> Self {
        Brightness {
            absolute_magnitude,
            photometric_index_n: Some(photometric_index_n),
            slope_2_5n: None,
            dust_over_gas_at_90_deg: None,
            from: None,
            to: None,
        }
    }

    /// The factor of log10 r, 2.5 n, whichever of the two forms was given.
    pub fn slope(&self) -> f64 {
        self.slope_2_5n.unwrap_or_else(|| 2.5 * self.photometric_index_n.unwrap_or(0.0))
    }

    /// `path` makes the plan's path of a key.
    fn validate(&self, path: impl Fn(&str) -> String) -> Result<(), Error> {
        let magnitude = self.absolute_magnitude;
        require(&path("absolute_magnitude"), magnitude, magnitude.abs() <= 100.0, "a magnitude from -100 to 100")?;
        match (self.photometric_index_n, self.slope_2_5n) {
            (Some(n), None) => {
                require(
                    &path("photometric_index_n"),
                    n,
                    n.abs() <= 100.0,
                    "an index n from -100 to 100, in 2.5 n log r",
                )?;
            }
            (None, Some(slope)) => {
                require(&path("slope_2_5n"), slope, slope.abs() <= 250.0, "a slope 2.5 n from -250 to 250")?;
            }
            (given, _) => {
                let found = if given.is_some() { "both of them" } else { "neither" };
                let allowed = "either `photometric_index_n` or `slope_2_5n`, which is 2.5 times that index";
                let place = Place::Field(path("absolute_magnitude"));
                return Err(Error::new(Kind::Range, place, found, allowed));
            }
        }
        if let Some(ratio) = self.dust_over_gas_at_90_deg {
            let allowed = "a ratio from 0 to 1000; 1 is a comet rich in gas, 10 a dusty one";
            require(&path("dust_over_gas_at_90_deg"), ratio, (0.0..=1000.0).contains(&ratio), allowed)?;
        }
        if let (Some(from), Some(to)) = (&self.from, &self.to)
            && from.instant() > to.instant()
        {
            let place = Place::Field(path("to"));
            return Err(Error::new(Kind::Range, place, to.to_string(), format!("a time not before `from`, {from}")));
        }
        Ok(())
    }
}

/// A comet as published: its name and elements, and its brightness law if one was given.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, expecting = "an object with a comet's `name`, `elements` and perhaps `brightness`")]
pub struct Comet {
    pub name: String,
    pub elements: Elements,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    pub brightness: Vec<Brightness>,
}

/// Above this A1, A2 and A3 cannot be au/day^2: circulars print them in units of 1e-8 au/day^2.
pub const LARGEST_NONGRAVITATIONAL_AU_D2: f64 = 1e-4;

/// Perihelion distances that are taken, au: far wider than any comet's. Beyond them arithmetic runs out of digits.
const PERIHELION_AU: [f64; 2] = [1e-4, 1e4];
/// The interstellar comets known have up to 6; beyond 1000 nothing is a path about the Sun.
const GREATEST_ECCENTRICITY: f64 = 1000.0;
/// A body that goes round within days is no comet, and months of its dust are thousands of turns.
const LEAST_SEMI_MAJOR_AXIS_AU: f64 = 0.2;

/// The longest name kept, in characters.
pub const LONGEST_NAME: usize = 200;

/// Refuses `value` at `path` unless `holds`; not-a-number and infinities never hold.
fn require(path: &str, value: f64, holds: bool, allowed: &str) -> Result<(), Error> {
    if holds && value.is_finite() {
        return Ok(());
    }
    Err(Error::new(Kind::Range, Place::Field(path.into()), value.to_string(), allowed))
}

impl Elements {
    /// # Errors
    /// The first element outside its range, at its path `comet.elements...`.
    pub fn validate(&self) -> Result<(), Error> {
        let check = |key: &str, value: f64, holds: bool, allowed: &str| {
            require(&format!("comet.elements.{key}"), value, holds, allowed)
        };
        let (q, e, i) = (self.perihelion_distance_au, self.eccentricity, self.inclination_deg);
        let [nearest, farthest] = PERIHELION_AU;
        let allowed = "a perihelion distance above 0 au, from 0.0001 to 10000";
        check("perihelion_distance_au", q, (nearest..=farthest).contains(&q), allowed)?;
        check("eccentricity", e, (0.0..=GREATEST_ECCENTRICITY).contains(&e), "an eccentricity of 0 or more, to 1000")?;
        check("inclination_deg", i, (0.0..=180.0).contains(&i), "an inclination from 0 to 180 degrees")?;
        let angle = "an angle from -360 to 360 degrees";
        let (node, peri) = (self.ascending_node_deg, self.argument_of_perihelion_deg);
        check("ascending_node_deg", node, node.abs() <= 360.0, angle)?;
        check("argument_of_perihelion_deg", peri, peri.abs() <= 360.0, angle)?;
        if let Some(push) = self.nongravitational {
            let allowed = "a parameter in au/day^2, of size below 1e-4 (circulars print it in units of 1e-8 au/day^2)";
            for (key, value) in [("a1_au_d2", push.a1_au_d2), ("a2_au_d2", push.a2_au_d2), ("a3_au_d2", push.a3_au_d2)]
            {
                let holds = value.abs() < LARGEST_NONGRAVITATIONAL_AU_D2;
                check(&format!("nongravitational.{key}"), value, holds, allowed)?;
            }
            let delay = push.delay_days;
            check("nongravitational.delay_days", delay, delay.abs() <= 1000.0, "a delay from -1000 to 1000 days")?;
        }
        Ok(())
    }
}

impl Comet {
    /// # Errors
    /// The first part outside its range, at its path `comet...`.
    pub fn validate(&self) -> Result<(), Error> {
        let length = self.name.chars().count();
        let plain = self.name.trim() == self.name && !self.name.chars().any(char::is_control);
        if length == 0 || length > LONGEST_NAME || !plain {
            let found: String = self.name.chars().take(40).collect();
            let allowed = format!("a name of 1 to {LONGEST_NAME} characters on one line, without blanks around it");
            return Err(Error::new(Kind::Range, Place::Field("comet.name".into()), format!("{found:?}"), allowed));
        }
        self.elements.validate()?;
        let (q, e) = (self.elements.perihelion_distance_au, self.elements.eccentricity);
        let allowed = "an orbit of a month or longer: q of at least 0.2 au times 1 - e";
        require("comet.elements.perihelion_distance_au", q, q >= LEAST_SEMI_MAJOR_AXIS_AU * (1.0 - e), allowed)?;
        for (index, branch) in self.brightness.iter().enumerate() {
            branch.validate(|key| format!("comet.brightness[{index}].{key}"))?;
        }
        Ok(())
    }
}
