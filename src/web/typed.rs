//! How do typed fields become elements and sites, and back?

use crate::body::observer::Site;
use crate::error::{Error, Kind, Place};
use crate::orbit::elements::{Comet, Elements};
use crate::scene::layer::Layers;
use crate::time::Stamp;
use serde::{Deserialize, Serialize};

/// The elements of a comet as texts.
#[derive(Serialize, Deserialize)]
pub struct ElementFields {
    name: String,
    perihelion_time: String,
    perihelion_distance_au: String,
    eccentricity: String,
    argument_of_perihelion_deg: String,
    ascending_node_deg: String,
    inclination_deg: String,
    epoch: String,
}

impl ElementFields {
    pub fn of(comet: &Comet) -> Self {
        let e = &comet.elements;
        ElementFields {
            name: comet.name.clone(),
            perihelion_time: e.perihelion_time.to_string(),
            perihelion_distance_au: e.perihelion_distance_au.to_string(),
            eccentricity: e.eccentricity.to_string(),
            argument_of_perihelion_deg: e.argument_of_perihelion_deg.to_string(),
            ascending_node_deg: e.ascending_node_deg.to_string(),
            inclination_deg: e.inclination_deg.to_string(),
            epoch: e.epoch.as_ref().map(Stamp::to_string).unwrap_or_default(),
        }
    }

    /// The comet these fields name; what no field holds is kept from `before`.
    ///
    /// # Errors
    /// A field that is no number or no time, by its place in the plan. Ranges are the plan's to judge.
    pub fn comet(&self, before: &Comet) -> Result<Comet, Error> {
        let at = |key: &str| format!("comet.elements.{key}");
        let time = |text: &str, key: &str| text.trim().parse::<Stamp>().map_err(|e| e.at(Place::Field(at(key))));
        let elements = Elements {
            perihelion_distance_au: number(&self.perihelion_distance_au, &at("perihelion_distance_au"))?,
            eccentricity: number(&self.eccentricity, &at("eccentricity"))?,
            inclination_deg: number(&self.inclination_deg, &at("inclination_deg"))?,
            ascending_node_deg: number(&self.ascending_node_deg, &at("ascending_node_deg"))?,
            argument_of_perihelion_deg: number(&self.argument_of_perihelion_deg, &at("argument_of_perihelion_deg"))?,
            perihelion_time: time(&self.perihelion_time, "perihelion_time")?,
            epoch: if self.epoch.trim().is_empty() { None } else { Some(time(&self.epoch, "epoch")?) },
            nongravitational: before.elements.nongravitational,
        };
        Ok(Comet { name: self.name.trim().to_owned(), elements, brightness: before.brightness.clone() })
    }
}

/// A site as texts.
#[derive(Serialize, Deserialize)]
pub struct SiteFields {
    name: String,
    longitude_deg: String,
    latitude_deg: String,
    height_m: String,
}

impl SiteFields {
    pub fn of(site: &Site) -> Self {
        SiteFields {
            name: site.name.clone(),
            longitude_deg: site.longitude_deg.to_string(),
            latitude_deg: site.latitude_deg.to_string(),
            height_m: site.height_m.to_string(),
        }
    }

    /// The site these fields name; an empty height is sea level.
    ///
    /// # Errors
    /// A field that is no number, by its place in the plan. Ranges are the plan's to judge.
    pub fn site(&self) -> Result<Site, Error> {
        Ok(Site {
            name: self.name.trim().to_owned(),
            longitude_deg: number(&self.longitude_deg, "observer.longitude_deg")?,
            latitude_deg: number(&self.latitude_deg, "observer.latitude_deg")?,
            height_m: if self.height_m.trim().is_empty() { 0.0 } else { number(&self.height_m, "observer.height_m")? },
        })
    }

    /// The site in a few words.
    pub fn words(&self) -> String {
        let name = if self.name.is_empty() { "a site without a name" } else { &self.name };
        format!("{name}, {} m", self.height_m)
    }
}

/// Typed fields, each a key and its text.
pub type Pairs = Vec<(String, String)>;

/// The text of a field without blanks around it; nothing where there is none.
pub fn text_of<'a>(pairs: &'a Pairs, key: &str) -> &'a str {
    pairs.iter().find(|(found, _)| found == key).map_or("", |(_, text)| text.trim())
}

pub fn number(text: &str, field: &str) -> Result<f64, Error> {
    // A typographic minus is what this page itself prints.
    let plain = text.trim().replace('\u{2212}', "-");
    crate::decimal::read(&plain).filter(|number| number.is_finite()).ok_or_else(|| {
        let found = if plain.is_empty() {
            "nothing".to_owned()
        } else {
            format!("\"{}\"", plain.chars().take(40).collect::<String>())
        };
        Error::new(Kind::Range, Place::Field(field.to_owned()), found, "a number such as 12.5")
    })
}

/// What of the tails is drawn, and how, as the page sends it.
#[derive(Clone, Copy, Deserialize)]
pub struct LayerFields {
    ion: bool,
    syndynes: bool,
    synchrones: bool,
    neck_line: bool,
    toward_sun: bool,
    dust: bool,
    isophotes: bool,
    depth_mag: f64,
    isophote_step_mag: f64,
}

impl LayerFields {
    pub fn layers(&self) -> Layers {
        Layers {
            ion: self.ion,
            syndynes: self.syndynes,
            synchrones: self.synchrones,
            neck_line: self.neck_line,
            toward_sun: self.toward_sun,
            dust: self.dust,
            isophotes: self.isophotes,
        }
    }

    /// Depth of the tone map and step of the isophotes, magnitudes; what the page keeps may be anything.
    pub fn depth_and_step_mag(&self) -> [f64; 2] {
        let sane = |value: f64, least: f64, most: f64, else_: f64| {
            if value.is_finite() { value.clamp(least, most) } else { else_ }
        };
        [sane(self.depth_mag, 1.0, 15.0, 7.5), sane(self.isophote_step_mag, 0.25, 5.0, 1.0)]
    }
}
