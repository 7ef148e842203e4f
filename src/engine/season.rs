//! The season of a plan: its search and its curves.

use super::Engine;
use crate::caution::Caution;
use crate::error::Error;
use crate::season::event::{EventKind, Told};
use crate::season::search::{Search, Season, Subject};
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

    /// The events of a season, each with its cautions: those of the elements and of the plan's observer at that time,
    /// except that the comet is down or the Sun up.
    ///
    /// # Errors
    /// None for the season of a search.
    pub fn season_told(&mut self, season: &Season) -> Result<Vec<Told>, Error> {
        let mut found = Vec::with_capacity(season.events.len());
        for event in &season.events {
            let about_directions = matches!(event.kind, EventKind::OrbitPlaneCrossing { .. });
            let mut cautions = self.view_at(event.time)?.cautions;
            cautions.retain(|caution| match caution {
                Caution::SunUp | Caution::CometDown { .. } => false,
                Caution::AngleUndefined { .. } | Caution::AngleLoose { .. } => about_directions,
                _ => true,
            });
            found.push(Told { event: event.clone(), cautions });
        }
        Ok(found)
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
