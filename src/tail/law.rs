//! Which tails are drawn, and how much dust of which size leaves when, and how fast?
//!
//! The plan's `tails` section. Every key may be left out; the defaults are this project's choice of a plain dusty
//! comet. Distances are from the Sun. Laws are relative: they give the shape of a tail, not its brightness.

use crate::error::{Error, Kind, Place};
use serde::{Deserialize, Serialize};

/// The plan's `tails` section.
#[derive(Clone, Debug, PartialEq, Serialize, Deserialize)]
#[serde(default, deny_unknown_fields)]
pub struct Tails {
    /// Speed of the wind for which the ion axis is drawn, km/s.
    pub wind_axis_km_s: f64,
    /// Slowest and fastest wind of the ion wedge, km/s.
    pub wind_slowest_km_s: f64,
    pub wind_fastest_km_s: f64,
    /// Smallest and greatest beta of the dust.
    pub beta_least: f64,
    pub beta_greatest: f64,
    /// Youngest and oldest dust, days before the moment seen.
    pub age_least_days: f64,
    pub age_greatest_days: f64,
    /// Bulk density of the grains, g/cm3, and efficiency of radiation pressure: they turn beta into a radius.
    pub grain_density_g_cm3: f64,
    pub pressure_efficiency: f64,
    /// Exponent a of the size distribution dn/ds ~ s^-a.
    pub size_exponent: f64,
    /// Dust leaves at a rate ~ r^-p, with this p, out to the cut-off distance, au.
    pub activity_exponent: f64,
    pub activity_cutoff_au: f64,
    /// Nothing leaves earlier than this many days from perihelion, if given.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub activity_start_days: Option<f64>,
    /// A time of stronger activity, if any.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub outburst: Option<Outburst>,
    /// Mean ejection speed of beta = 1 at 1 au, km/s; the speed goes as beta^b r^-c.
    pub ejection_speed_km_s: f64,
    pub ejection_beta_exponent: f64,
    pub ejection_distance_exponent: f64,
    /// Standard deviation of the speed over its mean.
    pub ejection_spread: f64,
    /// Half angle of the cone about the sunward direction into which dust leaves, degrees; 180 is every direction.
    pub ejection_cone_deg: f64,
    /// Half width of the anti-tail sector about the Sun's direction on the sky, degrees.
    pub anti_tail_half_width_deg: f64,
}

/// A time of stronger activity.
#[derive(Clone, Copy, Debug, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Outburst {
    /// Middle, days from perihelion.
    pub middle_days: f64,
    /// Full width at half maximum, days; the rise and fall are Gaussian.
    pub width_days: f64,
    /// Peak rate over the quiet rate at that time.
    pub strength: f64,
}

impl Default for Tails {
    fn default() -> Self {
        Tails {
            wind_axis_km_s: 400.0,
            wind_slowest_km_s: 300.0,
            wind_fastest_km_s: 800.0,
            beta_least: 0.001,
            beta_greatest: 1.0,
            age_least_days: 0.0,
            age_greatest_days: 200.0,
            grain_density_g_cm3: 1.0,
            pressure_efficiency: 1.0,
            size_exponent: 3.5,
            activity_exponent: 2.0,
            activity_cutoff_au: 5.0,
            activity_start_days: None,
            outburst: None,
            ejection_speed_km_s: 0.3,
            ejection_beta_exponent: 0.5,
            ejection_distance_exponent: 0.5,
            ejection_spread: 0.3,
            ejection_cone_deg: 180.0,
            anti_tail_half_width_deg: 40.0,
        }
    }
}

/// A field's key, its value, and the least and greatest value allowed.
pub type Bound = (&'static str, f64, f64, f64);

impl Tails {
    /// Whether nothing was changed, so that a plan need not say it.
    pub fn is_default(&self) -> bool {
        *self == Tails::default()
    }

    /// # Errors
    /// The first field outside its range, at its path below `tails`.
    pub fn validate(&self) -> Result<(), Error> {
        for (key, value, least, greatest) in self.bounds() {
            if !(least..=greatest).contains(&value) {
                let allowed = format!("a number from {least} to {greatest}");
                return Err(Error::new(Kind::Range, field(key), value.to_string(), allowed));
            }
        }
        let ordered = [
            ("wind_slowest_km_s", self.wind_slowest_km_s, "wind_fastest_km_s", self.wind_fastest_km_s),
            ("beta_least", self.beta_least, "beta_greatest", self.beta_greatest),
            ("age_least_days", self.age_least_days, "age_greatest_days", self.age_greatest_days),
        ];
        for (low_key, low, high_key, high) in ordered {
            if low >= high {
                let found = format!("{low}, not below {high_key} ({high})");
                return Err(Error::new(Kind::Range, field(low_key), found, format!("a number below {high_key}")));
            }
        }
        Ok(())
    }

    /// Every number that is set, with its range.
    pub fn bounds(&self) -> Vec<Bound> {
        let mut bounds = vec![
            ("wind_axis_km_s", self.wind_axis_km_s, 100.0, 2000.0),
            ("wind_slowest_km_s", self.wind_slowest_km_s, 100.0, 2000.0),
            ("wind_fastest_km_s", self.wind_fastest_km_s, 100.0, 2000.0),
            ("beta_least", self.beta_least, 1e-7, 3.0),
            ("beta_greatest", self.beta_greatest, 1e-7, 3.0),
            ("age_least_days", self.age_least_days, 0.0, 5000.0),
            ("age_greatest_days", self.age_greatest_days, 0.1, 5000.0),
            ("grain_density_g_cm3", self.grain_density_g_cm3, 0.01, 10.0),
            ("pressure_efficiency", self.pressure_efficiency, 0.01, 3.0),
            ("size_exponent", self.size_exponent, 1.0, 6.0),
            ("activity_exponent", self.activity_exponent, 0.0, 15.0),
            ("activity_cutoff_au", self.activity_cutoff_au, 0.01, 50.0),
            ("ejection_speed_km_s", self.ejection_speed_km_s, 0.0, 2.0),
            ("ejection_beta_exponent", self.ejection_beta_exponent, 0.0, 1.0),
            ("ejection_distance_exponent", self.ejection_distance_exponent, 0.0, 3.0),
            ("ejection_spread", self.ejection_spread, 0.0, 1.0),
            ("ejection_cone_deg", self.ejection_cone_deg, 1.0, 180.0),
            ("anti_tail_half_width_deg", self.anti_tail_half_width_deg, 1.0, 90.0),
        ];
        if let Some(days) = self.activity_start_days {
            bounds.push(("activity_start_days", days, -20_000.0, 20_000.0));
        }
        if let Some(outburst) = &self.outburst {
            bounds.push(("outburst.middle_days", outburst.middle_days, -20_000.0, 20_000.0));
            bounds.push(("outburst.width_days", outburst.width_days, 0.01, 1000.0));
            bounds.push(("outburst.strength", outburst.strength, 0.0, 1000.0));
        }
        bounds
    }
}

fn field(key: &str) -> Place {
    Place::Field(format!("tails.{key}"))
}
