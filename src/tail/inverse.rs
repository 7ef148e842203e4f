//! Which grain lands at a place on the sky?
//!
//! Dust that leaves without a speed of its own stays in the orbit plane, so a place on the sky is first followed along
//! the line of sight to the orbit plane. All such dust shares the comet's angular momentum h, so by Binet's equation
//! the pull that leads from release (u0 = 1/r0, outward speed v0) through the point found (u1, an angle D further) is
//! known at once:
//!
//! ```text
//! mu (1 - cos D) = h^2 (u1 - u0 cos D) + h v0 sin D,    beta = 1 - mu / GM
//! ```
//!
//! and one equation in the age is left: the grain must have turned by just D in that time. Its roots are found along
//! the comet's way back, to a micro-radian about the Sun; there may be none, one or several. Near edge-on every line of sight runs along the plane and
//! nothing can be said. Left out: ejection speeds, light time within the tail. Source of the problem: Finson &
//! Probstein 1968; of this way to solve it: none, it is derived above and tested by round trip.

use crate::body::State;
use crate::frame::{half_turn, norm, tangent, turn};
use crate::orbit::conic::SUN_GM_AU3_D2;
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use crate::tail::neck_line::{close_in, walk};
use crate::tail::path::Path;
use nalgebra::Vector3;
use std::f64::consts::{PI, TAU};

/// Sine of the least angle between line of sight and orbit plane, at the observer and at the nucleus: at one degree an
/// error across is already stretched 57 times; at a crossing the point is undefined.
pub const LEAST_SINE_TO_PLANE: f64 = 0.017_452;

/// Betas beyond this are not looked for: no known grain has more.
pub const GREATEST_BETA: f64 = 5.0;

/// Nearer to the nucleus than this, 0.1 arcsec, the age hangs on the last digits of the place.
const LEAST_OFFSET_RAD: f64 = 5e-7;

/// Why no point of the orbit plane, or no grain, belongs to a place on the sky.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Reason {
    /// The orbit plane is seen within a degree of edge-on.
    EdgeOn,
    /// The place is the nucleus as far as arithmetic can tell: nearer than 0.1 arcsec.
    OnNucleus,
    /// The line of sight does not meet the orbit plane in front of the observer.
    MissesPlane,
    /// No dust without a speed of its own gets there within the ages looked through.
    NoGrain,
}

impl Reason {
    pub fn sentence(self) -> &'static str {
        match self {
            Reason::EdgeOn => {
                "The orbit plane is seen within 1 degree of edge-on: grains of many sizes and ages share this line of sight."
            }
            Reason::OnNucleus => "This is the nucleus itself: dust of every size starts here.",
            Reason::MissesPlane => "This line of sight does not meet the orbit plane.",
            Reason::NoGrain => "No dust that left without a speed of its own, within these ages, is seen here.",
        }
    }
}

/// A grain that lands there.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Landing {
    pub beta: f64,
    pub age_days: f64,
    /// Whether beta, and the age, lie within the plan's ranges.
    pub beta_chosen: bool,
    pub age_chosen: bool,
}

/// The grains of zero ejection speed seen at a tangent offset from the nucleus (xi east, eta north), the youngest
/// first; at least one. Ages to the plan's greatest and betas to [`GREATEST_BETA`] are looked through; those outside
/// the plan's own ranges are marked.
///
/// # Errors
/// Why there is none.
pub fn landings(vista: &Vista, offset: [f64; 2], laws: &Tails) -> Result<Vec<Landing>, Reason> {
    if norm(offset) < LEAST_OFFSET_RAD {
        return Err(Reason::OnNucleus);
    }
    let point = Point::of(vista, &in_orbit_plane(vista, offset)?);
    let found: Vec<Landing> = point
        .roots(vista, laws.age_greatest_days)
        .into_iter()
        .map(|(beta, age_days)| Landing {
            beta,
            age_days,
            beta_chosen: (laws.beta_least..=laws.beta_greatest).contains(&beta),
            age_chosen: (laws.age_least_days..=laws.age_greatest_days).contains(&age_days),
        })
        .collect();
    if found.is_empty() { Err(Reason::NoGrain) } else { Ok(found) }
}

/// Where the line of sight at a tangent offset meets the comet's orbit plane, heliocentric equatorial, au.
///
/// # Errors
/// Edge-on, or missed.
pub fn in_orbit_plane(vista: &Vista, [xi, eta]: [f64; 2]) -> Result<Vector3<f64>, Reason> {
    let sight = tangent::unproject(xi, eta, &vista.axes);
    meet_plane(&vista.orbit.normal(), &vista.observer_au, &vista.axes.sight, &sight)
}

/// Where a line of sight meets the plane through the Sun with this unit normal, heliocentric, au; `to_nucleus` and `sight`
/// are unit vectors from the observer.
///
/// # Errors
/// Edge-on, or missed.
pub fn meet_plane(
    normal: &Vector3<f64>,
    observer_au: &Vector3<f64>,
    to_nucleus: &Vector3<f64>,
    sight: &Vector3<f64>,
) -> Result<Vector3<f64>, Reason> {
    let steepness = normal.dot(sight);
    // Near the plane the stretch is as bad whether the observer or the nucleus makes it.
    if steepness.abs() < LEAST_SINE_TO_PLANE || normal.dot(to_nucleus).abs() < LEAST_SINE_TO_PLANE {
        return Err(Reason::EdgeOn);
    }
    let range = -normal.dot(observer_au) / steepness;
    if range <= 0.0 {
        return Err(Reason::MissesPlane);
    }
    Ok(observer_au + sight * range)
}

