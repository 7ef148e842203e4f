//! Which quantities have a curve on the ribbon, on which scale, and how are they written?
//!
//! Values are shown in degrees, au and magnitudes. Quantities that are compared share a scale: the two
//! position angles (their curves meet where the directions do), phase angle and elongation, the two distances.
//! A position angle is unwrapped: it runs on past 360 instead of jumping, and its scale is written modulo 360.

use super::super::quantity::figures;
use crate::season::series::{Column, Curve};
use std::f64::consts::TAU;

/// Quantities of one kind share a scale.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Kind {
    Plane,
    PositionAngle,
    Angle,
    Distance,
    Magnitude,
}

/// The values at the foot and at the head of the plot; not numbers where there is nothing to scale.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Scale {
    pub foot: f64,
    pub head: f64,
}

/// Upper ends of scales.
const ANGLE_ENDS_DEG: [f64; 12] = [0.5, 1.0, 2.0, 5.0, 10.0, 20.0, 30.0, 45.0, 60.0, 90.0, 120.0, 180.0];
const DISTANCE_ENDS_AU: [f64; 10] = [0.01, 0.02, 0.05, 0.1, 0.2, 0.5, 1.0, 2.0, 3.0, 5.0];
/// Values within this part of the greatest have a scale of their own ends.
const NARROW: f64 = 0.3;
/// But one that spans no less than this part of it, so that a constant looks constant.
const LEAST_SPAN: f64 = 1e-3;
/// A scale of position angles is no narrower than this, degrees, so that small wavering looks small.
const LEAST_TURN_DEG: f64 = 40.0;

/// What is drawn unless a person chooses otherwise.
pub const USUAL: [Curve; 4] = [Curve::OrbitPlane, Curve::Antisolar, Curve::NegativeVelocity, Curve::Elongation];

/// The curve of a key; None for any other word.
pub fn named(key: &str) -> Option<Curve> {
    Curve::ALL.into_iter().find(|curve| curve.key() == key)
}

/// The name at the end of the curve.
pub fn words(curve: Curve) -> &'static str {
    match curve {
        Curve::OrbitPlane => "orbit-plane angle",
        Curve::Antisolar => "antisolar",
        Curve::NegativeVelocity => "negative velocity",
        Curve::PhaseAngle => "phase angle",
        Curve::Elongation => "elongation",
        Curve::SunDistance => "distance to the Sun",
        Curve::ObserverDistance => "to the observer",
        Curve::Magnitude => "total magnitude",
    }
}

fn kind(curve: Curve) -> Kind {
    match curve {
        Curve::OrbitPlane => Kind::Plane,
        Curve::Antisolar | Curve::NegativeVelocity => Kind::PositionAngle,
        Curve::PhaseAngle | Curve::Elongation => Kind::Angle,
        Curve::SunDistance | Curve::ObserverDistance => Kind::Distance,
        Curve::Magnitude => Kind::Magnitude,
    }
}

/// A value of a series as it is shown: degrees, au or magnitudes.
pub fn shown(curve: Curve, value: f64) -> f64 {
    if matches!(kind(curve), Kind::Distance | Kind::Magnitude) { value } else { value.to_degrees() }
}

/// Name and value as people read them; the value as a series holds it.
pub fn said(curve: Curve, value: f64) -> String {
    let words = words(curve);
    let value = shown(curve, value);
    match kind(curve) {
        Kind::Magnitude if !value.is_finite() => format!("{words} not known"),
        _ if !value.is_finite() => format!("{words} does not exist"),
        Kind::Plane => format!("{words} {}°", signed(value, 1)),
        Kind::PositionAngle => {
            let tenths = (libm::round(value * 10.0) as i64).rem_euclid(3600);
            format!("{words} {}.{}°", tenths / 10, tenths % 10)
        }
        Kind::Angle => format!("{words} {value:.1}°"),
        Kind::Distance if curve == Curve::ObserverDistance => format!("distance to the observer {value:.3} au"),
        Kind::Distance => format!("{words} {value:.3} au"),
        Kind::Magnitude => format!("{words} {}", signed(value, 1)),
    }
}

impl Scale {
    /// The scale that holds the values of all columns that share this curve's; the position angles as `columns` of
    /// [`brought_near`] have them.
    pub fn of(curve: Curve, columns: &[Column]) -> Scale {
        let kind = kind(curve);
        let (mut least, mut most) = (f64::INFINITY, f64::NEG_INFINITY);
        for column in columns.iter().filter(|column| self::kind(column.curve) == kind) {
            for value in column.values.iter().map(|&value| shown(curve, value)).filter(|value| value.is_finite()) {
                least = least.min(value);
                most = most.max(value);
            }
        }
        if least > most {
            return Scale { foot: f64::NAN, head: f64::NAN };
        }
        match kind {
            Kind::Plane | Kind::Angle | Kind::Distance if is_narrow(least, most) => snug(least, most),
            Kind::Plane => {
                let head = end(most.max(-least), &ANGLE_ENDS_DEG);
                Scale { foot: -head, head }
            }
            Kind::PositionAngle => {
                let middle = 0.5 * (least + most);
                let half = (0.52 * (most - least)).max(0.5 * LEAST_TURN_DEG);
                Scale {
                    foot: libm::floor((middle - half) / 10.0) * 10.0,
                    head: libm::ceil((middle + half) / 10.0) * 10.0,
                }
            }
            Kind::Angle => Scale { foot: 0.0, head: end(most, &ANGLE_ENDS_DEG) },
            Kind::Distance => Scale { foot: 0.0, head: end(most, &DISTANCE_ENDS_AU) },
            // Brighter is higher.
            Kind::Magnitude => Scale { foot: libm::floor(most) + 1.0, head: libm::ceil(least) - 1.0 },
        }
    }

