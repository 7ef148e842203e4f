//! Where is a grain now that left the nucleus a while ago?
//!
//! A grain leaves with the nucleus velocity plus its ejection velocity and moves about the Sun under GM (1 - beta):
//! ellipse, parabola, hyperbola, straight line or, beyond beta = 1, the far branch of a hyperbola. Left out:
//! Poynting-Robertson drag (1e-4 of the force; months), the pull of the nucleus and of planets, the Lorentz force.
//! Source: Burns, Lamy & Soter 1979, Icarus 40, 1.

use crate::body::sun::RADIUS_AU;
use crate::body::{KM_S_PER_AU_D, State};
use crate::caution::Caution;
use crate::frame::{Axes, tangent};
use crate::orbit::conic::{Orbit, SUN_GM_AU3_D2, propagate};
use crate::sky::Sky;
use crate::tail::path::{Path, perihelion_distance_au};
use crate::time::Instant;
use nalgebra::Vector3;

/// A grain, by how it left.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Grain {
    /// Radiation pressure over gravity, >= 0.
    pub beta: f64,
    /// Days from release to the moment that is seen, >= 0.
    pub age_days: f64,
    /// Ejection velocity at release, km/s: away from the Sun, along normal x radial, along the orbit normal.
    pub ejection_km_s: [f64; 3],
}

impl Grain {
    /// A grain that leaves with the nucleus velocity alone.
    pub fn released(beta: f64, age_days: f64) -> Self {
        Grain { beta, age_days, ejection_km_s: [0.0; 3] }
    }
}

/// A comet as it is seen at one time, from which every grain is computed.
#[derive(Clone, Debug)]
pub struct Vista<'a> {
    pub orbit: &'a Orbit,
    /// The moment that is seen: observation less light time.
    pub seen: Instant,
    /// The nucleus at that moment, heliocentric equatorial.
    pub nucleus: State,
    /// The observer, heliocentric equatorial, au.
    pub observer_au: Vector3<f64>,
    /// The plane of the sky at the nucleus.
    pub axes: Axes,
}

impl<'a> Vista<'a> {
    /// The vista of a sky of the comet on `orbit`.
    pub fn of(orbit: &'a Orbit, sky: &Sky) -> Self {
        Vista {
            orbit,
            seen: sky.time.plus_days(-sky.light_time_days),
            nucleus: sky.comet,
            observer_au: sky.observer.position_au,
            axes: sky.axes,
        }
    }

    /// The nucleus at release, `age_days` before the moment seen.
    pub fn release(&self, age_days: f64) -> State {
        self.orbit.place_at(self.seen.plus_days(-age_days)).state
    }

    /// When dust of an age left.
    pub fn released_at(&self, age_days: f64) -> Instant {
        self.seen.plus_days(-age_days)
    }

    /// The grain as it leaves, heliocentric equatorial.
    pub fn start(&self, grain: &Grain) -> State {
        let mut start = self.release(grain.age_days);
        start.velocity_au_d += ejection_au_d(&start, grain.ejection_km_s);
        start
    }

    /// The grain at the moment seen, heliocentric equatorial. One that has met the Sun is computed as if it had
    /// passed; [`Self::fate`] says so.
    pub fn grain(&self, grain: &Grain) -> State {
        propagate(pull_au3_d2(grain.beta), &self.start(grain), grain.age_days)
    }

    /// The way of a grain since it left.
    pub fn path(&self, grain: &Grain) -> Path {
        Path::of(pull_au3_d2(grain.beta), &self.start(grain), grain.age_days)
    }

    /// Where a grain of one beta is that left in a state (no ejection speed added here) so long ago; None if it has
    /// met the Sun.
    pub fn survivor(&self, beta: f64, start: &State, age_days: f64) -> Option<Vector3<f64>> {
        let pull = pull_au3_d2(beta);
        let met = perihelion_distance_au(pull, start) < RADIUS_AU
            && Path::of(pull, start, age_days).least_distance_au < RADIUS_AU;
        (!met).then(|| propagate(pull, start, age_days).position_au)
    }

    /// The grain at the moment seen, as [`Self::grain`], and what is doubtful about it: it has met the Sun, or gone
    /// round it.
    pub fn fate(&self, grain: &Grain) -> (State, Vec<Caution>) {
        let start = self.start(grain);
        let pull = pull_au3_d2(grain.beta);
        let path = Path::of(pull, &start, grain.age_days);
        let mut found = Vec::new();
        if start.position_au.norm() < RADIUS_AU {
            found.push(Caution::GrainStartsInSun);
        } else if path.least_distance_au < RADIUS_AU {
            found.push(Caution::GrainInSun { least_distance_au: path.least_distance_au });
        }
        if path.revolutions > 1.0 {
            found.push(Caution::GrainRevolved { revolutions: path.revolutions });
        }
        (propagate(pull, &start, grain.age_days), found)
    }

    /// Angle of the observer above (+) or below the orbit plane, seen from the nucleus.
    pub fn observer_from_orbit_plane_rad(&self) -> f64 {
        let (normal, to_observer) = (self.orbit.normal(), -self.axes.sight);
        libm::atan2(to_observer.dot(&normal), to_observer.cross(&normal).norm())
    }

    /// Gnomonic offset from the nucleus (xi east, eta north; tangent values) of a heliocentric place; None 90
    /// degrees or more away.
    pub fn offset(&self, position_au: &Vector3<f64>) -> Option<[f64; 2]> {
        tangent::project(&(position_au - self.observer_au), &self.axes)
    }
}

/// What is left of the Sun's pull: GM (1 - beta), au^3/d^2.
pub fn pull_au3_d2(beta: f64) -> f64 {
    SUN_GM_AU3_D2 * (1.0 - beta)
}

/// An ejection velocity (radial, transverse, normal, km/s) in equatorial components, au/day.
pub fn ejection_au_d(start: &State, [radial, transverse, normal]: [f64; 3]) -> Vector3<f64> {
    let out = start.position_au.normalize();
    let up = start.position_au.cross(&start.velocity_au_d).normalize();
    let along = up.cross(&out);
    (out * radial + along * transverse + up * normal) / KM_S_PER_AU_D
}
