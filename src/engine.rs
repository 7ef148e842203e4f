//! The one surface that both shells use: plain data in, plain data out.

use crate::error::Error;
use crate::plan::Plan;
use crate::sky::Sky;
use crate::time::Instant;

/// A plan made ready to compute with. Recomputes only what changed.
pub struct Engine {
    plan: Plan,
}

impl Engine {
    /// # Errors
    /// What [`Plan::validate`] refuses.
    pub fn new(plan: Plan) -> Result<Self, Error> {
        Ok(Engine { plan })
    }

    pub fn plan(&self) -> &Plan {
        &self.plan
    }

    /// The sky of the plan's comet and observer at `time`.
    ///
    /// # Errors
    /// A time outside the ephemeris span.
    pub fn sky_at(&self, _time: Instant) -> Result<Sky, Error> {
        unimplemented!()
    }
}
