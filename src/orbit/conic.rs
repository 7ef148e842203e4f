//! Where does a body move under an inverse-square pull or push?
//!
//! Two-body motion for every eccentricity and both signs of the force, without a special case: universal
//! variables ([`super::universal`]). [`Orbit`] is a comet's published orbit made ready; [`propagate`] moves
//! any heliocentric state, and [`propagate_with_response`] also tells how the end answers to the start velocity.
//!
//! Units au and days; [`Orbit`] is equatorial (ICRF/J2000), the propagators work in whatever axes the state has.
//! Accuracy: relative 1e-12, or ten times what half a unit in the last place of the input changes, against
//! 50-digit arithmetic (tests/conic.rs): e from 0 to 10, within 1e-12 of 1, repulsive, thousands of revolutions.
//! Left out: perturbations, non-gravitational force, relativity.

use super::elements::Elements;
use super::universal::{Reached, Start};
use crate::body::State;
use crate::error::Error;
use crate::frame::arc::Legs;
use crate::frame::ecliptic_to_equatorial;
use crate::time::Instant;
use nalgebra::{Matrix3, Vector3};

/// Gaussian gravitational constant (IAU 1976), au^1.5 / d.
const GAUSSIAN_K: f64 = 0.017_202_098_95;

/// GM of the Sun for which comet elements are published, au^3/d^2: k squared.
pub const SUN_GM_AU3_D2: f64 = GAUSSIAN_K * GAUSSIAN_K;

/// A comet's orbit about the Sun, ready to compute with.
#[derive(Clone, Debug, PartialEq)]
pub struct Orbit {
    perihelion_time: Instant,
    perihelion_distance_au: f64,
    start: Start,
    /// Unit vector from the Sun to perihelion, equatorial.
    toward_perihelion: Vector3<f64>,
    /// Unit vector along the velocity at perihelion, equatorial.
    along_perihelion: Vector3<f64>,
    normal: Vector3<f64>,
    /// sqrt(mu q (1 + e)): the angular momentum, au^2/d.
    angular_momentum: f64,
    /// The hodograph is a circle: its centre, and what turns a direction into the way from there, au/d.
    hodograph_centre: Vector3<f64>,
    hodograph_turn: Vector3<f64>,
}

/// Where a comet stands on its orbit.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Place {
    /// Heliocentric, equatorial.
    pub state: State,
    /// Universal anomaly and whole revolutions, from which a neighbouring date is found sooner.
    pub anomaly: Anomaly,
}

/// Universal anomaly on an orbit, counted from its perihelion.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Anomaly {
    /// Of the part that is less than a revolution, d/au; a day adds 1/r.
    pub s: f64,
    pub revolutions: f64,
}

impl Orbit {
    /// The orbit that published elements describe.
    ///
    /// # Errors
    /// What [`Elements::validate`] refuses.
    pub fn new(elements: &Elements) -> Result<Self, Error> {
        elements.validate()?;
        let (q, e) = (elements.perihelion_distance_au, elements.eccentricity);
        let (sin_node, cos_node) = libm::sincos(elements.ascending_node_deg.to_radians());
        let (sin_peri, cos_peri) = libm::sincos(elements.argument_of_perihelion_deg.to_radians());
        let (sin_inc, cos_inc) = libm::sincos(elements.inclination_deg.to_radians());
        let toward = Vector3::new(
            cos_peri * cos_node - sin_peri * sin_node * cos_inc,
            cos_peri * sin_node + sin_peri * cos_node * cos_inc,
            sin_peri * sin_inc,
        );
        let along = Vector3::new(
            -sin_peri * cos_node - cos_peri * sin_node * cos_inc,
            -sin_peri * sin_node + cos_peri * cos_node * cos_inc,
            cos_peri * sin_inc,
        );
        let angular_momentum = (SUN_GM_AU3_D2 * q * (1.0 + e)).sqrt();
        let hodograph_radius = SUN_GM_AU3_D2 / angular_momentum;
        let (along_perihelion, normal) =
            (ecliptic_to_equatorial(&along), ecliptic_to_equatorial(&toward.cross(&along)));
        Ok(Orbit {
            perihelion_time: elements.perihelion_time.instant(),
            perihelion_distance_au: q,
            start: Start { mu: SUN_GM_AU3_D2, distance: q, eta: 0.0, binding: SUN_GM_AU3_D2 * (1.0 - e) / q },
            toward_perihelion: ecliptic_to_equatorial(&toward),
            along_perihelion,
            normal,
            angular_momentum,
            hodograph_centre: along_perihelion * (hodograph_radius * e),
            hodograph_turn: normal * hodograph_radius,
        })
    }

