//! Plans of comets, and their events, for the tests of the season.
#![allow(dead_code, reason = "each test binary uses its part")]

use tailvane::engine::Engine;
use tailvane::plan::Plan;
use tailvane::season::event::{Event, EventKind};
use tailvane::season::search::{Search, Season};
use tailvane::season::stretch::Stretch;
use tailvane::time::Instant;

/// Elements as they are typed: q, e, i, argument of perihelion, node; perihelion time.
#[derive(Clone, Debug)]
pub struct Elements {
    pub numbers: [f64; 5],
    pub perihelion_time: String,
}

impl Elements {
    pub fn plan(&self) -> Plan {
        let [q, e, i, peri, node] = self.numbers;
        let text = format!(
            r#"{{"tailvane_plan": 1, "comet": {{"name": "Invented comet", "elements": {{
                "perihelion_distance_au": {q}, "eccentricity": {e}, "inclination_deg": {i},
                "argument_of_perihelion_deg": {peri}, "ascending_node_deg": {node},
                "perihelion_time": "{}"}}}}}}"#,
            self.perihelion_time
        );
        Plan::parse(&text).expect("a plan")
    }

    pub fn engine(&self) -> Engine {
        Engine::new(self.plan()).expect("a sound orbit")
    }
}

pub fn stretch(from_days: f64, to_days: f64) -> Stretch {
    Stretch::new(Instant::from_tdb_days(from_days), Instant::from_tdb_days(to_days)).expect("a sound stretch")
}

/// Geometry is the first eighth of the work; the dust of a search that stops there is not looked at.
const GEOMETRY_PART: f64 = 0.125;

/// The events of the geometry alone.
pub fn geometric_events(engine: &Engine, stretch: Stretch) -> Vec<Event> {
    let mut search = engine.season_search(stretch);
    while search.advance(1.0) < GEOMETRY_PART - 1e-9 {}
    let mut events = search.season().events;
    // Dust may have been looked at in the last slice.
    events.retain(|event| !matches!(event.kind, EventKind::SunwardDustBegins(_) | EventKind::SunwardDustEnds(_)));
    events
}

pub fn whole(mut search: Search) -> Season {
    while search.advance(100.0) < 1.0 {}
    search.season()
}
