//! Which stretch of time did a person choose for the season?

use crate::error::Error;
use crate::season::stretch::Stretch;
use crate::time::Stamp;
use serde::{Deserialize, Serialize};

/// A chosen season, both ends included.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields, expecting = "a season: a JSON object with `from` and `to`")]
pub struct Season {
    pub from: Stamp,
    pub to: Stamp,
}

impl Season {
    /// # Errors
    /// What [`Stretch::new`] refuses: reversed, too short or too long, outside the ephemeris.
    pub fn stretch(&self) -> Result<Stretch, Error> {
        Stretch::new(self.from.instant(), self.to.instant())
    }
}
