//! How much light does dust of one size and age send, and how fast did it leave?
//!
//! The laws of [`super::law`] made ready to compute with. All weights are relative. The light of a grain is its cross
//! section; illumination and phase at the grain's own place are left out.
//!
//! Sizes: dn/ds ~ s^-a, light ~ s^2, and s = C / beta, |ds/dbeta| = C / beta^2, so that
//!
//! ```text
//! light per beta ~ s^(2 - a) |ds/dbeta| ~ beta^(a - 4)
//! ```
//!
//! whatever density and pressure efficiency are; it is scaled to 1 over the chosen range. Release: r^-p out to the
//! cut-off distance (r in au, 1 at 1 au), zero beyond it and before the start; an outburst multiplies that by
//! 1 + (strength - 1) exp(-4 ln 2 ((t - middle) / width)^2). Speed: centre v1 beta^b r^-c, Gaussian about it, cut off
//! at zero and at three standard deviations; directions evenly over the solid angle of a cone about the sunward one.

use crate::error::{Error, Kind, Place};
use crate::tail::grain::Vista;
use crate::tail::law::Tails;
use std::f64::consts::{LN_2, SQRT_2, TAU};

/// The laws of one plan, made ready. Cheap to make but for a table of about a thousand numbers.
#[derive(Clone, Debug)]
pub struct Weights {
    laws: Tails,
    /// 1 over the integral of beta^(a - 4) over the chosen range.
    per_beta: f64,
    cone_cosine: f64,
    /// The cumulative Gaussian at even steps between its cut-offs, from 0 to 1; empty without spread.
    speeds: Vec<f64>,
    /// The cut-offs, in standard deviations.
    speed_limits: [f64; 2],
}

/// Where the Gaussian of the speeds is cut off, in standard deviations.
const SPEED_CUT: f64 = 3.0;
/// Steps of its table: the speed is then right to 2e-5 standard deviations.
const SPEED_STEPS: usize = 1024;

impl Weights {
    /// The weights of valid laws (see [`Tails::validate`]).
    pub fn of(laws: &Tails) -> Self {
        let spread = laws.ejection_spread;
        let speed_limits = if spread > 0.0 { [-(1.0 / spread).min(SPEED_CUT), SPEED_CUT] } else { [0.0, 0.0] };
        Weights {
            laws: laws.clone(),
            per_beta: 1.0 / power_integral(laws.size_exponent - 4.0, laws.beta_least, laws.beta_greatest),
            cone_cosine: libm::cos(laws.ejection_cone_deg.to_radians()),
            speeds: if spread > 0.0 { cumulative(speed_limits) } else { Vec::new() },
            speed_limits,
        }
    }

    /// The laws themselves.
    pub fn laws(&self) -> &Tails {
        &self.laws
    }

    /// Rate of release at a distance and a time from perihelion, per day: 1 on a quiet day at 1 au.
    pub fn release_rate(&self, sun_distance_au: f64, days_from_perihelion: f64) -> f64 {
        let laws = &self.laws;
        let early = laws.activity_start_days.is_some_and(|start| days_from_perihelion < start);
        if early || sun_distance_au > laws.activity_cutoff_au {
            return 0.0;
        }
        let quiet = libm::pow(sun_distance_au, -laws.activity_exponent);
        let Some(outburst) = &laws.outburst else { return quiet };
        let widths = (days_from_perihelion - outburst.middle_days) / outburst.width_days;
        quiet * (1.0 + (outburst.strength - 1.0) * libm::exp(-4.0 * LN_2 * widths * widths))
    }

    /// Light per unit of beta, 1 in all over the chosen range and zero outside it.
    pub fn light_per_beta(&self, beta: f64) -> f64 {
        if !(self.laws.beta_least..=self.laws.beta_greatest).contains(&beta) {
            return 0.0;
        }
        self.per_beta * libm::pow(beta, self.laws.size_exponent - 4.0)
    }

    /// Share of the light that comes from betas between two values, 0 to 1: the integral of [`Self::light_per_beta`].
    pub fn light_between(&self, low: f64, high: f64) -> f64 {
        let [low, high] = [low, high].map(|beta| beta.clamp(self.laws.beta_least, self.laws.beta_greatest));
        if low >= high { 0.0 } else { self.per_beta * power_integral(self.laws.size_exponent - 4.0, low, high) }
    }