    pub fn perihelion_time(&self) -> Instant {
        self.perihelion_time
    }

    pub fn perihelion_distance_au(&self) -> f64 {
        self.perihelion_distance_au
    }

    /// Period of revolution, days; None for an open orbit.
    pub fn period_days(&self) -> Option<f64> {
        self.start.period_days()
    }

    /// Unit vector of the orbital angular momentum, equatorial.
    pub fn normal(&self) -> Vector3<f64> {
        self.normal
    }

    /// The comet at an instant.
    pub fn place_at(&self, time: Instant) -> Place {
        self.place_after(self.days_from_perihelion(time))
    }

    /// The comet that many days after perihelion.
    pub fn place_after(&self, days: f64) -> Place {
        self.place(&self.start.after(days))
    }

    /// The velocity, au/d, at a place on the orbit, given its distance from the Sun.
    pub fn velocity_at(&self, position_au: &Vector3<f64>, distance_au: f64) -> Vector3<f64> {
        self.hodograph_centre + self.hodograph_turn.cross(position_au) * (1.0 / distance_au)
    }

    /// The comet where its universal anomaly, whole revolutions included, has that value, and days from perihelion.
    pub fn at_anomaly(&self, whole: f64) -> (State, f64) {
        let turn =
            if self.start.binding > 0.0 { std::f64::consts::TAU / self.start.binding.sqrt() } else { f64::INFINITY };
        let revolutions = (whole / turn).round();
        let s = if revolutions == 0.0 { whole } else { whole - revolutions * turn };
        let g = self.start.universal(s);
        let rest_days = self.perihelion_distance_au * g[1] + SUN_GM_AU3_D2 * g[3];
        let days = rest_days + if revolutions == 0.0 { 0.0 } else { revolutions * self.period_days().unwrap_or(0.0) };
        (self.place(&Reached { s, revolutions, rest_days, g }).state, days)
    }

    /// The universal anomaly, whole revolutions included.
    pub fn whole_anomaly(&self, anomaly: &Anomaly) -> f64 {
        if anomaly.revolutions == 0.0 {
            return anomaly.s;
        }
        anomaly.s + anomaly.revolutions * std::f64::consts::TAU / self.start.binding.sqrt()
    }

    /// Legs of the true anomaly, for several angles at a time.
    pub fn true_anomaly(&self, position_au: &Vector3<f64>) -> Legs {
        Legs { opposite: position_au.dot(&self.along_perihelion), adjacent: position_au.dot(&self.toward_perihelion) }
    }

    /// Angle from perihelion to a place on the orbit, seen from the Sun: [-pi, pi], negative before perihelion.
    pub fn true_anomaly_rad(&self, position_au: &Vector3<f64>) -> f64 {
        self.true_anomaly(position_au).arc_rad()
    }

    /// Days from the elements' perihelion, negative before it.
    pub fn days_from_perihelion(&self, time: Instant) -> f64 {
        time.tdb_days() - self.perihelion_time.tdb_days()
    }

    /// In the perifocal plane x = q - mu G2, y = h G1, with r = q + e mu G2.
    fn place(&self, reached: &Reached) -> Place {
        let g = &reached.g;
        let r = self.start.distance_at(g);
        let x = self.perihelion_distance_au - SUN_GM_AU3_D2 * g[2];
        let y = self.angular_momentum * g[1];
        let vx = -SUN_GM_AU3_D2 * g[1] / r;
        let vy = self.angular_momentum * g[0] / r;
        Place {
            state: State {
                position_au: self.toward_perihelion * x + self.along_perihelion * y,
                velocity_au_d: self.toward_perihelion * vx + self.along_perihelion * vy,
            },
            anomaly: Anomaly { s: reached.s, revolutions: reached.revolutions },
        }
    }
}

/// How an end state answers to the velocity at the start.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Response {
    /// d(end position) / d(start velocity), days; row = component of the end.
    pub position: Matrix3<f64>,
    /// d(end velocity) / d(start velocity); row = component of the end.
    pub velocity: Matrix3<f64>,
}

/// The state `days` later (negative: earlier) under the acceleration -mu r / r^3.
///
/// `mu` may be negative (a push) or zero; the start must not lie at the centre.
pub fn propagate(mu_au3_d2: f64, from: &State, days: f64) -> State {
    let start = start_of(mu_au3_d2, from);
    Lagrange::of(&start, &start.after(days)).apply(from)
}

