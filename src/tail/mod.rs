//! Where does what leaves the nucleus lie on the sky?
//!
//! Ions follow the wind ([`ion`]); dust moves about the Sun under the pull that radiation pressure leaves
//! ([`grain`], [`path`]; very many at a time: [`kernel`]): its curves of one beta or one age ([`curve`]), the line to which it gathers
//! ([`neck_line`]), and the way back from a place on the sky to a grain ([`inverse`]). Which grains there are, and
//! how many, is assumed in [`law`]; [`size`] says how large they are, [`weight`] how much light they send.
//! [`cloud`] draws that light, [`perspective`] sums it by side of the nucleus. All of it is a prediction for matter that
//! leaves as assumed, not an observation.
//!
//! Conventions: beta is the ratio of radiation pressure to solar gravity; an age counts back from the observation
//! time less the nucleus light time, and that one light time serves all grains.

pub mod law;
pub mod size;
pub mod path;
pub mod grain;
pub mod weight;
pub mod ion;
pub mod curve;
pub mod neck_line;
pub mod kernel;
pub mod cloud;
pub mod perspective;
pub mod inverse;