    /// Whether the middle of the plot is zero.
    pub fn has_zero_in_the_middle(&self) -> bool {
        self.foot == -self.head
    }

    /// Whether there was any value to make a scale for.
    pub fn has_values(&self) -> bool {
        self.foot.is_finite()
    }

    /// 0 at the foot, 1 at the head; `value` as a series holds it.
    pub fn share(&self, curve: Curve, value: f64) -> f64 {
        (shown(curve, value) - self.foot) / (self.head - self.foot)
    }

    /// The ends of the scale, as a label says them.
    pub fn range(&self, curve: Curve) -> String {
        let Scale { foot, head } = *self;
        let short = |value: f64| short(value, (head - foot).abs());
        match kind(curve) {
            _ if !self.has_values() => "not known".to_owned(),
            Kind::Plane if self.has_zero_in_the_middle() => format!("±{}°", short(head)),
            Kind::Plane => format!("{} to {}°", short(foot), short(head)),
            // More than a turn cannot be told from its ends.
            Kind::PositionAngle if head - foot > 360.0 => {
                format!("{} turns", figures(libm::round((head - foot) / 36.0) / 10.0))
            }
            Kind::PositionAngle => format!("{}–{}°", whole_turn(foot), whole_turn(head)),
            Kind::Angle => format!("{}–{}°", short(foot), short(head)),
            Kind::Distance => format!("{}–{}\u{a0}au", short(foot), short(head)),
            Kind::Magnitude => format!("{}–{}", short(foot), short(head)),
        }
    }

    /// Numbers beside the foot, the middle and the head of the scale.
    pub fn numbers(&self, curve: Curve) -> [String; 3] {
        if !self.has_values() {
            return [const { String::new() }; 3];
        }
        let middle = 0.5 * (self.foot + self.head);
        let short = |value: f64| short(value, (self.head - self.foot).abs());
        [self.foot, middle, self.head].map(|value| match kind(curve) {
            Kind::Plane | Kind::Angle => short(value) + "°",
            Kind::PositionAngle => format!("{}°", whole_turn(value)),
            Kind::Distance | Kind::Magnitude => short(value),
        })
    }
}

/// Moves the negative-velocity angles of a series by whole turns to lie as near to the antisolar ones as they can, so
/// that the two curves meet where the directions do.
pub fn brought_near(columns: &mut [Column]) {
    let Some(antisolar) = columns.iter().find(|column| column.curve == Curve::Antisolar) else { return };
    let others = antisolar.values.clone();
    let Some(column) = columns.iter_mut().find(|column| column.curve == Curve::NegativeVelocity) else { return };
    let (mut sum, mut count) = (0.0, 0.0);
    for (one, other) in column.values.iter().zip(&others) {
        if one.is_finite() && other.is_finite() {
            sum += other - one;
            count += 1.0;
        }
    }
    if count > 0.0 {
        let turns = TAU * libm::round(sum / count / TAU);
        column.values.iter_mut().for_each(|value| *value += turns);
    }
}

/// Whether values lie so close together, away from zero, that a scale from zero would show a flat line.
fn is_narrow(least: f64, most: f64) -> bool {
    (least > 0.0) == (most > 0.0) && most - least < NARROW * most.abs().max(least.abs())
}

/// A scale just around the values, in steps of 1, 2 or 5 times a power of ten, a few of them.
fn snug(least: f64, most: f64) -> Scale {
    let span = (most - least).max(LEAST_SPAN * most.abs().max(least.abs()));
    let step = end(span / 4.0, &[]);
    let (foot, head) = (libm::floor(least / step) * step, libm::ceil(most / step) * step);
    Scale { foot, head: head.max(foot + step) }
}

/// The first of the ends that is no smaller than `most`; beyond the last, the next of 1, 2 and 5 times a power of ten.
fn end(most: f64, ends: &[f64]) -> f64 {
    if let Some(&end) = ends.iter().find(|&&end| most <= end) {
        return end;
    }
    let decade = libm::pow(10.0, libm::floor(libm::log10(most)));
    [1.0, 2.0, 5.0].into_iter().map(|step| step * decade).find(|&end| most <= end).unwrap_or(10.0 * decade)
}

fn whole_turn(degrees: f64) -> i64 {
    (libm::round(degrees) as i64).rem_euclid(360)
}

/// A value in as many digits as a scale of this span needs, without idle zeros.
fn short(value: f64, span: f64) -> String {
    let decimals = libm::ceil(2.0 - libm::log10(span)).clamp(0.0, 9.0) as usize;
    let text = signed(value, decimals);
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// A number with a typographic minus sign, as wide as the digits.
fn signed(value: f64, decimals: usize) -> String {
    let text = format!("{:.decimals$}", value.abs());
    if value < 0.0 && text.bytes().any(|digit| (b'1'..=b'9').contains(&digit)) { format!("−{text}") } else { text }
}
