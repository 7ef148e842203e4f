//! The cases of sky_orbits.csv with their truth, and what the crate says of them, done right or wrong on purpose.

use crate::rows::{Row, table};
use tailvane::body::observer::{Observer, Site};
use tailvane::engine::Engine;
use tailvane::orbit::elements::{Comet, Elements};
use tailvane::plan::Plan;
use tailvane::sky::Sky;
use tailvane::time::Instant;

/// What is done wrong on purpose.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Fault {
    None,
    /// The node counted the other way.
    NodeSign,
    /// Prograde taken for retrograde: the orbit seen in a mirror.
    Mirror,
    /// Elements for the equinox of 1950 read as if for 2000: 50 years of precession, 0.698 degrees of longitude.
    Equinox,
    /// The centre of the Earth instead of the site.
    Geocentre,
    /// West longitude counted positive.
    LongitudeSign,
    /// The comet where it is, not where it was when its light left.
    NoLightTime,
    /// TT taken for UTC, or the other way round: 69 s.
    TimeScale,
}

/// A row of sky_orbits.csv with its row of sky.csv.
pub struct Case {
    pub orbit: Row,
    pub truth: Row,
}

pub fn cases() -> Vec<Case> {
    let (orbits, truths) = (table("sky_orbits.csv"), table("sky.csv"));
    assert_eq!(orbits.len(), truths.len());
    let cases: Vec<Case> = orbits.into_iter().zip(truths).map(|(orbit, truth)| Case { orbit, truth }).collect();
    for case in &cases {
        assert_eq!(case.orbit.text("case"), case.truth.text("case"));
    }
    cases
}

pub fn elements(row: &Row) -> Elements {
    Elements {
        perihelion_distance_au: row.number("perihelion_distance_au"),
        eccentricity: row.number("eccentricity"),
        inclination_deg: row.number("inclination_deg"),
        ascending_node_deg: row.number("ascending_node_deg"),
        argument_of_perihelion_deg: row.number("argument_of_perihelion_deg"),
        perihelion_time: row.text("perihelion_time").parse().expect("a date"),
        epoch: None,
        nongravitational: None,
    }
}

pub fn plan(elements: Elements, observer: Observer) -> Plan {
    let comet = Comet { name: "A row of truth".into(), elements, brightness: Vec::new() };
    Plan { observer, ..Plan::from(comet) }
}

impl Case {
    pub fn name(&self) -> String {
        format!("{} ({})", self.orbit.text("case"), self.orbit.text("why"))
    }

    pub fn is_site(&self) -> bool {
        self.orbit.number_if_any("longitude_deg").is_some()
    }

    pub fn instant(&self) -> Instant {
        let [whole, part] = self.orbit.numbers(["jd_tt_1", "jd_tt_2"]);
        Instant::from_tdb_days((whole - 2_451_545.0) + part)
    }

    /// What the crate says of this case, done wrong by `fault`.
    pub fn sky(&self, fault: Fault) -> Sky {
        let mut elements = elements(&self.orbit);
        match fault {
            Fault::NodeSign => elements.ascending_node_deg = -elements.ascending_node_deg,
            Fault::Mirror => elements.inclination_deg = 180.0 - elements.inclination_deg,
            Fault::Equinox => elements.ascending_node_deg = (elements.ascending_node_deg + 0.698) % 360.0,
            // A perihelion earlier by the light time puts the comet where it is at the date itself.
            Fault::NoLightTime => {
                let earlier = elements.perihelion_time.instant().plus_days(-self.truth.number("light_time_days"));
                elements.perihelion_time =
                    format!("JD {:.9} TT", 2_451_545.0 + earlier.tdb_days()).parse().expect("a date");
            }
            _ => {}
        }
        let observer = match self.orbit.number_if_any("longitude_deg") {
            Some(longitude_deg) if fault != Fault::Geocentre => Observer::Site(Site {
                name: "A row of truth".into(),
                longitude_deg: if fault == Fault::LongitudeSign {
                    (360.0 - longitude_deg) % 360.0
                } else {
                    longitude_deg
                },
                latitude_deg: self.orbit.number("latitude_deg"),
                height_m: self.orbit.number("height_m"),
            }),
            _ => Observer::Geocentre,
        };
        let late = if fault == Fault::TimeScale { 69.184 / 86_400.0 } else { 0.0 };
        let mut engine =
            Engine::new(plan(elements, observer)).unwrap_or_else(|error| panic!("{}: {error}", self.name()));
        engine.sky_at(self.instant().plus_days(late)).unwrap_or_else(|error| panic!("{}: {error}", self.name()))
    }
}
