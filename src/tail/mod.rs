//! Where does what leaves the nucleus lie on the sky?
//!
//! Ions follow the wind ([`ion`]); dust moves about the Sun under the pull that radiation pressure leaves
//! ([`grain`]; very many at a time: [`kernel`]). Which grains there are, and how many, is assumed in [`law`] and made ready
//! in [`weight`]; [`cloud`] is what they look like together. All of it is a prediction for matter that leaves as assumed,
//! not an observation.
//!
//! Conventions: beta is the ratio of radiation pressure to solar gravity; an age counts back from the observation
//! time less the nucleus light time, and that one light time serves all grains.

pub mod law;
pub mod grain;
pub mod weight;
pub mod kernel;
pub mod cloud;