/// The same by the slow solver alone, which brackets the root and cannot fail; the two are compared in tests.
pub fn propagate_bracketed(mu_au3_d2: f64, from: &State, days: f64) -> State {
    let start = start_of(mu_au3_d2, from);
    Lagrange::of(&start, &start.after_bracketed(days)).apply(from)
}

/// The state `days` later and its derivative with respect to the start velocity.
///
/// Differentiating t(s) = days at fixed `days`, with dG_n/ds = G_(n-1) and dG_n/dB = (n G_(n+2) - s G_(n+1)) / 2.
pub fn propagate_with_response(mu_au3_d2: f64, from: &State, days: f64) -> (State, Response) {
    let start = start_of(mu_au3_d2, from);
    let Start { mu, distance: r0, eta: eta0, binding } = start;
    let reached = start.after(days);
    let g = reached.g;
    let (r0_vec, v0_vec) = (from.position_au, from.velocity_au_d);

    // G3, G4 and G5 grow with the whole anomaly, revolutions included; G0 to G2 repeat.
    let whole = start.whole_anomaly(&reached);
    let g3 = if reached.revolutions == 0.0 { g[3] } else { (whole - g[1]) / binding };
    let [g4, g5] = start.universal_high(whole, &[g[0], g[1], g[2], g3]);
    let slope_1 = 0.5 * (g3 - whole * g[2]);
    let slope_2 = 0.5 * (2.0 * g4 - whole * g3);
    let slope_3 = 0.5 * (3.0 * g5 - whole * g4);
    let slope_0 = -0.5 * whole * g[1];

    let r = start.distance_at(&g);
    let binding_by_v = v0_vec * -2.0;
    let eta_by_v = r0_vec;
    let time_by_binding = r0 * slope_1 + eta0 * slope_2 + mu * slope_3;
    let s_by_v = (eta_by_v * g[2] + binding_by_v * time_by_binding) / -r;
    let g0_by_v = s_by_v * (-binding * g[1]) + binding_by_v * slope_0;
    let g1_by_v = s_by_v * g[0] + binding_by_v * slope_1;
    let g2_by_v = s_by_v * g[1] + binding_by_v * slope_2;
    let r_by_v = g0_by_v * r0 + eta_by_v * g[1] + g1_by_v * eta0 + g2_by_v * mu;

    let f_by_v = g2_by_v * (-mu / r0);
    let g_by_v = g1_by_v * r0 + eta_by_v * g[2] + g2_by_v * eta0;
    let f_rate_by_v = g1_by_v * (-mu / (r * r0)) + r_by_v * (mu * g[1] / (r * r * r0));
    let g_rate_by_v = g2_by_v * (-mu / r) + r_by_v * (mu * g[2] / (r * r));

    let lagrange = Lagrange::of(&start, &reached);
    let identity = Matrix3::identity();
    let response = Response {
        position: identity * lagrange.g + r0_vec * f_by_v.transpose() + v0_vec * g_by_v.transpose(),
        velocity: identity * lagrange.g_rate + r0_vec * f_rate_by_v.transpose() + v0_vec * g_rate_by_v.transpose(),
    };
    (lagrange.apply(from), response)
}

fn start_of(mu: f64, from: &State) -> Start {
    let distance = from.position_au.norm();
    Start {
        mu,
        distance,
        eta: from.position_au.dot(&from.velocity_au_d),
        binding: 2.0 * mu / distance - from.velocity_au_d.norm_squared(),
    }
}

/// Lagrange's coefficients: r = f r0 + g v0, v = f_rate r0 + g_rate v0.
struct Lagrange {
    f: f64,
    g: f64,
    f_rate: f64,
    g_rate: f64,
}

impl Lagrange {
    fn of(start: &Start, reached: &Reached) -> Self {
        let g = &reached.g;
        let r = start.distance_at(g);
        // Two forms of g that are equal; each cancels where the other does not (over long times on an
        // ellipse, and past the centre on a fast fly-by).
        let (near, turned) = (start.distance * g[1], start.eta * g[2]);
        let fallen = start.mu * g[3];
        let by_time = reached.rest_days.abs() + fallen.abs() < near.abs() + turned.abs();
        Lagrange {
            f: 1.0 - start.mu * g[2] / start.distance,
            g: if by_time { reached.rest_days - fallen } else { near + turned },
            f_rate: -start.mu * g[1] / (r * start.distance),
            g_rate: 1.0 - start.mu * g[2] / r,
        }
    }

    fn apply(&self, from: &State) -> State {
        State {
            position_au: from.position_au * self.f + from.velocity_au_d * self.g,
            velocity_au_d: from.position_au * self.f_rate + from.velocity_au_d * self.g_rate,
        }
    }
}
