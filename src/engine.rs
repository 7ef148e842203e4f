//! The one surface that both shells use: plain data in, plain data out.
//!
//! Holds a plan made ready to compute with: the orbit is made once per plan, and what dates share is kept by its
//! [`Watch`].

pub mod easel;
pub mod sheet;
mod night;
pub mod outlook;
pub mod season;

use crate::body::SPAN;
use crate::body::observer::Observer;
use crate::camera::Camera;
use crate::camera::turn::{self, Hour};
use crate::caution::Caution;
use crate::error::Error;
use crate::frame::earth_rotation::celestial_to_terrestrial;
use crate::orbit::conic::Orbit;
use crate::order;
use crate::plan::Plan;
use crate::say::{self, Saying};
use crate::sky::Sky;
use crate::sky::avoidance;
use crate::sky::dark::{self, Day, NODE_DAYS, NODES, Window};
use crate::sky::watch::Watch;
use crate::tail::grain::Vista;
use crate::tail::ion::Wedge;
use crate::tail::perspective::{Perspective, Recipe};
use crate::time::Instant;
use nalgebra::Vector3;

/// Two-body motion is doubted this many days from the elements' epoch.
const OLD_ELEMENTS_DAYS: f64 = 100.0;

/// A plan made ready to compute with.
pub struct Engine {
    plan: Plan,
    watch: Watch,
    /// The laws of the plan's dust, made ready.
    recipe: Recipe,
}

/// A sky and all that is doubtful about it.
#[derive(Clone, Debug, PartialEq)]
pub struct View {
    pub sky: Sky,
    /// The heaviest first.
    pub cautions: Vec<Caution>,
}

/// The tails of a sky, as directions and sums.
#[derive(Clone, Debug, PartialEq)]
pub struct TailView {
    pub perspective: Perspective,
    pub ion: Wedge,
}

impl Engine {
    /// # Errors
    /// What [`Plan::validate`] refuses.
    pub fn new(plan: Plan) -> Result<Self, Error> {
        plan.validate()?;
        let orbit = Orbit::new(&plan.comet.elements)?;
        let watch = Watch::new(orbit, plan.observer.clone());
        let recipe = Recipe::of(&plan.tails);
        Ok(Engine { plan, watch, recipe })
    }

    pub fn plan(&self) -> &Plan {
        &self.plan
    }

    /// Takes other cameras; nothing that was computed depends on them.
    ///
    /// # Errors
    /// What [`Camera::validate`] refuses.
    pub fn set_cameras(&mut self, camera: Option<Camera>, cameras: Vec<Camera>) -> Result<(), Error> {
        if let Some(camera) = &camera {
            camera.validate("camera")?;
        }
        (self.plan.camera, self.plan.cameras) = (camera, cameras);
        Ok(())
    }

    /// The field of the plan's camera through some times, set up at `start`; None without a camera, or where its mount needs
    /// a site.
    pub fn camera_hours(&mut self, start: Instant, times: &[Instant]) -> Option<Vec<Hour>> {
        let camera = self.plan.camera.as_ref()?;
        turn::through(&mut self.watch, camera, &self.plan.tails, start, times)
    }

    pub fn orbit(&self) -> &Orbit {
        self.watch.orbit()
    }

    pub fn has_site(&self) -> bool {
        matches!(self.plan.observer, Observer::Site(_))
    }

    /// # Errors
    /// A time outside the span of the ephemeris.
    pub fn check_span(&self, time: Instant) -> Result<(), Error> {
        SPAN.check(time)
    }

    /// What the plan's observer sees of its comet at `time`.
    ///
    /// # Errors
    /// A time outside the span of the ephemeris.
    pub fn sky_at(&mut self, time: Instant) -> Result<Sky, Error> {
        self.watch.sky_at(time)
    }

    /// The sky and everything doubtful about it: the elements, the directions, the Sun.
    ///
    /// # Errors
    /// A time outside the span of the ephemeris.
    pub fn view_at(&mut self, time: Instant) -> Result<View, Error> {
        let sky = self.sky_at(time)?;
        let cautions = self.cautions_of(&sky);
        Ok(View { sky, cautions })
    }

    /// Everything doubtful about a sky, the heaviest first.
    fn cautions_of(&mut self, sky: &Sky) -> Vec<Caution> {
        let mut cautions = self.cautions_of_elements(sky.time);
        cautions.extend(sky.cautions.iter().cloned());
        cautions.extend(avoidance::cautions(sky, |time| self.watch.sun_altitude_deg(time)));
        order::by_rank(&mut cautions, |caution| u64::MAX - caution.weight() as u64);
        cautions
    }

    /// The comet of a sky, ready for its tails.
    pub fn vista(&self, sky: &Sky) -> Vista<'_> {
        Vista::of(self.watch.orbit(), sky)
    }

    /// Where the plan's tails lie in a sky of its comet; takes half a millisecond.
    pub fn tails_at(&self, sky: &Sky) -> TailView {
        let vista = self.vista(sky);
        TailView { perspective: self.recipe.assess(&vista, sky), ion: Wedge::of(&vista, &self.plan.tails) }
    }

    /// A sky and its tails in words.
    pub fn saying(&self, sky: &Sky, tails: &TailView) -> Saying {
        say::say(&self.plan, sky, &tails.perspective, &tails.ion)
    }

    /// When the comet is up in a dark sky within half a day of `time`; None for the geocentre.
    pub fn dark_windows(&mut self, time: Instant) -> Option<Vec<Window>> {
        let day = self.day(time)?;
        let limits = self.plan.night.limits();
        Some(dark::windows(time, &limits, |time| SPAN.contains(time).then(|| day.altitudes_deg(time))))
    }

    /// Comet and Sun over the site's day about `time`; None for the geocentre. Nodes beyond the ephemeris repeat
    /// its last day.
    fn day(&mut self, time: Instant) -> Option<Day> {
        let mut comet = [Vector3::zeros(); NODES];
        let mut sun = [Vector3::zeros(); NODES];
        for (node, (comet, sun)) in comet.iter_mut().zip(&mut sun).enumerate() {
            let days = time.tdb_days() + (node as f64 - 2.0) * NODE_DAYS;
            let within = days.clamp(SPAN.first.tdb_days(), SPAN.last.tdb_days());
            let sky = self.sky_at(Instant::from_tdb_days(within)).ok()?;
            *comet = sky.axes.sight;
            *sun = -sky.observer.position_au.normalize();
        }
        let ground = self.watch.viewpoint(time).ok()?.ground?;
        let pole = celestial_to_terrestrial(time.tdb_days(), time.ut1_days()).transpose() * Vector3::z();
        Some(Day { middle: time, comet, sun, zenith: ground.horizon.up, pole })
    }

    fn cautions_of_elements(&self, time: Instant) -> Vec<Caution> {
        let elements = &self.plan.comet.elements;
        let mut found = Vec::new();
        match &elements.epoch {
            Some(epoch) => {
                let days = time.tdb_days() - epoch.instant().tdb_days();
                if days.abs() > OLD_ELEMENTS_DAYS {
                    found.push(Caution::OldElements { days });
                }
            }
            None => found.push(Caution::NoEpoch),
        }
        if elements.eccentricity == 1.0 {
            found.push(Caution::Parabola);
        }
        if elements.nongravitational.is_some() {
            found.push(Caution::NongravitationalUnused);
        }
        found
    }
}
