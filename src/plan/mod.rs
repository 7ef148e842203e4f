//! What did a person set up?
//!
//! One JSON object, version 1, keys in the order below. Unknown keys, wrong types and values out of range are refused
//! by name; a plan printed and read again is the same plan. `json` finds places in the text; [`paste`]
//! reads whatever a person pastes: a plan, several, or elements in any published notation.
//!
//! | key | what | may be left out |
//! | --- | --- | --- |
//! | `tailvane_plan` | the version, 1 | no |
//! | `comet` | [`Comet`]: `name`, `elements`, `brightness` | no |
//! | `comets` | more comets | yes |
//! | `observer` | a [`Site`]: `name`, `longitude_deg`, `latitude_deg`, `height_m` | yes: the geocentre |
//! | `sites` | more sites | yes |
//! | `time` | a date in any form of [`Stamp`] | yes |
//! | `tails` | [`Tails`]: winds, dust, activity, ejection | yes, and any key in it |
//! | `camera` | a [`Camera`], the one in use | yes |
//! | `cameras` | more cameras | yes |
//! | `season` | [`season::Season`]: `from`, `to` of the season ribbon | yes: chosen from the orbit |
//! | `night` | [`NightLaw`]: limits of the dark time, scale and trail of the pictures | yes, and any key in it |

mod json;
pub mod paste;
pub mod season;

use crate::body::observer::{Observer, Site};
use crate::camera::Camera;
use crate::error::{Error, Kind, Place};
use crate::night::law::NightLaw;
use crate::orbit::elements::Comet;
use crate::tail::law::Tails;
use crate::time::Stamp;
use serde::{Deserialize, Serialize};

/// The version this program writes and reads.
pub const VERSION: u32 = 1;

/// Everything a person set up; one JSON file.
#[derive(Clone, Debug, PartialEq)]
pub struct Plan {
    pub comet: Comet,
    /// More comets the person keeps.
    pub comets: Vec<Comet>,
    pub observer: Observer,
    /// More observers the person keeps.
    pub sites: Vec<Site>,
    pub time: Option<Stamp>,
    /// Which tails are drawn, and what the dust is assumed to be.
    pub tails: Tails,
    /// The camera in use, if any.
    pub camera: Option<Camera>,
    /// More cameras the person keeps.
    pub cameras: Vec<Camera>,
    /// The stretch of time of the season ribbon, where a person chose one.
    pub season: Option<season::Season>,
    /// What counts as dark, as up, as sharp.
    pub night: NightLaw,
}

/// The plan as its JSON lies; later sections become fields here and in [`Plan`].
#[derive(Serialize, Deserialize)]
#[serde(deny_unknown_fields, expecting = "a plan: a JSON object with `tailvane_plan` and `comet`")]
struct Text {
    tailvane_plan: u32,
    comet: Comet,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    comets: Vec<Comet>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    observer: Option<Site>,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    sites: Vec<Site>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    time: Option<Stamp>,
    #[serde(default, skip_serializing_if = "Tails::is_default")]
    tails: Tails,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    camera: Option<Camera>,
    #[serde(default, skip_serializing_if = "Vec::is_empty")]
    cameras: Vec<Camera>,
    #[serde(default, skip_serializing_if = "Option::is_none")]
    season: Option<season::Season>,
    #[serde(default, skip_serializing_if = "NightLaw::is_default")]
    night: NightLaw,
}

/// The version alone, so that a newer plan is refused as newer and not for its new keys.
#[derive(Deserialize)]
#[serde(expecting = "a plan: a JSON object with `tailvane_plan` and `comet`")]
struct Header {
    /// Its text is looked at where it stands.
    tailvane_plan: Option<serde::de::IgnoredAny>,
}

impl From<Comet> for Plan {
    /// A comet seen from the geocentre, without a time.
    fn from(comet: Comet) -> Self {
        Plan {
            comet,
            comets: Vec::new(),
            observer: Observer::Geocentre,
            sites: Vec::new(),
            time: None,
            tails: Tails::default(),
            camera: None,
            cameras: Vec::new(),
            season: None,
            night: NightLaw::default(),
        }
    }
}

