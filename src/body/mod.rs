//! Where are the Earth, the Moon and the observer?
//!
//! Heliocentric, ICRF/J2000 equatorial axes, au and au/day.

pub mod observer;
pub mod sun;

use nalgebra::Vector3;

/// Place and velocity, heliocentric (unless a function says otherwise), ICRF/J2000 equatorial, au and au/day.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct State {
    pub position_au: Vector3<f64>,
    pub velocity_au_d: Vector3<f64>,
}
