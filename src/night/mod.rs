//! What does one night hold for a comet and a site?
//!
//! - [`evening`]: which night a date names.
//! - [`law`]: what counts as dark, as up, as sharp: the plan's `night` section.
//! - [`air`]: air mass and refraction.
//! - [`moment`]: comet, Sun and Moon over the horizon at one time, and how the tails stand on it.
//! - [`course`]: the whole night: twilights, risings, dark time.
//! - [`best`]: when in the dark time to observe.
//! - [`table`]: a night as rows.
//! - [`board`]: many comets in one night.
//!
//! Altitudes are airless, of centres; the Moon is seen from the site. Accuracy against skyfield and a JPL ephemeris
//! (tests/night.rs): altitudes 0.02 degrees, twilights 20 s at middle latitudes; near the pole, where the Sun runs level,
//! the same error of altitude is minutes of time.

pub mod air;
pub mod best;
pub mod board;
pub mod course;
pub mod evening;
pub mod law;
pub mod moment;
pub mod table;