impl Plan {
    /// The plan that `text` holds.
    ///
    /// # Errors
    /// [`Kind::Plan`] with line and column for what is no plan of this version; [`Kind::Range`] with line and column, and
    /// the path in `found`, for values out of range.
    pub fn parse(text: &str) -> Result<Plan, Error> {
        let text = text.strip_prefix('\u{feff}').unwrap_or(text);
        if text.trim().is_empty() {
            let allowed = "a plan: a JSON object with `tailvane_plan` and `comet`";
            return Err(Error::new(Kind::Plan, Place::Line { line: 1, column: 1 }, "nothing", allowed));
        }
        let header: Header = json::read(text)?;
        let version = header.tailvane_plan.and_then(|_| json::member(text, "tailvane_plan"));
        check_version(version).map_err(|error| error.at(json::place(text, "tailvane_plan")))?;
        let read: Text = json::read(text)?;
        let plan = Plan {
            comet: read.comet,
            comets: read.comets,
            observer: read.observer.map_or(Observer::Geocentre, Observer::Site),
            sites: read.sites,
            time: read.time,
            tails: read.tails,
            camera: read.camera,
            cameras: read.cameras,
            season: read.season,
            night: read.night,
        };
        plan.validate().map_err(|error| json::located(text, "", error))?;
        Ok(plan)
    }

    /// The plan as indented JSON with a line end, keys in the module's order. Reading it gives this plan back, if it is
    /// valid.
    pub fn print(&self) -> String {
        serde_json::to_string_pretty(&self.text()).unwrap_or_default() + "\n"
    }

    /// The plan as JSON on one line, without a line end.
    pub fn print_line(&self) -> String {
        serde_json::to_string(&self.text()).unwrap_or_default()
    }

    fn text(&self) -> Text {
        Text {
            tailvane_plan: VERSION,
            comet: self.comet.clone(),
            comets: self.comets.clone(),
            observer: match &self.observer {
                Observer::Geocentre => None,
                Observer::Site(site) => Some(site.clone()),
            },
            sites: self.sites.clone(),
            time: self.time.clone(),
            tails: self.tails.clone(),
            camera: self.camera.clone(),
            cameras: self.cameras.clone(),
            season: self.season.clone(),
            night: self.night.clone(),
        }
    }

    /// # Errors
    /// The first value outside its range, at its path.
    pub fn validate(&self) -> Result<(), Error> {
        self.comet.validate()?;
        for (index, comet) in self.comets.iter().enumerate() {
            comet.validate().map_err(|error| kept(index, error))?;
        }
        if let Observer::Site(site) = &self.observer {
            site.validate("observer")?;
        }
        for (index, site) in self.sites.iter().enumerate() {
            site.validate(&format!("sites[{index}]"))?;
        }
        self.tails.validate()?;
        if let Some(camera) = &self.camera {
            camera.validate("camera")?;
        }
        for (index, camera) in self.cameras.iter().enumerate() {
            camera.validate(&format!("cameras[{index}]"))?;
        }
        self.season.as_ref().map_or(Ok(()), |season| season.stretch().map(|_| ()))?;
        self.night.validate()
    }
}

/// An error of a kept comet, which names itself `comet`, at its own path.
fn kept(index: usize, error: Error) -> Error {
    let path = match &error.place {
        Place::Field(path) => format!("comets[{index}]{}", path.strip_prefix("comet").unwrap_or(path)),
        _ => format!("comets[{index}]"),
    };
    error.at(Place::Field(path))
}

fn check_version(version: Option<&str>) -> Result<(), Error> {
    let refuse = |found: String, allowed: String| Err(Error::new(Kind::Plan, Place::Whole, found, allowed));
    match version {
        None => refuse("no `tailvane_plan`".into(), format!("`\"tailvane_plan\": {VERSION}`, the version of the plan")),
        Some(version) if version == VERSION.to_string() => Ok(()),
        Some(version) if crate::decimal::read(version).is_some_and(|version| version > f64::from(VERSION)) => refuse(
            format!("a plan of version {version}"),
            format!("version {VERSION}, the newest that this Tailvane reads; a newer Tailvane wrote the plan"),
        ),
        Some(version) => refuse(format!("version {version}"), format!("version {VERSION}")),
    }
}