    /// Light per unit of beta and per day of age, of dust released at that distance and time.
    pub fn light(&self, beta: f64, sun_distance_au: f64, days_from_perihelion: f64) -> f64 {
        self.light_per_beta(beta) * self.release_rate(sun_distance_au, days_from_perihelion)
    }

    /// Centre of the ejection speeds at release, km/s.
    pub fn mean_speed_km_s(&self, beta: f64, sun_distance_au: f64) -> f64 {
        let laws = &self.laws;
        laws.ejection_speed_km_s * libm::pow(beta, laws.ejection_beta_exponent) * self.slowing(sun_distance_au)
    }

    /// What the distance at release makes of the centre of the speeds: 1 at 1 au.
    pub fn slowing(&self, sun_distance_au: f64) -> f64 {
        libm::pow(sun_distance_au, -self.laws.ejection_distance_exponent)
    }

    /// The ejection velocity that a point of the unit cube stands for, over the centre of the speeds: radial away
    /// from the Sun, along normal x radial, along the orbit normal. Even points of the cube give the law.
    pub fn ejection(&self, [speed, polar, turn]: [f64; 3]) -> [f64; 3] {
        let size = self.speed_factor(speed);
        let sunward = 1.0 - polar * (1.0 - self.cone_cosine);
        let across = (1.0 - sunward * sunward).max(0.0).sqrt() * size;
        let (sine, cosine) = libm::sincos(TAU * turn);
        [-sunward * size, across * cosine, across * sine]
    }

    /// Mean of [`Self::ejection`] along the radial axis (the other two vanish): zero when dust leaves in every direction.
    pub fn mean_radial_ejection(&self) -> f64 {
        let [low, high] = self.speed_limits;
        let bell = |z: f64| libm::exp(-0.5 * z * z) / TAU.sqrt();
        let shift = if low < high { (bell(low) - bell(high)) / (normal(high) - normal(low)) } else { 0.0 };
        -0.5 * (1.0 + self.cone_cosine) * (1.0 + self.laws.ejection_spread * shift)
    }

    /// Variances of [`Self::ejection`] along its three axes.
    pub fn ejection_variances(&self) -> [f64; 3] {
        let [low, high] = self.speed_limits;
        let bell = |z: f64| libm::exp(-0.5 * z * z) / TAU.sqrt();
        let (spread, cosine) = (self.laws.ejection_spread, self.cone_cosine);
        // Mean square of the speed over its centre: 1 + 2 spread <z> + spread^2 <z^2> of the Gaussian cut off.
        let square = if low < high {
            let whole = normal(high) - normal(low);
            let shift = (bell(low) - bell(high)) / whole;
            1.0 + 2.0 * spread * shift + spread * spread * (1.0 + (low * bell(low) - high * bell(high)) / whole)
        } else {
            1.0
        };
        // Mean square of the cosine over the cone.
        let along = (1.0 + cosine + cosine * cosine) / 3.0;
        let mean = self.mean_radial_ejection();
        let across = 0.5 * square * (1.0 - along);
        [(square * along - mean * mean).max(0.0), across, across]
    }

    /// Greatest of the speeds over their centre.
    pub fn greatest_speed_factor(&self) -> f64 {
        1.0 + self.laws.ejection_spread * self.speed_limits[1]
    }

    /// Speed over its centre, by the share (0 to 1) of grains that are slower.
    fn speed_factor(&self, share: f64) -> f64 {
        if self.speeds.is_empty() {
            return 1.0;
        }
        let upper = self.speeds.partition_point(|&below| below <= share).clamp(1, SPEED_STEPS);
        let (a, b) = (self.speeds[upper - 1], self.speeds[upper]);
        let step = (upper - 1) as f64 + ((share - a) / (b - a)).clamp(0.0, 1.0);
        let [low, high] = self.speed_limits;
        1.0 + self.laws.ejection_spread * (low + (high - low) * step / SPEED_STEPS as f64)
    }

