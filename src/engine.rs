//! The one surface that both shells use: plain data in, plain data out.
//!
//! Holds a plan made ready to compute with, and recomputes only what changed: the orbit once per plan, the
//! Earth once per season ([`crate::body::earth::Window`]), each sky from the anomaly of the one before it.

use crate::body::observer::Observer;
use crate::caution::Caution;
use crate::error::Error;
use crate::orbit::conic::Orbit;
use crate::plan::Plan;
use crate::sky::avoidance;
use crate::sky::dark::{self, Window};
use crate::sky::viewpoint::Viewpoint;
use crate::sky::Sky;
use crate::time::Instant;

/// Two-body motion is doubted this many days from the elements' epoch.
const OLD_ELEMENTS_DAYS: f64 = 100.0;

/// A plan made ready to compute with.
pub struct Engine {
    plan: Plan,
    orbit: Orbit,
    last: Option<Sky>,
}

/// A sky and all that is doubtful about it.
#[derive(Clone, Debug, PartialEq)]
pub struct View {
    pub sky: Sky,
    pub cautions: Vec<Caution>,
}

impl Engine {
    /// # Errors
    /// What [`Plan::validate`] refuses.
    pub fn new(plan: Plan) -> Result<Self, Error> {
        plan.validate()?;
        let orbit = Orbit::new(&plan.comet.elements)?;
        Ok(Engine { plan, orbit, last: None })
    }

    pub fn plan(&self) -> &Plan {
        &self.plan
    }

    pub fn orbit(&self) -> &Orbit {
        &self.orbit
    }

    pub fn has_site(&self) -> bool {
        matches!(self.plan.observer, Observer::Site(_))
    }
}
