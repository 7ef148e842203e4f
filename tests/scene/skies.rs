//! Skies to draw: one real computation on an invented comet, with directions set as a test needs them.

use nalgebra::Vector3;
use tailvane::body::State;
use tailvane::body::observer::{Observer, Site};
use tailvane::orbit::conic::Orbit;
use tailvane::orbit::elements::{Comet, Elements};
use tailvane::plan::Plan;
use tailvane::scene::Scene;
use tailvane::scene::layer::{Layers, TailLayers};
use tailvane::scene::sky_plane;
use tailvane::scene::view::SkyView;
use tailvane::sky::trail::Trail;
use tailvane::sky::viewpoint::Viewpoint;
use tailvane::sky::{SiteSky, Sky};
use tailvane::tail::grain::Vista;
use tailvane::tail::law::Tails;
use tailvane::time::Stamp;

/// Position angles of the four hands, degrees; None where the direction is absent.
#[derive(Clone, Copy, Debug)]
pub struct Hands {
    pub antisolar: Option<f64>,
    pub negative_velocity: Option<f64>,
    pub sky_motion: Option<f64>,
    pub zenith: Option<f64>,
}

/// An invented comet seen from an invented hill.
pub fn plan() -> Plan {
    let elements = Elements {
        perihelion_distance_au: 0.62,
        eccentricity: 1.0003,
        inclination_deg: 63.0,
        ascending_node_deg: 62.0,
        argument_of_perihelion_deg: 118.0,
        perihelion_time: "2031-02-22.18374 TT".parse().expect("a date"),
        epoch: None,
        nongravitational: None,
    };
    let comet = Comet { name: "Invented comet Alder".into(), elements, brightness: Vec::new() };
    Plan {
        observer: Observer::Site(Site {
            name: "Invented hill".into(),
            longitude_deg: 23.0,
            latitude_deg: 37.0,
            height_m: 640.0,
        }),
        time: Some("2031-03-28T04:40:00Z".parse().expect("a date")),
        tails: Tails { age_greatest_days: 100.0, ..Tails::default() },
        ..Plan::from(comet)
    }
}

/// The sky of that comet from an observer on a circle about the Sun: geometry that is consistent with itself.
pub fn sky() -> Sky {
    let plan = plan();
    let time: Stamp = plan.time.expect("the plan has a time");
    let (sine, cosine) = 187.0_f64.to_radians().sin_cos();
    let observer = State {
        position_au: Vector3::new(cosine, sine * 0.9175, sine * 0.3978),
        velocity_au_d: Vector3::new(-sine, cosine * 0.9175, cosine * 0.3978) * 0.0172,
    };
    let orbit = Orbit::new(&plan.comet.elements).expect("elements in range");
    Sky::of(&orbit, &Viewpoint { time: time.instant(), observer, ground: None }, &mut Trail::default())
}

/// That sky with its directions turned to `hands`, as a site sees it.
pub fn with(hands: Hands) -> Sky {
    let radians = |degrees: Option<f64>| degrees.map(f64::to_radians);
    Sky {
        antisolar_position_angle_rad: radians(hands.antisolar),
        negative_velocity_position_angle_rad: radians(hands.negative_velocity),
        motion_position_angle_rad: radians(hands.sky_motion),
        site: Some(SiteSky {
            altitude_rad: 0.4,
            azimuth_rad: Some(1.0),
            sun_altitude_rad: -0.4,
            moon_separation_rad: 1.0,
            moon_lit_fraction: 0.3,
            zenith_position_angle_rad: radians(hands.zenith),
        }),
        ..sky()
    }
}

/// Four directions well apart.
pub const APART: Hands =
    Hands { antisolar: Some(238.4), negative_velocity: Some(12.5), sky_motion: Some(171.0), zenith: Some(327.4) };

/// The drawing of a sky without tails.
pub fn bare(plan: &Plan, sky: &Sky, view: &SkyView) -> Scene {
    sky_plane::compose(plan, sky, &TailLayers::default(), view)
}

/// The tails of the comet of `plan` in a sky.
pub fn tails(plan: &Plan, sky: &Sky, view: &SkyView, layers: &Layers) -> TailLayers {
    let orbit = Orbit::new(&plan.comet.elements).expect("elements in range");
    TailLayers::of(&Vista::of(&orbit, sky), &plan.tails, view, layers)
}

/// The drawing of a sky with all of its tails.
pub fn tailed(plan: &Plan, sky: &Sky, view: &SkyView) -> Scene {
    sky_plane::compose(plan, sky, &tails(plan, sky, view, &Layers::default()), view)
}
