//! Tailvane: where a comet's tails lie on the sky, from published orbital elements.
//!
//! Reading order, which is also the layer order (a module uses only those above it):
//!
//! | module | the question it answers |
//! | --- | --- |
//! | [`error`] | what was refused, where, and what is allowed? |
//! | [`order`] | in which order do things stand? |
//! | [`decimal`] | which number does a decimal text mean? |
//! | [`time`] | which instant does a typed date mean? |
//! | [`caution`] | what was computed but is doubtful, and why? |
//! | [`frame`] | how do directions turn into angles, and one frame into another? |
//! | [`body`] | where are the Earth, the Moon and the observer? |
//! | [`orbit`] | what do published elements say, and where does the comet move? |
//! | [`sky`] | what does the observer see: place, angles, directions, motion? |
//! | [`tail`] | where does what leaves the nucleus lie on the sky? |
//! | [`season`] | when does what happen: curves over dates, events, windows? |
//! | [`night`] | what does one night hold for a comet and a site? |
//! | [`camera`] | which part of the sky does a camera take in, and where on it do the tails lie? |
//! | [`plan`] | what did a person set up? |
//! | [`say`] | what do the numbers mean, in words? |
//! | [`scene`] | what is drawn, fully resolved? |
//! | [`paint`] | how does a scene become canvas calls or SVG? |
//! | [`engine`] | the one surface that both shells use |
#![forbid(unsafe_code)]

pub mod error;
pub mod order;
pub mod decimal;
pub mod time;
pub mod caution;
pub mod frame;
pub mod body;
pub mod orbit;
pub mod sky;
pub mod tail;
pub mod season;
pub mod night;
pub mod camera;
pub mod plan;
pub mod say;
pub mod scene;
pub mod paint;
pub mod engine;
#[cfg(target_arch = "wasm32")]
pub mod web;
