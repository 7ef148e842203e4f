//! How do the quantities of a comet run over a season?

use super::stretch::Stretch;
use crate::error::Error;
use crate::sky::Sky;
use crate::sky::watch::Watch;
use crate::time::Instant;
use std::f64::consts::TAU;

/// A quantity that is drawn over dates.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Curve {
    OrbitPlane,
    Antisolar,
    NegativeVelocity,
    PhaseAngle,
    Elongation,
    SunDistance,
    ObserverDistance,
    /// What the caller's law of brightness gives.
    Magnitude,
}

impl Curve {
    pub const ALL: [Curve; 8] = [
        Curve::OrbitPlane,
        Curve::Antisolar,
        Curve::NegativeVelocity,
        Curve::PhaseAngle,
        Curve::Elongation,
        Curve::SunDistance,
        Curve::ObserverDistance,
        Curve::Magnitude,
    ];

    /// The `sky` column that holds the same quantity; the magnitude has a key of its own.
    pub fn key(self) -> &'static str {
        match self {
            Curve::OrbitPlane => "observer_from_orbit_plane_deg",
            Curve::Antisolar => "antisolar_position_angle_deg",
            Curve::NegativeVelocity => "negative_velocity_position_angle_deg",
            Curve::PhaseAngle => "phase_angle_deg",
            Curve::Elongation => "elongation_deg",
            Curve::SunDistance => "sun_distance_au",
            Curve::ObserverDistance => "observer_distance_au",
            Curve::Magnitude => "magnitude",
        }
    }

    pub fn is_position_angle(self) -> bool {
        matches!(self, Curve::Antisolar | Curve::NegativeVelocity)
    }

    /// Radians or au, as the sky has them; not a number where the quantity does not exist.
    fn value(self, sky: &Sky, magnitude: &mut impl FnMut(&Sky) -> Option<f64>) -> f64 {
        let maybe = |value: Option<f64>| value.unwrap_or(f64::NAN);
        match self {
            Curve::OrbitPlane => sky.observer_from_orbit_plane_rad,
            Curve::Antisolar => maybe(sky.antisolar_position_angle_rad),
            Curve::NegativeVelocity => maybe(sky.negative_velocity_position_angle_rad),
            Curve::PhaseAngle => sky.phase_angle_rad,
            Curve::Elongation => sky.elongation_rad,
            Curve::SunDistance => sky.sun_distance_au,
            Curve::ObserverDistance => sky.observer_distance_au,
            Curve::Magnitude => maybe(magnitude(sky)),
        }
    }
}

/// Quantities at dates evenly over a stretch.
#[derive(Clone, Debug, PartialEq)]
pub struct Series {
    pub times: Vec<Instant>,
    pub columns: Vec<Column>,
}

/// One quantity at the dates of a series: radians, au or magnitudes; not a number where it does not exist. Position
/// angles run on across north: two neighbours differ by less than half a turn.
#[derive(Clone, Debug, PartialEq)]
pub struct Column {
    pub curve: Curve,
    pub values: Vec<f64>,
}

impl Series {
    /// The curves at `count` dates for the observer of `watch`.
    ///
    /// # Errors
    /// None for a [`Stretch`]; those of [`Watch::sky_at`].
    pub fn of(
        watch: &mut Watch,
        stretch: &Stretch,
        count: usize,
        curves: &[Curve],
        mut magnitude: impl FnMut(&Sky) -> Option<f64>,
    ) -> Result<Series, Error> {
        let times: Vec<Instant> = stretch.times(count).collect();
        let mut columns: Vec<Column> =
            curves.iter().map(|&curve| Column { curve, values: Vec::with_capacity(times.len()) }).collect();
        for &time in &times {
            let sky = watch.sky_at(time)?;
            for Column { curve, values } in &mut columns {
                values.push(curve.value(&sky, &mut magnitude));
            }
        }
        for Column { curve, values } in &mut columns {
            if curve.is_position_angle() {
                unwrap(values);
            }
        }
        Ok(Series { times, columns })
    }
}

/// Adds whole turns so that an angle runs on; gaps are bridged.
pub fn unwrap(values: &mut [f64]) {
    let mut last = f64::NAN;
    for value in values.iter_mut().filter(|value| !value.is_nan()) {
        if !last.is_nan() {
            *value += ((last - *value) / TAU).round() * TAU;
        }
        last = *value;
    }
}