/// A point of the orbit plane, seen from the Sun.
struct Point {
    normal: Vector3<f64>,
    place: Vector3<f64>,
    distance: f64,
}

/// What an age says of the grain that would pass through the point.
#[derive(Clone, Copy)]
struct Trial {
    age_days: f64,
    /// From release to the point, in the sense of motion, [0, 2 pi).
    angle: f64,
    beta: f64,
    /// Angle turned by now less `angle`: a multiple of 2 pi where the grain is at the point now.
    beyond: f64,
}

impl Point {
    fn of(vista: &Vista, place: &Vector3<f64>) -> Self {
        Point { normal: vista.orbit.normal(), place: *place, distance: place.norm() }
    }

    fn angle(&self, start: &State) -> f64 {
        let r = start.position_au;
        turn(libm::atan2(r.cross(&self.place).dot(&self.normal), r.dot(&self.place)))
    }

    fn trial(&self, age_days: f64, start: &State) -> Trial {
        let angle = self.angle(start);
        let r = start.position_au.norm();
        let outward = start.position_au.dot(&start.velocity_au_d) / r;
        let h = start.position_au.cross(&start.velocity_au_d).norm();
        let (sine, half) = (libm::sin(angle), libm::sin(0.5 * angle));
        // u1 - u0 cos D without its cancellation.
        let rise = (r - self.distance) / (r * self.distance) + 2.0 * half * half / r;
        let mu = h * (h * rise + outward * sine) / (2.0 * half * half);
        let beta = 1.0 - mu / SUN_GM_AU3_D2;
        let sweep = if mu.is_finite() { Path::of(mu, start, age_days).sweep_rad } else { f64::NAN };
        Trial { age_days, angle, beta, beyond: sweep - angle }
    }

    /// (beta, age) of every grain that is at the point now, the youngest first.
    fn roots(&self, vista: &Vista, oldest_days: f64) -> Vec<(f64, f64)> {
        let mut found = Vec::new();
        let mut last: Option<Trial> = None;
        for age_days in self.ages(vista, oldest_days) {
            let next = self.trial(age_days, &vista.release(age_days));
            if let Some(last) = last {
                self.between(vista, &last, &next, &mut found);
            }
            last = Some(next);
        }
        found
    }

    /// The ages tried: the comet's way back in steps of 3 degrees, closer together toward zero, and toward the age at
    /// which the comet had the direction of the point, where beta runs to infinity.
    fn ages(&self, vista: &Vista, oldest_days: f64) -> Vec<f64> {
        /// Halvings of a step toward an end that needs them.
        const CLOSER: u32 = 24;
        let walk = walk(vista, oldest_days);
        let mut ages = Vec::new();
        for pair in walk.windows(2) {
            let [(from, from_state), (to, to_state)] = [pair[0], pair[1]];
            // Going back the angle grows, and falls from a turn to zero where the comet had the point's direction.
            let (before, after) = (self.angle(&from_state), self.angle(&to_state));
            if before > PI && after < PI {
                let edge = close_in([from, to], |age| half_turn(self.angle(&vista.release(age))));
                let closer = (0..CLOSER).map(|step| libm::pow(2.0, -f64::from(step)));
                ages.extend(closer.clone().map(|share| edge + (from - edge) * share));
                ages.extend(closer.rev().map(|share| edge + (to - edge) * share));
            } else if from == 0.0 {
                ages.extend((0..CLOSER).rev().map(|step| to * libm::pow(2.0, -f64::from(step))));
            } else {
                ages.extend((1..=3).map(|third| from + (to - from) * f64::from(third) / 3.0));
            }
        }
        ages
    }

    /// Adds the roots between two neighbouring trials.
    fn between(&self, vista: &Vista, a: &Trial, b: &Trial, found: &mut Vec<(f64, f64)>) {
        let wrapped = (a.angle - b.angle).abs() > PI;
        let count = |trial: &Trial| trial.beyond / TAU;
        if wrapped || !(count(a) - count(b)).is_finite() {
            return;
        }
        let (low, high) = (count(a).min(count(b)), count(a).max(count(b)));
        let mut whole = low.ceil().max(0.0);
        while whole <= high && (high - low) < 4.0 {
            let target = whole * TAU;
            let beyond = |age: f64| self.trial(age, &vista.release(age)).beyond - target;
            let age_days = close_in([a.age_days, b.age_days], beyond);
            let trial = self.trial(age_days, &vista.release(age_days));
            // A sign that changes by a jump is no root.
            let met = (trial.beyond - target).abs() < 1e-6;
            if met && trial.beta <= GREATEST_BETA && trial.beta >= -1e-9 {
                let beta = trial.beta.max(0.0);
                if self.misses_sun(vista, beta, age_days) {
                    found.push((beta, age_days));
                }
            }
            whole += 1.0;
        }
    }

    fn misses_sun(&self, vista: &Vista, beta: f64, age_days: f64) -> bool {
        vista.survivor(beta, &vista.release(age_days), age_days).is_some()
    }
}