    /// The spans of age, days, youngest first, in which dust left: inside the chosen ages, within the cut-off
    /// distance, after the start.
    ///
    /// # Errors
    /// Nothing left in any of the chosen ages.
    pub fn release_spans(&self, vista: &Vista) -> Result<Vec<[f64; 2]>, Error> {
        let laws = &self.laws;
        let now = vista.orbit.days_from_perihelion(vista.seen);
        let youngest = laws.age_least_days;
        let oldest =
            laws.activity_start_days.map_or(laws.age_greatest_days, |start| laws.age_greatest_days.min(now - start));
        let mut spans = Vec::new();
        if youngest < oldest {
            match (
                self.days_within_cutoff(vista, (now - youngest).abs().max((now - oldest).abs())),
                vista.orbit.period_days(),
            ) {
                (Within::Never, _) => {}
                (Within::Always, _) => spans.push([youngest, oldest]),
                (Within::About(half), None) => spans.push([(now - half).max(youngest), (now + half).min(oldest)]),
                (Within::About(half), Some(period)) => {
                    let mut passage = ((now - youngest + half) / period).floor() * period;
                    while now - passage - half <= oldest {
                        spans.push([(now - passage - half).max(youngest), (now - passage + half).min(oldest)]);
                        passage -= period;
                    }
                }
            }
            spans.retain(|[young, old]| young < old);
        }
        if spans.is_empty() {
            let found = format!(
                "no release of dust in the ages {youngest} to {} days (nearest the Sun: {:.3} au)",
                laws.age_greatest_days,
                vista.orbit.perihelion_distance_au()
            );
            let allowed = "a cut-off distance, a start and ages between which some dust leaves".to_owned();
            return Err(Error::new(Kind::Range, Place::Field("tails.activity_cutoff_au".into()), found, allowed));
        }
        Ok(spans)
    }

    /// For how many days before and after each perihelion the comet is within the cut-off distance, where only times
    /// up to `most_days` from the elements' perihelion matter.
    fn days_within_cutoff(&self, vista: &Vista, most_days: f64) -> Within {
        let distance =
            |days: f64| vista.orbit.place_at(vista.orbit.perihelion_time().plus_days(days)).state.position_au.norm();
        let cutoff = self.laws.activity_cutoff_au;
        if vista.orbit.perihelion_distance_au() >= cutoff {
            return Within::Never;
        }
        let half_turn = vista.orbit.period_days().map_or(f64::INFINITY, |period| 0.5 * period);
        let (mut inside, mut outside) = (0.0, most_days.min(half_turn));
        if distance(outside) <= cutoff {
            return Within::Always;
        }
        // Down to a few microseconds; place_at itself is no sharper.
        for _ in 0..60 {
            let middle = 0.5 * (inside + outside);
            if distance(middle) <= cutoff {
                inside = middle;
            } else {
                outside = middle;
            }
        }
        Within::About(inside)
    }
}

/// When the comet is within the cut-off distance.
enum Within {
    Never,
    Always,
    /// So many days before and after each perihelion.
    About(f64),
}

/// Integral of x^k from `low` to `high`, both above 0, also where k is near -1.
fn power_integral(k: f64, low: f64, high: f64) -> f64 {
    let (n, span) = (k + 1.0, libm::log(high / low));
    let scaled = if (n * span).abs() < 1e-9 { span } else { libm::expm1(n * span) / n };
    libm::pow(low, n) * scaled
}

/// The cumulative standard normal distribution.
fn normal(z: f64) -> f64 {
    0.5 * libm::erfc(-z / SQRT_2)
}

