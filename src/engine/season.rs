//! The season of a plan: its search and its curves.

use super::Engine;
use crate::error::Error;
use crate::season::search::{Search, Subject};
use crate::season::series::{Curve, Series};
use crate::season::stretch::Stretch;
use crate::sky::Sky;

impl Engine {
    /// Whose season the plan's is.
    pub fn season_subject(&self) -> Subject {
        Subject {
            orbit: self.orbit().clone(),
            tails: self.plan.tails.clone(),
            epoch: self.plan.comet.elements.epoch.as_ref().map(|epoch| epoch.instant()),
            has_site: self.has_site(),
        }
    }

    /// A search for the events and windows of a stretch; nothing is done yet.
    pub fn season_search(&self, stretch: Stretch) -> Search {
        Search::new(self.season_subject(), stretch)
    }

    /// Curves at `count` dates evenly over the stretch, for the plan's observer.
    ///
    /// # Errors
    /// Those of [`Series::of`].
    pub fn season_series(
        &mut self,
        stretch: &Stretch,
        count: usize,
        curves: &[Curve],
        magnitude: impl FnMut(&Sky) -> Option<f64>,
    ) -> Result<Series, Error> {
        Series::of(&mut self.watch, stretch, count, curves, magnitude)
    }
}