/// The same at even steps between two limits, scaled to run from 0 to 1.
fn cumulative([low, high]: [f64; 2]) -> Vec<f64> {
    let (base, whole) = (normal(low), normal(high) - normal(low));
    (0..=SPEED_STEPS).map(|k| (normal(low + (high - low) * k as f64 / SPEED_STEPS as f64) - base) / whole).collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::tail::law::Outburst;

    fn weights(change: impl Fn(&mut Tails)) -> Weights {
        let mut laws = Tails::default();
        change(&mut laws);
        laws.validate().expect("laws in range");
        Weights::of(&laws)
    }

    /// Midpoint rule with even steps of the logarithm.
    fn quadrature(low: f64, high: f64, f: impl Fn(f64) -> f64) -> f64 {
        let steps = 20_000;
        let ratio = libm::log(high / low) / f64::from(steps);
        (0..steps).map(|k| low * libm::exp((f64::from(k) + 0.5) * ratio)).map(|x| f(x) * x * ratio).sum()
    }

    #[test]
    fn light_per_beta_is_the_size_law_through_the_change_of_variable() {
        for a in [1.0, 2.7, 3.0, 3.000_001, 3.5, 4.2, 6.0] {
            let weights = weights(|laws| {
                laws.size_exponent = a;
                laws.beta_greatest = 2.0;
            });
            // Shares of light straight from the radii: s^2 dn/ds over s = 1/beta, with any constant.
            let light = |low: f64, high: f64| quadrature(1.0 / high, 1.0 / low, |s| s * s * libm::pow(s, -a));
            let whole = light(0.001, 2.0);
            for (low, high) in [(0.001, 0.01), (0.02, 0.5), (0.5, 2.0)] {
                let share = weights.light_between(low, high);
                assert!((share - light(low, high) / whole).abs() < 1e-6, "{a} {low} {high}: {share}");
                let summed = quadrature(low, high, |beta| weights.light_per_beta(beta));
                assert!((share - summed).abs() < 1e-6 * share.max(1e-3), "{a} {low} {high}: {share} {summed}");
            }
            assert!((weights.light_between(0.0, 9.0) - 1.0).abs() < 1e-12);
        }
    }

    #[test]
    fn an_outburst_peaks_at_its_strength_and_has_its_width() {
        let weights = weights(|laws| {
            laws.outburst = Some(Outburst { middle_days: 10.0, width_days: 4.0, strength: 7.0 });
            laws.activity_start_days = Some(-30.0);
        });
        let quiet = 1.0 / (1.5 * 1.5);
        assert!((weights.release_rate(1.5, 10.0) / quiet - 7.0).abs() < 1e-12);
        assert!((weights.release_rate(1.5, 12.0) / quiet - 4.0).abs() < 1e-12);
        assert!((weights.release_rate(1.5, -29.0) / quiet - 1.0).abs() < 1e-12);
        assert_eq!(weights.release_rate(1.5, -30.1), 0.0);
        assert_eq!(weights.release_rate(5.1, 10.0), 0.0);
    }

    #[test]
    fn ejection_has_the_speeds_and_the_cone_of_the_law() {
        for (spread, cone_deg) in [(0.0, 180.0), (0.3, 180.0), (0.3, 40.0), (1.0, 90.0)] {
            let weights = weights(|laws| {
                laws.ejection_spread = spread;
                laws.ejection_cone_deg = cone_deg;
            });
            let steps = 48;
            let at = |k: usize| (k as f64 + 0.5) / steps as f64;
            let (mut mean, mut square, mut narrowest, mut slow) = ([0.0; 3], [0.0; 3], 1.0_f64, 0);
            for point in 0..steps * steps * steps {
                let cube = [at(point % steps), at(point / steps % steps), at(point / steps / steps)];
                let velocity = weights.ejection(cube);
                let speed = velocity.iter().map(|v| v * v).sum::<f64>().sqrt();
                slow += u32::from(speed < 1.0);
                narrowest = narrowest.min(-velocity[0] / speed);
                for axis in 0..3 {
                    mean[axis] += velocity[axis] / (steps * steps * steps) as f64;
                    square[axis] += velocity[axis] * velocity[axis] / (steps * steps * steps) as f64;
                }
            }
            for (axis, variance) in weights.ejection_variances().into_iter().enumerate() {
                let summed = square[axis] - mean[axis] * mean[axis];
                assert!((variance - summed).abs() < 4e-3, "{spread} {cone_deg} {axis}: {variance} {summed}");
            }
            assert!((mean[0] - weights.mean_radial_ejection()).abs() < 2e-3, "{spread} {cone_deg}: {mean:?}");
            assert!(mean[1].abs() < 1e-9 && mean[2].abs() < 1e-9, "{mean:?}");
            assert!(narrowest > libm::cos(cone_deg.to_radians()) - 1e-12);
            if spread == 0.3 {
                assert!((f64::from(slow) / (steps * steps * steps) as f64 - 0.5).abs() < 0.02, "{slow}");
            }
        }
    }

    #[test]
    fn the_mean_speed_goes_as_powers_of_beta_and_distance() {
        let weights = weights(|_| ());
        assert!((weights.mean_speed_km_s(1.0, 1.0) - 0.3).abs() < 1e-15);
        assert!((weights.mean_speed_km_s(0.01, 4.0) - 0.015).abs() < 1e-15);
    }
}
